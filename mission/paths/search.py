"""The best speed on each of many lines, found for all of them together.

Every line is sampled from end to end, so that no maximum but a very narrow one is missed. Whatever
maximum may be the greatest is then closed in on, each time to a sixth of the width, which finds
kinked ones too; a smooth one is put on the vertex of a parabola at last.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from mission.paths.climber import Climber, Rates, rates
from mission.paths.corridor import kink_name
from mission.paths.lines import Lines
from mission.paths.path import FAST, FREE, LEVEL, SLOW

Array = NDArray[np.float64]
Goal = Callable[[Climber, Rates], Array]
SHORT, LOST = "short", "lost"
ON_KINK = -9
_KINK = 4  # column of the tops: vertex, left, middle, right, kink of the air
_SAMPLES = 41
_NEAR = 0.1  # of the greatest sample: a maximum no further below it may in truth be greater
_ROUNDS = 3
_WAYS = np.arange(1, 6) / 6.0  # between a maximum's sample and the samples beside it
_ROUND_OFF = 1e-7  # share that a parabola's vertex may fall short of the best sample


def excess_power(climber: Climber, found: Rates) -> Array:
    """What least time and best rate make greatest [m/s]."""
    return np.where(found.is_answered, found.excess_power, -np.inf)


def excess_power_per_fuel(climber: Climber, found: Rates) -> Array:
    """What least fuel makes greatest: energy height gained per fuel [m/kg].

    Where excess power is not above the least rate, it is the difference [m/s] instead, never above
    zero, so that any climb is better than none.
    """
    spare = found.excess_power - climber.least_rate
    climbs = spare > 0.0
    per_fuel = found.excess_power / np.where(climbs, found.fuel_flow, 1.0)
    return np.where(found.is_answered, np.where(climbs, per_fuel, spare), -np.inf)


@dataclass(frozen=True)
class Best:
    """The best point of each of N lines.

    Attributes
    ----------
    row : the lines' variable
    speed : true airspeed [m/s]
    value : of the goal, the greatest of the line
    excess_power : [m/s]
    state : FREE; FAST or SLOW at an end of the line; LEVEL on a kink of the air; SHORT where
        excess power is not above the climber's least rate; LOST where no state was found
    held_by : the name of that end or kink
    level : pressure altitude of that kink [m]; NaN elsewhere
    regime : (N, k); whole numbers at whose change the rates have a kink, those of the engine and
        the layer of the atmosphere; ON_KINK where the best point stands on the kink
    sampled_speed, sampled_value : along each line, (N, samples)
    sampled_unknowns : the engine's there, (N, samples, n)
    unanswered : how many states were asked for that the engine does not have
    """

    row: Array
    speed: Array
    value: Array
    excess_power: Array
    state: NDArray[np.str_]
    held_by: NDArray[np.str_]
    level: Array
    regime: NDArray[np.int64]
    sampled_speed: Array
    sampled_value: Array
    sampled_unknowns: Array
    unanswered: int

    @property
    def alive(self) -> int:
        """How many lines there are before the first dead one."""
        dead = np.flatnonzero(np.isin(self.state, (SHORT, LOST)))
        return int(dead[0]) if dead.size else self.row.size

    @property
    def is_dead(self) -> bool:
        """Whether any of them is."""
        return self.alive < self.row.size

    @property
    def last(self) -> tuple[float, float]:
        """The last line and the true airspeed [m/s] on it."""
        return float(self.row[-1]), float(self.speed[-1])


@dataclass(frozen=True)
class Search:
    """Who climbs, along which lines, and what is to be greatest on each of them."""

    climber: Climber
    lines: Lines
    goal: Goal


@dataclass(frozen=True)
class _Seen:
    """What stands at points of lines; arrays of one shape, the engine's unknowns (n, ...)."""

    value: Array
    excess_power: Array
    regime: NDArray[np.int64]
    unknowns: Array
    unanswered: int


