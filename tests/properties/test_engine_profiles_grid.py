"""Every built-in engine over its envelope: 20 altitudes by 20 Mach numbers, warm and cold days."""

from __future__ import annotations

import numpy as np
import pytest

from engine.atmosphere import flight_condition
from engine.cycle_engine import CycleEngine
from engine.interface import Outcome
from engine.options.loading import load_engine
from mission.library import built_in

COMPUTED = {
    profile.name: engine
    for profile in built_in()
    if profile.kind == "engine" and isinstance(engine := load_engine(profile.path), CycleEngine)
}


@pytest.mark.parametrize("day", [-20.0, 20.0])
@pytest.mark.parametrize("name", COMPUTED)
def test_every_point_from_idle_to_the_highest_rating_is_met(name: str, day: float) -> None:
    engine = COMPUTED[name]
    highest, fastest = (9000.0, 0.62) if "turboprop" in name else (13000.0, 0.9)
    altitude, mach = np.meshgrid(np.linspace(0.0, highest, 20), np.linspace(0.0, fastest, 20))
    flight = flight_condition(altitude.ravel(), mach.ravel(), day)
    top = engine.at_rating(flight, engine.ratings[-1])
    idle = engine.at_rating(flight, "flight_idle")
    between = idle.net_thrust + 0.3 * (top.net_thrust - idle.net_thrust)
    states = [
        top,
        idle,
        engine.at_rating(flight, "ground_idle"),
        engine.at_thrust(flight, between, rating=engine.ratings[-1]),
        engine.windmilling(flight.at(np.flatnonzero(flight.mach > 0.1))),
    ]
    for state in states:
        assert np.all(state.outcome == Outcome.MET)
        assert state.energy is not None
        assert np.all(np.abs(state.energy.residual) < 1e-8)
