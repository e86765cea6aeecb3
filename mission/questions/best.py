"""The best cruise of an aircraft: level and speed against mass, and what lies around them."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from engine.envelope import grid
from engine.quantities import FOOT
from mission.questions.best_levels import (
    HIGHEST,
    BestLevel,
    ClimbLevel,
    best_altitude,
    climb_level,
    level_band,
    range_shares,
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
from mission.questions.searching import pick
from mission.questions.speed_range import speed_range

Array = NDArray[np.float64]
LEVELS_OFF = (-4000.0 * FOOT, -2000.0 * FOOT, 2000.0 * FOOT, 4000.0 * FOOT)
INITIAL_CRUISE = 300.0 * FOOT / 60.0  # m/s, left at climb rating: common practice, no source
CEILING = 100.0 * FOOT / 60.0  # m/s: the same
CLIMB = "climb"
_LEVEL_STEP = 2000.0 * FOOT
_BELOW, _ABOVE = 6000.0 * FOOT, 2000.0 * FOOT  # the best levels, of the levels shown
_MOST_LEVELS = 12


@dataclass(frozen=True)
class AtLevels:
    """Speeds at levels (L), of one mass; ``least_cost`` only where time or wind costs.

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
    long_range, least_cost : speeds at that level (M); least cost only where time or wind costs
    off_levels : specific air range 4,000 and 2,000 ft below and above the best, over that at the
        best, (4, M); zero where there is no level flight
    initial_cruise : highest level at which the climb rating leaves 300 ft/min at the speed of the
        best, None without such a rating
    ceiling : where it leaves 100 ft/min at the speed of best climb, None as above
    middle : index of the mass that the rest is about
    level_band : lowest and highest level [m] with 99 % of the range at the best, NaN if none
    mach_band : slowest and fastest Mach number with 99 % of it, at the level of the best
    pressure_altitude : levels (L,) [m]
    ranges : the speeds of maximum range at levels and masses (L, M)
    at_levels : speeds at levels of the middle mass (L)
    """

    subject: Subject
    rating: str
    cost_index: float
    mass: Array
    best: BestLevel
    long_range: LevelSpeed
    least_cost: LevelSpeed | None
    off_levels: Array
    initial_cruise: ClimbLevel | None
    ceiling: ClimbLevel | None
    middle: int
    level_band: tuple[float, float]
    mach_band: tuple[float, float]
    pressure_altitude: Array
    ranges: LevelSpeed
    at_levels: AtLevels


def best_cruise(
    subject: Subject, mass: Array, cost_index: float = 0.0, *, rating: str = "cruise"
) -> BestCruise:
    """Find the best levels and speeds at masses [kg], time costing ``cost_index`` [kg/s]."""
    mass = np.sort(mass)
    best = best_altitude(subject, mass, rating=rating)
    is_found = best.speed.is_flyable
    known = np.where(is_found, best.pressure_altitude, 0.0)
    there = speed_range(subject.level_flight(known, mass, rating))
    wants_cost = bool(cost_index or np.any(subject.air.tailwind))
    long_range = long_range_mach(there, best.speed)
    middle = mass.size // 2
    climbs = CLIMB in subject.engine.ratings
    levels = _shown_levels(subject, best)
    return BestCruise(
        subject=subject,
        rating=rating,
        cost_index=cost_index,
        mass=mass,
        best=best,
        long_range=long_range,
        least_cost=least_cost_mach(there, cost_index) if wants_cost else None,
        off_levels=_off_levels(subject, best, mass, rating),
        initial_cruise=climb_level(subject, mass, INITIAL_CRUISE, mach=best.speed.mach)
        if climbs
        else None,
        ceiling=climb_level(subject, mass, CEILING) if climbs else None,
        middle=middle,
        level_band=_level_band(subject, best, mass, middle, rating),
        mach_band=(
            float(slow_range_mach(there, best.speed).mach[middle]),
            float(long_range.mach[middle]),
        ),
        pressure_altitude=levels,
        ranges=maximum_range_mach(speed_range(subject.level_flight(levels[:, None], mass, rating))),
        at_levels=_at_levels(
            subject, levels, mass[middle], rating, cost_index if wants_cost else None
        ),
    )


def _off_levels(subject: Subject, best: BestLevel, mass: Array, rating: str) -> Array:
    """Specific air range at the levels beside the best over that at the best."""
    low, high = _searched(subject)
    centre = np.where(best.speed.is_flyable, best.pressure_altitude, low)
    levels = centre + np.array([0.0, *LEVELS_OFF])[:, None]
    inside = np.clip(levels, low, high)
    shares = range_shares(subject, mass, inside, rating)
    return np.where(levels == inside, shares, 0.0)[1:]


def _level_band(
    subject: Subject, best: BestLevel, mass: Array, middle: int, rating: str
) -> tuple[float, float]:
    if not best.speed.is_flyable[middle]:
        return (float("nan"), float("nan"))
    low, high = level_band(subject, mass[middle], best.pressure_altitude[middle], rating=rating)
    return float(low), float(high)


def _searched(subject: Subject) -> tuple[float, float]:
    """Lowest and highest level [m] at which anything is asked."""
    table = subject.engine.coverage
    low, high = (0.0, HIGHEST) if table is None else table.pressure_altitude
    return low, min(high, HIGHEST)


def _shown_levels(subject: Subject, best: BestLevel) -> Array:
    """Levels in steps of 2,000 ft, or of more, around the best of all masses."""
    low, high = _searched(subject)
    found = best.pressure_altitude[best.speed.is_flyable]
    if found.size:
        low = max(low, float(found.min()) - _BELOW)
        high = min(high, float(found.max()) + _ABOVE)
    step = _LEVEL_STEP
    while (high - low) / step > _MOST_LEVELS:
        step += _LEVEL_STEP
    levels = grid(low, high, step)
    inside = levels[np.abs(levels / step - np.rint(levels / step)) < 1e-6]
    return inside if inside.size else levels


def _at_levels(
    subject: Subject, levels: Array, mass: float, rating: str, cost_index: float | None
) -> AtLevels:
    """Every best speed at levels, of one mass."""
    speeds = speed_range(subject.level_flight(levels, np.asarray(mass), rating))
    best = maximum_range_mach(speeds)
    rate = np.full(levels.shape, np.nan)
    if CLIMB in subject.engine.ratings:
        climb = subject.level_flight(levels, np.asarray(mass), CLIMB)
        mach = np.where(best.is_flyable, best.mach, 0.5)
        rate = rate_of_climb(climb, climb.at_rating(mach[None], best.is_flyable))[0]
    return AtLevels(
        maximum_range=best,
        long_range=long_range_mach(speeds, best),
        endurance=best_endurance_mach(speeds),
        greatest=maximum_level_mach(speeds),
        least_cost=None if cost_index is None else least_cost_mach(speeds, cost_index),
        rate_of_climb=np.where(np.isfinite(rate), rate, np.nan),
    )
