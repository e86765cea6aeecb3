"""The best cruise of an aircraft: level and speed against mass, and what lies around them."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from engine.envelope import grid
from engine.quantities import FOOT
from mission.march.seeking import LONG_RANGE_SHARE
from mission.questions.best_levels import (
    BestLevel,
    ClimbLevel,
    best_altitude,
    climb_level,
    range_shares,
    searched,
)
from mission.questions.best_speeds import (
    best_endurance_mach,
    least_cost_mach,
    long_range_mach,
    maximum_level_mach,
    maximum_range_mach,
    slow_range_mach,
)
from mission.questions.climbing import rate_of_climb
from mission.questions.level_flight import LevelSpeed, Subject
from mission.questions.speed_range import SpeedRange, speed_range

Array = NDArray[np.float64]
CLIMB = "climb"
INITIAL_CRUISE = 300.0 * FOOT / 60.0  # m/s, left at climb rating: common practice, no source
CEILING = 100.0 * FOOT / 60.0  # m/s: the same
LEVELS_OFF = np.array([-4000.0, -2000.0, 2000.0, 4000.0]) * FOOT
# Levels beside the best between which range is read along straight lines, to some 50 ft.
_AROUND = np.array([0, -1, 1, -2, 2, -3, 3, -4, 4, -5, -6, 6, -8, 8, -12, -16, -20]) * 1000.0 * FOOT
_LEVEL_STEP = 2000.0 * FOOT
_BELOW, _ABOVE = 6000.0 * FOOT, 2000.0 * FOOT  # the best levels, of the levels shown
_MOST_LEVELS = 12


@dataclass(frozen=True)
class Speeds:
    """Best speeds, arrays of one shape; ``least_cost`` only where time or wind costs.

    ``rate_of_climb`` [m/s] is what the climb rating leaves at the speed of maximum range; NaN where
    there is none.
    """

    maximum_range: LevelSpeed
    long_range: LevelSpeed
    endurance: LevelSpeed
    greatest: LevelSpeed
    least_cost: LevelSpeed | None
    rate_of_climb: Array


@dataclass(frozen=True)
class BestCruise:
    """What is best, for masses (M) and levels (L).

    Attributes
    ----------
    subject, rating : what was asked about, and what bounds the thrust of level flight
    cost_index : of time [kg/s]
    mass : rising [kg], (M,)
    best : level and speed of the greatest specific air range (M)
    at_best : speeds at that level (M)
    level_band : lowest and highest level [m] with 99 % of that range, each at its best speed (M)
    mach_band : slowest and fastest Mach number with 99 % of it, at the best level (M)
    off_levels : specific air range at the levels that differ by :data:`LEVELS_OFF`, over that at
        the best, (4, M); zero where there is no level flight
    initial_cruise : highest level at which the climb rating leaves 300 ft/min at the Mach number
        of the best, None without such a rating
    ceiling : where it leaves 100 ft/min at the speed of best climb, None as above
    pressure_altitude : levels (L,) [m]
    at_levels : speeds at levels and masses (L, M)
    """

    subject: Subject
    rating: str
    cost_index: float
    mass: Array
    best: BestLevel
    at_best: Speeds
    level_band: tuple[Array, Array]
    mach_band: tuple[Array, Array]
    off_levels: Array
    initial_cruise: ClimbLevel | None
    ceiling: ClimbLevel | None
    pressure_altitude: Array
    at_levels: Speeds

    @property
    def middle(self) -> int:
        """Index of the mass that stands for all."""
        return self.mass.size // 2


def best_cruise(
    subject: Subject, mass: Array, cost_index: float = 0.0, *, rating: str = "cruise"
) -> BestCruise:
    """Find the best levels and speeds at masses [kg], time costing ``cost_index`` [kg/s]."""
    mass = np.sort(mass)
    best = best_altitude(subject, mass, rating=rating)
    there = np.where(best.speed.is_flyable, best.pressure_altitude, searched(subject.engine)[0])
    ranges = speed_range(subject.level_flight(there, mass, rating))
    at_best = _speeds(subject, ranges, cost_index)
    slow = slow_range_mach(ranges, at_best.maximum_range)
    shares = _shares_around(subject, there, mass, rating)
    levels = _shown_levels(subject, best)
    climbs = CLIMB in subject.engine.ratings
    mach = best.speed.mach
    return BestCruise(
        subject=subject,
        rating=rating,
        cost_index=cost_index,
        mass=mass,
        best=best,
        at_best=at_best,
        level_band=_level_band(best, shares),
        mach_band=(slow.mach, at_best.long_range.mach),
        off_levels=np.stack([shares[off == _AROUND][0] for off in LEVELS_OFF]),
        initial_cruise=climb_level(subject, mass, INITIAL_CRUISE, mach=mach) if climbs else None,
        ceiling=climb_level(subject, mass, CEILING) if climbs else None,
        pressure_altitude=levels,
        at_levels=_speeds(
            subject, speed_range(subject.level_flight(levels[:, None], mass, rating)), cost_index
        ),
    )


def _speeds(subject: Subject, ranges: SpeedRange, cost_index: float) -> Speeds:
    """Every best speed."""
    best = maximum_range_mach(ranges)
    costs = bool(cost_index or np.any(subject.air.tailwind))
    return Speeds(
        maximum_range=best,
        long_range=long_range_mach(ranges, best),
        endurance=best_endurance_mach(ranges),
        greatest=maximum_level_mach(ranges),
        least_cost=least_cost_mach(ranges, cost_index) if costs else None,
        rate_of_climb=_rate_left(subject, ranges, best),
    )


def _rate_left(subject: Subject, ranges: SpeedRange, best: LevelSpeed) -> Array:
    """Rate of climb [m/s] that the climb rating leaves at best speeds; NaN where none."""
    if CLIMB not in subject.engine.ratings:
        return np.full(best.mach.shape, np.nan)
    flight = ranges.flight
    climb = subject.level_flight(flight.air.pressure_altitude, flight.mass, CLIMB)
    mach = np.where(best.is_flyable, best.mach, ranges.rated.mach[0])
    rate = rate_of_climb(climb, climb.at_rating(mach[None], best.is_flyable))[0]
    return np.where(np.isfinite(rate), rate, np.nan)


def _shares_around(subject: Subject, best: Array, mass: Array, rating: str) -> Array:
    """Specific air range beside the best level over that at it; zero where none is flown."""
    low, high = searched(subject.engine)
    levels = best + _AROUND[:, None]
    inside = np.clip(levels, low, high)
    return np.where(levels == inside, range_shares(subject, mass, inside, rating), 0.0)


def _level_band(best: BestLevel, shares: Array) -> tuple[Array, Array]:
    """Levels [m] at which range has fallen to 99 %, or where level flight ends before."""
    order = np.argsort(_AROUND)
    off, share = _AROUND[order], shares[order]
    centre = int(np.flatnonzero(off == 0.0)[0])
    down = _fall(off[centre::-1], share[centre::-1])
    up = _fall(off[centre:], share[centre:])
    at = best.pressure_altitude
    return at + down, np.minimum(at + up, best.highest.pressure_altitude)


def _fall(off: Array, share: Array) -> Array:
    """Where shares (k, M) first fall to 99 % along ``off`` (k,), on straight lines.

    Where they end before they fall, the first place without one; where they never do, the last.
    """
    is_below = share < LONG_RANGE_SHARE
    after = np.where(is_below.any(axis=0), np.argmax(is_below, axis=0), len(off) - 1)
    after = np.maximum(after, 1)
    before = after - 1
    member = np.arange(share.shape[1])
    first, last = share[before, member], share[after, member]
    ends = (last <= 0.0) | (first <= last)
    way = np.where(ends, 1.0, (first - LONG_RANGE_SHARE) / np.where(ends, 1.0, first - last))
    return np.asarray(off[before] + np.clip(way, 0.0, 1.0) * (off[after] - off[before]))


def _shown_levels(subject: Subject, best: BestLevel) -> Array:
    """Levels in steps of 2,000 ft, or of more, around the best of all masses."""
    low, high = searched(subject.engine)
    found = best.pressure_altitude[best.speed.is_flyable]
    if found.size:
        low = max(low, float(found.min()) - _BELOW)
        high = min(high, float(found.max()) + _ABOVE)
    step = _LEVEL_STEP
    while (high - low) / step > _MOST_LEVELS:
        step += _LEVEL_STEP
    levels = grid(low, high, step)
    is_round = np.abs(levels / step - np.rint(levels / step)) < 1e-6
    return levels[is_round] if is_round.any() else levels
