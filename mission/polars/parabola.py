"""A parabolic polar with a drag rise near the speed of sound.

``CD = CD0 + K (CL - CL_least)^2 + rise``, the rise after Lock's fourth-power law,
``20 (M - M_critical)^4`` above the critical Mach number, which lies
``(0.1 / 80)^(1/3)`` below drag divergence (dCD/dM = 0.1). Source: W. H. Mason, Configuration
Aerodynamics, chapter 7; B. Malone and W. H. Mason, "Multidisciplinary optimization in aircraft
design using analytic technology models", J. Aircraft 32(2), 1995, 431-438 (title from memory).
"""

from __future__ import annotations

from dataclasses import dataclass
from math import cos

import numpy as np
from numpy.typing import NDArray

from mission.polars.interface import Array, Polar

_BELOW_DIVERGENCE = (0.1 / 80.0) ** (1.0 / 3.0)
_STEEPNESS = 20.0
_MOST_STEPS = 60
_SETTLED = 1e-13


@dataclass(frozen=True)
class DragRise:
    """Drag divergence Mach number at a lift coefficient, and how it falls with lift."""

    drag_divergence_mach: float
    at_lift_coefficient: float
    fall_with_lift_coefficient: float

    def beyond_critical(self, lift_coefficient: Array, mach: Array) -> Array:
        """Mach number above the critical one; zero below it."""
        divergence = self.drag_divergence_mach - self.fall_with_lift_coefficient * (
            lift_coefficient - self.at_lift_coefficient
        )
        return np.maximum(mach - (divergence - _BELOW_DIVERGENCE), 0.0)


def korn_drag_rise(technology_factor: float, sweep: float, thickness_ratio: float) -> DragRise:
    """The drag rise of a swept wing by Korn's relation, extended by simple sweep theory.

    ``M_dd = kappa / cos L - (t/c) / cos^2 L - CL / (10 cos^3 L)`` with kappa the technology factor
    (0.87 of NACA 6-series sections, 0.95 of supercritical ones), L the sweep [rad] and t/c the
    thickness-to-chord ratio. Sources: those of this module.
    """
    cosine = cos(sweep)
    return DragRise(
        drag_divergence_mach=technology_factor / cosine - thickness_ratio / cosine**2,
        at_lift_coefficient=0.0,
        fall_with_lift_coefficient=0.1 / cosine**3,
    )


@dataclass(frozen=True)
class Parabola(Polar):
    """One parabola, with a drag rise or without."""

    zero_lift_drag_coefficient: float
    induced_drag_factor: float
    least_drag_lift_coefficient: float
    drag_rise: DragRise | None

    def terms(self, lift_coefficient: Array, mach: Array) -> tuple[Array, Array, Array]:
        """Zero-lift drag is the parabola's least value, wave drag the drag rise."""
        from_least = lift_coefficient - self.least_drag_lift_coefficient
        if self.drag_rise is None:
            wave = np.zeros(np.broadcast_shapes(lift_coefficient.shape, mach.shape))
        else:
            wave = _STEEPNESS * self.drag_rise.beyond_critical(lift_coefficient, mach) ** 4
        zero_lift = np.asarray(self.zero_lift_drag_coefficient)
        return zero_lift, self.induced_drag_factor * from_least**2, wave

    def lift_of_least_drag(self, mach: Array) -> Array:
        """The parabola's own."""
        least = np.asarray(self.least_drag_lift_coefficient, dtype=np.float64)
        return np.broadcast_to(least, np.broadcast_shapes(least.shape, mach.shape))

    def best_lift_coefficient(self, mach: Array) -> Array:
        """Where ``CD = CL dCD/dCL``: the parabola's own, less what the drag rise takes.

        With the rise, ``CD - CL dCD/dCL`` falls along lift and is concave, so that Newton's
        iteration from the parabola's own answer cannot fail; below the rise it has no step to make.
        """
        lift = best_of_parabola(
            self.zero_lift_drag_coefficient,
            self.induced_drag_factor,
            self.least_drag_lift_coefficient,
        )
        lift = np.broadcast_to(lift, np.broadcast_shapes(np.shape(lift), mach.shape))
        if self.drag_rise is None:
            return lift.copy()
        for _ in range(_MOST_STEPS):
            step = self._newton_step(self.drag_rise, lift, mach)
            lift = lift - step
            if not np.any(np.abs(step) > _SETTLED):
                break
        return lift

    def _newton_step(self, rise: DragRise, lift: Array, mach: Array) -> Array:
        """Change of lift coefficient that ``CD - CL dCD/dCL = 0`` asks for."""
        fall, beyond = rise.fall_with_lift_coefficient, rise.beyond_critical(lift, mach)
        square = lift**2 - self.least_drag_lift_coefficient**2
        excess = (
            self.zero_lift_drag_coefficient
            - self.induced_drag_factor * square
            + _STEEPNESS * beyond**3 * (beyond - 4.0 * fall * lift)
        )
        curvature = self.induced_drag_factor + 6.0 * _STEEPNESS * (fall * beyond) ** 2
        return -excess / (2.0 * lift * curvature)


def best_of_parabola(
    zero_lift: float | Array, factor: float | Array, least: float | Array
) -> NDArray[np.float64]:
    """Lift coefficient of the greatest lift-to-drag ratio of ``CD0 + K (CL - CL_least)^2``."""
    return np.sqrt(zero_lift / factor + np.square(least))