@dataclass(frozen=True)
class _Peaks:
    """K maxima: index of the line, speeds and values around (K, 3), unknowns (n, K, 1)."""

    line: NDArray[np.intp]
    speed: Array
    value: Array
    unknowns: Array


def best_points(search: Search, row: Array, near: Array | None = None) -> Best:
    """The greatest value of a goal on each of N lines, all open, and where it stands.

    ``near`` are the ``sampled_unknowns`` of lines near by, where the engine may start from.
    """
    edges = search.lines.edges(row)
    share = np.linspace(0.0, 1.0, _SAMPLES)
    speed = edges.slow[:, None] * (1.0 - share) + edges.fast[:, None] * share
    start = None if near is None else np.moveaxis(near, -1, 0)
    sampled = _look(search, row[:, None], speed, start)
    peaks = _peaks(speed, sampled)
    around, unanswered = peaks.speed, sampled.unanswered
    for _ in range(_ROUNDS):
        peaks, lost = _closed_in(search, row, peaks)
        unanswered += lost
    middle = peaks.speed[:, 1]
    level, kink = search.lines.kink(row[peaks.line], middle)
    is_near = (kink > around[:, 0]) & (kink < around[:, 2])
    tops = np.column_stack([_vertex(peaks), peaks.speed, np.where(is_near, kink, middle)])
    seen = _look(search, row[peaks.line, None], tops, peaks.unknowns)
    column = _chosen(seen.value, is_near)
    return Best(
        **_winners(search, row, peaks.line, column, tops, level, seen),
        sampled_speed=speed,
        sampled_value=sampled.value,
        sampled_unknowns=np.moveaxis(sampled.unknowns, 0, -1),
        unanswered=unanswered + seen.unanswered,
    )


def value_at(search: Search, row: Array, speed: Array) -> Array:
    """The goal at one point of each line, (N,)."""
    return _look(search, row, speed).value


def _look(search: Search, row: Array, speed: Array, near: Array | None = None) -> _Seen:
    """One engine call for points of lines at true airspeeds."""
    flight = search.lines.flight(np.broadcast_to(row, speed.shape), speed)
    if near is not None:
        near = np.broadcast_to(near, (len(near), *speed.shape))
    found = rates(search.climber, flight, near)
    return _Seen(
        value=search.goal(search.climber, found),
        excess_power=found.excess_power,
        regime=np.concatenate([found.regime, search.lines.layer(flight.pressure_altitude)[None]]),
        unknowns=found.unknowns,
        unanswered=int(np.count_nonzero(~found.is_answered)),
    )


def _peaks(speed: Array, sampled: _Seen) -> _Peaks:
    """Maxima among the samples of each line that may be its greatest."""
    value = sampled.value
    wall = np.full((len(value), 1), -np.inf)
    before, after = np.hstack([wall, value[:, :-1]]), np.hstack([value[:, 1:], wall])
    most = value.max(axis=1, keepdims=True)
    is_peak = (value >= before) & (value > after) & (value >= most - _NEAR * np.abs(most))
    is_peak[:, 0] |= most[:, 0] == -np.inf  # a line without any answer has to have a point too
    line, sample = np.nonzero(is_peak)
    near = np.clip(sample[:, None] + np.array([-1, 0, 1]), 0, speed.shape[1] - 1)
    unknowns = sampled.unknowns[:, line, sample, None]
    return _Peaks(line, speed[line[:, None], near], value[line[:, None], near], unknowns)


def _closed_in(search: Search, row: Array, peaks: _Peaks) -> tuple[_Peaks, int]:
    """Brackets of a sixth of the width, and how many states had no answer."""
    left, middle, right = (peaks.speed[:, [i]] for i in range(3))
    inner = np.hstack([left + (middle - left) * _WAYS, middle + (right - middle) * _WAYS])
    seen = _look(search, row[peaks.line, None], inner, peaks.unknowns)
    half = _WAYS.size
    speed, value = (
        np.hstack([old[:, :1], new[:, :half], old[:, 1:2], new[:, half:], old[:, 2:]])
        for old, new in ((peaks.speed, inner), (peaks.value, seen.value))
    )
    top = np.argmax(value, axis=1)[:, None]
    near = np.clip(top + np.array([-1, 0, 1]), 0, speed.shape[1] - 1)
    speed, value = (np.take_along_axis(array, near, axis=1) for array in (speed, value))
    return _Peaks(peaks.line, speed, value, peaks.unknowns), seen.unanswered


