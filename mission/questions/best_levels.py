"""Levels that are best for something, at many masses at once."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from engine.atmosphere import SEA_LEVEL_PRESSURE, flight_condition
from engine.envelope import grid
from engine.quantities import STANDARD_GRAVITY
from mission.questions.best_speeds import maximum_range_mach, range_about
from mission.questions.climbing import rate_about, rate_of_climb
from mission.questions.level_flight import LevelSpeed, Limit, Subject, picked
from mission.questions.searching import (
    Function,
    falling_root,
    least_between,
    pick,
    vertex,
)
from mission.questions.speed_range import greatest_margin, speed_range

Array = NDArray[np.float64]
Flags = NDArray[np.bool_]
Limits = NDArray[np.int64]
HIGHEST = 20000.0  # m: where the search for a level ends
SEARCH_ENDS = (Limit.ALTITUDE, Limit.TABLE, Limit.CEILING)
_STEP = 1000.0  # m: the tropopause, at which range has a kink, is a point of the grid
_CLOSE = 60.0  # m: between the last three levels
BELOW_TOP = 0.01  # m, for round-off of the thrust there


@dataclass(frozen=True)
class ClimbLevel:
    """Highest level at which a rate of climb, or level flight, is left, arrays over the masses S.

    Attributes
    ----------
    pressure_altitude : [m]; NaN where there is no such level
    limit : :data:`Limit.NONE`; :data:`Limit.THRUST` where there is no such level; or the end of the
        search (:data:`Limit.ALTITUDE`, :data:`Limit.TABLE`, :data:`Limit.CEILING`), where more is
        left
    """

    pressure_altitude: Array
    limit: Limits


@dataclass(frozen=True)
class BestLevel:
    """Level of the greatest specific range, arrays over the masses S.

    Attributes
    ----------
    pressure_altitude : [m], NaN where no level can be flown
    speed : the speed of the greatest specific range at it
    weight_over_pressure_ratio : weight over ambient pressure in standard sea-level pressures [N]
    highest : the highest level of level flight at all
    """

    pressure_altitude: Array
    speed: LevelSpeed
    weight_over_pressure_ratio: Array
    highest: ClimbLevel


def best_altitude(subject: Subject, mass: Array, *, rating: str = "cruise") -> BestLevel:
    """Level and speed of the greatest specific air range at masses [kg] (S).

    Looked for up to the level where thrust ends, with ranges read off a parabola; then, with best
    speeds found in full, also at the vertex through three levels around what was found.
    """

    def cost(altitude: Array) -> Array:
        return -range_about(speed_range(subject.level_flight(altitude, mass, rating)))

    highest = highest_level(subject, mass, rating=rating)
    levels = _levels(subject, mass)
    is_open = np.isfinite(highest.pressure_altitude)
    top = np.where(is_open, highest.pressure_altitude - BELOW_TOP, levels[0])
    levels = np.minimum(levels, np.maximum(top, levels[0]))
    is_again = np.concatenate([np.zeros_like(levels[:1], dtype=bool), levels[1:] == levels[:-1]])
    best = np.argmin(np.where(is_again, np.inf, cost(levels)), axis=0)
    low, high = (pick(levels, np.clip(best + step, 0, len(levels) - 1)) for step in (-1, 1))
    found = least_between(cost, low, high)
    step = np.minimum(_CLOSE, 0.5 * (high - low))
    middle = np.clip(found, low + step, high - step)
    close = np.stack([middle - step, middle, middle + step])
    costs = _full_cost(_best_speed(subject, close, mass, rating))
    tried = np.stack([vertex(close, costs, np.argmin(costs, axis=0)), found])
    speeds = _best_speed(subject, tried, mass, rating)
    better = np.argmin(_full_cost(speeds), axis=0)
    speed = picked(speeds, better)
    altitude = np.where(speed.is_flyable, pick(tried, better), np.nan)
    pressure = flight_condition(np.where(speed.is_flyable, altitude, 0.0)).static_pressure
    ratio = mass * STANDARD_GRAVITY * SEA_LEVEL_PRESSURE / pressure
    return BestLevel(altitude, speed, np.where(speed.is_flyable, ratio, np.nan), highest)


def _full_cost(speed: LevelSpeed) -> Array:
    """The negative of specific air range, infinite where there is no level flight."""
    return np.where(speed.is_flyable, -speed.specific_air_range, np.inf)


def highest_level(subject: Subject, mass: Array, *, rating: str = "cruise") -> ClimbLevel:
    """Highest level of level flight at masses [kg] (S): thrust ends there, or allowed speeds do."""

    def surplus(altitude: Array) -> Array:
        return greatest_margin(subject.level_flight(altitude, mass, rating))

    return _highest(surplus, _levels(subject, mass), subject)


def _best_speed(subject: Subject, altitude: Array, mass: Array, rating: str) -> LevelSpeed:
    return maximum_range_mach(speed_range(subject.level_flight(altitude, mass, rating)))


def range_shares(subject: Subject, mass: Array, altitude: Array, rating: str) -> Array:
    """Specific range at levels (k, S) over that at the first of them; zero where none is flown."""
    found = range_about(speed_range(subject.level_flight(altitude, mass, rating)))
    return found / np.where(found[0] > 0.0, found[0], 1.0)


def climb_level(
    subject: Subject, mass: Array, rate: float, *, mach: Array | None = None, rating: str = "climb"
) -> ClimbLevel:
    """Highest level at which a rate of climb [m/s] is left at a rating.

    At Mach numbers (S) where they are given, otherwise at the speed that climbs best.
    """

    def surplus(altitude: Array) -> Array:
        flight = subject.level_flight(altitude, mass, rating)
        if mach is None:
            return rate_about(flight) / rate - 1.0
        asked = np.broadcast_to(mach, altitude.shape)[None]
        rates: Array = rate_of_climb(flight, flight.at_rating(asked, np.isfinite(asked)))[0]
        return rates / rate - 1.0

    return _highest(surplus, _levels(subject, mass), subject)


def _highest(surplus: Function, levels: Array, subject: Subject) -> ClimbLevel:
    """The last level at which a surplus is not negative."""
    values = surplus(levels)
    is_enough = values >= 0.0
    last = len(levels) - 1 - np.argmax(is_enough[::-1], axis=0)
    is_met = is_enough.any(axis=0)
    low, high = (pick(levels, np.clip(last + step, 0, len(levels) - 1)) for step in (0, 1))
    found = np.where(low < high, falling_root(surplus, low, high), low)
    limit = np.where(low < high, Limit.NONE, searched(subject)[2])
    return ClimbLevel(np.where(is_met, found, np.nan), np.where(is_met, limit, Limit.THRUST))


def searched(subject: Subject) -> tuple[float, float, Limit]:
    """Lowest and highest level [m] at which anything is asked, and why not higher."""
    low, ends = 0.0, [(HIGHEST, Limit.ALTITUDE)]
    ends.append((subject.aircraft.maximum_pressure_altitude, Limit.CEILING))
    if subject.engine.coverage is not None:
        low, high = subject.engine.coverage.pressure_altitude
        ends.append((high, Limit.TABLE))
    return low, *min(ends)


def _levels(subject: Subject, mass: Array) -> Array:
    """Levels (k, S) [m] over all that is searched."""
    low, high, _ = searched(subject)
    points = grid(low, high, _STEP).reshape(-1, *(1,) * mass.ndim)
    return np.broadcast_to(points, (len(points), *mass.shape)).copy()
