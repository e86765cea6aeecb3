"""The path along the speed of the greatest steady rate of climb at each pressure altitude.

A steady climb neither gains nor loses speed: specific excess power is its geometric rate of climb,
at lift equal to weight. The path follows that speed from one altitude to another and speeds up
level where the best speed jumps; where it would have to give energy away, it says so.
"""

from __future__ import annotations

import numpy as np

from engine.errors import InputRefused
from mission.paths.altitude_legs import along, cut_where_short, from_start, to_end
from mission.paths.climber import Climber
from mission.paths.corridor import Corridor, corridor_of
from mission.paths.ends import closed_stop, dead_stop, open_until
from mission.paths.lines import altitude_lines
from mission.paths.path import EnergyPath, State, Stop
from mission.paths.runs import smooth_runs
from mission.paths.search import Best, Search, excess_power
from mission.paths.trace import trace

_SHORTEST = 1e-3  # m of altitude: no shorter way is looked at
_BEYOND = 1e-6  # m of altitude, from the last line with a speed to one without


def best_rate_path(climber: Climber, start: State, end: State) -> EnergyPath:
    """The path of best rate of climb from the altitude of one state to another's.

    From a start slower than the best speed there it speeds up at that altitude; from a faster one
    it zooms to where the path has that energy. At the end likewise. ``falls`` of the path are
    where its energy height does not rise.

    Raises
    ------
    InputRefused
        where the end is not above the start in altitude and in energy, or a state is below the
        ground or above where the engine or the atmosphere is known.
    """
    corridor = corridor_of(climber)
    first, last = (
        corridor.energy_of(state.pressure_altitude, state.mach) for state in (start, end)
    )
    low, high = start.pressure_altitude, end.pressure_altitude
    if high <= low or last <= first:
        raise InputRefused(
            f"the climb from {low:g} m at Mach {start.mach:g} to {high:g} m at Mach {end.mach:g} "
            "gains no height, or no energy; end it higher or faster"
        )
    edge = open_until(corridor.altitude_edges, low, high)
    if edge is None or edge - low < _SHORTEST:
        return EnergyPath((), _closed(corridor, low if edge is None else edge), 0.0, 0)
    search = Search(climber, altitude_lines(corridor), excess_power)
    found = trace(search, low, edge)
    stop = _stop(corridor, found.best) if found.best.is_dead else None
    if stop is None and edge < high:
        stop = _closed(corridor, edge)
    legs = along(corridor, smooth_runs(search.lines, found))
    if legs:
        legs = from_start(corridor, legs, start)
        legs = legs if stop else to_end(corridor, legs, end)
    legs, short = cut_where_short(corridor, legs)
    return EnergyPath(tuple(legs), short or stop, found.cost, found.best.unanswered)


def _closed(corridor: Corridor, altitude: float) -> Stop:
    """The stop where no speed is allowed from a pressure altitude [m] on."""
    edges = corridor.altitude_edges(np.array([altitude + _BEYOND]))
    energy = float(corridor.energy_at(altitude, edges.fast[0]))
    return closed_stop(corridor, edges, energy, altitude)


def _stop(corridor: Corridor, best: Best) -> Stop:
    """The stop at the last of some points."""
    altitude, airspeed = best.last
    return dead_stop(corridor, best, float(corridor.energy_at(altitude, airspeed)), altitude)