def _vertex(peaks: _Peaks) -> Array:
    """Top of the parabola through three points; the middle one where there is none."""
    (left, middle, right), (low, top, high) = peaks.speed.T, peaks.value.T
    is_smooth = (left < middle) & (middle < right) & np.isfinite(low) & np.isfinite(high)
    before, after = (
        np.where(is_smooth, middle - left, 1.0),
        np.where(is_smooth, right - middle, 1.0),
    )
    with np.errstate(invalid="ignore"):  # minus infinity where the engine has no state
        rise = np.where(is_smooth, top - low, 1.0) / before
        fall = np.where(is_smooth, top - high, 1.0) / after
    # Slopes rise and -fall half way to the neighbours, and zero in between.
    bend = np.where(rise + fall > 0.0, rise + fall, 1.0)
    shift = 0.5 * (rise * (before + after) / bend - before)
    top_at: Array = np.where(is_smooth, np.clip(middle + shift, left, right), middle)
    return top_at


def _chosen(value: Array, is_near: NDArray[np.bool_]) -> NDArray[np.intp]:
    """Which column of the tops: the vertex unless a sample or a kink of the air is higher."""
    rank = value.copy()
    rank[:, 1:_KINK] -= _ROUND_OFF * np.abs(rank[:, 1:_KINK])
    rank[~is_near, _KINK] = -np.inf
    column: NDArray[np.intp] = np.argmax(rank, axis=1)
    return column


def _winners(
    search: Search,
    row: Array,
    peak_line: NDArray[np.intp],
    column: NDArray[np.intp],
    tops: Array,
    level: Array,
    seen: _Seen,
) -> dict[str, Any]:
    """The greatest of the peaks of each line, and what holds it there."""
    every = np.arange(column.size)
    falling = np.lexsort((seen.value[every, column], peak_line))[::-1]
    _, first = np.unique(peak_line[falling], return_index=True)
    winner = falling[first]
    at = (winner, column[winner])
    speed, value, excess = tops[at], seen.value[at], seen.excess_power[at]
    levels = np.where(column[winner] == _KINK, level[winner], np.nan)
    edges = search.lines.edges(row)
    states = {
        LOST: ~np.isfinite(value),
        SHORT: excess <= search.climber.least_rate,
        FAST: speed >= edges.fast,
        SLOW: speed <= edges.slow,
        LEVEL: np.isfinite(levels),
    }
    state = np.select(list(states.values()), list(states), FREE)
    kinks = np.array([kink_name(float(altitude)) for altitude in levels])
    bounds = {FAST: edges.fast_by, SLOW: edges.slow_by, LEVEL: kinks}
    return {
        "row": row,
        "speed": speed,
        "value": value,
        "excess_power": excess,
        "state": state,
        "held_by": np.select([state == name for name in bounds], list(bounds.values()), ""),
        "level": np.where(state == LEVEL, levels, np.nan),
        "regime": _regimes(tops, column, seen)[winner],
    }


def _regimes(tops: Array, column: NDArray[np.intp], seen: _Seen) -> NDArray[np.int64]:
    """Regimes (K, k) at the chosen tops; ON_KINK where those to its left and right differ."""
    here = seen.regime[:, np.arange(column.size), column].T
    left, middle, right = tops[:, 1:_KINK].T
    is_between = ((left < middle) & (middle < right))[:, None]
    differs = seen.regime[:, :, 1].T != seen.regime[:, :, _KINK - 1].T
    regime: NDArray[np.int64] = np.where(is_between & differs, ON_KINK, here)
    return regime
