"""Worked examples of J. D. Anderson's two books, flown through ordinary input files.

The files give a polar, an altitude and an engine of constant consumption; the program does the
rest: fuel, masses, closure.
"""

from __future__ import annotations

from math import sqrt
from pathlib import Path
from typing import Any

import pytest
from mission_files import aircraft_content, engine_content, fly_files, mission_content, segment

from mission.results import Flight

ANDERSON = (
    "J. D. Anderson, Introduction to Flight, ch. 6, twin jet CJ-1: inputs read, range 5,843 km, "
    "endurance 13.3 h and lift-to-drag ratio 16.9; from memory"
)
GULFSTREAM = (
    "J. D. Anderson, Aircraft Performance and Design, ch. 5, business jet: endurance 10.8 h, "
    "lift-to-drag ratio 14.43; from memory"
)
G, POUND, POUND_FORCE = 9.80665, 0.45359237, 4.4482216152605
SOUND = sqrt(1.4 * 287.05287 * 216.65)  # m/s, ISO 2533:1975, 11 to 20 km
KNOT, NAUTICAL_MILE, FOOT = 1852.0 / 3600.0, 1852.0, 0.3048


# --- J. D. Anderson, Introduction to Flight --------------------------------------------------

CJ1_WEIGHT, CJ1_FUEL = 88176.75, 33211.9  # N
CJ1_CD0, CJ1_OSWALD, CJ1_AREA, CJ1_SPAN = 0.02, 0.81, 29.54, 16.25
CJ1_LEVEL = "6698.54 m"  # 22,000 ft geometric: the book's density of 0.6107 kg/m3


def cj1(folder: Path, leg: dict[str, Any]) -> Flight:
    """The CJ-1 on one leg with a fifth more fuel than the book's, within the same gross weight."""
    fuel = 1.2 * CJ1_FUEL / G
    return fly_files(
        folder,
        mission=mission_content(
            [leg], payload="0 kg", fuel={"as_needed": None, "load": f"{fuel:.9f} kg"}
        ),
        aircraft=aircraft_content(
            wing_area=f"{CJ1_AREA} m**2",
            masses={
                "operating_empty": f"{CJ1_WEIGHT / G - fuel:.9f} kg",
                "maximum_zero_fuel": "9 t",
                "maximum_ramp": "9 t",
                "maximum_take_off": "9 t",
                "maximum_landing": "9 t",
            },
            fuel_tanks={"capacity": "5 t"},
            drag_polar={
                "zero_lift_drag_coefficient": CJ1_CD0,
                "induced_drag_factor": None,
                "oswald_efficiency": CJ1_OSWALD,
                "aspect_ratio": CJ1_SPAN**2 / CJ1_AREA,
            },
        ),
        engine=engine_content(static_thrust="16245 N", density_exponent=1.0),
    )


@pytest.mark.source(ANDERSON)
def test_cj1_burns_its_tanks_over_its_range(tmp_path: Path) -> None:
    # Constant altitude and lift coefficient: (CL^0.5 / CD) is greatest at CL = sqrt(CD0 / 3K).
    induced = 1.0 / (3.141592653589793 * CJ1_OSWALD * CJ1_SPAN**2 / CJ1_AREA)
    flight = cj1(
        tmp_path,
        {
            "kind": "cruise",
            "holds": "altitude and lift coefficient",
            "lift_coefficient": sqrt(CJ1_CD0 / (3.0 * induced)),
            "pressure_altitude": CJ1_LEVEL,
            "distance": "5843 km",
        },
    )
    assert flight.failure is None
    # 3,630 statute miles: the last printed digit is ten miles, 0.3 %; the graphs of the book more.
    assert segment(flight, "cruise").fuel * G == pytest.approx(CJ1_FUEL, rel=0.005)


@pytest.mark.source(ANDERSON)
def test_cj1_burns_its_tanks_over_its_endurance(tmp_path: Path) -> None:
    hold = {"kind": "loiter", "time": "13.3 h", "pressure_altitude": CJ1_LEVEL}
    flight = cj1(tmp_path, hold)
    assert flight.failure is None
    # 13.3 h: half the last digit is 0.4 %, and as much in fuel at the end of the flight is less.
    assert segment(flight, "loiter").fuel * G == pytest.approx(CJ1_FUEL, rel=0.005)


@pytest.mark.source(ANDERSON)
def test_cj1_holds_at_its_best_lift_to_drag_ratio(tmp_path: Path) -> None:
    hold = {"kind": "loiter", "time": "1 h", "pressure_altitude": CJ1_LEVEL}
    steps = segment(cj1(tmp_path, hold), "loiter").steps
    assert steps.lift / steps.drag == pytest.approx(16.9, abs=0.05)


# --- J. D. Anderson, Aircraft Performance and Design ------------------------------------------


@pytest.mark.source(GULFSTREAM)
def test_business_jet_burns_its_tanks_over_its_endurance(tmp_path: Path) -> None:
    gross, fuel = 73000.0 * POUND, 29500.0 * POUND
    flight = fly_files(
        tmp_path,
        mission=mission_content(
            [{"kind": "loiter", "time": "10.8 h", "pressure_altitude": "FL300"}],
            payload="0 kg",
            fuel={"as_needed": None, "load": "32000 lb"},
        ),
        aircraft=aircraft_content(
            wing_area=f"{950.0 * FOOT**2:.9f} m**2",
            masses={
                "operating_empty": f"{gross - 32000.0 * POUND:.9f} kg",
                "maximum_zero_fuel": "30 t",
                "maximum_ramp": "40 t",
                "maximum_take_off": "40 t",
                "maximum_landing": "40 t",
            },
            fuel_tanks={"capacity": "20 t"},
            drag_polar={"zero_lift_drag_coefficient": 0.015, "induced_drag_factor": 0.08},
        ),
        engine=engine_content(
            specific_fuel_consumption="0.69 1/h", static_thrust="13850 lbf", density_exponent=0.6
        ),
    )
    assert flight.failure is None
    found = segment(flight, "loiter")
    # 10.8 h: half the last digit is 0.5 %.
    assert found.fuel == pytest.approx(fuel, rel=0.005)
    # 14.43: half the last digit.
    assert found.steps.lift / found.steps.drag == pytest.approx(14.43, abs=0.006)
