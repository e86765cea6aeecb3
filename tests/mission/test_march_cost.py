"""What a flight costs, counted in calls of the engine: that is where its time goes."""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from mission_files import (
    AIRCRAFT,
    BYPASS_5,
    CONTINGENCY,
    OUT_AND_DOWN,
    Content,
    final_reserve,
    load_all,
    mission_content,
)

from engine.interface import Engine, EngineState
from mission.flight import fly


@dataclass
class Counting:
    """An engine that counts how often, and for how many states, it is asked."""

    engine: Engine
    calls: int = 0
    states: int = 0

    def at(self, flight: Any, **asked: Any) -> EngineState:
        self.calls += 1
        self.states += int(np.size(flight.mach))
        return self.engine.at(flight, **asked)

    def __getattr__(self, name: str) -> Any:
        return getattr(self.engine, name)


def cost(folder: Path, segments: list[Content], **changes: Any) -> Counting:
    mission, aircraft, engine = load_all(
        folder, AIRCRAFT, BYPASS_5, mission_content(segments, **changes)
    )
    counting = Counting(engine)
    flight = fly(mission, aircraft, counting)
    assert flight.failure is None
    return counting


def test_a_mission_with_reserves_takes_a_few_dozen_calls(tmp_path: Path) -> None:
    """Joints, two marches of some sweeps, the thrust at the ratings, the cost of the reserves."""
    watch = {"kind": "loiter", "time": "30 min"}
    counting = cost(
        tmp_path,
        [*OUT_AND_DOWN[:2], watch, OUT_AND_DOWN[2]],
        distance="800 nmi",
        reserves={"item": [CONTINGENCY, final_reserve("30 min")]},
    )
    assert counting.calls < 50


@pytest.mark.parametrize("amount", [{"fuel": "50 kg"}, {"mass_fraction": 0.003}])
def test_an_allowance_costs_no_more_sweeps(tmp_path: Path, amount: Content) -> None:
    """Nothing is flown and nothing has to settle: at most a sweep or two for the mass."""
    plain = cost(tmp_path, OUT_AND_DOWN, distance="800 nmi")
    booked = [{"kind": "allowance", **amount}, *OUT_AND_DOWN]
    assert cost(tmp_path, booked, distance="800 nmi").calls <= plain.calls + 4


def test_twice_the_steps_take_no_more_sweeps(tmp_path: Path) -> None:
    mission, aircraft, engine = load_all(
        tmp_path, AIRCRAFT, BYPASS_5, mission_content(OUT_AND_DOWN, distance="800 nmi")
    )
    calls = []
    for refinement in (1, 2):
        counting = Counting(engine)
        fly(mission, aircraft, counting, refinement=refinement)
        calls.append(counting.calls)
    assert calls[1] <= calls[0] + 4
