"""The best cruise of an aircraft: level and speed against mass, and what lies around them."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from engine.envelope import grid
from engine.quantities import FOOT
from mission.march.seeking import LONG_RANGE_SHARE
from mission.steady.best_levels import (
    BestLevel,
    ClimbLevel,
    best_altitude,
    climb_level,
    range_shares,
    searched,
)
from mission.steady.best_speeds import (
    best_endurance_mach,
    least_cost_mach,
    long_range_mach,
    maximum_level_mach,
    maximum_range_mach,
    slow_range_mach,
)
from mission.steady.climbing import rate_of_climb
from mission.steady.level_flight import LevelSpeed, Subject
from mission.steady.searching import pick
from mission.steady.speed_range import SpeedRange, speed_range

Array = NDArray[np.float64]
CLIMB = "climb"
INITIAL_CRUISE = 300.0 * FOOT / 60.0  # m/s, left at climb rating: common practice, no source
CEILING = 100.0 * FOOT / 60.0  # m/s: the same
LEVELS_OFF = np.array([-4000.0, -2000.0, 2000.0, 4000.0]) * FOOT
# Levels below the best, and shares of the way up to the last, between which range is read along
# straight lines.
_DOWN = np.array([0, -1, -2, -3, -4, -5, -6, -8, -12, -20]) * 1000.0 * FOOT
_UP, _FURTHEST_UP = np.linspace(0.0, 1.0, 7)[1:], 8000.0 * FOOT
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

    def at(self, index: Any) -> Speeds:
        """The members picked by a NumPy index."""
        least_cost = None if self.least_cost is None else self.least_cost.at(index)
        return Speeds(
            self.maximum_range.at(index),
            self.long_range.at(index),
            self.endurance.at(index),
            self.greatest.at(index),
            least_cost,
            self.rate_of_climb[index],
        )


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
    levels = _shown_levels(subject, best)
    there = np.where(best.speed.is_flyable, best.pressure_altitude, searched(subject)[0])
    everywhere = np.concatenate([np.broadcast_to(levels[:, None], (levels.size, mass.size)),
                                 there[None]])  # fmt: skip
    ranges = speed_range(subject.level_flight(everywhere, mass, rating))
    speeds = _speeds(subject, ranges, cost_index)
    slow = slow_range_mach(ranges, speeds.maximum_range).at(-1)
    around = _around(subject, best, mass, rating)
    climbs = CLIMB in subject.engine.ratings
    mach = best.speed.mach
    return BestCruise(
        subject=subject,
        rating=rating,
        cost_index=cost_index,
        mass=mass,
        best=best,
        at_best=speeds.at(-1),
        level_band=_level_band(best, around),
        mach_band=(slow.mach, speeds.long_range.at(-1).mach),
        off_levels=around.off_share,
        initial_cruise=climb_level(subject, mass, INITIAL_CRUISE, mach=mach) if climbs else None,
        ceiling=climb_level(subject, mass, CEILING) if climbs else None,
        pressure_altitude=levels,
        at_levels=speeds.at(slice(None, -1)),
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


@dataclass(frozen=True)
class _Around:
    """Ranges at levels beside the best over that at it, zero where none is flown; arrays (k, M)."""

    down: Array
    down_share: Array
    up: Array
    up_share: Array
    off_share: Array


def _around(subject: Subject, best: BestLevel, mass: Array, rating: str) -> _Around:
    """Ranges from 20,000 ft below the best up to where level flight ends, in one go."""
    low, high, _ = searched(subject)
    known = best.speed.is_flyable
    centre = np.where(known, best.pressure_altitude, low)
    top = np.where(known, best.highest.inside, high)
    reach = np.clip(top - centre, 0.0, _FURTHEST_UP)
    wanted = centre + LEVELS_OFF[:, None]
    parts = [
        np.maximum(centre + _DOWN[:, None], low),
        centre + _UP[:, None] * reach,
        np.clip(wanted, low, high),
    ]
    down, up, off = np.split(
        range_shares(subject, mass, np.concatenate(parts), rating),
        [len(parts[0]), len(parts[0]) + len(parts[1])],
    )
    return _Around(
        down=parts[0],
        down_share=down,
        up=np.concatenate([parts[0][:1], parts[1]]),
        up_share=np.concatenate([down[:1], up]),
        off_share=np.where(parts[2] == wanted, off, 0.0),
    )


def _level_band(best: BestLevel, around: _Around) -> tuple[Array, Array]:
    """Lowest and highest levels [m] with 99 % of the best range."""
    known = best.speed.is_flyable
    down, up = _fall(around.down, around.down_share), _fall(around.up, around.up_share)
    return np.where(known, down, np.nan), np.where(known, up, np.nan)


def _fall(level: Array, share: Array) -> Array:
    """Where shares (k, M) first fall to 99 % along levels (k, M); the last level if they do not."""
    is_below = share < LONG_RANGE_SHARE
    falls = is_below.any(axis=0)
    after = np.where(falls, np.maximum(np.argmax(is_below, axis=0), 1), len(level) - 1)
    (x0, y0), (x1, y1) = ((pick(level, at), pick(share, at)) for at in (after - 1, after))
    drop = np.where(falls & (y0 > y1), y0 - y1, 1.0)
    way = np.where(falls, (y0 - LONG_RANGE_SHARE) / drop, 1.0)
    return np.asarray(x0 + np.clip(way, 0.0, 1.0) * (x1 - x0))


def _shown_levels(subject: Subject, best: BestLevel) -> Array:
    """Levels in steps of 2,000 ft, or of more, around the best of all masses."""
    low, high, _ = searched(subject)
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
