"""Airspeeds, crossover altitudes and energy heights against published values."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest
from mission_files import fly_files, mission_content, segment
from scipy.optimize import brentq

from engine.atmosphere import flight_condition
from engine.quantities import FOOT, KNOT
from mission.airspeeds import (
    calibrated_airspeed,
    crossover_altitude,
    energy_height,
    equivalent_airspeed,
    impact_pressure_ratio,
    mach_from_calibrated_airspeed,
    mach_from_impact_pressure_ratio,
    pressure_altitude_from_pressure,
)

RAYMER_AIRSPEED = (
    "D. P. Raymer, Aircraft Design: A Conceptual Approach, 6th ed., appendix C: 15,000 ft, "
    "30 C, M 0.428; read at second hand"
)
RAYMER_ENERGY = "D. P. Raymer, the same book, section 17.6.3; read at second hand"
CROSSOVER = (
    "a manufacturer's performance handbook: 300 kt and M 0.78 meet at 29,314 ft; from memory"
)
NICOLAI_ENERGY = (
    "L. M. Nicolai and G. E. Carichner, Fundamentals of Aircraft and Airship Design, vol. I "
    "(2010), table 4.3; read at second hand"
)
OWN_AIRSPEEDS = (
    "ISO 2533:1975 air with the isentropic pitot equation, worked outside this program; "
    "own arithmetic, so a regression and not an outside check"
)

# The printed speeds are whole knots: half a digit, and 0.1 kt for the printed Mach number's third
# digit (0.0005 of 680 kt is 0.34 kt, a third of it at these numbers).
KNOTS = 0.6


@pytest.fixture(scope="module")
def raymer_hold(tmp_path_factory: pytest.TempPathFactory) -> tuple[float, float, float]:
    """Mach number, true and equivalent airspeed [kt] in the log of a hold at 215 kt calibrated."""
    warm = 30.0 + 273.15 - (288.15 - 0.0065 * 15000.0 * FOOT)
    flight = fly_files(
        tmp_path_factory.mktemp("hold"),
        mission=mission_content(
            [
                {
                    "kind": "loiter",
                    "time": "1 min",
                    "pressure_altitude": "15000 ft",
                    "calibrated_airspeed": "215 kt",
                }
            ],
            day=f"ISA+{warm:.4f}",
        ),
    )
    steps = segment(flight, "loiter").steps
    air = flight_condition(steps.pressure_altitude, steps.mach, warm)
    knots = equivalent_airspeed(air) / KNOT
    return float(steps.mach[0]), float(steps.true_airspeed[0]) / KNOT, float(knots[0])


@pytest.mark.source(RAYMER_AIRSPEED)
def test_mach_number_of_a_calibrated_airspeed_on_a_hot_day(
    raymer_hold: tuple[float, float, float],
) -> None:
    # The calibrated airspeed is printed to a knot: 0.5 kt of 215 is 0.001 in Mach number.
    assert raymer_hold[0] == pytest.approx(0.428, abs=0.0012)


@pytest.mark.source(RAYMER_AIRSPEED)
def test_true_airspeed_on_a_hot_day(raymer_hold: tuple[float, float, float]) -> None:
    # 215 kt as printed may be 214.5 to 215.5, which is 0.7 kt of true airspeed.
    assert raymer_hold[1] == pytest.approx(290.0, abs=KNOTS + 0.7)


@pytest.mark.source(RAYMER_AIRSPEED)
def test_equivalent_airspeed(raymer_hold: tuple[float, float, float]) -> None:
    assert raymer_hold[2] == pytest.approx(213.0, abs=KNOTS)


@pytest.mark.source(RAYMER_AIRSPEED)
def test_calibrated_airspeed_of_a_mach_number() -> None:
    pressure = flight_condition(15000.0 * FOOT).static_pressure
    assert calibrated_airspeed(0.428, pressure) / KNOT == pytest.approx(215.0, abs=KNOTS)


@pytest.mark.source(CROSSOVER)
def test_crossover_altitude() -> None:
    assert crossover_altitude(300.0 * KNOT, 0.78) / FOOT == pytest.approx(29314.0, abs=2.0)


@pytest.mark.source(CROSSOVER)
@pytest.mark.parametrize("day", ["ISA", "ISA+20"])
def test_a_climb_changes_to_mach_number_at_the_crossover(tmp_path: Path, day: str) -> None:
    # Calibrated airspeed and Mach number depend on pressure alone: the day must not matter.
    climb = {
        "kind": "climb",
        "to": "FL350",
        "calibrated_airspeed": "300 kt",
        "mach": 0.78,
    }
    flight = fly_files(tmp_path, mission=mission_content([climb], day=day))
    steps = segment(flight, "climb").steps
    first = int(np.argmax(steps.mach > 0.78 - 1e-9))
    assert steps.pressure_altitude[first] / FOOT == pytest.approx(29314.0, abs=2.0)
    assert np.all(np.diff(steps.mach) > -1e-9)


ROWS = [
    # pressure altitude ft, calibrated kt, Mach, true kt on a standard day, equivalent kt
    (0, 250, 0.37794, 250.00, 250.00),
    (5000, 250, 0.41291, 268.40, 249.14),
    (10000, 250, 0.45228, 288.70, 248.10),
    (10000, 300, 0.54105, 345.37, 296.79),
    (15000, 215, 0.42850, 268.43, 212.93),
    (20000, 300, 0.65129, 400.10, 292.05),
    (25000, 280, 0.67198, 404.50, 270.78),
    (30000, 280, 0.74216, 437.37, 267.53),
    (35000, 250, 0.74120, 427.24, 237.83),
    (35000, 270, 0.79488, 458.18, 255.05),
    (39000, 250, 0.80603, 462.31, 234.96),
    (41000, 240, 0.81011, 464.66, 225.07),
    (45000, 220, 0.81467, 467.27, 205.59),
    (51000, 200, 0.84780, 486.27, 185.22),
]


@pytest.mark.source(OWN_AIRSPEEDS)
@pytest.mark.parametrize(("feet", "calibrated", "mach", "true", "equivalent"), ROWS)
def test_airspeeds_there_and_back(
    feet: float, calibrated: float, mach: float, true: float, equivalent: float
) -> None:
    air = flight_condition(feet * FOOT)
    found = mach_from_calibrated_airspeed(calibrated * KNOT, air.static_pressure)
    flight = air.with_mach(found)
    assert found == pytest.approx(mach, abs=0.6e-5)  # half the last digit
    assert flight.true_airspeed / KNOT == pytest.approx(true, abs=0.006)
    assert equivalent_airspeed(flight) / KNOT == pytest.approx(equivalent, abs=0.006)
    back = calibrated_airspeed(found, air.static_pressure)
    assert back / KNOT == pytest.approx(calibrated, rel=1e-12)


@pytest.mark.source(
    "ISO 2533:1975, Standard Atmosphere: pressure at geopotential heights; from memory"
)
@pytest.mark.parametrize(
    ("height", "pressure"),
    [(0.0, 101325.0), (5000.0, 54020.0), (11000.0, 22632.0), (15000.0, 12044.6), (20000.0, 5474.9)],
)
def test_pressure_altitude_of_a_tabled_pressure(height: float, pressure: float) -> None:
    # Half the last printed digit of pressure is at most 6 m (at 20 km: 0.05 Pa of 0.86 Pa/m).
    assert pressure_altitude_from_pressure(pressure) == pytest.approx(height, abs=0.7)


@pytest.mark.source(
    "Ames Research Staff, Equations, Tables, and Charts for Compressible Flow, NACA Report 1135 "
    "(1953), table II: pitot pressure behind a normal shock over static pressure; from memory"
)
@pytest.mark.parametrize(
    ("mach", "pitot"), [(1.0, 1.893), (1.5, 3.413), (2.0, 5.640), (2.5, 8.526), (3.0, 12.06)]
)
def test_impact_pressure_behind_a_shock(mach: float, pitot: float) -> None:
    # Four digits printed: half the last is 0.05 % at most.
    ratio = impact_pressure_ratio(mach)
    assert ratio + 1.0 == pytest.approx(pitot, rel=5e-4)
    assert mach_from_impact_pressure_ratio(ratio) == pytest.approx(mach, rel=1e-12)


ENERGY_ROWS = [
    # Mach, energy height ft, altitude ft
    (0.5, 10000, 5335),
    (0.5, 20000, 15679),
    (0.5, 30000, 26024),
    (0.5, 40000, 36359),
    (0.5, 50000, 46359),
    (0.5, 60000, 56359),
    (1.0, 20000, 726),
    (1.0, 30000, 12263),
    (1.0, 40000, 23799),
    (1.0, 50000, 35336),
    (1.0, 60000, 45436),
    # As read, this column stands one row off; its energy heights are re-derived.
    (1.5, 50000, 9162),
    (1.5, 60000, 23440),
    (1.5, 70000, 37231),
    (1.5, 80000, 47231),
    (2.0, 80000, 5388),
    (2.0, 90000, 26789),
    (2.0, 100000, 41744),
    (2.0, 120000, 61744),
    (2.4, 120000, 36111),
]


@pytest.mark.source(NICOLAI_ENERGY)
@pytest.mark.parametrize(("mach", "height", "altitude"), ENERGY_ROWS)
def test_altitude_of_constant_energy(mach: float, height: float, altitude: float) -> None:
    def surplus(feet: float) -> float:
        flight = flight_condition(feet * FOOT, mach)
        return float(energy_height(feet * FOOT, flight.true_airspeed)) / FOOT - height

    found = brentq(surplus, 0.0, 65000.0, xtol=1e-6)
    assert found == pytest.approx(altitude, abs=2.0)


@pytest.mark.source(RAYMER_ENERGY)
def test_energy_height() -> None:
    # With the book's speed of sound, 994.7 ft/s, its own formula gives 42,454 ft, 7 ft above the
    # printed value: that rounding of the book's and half a digit of its speed of sound, 1 ft.
    flight = flight_condition(30000.0 * FOOT, 0.9)
    found = float(energy_height(30000.0 * FOOT, flight.true_airspeed)) / FOOT
    assert found == pytest.approx(42447.0, abs=8.0)


@pytest.mark.source(NICOLAI_ENERGY)
def test_energy_height_at_mach_2_2() -> None:
    # "About 140,000 ft" at 70,000 ft: two digits.
    flight = flight_condition(70000.0 * FOOT, 2.2)
    found = float(energy_height(70000.0 * FOOT, flight.true_airspeed)) / FOOT
    assert found == pytest.approx(140000.0, rel=0.02)


@pytest.mark.source(NICOLAI_ENERGY)
def test_specific_energy_is_what_a_climb_gains(tmp_path: Path) -> None:
    """A climb flown: from M 0.5 at an energy height of 10,000 ft to M 0.5 at 40,000 ft of it."""
    climb = {
        "kind": "climb",
        "to": "36359 ft",
        "mach": 0.5,
        "rating": "take_off",
        "name": "from 10,000 to 40,000 ft of energy",
    }
    start = {"kind": "allowance", "fuel": "0 kg", "to": "5335 ft"}
    flight = fly_files(
        tmp_path,
        mission=mission_content([start, climb]),
        refinement=8,
    )
    steps = segment(flight, "from 10,000 to 40,000 ft of energy").steps
    # What thrust less drag has done along the way, over weight. Two altitudes to 1 ft each, and
    # trapezia on 130 steps: 1.5 ft, by halving them.
    power = (steps.thrust - steps.drag) * steps.true_airspeed / steps.weight
    gained = np.trapezoid(power, steps.elapsed_time) / FOOT
    # Two altitudes to a foot each, and trapezia on nine nodes a span: 0.3 % by halving the steps.
    assert gained == pytest.approx(30000.0, abs=4.0)
