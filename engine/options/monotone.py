"""Monotone cubic interpolation on rows that each have their own abscissae.

scipy's PchipInterpolator is the same for one set of abscissae; here every query has its own.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]


def slopes(x: Array, y: Array) -> Array:
    """Slopes at the points, last axis, that keep a cubic within neighbouring values.

    Inside, the weighted harmonic mean of the secants, zero where they differ in sign; at the
    ends a parabola's slope, held to what is monotone. F. N. Fritsch and R. E. Carlson, "Monotone
    piecewise cubic interpolation", SIAM J. Numer. Anal. 17 (1980); the mean after F. N. Fritsch
    and J. Butland, SIAM J. Sci. Stat. Comput. 5 (1984), both from memory.
    """
    step = np.diff(x)
    secant = np.diff(y) / step
    if secant.shape[-1] == 1:
        return np.concatenate([secant, secant], axis=-1)
    before, after = secant[..., :-1], secant[..., 1:]
    w_before = step[..., :-1] + 2.0 * step[..., 1:]
    w_after = 2.0 * step[..., :-1] + step[..., 1:]
    agree = before * after > 0.0
    inverse = w_before / np.where(agree, before, 1.0) + w_after / np.where(agree, after, 1.0)
    inner = np.where(agree, (w_before + w_after) / inverse, 0.0)
    first = _end(step[..., 0], step[..., 1], secant[..., 0], secant[..., 1])
    last = _end(step[..., -1], step[..., -2], secant[..., -1], secant[..., -2])
    return np.concatenate([first[..., None], inner, last[..., None]], axis=-1)


def _end(step: Array, next_step: Array, secant: Array, next_secant: Array) -> Array:
    """Slope at an end from the two secants nearest to it."""
    slope = ((2.0 * step + next_step) * secant - step * next_secant) / (step + next_step)
    slope = np.where(slope * secant <= 0.0, 0.0, slope)
    is_steep = (secant * next_secant < 0.0) & (np.abs(slope) > 3.0 * np.abs(secant))
    return np.where(is_steep, 3.0 * secant, slope)


def hermite(way: Array, step: Array, y: tuple[Array, Array], slope: tuple[Array, Array]) -> Array:
    """Cubic between two points, ``way`` from 0 to 1 along a step, from values and slopes there."""
    back = 1.0 - way
    value = y[0] * back**2 * (1.0 + 2.0 * way) + y[1] * way**2 * (1.0 + 2.0 * back)
    return value + step * way * back * (slope[0] * back - slope[1] * way)


def interpolate(x: Array, y: Array, at: Array) -> Array:
    """Value at ``at`` (...) of the monotone cubics through ``x`` and ``y`` (..., n).

    ``x`` rises along the last axis; ``at`` lies within it.
    """
    x, y = np.broadcast_arrays(x, y)
    slope = slopes(x, y)
    count = np.count_nonzero(at[..., None] >= x[..., 1:-1], axis=-1)
    cell = np.broadcast_to(count, x.shape[:-1])[..., None]

    def ends(values: Array) -> tuple[Array, Array]:
        low, high = (np.take_along_axis(values, cell + i, axis=-1)[..., 0] for i in (0, 1))
        return low, high

    low, high = ends(x)
    step = high - low
    return hermite((at - low) / step, step, ends(y), ends(slope))
