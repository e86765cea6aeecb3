"""The place that is told is the last step that the first limit holds."""

from __future__ import annotations

import re

import numpy as np
import pytest
from mission_files import PROFILES

from engine.options.loading import load_engine
from engine.quantities import FOOT
from mission.aircraft import load_aircraft
from mission.flight import fly
from mission.mission_file import load_mission
from mission.outputs.held_by import holders


def test_the_level_is_that_of_the_last_step_it_holds() -> None:
    watch = fly(
        load_mission(PROFILES / "coast_watch.toml"),
        load_aircraft(PROFILES / "coast_watch_twin.toml"),
        load_engine(PROFILES / "bypass_5.toml"),
    )
    climb = next(row for row in watch.segments if row.name == "climb out")
    held = climb.steps.held_by
    last = int(np.flatnonzero(held == held[0])[-1])
    assert 0 < last < held.size - 1
    assert np.all(held[: last + 1] == held[0])

    found = re.search(r" to FL(\d+)", dict(holders(watch.segments))["climb out"])

    assert found is not None
    level = float(climb.steps.pressure_altitude[last]) / (100.0 * FOOT)
    assert float(found[1]) == pytest.approx(level, abs=0.51)
