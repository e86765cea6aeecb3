"""From segments to rows: bridges, joints of speed and altitude, the rest of the distance."""

from __future__ import annotations

from itertools import pairwise
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from mission_files import (
    OUT_AND_DOWN,
    TO_ALTERNATE,
    Content,
    aircraft_content,
    engine_content,
    fly_files,
    mission_content,
    segment,
)

from engine.atmosphere import flight_condition
from engine.errors import InputRefused
from engine.quantities import FOOT, KNOT
from mission.airspeeds import calibrated_airspeed
from mission.results import Flight, SegmentLog

UP: Content = {"kind": "climb", "to": "FL350", "calibrated_airspeed": "280 kt", "mach": 0.74}
DOWN: Content = {"kind": "descent", "calibrated_airspeed": "280 kt", "mach": 0.74}
TOP = 10000.0 * FOOT


def flown(folder: Path, *segments: Content, **changes: Any) -> Flight:
    return fly_files(folder, mission=mission_content(list(segments), **changes))


def rows(flight: Flight) -> list[tuple[str, str]]:
    return [(log.name, log.kind) for log in flight.segments]


def airspeeds(log: SegmentLog) -> Any:
    pressure = flight_condition(log.steps.pressure_altitude).static_pressure
    return calibrated_airspeed(log.steps.mach, pressure)


def assert_joined(flight: Flight) -> None:
    """Airborne rows meet in altitude and speed; only a loiter's speed may move within 1e-6."""
    for before, after in pairwise(flight.segments):
        if before.steps.lift[-1] > 0.0 and after.steps.lift[0] > 0.0:
            height = after.steps.pressure_altitude[0] - before.steps.pressure_altitude[-1]
            assert abs(height) < 0.02, after.name
            assert after.steps.mach[0] == pytest.approx(before.steps.mach[-1], abs=3e-6), after.name


def test_segments_that_meet_in_speed_need_no_bridge(tmp_path: Path) -> None:
    flight = flown(tmp_path, *OUT_AND_DOWN, distance="800 nmi")
    assert rows(flight) == [("climb", "climb"), ("cruise", "cruise"), ("descent", "descent")]
    assert_joined(flight)


def test_a_jump_of_speed_is_bridged_and_the_bridge_is_named(tmp_path: Path) -> None:
    flight = flown(
        tmp_path,
        UP,
        {"kind": "cruise", "name": "slow cruise", "distance": "200 nmi", "mach": 0.68},
        {"kind": "cruise", "name": "fast cruise", "distance": "rest", "mach": 0.76},
        DOWN,
        distance="800 nmi",
    )
    assert rows(flight) == [
        ("climb", "climb"),
        ("bridge to slow cruise", "acceleration"),
        ("slow cruise", "cruise"),
        ("bridge to fast cruise", "acceleration"),
        ("fast cruise", "cruise"),
        ("bridge to descent", "acceleration"),
        ("descent", "descent"),
    ]
    assert_joined(flight)
    slower, faster = (segment(flight, f"bridge to {name} cruise") for name in ("slow", "fast"))
    assert slower.fuel == 0.0  # this engine burns nothing at idle
    assert faster.fuel > 0.0


def test_take_off_loiter_and_approach_are_bridged_at_their_own_speeds(tmp_path: Path) -> None:
    flight = flown(
        tmp_path,
        {"kind": "taxi", "time": "5 min"},
        {"kind": "take-off"},
        UP,
        {"kind": "loiter", "time": "20 min"},
        DOWN,
        {"kind": "approach", "time": "3 min"},
    )
    names = [name for name, kind in rows(flight) if kind == "acceleration"]
    assert names == [
        "bridge to climb",
        "bridge to loiter",
        "bridge to descent",
        "bridge to approach and landing",
    ]
    assert_joined(flight)


@pytest.mark.parametrize("before", ["nothing", "allowance"])
def test_a_loiter_hands_its_own_speed_on(tmp_path: Path, before: str) -> None:
    """Even over an allowance that is only booked: the bridge begins where the loiter ended."""
    booked: list[Content] = [{"kind": "allowance", "fuel": "10 kg"}] if before != "nothing" else []
    flight = flown(
        tmp_path,
        {"kind": "loiter", "time": "30 min", "pressure_altitude": "FL200"},
        *booked,
        {"kind": "cruise", "distance": "200 nmi", "mach": 0.6},
    )
    assert flight.failure is None
    ends = segment(flight, "loiter").steps.mach[-1]
    assert segment(flight, "bridge to cruise").steps.mach[0] == pytest.approx(ends, abs=3e-6)


