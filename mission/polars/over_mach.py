"""A parabolic polar whose coefficients are tables over Mach number, supersonic flight included.

Between the Mach numbers lie monotone cubics. Through the transonic rise of zero-lift drag any
freer curve dips below the subsonic level and peaks above the greatest value given; straight lines
do neither, but put a kink at every Mach number, which the nodes of an acceleration do not expect
and where a search for the best Mach number gets stuck. Straight lines are there on request, for
published solutions that used them.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from math import inf

import numpy as np

from mission.polars.interface import Array, Polar, PolarCoverage
from mission.polars.parabola import best_of_parabola
from mission.polars.piecewise import Curves, Interpolation, curves_through


@dataclass(frozen=True)
class ParabolaOverMach(Polar):
    """Coefficients of the parabola, one for each of the rising ``machs``."""

    machs: tuple[float, ...]
    zero_lift_drag_coefficient: tuple[float, ...]
    induced_drag_factor: tuple[float, ...]
    least_drag_lift_coefficient: tuple[float, ...]
    interpolation: Interpolation = "monotone cubic"

    @property
    def coverage(self) -> PolarCoverage:
        """The table's Mach numbers, at any lift coefficient."""
        return PolarCoverage((self.machs[0], self.machs[-1]), (-inf, inf))

    @property
    def kink_machs(self) -> tuple[float, ...]:
        """The rows of the table, its ends left out."""
        return self.machs[1:-1]

    @cached_property
    def _curves(self) -> Curves:
        columns = (
            self.zero_lift_drag_coefficient,
            self.induced_drag_factor,
            self.least_drag_lift_coefficient,
        )
        return curves_through(np.array(self.machs), np.array(columns).T, self.interpolation)

    def terms(self, lift_coefficient: Array, mach: Array) -> tuple[Array, Array, Array]:
        """Wave drag is inside the coefficients of its Mach number, hence none of its own."""
        zero_lift, factor, least = np.moveaxis(self._curves.read(mach), -1, 0)
        return zero_lift, factor * (lift_coefficient - least) ** 2, np.zeros(())

    def lift_of_least_drag(self, mach: Array) -> Array:
        """That of the parabola at each Mach number."""
        return self._curves.read(mach)[..., 2]

    def best_lift_coefficient(self, mach: Array) -> Array:
        """That of the parabola at each Mach number."""
        return best_of_parabola(*np.moveaxis(self._curves.read(mach), -1, 0))
