"""Cruises flown through input files against the closed forms of a parabolic polar.

With specific fuel consumption constant each way of cruising has its own closed form. All are
flown in the isothermal layer, where a Mach number is one speed. The tolerance, 1e-8 of the fuel,
leaves the sweeps (1e-11 of mass) and the closure of the fuel three digits.
"""

from __future__ import annotations

from math import atan, exp, sqrt, tan
from pathlib import Path

import pytest
from mission_files import aircraft_content, engine_content, fly_files, mission_content, segment

from mission.results import Flight

HALE = (
    "F. J. Hale, Introduction to Aircraft Performance, Selection and Design, and A. Miele, Flight "
    "Mechanics vol. I: cruise of a jet at constant consumption; from memory"
)
pytestmark = pytest.mark.source(HALE)

G = 9.80665
SOUND = sqrt(1.4 * 287.05287 * 216.65)  # m/s, ISO 2533:1975, 11 to 20 km
CONSUMPTION = 0.6 / 3600.0  # 1/s, weight of fuel per thrust
CD0, K, AREA = 0.0175, 0.042, 62.0
BEST = 0.5 / sqrt(CD0 * K)  # greatest lift-to-drag ratio
BEST_CL = sqrt(CD0 / K)
MACH = 0.74
SPEED = MACH * SOUND
RELATIVE = 1e-8

Plane = dict[str, object]


def light_and_far() -> Plane:
    """The test twin with tanks for long flights."""
    return aircraft_content(
        masses={"maximum_take_off": "40 t", "maximum_ramp": "40 t", "maximum_landing": "40 t"},
        fuel_tanks={"capacity": "20 t"},
        limits={"maximum_operating_mach": 0.95},
    )


def flown(folder: Path, cruise: dict[str, object], fuel: dict[str, object]) -> Flight:
    flight = fly_files(
        folder,
        mission=mission_content([{"kind": "cruise", **cruise}], fuel=fuel),
        aircraft=light_and_far(),
        engine=engine_content(static_thrust="90 kN"),
    )
    assert flight.failure is None
    return flight


FUELS = pytest.mark.parametrize(
    "fuel",
    [{"as_needed": None, "load": "9 t"}, {"as_needed": True}],
    ids=["given load", "as needed"],
)


@FUELS
@pytest.mark.parametrize("kilometres", [500, 2500, 6000])
def test_cruise_climb(tmp_path: Path, fuel: dict[str, object], kilometres: int) -> None:
    """Mach number and lift coefficient held: the Breguet equation."""
    cruise = {
        "distance": f"{kilometres} km",
        "holds": "mach and lift coefficient",
        "mach": MACH,
        "lift_coefficient": 0.55,
    }
    flight = flown(tmp_path, cruise, fuel)
    cruise_log = segment(flight, "cruise")
    altitude = cruise_log.steps.pressure_altitude
    assert altitude.min() > 11000.0
    assert altitude.max() < 20000.0
    lift_to_drag = 0.55 / (CD0 + K * 0.55**2)
    share = CONSUMPTION * kilometres * 1e3 / (SPEED * lift_to_drag)
    expected = cruise_log.mass_start * (1.0 - exp(-share))
    assert cruise_log.fuel == pytest.approx(expected, rel=RELATIVE)


@FUELS
@pytest.mark.parametrize("kilometres", [500, 2500, 6000])
def test_constant_altitude_and_speed(
    tmp_path: Path, fuel: dict[str, object], kilometres: int
) -> None:
    """Drag follows the falling mass: R = 2 (L/D)max V/c (atan x0 - atan x1), x = CL/CL_md."""
    cruise = {"distance": f"{kilometres} km", "mach": MACH, "pressure_altitude": "12500 m"}
    flight = flown(tmp_path, cruise, fuel)
    cruise_log = segment(flight, "cruise")
    pressure = 22632.0 * exp(-G * 1500.0 / (287.05287 * 216.65))
    lift_per_coefficient = 0.7 * pressure * MACH**2 * AREA
    x0 = cruise_log.mass_start * G / lift_per_coefficient / BEST_CL
    turned = CONSUMPTION * kilometres * 1e3 / (2.0 * BEST * SPEED)
    expected = cruise_log.mass_start * (1.0 - tan(atan(x0) - turned) / x0)
    assert cruise_log.fuel == pytest.approx(expected, rel=RELATIVE)


@FUELS
@pytest.mark.parametrize("kilometres", [500, 2500, 6000])
def test_constant_altitude_and_lift_coefficient(
    tmp_path: Path, fuel: dict[str, object], kilometres: int
) -> None:
    """Speed falls with the root of mass: R = 2 (L/D) V0/c (1 - sqrt(m1/m0))."""
    cruise = {
        "distance": f"{kilometres} km",
        "holds": "altitude and lift coefficient",
        "pressure_altitude": "12500 m",
        "lift_coefficient": 0.55,
    }
    flight = flown(tmp_path, cruise, fuel)
    cruise_log = segment(flight, "cruise")
    pressure = 22632.0 * exp(-G * 1500.0 / (287.05287 * 216.65))
    density = pressure / (287.05287 * 216.65)
    weight = cruise_log.mass_start * G
    first_speed = sqrt(2.0 * weight / (density * AREA * 0.55))
    lift_to_drag = 0.55 / (CD0 + K * 0.55**2)
    root = 1.0 - CONSUMPTION * kilometres * 1e3 / (2.0 * lift_to_drag * first_speed)
    assert cruise_log.fuel == pytest.approx(cruise_log.mass_start * (1.0 - root**2), rel=RELATIVE)


@pytest.mark.parametrize("hours", [1, 4, 10])
def test_endurance(tmp_path: Path, hours: int) -> None:
    """At the speed of least fuel flow lift-to-drag ratio is greatest: m1 = m0 exp(-c t / (L/D))."""
    loiter = {"kind": "loiter", "time": f"{hours} h", "pressure_altitude": "FL250"}
    flight = fly_files(
        tmp_path,
        mission=mission_content([loiter]),
        aircraft=light_and_far(),
        engine=engine_content(static_thrust="90 kN"),
    )
    assert flight.failure is None
    log_ = segment(flight, "loiter")
    expected = log_.mass_start * (1.0 - exp(-CONSUMPTION * hours * 3600.0 / BEST))
    # Fuel flow is flat at its least; the Mach number is found to 1e-6, which costs its square.
    assert log_.fuel == pytest.approx(expected, rel=RELATIVE)


@pytest.mark.parametrize("hours", [2, 8])
def test_hold_at_a_given_speed(tmp_path: Path, hours: int) -> None:
    """Time instead of distance at constant altitude and speed: the arc tangent again."""
    loiter = {
        "kind": "loiter",
        "time": f"{hours} h",
        "pressure_altitude": "12000 m",
        "mach": 0.7,
    }
    flight = fly_files(
        tmp_path,
        mission=mission_content([loiter]),
        aircraft=light_and_far(),
        engine=engine_content(static_thrust="90 kN"),
    )
    log_ = segment(flight, "loiter")
    pressure = 22632.0 * exp(-G * 1000.0 / (287.05287 * 216.65))
    x0 = log_.mass_start * G / (0.7 * pressure * 0.7**2 * AREA) / BEST_CL
    turned = CONSUMPTION * hours * 3600.0 / (2.0 * BEST)
    expected = log_.mass_start * (1.0 - tan(atan(x0) - turned) / x0)
    assert log_.fuel == pytest.approx(expected, rel=RELATIVE)
    assert log_.ground_distance == 0.0
