"""Where a climb may fly: between its slowest and fastest speed, its lowest and highest altitude.

Everything is tabulated once over pressure altitude, every 5 m, and straight lines lie between:
speeds at a bound are right to 1e-6 of themselves, but for the last 5 m below an altitude where the
slowest speed meets the fastest. Height is geometric: on a day that is not standard it grows with
pressure altitude by the ratio of static temperature to the standard one, and is counted from
pressure altitude 0. Energy height is that height plus ``V^2 / 2g``.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import ArrayLike, NDArray

from engine.atmosphere import FlightCondition
from engine.errors import InputRefused
from engine.quantities import STANDARD_GRAVITY
from mission.airspeeds import energy_height
from mission.paths.bounds import (
    Bounds,
    fastest_machs,
    highest_altitudes,
    lowest_altitudes,
    slowest_machs,
)
from mission.paths.climber import Climber

Array = NDArray[np.float64]
Names = NDArray[np.str_]
_KINKS = {  # m, ISO 2533:1975, where the lapse of standard temperature changes
    11000.0: "tropopause",
    20000.0: "where the stratosphere begins to warm",
}
_STEP = 5.0  # m


@dataclass(frozen=True)
class Edges:
    """The two ends of lines of speed: true airspeeds [m/s] and what bounds them, in one shape.

    A line is open where the greatest speed allowed is not below the least one needed.
    """

    slow: Array
    fast: Array
    slow_by: Names
    fast_by: Names
    is_open: NDArray[np.bool_]


@dataclass(frozen=True)
class Corridor:
    """A climber's bounds over pressure altitude, n values from the lowest to the highest.

    Attributes
    ----------
    pressure_altitude, height : [m]
    slowest, fastest : true airspeeds [m/s]
    slow_by, fast_by : names of what bounds them
    low_by, high_by : names of what bounds altitude
    kinks : pressure altitudes [m] between the ends at which the air has a kink, rising, (k,)
    """

    climber: Climber
    pressure_altitude: Array
    height: Array
    slowest: Array
    fastest: Array
    slow_by: Names
    fast_by: Names
    low_by: str
    high_by: str
    kinks: Array

    @cached_property
    def _slow_energy(self) -> Array:
        return np.maximum.accumulate(energy_height(self.height, self.slowest))

    @cached_property
    def _fast_energy(self) -> Array:
        """Made to rise, by the lower one, where a fast aircraft's would fall with altitude."""
        energy = energy_height(self.height, self.fastest)
        return np.minimum.accumulate(energy[::-1])[::-1]

    def height_at(self, pressure_altitude: ArrayLike) -> Array:
        """Geometric height [m]."""
        return np.interp(_array(pressure_altitude), self.pressure_altitude, self.height)

    def energy_at(self, pressure_altitude: ArrayLike, true_airspeed: ArrayLike) -> Array:
        """Energy height [m] at a pressure altitude [m] and true airspeed [m/s]."""
        return energy_height(self.height_at(pressure_altitude), true_airspeed)

    def altitude_at(self, energy: ArrayLike, true_airspeed: ArrayLike) -> Array:
        """Pressure altitude [m] at an energy height [m] and true airspeed [m/s]."""
        height = _array(energy) - energy_height(0.0, true_airspeed)
        return np.interp(height, self.height, self.pressure_altitude)

    def airspeed_at(self, energy: ArrayLike, pressure_altitude: ArrayLike) -> Array:
        """True airspeed [m/s] at an energy height [m] and pressure altitude [m]; 0 above it."""
        kinetic = _array(energy) - self.height_at(pressure_altitude)
        return np.sqrt(2.0 * STANDARD_GRAVITY * np.maximum(kinetic, 0.0))

    def flight(self, pressure_altitude: Array, true_airspeed: Array) -> FlightCondition:
        """Flight condition at pressure altitudes [m] and true airspeeds [m/s]."""
        air = self.climber.air(pressure_altitude, np.zeros(np.shape(pressure_altitude)))
        return air.with_mach(true_airspeed / air.speed_of_sound)

    def energy_of(self, pressure_altitude: float, mach: float) -> float:
        """Energy height [m] of a state; InputRefused where the altitude is outside the corridor."""
        low, high = self.pressure_altitude[[0, -1]]
        if not low - 1e-6 <= pressure_altitude <= high + 1e-6:
            is_low = pressure_altitude < low
            raise InputRefused(
                f"pressure altitude = {pressure_altitude:g} m is {'below' if is_low else 'above'} "
                f"{low if is_low else high:g} m, the {self.low_by if is_low else self.high_by}"
            )
        air = self.climber.air(np.array(pressure_altitude), np.array(mach))
        return float(self.energy_at(pressure_altitude, air.true_airspeed))

    def layer(self, pressure_altitude: Array) -> NDArray[np.int64]:
        """Which layer of the air, between its kinks, pressure altitudes [m] are in."""
        return np.searchsorted(self.kinks, pressure_altitude)

    def lowest(self, energy: ArrayLike) -> Array:
        """Lowest pressure altitude [m], at which an energy height [m] is flown fastest."""
        return np.interp(_array(energy), self._fast_energy, self.pressure_altitude)

    def highest(self, energy: ArrayLike) -> Array:
        """Highest pressure altitude [m], at which an energy height [m] is flown slowest."""
        return np.interp(_array(energy), self._slow_energy, self.pressure_altitude)

    def energy_edges(self, energy: Array) -> Edges:
        """The ends of lines of constant energy height [m]."""
        low, high = self.lowest(energy), self.highest(energy)
        slow, fast = self.airspeed_at(energy, high), self.airspeed_at(energy, low)
        slow = np.where(energy < self._slow_energy[0], self.slowest[0], slow)
        fast = np.where(energy > self._fast_energy[-1], self.fastest[-1], fast)
        return Edges(
            slow=slow,
            fast=fast,
            slow_by=np.where(
                energy >= self._slow_energy[-1], self.high_by, self._named(self.slow_by, high)
            ),
            fast_by=np.where(
                energy <= self._fast_energy[0], self.low_by, self._named(self.fast_by, low)
            ),
            is_open=fast >= slow,
        )

    def altitude_edges(self, pressure_altitude: Array) -> Edges:
        """The ends of lines of constant pressure altitude [m]."""
        slow, fast = (
            np.interp(pressure_altitude, self.pressure_altitude, speeds)
            for speeds in (self.slowest, self.fastest)
        )
        return Edges(
            slow=slow,
            fast=fast,
            slow_by=self._named(self.slow_by, pressure_altitude),
            fast_by=self._named(self.fast_by, pressure_altitude),
            is_open=fast >= slow,
        )

    def _named(self, names: Names, pressure_altitude: Array) -> Names:
        here = np.searchsorted(self.pressure_altitude, pressure_altitude)
        return names[np.minimum(here, names.size - 1)]


