"""Curves between the points of a table over one variable, several columns at once."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

import numpy as np
from numpy.typing import NDArray

from engine.options.monotone import slopes

Array = NDArray[np.float64]
Interpolation = Literal["monotone cubic", "linear"]


@dataclass(frozen=True)
class Curves:
    """Polynomials between rising points; :func:`curves_through` makes them.

    Attributes
    ----------
    points : (n,), rising
    coefficients : (n - 1, 4, ...), of the powers 0 to 3 of the way from each cell's first point
    """

    points: Array
    coefficients: Array

    def cell(self, at: Array) -> tuple[NDArray[np.intp], Array]:
        """The cell that each value lies in, and its way from the cell's first point.

        Beyond the ends, the way of the end itself.
        """
        held = np.minimum(np.maximum(at, self.points[0]), self.points[-1])
        cell = np.searchsorted(self.points[1:-1], held, side="right")
        return cell, held - self.points[cell]

    def read(self, at: Array) -> Array:
        """All columns at values of any shape: that shape, then the columns'."""
        cell, way = self.cell(at)
        return along(self.coefficients[cell], way[..., None])


def along(coefficients: Array, way: Array) -> Array:
    """The polynomials (..., 4, columns) at a way from their first points."""
    c = coefficients
    return c[..., 0, :] + way * (c[..., 1, :] + way * (c[..., 2, :] + way * c[..., 3, :]))


def curves_through(points: Array, values: Array, interpolation: Interpolation) -> Curves:
    """Curves through ``values`` (n, columns) at rising ``points`` (n,).

    A monotone cubic stays within the two values that it joins, so that it adds neither dip nor
    peak (F. N. Fritsch and R. E. Carlson, see :mod:`engine.options.monotone`).
    """
    step = np.diff(points)[:, None]
    secant = np.diff(values, axis=0) / step
    if interpolation == "linear":
        first = last = secant
    else:
        slope = slopes(points, values.T).T
        first, last = slope[:-1], slope[1:]
    square = (3.0 * secant - 2.0 * first - last) / step
    cube = (first + last - 2.0 * secant) / step**2
    return Curves(points, np.stack([values[:-1], first, square, cube], axis=1))
