"""Which limit holds the engine, as the log has it and as the engine itself says."""

from __future__ import annotations

import json

import numpy as np
import pytest
from mission_files import PROFILES

from engine.atmosphere import flight_condition
from engine.options.loading import load_engine
from mission.aircraft import load_aircraft
from mission.flight import fly
from mission.mission_file import load_mission
from mission.outputs.held_by import holders
from mission.outputs.records import flight_record
from mission.results import Flight

ENGINE = load_engine(PROFILES / "bypass_5.toml")


@pytest.fixture(scope="module")
def watch() -> Flight:
    mission = load_mission(PROFILES / "coast_watch.toml")
    return fly(mission, load_aircraft(PROFILES / "coast_watch_twin.toml"), ENGINE)


def test_the_log_names_what_the_engine_names(watch: Flight) -> None:
    for name in ("climb out", "descent to the watch", "taxi out"):
        log = next(row for row in watch.segments if row.name == name)
        # A hair inside: at a joint each side has a limit of its own.
        inside = slice(1, -1) if len(log.steps.mass) > 2 else slice(None)
        flight = flight_condition(
            log.steps.pressure_altitude[inside], log.steps.mach[inside], watch.day
        )
        state = ENGINE.at_rating(flight, log.rating)
        same = state.binding_limit_names == log.steps.held_by[inside]
        at_joint = np.isclose(np.sort(state.limit_shares, axis=0)[-2], 1.0, atol=1e-3)
        assert np.all(same | at_joint)
        assert np.count_nonzero(same) > 0.7 * same.size


def test_thrust_that_follows_from_drag_is_held_by_nothing(watch: Flight) -> None:
    log = next(row for row in watch.segments if row.kind == "cruise")
    assert set(log.steps.held_by) == {""}
    assert log.name not in dict(holders(watch.segments))


def test_where_another_limit_takes_over_is_told(watch: Flight) -> None:
    told = dict(holders(watch.segments))
    climb = next(row for row in watch.segments if row.name == "climb out")
    names = list(dict.fromkeys(climb.steps.held_by.tolist()))
    assert len(names) == 2
    first, second = (name.replace("_", " ") for name in names)
    assert told["climb out"].startswith(f"{first} to FL")
    assert told["climb out"].endswith(f"then {second}")


def test_the_record_names_them_in_order(watch: Flight) -> None:
    record = json.loads(json.dumps(flight_record(watch)))
    held = {segment["name"]: segment["held_by"] for segment in record["segments"]}
    assert held["climb out"] == ["turbine_entry_temperature", "corrected_low_pressure_speed"]
    assert held["cruise out"] == []
