"""What every drag polar answers, whatever its kind; coefficients on wing area, elementwise."""

from __future__ import annotations

from abc import ABC, abstractmethod
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]


@dataclass(frozen=True)
class PolarCoverage:
    """Mach numbers and lift coefficients, least and greatest, that a polar is given for."""

    mach: tuple[float, float]
    lift_coefficient: tuple[float, float]


class Polar(ABC):
    """Drag coefficient of the clean aircraft, nacelles of its reference engine included."""

    @property
    def coverage(self) -> PolarCoverage | None:
        """Where the polar is given; None for a law that holds everywhere."""
        return None

    @property
    def kink_machs(self) -> tuple[float, ...]:
        """Mach numbers at which drag has a kink in its slope or curvature; none for a law."""
        return ()

    @abstractmethod
    def terms(self, lift_coefficient: Array, mach: Array) -> tuple[Array, Array, Array]:
        """Zero-lift, induced and wave drag coefficients, whose shapes broadcast to the answer's.

        Outside its coverage a polar holds the value of its edge.
        """

    def total(self, lift_coefficient: Array, mach: Array) -> Array:
        """Drag coefficient, the sum of the terms."""
        zero_lift, induced, wave = self.terms(lift_coefficient, mach)
        return zero_lift + induced + wave

    @abstractmethod
    def lift_of_least_drag(self, mach: Array) -> Array:
        """Lift coefficient of the least drag at a Mach number, a drag rise given apart left out."""

    @abstractmethod
    def best_lift_coefficient(self, mach: Array) -> Array:
        """Lift coefficient of the greatest lift-to-drag ratio at a Mach number."""
