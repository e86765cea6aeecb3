"""An envelope written and read back flies as its engine does; outside its table nothing flies."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest

from engine.atmosphere import flight_condition
from engine.envelope import (
    ALTITUDE_STEP,
    HIGHEST_ALTITUDE,
    HIGHEST_MACH,
    MACH_STEP,
    Envelope,
    default_levels,
    envelope,
    grid,
)
from engine.errors import InputRefused
from engine.interface import Engine
from engine.options.loading import load_engine
from mission.aircraft import load_aircraft
from mission.flight import fly
from mission.mission_file import load_mission
from mission.outputs.envelope_record import envelope_csv
from mission.outputs.failure import failure_headline
from mission.outputs.units import METRIC, TRADE
from mission.results import Flight

PROFILES = Path(__file__).parents[2] / "profiles"
TWIN = load_aircraft(PROFILES / "coast_watch_twin.toml")


def whole(engine: Engine, day: float, highest: float = HIGHEST_ALTITUDE) -> Envelope:
    """What ``longlegs envelope --csv`` writes."""
    heights, machs = grid(0.0, highest, ALTITUDE_STEP), grid(0.0, HIGHEST_MACH, MACH_STEP)
    return envelope(engine, heights, machs, day, levels=default_levels(engine))


def read_back(folder: Path, found: Envelope, day: str) -> Engine:
    (folder / "points.csv").write_text(envelope_csv(found), encoding="utf-8")
    toml = f'kind = "tabulated"\nname = "read back"\npoints = "points.csv"\nday = "{day}"\n'
    (folder / "table.toml").write_text(toml, encoding="utf-8")
    return load_engine(folder / "table.toml")


def demo(folder: Path, *changes: tuple[str, str]) -> Path:
    """The demo mission with some of its text changed."""
    text = (PROFILES / "coast_watch.toml").read_text(encoding="utf-8")
    for old, new in changes:
        assert old in text
        text = text.replace(old, new)
    path = folder / "m.toml"
    path.write_text(text, encoding="utf-8")
    return path


def flown(mission: Path, engine: Engine) -> Flight:
    return fly(load_mission(mission), TWIN, engine)


@pytest.mark.parametrize("name", ["bypass_5", "bypass_1", "straight_jet"])
def test_the_demo_burns_the_same_from_the_table(tmp_path: Path, name: str) -> None:
    """Within 0.02 % of block fuel. The straight jet cannot load what it needs, from either."""
    engine = load_engine(PROFILES / f"{name}.toml")
    found = whole(engine, 10.0)
    assert found.is_answered.all()
    table = read_back(tmp_path, found, "ISA+10")
    cycle, read = (flown(PROFILES / "coast_watch.toml", e) for e in (engine, table))
    assert read.flown == cycle.flown == (name != "straight_jet")
    assert read.totals.block_fuel == pytest.approx(cycle.totals.block_fuel, rel=2e-4)
    assert read.totals.block_time == pytest.approx(cycle.totals.block_time, rel=2e-4)
    part = 5e-4 * cycle.totals.block_fuel  # what a climb covers more, the cruise covers less
    for ours, theirs in zip(read.segments, cycle.segments, strict=True):
        assert ours.fuel == pytest.approx(theirs.fuel, abs=part), ours.name


@pytest.mark.parametrize("rating", ["take_off", "climb", "cruise", "flight_idle"])
def test_between_its_points_the_table_is_near_the_engine(tmp_path: Path, rating: str) -> None:
    """A kink, where another limit takes over, rounds thrust off by less than a per cent."""
    engine = load_engine(PROFILES / "bypass_5.toml")
    found = whole(engine, 0.0)
    table = read_back(tmp_path, found, "ISA")
    place = np.random.default_rng(5).uniform([0.0, 0.0], [HIGHEST_ALTITUDE, HIGHEST_MACH], (300, 2))
    flight = flight_condition(*place.T)
    near, exact = table.at_rating(flight, rating), engine.at_rating(flight, rating)
    miss = np.abs(near.net_thrust - exact.net_thrust) / np.max(np.abs(exact.net_thrust))
    assert np.median(miss) < 2e-4
    assert np.max(miss) < 1e-2


@pytest.fixture(scope="module")
def low_table(tmp_path_factory: pytest.TempPathFactory) -> Engine:
    """A table that ends below the cruise of the demo."""
    engine = load_engine(PROFILES / "straight_jet.toml")
    return read_back(tmp_path_factory.mktemp("low"), whole(engine, 10.0, 10000.0), "ISA+10")


def test_another_day_is_refused_at_the_start_with_both_days(
    tmp_path: Path, low_table: Engine
) -> None:
    mission = demo(tmp_path, ('day = "ISA+10"', 'day = "ISA-5"'))
    with pytest.raises(InputRefused) as caught:
        flown(mission, low_table)
    assert (caught.value.where, caught.value.key) == (str(mission), "day")
    assert caught.value.what.startswith('= "ISA-5", and the table of read back is of ISA+10; fly')


def test_leaving_the_table_ends_the_flight_there_by_name(low_table: Engine) -> None:
    failure = flown(PROFILES / "coast_watch.toml", low_table).failure
    assert failure is not None
    assert failure.segment == "climb out"
    assert failure.what == "pressure altitude in the engine's table"
    assert failure.bound == 10000.0 < failure.value
    assert "pressure altitude 0 to 10000 m and Mach 0 to 0.9" in failure.advice
    assert "m is above 10,000 m, by " in failure_headline(failure, METRIC)
    assert "ft is above 32,808 ft, by " in failure_headline(failure, TRADE)


def test_so_does_a_mach_number_outside_it(tmp_path: Path) -> None:
    engine = load_engine(PROFILES / "straight_jet.toml")
    heights, machs = grid(0.0, HIGHEST_ALTITUDE, 1000.0), grid(0.0, 0.7, 0.1)
    found = envelope(engine, heights, machs, 10.0, levels=default_levels(engine))
    failure = flown(PROFILES / "coast_watch.toml", read_back(tmp_path, found, "ISA+10")).failure
    assert failure is not None
    assert failure.what == "Mach number in the engine's table"
    assert failure.bound == 0.7 < failure.value <= 0.74


def test_the_table_among_the_profiles_is_that_of_its_engine() -> None:
    # Written on a coarser grid than the default, so as to stay small; 0.1 % is what is asked for.
    demo_mission = PROFILES / "coast_watch.toml"
    cycle, table = (
        flown(demo_mission, load_engine(PROFILES / f"{name}.toml")).totals.block_fuel
        for name in ("bypass_5", "tabulated_fan")
    )
    assert table == pytest.approx(cycle, rel=1e-3)
