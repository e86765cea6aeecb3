"""What a flight gives back: frozen records of flat arrays, SI."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from engine.atmosphere import flight_condition
from engine.fuels import KEROSENE, Fuel
from mission.field.result import FieldPerformance
from mission.reserves.registry import RULES, Rule

Array = NDArray[np.float64]


@dataclass(frozen=True)
class Steps:
    """State at the nodes of a segment, both ends included; arrays of one length.

    Joints inside a segment stand twice, once for each side. Forces are of the whole aircraft;
    on the ground lift and drag are zero. ``rating_thrust`` is what the segment's rating gives,
    ``level_drag`` the drag at one g, which a turn's is above. ``held_by`` names the limit of the
    engine that holds its thrust, empty where thrust follows from drag.
    """

    elapsed_time: Array
    pressure_altitude: Array
    mach: Array
    true_airspeed: Array
    mass: Array
    lift: Array
    weight: Array
    drag: Array
    thrust: Array
    fuel_flow: Array
    flight_path_angle: Array
    rating_thrust: Array
    level_drag: Array
    held_by: NDArray[np.str_]

    @cached_property
    def static_pressure(self) -> Array:
        """Ambient pressure [Pa]."""
        return flight_condition(self.pressure_altitude).static_pressure


@dataclass(frozen=True)
class SegmentLog:
    """One row of the log: totals [kg, s, m], impulse of thrust [N s], and the steps behind them.

    ``leg`` is the name of the leg it belongs to, empty where the mission has one alone.
    """

    name: str
    kind: str
    purpose: str
    rating: str
    fuel: float
    time: float
    ground_distance: float
    air_distance: float
    mass_start: float
    mass_end: float
    mass_released: float
    mass_received: float
    fuel_left: float
    steps: Steps
    impulse: float = 0.0
    leg: str = ""


@dataclass(frozen=True)
class ReserveItem:
    """Fuel [kg] of one reserve, and what carrying it costs in trip fuel [kg]."""

    item: str
    fuel: float
    carriage_cost: float
    note: str


@dataclass(frozen=True)
class CrossCheck:
    """Integrated fuel against the Breguet equation, and kilograms that explain the difference."""

    segment: str
    integrated_fuel: float
    breguet_fuel: float
    causes: Mapping[str, float]

    @property
    def difference_percent(self) -> float:
        """Breguet less integrated, over integrated."""
        if self.integrated_fuel == 0.0:
            return 0.0
        return 100.0 * (self.breguet_fuel - self.integrated_fuel) / self.integrated_fuel


@dataclass(frozen=True)
class Margin:
    """How far a limit is: value against bound, in the unit named, and where it is least."""

    name: str
    value: float
    bound: float
    unit: str
    where: str
    is_met: bool


@dataclass(frozen=True)
class Failure:
    """Why a mission cannot be flown: the first hard limit met, in the order flown."""

    segment: str
    step: int
    what: str
    value: float
    bound: float
    unit: str
    advice: str


@dataclass(frozen=True)
class Solution:
    """What a flight was solved for.

    Attributes
    ----------
    name : as the mission marks it
    value : distance [m] or time [s], by ``unit``
    unit : "m" or "s"
    flights : whole flights marched to find it
    has_answer : False where fuel is short however little is flown
    """

    name: str
    value: float
    unit: str
    flights: int
    has_answer: bool


@dataclass(frozen=True)
class Totals:
    """Fuels and masses [kg], times [s], distances [m]; ``integration_error`` [kg] of block fuel."""

    block_fuel: float
    trip_fuel: float
    reserve_fuel: float
    loaded_fuel: float
    fuel_left: float
    fuel_margin: float
    block_time: float
    trip_time: float
    ground_distance: float
    air_distance: float
    ramp_mass: float
    takeoff_mass: float
    landing_mass: float
    integration_error: float


@dataclass(frozen=True)
class Flight:
    """A mission flown, or flown as far as it could be (``failure`` says why not further).

    ``fuel_flow_margin`` [kg] is the part of block fuel that the reserve rule's margin has added.
    ``field`` is of a mission that could be flown and has a take-off, else None.
    """

    mission: str
    aircraft: str
    engine: str
    day: float
    totals: Totals
    segments: tuple[SegmentLog, ...]
    reserves: tuple[ReserveItem, ...]
    cross_check: tuple[CrossCheck, ...]
    margins: tuple[Margin, ...]
    assumed: tuple[str, ...]
    warnings: tuple[str, ...]
    failure: Failure | None
    fuel: Fuel = KEROSENE
    solution: Solution | None = None
    reserve_rule: Rule = RULES["none"]
    fuel_flow_margin: float = 0.0
    field: FieldPerformance | None = None

    @property
    def carbon_dioxide(self) -> float:
        """Carbon dioxide [kg] of the block fuel, burnt completely."""
        return self.totals.block_fuel * self.fuel.carbon_dioxide_index

    @property
    def flown(self) -> bool:
        """Whether the mission could be flown to its end."""
        return self.failure is None