def test_a_lift_coefficient_held_from_a_loiter_is_the_loiters(tmp_path: Path) -> None:
    """The drag rise makes the speed of least fuel flow another than that of least drag."""
    wavy = aircraft_content(
        drag_polar={"drag_rise": {"drag_divergence_mach": 0.5, "at_lift_coefficient": 0.7}}
    )
    hold = {"kind": "loiter", "time": "30 min", "pressure_altitude": "FL300"}
    cruise = {"kind": "cruise", "distance": "200 nmi", "holds": "altitude and lift coefficient"}
    flight = fly_files(
        tmp_path,
        mission=mission_content([hold, cruise, cruise | {"name": "and on"}]),
        aircraft=wavy,
        engine=engine_content(static_thrust="90 kN"),
    )
    assert flight.failure is None
    assert [log.name for log in flight.segments] == ["loiter", "cruise", "and on"]
    assert_joined(flight)


def test_a_cruise_climb_hands_its_altitude_on(tmp_path: Path) -> None:
    flight = flown(
        tmp_path,
        UP,
        {"kind": "cruise", "distance": "rest", "holds": "mach and lift coefficient"},
        DOWN,
        distance="1500 nmi",
    )
    cruise = segment(flight, "cruise").steps
    assert cruise.pressure_altitude[-1] - cruise.pressure_altitude[0] > 200.0
    assert_joined(flight)
    force = 0.7 * flight_condition(cruise.pressure_altitude).static_pressure * cruise.mach**2
    coefficient = cruise.lift / (force * 62.0)
    assert coefficient == pytest.approx(coefficient[0], rel=1e-9)


def test_a_cruise_climb_at_a_lift_coefficient_of_one_holds_one(tmp_path: Path) -> None:
    cruise = {
        "kind": "cruise",
        "distance": "300 nmi",
        "holds": "mach and lift coefficient",
        "mach": 0.42,
        "lift_coefficient": 1.0,
    }
    steps = segment(flown(tmp_path, cruise), "cruise").steps
    force = 0.7 * flight_condition(steps.pressure_altitude).static_pressure * 0.42**2
    assert steps.lift / (force * 62.0) == pytest.approx(1.0, rel=1e-9)


# --- schedules of speed -----------------------------------------------------------------------


@pytest.mark.parametrize(
    "speeds",
    [
        {"calibrated_airspeed": "280 kt", "mach": 0.74},
        {"calibrated_airspeed": "300 kt"},
        {"calibrated_airspeed": "280 kt", "mach": 0.40},  # they cross below 10,000 ft
        {"mach": 0.60},
        {"calibrated_airspeed": "230 kt", "mach": 0.70},
    ],
    ids=["both", "airspeed", "low crossover", "mach", "slow"],
)
@pytest.mark.parametrize("limited", [True, False])
@pytest.mark.parametrize("way", ["climb", "descent"])
def test_the_lowest_speed_governs(tmp_path: Path, speeds: Content, limited: bool, way: str) -> None:
    """Whatever is given: below 10,000 ft 250 kt at most, and never a jump without its fuel."""
    leg: Content = {"kind": way, "limited_below_10000_ft": limited, **speeds}
    if way == "climb":
        segments = [{**leg, "to": "FL330"}]
    else:
        start = {"kind": "cruise", "distance": "50 nmi", "pressure_altitude": "FL330", "mach": 0.5}
        segments = [start, leg]
    flight = fly_files(
        tmp_path,
        mission=mission_content(segments),
        aircraft=aircraft_content(limits={"maximum_operating_calibrated_airspeed": "450 kt"}),
    )
    log = segment(flight, way)
    speed, steps = airspeeds(log), log.steps
    airspeed = float(str(speeds.get("calibrated_airspeed", "900 kt")).split()[0]) * KNOT
    assert np.all(speed <= airspeed * (1.0 + 1e-6))
    assert np.all(steps.mach <= speeds.get("mach", 9.0) + 1e-6)
    if limited:
        low = steps.pressure_altitude < TOP - 1.0
        assert np.all(speed[low] <= 250.0 * KNOT * (1.0 + 1e-6))
    # Between two steps at one altitude the speed may change only over some time.
    jumps = np.abs(np.diff(steps.mach)) > 1e-5
    assert np.all(np.diff(steps.elapsed_time)[jumps] > 0.0)


