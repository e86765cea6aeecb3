"""Smooth runs of best points, each beginning where the one before it ends."""

from __future__ import annotations

from dataclasses import dataclass, replace
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray

from mission.paths.lines import Lines
from mission.paths.path import FAST, FREE, LEVEL
from mission.paths.search import Best
from mission.paths.trace import Trace, breaks, picked, runs_between

Array = NDArray[np.float64]
_SHORTEST = 2e-3  # share of the way: a shorter run is left out, its neighbours meeting within it
_APART = 1e-3  # share of the way: points of interpolation are no closer to the ends of a run
_SAME = 3.0  # m/s: runs that meet no further apart are made to meet


@dataclass(frozen=True)
class Run:
    """A smooth run over the lines' variable, n points.

    ``speed`` is true airspeed [m/s]; ``held`` and ``held_by`` are those of a path's piece;
    ``level`` is the pressure altitude [m] of one that keeps to one.
    """

    row: Array
    speed: Array
    held: str
    held_by: str
    level: float


def smooth_runs(lines: Lines, found: Trace) -> list[Run]:
    """The runs of a trace as far as it is alive."""
    alive = found.best.alive
    best = picked(found.best, slice(0, alive))
    if alive < 2:
        return []
    row, whole = best.row, best.row[-1] - best.row[0]
    parts = runs_between(breaks(best))
    bounds = [row[0], *(0.5 * (row[p.stop - 1] + row[p.stop]) for p in parts[:-1]), row[-1]]
    is_long = np.diff(bounds) >= _SHORTEST * whole
    kept = _joined(best, [part for part, long in zip(parts, is_long, strict=True) if long])
    meetings = [0.5 * (row[a.stop - 1] + row[b.start]) for a, b in pairwise(kept)]
    ends = pairwise([row[0], *meetings, row[-1]])
    is_base = found.is_base[:alive]
    return _met(
        [
            _run(lines, best, is_base, part, np.array(end), _APART * whole)
            for part, end in zip(kept, ends, strict=True)
        ]
    )


def _joined(best: Best, parts: list[slice]) -> list[slice]:
    """Parts alike, between which only short ones were left out, made one."""
    found: list[slice] = []
    for part in parts:
        last = found[-1] if found else None
        if last is not None and _is_alike(best, last.stop - 1, part.start):
            found[-1] = slice(last.start, part.stop)
        else:
            found.append(part)
    return found


def _is_alike(best: Best, one: int, other: int) -> bool:
    """Whether two points may be of one smooth run."""
    is_same = best.state[one] == best.state[other] and best.held_by[one] == best.held_by[other]
    is_near = abs(best.speed[one] - best.speed[other]) < _SAME
    return bool(is_same and is_near and np.all(best.regime[one] == best.regime[other]))


def _run(
    lines: Lines, best: Best, is_base: NDArray[np.bool_], part: slice, ends: Array, apart: float
) -> Run:
    """One run between two rows, through its base points that are not too close to its ends."""
    row, speed = best.row[part], best.speed[part]
    held = str(best.state[part.start])
    is_inner = is_base[part] & (row > ends[0] + apart) & (row < ends[1] - apart)
    edges = lines.edges(ends)
    if held == FREE:
        first, last = np.clip(speed[[0, -1]], edges.slow, edges.fast)
    elif held == LEVEL:
        first, last = lines.kink(ends, speed[[0, -1]])[1]
    else:
        first, last = edges.fast if held == FAST else edges.slow
    return Run(
        row=np.array([ends[0], *row[is_inner], ends[1]]),
        speed=np.array([first, *speed[is_inner], last]),
        held=held,
        held_by=str(best.held_by[part.start]),
        level=float(best.level[part.start]),
    )


def _met(runs: list[Run]) -> list[Run]:
    """Free runs moved at their ends to where their neighbours are, if those are near."""
    found = runs[:1]
    for there in runs[1:]:
        here = found[-1]
        before, after = float(here.speed[-1]), float(there.speed[0])
        is_free, is_next_free = here.held == FREE, there.held == FREE
        if abs(before - after) < _SAME and (is_free or is_next_free):
            middle = 0.5 * (before + after)
            meeting = middle if is_free and is_next_free else after if is_free else before
            found[-1] = replace(here, speed=np.append(here.speed[:-1], meeting))
            found.append(replace(there, speed=np.append(meeting, there.speed[1:])))
        else:
            found.append(there)
    return found
