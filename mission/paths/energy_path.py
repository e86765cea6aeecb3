"""The path on which energy height is gained in least time, or on least fuel.

At each energy height the altitude and Mach number of the greatest specific excess power, or of the
greatest excess power per fuel flow (Rutowski 1954; see the package). Energy height rises all along
it; where another maximum becomes the greatest, altitude and speed are exchanged in no time.
"""

from __future__ import annotations

import numpy as np

from engine.errors import InputRefused
from mission.paths.climber import Climber
from mission.paths.corridor import Corridor, corridor_of
from mission.paths.ends import closed_stop, dead_stop, open_until
from mission.paths.lines import energy_lines
from mission.paths.path import EnergyPath, Exchange, Piece, State, Stop, piece_of
from mission.paths.runs import Run, smooth_runs
from mission.paths.search import Best, Goal, Search, excess_power, excess_power_per_fuel
from mission.paths.trace import trace

_BEYOND = 1e-6  # m of energy height, from the last line with a speed to one without
_SHORTEST = 1e-3  # m of energy height: no shorter way is looked at
_AWAY = 1e-3  # m of altitude: nothing is exchanged between states no further apart


def least_time_path(climber: Climber, start: State, end: State) -> EnergyPath:
    """The path of greatest specific excess power from the energy of one state to another's.

    The path itself keeps to the climber's bounds; the start and the end need not. It ends early,
    and says why, where no speed within the bounds leaves more than the climber's least rate.

    Raises
    ------
    InputRefused
        where the end has no more energy than the start, or a state is below the ground or above
        where the engine or the atmosphere is known.
    """
    return _path(climber, start, end, excess_power)


def least_fuel_path(climber: Climber, start: State, end: State) -> EnergyPath:
    """The path of greatest excess power per fuel flow; otherwise as :func:`least_time_path`."""
    return _path(climber, start, end, excess_power_per_fuel)


def _path(climber: Climber, start: State, end: State, goal: Goal) -> EnergyPath:
    corridor = corridor_of(climber)
    first, last = (
        corridor.energy_of(state.pressure_altitude, state.mach) for state in (start, end)
    )
    if last <= first:
        raise InputRefused(
            f"energy height = {last:.0f} m at the end of the climb is not above {first:.0f} m, "
            "where it begins; end it higher or faster"
        )
    edge = open_until(corridor.energy_edges, first, last)
    if edge is None or edge - first < _SHORTEST:
        return EnergyPath((), _closed(corridor, first if edge is None else edge), 0.0, 0)
    search = Search(climber, energy_lines(corridor), goal)
    found = trace(search, first, edge)
    stop = _stop(corridor, found.best) if found.best.is_dead else None
    if stop is None and edge < last:
        stop = _closed(corridor, edge)
    pieces = [_piece(corridor, run) for run in smooth_runs(search.lines, found)]
    legs = _with_exchanges(pieces, start, None if stop else end)
    return EnergyPath(legs, stop, found.cost, found.best.unanswered)


def _closed(corridor: Corridor, energy: float) -> Stop:
    """The stop where no speed is allowed from an energy height [m] on."""
    there = energy + _BEYOND
    altitude = float(corridor.lowest(there))
    return closed_stop(corridor, corridor.energy_edges(np.array([there])), energy, altitude)


def _stop(corridor: Corridor, best: Best) -> Stop:
    """The stop at the last of some points."""
    energy, airspeed = best.last
    return dead_stop(corridor, best, energy, float(corridor.altitude_at(energy, airspeed)))


def _piece(corridor: Corridor, run: Run) -> Piece:
    return piece_of(corridor, run.row, run.speed, run.held, run.held_by, run.level)


def _with_exchanges(
    pieces: list[Piece], start: State, end: State | None
) -> tuple[Piece | Exchange, ...]:
    """Pieces with what is exchanged before the first, between them, and after the last."""
    legs: list[Piece | Exchange] = []
    here = start
    for piece in pieces:
        legs += [*_exchange(float(piece.energy_height[0]), here, piece.start), piece]
        here = piece.end
    if end is not None and pieces:
        legs += _exchange(float(pieces[-1].energy_height[-1]), here, end)
    return tuple(legs)


def _exchange(energy: float, here: State, there: State) -> list[Exchange]:
    if abs(here.pressure_altitude - there.pressure_altitude) < _AWAY:
        return []
    return [Exchange(energy, here, there)]
