"""Lift and drag of the aircraft: what its polar answers, where it is given, and when it buffets.

Lift coefficient and Mach number may have any shapes that broadcast; the answer has theirs.
Polars of every kind are in :mod:`mission.polars`.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import ArrayLike, NDArray

from mission.polars.interface import Polar, PolarCoverage

if TYPE_CHECKING:
    from mission.aircraft import Aircraft

Array = NDArray[np.float64]
LEFT_OUT = (
    "drag leaves out what centre of gravity and trim change, Reynolds number (altitude and size), "
    "ground effect, sideslip, ice and bending of the airframe"
)


@dataclass(frozen=True)
class DragBreakdown:
    """Drag coefficients of one shape that add up to the whole.

    Attributes
    ----------
    zero_lift : the least drag at the Mach number; where a polar is a table, drag rise included
    induced : what goes with lift beyond the lift coefficient of least drag
    wave : the drag rise of a polar that gives it apart
    """

    zero_lift: Array
    induced: Array
    wave: Array

    @property
    def total(self) -> Array:
        """What :func:`drag_coefficient` answers."""
        return self.zero_lift + self.induced + self.wave


@dataclass(frozen=True)
class BuffetOnset:
    """Lift coefficients at which buffet begins, on straight lines between rising Mach numbers."""

    machs: tuple[float, ...]
    lift_coefficients: tuple[float, ...]


def drag_coefficient(polar: Polar, lift_coefficient: ArrayLike, mach: ArrayLike) -> Array:
    """Drag coefficient at a lift coefficient and Mach number.

    Outside :func:`polar_coverage` that of its edge: whoever asks has to look there.
    """
    return polar.total(_array(lift_coefficient), _array(mach))


def drag_breakdown(polar: Polar, lift_coefficient: ArrayLike, mach: ArrayLike) -> DragBreakdown:
    """The drag coefficient by cause."""
    return DragBreakdown(*np.broadcast_arrays(*polar.terms(_array(lift_coefficient), _array(mach))))


def wave_drag_coefficient(polar: Polar, lift_coefficient: ArrayLike, mach: ArrayLike) -> Array:
    """The drag rise alone, where the polar gives it apart; zero otherwise."""
    return drag_breakdown(polar, lift_coefficient, mach).wave


def least_drag_lift_coefficient(polar: Polar, mach: ArrayLike = 0.0) -> Array:
    """Lift coefficient of the least drag at a Mach number; drag rises with lift from there on.

    A drag rise that the polar gives apart is left out: it would move the answer down.
    """
    return polar.lift_of_least_drag(_array(mach))


def best_lift_coefficient(polar: Polar, mach: ArrayLike = 0.0) -> Array:
    """Lift coefficient of the greatest lift-to-drag ratio at a Mach number, elementwise."""
    return polar.best_lift_coefficient(_array(mach))


def polar_coverage(polar: Polar) -> PolarCoverage | None:
    """Mach numbers and lift coefficients that a table is given for; None for a law without end."""
    return polar.coverage


def buffet_lift_coefficient(aircraft: Aircraft, mach: ArrayLike) -> Array:
    """Lift coefficient at which buffet begins at a Mach number; infinite where none is given.

    Below the first Mach number given that one's, as low speed changes it little; above the last
    that one's, which is too much: :func:`buffet_mach_bounds` tells where.
    """
    onset = aircraft.buffet_onset
    if onset is None:
        return np.full(np.shape(mach), np.inf)
    return np.asarray(np.interp(_array(mach), onset.machs, onset.lift_coefficients))


def buffet_mach_bounds(aircraft: Aircraft) -> tuple[float, float] | None:
    """Mach numbers for which buffet onset is known: from rest to the last given; None for none."""
    onset = aircraft.buffet_onset
    return None if onset is None else (0.0, onset.machs[-1])


def _array(values: ArrayLike) -> Array:
    return np.asarray(values, dtype=np.float64)
