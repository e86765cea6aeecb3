"""A span: the smallest piece of a flight, marched in one variable under one balance of forces.

A segment of the mission file becomes one or more spans; the boundaries between spans are the
joints where something has a kink (tropopause, crossover, a change of the binding engine limit).
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from itertools import pairwise
from typing import Literal

import numpy as np
from numpy.typing import NDArray

from engine.atmosphere import FlightCondition

Array = NDArray[np.float64]
SpeedKind = Literal[
    "mach", "calibrated", "stall", "lift_coefficient", "least_fuel", "neighbour", "standstill"
]


@dataclass(frozen=True)
class SpeedRule:
    """How fast the aircraft flies.

    ``value`` is a Mach number, a calibrated airspeed [m/s], a multiple of the stall speed at the
    lift coefficient ``lift_limit``, or a lift coefficient to hold (None: the one the aircraft
    comes in with). "least_fuel" is the speed of least fuel flow; "neighbour" is the speed at the
    near end of the span before or after; "standstill" is no speed.
    """

    kind: SpeedKind
    value: float | None = None
    lift_limit: float = 1.0

    @property
    def depends_on_mass(self) -> bool:
        """Whether the Mach number at an altitude changes with the mass of the aircraft."""
        return self.kind in ("stall", "lift_coefficient", "least_fuel", "neighbour")


STANDSTILL = SpeedRule("standstill")
March = Literal["altitude", "speed", "distance", "time", "roll", "stand", "book"]


@dataclass(frozen=True)
class Span:
    """One march of a segment.

    Attributes
    ----------
    segment : index of the row of the log it belongs to
    march : altitude (climb, descent), speed (level acceleration), distance or time (thrust equals
        drag), roll (take-off), stand (engine running on the ground), book (an allowance)
    rating : the rating flown (altitude, speed, roll, stand) or the ceiling of thrust
    start_altitude, end_altitude : pressure altitude [m]
    start_speed, end_speed : alike in a march by altitude; in a level march the speed the aircraft
        comes in with and the one it flies
    extent : distance [m] or time [s]; None for the rest of the distance
    holds_lift_coefficient : with Mach number held too, a cruise-climb
    lift_coefficient : the one a cruise-climb holds; None for the one at its start
    drag_factor, fuel_flow_factor : multiply the aircraft's own
    gains_distance : whether ground distance counts
    booked_fuel, booked_fraction : of an allowance [kg], of the mass at its start
    is_reserve : flown as part of the reserves
    """

    segment: int
    march: March
    rating: str = ""
    start_altitude: float = 0.0
    end_altitude: float = 0.0
    start_speed: SpeedRule = STANDSTILL
    end_speed: SpeedRule = STANDSTILL
    extent: float | None = None
    holds_lift_coefficient: bool = False
    lift_coefficient: float | None = None
    drag_factor: float = 1.0
    fuel_flow_factor: float = 1.0
    gains_distance: bool = True
    booked_fuel: float = 0.0
    booked_fraction: float = 0.0
    is_reserve: bool = False

    @property
    def is_static(self) -> bool:
        """Whether the flight condition at every node is known before any mass is."""
        if self.march == "altitude":
            return True
        if self.march == "speed":
            return not (self.start_speed.depends_on_mass or self.end_speed.depends_on_mass)
        return self.march == "stand"

    @property
    def takes_rest(self) -> bool:
        """Whether it flies what is left of the distance."""
        return self.march == "distance" and self.extent is None

    def cut(self, joints: tuple[float, ...]) -> list[Span]:
        """The span in pieces, at altitudes [m] or Mach numbers in the order flown."""
        if self.march == "altitude":
            marks = (self.start_altitude, *joints, self.end_altitude)
            return [
                replace(self, start_altitude=low, end_altitude=high)
                for low, high in pairwise(marks)
            ]
        speeds = (self.start_speed, *(SpeedRule("mach", j) for j in joints), self.end_speed)
        return [
            replace(self, start_speed=begins, end_speed=ends) for begins, ends in pairwise(speeds)
        ]


@dataclass(frozen=True)
class Propulsion:
    """All engines together: thrust [N], fuel flow [kg/s], the engine's outcome, what holds it.

    ``held_by`` names the limit of the engine that holds the thrust, empty where thrust follows
    from drag.
    """

    thrust: Array
    fuel_flow: Array
    outcome: NDArray[np.int64]
    held_by: NDArray[np.str_]


@dataclass(frozen=True)
class Nodes:
    """State of a span at its nodes, arrays (nodes, members), forces of the whole aircraft.

    Attributes
    ----------
    flight : flight condition
    mass : [kg]
    time_rate : [s] per unit of the march's variable, scaled to [0, 1]
    propulsion : thrust, fuel flow and outcome of all engines
    drag, lift : [N]
    path_angle : geometric, relative to the air [rad]
    rate : rate of climb or descent [m/s], acceleration [m/s2], ground speed [m/s], positive the
        way the march goes; infinite where it has none
    """

    flight: FlightCondition
    mass: Array
    time_rate: Array
    propulsion: Propulsion
    drag: Array
    lift: Array
    path_angle: Array
    rate: Array
