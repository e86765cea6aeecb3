"""The hand check beside every cruise, and the causes of its difference."""

from __future__ import annotations

from math import exp
from pathlib import Path

import pytest
from mission_files import OUT_AND_DOWN, Content, fly_files, mission_content, segment

from mission.results import Flight

WATCH: list[Content] = [
    {"kind": "taxi", "time": "5 min"},
    {"kind": "take-off"},
    OUT_AND_DOWN[0],
    {"kind": "cruise", "name": "out", "distance": "300 nmi"},
    OUT_AND_DOWN[2] | {"to": "FL100"},
    {"kind": "loiter", "time": "1 h"},
    OUT_AND_DOWN[0],
    {"kind": "cruise", "name": "home", "distance": "rest"},
    OUT_AND_DOWN[2],
    {"kind": "approach", "time": "4 min"},
]


def flown(folder: Path, segments: list[Content], **changes: object) -> Flight:
    flight = fly_files(folder, mission=mission_content(segments, **changes))
    assert flight.failure is None
    return flight


def test_a_cruise_climb_agrees_with_the_breguet_equation(tmp_path: Path) -> None:
    """In the isothermal layer it is the Breguet equation: nothing is left to explain."""
    cruise = {
        "kind": "cruise",
        "distance": "2000 nmi",
        "holds": "mach and lift coefficient",
        "mach": 0.74,
        "lift_coefficient": 0.5,
    }
    (check, *_) = flown(tmp_path, [cruise]).cross_check
    assert check.difference_percent == pytest.approx(0.0, abs=1e-6)


def test_values_at_half_the_fuel(tmp_path: Path) -> None:
    """At constant altitude and speed, from the polar at half the fuel by hand."""
    cruise = {"kind": "cruise", "distance": "1500 nmi", "mach": 0.72, "pressure_altitude": "FL390"}
    flight = flown(tmp_path, [cruise])
    log = segment(flight, "cruise")
    force = 0.7 * 19677.2 * 0.72**2 * 62.0  # pressure at 39,000 ft: ISO 2533:1975
    coefficient = (log.mass_start - 0.5 * log.fuel) * 9.80665 / force
    ratio = coefficient / (0.0175 + 0.042 * coefficient**2)
    speed = 0.72 * 295.0695
    share = 0.6 / 3600.0 * 1500.0 * 1852.0 / (speed * ratio)
    expected = log.mass_start * (1.0 - exp(-share))
    check = flight.cross_check[0]
    # Values between two of nine nodes are taken on a straight line: some 1e-5.
    assert check.breguet_fuel == pytest.approx(expected, rel=5e-5)
    assert check.integrated_fuel == log.fuel


def test_a_check_for_every_cruise_and_one_for_the_trip(tmp_path: Path) -> None:
    flight = flown(tmp_path, WATCH, distance="900 nmi")
    assert [check.segment for check in flight.cross_check] == ["out", "home", "whole trip"]
    whole = flight.cross_check[-1]
    assert whole.integrated_fuel == flight.totals.trip_fuel
    assert sum(whole.causes.values()) == pytest.approx(
        whole.integrated_fuel - whole.breguet_fuel, rel=1e-9
    )
    for cause in ("climb and acceleration", "descent", "loiter", "change along the cruise"):
        assert cause in whole.causes
    # An hour of loiter covers little way of its own; climbs burn more and descents less than
    # level flight over their way.
    assert whole.causes["loiter"] > 100.0
    assert whole.causes["climb and acceleration"] > 0.0
    assert whole.causes["descent"] < 0.0


def test_no_cruise_no_check(tmp_path: Path) -> None:
    assert flown(tmp_path, [OUT_AND_DOWN[0]]).cross_check == ()


def test_the_sign_of_the_difference(tmp_path: Path) -> None:
    whole = flown(tmp_path, WATCH, distance="900 nmi").cross_check[-1]
    difference = 100.0 * (whole.breguet_fuel - whole.integrated_fuel) / whole.integrated_fuel
    assert whole.difference_percent == pytest.approx(difference, rel=1e-12)
    assert whole.difference_percent < 0.0
