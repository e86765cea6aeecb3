"""Best speeds and levels of an aircraft with a computed engine: nothing beside them is better."""

from __future__ import annotations

from dataclasses import replace
from math import inf
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from mission_files import BYPASS_5, PROFILES, fly_files, mission_content, segment
from numpy.typing import NDArray

from engine import load_engine
from mission.air import Air
from mission.aircraft import load_aircraft
from mission.questions.best import best_cruise
from mission.steady.best_levels import best_altitude
from mission.steady.best_speeds import (
    best_endurance_mach,
    least_cost_mach,
    long_range_mach,
    maximum_level_mach,
    maximum_range_mach,
    slow_range_mach,
)
from mission.steady.climbing import best_climb_mach, rate_of_climb
from mission.steady.level_flight import LevelFlight, LevelSpeed, Limit, Subject
from mission.steady.speed_range import SpeedRange, speed_range

Array = NDArray[np.float64]
ENGINE = load_engine(BYPASS_5)
TWIN = replace(
    load_aircraft(PROFILES / "coast_watch_twin.toml"),
    buffet_onset=None,
    maximum_pressure_altitude=inf,
)
MEMBERS = 12  # of one example: the engine answers them in one call
quick = settings(max_examples=3)


def several(low: float, high: float) -> st.SearchStrategy[Array]:
    """Values of as many members."""
    some = st.floats(low, high)
    return st.lists(some, min_size=MEMBERS, max_size=MEMBERS).map(np.array)


altitudes = several(0.0, 13500.0)
masses = several(17000.0, 27000.0)
days = several(-20.0, 20.0)


def asked(altitude: Array, mass: Array, day: Array, wind: Array | float = 0.0) -> SpeedRange:
    return speed_range(LevelFlight.of(TWIN, ENGINE, altitude, mass, day, wind))


def at_mach(speeds: SpeedRange, mach: Array) -> LevelSpeed:
    """Level flight at a Mach number of nobody's choice."""
    inside = (mach >= speeds.ends.slow) & (mach <= speeds.ends.fast) & speeds.is_open
    start = np.full((0, *mach.shape), np.nan)
    return speeds.flight.speed_at(mach, inside, speeds.lack, speeds.thrust_margin, start)


@given(altitudes, masses, days)
@quick
def test_no_neighbour_flies_further(altitude: Array, mass: Array, day: Array) -> None:
    speeds = asked(altitude, mass, day)
    best = maximum_range_mach(speeds)
    for step in (-0.02, -0.002, 0.002, 0.02):
        other = at_mach(speeds, best.mach + step)
        there = other.is_flyable
        further = other.specific_air_range / best.specific_air_range
        assert (further[there] <= 1.0 + 1e-9).all()


@given(altitudes, masses, days)
@quick
def test_no_neighbour_flies_longer(altitude: Array, mass: Array, day: Array) -> None:
    speeds = asked(altitude, mass, day)
    best = best_endurance_mach(speeds)
    for step in (-0.02, -0.002, 0.002, 0.02):
        other = at_mach(speeds, best.mach + step)
        there = other.is_flyable
        assert (other.fuel_flow[there] >= best.fuel_flow[there] * (1.0 - 1e-9)).all()


@given(altitudes, masses, days)
@quick
def test_99_percent_is_99_percent(altitude: Array, mass: Array, day: Array) -> None:
    speeds = asked(altitude, mass, day)
    best = maximum_range_mach(speeds)
    for found, way in ((long_range_mach(speeds, best), 1.0), (slow_range_mach(speeds, best), -1.0)):
        assert (found.is_flyable == best.is_flyable).all()
        share = found.specific_air_range / best.specific_air_range
        is_free = found.is_flyable & (found.limit == Limit.NONE)
        assert share[is_free] == pytest.approx(np.full(is_free.sum(), 0.99), abs=1e-6)
        assert (share[found.is_flyable & ~is_free] >= 0.99).all()
        assert (way * (found.mach - best.mach)[found.is_flyable] >= 0.0).all()


@given(altitudes, masses, days)
@quick
def test_the_greatest_speed_is_met_and_not_passed(altitude: Array, mass: Array, day: Array) -> None:
    speeds = asked(altitude, mass, day)
    fastest = maximum_level_mach(speeds)
    by_thrust = fastest.is_flyable & (fastest.limit == Limit.THRUST)
    margin = fastest.thrust_margin[by_thrust]
    assert margin == pytest.approx(np.zeros(by_thrust.sum()), abs=1e-5)
    beyond = replace(speeds, ends=replace(speeds.ends, fast=np.ones(MEMBERS)))
    assert not at_mach(beyond, fastest.mach + 1e-3).is_flyable[by_thrust].any()


@given(altitudes, masses, days, several(0.0, 1.0), several(0.0, 1.0), several(-30.0, 60.0))
@quick
def test_time_that_costs_more_and_more_headwind_are_flown_faster(
    altitude: Array, mass: Array, day: Array, cost: Array, more: Array, headwind: Array
) -> None:
    calm, windy = asked(altitude, mass, day), asked(altitude, mass, day, -headwind)
    cheap, dear = (least_cost_mach(calm, index) for index in (cost, cost + more))
    there = cheap.is_flyable
    assert (dear.mach[there] >= cheap.mach[there] - 1e-5).all()
    against = least_cost_mach(windy, 0.0)
    in_still_air = maximum_range_mach(calm)
    way = np.where(headwind > 0.0, 1.0, -1.0)
    assert (way * (against.mach - in_still_air.mach) >= -1e-5)[there].all()


