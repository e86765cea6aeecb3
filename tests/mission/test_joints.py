"""Cuts of climbs and descents where the engine has a kink."""

from __future__ import annotations

from itertools import pairwise
from pathlib import Path

import numpy as np
import pytest
from mission_files import (
    BYPASS_5,
    OUT_AND_DOWN,
    PROFILES,
    aircraft_content,
    fly_files,
    mission_content,
    write,
)

import mission.flight
from engine import load_engine
from engine.atmosphere import FlightCondition
from engine.quantities import FOOT, KNOT
from mission.air import Air
from mission.aircraft import load_aircraft
from mission.airspeeds import mach_from_calibrated_airspeed
from mission.march.joints import Joints, find_joints
from mission.march.span import Span, SpeedRule
from mission.march.world import World

KINK = (
    1.0  # m: the last piece of the search is some metres long, and a kink bends its straight line
)


@pytest.fixture(scope="module")
def world(tmp_path_factory: pytest.TempPathFactory) -> World:
    plane = load_aircraft(write(tmp_path_factory.mktemp("joints"), "plane", aircraft_content()))
    return World(plane, load_engine(BYPASS_5))


def span(start: float, end: float, rating: str = "climb", day: float = 10.0) -> Span:
    rule = SpeedRule("calibrated", 280.0 * KNOT)
    return Span(
        segment=0,
        march="altitude",
        air=Air((day,)),
        rating=rating,
        start_altitude=start * FOOT,
        end_altitude=end * FOOT,
        start_speed=rule,
        end_speed=rule,
    )


def flight_at(whole: Span, altitude: float | np.ndarray) -> FlightCondition:
    """On the schedule of :func:`span`."""
    still = whole.air.condition(altitude)
    return still.with_mach(mach_from_calibrated_airspeed(280.0 * KNOT, still.static_pressure))


def limit_at(world: World, piece: Span, altitude: float) -> str:
    state = world.engine.at(flight_at(piece, altitude), rating=piece.rating)
    return str(state.binding_limit_names)


def test_pieces_follow_one_another(world: World) -> None:
    whole = span(0.0, 29000.0)
    pieces = find_joints(world, [whole]).cut()
    assert len(pieces) > 1
    assert pieces[0].start_altitude == whole.start_altitude
    assert pieces[-1].end_altitude == whole.end_altitude
    for before, after in pairwise(pieces):
        assert before.end_altitude == after.start_altitude
        assert before.end_altitude > before.start_altitude


def kinks(world: World, piece: Span) -> list[float]:
    """Altitudes where the binding limit changes, found by bisection on a fine scan."""
    found = []
    scan = np.linspace(piece.start_altitude, piece.end_altitude, 121)
    state = world.engine.at(flight_at(piece, scan), rating=piece.rating)
    names = state.binding_limit_names
    for low, high, before, after in zip(scan[:-1], scan[1:], names[:-1], names[1:], strict=True):
        if before == after:
            continue
        left, right = float(low), float(high)
        while abs(right - left) > 0.02:
            middle = 0.5 * (left + right)
            if limit_at(world, piece, middle) == before:
                left = middle
            else:
                right = middle
        found.append(0.5 * (left + right))
    return found


@pytest.mark.parametrize(
    ("engine", "rating", "deviation"),
    [
        ("bypass_1", "climb", -10.0),
        ("bypass_5", "climb", -10.0),
        ("bypass_5", "flight_idle", 10.0),
        ("bypass_5", "take_off", 5.0),  # a third limit governs for 200 m between two others
        ("bypass_5", "maximum_continuous", -30.0),
    ],
)
def test_every_change_of_the_binding_limit_is_a_joint(
    world: World, engine: str, rating: str, deviation: float
) -> None:
    there = World(world.aircraft, load_engine(PROFILES / f"{engine}.toml"))
    ends = (29000.0, 0.0) if rating == "flight_idle" else (0.0, 29000.0)
    whole = span(*ends, rating, deviation)
    expected = kinks(there, whole)
    assert expected
    joints = [piece.end_altitude for piece in find_joints(there, [whole]).cut()[:-1]]
    for kink in expected:
        assert min(abs(joint - kink) for joint in joints) < KINK


def test_level_spans_are_left_alone(world: World) -> None:
    level = Span(segment=0, march="time", rating="cruise", start_altitude=9000.0, extent=60.0)
    assert find_joints(world, [level]).cut() == (level,)


def test_an_engine_without_kinks_leaves_a_climb_whole(world: World, tmp_path: Path) -> None:
    engine = load_engine(
        write(
            tmp_path,
            "engine",
            {
                "kind": "constant consumption",
                "name": "smooth",
                "specific_fuel_consumption": "0.6 1/h",
                "static_thrust": "50 kN",
            },
        )
    )
    whole = span(0.0, 29000.0)
    assert find_joints(World(world.aircraft, engine), [whole]).cut() == (whole,)


def test_joints_are_what_makes_block_fuel_converge(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    def error(refinement: int) -> float:
        mission_ = mission_content(OUT_AND_DOWN, distance="600 nmi", day="ISA+10")
        flight = fly_files(tmp_path, mission=mission_, engine=BYPASS_5, refinement=refinement)
        return abs(flight.totals.block_fuel - exact)

    exact = 0.0
    exact = error(4)
    with_joints = error(1)
    monkeypatch.setattr(
        mission.flight, "find_joints", lambda world, spans: Joints(tuple(spans), {}, {})
    )
    without = error(1)
    assert without > 20.0 * with_joints
    assert with_joints < 1e-7 * exact
