"""The best points of a family of lines joined into runs, as dense as interpolation needs.

A few lines are searched first. Between two of them more are searched where a run of best points
breaks (it meets a bound, the air or the engine has a kink, or another maximum becomes the greatest)
until the break is known closely; and where monotone cubics through the points found would miss
the greatest value of the lines between by too much.
"""

from __future__ import annotations

from dataclasses import dataclass, fields, replace
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray

from mission.paths.path import FREE, pchip
from mission.paths.search import Best, Search, best_points, value_at

Array = NDArray[np.float64]
Mask = NDArray[np.bool_]
_CELLS = 24
_NARROW = 2.5e-4  # share of the way: no break need be known more closely
_DEPTH, _DEPTH_OF_SMOOTHNESS = 7, 2  # times that a cell is cut in four
_QUARTERS = np.array([0.25, 0.5, 0.75])
_MISS = 3e-5  # share of a line's greatest value that interpolation between lines may miss
_VALLEY = 1e-4  # share of it: a lower value between two maxima parts them
_NOTHING = -1e30  # in place of the minus infinity where the engine has no state


@dataclass(frozen=True)
class Trace:
    """Best points of N lines in order.

    Attributes
    ----------
    best : the points; the last one may be dead (SHORT or LOST), none before it is
    is_base : (N,) whether a point is one of those that interpolation is to be through
    cost : what interpolating costs, as share of the integral of 1 / value over the lines; measured
        between lines four times as far apart
    """

    best: Best
    is_base: Mask
    cost: float


def trace(search: Search, first: float, last: float) -> Trace:
    """Best points of all lines from the first to the last, or to the first dead one."""
    best = _to_the_first_dead(best_points(search, np.linspace(first, last, _CELLS + 1)))
    base, rough, loss = best.row, best.row[[0, -1], None], 0.0
    for depth in range(1, _DEPTH + 1):
        is_break, width = breaks(best), np.diff(best.row)
        is_rough = _is_within(best.row[:-1], *rough)
        cut = np.flatnonzero((is_break | is_rough) & (width > _NARROW * (last - first)))
        if cut.size == 0:
            break
        rows = best.row[cut, None] + width[cut, None] * _QUARTERS
        near = np.repeat(best.sampled_unknowns[cut], _QUARTERS.size, axis=0)
        new = best_points(search, rows.ravel(), near)
        missed = _missed(search, best, is_break, new).reshape(rows.shape)
        goes_on = (missed.max(axis=1) > _MISS) & (depth < _DEPTH_OF_SMOOTHNESS)
        loss += float(np.sum((missed.mean(axis=1) * width[cut] / best.value[cut])[~goes_on]))
        rough = np.stack([best.row[cut], best.row[cut + 1]])[:, goes_on]
        best = _to_the_first_dead(_merged(best, new))
        base = best.row if depth <= _DEPTH_OF_SMOOTHNESS else base
    row, value = best.row[: best.alive], best.value[: best.alive]
    whole = np.sum(np.diff(row) / value[1:])
    cost = loss / whole if whole > 0.0 else 0.0
    return Trace(best, np.isin(best.row, base), float(cost))


def runs_between(is_break: Mask) -> list[slice]:
    """The points between breaks."""
    ends = np.flatnonzero(np.append(is_break, True)) + 1
    return [slice(int(a), int(b)) for a, b in pairwise([0, *ends])]


def _to_the_first_dead(best: Best) -> Best:
    return picked(best, slice(0, best.alive + 1))


def _is_within(row: Array, low: Array, high: Array) -> Mask:
    """Whether rows lie in any of some cells, which do not overlap and rise."""
    cell = np.searchsorted(low, row, side="right") - 1
    return (cell >= 0) & (row < np.append(high, -np.inf)[cell])


def _merged(best: Best, new: Best) -> Best:
    """The points of both, in order."""
    arrays = {
        field.name: np.concatenate([getattr(best, field.name), getattr(new, field.name)])
        for field in fields(Best)
        if field.name != "unanswered"
    }
    both = replace(best, **arrays, unanswered=best.unanswered + new.unanswered)
    return picked(both, np.argsort(both.row, kind="stable"))


def picked(best: Best, index: slice | NDArray[np.intp]) -> Best:
    names = [field.name for field in fields(Best) if field.name != "unanswered"]
    return replace(best, **{name: getattr(best, name)[index] for name in names})


def _missed(search: Search, best: Best, is_break: Mask, new: Best) -> Array:
    """Shares of the new points' values that cubics through the old ones fall short of.

    Zero at new points that no smooth free run passes over.
    """
    guess = np.full(new.row.size, np.nan)
    for run in runs_between(is_break):
        row = best.row[run]
        if best.state[run.start] == FREE and row.size > 1:
            over = (new.row > row[0]) & (new.row < row[-1])
            guess[over] = pchip(row, best.speed[run], new.row[over])
    missed = np.zeros(new.row.size)
    known = np.flatnonzero(np.isfinite(guess) & np.isfinite(new.value))
    if known.size:
        edges = search.lines.edges(new.row[known])
        speed = np.clip(guess[known], edges.slow, edges.fast)
        reached = value_at(search, new.row[known], speed)
        missed[known] = np.maximum(1.0 - reached / new.value[known], 0.0)
    return missed


def breaks(best: Best) -> Mask:
    """(N - 1,) where a point and the next are not on one smooth run."""
    differs = (best.state[1:] != best.state[:-1]) | (best.held_by[1:] != best.held_by[:-1])
    differs = differs | np.any(best.regime[1:] != best.regime[:-1], axis=1)
    is_break: Mask = differs | _is_jump(best)
    return is_break


def _is_jump(best: Best) -> Mask:
    """Where a lower value parts the best speeds of neighbouring lines, on either of the two."""
    here, there = best.speed[:-1], best.speed[1:]
    parted = np.zeros(here.size, dtype=bool)
    for line in (slice(None, -1), slice(1, None)):
        speed, value = best.sampled_speed[line], best.sampled_value[line]
        step = (speed[:, -1] - speed[:, 0]) / (speed.shape[1] - 1)
        low, high = np.minimum(here, there), np.maximum(here, there)
        is_between = (speed > low[:, None]) & (speed < high[:, None])
        least = np.min(np.where(is_between, value, np.inf), axis=1)
        ends = np.minimum(_sampled_at(best, line, here), _sampled_at(best, line, there))
        parted |= (high - low > 2.0 * step) & (least < ends - _VALLEY * np.abs(ends))
    return parted


def _sampled_at(best: Best, line: slice, speed: Array) -> Array:
    """Values between the samples of each line, which stand at equal steps."""
    samples = best.sampled_speed[line]
    values = np.maximum(best.sampled_value[line], _NOTHING)
    width = samples[:, -1] - samples[:, 0]
    steps = samples.shape[1] - 1
    place = np.clip((speed - samples[:, 0]) / np.where(width > 0.0, width, 1.0), 0.0, 1.0) * steps
    cell = np.minimum(place.astype(int), steps - 1)
    low, high = (values[np.arange(cell.size), cell + i] for i in (0, 1))
    value: Array = low + (place - cell) * (high - low)
    return value