@given(altitudes, masses, days)
@quick
def test_no_neighbour_climbs_faster(altitude: Array, mass: Array, day: Array) -> None:
    flight = LevelFlight.of(TWIN, ENGINE, altitude, mass, day, rating="climb")
    best = best_climb_mach(flight)
    steps = np.array([-0.02, -0.002, 0.002, 0.02])[:, None]
    near = np.where(best.is_known, best.mach, 0.5) + steps
    rates = rate_of_climb(flight, flight.at_rating(near, np.ones(near.shape, dtype=bool)))
    is_free = best.is_known & (best.limit == Limit.NONE)
    compared = (near <= TWIN.maximum_operating_mach) & is_free
    assert (rates <= best.rate_of_climb + 1e-6)[compared].all()


@given(masses, st.floats(-20.0, 20.0))
@settings(max_examples=2)
def test_no_level_beside_the_best_is_better(mass: Array, day: float) -> None:
    """But for the last metres below where thrust ends, which are found to 3 parts in 10,000."""
    subject = Subject(TWIN, ENGINE, Air((day,)))
    mass = mass[:3]
    best = best_altitude(subject, mass)
    for step in (-600.0, -150.0, 150.0, 600.0):
        there = subject.level_flight(best.pressure_altitude + step, mass, "cruise")
        other = maximum_range_mach(speed_range(there))
        further = other.specific_air_range / best.speed.specific_air_range
        assert (further[other.is_flyable] <= 1.0 + 3e-4).all()


def test_what_the_cruise_of_a_flight_burns(tmp_path: Path) -> None:
    """Fuel flow, drag and thrust at its rating, node by node of a flown cruise."""
    cruise = {"kind": "cruise", "distance": "600 nmi", "mach": 0.72, "pressure_altitude": "FL370"}
    flight = fly_files(
        tmp_path,
        mission=mission_content([cruise], day="ISA+10"),
        engine=BYPASS_5,
    )
    assert flight.failure is None
    steps = segment(flight, "cruise").steps
    plane = load_aircraft(tmp_path / "aircraft.toml")
    there = LevelFlight.of(plane, ENGINE, 37000.0 * 0.3048, steps.mass, 10.0)
    found = at_mach(speed_range(there), np.full(steps.mass.shape, 0.72))
    assert found.fuel_flow == pytest.approx(steps.fuel_flow, rel=1e-8)
    assert found.drag == pytest.approx(steps.drag, rel=1e-12)
    assert found.thrust_margin == pytest.approx(steps.rating_thrust / steps.drag - 1.0, rel=1e-6)


def test_all_of_the_best_cruise_hangs_together() -> None:
    subject = Subject(TWIN, ENGINE, Air((10.0,), (-10.0,)))
    mass = np.array([25e3, 19e3, 22e3])
    found = best_cruise(subject, mass, 0.3)
    assert found.mass.tolist() == [19e3, 22e3, 25e3]
    best = found.best
    assert (np.diff(best.pressure_altitude) < 0.0).all()
    ratio = best.weight_over_pressure_ratio
    # The best level is nearly one weight over pressure; the engine makes the difference.
    assert ratio.max() / ratio.min() < 1.02
    (low, high), (slow, fast) = found.level_band, found.mach_band
    assert (low < best.pressure_altitude).all()
    assert (high >= best.pressure_altitude).all()
    assert (slow < best.speed.mach).all()
    assert (fast >= best.speed.mach - 1e-9).all()
    for level in (low, high):
        there = speed_range(subject.level_flight(level - 0.5, found.mass, "cruise"))
        share = maximum_range_mach(there).specific_air_range / best.speed.specific_air_range
        # Read off straight lines between levels 1,000 ft apart or less.
        assert share == pytest.approx(np.full(3, 0.99), abs=1.5e-3)
    assert found.initial_cruise is not None
    assert found.ceiling is not None
    assert (found.ceiling.pressure_altitude > found.initial_cruise.pressure_altitude).all()
    climb = subject.level_flight(found.initial_cruise.pressure_altitude, found.mass, "climb")
    left = rate_of_climb(climb, climb.at_rating(best.speed.mach[None], np.ones(3, bool)))[0]
    assert left == pytest.approx(np.full(3, 300.0 * 0.3048 / 60.0), rel=1e-4)
    below = found.off_levels[1]
    there = speed_range(
        subject.level_flight(best.pressure_altitude - 2000.0 * 0.3048, found.mass, "cruise")
    )
    share = maximum_range_mach(there).specific_air_range / best.speed.specific_air_range
    assert below == pytest.approx(share, abs=1e-3)
    costs = found.at_best.least_cost
    assert costs is not None
    assert (costs.mach >= best.speed.mach - 1e-5).all()
