"""Lift and drag of the aircraft: a parabolic polar with a drag rise near the speed of sound.

``CD = CD0 + K (CL - CL_least)^2 + rise``, the rise after Lock's fourth-power law,
``20 (M - M_critical)^4`` above the critical Mach number, which lies
``(0.1 / 80)^(1/3)`` below drag divergence (dCD/dM = 0.1). Source: W. H. Mason, Configuration
Aerodynamics, chapter 7; B. Malone and W. H. Mason, J. Aircraft 32(2), 1995. Divergence falls with
lift coefficient by a given slope, 0.1 in Korn's relation for an unswept wing (same source).
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

Array = NDArray[np.float64]
_BELOW_DIVERGENCE = (0.1 / 80.0) ** (1.0 / 3.0)


@dataclass(frozen=True)
class DragRise:
    """Drag divergence Mach number at a lift coefficient, and how it falls with lift."""

    drag_divergence_mach: float
    at_lift_coefficient: float
    fall_with_lift_coefficient: float


@dataclass(frozen=True)
class Polar:
    """Drag polar of the clean aircraft, nacelles of its reference engine included."""

    zero_lift_drag_coefficient: float
    induced_drag_factor: float
    least_drag_lift_coefficient: float
    drag_rise: DragRise | None


def drag_coefficient(polar: Polar, lift_coefficient: ArrayLike, mach: ArrayLike) -> Array:
    """Drag coefficient at a lift coefficient and Mach number."""
    lift = np.asarray(lift_coefficient, dtype=float)
    from_least = lift - polar.least_drag_lift_coefficient
    drag = polar.zero_lift_drag_coefficient + polar.induced_drag_factor * from_least**2
    return drag + wave_drag_coefficient(polar, lift, mach)


def wave_drag_coefficient(polar: Polar, lift_coefficient: Array, mach: ArrayLike) -> Array:
    """The drag rise alone."""
    rise = polar.drag_rise
    if rise is None:
        return np.zeros(np.broadcast_shapes(np.shape(lift_coefficient), np.shape(mach)))
    divergence = rise.drag_divergence_mach - rise.fall_with_lift_coefficient * (
        lift_coefficient - rise.at_lift_coefficient
    )
    beyond = np.maximum(np.asarray(mach) - (divergence - _BELOW_DIVERGENCE), 0.0)
    return 20.0 * beyond**4


def best_lift_coefficient(polar: Polar) -> float:
    """Lift coefficient of the greatest lift-to-drag ratio below the drag rise."""
    square = polar.zero_lift_drag_coefficient / polar.induced_drag_factor
    return float(np.sqrt(square + polar.least_drag_lift_coefficient**2))
