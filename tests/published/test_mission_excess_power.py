"""Specific excess power and level acceleration against a published fighter, flown from files."""

from __future__ import annotations

from math import sqrt
from pathlib import Path

import numpy as np
import pytest
from mission_files import aircraft_content, engine_content, fly_files, mission_content, segment

from mission.results import Steps

NICOLAI = (
    "L. M. Nicolai and G. E. Carichner, Fundamentals of Aircraft and Airship Design, vol. I "
    "(2010), example with equation 3.42, F-104G at M 0.8 and 20,000 ft; read at second hand"
)
ANDERSON_CLIMB = (
    "J. D. Anderson, Aircraft Performance and Design, ch. 5, business jet: inputs from memory, "
    "rate of climb 179.8 ft/s at 747.3 ft/s from them by the closed form; own arithmetic"
)
POUND, POUND_FORCE, FOOT, G = 0.45359237, 4.4482216152605, 0.3048, 9.80665


def plane(weight: float, drag_area: float, area: float, induced: float) -> dict[str, object]:
    """A single-engined aircraft of that weight [lb] at engine start."""
    masses = dict.fromkeys(
        ("maximum_zero_fuel", "maximum_ramp", "maximum_take_off", "maximum_landing"),
        f"{weight * 2.0} lb",
    )
    return aircraft_content(
        engine_count=1,
        wing_area=f"{area:.9f} m**2",
        masses={"operating_empty": f"{weight - 1000.0} lb", **masses},
        fuel_tanks={"capacity": "20 t"},
        drag_polar={
            "zero_lift_drag_coefficient": drag_area / area,
            "induced_drag_factor": induced,
        },
        limits={
            "maximum_operating_mach": 1.2,
            "maximum_operating_calibrated_airspeed": "700 kt",
        },
    )


@pytest.fixture
def fighter(tmp_path: Path) -> Steps:
    """18,000 lb, 10,000 lb of thrust and 2,086 lb of drag, from M 0.799 to 0.801."""
    pressure = 101325.0 * (1.0 - 0.0065 * 20000.0 * FOOT / 288.15) ** 5.255880
    dynamic = 0.7 * pressure * 0.8**2
    flight = fly_files(
        tmp_path,
        mission=mission_content(
            [
                {
                    "kind": "acceleration",
                    "pressure_altitude": "20000 ft",
                    "from_mach": 0.799,
                    "to_mach": 0.801,
                }
            ],
            payload="0 kg",
            fuel={"as_needed": None, "load": "1000 lb"},
        ),
        aircraft=plane(18000.0, 2086.0 * POUND_FORCE / dynamic, 18.0, 1e-9),
        engine=engine_content(static_thrust="10000 lbf", density_exponent=0.0),
    )
    assert flight.failure is None
    return segment(flight, "acceleration").steps


@pytest.mark.source(NICOLAI)
def test_level_acceleration(fighter: Steps) -> None:
    gained = fighter.true_airspeed[-1] - fighter.true_airspeed[0]
    taken = fighter.elapsed_time[-1] - fighter.elapsed_time[0]
    # 14.1 ft/s2: half the last digit.
    assert gained / taken / FOOT == pytest.approx(14.1, abs=0.05)


@pytest.mark.source(NICOLAI)
def test_specific_excess_power(fighter: Steps) -> None:
    energy = fighter.true_airspeed**2 / (2.0 * G)
    taken = fighter.elapsed_time[-1] - fighter.elapsed_time[0]
    # 364 ft/s: half the last digit, and the book's speed of 829 ft/s for 829.5 (0.06 %).
    assert (energy[-1] - energy[0]) / taken / FOOT == pytest.approx(364.0, abs=0.5 + 0.25)


@pytest.mark.source(NICOLAI)
def test_acceleration_burns_thrust_times_time(fighter: Steps) -> None:
    taken = fighter.elapsed_time[-1] - fighter.elapsed_time[0]
    burnt = 10000.0 * POUND_FORCE * taken * 0.6 / 3600.0 / G
    # Constant thrust and consumption, so to round-off of the sums of mass.
    assert fighter.mass[0] - fighter.mass[-1] == pytest.approx(burnt, rel=1e-9)


@pytest.mark.source(ANDERSON_CLIMB)
def test_best_rate_of_climb_at_sea_level(tmp_path: Path) -> None:
    """Rate of climb at constant speed is excess power; the flown climb's is read from its log.

    The closed form holds the speed and takes lift as weight. The climb here holds Mach number
    through the first hundred feet, so that excess power is rate of climb times the acceleration
    factor 1 - 0.1332 M^2; and lift is weight times the cosine of 14 degrees.
    """
    area, k, zero_lift = 950.0 * FOOT**2, 0.08, 0.015
    mach = 747.3 * FOOT / sqrt(1.4 * 287.05287 * 288.15)
    flight = fly_files(
        tmp_path,
        mission=mission_content(
            [{"kind": "climb", "to": "100 ft", "mach": mach, "rating": "take_off"}],
            payload="0 kg",
            fuel={"as_needed": None, "load": "1000 lb"},
        ),
        aircraft=plane(73000.0, zero_lift * area, area, k),
        engine=engine_content(static_thrust="27700 lbf", density_exponent=0.0),
    )
    assert flight.failure is None
    steps = segment(flight, "climb").steps
    rise = float(steps.true_airspeed[0] * np.sin(steps.flight_path_angle[0]))
    factor = 1.0 - 0.5 * 1.4 * 287.05287 * 0.0065 / G * mach**2
    # Drag at full weight: induced drag grows by tan^2 of the path angle of its share.
    dynamic = 0.5 * 1.225 * (747.3 * FOOT) ** 2
    induced = k * (steps.weight[0] ** 2 - steps.lift[0] ** 2) / (dynamic * area)
    level = rise * factor - induced * steps.true_airspeed[0] / steps.weight[0]
    # 179.8 ft/s: half the last digit, and sea-level density 1.225 for 0.002377 slug/ft3 (0.003 %).
    assert level / FOOT == pytest.approx(179.8, abs=0.06)
