"""Speeds of level flight that are best for something, at many levels and masses at once.

Each takes the :class:`mission.steady.speed_range.SpeedRange` that is shared by all of them and
gives a Mach number that meets the closed forms of a parabolic polar at constant consumption (best
range at a level at ``CL = sqrt(CD0 / 3K)``, endurance at ``sqrt(CD0 / K)``: L. M. Nicolai and G. E.
Carichner, Fundamentals of Aircraft and Airship Design, vol. I, table 3.2) to 1e-6.
"""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from numpy.typing import ArrayLike, NDArray

from mission.march.seeking import LONG_RANGE_SHARE
from mission.steady.level_flight import Answers, LevelFlight, LevelSpeed, Limit
from mission.steady.searching import falling_root, first_fall, least_between, least_value, pick
from mission.steady.speed_range import SpeedRange, near

Array = NDArray[np.float64]
Flags = NDArray[np.bool_]
Limits = NDArray[np.int64]
Cost = Callable[[LevelFlight, Answers], Array]


def maximum_range_mach(speeds: SpeedRange) -> LevelSpeed:
    """Mach number of the greatest specific air range."""
    return _least(speeds, _per_air_distance)


def range_about(speeds: SpeedRange) -> Array:
    """The greatest specific air range [m/kg], read off the curve without asking the engine again.

    Zero where there is no level flight.
    """
    cost = _cost_of(speeds, speeds.curve, _per_air_distance)
    return np.asarray(1.0 / least_value(cost, np.argmin(cost, axis=0)))


def best_endurance_mach(speeds: SpeedRange) -> LevelSpeed:
    """Mach number of least fuel flow."""
    return _least(speeds, lambda flight, found: found.fuel_flow)


def least_cost_mach(speeds: SpeedRange, cost_index: ArrayLike) -> LevelSpeed:
    """Mach number of least cost of a distance, time costing as much as ``cost_index`` [kg/s].

    The cost index is the cost of time over the cost of fuel; what is least is fuel flow plus cost
    index over ground speed (from memory). At a cost index of zero it is the greatest specific
    range over the ground, in whatever wind.
    """

    def per_ground_distance(flight: LevelFlight, found: Answers) -> Array:
        per_time: Array = found.fuel_flow + np.asarray(cost_index)
        return per_time / flight.ground_speed(found.mach)

    return _least(speeds, per_ground_distance)


def long_range_mach(speeds: SpeedRange, best: LevelSpeed | None = None) -> LevelSpeed:
    """Mach number above the best at which specific air range is 99 % of the greatest.

    ``best`` is that of :func:`maximum_range_mach`, if it is known. Where a limit stands before, the
    Mach number is the limit's.
    """
    found = maximum_range_mach(speeds) if best is None else best
    return _where_range_is(speeds, found, speeds.ends.fast, 1.0)


def slow_range_mach(speeds: SpeedRange, best: LevelSpeed | None = None) -> LevelSpeed:
    """The same on the slow side of the best."""
    found = maximum_range_mach(speeds) if best is None else best
    return _where_range_is(speeds, found, speeds.ends.slow, -1.0)


def maximum_level_mach(speeds: SpeedRange) -> LevelSpeed:
    """Greatest Mach number of level flight."""
    limit = np.where(speeds.is_open, speeds.greatest_limit, speeds.lack)
    start = near(speeds.curve, np.full(limit.shape, len(speeds.curve.mach) - 1))
    return _speed(speeds, speeds.greatest, speeds.is_open, limit, start)


def _per_air_distance(flight: LevelFlight, found: Answers) -> Array:
    return found.fuel_flow / (found.mach * flight.air.speed_of_sound)


def _cost_of(speeds: SpeedRange, found: Answers, cost: Cost) -> Array:
    """A cost, infinite where the engine does not give thrust equal to drag."""
    return np.where(found.is_met, cost(speeds.flight, found), np.inf)


def _speed(
    speeds: SpeedRange, mach: Array, is_found: Flags, limit: Limits, start: Array
) -> LevelSpeed:
    return speeds.flight.speed_at(mach, is_found, limit, speeds.thrust_margin, start)


def _least(speeds: SpeedRange, cost: Cost) -> LevelSpeed:
    """The Mach number at which a cost is least."""
    curve = speeds.curve
    values = _cost_of(speeds, curve, cost)
    best = np.argmin(values, axis=0)
    is_found = np.isfinite(pick(values, best))
    low, high = (pick(curve.mach, np.clip(best + step, 0, len(curve.mach) - 1)) for step in (-1, 1))
    start = near(curve, best)[:, None]

    def at(mach: Array) -> Array:
        begin = np.broadcast_to(start, (len(start), *mach.shape))
        return _cost_of(speeds, speeds.flight.level(mach, is_found, begin), cost)

    mach = least_between(at, low, high)
    limit = np.where(is_found, speeds.limit_at(mach), _lack(speeds))
    return _speed(speeds, mach, is_found, limit, start[:, 0])


def _lack(speeds: SpeedRange) -> NDArray[np.int64]:
    """For want of what there is no answer: no range, or no fuel flow anywhere on it."""
    return np.where(speeds.is_open, speeds.curve.lack[0], speeds.lack)


def _where_range_is(speeds: SpeedRange, best: LevelSpeed, end: Array, way: float) -> LevelSpeed:
    """Mach number at which range has fallen to 99 %, from the best towards an end of the range.

    ``way`` is 1 towards faster, -1 towards slower.
    """
    flight, curve = speeds.flight, speeds.curve
    is_found = best.is_flyable
    enough = np.where(is_found, LONG_RANGE_SHARE * best.specific_air_range, 1.0)

    def surplus(found: Answers) -> Array:
        burns = found.is_met & (found.fuel_flow > 0.0)
        flow = np.where(burns, found.fuel_flow, 1.0)
        speed = found.mach * flight.air.speed_of_sound
        return np.where(burns, speed / flow / enough - 1.0, -np.inf)

    peak = np.where(is_found, best.mach, end)
    inside, outside, falls = first_fall(curve.mach, surplus(curve), peak, end, way)
    falls = falls & is_found
    start = near(curve, np.argmin(np.abs(curve.mach - inside), axis=0))[:, None]

    def at(mach: Array) -> Array:
        begin = np.broadcast_to(start, (len(start), *mach.shape))
        return surplus(flight.level(mach, falls, begin))

    mach = falling_root(at, inside, np.where(falls, outside, inside))
    limit = np.where(falls, Limit.NONE, speeds.limit_at(end))
    limit = np.where(is_found, limit, best.limit)
    return _speed(speeds, mach, is_found, limit, start[:, 0])
