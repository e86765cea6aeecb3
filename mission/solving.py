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
_LARGEST_GROWTH = 4.0  # of the distance from the least value, while nothing is too much yet


@dataclass(frozen=True)
class Search:
    """Where to look for roots, arrays (members,).

    Attributes
    ----------
    least : value below which there is none
    at_least : margin there [kg]
    guess : value to look at first
    aboard : fuel aboard [kg], of which the margin is to become a small share
    """

    least: Array
    at_least: Array
    guess: Array
    aboard: Array


@dataclass(frozen=True)
class Root:
    """Free values (members,), the margins there [kg], and how many flights they took.

    ``has_answer`` is False where the margin is negative at the least value already; ``search`` is
    what it was looked for with.
    """

    value: Array
    margin: Array
    has_answer: NDArray[np.bool_]
    flights: int
    search: Search


def largest_with_margin(margin: Margin, search: Search, share: float = TOLERANCE) -> Root:
    """The value at which a falling margin [kg] is zero, to a share of the fuel aboard.

    ``margin`` flies all members at once, at values (members,); minus infinity where a flight is
    impossible.
    """
    least, at_least, tolerance = search.least, search.at_least, share * search.aboard
    low, at_low, high = least.copy(), at_least, np.full_like(least, np.inf)
    last, at_last = low, at_low
    following = np.where(at_low > 0.0, np.maximum(search.guess, low), low)
    value, found, is_open, flights = following, at_low, at_low > tolerance, 0
    while np.any(is_open) and flights < MOST_FLIGHTS:
        value = following
        there = margin(value)
        flights += 1
        found = np.where(is_open, there, found)
        low, at_low = (
            np.where(there >= 0.0, new, old) for new, old in ((value, low), (there, at_low))
        )
        high = np.where(there >= 0.0, high, value)
        is_open &= np.abs(there) > tolerance
        secant = _secant((last, value), (at_last, there), low, high, least)
        last, at_last = value, there
        following = np.where(is_open, secant, value)
    return Root(value, found, at_least >= -tolerance, flights, search)


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
