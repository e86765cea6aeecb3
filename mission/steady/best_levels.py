"""Levels that are best for something, at many masses at once."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from engine.atmosphere import SEA_LEVEL_PRESSURE, flight_condition
from engine.envelope import grid
from engine.quantities import STANDARD_GRAVITY
from mission.steady.best_speeds import maximum_range_mach, range_about
from mission.steady.climbing import rate_about, rate_of_climb
from mission.steady.level_flight import LevelSpeed, Limit, Subject
from mission.steady.searching import Function, falling_root, least_between, pick
from mission.steady.speed_range import SpeedRange, greatest_margin, speed_range

Array = NDArray[np.float64]
Flags = NDArray[np.bool_]
Limits = NDArray[np.int64]
HIGHEST = 20000.0  # m: where the search for a level ends
SEARCH_ENDS = (Limit.ALTITUDE, Limit.TABLE, Limit.CEILING)
_STEP = 1000.0  # m: the tropopause, at which range has a kink, is a point of the grid
_CLIMB_STEP = 2000.0  # m: rates of climb fall smoothly with altitude
_BELOW_TOP = 0.01  # m, for round-off of the thrust there
_AT_END = 1.0  # m


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

    @property
    def inside(self) -> Array:
        """The level [m] itself where the search ends at it, just below where thrust ends."""
        is_end = np.isin(self.limit, SEARCH_ENDS)
        return self.pressure_altitude - np.where(is_end, 0.0, _BELOW_TOP)


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

    @property
    def limit(self) -> Limits:
        """The end of the search that a level stands at, :data:`Limit.NONE` elsewhere."""
        is_at_end = self.pressure_altitude > self.highest.pressure_altitude - _AT_END
        return np.where(is_at_end, self.highest.limit, Limit.NONE)


def best_altitude(subject: Subject, mass: Array, *, rating: str = "cruise") -> BestLevel:
    """Level and speed of the greatest specific air range at masses [kg] (S).

    Looked for with ranges read off curves, up to the level where level flight ends.
    """

    def ranges(altitude: Array) -> SpeedRange:
        return speed_range(subject.level_flight(altitude, mass, rating))

    levels = _levels(subject, mass, _STEP)
    known = ranges(levels)
    highest = _highest_flown(subject, mass, rating, levels, np.where(known.is_open, 1.0, -1.0))
    top = np.where(np.isfinite(highest.pressure_altitude), highest.inside, levels[0])
    top = np.maximum(top, levels[0])
    best = np.argmax(range_about(known), axis=0)
    low, high = (pick(levels, np.clip(best + step, 0, len(levels) - 1)) for step in (-1, 1))
    altitude = least_between(lambda h: -range_about(ranges(h)), low, np.clip(high, low, top))
    speed = maximum_range_mach(ranges(altitude))
    is_found = speed.is_flyable
    share = flight_condition(altitude).static_pressure / SEA_LEVEL_PRESSURE
    return BestLevel(
        pressure_altitude=np.where(is_found, altitude, np.nan),
        speed=speed,
        weight_over_pressure_ratio=np.where(is_found, mass * STANDARD_GRAVITY / share, np.nan),
        highest=highest,
    )


def highest_level(subject: Subject, mass: Array, *, rating: str = "cruise") -> ClimbLevel:
    """Highest level of level flight at masses [kg] (S): thrust ends there, or allowed speeds do."""
    levels = _levels(subject, mass, _STEP)
    margin = greatest_margin(subject.level_flight(levels, mass, rating))
    return _highest_flown(subject, mass, rating, levels, margin)


def _highest_flown(
    subject: Subject, mass: Array, rating: str, levels: Array, margin: Array
) -> ClimbLevel:
    """The same from the signs of what is left at levels (k, S)."""

    def surplus(altitude: Array) -> Array:
        return greatest_margin(subject.level_flight(altitude, mass, rating))

    return _highest(surplus, levels, margin, searched(subject)[2])


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

    levels = _levels(subject, mass, _CLIMB_STEP)
    return _highest(surplus, levels, surplus(levels), searched(subject)[2])


def _highest(surplus: Function, levels: Array, values: Array, end: Limit) -> ClimbLevel:
    """The last level at which a surplus is not negative, from its values at levels (k, S)."""
    is_enough = values >= 0.0
    last = len(levels) - 1 - np.argmax(is_enough[::-1], axis=0)
    is_met = is_enough.any(axis=0)
    low, high = (pick(levels, np.clip(last + step, 0, len(levels) - 1)) for step in (0, 1))
    high = np.where(is_met, high, low)
    found = falling_root(surplus, low, high)
    limit = np.where(low < high, Limit.NONE, end)
    return ClimbLevel(np.where(is_met, found, np.nan), np.where(is_met, limit, Limit.THRUST))


def searched(subject: Subject) -> tuple[float, float, Limit]:
    """Lowest and highest level [m] at which anything is asked, and why not higher."""
    low, ends = 0.0, [(HIGHEST, Limit.ALTITUDE)]
    ends.append((subject.aircraft.maximum_pressure_altitude, Limit.CEILING))
    if subject.engine.coverage is not None:
        low, high = subject.engine.coverage.pressure_altitude
        ends.append((high, Limit.TABLE))
    return low, *min(ends)


def _levels(subject: Subject, mass: Array, step: float) -> Array:
    """Levels (k, S) [m] over all that is searched."""
    low, high, _ = searched(subject)
    points = grid(low, high, step).reshape(-1, *(1,) * mass.ndim)
    return np.broadcast_to(points, (len(points), *mass.shape)).copy()
