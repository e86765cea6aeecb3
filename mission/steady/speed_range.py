"""At which Mach numbers level flight is possible, and what it burns over them."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from mission.aerodynamics import (
    buffet_lift_coefficient,
    buffet_mach_bounds,
    polar_coverage,
)
from mission.airspeeds import mach_from_calibrated_airspeed
from mission.forces import lift_coefficient, stall_mach
from mission.march.level import SLOWEST_GROUND_SPEED
from mission.march.rules import SLOWEST_STALL_MULTIPLE
from mission.steady.level_flight import Answers, LevelFlight, Limit
from mission.steady.searching import falling_root, pick, spread, vertex

Array = NDArray[np.float64]
Flags = NDArray[np.bool_]
Limits = NDArray[np.int64]
Places = NDArray[np.int64]
POINTS = 17  # Mach numbers from the slowest to the fastest allowed
_SAME_MACH = 1e-9
_INSIDE = (
    1e-6  # Mach number by which the ends stand inside, where thrust is enough but for round-off
)


@dataclass(frozen=True)
class Ends:
    """Least and greatest Mach number (S) and the limits that they stand at."""

    slow: Array
    fast: Array
    slow_limit: Limits
    fast_limit: Limits


@dataclass(frozen=True)
class SpeedRange:
    """Level flight, found: arrays over the members S of ``flight``.

    Attributes
    ----------
    flight : what was asked about
    is_open : where there is a Mach number of level flight at all
    lack : for want of what there is none
    thrust_margin : thrust at the rating over drag, less one, at the speed that leaves most of it
        (or of lift before buffet, if that is less); NaN where the engine could not be asked
    ends : of the range around that speed, within the aircraft's limits, with thrust enough, off
        buffet
    greatest, greatest_limit : the greatest Mach number of all, which may lie beyond a gap
    rated : what the rating gives over all speeds within the aircraft's limits (17, S)
    """

    flight: LevelFlight
    is_open: Flags
    lack: Limits
    thrust_margin: Array
    ends: Ends
    greatest: Array
    greatest_limit: Limits
    rated: Answers

    @cached_property
    def curve(self) -> Answers:
        """Thrust equal to drag over the range (17, S)."""
        first = self.rated.mach[0]
        slow, fast = (
            np.where(self.is_open, end, first) for end in (self.ends.slow, self.ends.fast)
        )
        mach = spread(slow, fast, POINTS)
        return self.flight.level(mach, self.is_open, _nearest(self.rated, mach))

    def limit_at(self, mach: Array) -> Limits:
        """The limit that a Mach number (S) of the range stands at, or what none lacks."""
        ends = self.ends
        held = np.where(np.abs(mach - ends.slow) < _SAME_MACH, ends.slow_limit, Limit.NONE)
        held = np.where(np.abs(mach - ends.fast) < _SAME_MACH, ends.fast_limit, held)
        return np.where(self.is_open, held, self.lack)


def speed_range(flight: LevelFlight) -> SpeedRange:
    """Find the Mach numbers of level flight.

    It is looked for from 1.2 times the stall speed to the aircraft's greatest Mach number, airspeed
    and dynamic pressure, off buffet, below its ceiling, inside the tables of engine and polar, and
    faster than a headwind.
    """
    allowed = allowed_ends(flight)
    rated = rated_over(flight, allowed)
    margin = margins(flight, rated)
    best = np.argmax(margin, axis=0)
    is_open = pick(margin, best) >= 0.0
    ends, greatest, greatest_limit = _ends(flight, allowed, rated, best)
    lack = np.where(allowed.slow < allowed.fast, _why(flight, rated, best), allowed.slow_limit)
    lack = np.where(flight.is_below_ceiling, lack, Limit.CEILING)
    lack = np.where(flight.is_covered, lack, Limit.TABLE)
    best_thrust = pick(rated.thrust / rated.drag, best) - 1.0
    return SpeedRange(
        flight=flight,
        is_open=is_open,
        lack=np.where(is_open, Limit.NONE, lack),
        thrust_margin=np.where(pick(rated.is_met, best), best_thrust, np.nan),
        ends=ends,
        greatest=greatest,
        greatest_limit=greatest_limit,
        rated=rated,
    )


def operating_ends(flight: LevelFlight) -> Ends:
    """Slowest and fastest Mach number by the aircraft's limits and as far as its polar goes."""
    air, aircraft = flight.air, flight.aircraft
    airspeed = aircraft.maximum_operating_calibrated_airspeed
    stall = stall_mach(aircraft, air, flight.mass, aircraft.maximum_lift_coefficient)
    pressure = aircraft.maximum_dynamic_pressure / (0.7 * air.static_pressure)
    ends = Ends(
        slow=SLOWEST_STALL_MULTIPLE * stall,
        fast=np.full(air.shape, aircraft.maximum_operating_mach),
        slow_limit=np.full(air.shape, Limit.LIFT, dtype=np.int64),
        fast_limit=np.full(air.shape, Limit.OPERATING_MACH, dtype=np.int64),
    )
    by_airspeed = mach_from_calibrated_airspeed(airspeed, air.static_pressure)
    ends = _narrowed(ends, 0.0, by_airspeed, Limit.OPERATING_AIRSPEED)
    ends = _narrowed(ends, 0.0, np.sqrt(pressure), Limit.DYNAMIC_PRESSURE)
    if (known := buffet_mach_bounds(aircraft)) is not None:
        ends = _narrowed(ends, *known, Limit.BUFFET_TABLE)
    table = polar_coverage(aircraft.polar)
    if table is None:
        return ends
    least, most = table.lift_coefficient
    slow = stall_mach(aircraft, air, flight.mass, most)
    fast = stall_mach(aircraft, air, flight.mass, least) if least > 0.0 else np.inf
    return _narrowed(_narrowed(ends, *table.mach, Limit.POLAR), slow, fast, Limit.POLAR)