def test_the_speed_limit_ends_in_a_level_acceleration(tmp_path: Path) -> None:
    flight = flown(tmp_path, UP | {"limited_below_10000_ft": True})
    log = segment(flight, "climb")
    speed = airspeeds(log) / KNOT
    at_limit = np.abs(log.steps.pressure_altitude - TOP) < 1e-3
    assert speed[at_limit].min() == pytest.approx(250.0, rel=1e-6)
    assert speed[at_limit].max() == pytest.approx(280.0, rel=1e-6)
    assert np.all(log.steps.flight_path_angle[at_limit][1:-1] == 0.0)


# --- refusals of a mission that does not hang together ----------------------------------------

CRUISE: Content = {"kind": "cruise", "name": "out", "distance": "100 nmi"}


@pytest.mark.parametrize(
    ("segments", "changes", "match"),
    [
        (
            [UP, CRUISE | {"pressure_altitude": "FL370"}],
            {},
            r'segment 2 "out": pressure_altitude = 37,000 ft.*ends at 35,000 ft',
        ),
        ([UP, UP | {"name": "again", "to": "FL300"}], {}, r'segment 2 "again".*not above 35,000'),
        ([UP, DOWN | {"to": "FL370"}], {}, r'segment 2 "descent".*not below 35,000 ft'),
        ([UP, CRUISE | {"distance": "rest"}], {}, r'segment 2 "out".*needs a distance at the top'),
        (
            [UP, CRUISE | {"distance": "rest"}, CRUISE | {"distance": "rest"}],
            {"distance": "800 nmi"},
            r'two cruises have distance = "rest"',
        ),
        ([UP, CRUISE], {"distance": "800 nmi"}, r"distance: = 800 nmi.*no cruise has"),
        (
            [UP, CRUISE | {"holds": "mach and lift coefficient", "lift_coefficient": 0.5}],
            {},
            r'segment 2 "out": lift_coefficient with mach sets the altitude',
        ),
        ([{"kind": "taxi", "time": "3 min"}, UP], {}, r'segment 2 "climb".*put a take-off before'),
        ([UP, {"kind": "taxi", "time": "3 min"}], {}, r'segment 2 "taxi".*is in the air'),
        ([UP, {"kind": "take-off"}], {}, r'segment 2 "take-off".*in the air already'),
        (
            [UP, CRUISE, DOWN],
            {
                "destination": {"elevation": "12000 ft"},
                "reserves": {
                    "item": [TO_ALTERNATE],
                    "alternate": {
                        "distance": "100 nmi",
                        "pressure_altitude": "FL100",
                        "mach": 0.5,
                        "calibrated_airspeed": "250 kt",
                    },
                },
            },
            r"mission\.toml: reserves\.alternate.*alternate climb.*not above",
        ),
    ],
)
def test_refusals_name_the_segment(
    tmp_path: Path, segments: list[Content], changes: Content, match: str
) -> None:
    with pytest.raises(InputRefused, match=match) as refusal:
        flown(tmp_path, *segments, **changes)
    assert refusal.value.where.endswith("mission.toml")


def test_a_climb_may_start_at_an_elevated_field(tmp_path: Path) -> None:
    flight = flown(tmp_path, *OUT_AND_DOWN, distance="800 nmi", departure={"elevation": "6000 ft"})
    start = segment(flight, "climb").steps.pressure_altitude[0]
    assert start / FOOT == pytest.approx(6000.0, abs=0.01)


def test_a_descent_ends_1500_ft_above_the_destination(tmp_path: Path) -> None:
    flight = flown(tmp_path, *OUT_AND_DOWN, distance="800 nmi", destination={"elevation": "700 ft"})
    end = segment(flight, "descent").steps.pressure_altitude[-1]
    assert end / FOOT == pytest.approx(2200.0, abs=0.01)
