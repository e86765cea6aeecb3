"""Levels that are best for something, at many masses at once."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from engine.atmosphere import SEA_LEVEL_PRESSURE, flight_condition
from engine.envelope import grid
from engine.interface import Engine
from engine.quantities import STANDARD_GRAVITY
from mission.march.seeking import LONG_RANGE_SHARE
from mission.questions.best_speeds import maximum_range_mach, range_about
from mission.questions.climbing import rate_about, rate_of_climb
from mission.questions.level_flight import LevelSpeed, Limit, Subject
from mission.questions.searching import (
    Function,
    falling_root,
    first_fall,
    least_between,
    pick,
    vertex,
)
from mission.questions.speed_range import speed_range

Array = NDArray[np.float64]
Flags = NDArray[np.bool_]
Limits = NDArray[np.int64]
HIGHEST = 20000.0  # m: where the search for a level ends
_STEP = 1000.0  # m: the tropopause, at which range has a kink, is a point of the grid
_CLOSE = 60.0  # m: between the last three levels


@dataclass(frozen=True)
class BestLevel:
    """Level of the greatest specific range, arrays over the masses S.

    Attributes
    ----------
    pressure_altitude : [m], NaN where no level can be flown
    speed : the speed of the greatest specific range at it
    weight_over_pressure_ratio : weight over ambient pressure in standard sea-level pressures [N]
    """

    pressure_altitude: Array
    speed: LevelSpeed
    weight_over_pressure_ratio: Array


@dataclass(frozen=True)
class ClimbLevel:
    """Highest level at which a rate of climb is left, arrays over the masses S.

    Attributes
    ----------
    pressure_altitude : [m]; NaN where the rate is met nowhere
    limit : :data:`Limit.NONE`; or for want of what the rate is met nowhere; or the end of the
        search (:data:`Limit.ALTITUDE`, :data:`Limit.TABLE`), where more than the rate is left
    """

    pressure_altitude: Array
    limit: Limits


def best_altitude(subject: Subject, mass: Array, *, rating: str = "cruise") -> BestLevel:
    """Level and speed of the greatest specific air range at masses [kg] (S).

    Found with ranges read off a parabola, then once more from three levels close together whose
    best speeds are found in full.
    """

    def cost(altitude: Array) -> Array:
        return -range_about(speed_range(subject.level_flight(altitude, mass, rating)))

    levels = _levels(subject.engine, mass)
    costs = cost(levels)
    best = np.argmin(costs, axis=0)
    low, high = (pick(levels, np.clip(best + step, 0, len(levels) - 1)) for step in (-1, 1))
    middle = np.clip(least_between(cost, low, high), low + _CLOSE, high - _CLOSE)
    close = np.stack([middle - _CLOSE, middle, middle + _CLOSE])
    ranges = _best_speed(subject, close, mass, rating).specific_air_range
    costs = np.where(np.isfinite(ranges), -ranges, np.inf)
    altitude = vertex(close, costs, np.argmin(costs, axis=0))
    speed = _best_speed(subject, altitude, mass, rating)
    pressure = flight_condition(altitude).static_pressure
    is_found = speed.is_flyable
    return BestLevel(
        pressure_altitude=np.where(is_found, altitude, np.nan),
        speed=speed,
        weight_over_pressure_ratio=np.where(
            is_found, mass * STANDARD_GRAVITY / (pressure / SEA_LEVEL_PRESSURE), np.nan
        ),
    )


def _best_speed(subject: Subject, altitude: Array, mass: Array, rating: str) -> LevelSpeed:
    return maximum_range_mach(speed_range(subject.level_flight(altitude, mass, rating)))


def range_shares(subject: Subject, mass: Array, altitude: Array, rating: str) -> Array:
    """Specific range at levels (k, S) over that at the first of them; zero where none is flown."""
    found = range_about(speed_range(subject.level_flight(altitude, mass, rating)))
    return found / np.where(found[0] > 0.0, found[0], 1.0)


def level_band(
    subject: Subject, mass: Array, altitude: Array, *, rating: str = "cruise"
) -> tuple[Array, Array]:
    """Lowest and highest level [m] at which specific range is 99 % of that at the best (S)."""
    best = range_about(speed_range(subject.level_flight(altitude, mass, rating)))

    def surplus(levels: Array) -> Array:
        found = range_about(speed_range(subject.level_flight(levels, mass, rating)))
        return np.where(found > 0.0, found / best / LONG_RANGE_SHARE - 1.0, -np.inf)

    levels = _levels(subject.engine, mass)
    values = surplus(levels)
    below, above = (
        first_fall(levels, values, altitude, levels[end], way)[:2]
        for end, way in ((0, -1.0), (-1, 1.0))
    )
    inside, outside = np.stack([below[0], above[0]]), np.stack([below[1], above[1]])
    low, high = falling_root(surplus, inside, outside)
    return low, high


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

    return _highest(surplus, _levels(subject.engine, mass), subject.engine)


def _highest(surplus: Function, levels: Array, engine: Engine) -> ClimbLevel:
    """The last level at which a surplus is not negative."""
    values = surplus(levels)
    is_enough = values >= 0.0
    last = len(levels) - 1 - np.argmax(is_enough[::-1], axis=0)
    is_met = is_enough.any(axis=0)
    low, high = (pick(levels, np.clip(last + step, 0, len(levels) - 1)) for step in (0, 1))
    found = np.where(low < high, falling_root(surplus, low, high), low)
    end = Limit.ALTITUDE if engine.coverage is None else Limit.TABLE
    limit = np.where(low < high, Limit.NONE, end)
    return ClimbLevel(np.where(is_met, found, np.nan), np.where(is_met, limit, Limit.THRUST))


def _levels(engine: Engine, mass: Array) -> Array:
    """Levels (k, S) [m] over all that is searched."""
    low, high = (0.0, HIGHEST) if engine.coverage is None else engine.coverage.pressure_altitude
    points = grid(low, min(high, HIGHEST), _STEP).reshape(-1, *(1,) * mass.ndim)
    return np.broadcast_to(points, (len(points), *mass.shape)).copy()
