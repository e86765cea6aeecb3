"""The error a flight reports about itself against what more steps make of it."""

from __future__ import annotations

import tomllib
from itertools import pairwise
from pathlib import Path
from typing import Any

import pytest
from mission_files import (
    BYPASS_5,
    OUT_AND_DOWN,
    PROFILES,
    Content,
    fly_files,
    mission_content,
)

from engine import load_engine
from mission.aircraft import load_aircraft
from mission.flight import fly
from mission.mission_file import load_mission

# The sweeps stop when no mass moves by 1e-11 of itself: so much of take-off mass is no error of
# the steps.
SWEPT = 1e-10


def built_in_missions() -> list[str]:
    """Names of the files in profiles/ that are missions."""
    files = sorted(PROFILES.glob("*.toml"))
    return [path.stem for path in files if "segment" in tomllib.loads(path.read_text("utf-8"))]


def assert_error_is_honest(flights: list[Any]) -> None:
    """Doubling the steps moves block fuel by no more than was reported before."""
    for coarse, fine in pairwise(flights):
        moved = abs(fine.totals.block_fuel - coarse.totals.block_fuel)
        slack = SWEPT * coarse.totals.takeoff_mass
        assert moved <= coarse.totals.integration_error + slack


@pytest.mark.parametrize("name", built_in_missions())
def test_doubling_the_steps_of_built_in_missions(name: str) -> None:
    mission = load_mission(PROFILES / f"{name}.toml")
    aircraft = load_aircraft(PROFILES / f"{mission.written.aircraft}.toml")
    engine = load_engine(PROFILES / f"{mission.written.engine}.toml")
    flights = [fly(mission, aircraft, engine, refinement=steps) for steps in (1, 2)]
    assert flights[0].failure is None
    assert_error_is_honest(flights)
    # A hundredth of a percent of block fuel, of the steps before the last doubling; the long
    # bridges of the fast aircraft make the most of it.
    assert flights[0].totals.integration_error < 1e-4 * flights[0].totals.block_fuel
    assert flights[1].totals.integration_error < 1e-6 * flights[0].totals.block_fuel


def test_there_are_built_in_missions() -> None:
    assert built_in_missions()


WATCH: list[Content] = [
    {"kind": "taxi", "time": "8 min"},
    {"kind": "take-off"},
    {
        "kind": "climb",
        "to": "FL370",
        "calibrated_airspeed": "290 kt",
        "mach": 0.74,
        "limited_below_10000_ft": True,
    },
    {"kind": "cruise", "distance": "200 nmi"},
    {"kind": "descent", "to": "FL100", "mach": 0.74, "calibrated_airspeed": "290 kt"},
    {"kind": "loiter", "time": "2 h"},
    {"kind": "climb", "to": "FL330", "calibrated_airspeed": "290 kt", "mach": 0.74},
    {"kind": "cruise", "distance": "rest"},
    {"kind": "descent", "mach": 0.74, "calibrated_airspeed": "290 kt"},
    {"kind": "approach", "time": "4 min", "drag_factor": 2.0},
]


@pytest.mark.parametrize(
    "mission",
    [
        mission_content(OUT_AND_DOWN, distance="900 nmi", day="ISA+15"),
        mission_content(WATCH, distance="700 nmi", day="ISA-20", headwind="20 kt"),
    ],
    ids=["warm cruise", "cold watch"],
)
def test_doubling_the_steps(tmp_path: Path, mission: Content) -> None:
    flights = [
        fly_files(tmp_path, mission=mission, engine=BYPASS_5, refinement=steps) for steps in (1, 2)
    ]
    assert flights[0].failure is None
    assert_error_is_honest(flights)


@pytest.mark.parametrize(
    ("rating", "day"), [("take_off", "ISA+5"), ("maximum_continuous", "ISA-30"), ("climb", "ISA")]
)
def test_doubling_the_steps_of_a_climb_twice(tmp_path: Path, rating: str, day: str) -> None:
    """In the first two a third limit governs for some 200 m between two others."""
    climb = {"kind": "climb", "to": "FL290", "calibrated_airspeed": "280 kt", "rating": rating}
    flights = [
        fly_files(
            tmp_path,
            mission=mission_content([climb], day=day),
            engine=BYPASS_5,
            refinement=steps,
        )
        for steps in (1, 2, 4)
    ]
    assert flights[0].failure is None
    assert_error_is_honest(flights)


def test_the_reported_error_is_the_change_from_half_the_steps(tmp_path: Path) -> None:
    mission = mission_content(OUT_AND_DOWN, distance="900 nmi")
    one, two = (fly_files(tmp_path, mission=mission, refinement=steps) for steps in (1, 2))
    moved = abs(two.totals.block_fuel - one.totals.block_fuel)
    # Two has twice the steps of one, so that its coarser half is one (settled less far: 1e-9).
    assert two.totals.integration_error == pytest.approx(moved, abs=1e-9 * 27000.0)
