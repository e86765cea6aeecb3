"""A span: the smallest piece of a flight, marched in one variable under one balance of forces.

A segment of the mission file becomes one or more spans; the boundaries between spans are the
joints where something has a kink (tropopause, crossover, a change of the binding engine limit).
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from itertools import pairwise
from typing import TYPE_CHECKING, Literal

import numpy as np
from numpy.typing import NDArray

from engine.atmosphere import FlightCondition
from mission.air import STILL_AIR, Air

if TYPE_CHECKING:
    from mission.paths.path import Piece

Array = NDArray[np.float64]
SpeedKind = Literal[
    "mach", "calibrated", "stall", "lift_coefficient", "neighbour", "standstill",
    "least_fuel", "maximum_range", "long_range", "least_cost", "maximum_level",
]  # fmt: skip
SOUGHT = ("least_fuel", "maximum_range", "long_range", "least_cost", "maximum_level")


@dataclass(frozen=True)
class SpeedRule:
    """How fast the aircraft flies.

    ``value`` is a Mach number, a calibrated airspeed [m/s], a multiple of the stall speed at the
    lift coefficient ``lift_limit``, or a lift coefficient to hold (None: the one the aircraft
    comes in with). "neighbour" is the speed at the near end of the span before or after;
    "standstill" is no speed. Those of :data:`SOUGHT` are found in flight: least fuel flow, best
    specific air range, 99 % of it on the fast side, least cost (``value`` is the cost of time in
    fuel [kg/s]), and the fastest at which a rating's thrust is drag.
    """

    kind: SpeedKind
    value: float | None = None
    lift_limit: float = 1.0

    @property
    def depends_on_mass(self) -> bool:
        """Whether the Mach number at an altitude changes with the mass of the aircraft."""
        return self.kind in ("stall", "lift_coefficient", "neighbour", *SOUGHT)

    @property
    def is_sought(self) -> bool:
        """Whether the Mach number is found in flight from what the engine burns."""
        return self.kind in SOUGHT


STANDSTILL = SpeedRule("standstill")
March = Literal[
    "altitude", "energy", "speed", "distance", "time", "burn", "turn", "roll", "stand", "book"
]
SLOWEST_CLIMB = 100.0 * 0.3048 / 60.0  # m/s: 100 ft/min, an operational ceiling's rate of climb
LEVEL = ("distance", "time", "burn")
SPEEDING_UP = "level acceleration"  # what holds such a piece of a climb path
RESERVE_LEG = -1  # of the reserve flight


@dataclass(frozen=True)
class Configuration:
    """What hangs on the aircraft and what has failed.

    ``drag_factor`` and ``fuel_flow_factor`` multiply the aircraft's own; ``drag_area`` [m2] is
    added for what stands in the wind; ``engines_out`` are dead and turned by the air.
    """

    drag_factor: float = 1.0
    fuel_flow_factor: float = 1.0
    drag_area: float = 0.0
    engines_out: int = 0


CLEAN = Configuration()


@dataclass(frozen=True)
class Span:
    """One march of a segment.

    Attributes
    ----------
    segment : index of the row of the log it belongs to
    march : altitude (climb, descent), energy (climb along a path in energy height), speed (level
        acceleration), distance, time, burn or turn (thrust equals drag), roll (take-off), stand
        (engine running on the ground), book (an allowance, a release)
    rating : the rating flown (altitude, energy, speed, roll, stand) or the ceiling of thrust
    air : temperature and wind by altitude
    configuration : drag, fuel flow and dead engines
    leg : index of the leg whose distance it counts towards
    start_altitude, end_altitude : pressure altitude [m]
    start_speed, end_speed : alike in a march by altitude; in a level march the speed the aircraft
        comes in with and the one it flies
    extent : distance [m], time [s] or change of heading [rad]; None for the rest of the distance
    is_free : its extent is what the flight is solved for
    end_mass : mass [kg] at which a march by burn ends; ``burn`` [kg] what it burns instead
    ends_by_fuel : whether that mass is one of fuel aboard, which a heavier payload lies under
    load_factor : of a march by turn; None for what thrust, lift and structure allow
    is_by_heading : whether a turn's extent is a change of heading, not a time
    path_angle, vertical_speed : given ones of a descent [rad, m/s, both negative]; else None
    path : of a march by energy height, from ``start_energy`` to ``end_energy`` [m]
    holds_lift_coefficient : with Mach number held too, a cruise-climb
    lift_coefficient : the one a cruise-climb holds; None for the one at its start
    gains_distance : whether ground distance counts
    booked_fuel, booked_fraction : of an allowance [kg], of the mass at its start
    least_rate : slowest climb or descent [m/s]; slower it does not end
    received : mass taken on along it, negative for what is released [kg]
    is_reserve : flown as part of the reserves
    is_aside : a reserve flown from the mass at the stop beside the others, only to be priced
    """

    segment: int
    march: March
    rating: str = ""
    air: Air = STILL_AIR
    configuration: Configuration = CLEAN
    leg: int = 0
    start_altitude: float = 0.0
    end_altitude: float = 0.0
    start_speed: SpeedRule = STANDSTILL
    end_speed: SpeedRule = STANDSTILL
    extent: float | Array | None = None
    is_free: bool = False
    end_mass: float | None = None
    burn: float | None = None
    ends_by_fuel: bool = False
    load_factor: float | None = None
    is_by_heading: bool = False
    path_angle: float | None = None
    vertical_speed: float | None = None
    path: Piece | None = None
    start_energy: float = 0.0
    end_energy: float = 0.0
    holds_lift_coefficient: bool = False
    lift_coefficient: float | None = None
    gains_distance: bool = True
    booked_fuel: float = 0.0
    booked_fraction: float = 0.0
    least_rate: float = SLOWEST_CLIMB
    received: float = 0.0
    is_reserve: bool = False
    is_aside: bool = False

    @property
    def is_steered(self) -> bool:
        """Whether it descends on a given path, thrust following from it."""
        return self.path_angle is not None or self.vertical_speed is not None

    @property
    def is_static(self) -> bool:
        """Whether the engine's answer at every node is known before any mass is."""
        if self.march in ("altitude", "energy"):
            return not self.is_steered
        if self.march == "speed":
            return not (self.start_speed.depends_on_mass or self.end_speed.depends_on_mass)
        return self.march == "stand"

    @property
    def takes_rest(self) -> bool:
        """Whether it flies what is left of the distance."""
        return self.march == "distance" and self.extent is None and not self.is_free

    def cut(self, joints: tuple[float, ...]) -> list[Span]:
        """The span in pieces, at altitudes, energy heights [m] or Mach numbers in their order."""
        if self.march == "energy":
            marks = (self.start_energy, *joints, self.end_energy)
            return [
                replace(self, start_energy=low, end_energy=high) for low, high in pairwise(marks)
            ]
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
