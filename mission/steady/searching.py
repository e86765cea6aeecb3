"""Roots and least values along the first axis, for all members at once.

Both ask for many points a round and keep the cells that hold the answer: a computed engine answers
a hundred points in one call for little more than the price of one, so that a few rounds of many
points cost less than many steps of one. Kinks cost accuracy and lead nowhere else.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import TypeVar

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Places = NDArray[np.int64]
Function = Callable[[Array], Array]
_Kind = TypeVar("_Kind", bound=np.generic)
_POINTS, _ROUNDS = 7, 2  # of a least value
_FIRST = 9  # points of a root, before it is approached point by point
_POLISHES, _ZERO = 8, 1e-7
_CLOSER = 0.125  # of a cell: how far apart the last three points of a least value stand


def pick(values: NDArray[_Kind], place: Places) -> NDArray[_Kind]:
    """The entry of ``values`` (k, ...) that ``place`` (...) names for each member."""
    found: NDArray[_Kind] = np.take_along_axis(values, place[None], axis=0)[0]
    return found


def spread(low: Array, high: Array, count: int) -> Array:
    """``count`` points from ``low`` to ``high``, both exactly among them, as a new first axis."""
    share = np.linspace(0.0, 1.0, count).reshape(-1, *(1,) * np.ndim(low))
    return low * (1.0 - share) + high * share


def first_fall(
    points: Array, values: Array, peak: Array, end: Array, way: float
) -> tuple[Array, Array, NDArray[np.bool_]]:
    """Where values (k, ...) first fall below zero on the way from a peak to an end.

    ``way`` is 1 towards greater points, -1 towards lesser ones. The last point before the fall (the
    peak, if there is none), the first one behind it, and whether there is a fall: if not, the end
    stands in both places.
    """
    beyond = way * (points - peak)
    is_past = (values < 0.0) & (beyond > 0.0)
    falls: NDArray[np.bool_] = np.asarray(is_past.any(axis=0))
    last = np.min(np.where(is_past, beyond, np.inf), axis=0)
    first = np.max(np.where((beyond >= 0.0) & (beyond < last), beyond, 0.0), axis=0)
    return (
        np.where(falls, peak + way * first, end),
        np.where(falls, peak + way * last, end),
        falls,
    )


def falling_root(function: Function, low: Array, high: Array) -> Array:
    """Where a function that is not negative at ``low`` and is at ``high`` first passes zero.

    ``function`` takes points (k, ...) and gives as many values of the order of one, minus infinity
    where there is none. The answer is a point at which it is zero to 1e-7; at a jump, or where the
    values end, the last one known at which it is not negative, to 1/1000 of the way. After a few
    points together one at a time (N. Anderson and A. Bjorck, A New High Order Method of Regula
    Falsi Type, BIT 13, 1973; from memory).
    """
    points = spread(low, high, _FIRST)
    values = function(points)
    is_past = values < 0.0
    # Round-off at the ends, where the signs are known, must not move the answer.
    is_past[0], is_past[-1] = False, True
    after = np.argmax(is_past, axis=0)
    low, high = pick(points, after - 1), pick(points, after)
    root = _root_of_parabola(points, values, after)
    first, last = np.maximum(pick(values, after - 1), 0.0), pick(values, after)
    went_low, went_high = np.zeros_like(is_past[0]), np.zeros_like(is_past[0])
    for _ in range(_POLISHES):
        value = function(root[None])[0]
        is_settled = (np.abs(value) < _ZERO) | (low == high)
        if is_settled.all():
            break
        is_low = value >= 0.0
        # An end that stays a second time is given less of a value, so that it is left soon.
        less_first, less_last = first * _less(value, last), last * _less(value, first)
        first = np.where(is_low, value, np.where(went_high, less_first, first))
        last = np.where(is_low, np.where(went_low, less_last, last), value)
        low, high = np.where(is_low, root, low), np.where(is_low, high, root)
        went_low, went_high = is_low, ~is_low
        root = np.where(is_settled, root, _on_the_line(low, high, first, last))
    return np.where(value >= -_ZERO, root, low)


def _less(value: Array, before: Array) -> Array:
    """Factor for an end that stays, from the new and the old value of the other end."""
    with np.errstate(all="ignore"):
        factor = 1.0 - value / before
    return np.where(np.isfinite(factor) & (factor > 0.0), factor, 0.5)


def _on_the_line(low: Array, high: Array, first: Array, last: Array) -> Array:
    """Root of the straight line through two points; half-way where there is none."""
    fall = first - last
    is_line = np.isfinite(fall) & (fall > 0.0)
    share = np.where(is_line, first / np.where(is_line, fall, 1.0), 0.5)
    return low + share * (high - low)


def _root_of_parabola(points: Array, values: Array, after: Places) -> Array:
    """Root in the cell that ends at ``after``, by Newton's divided differences.

    ``f = f0 + (x - x0) (d1 + (x - x1) d2)``, x0 and x1 the ends of the cell, d2 from the point
    before it (or behind it, where it is the first).
    """
    third = np.where(after >= 2, after - 2, after + 1)
    x0, x1, x2 = (pick(points, at) for at in (after - 1, after, third))
    f0, f1, f2 = (pick(values, at) for at in (after - 1, after, third))
    f0 = np.maximum(f0, 0.0)
    is_known = np.isfinite(f1) & (f1 < f0) & (x1 != x0)
    with np.errstate(all="ignore"):
        first = (f1 - f0) / (x1 - x0)
        second = ((f2 - f1) / (x2 - x1) - first) / (x2 - x0)
        second = np.where(np.isfinite(second), second, 0.0)
        root = x0 - f0 / first
        for _ in range(3):
            root = x0 - f0 / (first + (root - x1) * second)
    is_known &= np.isfinite(root)
    root = np.clip(root, np.minimum(x0, x1), np.maximum(x0, x1))
    return np.where(is_known, root, 0.5 * (x0 + x1))


def least_between(function: Function, low: Array, high: Array) -> Array:
    """Where a function is least between ``low`` and ``high``.

    ``function`` takes points (k, ...) and gives as many values, infinite where there is none. The
    cells beside the least value are kept, then three points closer together give the vertex of a
    parabola; of all these points the best is the answer, so that it may stand at an end, or, to
    1/50 of the way, at a kink.
    """
    for _ in range(_ROUNDS):
        points = spread(low, high, _POINTS)
        values = function(points)
        best = np.argmin(values, axis=0)
        low = pick(points, np.maximum(best - 1, 0))
        high = pick(points, np.minimum(best + 1, _POINTS - 1))
    step = _CLOSER * (points[1] - points[0])
    middle = np.clip(vertex(points, values, best), low + step, high - step)
    close = np.stack([middle - step, middle, middle + step])
    there = function(close)
    tried = vertex(close, there, np.argmin(there, axis=0))[None]
    points = np.concatenate([pick(points, best)[None], close, tried])
    values = np.concatenate([pick(values, best)[None], there, function(tried)])
    return pick(points, np.argmin(values, axis=0))


def vertex(points: Array, values: Array, best: Places) -> Array:
    """Vertex of the parabola through the best of equally spaced points and those beside it.

    Two to one side where the values end on the other; the best point itself where no parabola
    opens upwards. The vertex lies among the three points.
    """
    middle, shift, _ = _parabola(values, best)
    here = pick(points, middle)
    return here + shift * (pick(points, middle + 1) - here)


def least_value(values: Array, best: Places) -> Array:
    """The least value of a smooth function from equally spaced ones, without asking for more.

    That of the quartic through five points around the best; of the parabola through three where
    values end.
    """
    middle, shift, least = _parabola(values, best)
    centre = np.clip(middle, 2, len(values) - 3)
    a, b, c, d, e = (pick(values, centre + step) for step in (-2, -1, 0, 1, 2))
    with np.errstate(invalid="ignore"):
        powers = (
            c,
            (a - 8.0 * b + 8.0 * d - e) / 12.0,
            (-a + 16.0 * b - 30.0 * c + 16.0 * d - e) / 24.0,
            (-a + 2.0 * b - 2.0 * d + e) / 12.0,
            (a - 4.0 * b + 6.0 * c - 4.0 * d + e) / 24.0,
        )
        start = shift + middle - centre
        place = np.clip(_least_of_quartic(powers, start), -2.0, 2.0)
        found = sum(power * place**n for n, power in enumerate(powers))
    is_smooth = np.isfinite(found) & (np.abs(place - start) < 0.5)
    return np.where(is_smooth, found, least)


def _least_of_quartic(powers: tuple[Array, ...], start: Array) -> Array:
    """Where the slope of ``c0 + c1 t + ... + c4 t^4`` is zero, by Newton's method."""
    _, c1, c2, c3, c4 = powers
    place = start
    for _ in range(4):
        slope = c1 + place * (2.0 * c2 + place * (3.0 * c3 + place * 4.0 * c4))
        curvature = 2.0 * c2 + place * (6.0 * c3 + place * 12.0 * c4)
        place = place - np.where(
            curvature > 0.0, slope / np.where(curvature > 0.0, curvature, 1.0), 0.0
        )
    return place


def _parabola(values: Array, best: Places) -> tuple[Places, Array, Array]:
    """Middle point of a parabola, the way from it to the least value in cells, and that value."""
    last = len(values) - 1
    ends_before, ends_after = (
        ~np.isfinite(pick(values, np.clip(best + step, 0, last))) for step in (-1, 1)
    )
    middle = np.clip(best + ends_before - ends_after, 1, last - 1)
    before, at, after = (pick(values, middle + step) for step in (-1, 0, 1))
    with np.errstate(invalid="ignore"):
        slope, curvature = 0.5 * (after - before), before - 2.0 * at + after
        bends = np.isfinite(curvature) & (curvature > 0.0)
        shift = np.clip(-slope / np.where(bends, curvature, 1.0), -1.0, 1.0)
        least = at + shift * (slope + 0.5 * shift * curvature)
    return (
        middle,
        np.where(bends, shift, (best - middle).astype(float)),
        np.where(bends, least, pick(values, best)),
    )
