"""Payloads of the corners: the greatest, the one with full tanks at take-off mass, the least.

Names and places of the corners: common practice, no source.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from mission.aircraft import governing_tank_limit
from mission.errors import CannotBeFlown
from mission.fuel_plan import trip_rows
from mission.march.sweep import Parts, march
from mission.march.world import World
from mission.plan import FlightPlan
from mission.results import Totals

Array = NDArray[np.float64]
_LEAST_EDGE = 4  # points between two corners, at the least
_ON_THE_LIMIT = 1e-7  # of a limit
_NODES = 5


@dataclass(frozen=True)
class Loads:
    """What limits of mass and tanks let an aircraft carry on a mission [kg].

    Attributes
    ----------
    least : payload that leaves on the way
    by_zero_fuel : payload at the greatest zero-fuel mass
    full_tanks : payload at which full tanks meet the take-off or the ramp mass
    """

    least: float
    by_zero_fuel: float
    full_tanks: float

    def corners(self, most: float) -> dict[float, str]:
        """Payloads of the corners below ``most``, from the greatest, with their names."""
        last = "least payload, what leaves on the way" if self.least else "ferry, no payload"
        is_full = self.full_tanks >= most
        found = {most: "greatest payload, tanks full" if is_full else "greatest payload"}
        if self.least < self.full_tanks < most:
            found[self.full_tanks] = "tanks full"
        return found | {self.least: last}

    def spread(self, most: float, count: int) -> Array:
        """Payloads from the greatest to the least, evenly between corners."""
        marks = list(self.corners(most))
        if len(marks) == 2:
            return np.linspace(marks[0], marks[1], count)
        share = (marks[0] - marks[1]) / (marks[0] - marks[2])
        before = min(max(round(share * count), _LEAST_EDGE), count - _LEAST_EDGE)
        after = np.linspace(marks[1], marks[2], count - before + 1)[1:]
        return np.concatenate([np.linspace(marks[0], marks[1], before), after])


def loads_of(world: World, plan: FlightPlan, least: float) -> Loads:
    """The loads of a mission laid out with no more payload [kg] than leaves on the way.

    Raises :class:`CannotBeFlown` where the aircraft cannot carry even that.
    """
    aircraft = world.aircraft
    heaviest = max(plan.first_empty_mass, *(row.empty_mass for row in plan.rows)) - least
    by_zero_fuel = aircraft.maximum_zero_fuel_mass - heaviest
    refuse_below(by_zero_fuel, least, "zero-fuel mass")
    ramp = min(aircraft.maximum_take_off_mass + _lost_on_ground(world, plan), plan.most_ramp_mass)
    return Loads(
        least=least,
        by_zero_fuel=by_zero_fuel,
        full_tanks=ramp - (plan.first_empty_mass - least) - plan.most_fuel,
    )


def governing(world: World, plan: FlightPlan, total: Totals) -> tuple[str, ...]:
    """What bounds the fuel of a flight: more than one limit at a corner."""
    aircraft = world.aircraft
    tank = f"tank {governing_tank_limit(aircraft, world.engine.fuel)}"
    room = {
        "take-off mass": 1.0 - total.takeoff_mass / aircraft.maximum_take_off_mass,
        "ramp mass": 1.0 - total.ramp_mass / plan.most_ramp_mass,
        tank: 1.0 - total.loaded_fuel / plan.most_fuel,
    }
    at_limit = tuple(name for name, share in room.items() if share < _ON_THE_LIMIT)
    return at_limit or (min(room, key=lambda name: room[name]),)


def refuse_below(payload: float, least: float, limit: str) -> None:
    """Refuse a greatest payload by a limit that is not above the least."""
    if payload <= least:
        carried = f"; {least:,.0f} kg leave on the way" if least else ""
        raise CannotBeFlown(
            f"the {limit} leaves {payload:,.0f} kg for payload{carried}: nothing can be carried "
            "any distance"
        )


def _lost_on_ground(world: World, plan: FlightPlan) -> float:
    """Fuel [kg] from engine start to the start of a take-off at the greatest mass."""
    first = trip_rows(plan)[0]
    spans = tuple(span for span in plan.parts.mission if span.segment < first)
    if not spans:
        return 0.0
    most = np.array([world.aircraft.maximum_take_off_mass])
    flown = march(world, Parts(spans), _NODES, most, lambda stop, _: stop)
    return float(flown.tracks[0].mass[0, 0] - most[0])
