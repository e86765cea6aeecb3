"""A cruise with a drag factor chooses its levels and steps as an aircraft that has it."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest
from mission_files import (
    BYPASS_5,
    Content,
    aircraft_content,
    fly_files,
    mission_content,
    segment,
)

from mission.results import SegmentLog

BEST: Content = {
    "kind": "cruise",
    "pressure_altitude": "best",
    "mach": 0.74,
    "distance": "1500 nmi",
}
STEPS: Content = {
    "kind": "cruise",
    "pressure_altitude": "FL310",
    "mach": 0.74,
    "until_fuel": "1 t",
    "step_height": "2000 ft",
}


def flown(folder: Path, cruise: Content, of_aircraft: float) -> SegmentLog:
    """A cruise with 7 t of fuel, of an aircraft with a drag factor."""
    mission = mission_content([cruise], fuel={"as_needed": None, "load": "7 t"})
    plane = aircraft_content(drag_factor=of_aircraft)
    flight = fly_files(folder, mission=mission, aircraft=plane, engine=BYPASS_5)
    assert flight.failure is None
    return segment(flight, "cruise")


@pytest.mark.parametrize("cruise", [BEST, STEPS], ids=["best level", "steps"])
def test_levels_are_those_of_an_aircraft_with_that_drag(tmp_path: Path, cruise: Content) -> None:
    own = flown(tmp_path, cruise | {"drag_factor": 1.2}, 1.0)
    whole = flown(tmp_path, cruise, 1.2)
    clean = flown(tmp_path, cruise, 1.0)
    level, wanted, without = (log.steps.pressure_altitude for log in (own, whole, clean))
    assert level == pytest.approx(wanted, abs=0.01)
    assert own.fuel == pytest.approx(whole.fuel, rel=1e-9)
    assert np.max(level) < np.max(without) - 100.0
