"""One point of the flight envelope: an aircraft at an altitude, a Mach number and a mass.

All that the engine is asked for comes from one call: what every rating and flight idle give, and
thrust equal to drag.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np

from engine.atmosphere import FlightCondition
from engine.interface import Engine, Outcome
from engine.quantities import STANDARD_GRAVITY
from mission.aerodynamics import drag_breakdown
from mission.aircraft import Aircraft
from mission.airspeeds import calibrated_airspeed, energy_height, equivalent_airspeed
from mission.forces import drag, dynamic_pressure, lift_coefficient, stall_mach
from mission.questions.at_ratings import AtRatings, at_ratings, load_factors

IDLE = "flight_idle"


@dataclass(frozen=True)
class Point:
    """Everything at one point, SI; forces and fuel of the whole aircraft.

    Attributes
    ----------
    flight : the condition, arrays without a dimension
    rating : the ceiling of level flight
    drag_parts : drag coefficient by cause; they add up to drag over dynamic pressure and area
    stall_mach, stall_airspeed : at one g with the greatest lift, the latter calibrated [m/s]
    load_factors : by what bounds them (lift, structure, buffet)
    outcome : of thrust equal to drag under the rating, a value of Outcome
    level_thrust : the thrust that there is for it [N]
    fuel_flow : of level flight [kg/s], NaN where it is not possible
    """

    aircraft: Aircraft
    engine: Engine
    flight: FlightCondition
    mass: float
    rating: str
    dynamic_pressure: float
    calibrated_airspeed: float
    equivalent_airspeed: float
    total_temperature: float
    energy_height: float
    lift_coefficient: float
    drag_parts: Mapping[str, float]
    drag: float
    stall_mach: float
    stall_airspeed: float
    load_factors: Mapping[str, float]
    outcome: int
    level_thrust: float
    fuel_flow: float
    at_ratings: AtRatings

    @property
    def weight(self) -> float:
        """Weight [N]."""
        return self.mass * STANDARD_GRAVITY

    @property
    def drag_coefficient(self) -> float:
        """Drag coefficient, the aircraft's own factor included."""
        return sum(self.drag_parts.values())

    @property
    def specific_air_range(self) -> float:
        """True airspeed per fuel flow of level flight [m/kg]."""
        return float(self.flight.true_airspeed) / self.fuel_flow

    @property
    def specific_fuel_consumption(self) -> float:
        """Fuel flow per thrust of level flight [kg/(N s)]."""
        return self.fuel_flow / self.drag


def point(
    aircraft: Aircraft,
    engine: Engine,
    flight: FlightCondition,
    mass: float,
    *,
    rating: str = "cruise",
) -> Point:
    """Look at one flight condition (arrays without a dimension) at a mass [kg].

    ``rating`` bounds the thrust of level flight. Raises :class:`engine.errors.InputRefused` for a
    rating that the engine does not have.
    """
    weight = np.asarray(mass * STANDARD_GRAVITY)
    resistance = drag(aircraft, flight, weight)
    names = (*engine.ratings, *(name for name in engine.idles if name == IDLE))
    state = engine.at(
        flight.with_mach(np.full(len(names) + 1, float(flight.mach))),
        rating=np.array([*names, rating]),
        net_thrust=np.array([*(np.nan for _ in names), float(resistance) / aircraft.engine_count]),
    )
    stall = stall_mach(aircraft, flight, np.asarray(mass), aircraft.maximum_lift_coefficient)
    outcome = int(state.outcome[-1])
    coefficient = float(lift_coefficient(aircraft, flight, weight))
    flow = float(state.fuel_flow[-1]) * aircraft.engine_count * aircraft.fuel_flow_factor
    return Point(
        aircraft=aircraft,
        engine=engine,
        flight=flight,
        mass=mass,
        rating=rating,
        dynamic_pressure=float(dynamic_pressure(flight)),
        calibrated_airspeed=float(calibrated_airspeed(flight.mach, flight.static_pressure)),
        equivalent_airspeed=float(equivalent_airspeed(flight)),
        total_temperature=float(flight.static_temperature * (1.0 + 0.2 * flight.mach**2)),
        energy_height=float(energy_height(flight.pressure_altitude, flight.true_airspeed)),
        lift_coefficient=coefficient,
        drag_parts=_drag_parts(aircraft, coefficient, flight),
        drag=float(resistance),
        stall_mach=float(stall),
        stall_airspeed=float(calibrated_airspeed(stall, flight.static_pressure)),
        load_factors=load_factors(aircraft, flight, float(stall)),
        outcome=outcome,
        level_thrust=float(state.net_thrust[-1]) * aircraft.engine_count,
        fuel_flow=flow if outcome == Outcome.MET else float("nan"),
        at_ratings=at_ratings(aircraft, flight, mass, names, state),
    )


def _drag_parts(
    aircraft: Aircraft, coefficient: float, flight: FlightCondition
) -> dict[str, float]:
    """Drag coefficient by cause, the aircraft's own factor included."""
    found = drag_breakdown(aircraft.polar, coefficient, flight.mach)
    parts = {name: aircraft.drag_factor * float(part) for name, part in vars(found).items()}
    if aircraft.external_drag_area > 0.0:
        parts["hung outside"] = aircraft.external_drag_area / aircraft.wing_area
    return parts
