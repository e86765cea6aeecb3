"""The drag rise as a flown cruise meets it, given as a Mach number and by what the wing is."""

from __future__ import annotations

from pathlib import Path

import pytest
from mission_files import (
    Content,
    aircraft_content,
    engine_content,
    fly_files,
    mission_content,
    segment,
)

MASON = (
    "W. H. Mason, Configuration Aerodynamics, chapter 7, Lock's fourth-power law with Korn's "
    "relation: kappa 0.95, sweep 35 deg, thickness 0.11, lift coefficient 0.5; from memory, "
    "numbers: divergence M 0.90484, critical M 0.79712 and 26.93 counts at divergence by "
    "own arithmetic"
)
DIVERGENCE, CRITICAL = 0.90484, 0.79712
AT_MACH: Content = {"drag_divergence_mach": DIVERGENCE, "at_lift_coefficient": 0.5}
KORN: Content = {"technology_factor": 0.95, "sweep": "35 deg", "thickness_ratio": 0.11}
EITHER_WAY = pytest.mark.parametrize("rise", [AT_MACH, KORN], ids=["at a Mach number", "by Korn"])


def drag_rise_at(folder: Path, rise: Content, mach: float, coefficient: float = 0.5) -> float:
    """Drag coefficient beyond the parabolic polar at the start of a cruise."""
    force = 0.7 * 23842.3 * mach**2 * 62.0  # 35,000 ft: ISO 2533:1975
    mass = coefficient * force / 9.80665
    flight = fly_files(
        folder,
        mission=mission_content(
            [{"kind": "cruise", "distance": "1 nmi", "mach": mach, "pressure_altitude": "FL350"}],
            payload="0 kg",
            fuel={"as_needed": None, "load": "2000 kg"},
        ),
        aircraft=aircraft_content(
            masses={
                "operating_empty": f"{mass - 2000.0:.6f} kg",
                "maximum_zero_fuel": "60 t",
                "maximum_ramp": "60 t",
                "maximum_take_off": "60 t",
                "maximum_landing": "60 t",
            },
            drag_polar={"drag_rise": rise},
            limits={
                "maximum_operating_mach": 1.0,
                "maximum_operating_calibrated_airspeed": "500 kt",
            },
        ),
        engine=engine_content(static_thrust="300 kN"),
    )
    assert flight.failure is None
    steps = segment(flight, "cruise").steps
    assert steps.lift[0] / force == pytest.approx(coefficient, rel=1e-5)
    return float(steps.drag[0]) / force - 0.0175 - 0.042 * coefficient**2


@EITHER_WAY
@pytest.mark.source(MASON)
def test_twenty_seven_counts_at_divergence(tmp_path: Path, rise: Content) -> None:
    # 0.0026930: half the last digit; the pressure is printed to six digits (4e-6 of 0.03), and
    # the slope of a tenth makes 5e-7 of the last half digit of divergence.
    tolerance = 3e-7 if rise is AT_MACH else 8e-7
    assert drag_rise_at(tmp_path, rise, DIVERGENCE) == pytest.approx(0.0026930, abs=tolerance)


@EITHER_WAY
@pytest.mark.source(MASON)
def test_nothing_below_the_critical_mach_number(tmp_path: Path, rise: Content) -> None:
    assert drag_rise_at(tmp_path, rise, CRITICAL - 1e-4) == pytest.approx(0.0, abs=3e-7)
    beyond = drag_rise_at(tmp_path, rise, CRITICAL + 0.02)
    assert beyond == pytest.approx(20.0 * 0.02**4, abs=3e-7)


@EITHER_WAY
@pytest.mark.source(MASON)
def test_a_tenth_per_mach_number_at_divergence(tmp_path: Path, rise: Content) -> None:
    step = 0.001
    faster, slower = (drag_rise_at(tmp_path, rise, DIVERGENCE + s) for s in (step, -step))
    # The third derivative, 480 (M - Mcr), leaves 80 step^2 of a tenth.
    assert (faster - slower) / (2.0 * step) == pytest.approx(0.1, abs=3e-4)


@pytest.mark.source(MASON)
def test_divergence_falls_by_a_tenth_of_lift_coefficient(tmp_path: Path) -> None:
    """Korn's slope without sweep: 0.1 more lift coefficient, 0.01 less Mach number."""
    more = drag_rise_at(tmp_path, AT_MACH, DIVERGENCE - 0.01, coefficient=0.6)
    assert more == pytest.approx(0.0026930, abs=4e-7)


@pytest.mark.source(MASON)
def test_divergence_falls_faster_with_sweep(tmp_path: Path) -> None:
    """By 1 / (10 cos^3 L): 0.1 more lift coefficient, 0.01819 less Mach number at 35 degrees."""
    fall = 0.1 * 0.1 / 0.819152**3
    more = drag_rise_at(tmp_path, KORN, DIVERGENCE - fall, coefficient=0.6)
    assert more == pytest.approx(0.0026930, abs=9e-7)