def allowed_ends(flight: LevelFlight) -> Ends:
    """The same, faster than a headwind and inside an engine's table."""
    still = (SLOWEST_GROUND_SPEED - flight.tailwind) / flight.air.speed_of_sound
    ends = _narrowed(operating_ends(flight), still, np.inf, Limit.GROUND_SPEED)
    table = flight.engine.coverage
    return ends if table is None else _narrowed(ends, *table.mach, Limit.TABLE)


def _narrowed(ends: Ends, slow: Array | float, fast: Array | float, limit: Limit) -> Ends:
    """Ends with another limit on both sides."""
    return Ends(
        slow=np.maximum(ends.slow, slow),
        fast=np.minimum(ends.fast, fast),
        slow_limit=np.where(ends.slow < slow, limit, ends.slow_limit),
        fast_limit=np.where(ends.fast > fast, limit, ends.fast_limit),
    )


def margins(flight: LevelFlight, found: Answers) -> Array:
    """What is left of thrust over drag and of lift before buffet, the lesser, less one.

    Minus infinity where the engine has no state. Buffet is kept off by the aircraft's load factor
    for it.
    """
    thrust = np.where(found.is_met, found.thrust / found.drag - 1.0, -np.inf)
    return np.minimum(thrust, buffet_margin(flight, found.mach))


def buffet_margin(flight: LevelFlight, mach: Array) -> Array:
    """Lift coefficient of buffet onset over that of the manoeuvre to keep off it, less one."""
    aircraft = flight.aircraft
    flown = lift_coefficient(aircraft, flight.air.with_mach(mach), flight.weight)
    onset = buffet_lift_coefficient(aircraft, mach)
    return np.asarray(onset / (aircraft.buffet_load_factor * flown) - 1.0)


def greatest_margin(flight: LevelFlight) -> Array:
    """The greatest of :func:`margins` at any speed; minus infinity where there is none.

    Exact in sign: where it is above zero it is that of a grid.
    """
    return np.asarray(np.max(margins(flight, rated_over(flight, allowed_ends(flight))), axis=0))


def near(found: Answers, place: Places) -> Array:
    """Unknowns (n, S) at the points (S) of a grid, where a call near by may start."""
    return np.take_along_axis(found.unknowns, place[None, None], axis=1)[:, 0]


def _nearest(rated: Answers, mach: Array) -> Array:
    """Unknowns (n, k, S) of the rated point that is nearest to each Mach number (k, S)."""
    first, last = rated.mach[0], rated.mach[-1]
    share = (mach - first) / np.where(last > first, last - first, 1.0)
    place = np.clip(np.rint(share * (POINTS - 1)), 0, POINTS - 1).astype(np.int64)
    return np.take_along_axis(rated.unknowns, place[None], axis=1)


