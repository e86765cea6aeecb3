"""What a flight is solved for: the distance, radius or time that its fuel is enough for.

Fuel margin falls as the free quantity grows, nearly on a straight line. The root is kept between
a value with fuel to spare and one without, and followed by secants; many members at once, one
march of whole flights for all of them.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Margin = Callable[[Array], Array]
MOST_FLIGHTS = 12
TOLERANCE = 1e-7  # of the fuel aboard, to which the margin is closed
_CLOSED = 10.0  # times the tolerance: a margin that the last flight may be left with
_LARGEST_GROWTH = 4.0  # of the distance from the least value, while nothing is too much yet


@dataclass(frozen=True)
class Root:
    """Free values (members,), the margins there [kg], and how many flights they took.

    ``has_answer`` is False where the margin is negative at the least value already, or where so
    many flights did not close it.
    """

    value: Array
    margin: Array
    has_answer: NDArray[np.bool_]
    flights: int


def largest_with_margin(
    margin: Margin, least: Array, guess: Array, tolerance: Array, *, at_least: Array | None = None
) -> Root:
    """The value at which a falling margin [kg] is zero, to ``tolerance`` [kg], above ``least``.

    ``margin`` flies all members at once, at values (members,); minus infinity where a flight is
    impossible. ``at_least`` is the margin at ``least`` where it is known. Guesses are only where to
    look first.
    """
    at_least = margin(least) if at_least is None else at_least
    low, at_low, high = least.copy(), at_least, np.full_like(least, np.inf)
    last, at_last = low, at_low
    value = np.where(at_low > 0.0, np.maximum(guess, low), low)
    found, is_open, flights = at_low, at_low > tolerance, 1
    while np.any(is_open) and flights < MOST_FLIGHTS:
        there = margin(value)
        flights += 1
        found = np.where(is_open, there, found)
        low, at_low = (
            np.where(there >= 0.0, new, old) for new, old in ((value, low), (there, at_low))
        )
        high = np.where(there >= 0.0, high, value)
        is_open &= np.abs(there) > tolerance
        following = _secant((last, value), (at_last, there), low, high, least)
        last, at_last = value, there
        value = np.where(is_open, following, value)
    return Root(value, found, np.abs(found) <= _CLOSED * tolerance, flights)


def _secant(
    values: tuple[Array, Array],
    margins: tuple[Array, Array],
    low: Array,
    high: Array,
    least: Array,
) -> Array:
    """The next value: on the line through the last two, inside what is known to hold the root."""
    is_bracketed = np.isfinite(high)
    with np.errstate(all="ignore"):
        slope = (margins[1] - margins[0]) / (values[1] - values[0])
        tried = values[1] - margins[1] / slope
        middle = low + 0.5 * (high - low)
        farthest = least + _LARGEST_GROWTH * (low - least)
    inside = np.isfinite(tried) & (tried > low) & (tried < np.where(is_bracketed, high, farthest))
    return np.where(inside, tried, np.where(is_bracketed, middle, farthest))
