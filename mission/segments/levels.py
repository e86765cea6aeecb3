"""Levels chosen for a cruise: the best one at a mass, and the masses at which the next is better.

A level is a flight level at a whole thousand feet. What makes it better is the purpose of the
cruise's speed: specific range over the ground, or cost, or speed itself. A level counts only where
300 ft/min of climb are still there at its speed (common practice, no source).
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from engine.envelope import grid
from engine.quantities import FOOT
from mission.aircraft import Aircraft
from mission.errors import CannotBeFlown
from mission.march.span import Configuration, SpeedRule
from mission.segments.here import Here
from mission.steady.best_speeds import (
    best_endurance_mach,
    least_cost_mach,
    long_range_mach,
    maximum_level_mach,
    maximum_range_mach,
)
from mission.steady.climbing import rate_of_climb
from mission.steady.level_flight import LevelFlight, LevelSpeed, Limit
from mission.steady.speed_range import speed_range

if TYPE_CHECKING:
    from mission.segments.cruise import Cruise

Array = NDArray[np.float64]
LEAST_CLIMB = 300.0 * FOOT / 60.0  # m/s left at a level that is worth choosing
SPACING = 1000.0 * FOOT
_LOWEST, _HIGHEST = 10000.0 * FOOT, 60000.0 * FOOT
_COARSE = 4  # levels at a stride, first
_MASS_THAT_MATTERS = 5e-3  # relative: the best level moves by 100 ft with it
_UNKNOWN = 25000.0 * FOOT  # before any mass is known
_BEST = {
    "maximum_range": maximum_range_mach,
    "long_range": long_range_mach,
    "maximum_level": maximum_level_mach,
    "least_fuel": best_endurance_mach,
}


@dataclass(frozen=True)
class Merits:
    """What levels are worth, arrays (levels, masses).

    ``merit`` is the better the greater, minus infinity where the level cannot be flown; ``climb``
    the rate left there [m/s]; ``mach`` the speed flown.
    """

    merit: Array
    climb: Array
    mach: Array


def configured(aircraft: Aircraft, configuration: Configuration) -> Aircraft:
    """The aircraft with its drag and its running engines as configured; dead ones do not drag."""
    return replace(
        aircraft,
        engine_count=aircraft.engine_count - configuration.engines_out,
        drag_factor=aircraft.drag_factor * configuration.drag_factor,
        fuel_flow_factor=aircraft.fuel_flow_factor * configuration.fuel_flow_factor,
        external_drag_area=aircraft.external_drag_area + configuration.drag_area,
    )


def merits(here: Here, speed: SpeedRule, rating: str, levels: Array, masses: Array) -> Merits:
    """What levels (L,) [m] are worth at masses (M,) [kg] in the air of the leg."""
    altitude, mass = np.broadcast_arrays(levels[:, None], masses[None, :])
    flight = LevelFlight(
        aircraft=configured(here.aircraft, here.configuration),
        engine=here.world.engine,
        air=here.air.condition(altitude),
        mass=mass,
        tailwind=here.air.tailwind_at(altitude),
        rating=rating,
    )
    found = _speeds(flight, speed)
    merit = found.specific_ground_range
    if speed.kind == "least_cost":
        assert speed.value is not None
        merit = -(found.fuel_flow + speed.value) / flight.ground_speed(found.mach)
    elif speed.kind == "maximum_level":
        merit = found.true_airspeed
    mach = np.where(found.is_flyable, found.mach, 0.5)
    climbing = replace(flight, rating="climb")
    climb = rate_of_climb(climbing, climbing.at_rating(mach[None], found.is_flyable))[0]
    return Merits(np.where(found.is_flyable, merit, -np.inf), climb, mach)


def _speeds(flight: LevelFlight, speed: SpeedRule) -> LevelSpeed:
    """Level flight at the speed of a rule."""
    if speed.kind == "mach":
        shape = flight.mass.shape
        return flight.speed_at(
            np.full(shape, speed.value),
            np.ones(shape, dtype=bool),
            np.full(shape, Limit.NONE, dtype=np.int64),
            np.full(shape, np.nan),
            np.full((0, *shape), np.nan),
        )
    speeds = speed_range(flight)
    if speed.kind == "least_cost":
        assert speed.value is not None
        return least_cost_mach(speeds, speed.value)
    return _BEST[speed.kind](speeds)


def best_level(cruise: Cruise, here: Here, speed: SpeedRule, row: int, end: int = 0) -> float:
    """Pressure altitude [m] of the best level for a cruise, at the mass at one end of a row."""
    here = cruise.configured(here)
    ceiling = min(_HIGHEST, here.aircraft.maximum_pressure_altitude)
    lowest = max(_LOWEST, here.pressure_altitude or 0.0)
    levels = grid(np.ceil(lowest / SPACING) * SPACING, ceiling, SPACING)
    table = here.world.engine.coverage
    if table is not None:
        low, high = table.pressure_altitude
        levels = levels[(levels >= low) & (levels <= high)]

    def choose(mass: float) -> float | None:
        """The best of every fourth level, then of those around it."""
        best = _best_of(here, speed, cruise.rating, levels[::_COARSE], mass)
        if best is None:
            return _best_of(here, speed, cruise.rating, levels, mass)
        near = levels[np.abs(levels - best) < _COARSE * SPACING - 1.0]
        return _best_of(here, speed, cruise.rating, near, mass)

    level = here.choices.at(
        row, "best level", here.mass_at(row, end), choose, end=end, matters=_MASS_THAT_MATTERS
    )
    if level is None and row in here.masses:
        raise CannotBeFlown(
            "no level has 300 ft/min of climb left at the speed of this cruise; fly slower, carry "
            "less, or take a larger engine"
        )
    return max(_UNKNOWN, lowest) if level is None else level


def _best_of(here: Here, speed: SpeedRule, rating: str, levels: Array, mass: float) -> float | None:
    """The best of some levels [m] at a mass [kg]; None where none can be flown."""
    found = merits(here, speed, rating, levels, np.array([mass]))
    merit = np.where(found.climb >= LEAST_CLIMB, found.merit, -np.inf)[:, 0]
    best = int(np.argmax(merit))
    return float(levels[best]) if np.isfinite(merit[best]) else None
