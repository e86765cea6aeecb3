"""Best speeds and what they come to, flown through input files until the fuel is gone.

A parabolic polar and constant consumption have closed forms: greatest range at one altitude at
``CL = sqrt(CD0 / 3K)``, 0.866 of the best lift-to-drag ratio and 1.316 times its speed; endurance
at ``CL = sqrt(CD0 / K)``. All is flown in the isothermal layer, where a Mach number is one speed;
the distance or the time is what the flight is solved for.
"""

from __future__ import annotations

from math import atan, log, sqrt
from pathlib import Path

import numpy as np
import pytest
from mission_files import (
    BYPASS_5,
    Content,
    aircraft_content,
    engine_content,
    fly_files,
    load_all,
    mission_content,
)
from numpy.typing import NDArray
from scipy.optimize import brentq

from engine.atmosphere import flight_condition
from engine.interface import Outcome
from mission.flight import fly
from mission.forces import drag
from mission.results import Flight

Array = NDArray[np.float64]
TABLE = (
    "L. M. Nicolai and G. E. Carichner, Fundamentals of Aircraft and Airship Design, vol. I "
    "(2010), table 3.2, with D. P. Raymer, Aircraft Design: A Conceptual Approach, ch. 17; read at "
    "second hand"
)
RANGES = (
    "F. J. Hale, Introduction to Aircraft Performance, Selection and Design: range and endurance "
    "of a jet at constant consumption; from memory"
)
RATIOS = (
    "the closed forms of F. J. Hale worked outside this program for a fuel fraction of 0.30, in "
    "units of (L/D)max V0 / c, to four digits; own arithmetic"
)
LONG_RANGE = (
    "Notes of a university on cruise performance: the long-range Mach number is the faster one at "
    "which specific range is 99 % of the greatest; read"
)
G = 9.80665
SOUND = sqrt(1.4 * 287.05287 * 216.65)  # m/s, ISO 2533:1975, 11 to 20 km
CONSUMPTION = 0.6 / 3600.0  # 1/s, weight of fuel per thrust
CD0, K, AREA = 0.0175, 0.042, 62.0
BEST = 0.5 / sqrt(CD0 * K)  # greatest lift-to-drag ratio
BEST_CL = sqrt(CD0 / K)
MASS, FUEL = 20000.0, 6000.0  # kg
PRESSURE = 20000.0  # Pa
LEVEL = f"{11000.0 - 287.05287 * 216.65 / G * log(PRESSURE / 22632.0):.6f} m"
# Fuel aboard is closed to 1e-7 of itself, and pressure is known to 3e-6 of itself.
CLOSED = 1e-5
# A least cost is found by differences over 0.004 of Mach number, which puts it a little high.
BY_DIFFERENCES = 4e-5


def flown(folder: Path, segment: Content) -> Flight:
    """20 t with 6 t of fuel, of which all is burnt."""
    flight = fly_files(
        folder,
        mission=mission_content(
            [segment], payload="1 t", fuel={"as_needed": None, "load": f"{FUEL} kg"}
        ),
        aircraft=aircraft_content(
            masses={"operating_empty": f"{MASS - FUEL - 1000.0} kg"},
            limits={"maximum_operating_mach": 0.95},
        ),
        engine=engine_content(static_thrust="200 kN"),
    )
    assert flight.failure is None
    assert flight.totals.ramp_mass == pytest.approx(MASS, rel=1e-12)
    assert flight.totals.block_fuel == pytest.approx(FUEL, rel=2e-7)
    return flight


def solved(flight: Flight) -> float:
    """The distance [m] or time [s] that the flight was solved for."""
    assert flight.solution is not None
    return flight.solution.value


def mach_of(coefficient: float, mass: Array | float) -> Array:
    """Mach number at which a mass [kg] flies a lift coefficient at the level."""
    return np.sqrt(np.asarray(mass) * G / (0.7 * PRESSURE * AREA * coefficient))


def at_speed(folder: Path, speed: str) -> Flight:
    """A cruise at a best speed."""
    cruise = {"kind": "cruise", "distance": "free", "pressure_altitude": LEVEL}
    return flown(folder, cruise | {"speed": speed})


# --- speeds -----------------------------------------------------------------------------------


@pytest.mark.source(TABLE)
def test_speed_of_maximum_range(tmp_path: Path) -> None:
    steps = at_speed(tmp_path, "maximum range").segments[0].steps
    closed = mach_of(BEST_CL / sqrt(3.0), steps.mass)
    assert steps.mach == pytest.approx(closed, rel=BY_DIFFERENCES)
    assert steps.lift / steps.drag == pytest.approx(sqrt(0.75) * BEST, rel=BY_DIFFERENCES)
    assert steps.mach / mach_of(BEST_CL, steps.mass) == pytest.approx(1.316, abs=0.0005)


@pytest.mark.source(TABLE)
def test_speed_of_least_fuel_flow(tmp_path: Path) -> None:
    loiter = {"kind": "loiter", "time": "free", "pressure_altitude": LEVEL}
    steps = flown(tmp_path, loiter).segments[0].steps
    assert steps.mach == pytest.approx(mach_of(BEST_CL, steps.mass), rel=BY_DIFFERENCES)
    assert steps.lift / steps.drag == pytest.approx(BEST, rel=1e-8)