def rated_over(flight: LevelFlight, allowed: Ends) -> Answers:
    """What the rating gives over all allowed Mach numbers.

    Where it is nowhere enough the best point is moved to where a parabola says that most is left:
    a range narrower than the grid is found so, and a shortage is the least there is.
    """
    is_allowed = (allowed.slow < allowed.fast) & flight.is_below_ceiling
    mach = spread(allowed.slow, np.maximum(allowed.fast, allowed.slow), POINTS)
    found = flight.at_rating(mach, is_allowed)
    margin = margins(flight, found)
    best = np.argmax(margin, axis=0)
    is_short = pick(found.is_met, best) & (pick(margin, best) < 0.0)
    if not is_short.any():
        return found
    tried = np.where(is_short, vertex(mach, -margin, best), pick(mach, best))[None]
    there = flight.at_rating(tried, is_short, near(found, best)[:, None])
    is_better = is_short & (margins(flight, there)[0] > pick(margin, best))
    here = (_places(best) == best) & is_better
    merged = {
        name: np.where(here, getattr(there, name), getattr(found, name))
        for name in found.__dataclass_fields__
    }
    return Answers(**merged)


def _places(like: Places) -> Places:
    """The places of the grid as a first axis before those of ``like``."""
    return np.arange(POINTS).reshape(-1, *(1,) * like.ndim)


def _why(flight: LevelFlight, rated: Answers, place: Places) -> Limits:
    """Why level flight is not possible at points (S) of the grid."""
    lack, mach = pick(rated.lack, place), pick(rated.mach, place)
    thrust = pick(rated.thrust / rated.drag, place) - 1.0
    short = np.where(buffet_margin(flight, mach) < thrust, Limit.BUFFET, Limit.THRUST)
    return np.where(lack == Limit.NONE, short, lack)


def _ends(
    flight: LevelFlight, allowed: Ends, rated: Answers, best: Places
) -> tuple[Ends, Array, Limits]:
    """Ends of the range around the best point; then the greatest Mach number and its limit."""
    is_level, place = margins(flight, rated) >= 0.0, _places(best)
    slower = np.max(np.where(~is_level & (place < best), place, -1), axis=0)
    faster = np.min(np.where(~is_level & (place > best), place, POINTS), axis=0)
    last = np.max(np.where(is_level, place, -1), axis=0)
    outside = np.stack([slower, faster, last + 1])
    inside = np.stack([slower + 1, faster - 1, last])
    is_cut = (outside >= 0) & (outside < POINTS) & pick(is_level, best)
    has_gap = outside[2] != outside[1]
    is_asked = is_cut & np.stack([np.ones_like(has_gap), np.ones_like(has_gap), has_gap])
    outside, inside = (np.clip(at, 0, POINTS - 1) for at in (outside, inside))
    slow, fast, last = _edges(flight, rated, inside, outside, is_asked)
    found = np.stack([slow + _INSIDE, fast - _INSIDE, np.where(has_gap, last, fast) - _INSIDE])
    whole = np.stack([allowed.slow, allowed.fast, allowed.fast])
    mach = np.where(is_cut, found, whole)
    whole_limits = np.stack([allowed.slow_limit, allowed.fast_limit, allowed.fast_limit])
    limit = np.where(is_cut, np.stack([_why(flight, rated, at) for at in outside]), whole_limits)
    return Ends(mach[0], mach[1], limit[0], limit[1]), mach[2], limit[2]


def _edges(
    flight: LevelFlight, rated: Answers, inside: Places, outside: Places, is_cut: Flags
) -> Array:
    """Mach numbers (e, S) at which thrust ends to be enough, each between two points (e, S)."""
    within, without = (
        np.stack([pick(rated.mach, at) for at in ends]) for ends in (inside, outside)
    )
    if not is_cut.any():
        return within
    without = np.where(is_cut, without, within)
    start = np.stack([near(rated, at) for at in inside], axis=1)[:, None]

    def margin(mach: Array) -> Array:
        begin = np.broadcast_to(start, (len(start), *mach.shape))
        return margins(flight, flight.at_rating(mach, np.broadcast_to(is_cut, mach.shape), begin))

    return falling_root(margin, within, without)
