"""Speeds of best climb and glide, at many levels and masses at once.

Lift is taken as weight and speed as held, so that rate of climb is specific excess power,
``V (T - D) / W``. The Mach numbers found here meet the closed forms of a parabolic polar to 1e-5:
best climb, at a thrust T that does not change with speed, at ``V^2 = (W/S) / (3 rho CD0) [T/W +
sqrt((T/W)^2 + 12 CD0 K)]``, best glide at ``CL = sqrt(CD0 / K)``, least sink at ``sqrt(3 CD0 / K)``
(D. P. Raymer, Aircraft Design: A Conceptual Approach, chapter 17).
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from mission.forces import lift_coefficient
from mission.steady.level_flight import Answers, LevelFlight, Limit
from mission.steady.searching import Function, least_between, least_value, pick, spread
from mission.steady.speed_range import (
    POINTS,
    Ends,
    allowed_ends,
    buffet_margin,
    near,
    operating_ends,
    rated_over,
)

Array = NDArray[np.float64]
Flags = NDArray[np.bool_]
Limits = NDArray[np.int64]


@dataclass(frozen=True)
class ClimbSpeed:
    """Mach number of a climb and its rate [m/s], negative where thrust is less than drag.

    Where ``is_known`` is false the engine has no state, or the aircraft no speed, ``limit`` says
    which, and the numbers are NaN. Otherwise it is the limit that the Mach number stands at.
    """

    is_known: Flags
    mach: Array
    rate_of_climb: Array
    limit: Limits


@dataclass(frozen=True)
class GlideSpeed:
    """Mach number of a glide with engines that give nothing, and what it comes to.

    ``sink`` is the rate of descent [m/s]; ``limit`` what the Mach number stands at.
    """

    mach: Array
    true_airspeed: Array
    lift_coefficient: Array
    lift_to_drag: Array
    sink: Array
    limit: Limits


def rate_of_climb(flight: LevelFlight, found: Answers) -> Array:
    """Specific excess power [m/s] of answers (k, S); minus infinity in buffet, without a state."""
    speed = found.mach * flight.air.speed_of_sound
    can = found.is_met & (buffet_margin(flight, found.mach) >= 0.0)
    return np.where(can, speed * (found.thrust - found.drag) / flight.weight, -np.inf)


def best_climb_mach(flight: LevelFlight) -> ClimbSpeed:
    """Mach number of the greatest rate of climb at the rating of ``flight``."""
    ends = allowed_ends(flight)
    rated = rated_over(flight, ends)
    rates = rate_of_climb(flight, rated)
    best = np.argmax(rates, axis=0)
    is_known = np.isfinite(pick(rates, best))
    start = near(rated, best)[:, None]

    def sink(mach: Array) -> Array:
        begin = np.broadcast_to(start, (len(start), *mach.shape))
        return -rate_of_climb(flight, flight.at_rating(mach, is_known, begin))

    mach = _around(sink, rated.mach, best)
    rate = -sink(mach[None])[0]
    lack = np.where(ends.slow < ends.fast, pick(rated.lack, best), ends.slow_limit)
    return ClimbSpeed(
        is_known=is_known,
        mach=np.where(is_known, mach, np.nan),
        rate_of_climb=np.where(is_known, rate, np.nan),
        limit=np.where(is_known, _limit_at(ends, mach), lack),
    )


def rate_about(flight: LevelFlight) -> Array:
    """The greatest rate of climb [m/s], read off one call of the engine.

    Minus infinity where the engine has no state.
    """
    rates = -rate_of_climb(flight, rated_over(flight, allowed_ends(flight)))
    return -least_value(rates, np.argmin(rates, axis=0))


def best_glide_mach(flight: LevelFlight) -> GlideSpeed:
    """Mach number of the greatest lift-to-drag ratio."""
    return _glide(flight, flight.drag)


def least_sink_mach(flight: LevelFlight) -> GlideSpeed:
    """Mach number of the least rate of descent."""
    return _glide(flight, lambda mach: flight.drag(mach) * mach)


def _glide(flight: LevelFlight, cost: Function) -> GlideSpeed:
    ends = operating_ends(flight)
    grid = spread(ends.slow, np.maximum(ends.fast, ends.slow), POINTS)
    mach = _around(cost, grid, np.argmin(cost(grid), axis=0))
    here = flight.air.with_mach(mach)
    ratio = flight.weight / flight.drag(mach)
    return GlideSpeed(
        mach=mach,
        true_airspeed=here.true_airspeed,
        lift_coefficient=lift_coefficient(flight.aircraft, here, flight.weight),
        lift_to_drag=ratio,
        sink=here.true_airspeed / ratio,
        limit=_limit_at(ends, mach),
    )


def _around(cost: Function, grid: Array, best: NDArray[np.int64]) -> Array:
    """Where a cost is least between the points beside the best of a grid."""
    low, high = (pick(grid, np.clip(best + step, 0, len(grid) - 1)) for step in (-1, 1))
    return least_between(cost, low, high)


def _limit_at(ends: Ends, mach: Array) -> Limits:
    """The limit that a Mach number stands at."""
    held = np.where(mach <= ends.slow, ends.slow_limit, Limit.NONE)
    return np.where(mach >= ends.fast, ends.fast_limit, held)