@pytest.mark.source(LONG_RANGE)
def test_long_range_speed_has_99_hundredths_of_the_greatest(tmp_path: Path) -> None:
    """At v times the best speed specific range is 4 v^3 / (3 v^4 + 1) of the greatest."""
    steps = at_speed(tmp_path, "long range").segments[0].steps
    times = brentq(lambda v: 4.0 * v**3 / (3.0 * v**4 + 1.0) - 0.99, 1.0, 2.0, xtol=1e-12)
    closed = times * mach_of(BEST_CL / sqrt(3.0), steps.mass)
    assert steps.mach == pytest.approx(closed, rel=1e-6)


@pytest.mark.source(LONG_RANGE)
@pytest.mark.parametrize(("speed", "share"), [("maximum range", 1.0), ("long range", 0.99)])
def test_of_a_turbofan_with_drag_rise(tmp_path: Path, speed: str, share: float) -> None:
    """Specific range flown, against a scan of all Mach numbers at each mass of the flight."""
    cruise = {"kind": "cruise", "distance": "2000 km", "pressure_altitude": "FL370"}
    mission, aircraft, engine = load_all(
        tmp_path,
        aircraft_content(drag_polar={"drag_rise": {"drag_divergence_mach": 0.78}}),
        BYPASS_5,
        mission_content([cruise | {"speed": speed}]),
    )
    flight = fly(mission, aircraft, engine)
    assert flight.failure is None
    steps = flight.segments[0].steps
    mach = np.linspace(0.55, 0.82, 271)[:, None]
    air = flight_condition(np.array(37000.0 * 0.3048), mach)
    thrust = drag(aircraft, air, steps.weight) / 2.0
    state = engine.at(air, rating="cruise", net_thrust=thrust)
    scanned = np.where(
        state.outcome == Outcome.MET, air.true_airspeed / (2.0 * state.fuel_flow), 0.0
    )
    ranges = steps.true_airspeed / steps.fuel_flow
    # A scan every 0.001 misses its greatest by less than 1e-5 of it.
    assert ranges / scanned.max(axis=0) == pytest.approx(share, abs=2e-5)
    if share < 1.0:
        assert (steps.mach > mach[scanned.argmax(axis=0), 0]).all()


# --- how far and how long ---------------------------------------------------------------------


@pytest.mark.source(RANGES)
def test_greatest_range_at_one_altitude(tmp_path: Path) -> None:
    """The lift coefficient of maximum range stays: R = 2 (L/D) V0 / c (1 - sqrt(m1/m0))."""
    first = float(mach_of(BEST_CL / sqrt(3.0), MASS)) * SOUND
    root = sqrt(1.0 - FUEL / MASS)
    closed = 2.0 * sqrt(0.75) * BEST * first / CONSUMPTION * (1.0 - root)
    assert solved(at_speed(tmp_path, "maximum range")) == pytest.approx(closed, rel=CLOSED)


@pytest.mark.source(RANGES)
def test_greatest_endurance(tmp_path: Path) -> None:
    loiter = {"kind": "loiter", "time": "free", "pressure_altitude": LEVEL}
    closed = BEST / CONSUMPTION * log(MASS / (MASS - FUEL))
    assert solved(flown(tmp_path, loiter)) == pytest.approx(closed, rel=1e-6)


def ratios(x: float) -> dict[str, float]:
    """Ranges for a fuel fraction of 0.30 from ``x`` times the lift coefficient of least drag."""
    left, to_best = 0.7, 2.0 * x / (1.0 + x**2)
    return {
        "mach and lift coefficient": to_best * log(1.0 / left),
        "altitude and lift coefficient": 2.0 * to_best * (1.0 - sqrt(left)),
        "altitude and mach": 2.0 * (atan(x) - atan(x * left)),
    }


@pytest.mark.source(RATIOS)
@pytest.mark.parametrize(
    ("start", "cruise_climb", "same_coefficient", "same_speed"),
    [
        (1.0, 0.3567, 0.3267, 0.3493),
        (sqrt(1.0 / 2.0), 0.3363, 0.3080, 0.3117),
        (sqrt(1.0 / 3.0), 0.3089, 0.2829, 0.2790),
    ],
)
def test_three_ways_to_burn_three_tenths(
    tmp_path: Path, start: float, cruise_climb: float, same_coefficient: float, same_speed: float
) -> None:
    coefficient = start * BEST_CL
    mach = float(mach_of(coefficient, MASS))
    ways: dict[str, tuple[float, Content]] = {
        "mach and lift coefficient": (
            cruise_climb,
            {"mach": mach, "lift_coefficient": coefficient},
        ),
        "altitude and lift coefficient": (
            same_coefficient,
            {"pressure_altitude": LEVEL, "lift_coefficient": coefficient},
        ),
        "altitude and mach": (same_speed, {"pressure_altitude": LEVEL, "mach": mach}),
    }
    for holds, (printed, given) in ways.items():
        cruise = {"kind": "cruise", "holds": holds, "distance": "free", **given}
        found = solved(flown(tmp_path, cruise)) / (BEST * mach * SOUND / CONSUMPTION)
        # Half of the last of four digits; and the same formulas here, to what the flight closes.
        assert found == pytest.approx(printed, abs=0.00005 * (1.0 + 1e-3)), holds
        assert found == pytest.approx(ratios(start)[holds], rel=CLOSED), holds