def corridor_of(climber: Climber) -> Corridor:
    """The corridor of a climb; its bounds are those of :mod:`mission.paths.bounds`."""
    lowest, highest = lowest_altitudes(climber), highest_altitudes(climber)
    low_by, high_by = max(lowest, key=lowest.__getitem__), min(highest, key=highest.__getitem__)
    low, high = lowest[low_by], highest[high_by]
    if low >= high:
        raise InputRefused(
            f"{low_by} = {low:g} m is not below {high:g} m, the {high_by}: there is nothing to "
            "climb in between"
        )
    altitude, height = _column(climber, low, high)
    air = climber.air(altitude, np.zeros(altitude.size))
    slowest, slow_by = _greatest(slowest_machs(climber, air))
    fastest, fast_by = _least(fastest_machs(climber, air))
    return Corridor(
        climber=climber,
        pressure_altitude=altitude,
        height=height,
        slowest=slowest * air.speed_of_sound,
        fastest=fastest * air.speed_of_sound,
        slow_by=slow_by,
        fast_by=fast_by,
        low_by=low_by,
        high_by=high_by,
        kinks=np.array([kink for kink in _kinks(climber) if low < kink < high]),
    )


def _array(values: ArrayLike) -> Array:
    return np.asarray(values, dtype=np.float64)


def kink_name(pressure_altitude: float) -> str:
    """What is special about a pressure altitude [m] at which the air has a kink."""
    return _KINKS.get(pressure_altitude, "change of the air with altitude")


def _kinks(climber: Climber) -> list[float]:
    return sorted({*_KINKS, *climber.air_kinks})


def _column(climber: Climber, low: float, high: float) -> tuple[Array, Array]:
    """Pressure altitudes [m] from one to another, and geometric height [m] there."""
    bottom = min(low, 0.0)
    count = int(np.ceil((high - bottom) / _STEP)) + 2
    marks = [mark for mark in (0.0, low, *_kinks(climber)) if bottom <= mark <= high]
    altitude = np.union1d(np.linspace(bottom, high, count), marks)
    air = climber.air(altitude, np.zeros(altitude.size))
    stretch = air.static_temperature / (air.static_temperature - air.temperature_deviation)
    rise = 0.5 * (stretch[1:] + stretch[:-1]) * np.diff(altitude)
    height = np.concatenate([[0.0], np.cumsum(rise)])
    height -= np.interp(0.0, altitude, height)
    is_inside = altitude >= low
    return altitude[is_inside], height[is_inside]


def _least(bounds: Bounds) -> tuple[Array, Names]:
    """The least of some bounds everywhere, and its name."""
    stacked = np.array(list(bounds.values()))
    return stacked.min(axis=0), np.array(list(bounds))[stacked.argmin(axis=0)]


def _greatest(bounds: Bounds) -> tuple[Array, Names]:
    """The greatest of some bounds everywhere, and its name."""
    stacked = np.array(list(bounds.values()))
    return stacked.max(axis=0), np.array(list(bounds))[stacked.argmax(axis=0)]
