"""The take-off mass that a field length or a gradient of climb allows: the inverse, by a root.

Longer runways and gentler gradients allow more mass, so that each has one answer at most; it is
sought between half the operating empty and three times the maximum take-off mass.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from enum import IntEnum

import numpy as np
from numpy.typing import ArrayLike, NDArray

from engine.interface import Engine
from mission.aircraft import Aircraft
from mission.field.cases import Case
from mission.field.performance import climb_gradients, take_off_lengths
from mission.field.states import Place

Array = NDArray[np.float64]
_LIGHTEST, _HEAVIEST = 0.5, 3.0  # of operating empty, of maximum take-off mass
_SETTLED = 1e-10  # of the mass


class Verdict(IntEnum):
    """What became of the search."""

    FOUND = 0
    BELOW = 1  # even the lightest mass is too heavy
    ABOVE = 2  # even the heaviest mass is allowed
    UNANSWERED = 3  # the engine had no answer on the way


@dataclass(frozen=True)
class AllowedMass:
    """Greatest mass allowed [kg] and :class:`Verdict`, arrays of one shape.

    Where the verdict is BELOW or ABOVE the mass is the end of the range searched; where it is
    UNANSWERED it is NaN.
    """

    mass: Array
    verdict: NDArray[np.int64]


def mass_for_field_length(
    aircraft: Aircraft,
    engine: Engine,
    length: ArrayLike,
    pressure_altitude: ArrayLike = 0.0,
    temperature_deviation: ArrayLike = 0.0,
) -> AllowedMass:
    """Take-off mass whose field length is ``length`` [m]; arrays that broadcast, SI."""

    def room(mass: Array, length: Array, altitude: Array, deviation: Array) -> Array:
        """Of reciprocals, which go to zero where thrust no longer overcomes resistance."""
        lengths = take_off_lengths(aircraft, engine, Place(mass, altitude, deviation))
        return 1.0 / lengths.needed - 1.0 / length

    return _greatest(aircraft, room, length, pressure_altitude, temperature_deviation)


def mass_for_gradient(
    aircraft: Aircraft,
    engine: Engine,
    case: Case,
    gradient: ArrayLike,
    pressure_altitude: ArrayLike = 0.0,
    temperature_deviation: ArrayLike = 0.0,
) -> AllowedMass:
    """Mass whose gradient in a case is ``gradient``; arrays that broadcast, SI."""

    def room(mass: Array, asked: Array, altitude: Array, deviation: Array) -> Array:
        place = Place(mass, altitude, deviation)
        (climb,) = climb_gradients(aircraft, engine, [case], place)
        return climb.gradient - asked

    return _greatest(aircraft, room, gradient, pressure_altitude, temperature_deviation)


def _greatest(aircraft: Aircraft, room: Callable[..., Array], *given: ArrayLike) -> AllowedMass:
    """Where ``room(mass, *given)``, which falls with mass, comes to zero."""
    from scipy.optimize.elementwise import find_root  # noqa: PLC0415  sizing alone needs it

    arrays = np.broadcast_arrays(*(np.asarray(value, dtype=float) for value in given))
    low = np.full(arrays[0].shape, _LIGHTEST * aircraft.operating_empty_mass)
    high = np.full(arrays[0].shape, _HEAVIEST * aircraft.maximum_take_off_mass)
    at_low, at_high = room(low, *arrays), room(high, *arrays)
    found = find_root(room, (low, high), args=tuple(arrays), tolerances={"xrtol": _SETTLED})
    is_below, is_above = at_low < 0.0, at_high > 0.0
    verdict = np.select(
        [is_below, is_above, ~np.asarray(found.success)],
        [Verdict.BELOW, Verdict.ABOVE, Verdict.UNANSWERED],
        Verdict.FOUND,
    )
    mass = np.select([is_below, is_above, ~np.asarray(found.success)], [low, high, np.nan], found.x)
    return AllowedMass(mass, np.asarray(verdict, dtype=np.int64))
