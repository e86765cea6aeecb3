"""How far a path goes: to its end, to where no speed is allowed any more, or none suffices."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from numpy.typing import NDArray

from mission.paths.corridor import Corridor, Edges
from mission.paths.path import State, Stop
from mission.paths.search import LOST, Best

Array = NDArray[np.float64]
_LOOKS, _CLOSER = 4001, 3


def open_until(edges: Callable[[Array], Edges], first: float, last: float) -> float | None:
    """The last line that is open from the first on without a gap; None where the first is not."""
    low, high = first, last
    for _ in range(_CLOSER):
        row = np.linspace(low, high, _LOOKS)
        closed = np.flatnonzero(~edges(row).is_open)
        if closed.size == 0:
            return high
        if closed[0] == 0:
            return None
        low, high = float(row[closed[0] - 1]), float(row[closed[0]])
    return low


def closed_stop(corridor: Corridor, edges: Edges, energy: float, altitude: float) -> Stop:
    """Why a line, its edges (1,), has no speed at an energy height [m] or pressure altitude [m].

    Greatest true airspeed allowed, and least one needed.
    """
    most, least = float(edges.fast[0]), float(edges.slow[0])
    return Stop(
        str(edges.slow_by[0]), energy, state_of(corridor, altitude, most), most, least, "m/s"
    )


def dead_stop(corridor: Corridor, best: Best, energy: float, altitude: float) -> Stop:
    """Why a path ends at the last of some points."""
    state = state_of(corridor, altitude, best.last[1])
    excess = None if best.state[-1] == LOST else float(best.excess_power[-1])
    return short_stop(corridor, excess, energy, state)


def short_stop(corridor: Corridor, excess: float | None, energy: float, state: State) -> Stop:
    """What specific excess power [m/s] falls short of; None where the engine has no answer."""
    if excess is None:
        return Stop("speeds at which the engine has an answer", energy, state, 0.0, 1.0, "")
    least = corridor.climber.least_rate
    return Stop("specific excess power", energy, state, excess, least, "m/s")


def state_of(corridor: Corridor, altitude: float, airspeed: float) -> State:
    """The state at a pressure altitude [m] and true airspeed [m/s]."""
    return State(altitude, float(corridor.flight(np.array(altitude), np.array(airspeed)).mach))
