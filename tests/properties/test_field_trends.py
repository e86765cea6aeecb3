"""What must lengthen a take-off and flatten a climb: plain numbers at large, a cycle on a grid."""

from __future__ import annotations

from dataclasses import replace
from functools import cache

import numpy as np
from hypothesis import given
from hypothesis import strategies as st
from mission_files import PROFILES

from engine import load_engine
from engine.cycle_engine import CycleEngine
from engine.options.constant_consumption import ConstantConsumptionEngine
from engine.scaling import scaled
from mission.aircraft import Aircraft, load_aircraft
from mission.field.allowed_mass import Verdict, mass_for_field_length
from mission.field.cases import APPROACH_CLIMB, LANDING_CLIMB, TAKE_OFF_CLIMBS
from mission.field.performance import climb_gradients, take_off_lengths
from mission.field.states import Place

CASES = (*TAKE_OFF_CLIMBS, APPROACH_CLIMB, LANDING_CLIMB)
MASSES, HEIGHTS, DAYS = st.floats(17e3, 29e3), st.floats(0.0, 2500.0), st.floats(-20.0, 30.0)


@cache
def twin() -> Aircraft:
    return load_aircraft(PROFILES / "coast_watch_twin.toml")


@cache
def cycle() -> CycleEngine:
    loaded = load_engine(PROFILES / "bypass_5.toml")
    assert isinstance(loaded, CycleEngine)
    return loaded


def plain(thrust: float = 42e3) -> ConstantConsumptionEngine:
    """An engine whose thrust falls with density."""
    ratings = {"take_off": thrust, "maximum_continuous": 0.9 * thrust}
    return ConstantConsumptionEngine("plain", 1.5e-5, ratings, 0.8)


def assert_worse(place: Place, engine: ConstantConsumptionEngine, aircraft: Aircraft) -> None:
    """Both lengths grow and all gradients fall from the first member to the second."""
    lengths = take_off_lengths(aircraft, engine, place)
    assert lengths.balanced is not None
    assert lengths.balanced[1] > lengths.balanced[0]
    assert lengths.all_engine[1] > lengths.all_engine[0]
    for climb in climb_gradients(aircraft, engine, CASES, place):
        assert climb.gradient[1] < climb.gradient[0]


@given(mass=MASSES, more=st.floats(20.0, 3000.0), height=HEIGHTS, day=DAYS)
def test_mass_lengthens(mass: float, more: float, height: float, day: float) -> None:
    assert_worse(Place([mass, mass + more], height, day), plain(), twin())


@given(mass=MASSES, height=HEIGHTS, more=st.floats(20.0, 1000.0), day=DAYS)
def test_height_lengthens(mass: float, height: float, more: float, day: float) -> None:
    assert_worse(Place(mass, [height, height + more], day), plain(), twin())


@given(mass=MASSES, height=HEIGHTS, day=DAYS, more=st.floats(1.0, 15.0))
def test_warmth_lengthens(mass: float, height: float, day: float, more: float) -> None:
    assert_worse(Place(mass, height, [day, day + more]), plain(), twin())


@given(mass=MASSES, height=HEIGHTS, day=DAYS, share=st.floats(0.7, 0.99))
def test_less_thrust_lengthens(mass: float, height: float, day: float, share: float) -> None:
    place = Place(mass, height, day)
    strong, weak = plain(), plain(share * 42e3)
    assert (
        take_off_lengths(twin(), weak, place).needed
        > take_off_lengths(twin(), strong, place).needed
    )
    pairs = zip(*(climb_gradients(twin(), e, CASES, place) for e in (strong, weak)), strict=True)
    assert all(after.gradient < before.gradient for before, after in pairs)


@given(mass=MASSES, height=HEIGHTS, day=DAYS)
def test_the_runway_needed_allows_the_mass(mass: float, height: float, day: float) -> None:
    needed = take_off_lengths(twin(), plain(), Place(mass, height, day)).needed
    allowed = mass_for_field_length(twin(), plain(), needed, height, day)
    assert int(allowed.verdict) == Verdict.FOUND
    assert abs(float(allowed.mass) / mass - 1.0) < 1e-8


# The cycle may be held at the pressure it delivers, where thrust stays as the air thins: gradients
# then hardly move with height and temperature, but lengths do.
GRID = Place(
    np.array([17e3, 21e3, 25e3, 29e3])[:, None, None],
    np.array([0.0, 600.0, 1500.0, 2500.0])[:, None],
    np.array([-20.0, 0.0, 15.0, 30.0]),
)


def test_a_cycle_needs_longer_runways_heavy_high_and_hot() -> None:
    lengths = take_off_lengths(twin(), cycle(), GRID)
    assert lengths.is_answered.all()
    assert lengths.balanced is not None
    for length in (lengths.balanced, lengths.all_engine):
        assert all(np.all(np.diff(length, axis=axis) > 0.0) for axis in range(3))


def test_a_cycle_climbs_less_heavy_and_on_a_hot_day() -> None:
    for climb in climb_gradients(twin(), cycle(), CASES, GRID):
        assert climb.is_answered.all()
        assert np.all(np.diff(climb.gradient, axis=0) < 0.0)
        assert np.all(climb.gradient[..., 3] < climb.gradient[..., 2])


def test_a_smaller_cycle_needs_longer_runways() -> None:
    small = take_off_lengths(twin(), scaled(cycle(), 0.85), GRID)
    assert np.all(small.needed > take_off_lengths(twin(), cycle(), GRID).needed)


def test_a_runway_of_the_length_a_cycle_needs_allows_the_mass() -> None:
    needed = take_off_lengths(twin(), cycle(), GRID).needed
    allowed = mass_for_field_length(
        twin(), cycle(), needed, GRID.pressure_altitude, GRID.temperature_deviation
    )
    assert np.all(allowed.verdict == Verdict.FOUND)
    assert np.max(np.abs(allowed.mass / np.broadcast_to(GRID.mass, needed.shape) - 1.0)) < 1e-7


def test_flaps_that_lift_more_shorten_the_run() -> None:
    better = replace(twin(), take_off_lift_coefficient=2.2)
    lengths = [take_off_lengths(aircraft, plain(), GRID) for aircraft in (twin(), better)]
    assert np.all(lengths[1].all_engine < lengths[0].all_engine)
