"""The legs of a path that is given by altitude: its rising stretches, level ones, and falls."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from mission.paths.climber import rates
from mission.paths.corridor import Corridor
from mission.paths.ends import short_stop, state_of
from mission.paths.path import LEVEL, Exchange, Fall, Piece, State, Stop, piece_of
from mission.paths.runs import Run
from mission.paths.trace import runs_between

Array = NDArray[np.float64]
Legs = list[Piece | Exchange | Fall]
SPEEDING_UP = "level acceleration"
_POINTS = 21  # along a level acceleration
_SAME = 1e-9  # m/s


def along(corridor: Corridor, runs: list[Run]) -> Legs:
    """Legs through runs over pressure altitude, and between them where the speed jumps."""
    legs: Legs = []
    for number, run in enumerate(runs):
        if number:
            before = float(runs[number - 1].speed[-1])
            legs += _changed(corridor, float(run.row[0]), before, float(run.speed[0]))
        legs += _stretches(corridor, run)
    return legs


def _stretches(corridor: Corridor, run: Run) -> Legs:
    """A run cut where energy height begins or ceases to rise."""
    energy = corridor.energy_at(run.row, run.speed)
    is_rising = np.diff(energy) > 0.0
    legs: Legs = []
    for cells in runs_between(is_rising[1:] != is_rising[:-1]):
        part = slice(cells.start, cells.stop + 1)
        if is_rising[cells.start]:
            legs.append(piece_of(corridor, energy[part], run.speed[part], run.held, run.held_by))
        else:
            legs.append(_fall(corridor, run.row[part], run.speed[part]))
    return legs


def _changed(corridor: Corridor, altitude: float, before: float, after: float) -> Legs:
    """A change of true airspeed [m/s] at a pressure altitude [m]."""
    if abs(after - before) < _SAME:
        return []
    speed = np.array([before, after])
    if after < before:
        return [_fall(corridor, np.full(2, altitude), speed)]
    first, last = corridor.energy_at(altitude, speed)
    energy = np.linspace(float(first), float(last), _POINTS)
    return [piece_of(corridor, energy, energy, LEVEL, SPEEDING_UP, altitude)]


def _fall(corridor: Corridor, altitude: Array, speed: Array) -> Fall:
    ends = altitude[[0, -1]], speed[[0, -1]]
    first, last = corridor.energy_at(*ends)
    here, there = (state_of(corridor, float(h), float(v)) for h, v in zip(*ends, strict=True))
    return Fall((float(first), float(last)), here, there)


def from_start(corridor: Corridor, legs: Legs, start: State) -> Legs:
    """Legs from a start state at the altitude of the first: slower, it speeds up to it; faster, it
    zooms to where the legs have its energy.
    """
    altitude = start.pressure_altitude
    energy, first = corridor.energy_of(altitude, start.mach), _energies(legs[0])[0]
    if energy <= first:
        speeds = corridor.airspeed_at(np.array([energy, first]), altitude)
        return [*_changed(corridor, altitude, float(speeds[0]), float(speeds[1])), *legs]
    for number, leg in enumerate(legs):
        if isinstance(leg, Piece) and _energies(leg)[1] > energy:
            rest = leg.cut(max(energy, _energies(leg)[0]), _energies(leg)[1])
            return [Exchange(energy, start, rest.start), rest, *legs[number + 1 :]]
    top = legs[-1].end.pressure_altitude
    there = state_of(corridor, top, float(corridor.airspeed_at(energy, top)))
    return [Exchange(energy, start, there)]


def to_end(corridor: Corridor, legs: Legs, end: State) -> Legs:
    """Legs to an end state at the altitude of the last: faster, they speed up to it; slower, they
    zoom to it from where they have its energy.
    """
    altitude = end.pressure_altitude
    energy, last = corridor.energy_of(altitude, end.mach), _energies(legs[-1])[1]
    if energy >= last:
        speeds = corridor.airspeed_at(np.array([last, energy]), altitude)
        return [*legs, *_changed(corridor, altitude, float(speeds[0]), float(speeds[1]))]
    for number, leg in reversed(list(enumerate(legs))):
        if isinstance(leg, Piece) and _energies(leg)[0] < energy:
            rest = leg.cut(_energies(leg)[0], min(energy, _energies(leg)[1]))
            return [*legs[:number], rest, Exchange(energy, rest.end, end)]
    return legs


def _energies(leg: Piece | Exchange | Fall) -> tuple[float, float]:
    """Energy height [m] at both ends of a leg."""
    if isinstance(leg, Piece):
        return float(leg.energy_height[0]), float(leg.energy_height[-1])
    return leg.energy_height if isinstance(leg, Fall) else (leg.energy_height, leg.energy_height)


def cut_where_short(corridor: Corridor, legs: Legs) -> tuple[Legs, Stop | None]:
    """Legs up to where a level acceleration has too little excess power, and the stop there.

    Along the other pieces the search has seen to that.
    """
    least = corridor.climber.least_rate
    for number, leg in enumerate(legs):
        if not isinstance(leg, Piece) or leg.held != LEVEL:
            continue
        flight = corridor.flight(leg.pressure_altitude, leg.true_airspeed)
        found = rates(corridor.climber, flight)
        short = np.flatnonzero(~found.is_answered | (found.excess_power <= least))
        if short.size:
            k, energy = int(short[0]), leg.energy_height
            state = State(float(leg.pressure_altitude[k]), float(leg.mach[k]))
            excess = float(found.excess_power[k]) if found.is_answered[k] else None
            stop = short_stop(corridor, excess, float(energy[k]), state)
            return [*legs[:number], *([leg.cut(energy[0], energy[k - 1])] if k > 1 else [])], stop
    return legs, None
