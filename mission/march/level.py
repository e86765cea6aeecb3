"""Steady level marches: thrust equals drag and lift equals weight at every node.

By distance (cruise), by time (loiter, approach) or by burn (until a mass is reached). Altitude and
Mach number are held; or altitude and lift coefficient; or Mach number and lift coefficient, a
cruise-climb, flown as level: the work of its slow rise is not charged (the log says how much that
would be). Best speeds are sought in :mod:`mission.march.seeking`.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray

from engine.atmosphere import FlightCondition
from engine.quantities import STANDARD_GRAVITY
from mission.forces import drag, stall_mach
from mission.march.rules import cruise_climb_air, mach_at
from mission.march.span import Nodes, Propulsion, Span
from mission.march.world import World

Array = NDArray[np.float64]
SLOWEST_GROUND_SPEED = 1.0  # m/s: below it a distance does not end


def level_flight(
    span: Span, world: World, air: FlightCondition, mass: Array, entry_mach: Array
) -> FlightCondition:
    """Flight condition at the nodes; ``entry_mach`` (members,) is of the aircraft coming in."""
    aircraft, rule = world.aircraft, span.end_speed
    if not span.holds_lift_coefficient:
        if rule.kind == "lift_coefficient" and rule.value is None:
            entry_stall = stall_mach(aircraft, air, mass[:1], 1.0)
            coefficient = (entry_stall / entry_mach) ** 2
            return air.with_mach(stall_mach(aircraft, air, mass, 1.0) / np.sqrt(coefficient))
        return air.with_mach(mach_at(rule, aircraft, air, mass))
    mach = float(entry_mach[0]) if rule.value is None else rule.value
    coefficient = cruise_climb_coefficient(span, world, air, mass, mach)
    return cruise_climb_air(aircraft, mach, coefficient, mass, span.air)


def cruise_climb_coefficient(
    span: Span, world: World, air: FlightCondition, mass: Array, mach: float
) -> Array:
    """Lift coefficient a cruise-climb holds: given, or the one at its start altitude."""
    if span.lift_coefficient is not None:
        return np.full((1, mass.shape[1]), span.lift_coefficient)
    weight = mass[:1] * STANDARD_GRAVITY
    force: Array = 0.7 * air.static_pressure[:1] * mach**2 * world.aircraft.wing_area
    return weight / force


def airframe_drag(span: Span, world: World, flight: FlightCondition, lift: ArrayLike) -> Array:
    """Drag [N] at a lift [N] as the aircraft is configured, without dead engines."""
    configured = span.configuration
    return drag(world.aircraft, flight, lift, configured.drag_factor, configured.drag_area)


def level_nodes(
    span: Span,
    flight: FlightCondition,
    mass: Array,
    extent: Array,
    propulsion: Propulsion,
    resistance: Array,
) -> Nodes:
    """Nodes of a level march over a ground distance [m], a time [s] or a burn [kg] (members,)."""
    rate = np.full_like(mass, np.inf)
    if span.march == "distance":
        wind = span.air.tailwind_at(flight.pressure_altitude)
        rate = np.broadcast_to(flight.true_airspeed + wind, mass.shape)
        time_rate = extent / np.maximum(rate, SLOWEST_GROUND_SPEED)
    elif span.march == "burn":
        time_rate = extent / np.maximum(propulsion.fuel_flow, _LEAST_FLOW)
    else:
        time_rate = np.broadcast_to(extent, mass.shape)
    return Nodes(
        flight=flight,
        mass=mass,
        time_rate=time_rate,
        propulsion=propulsion,
        drag=resistance,
        lift=mass * STANDARD_GRAVITY,
        path_angle=np.zeros_like(mass),
        rate=rate,
    )


_LEAST_FLOW = 1e-9  # kg/s: an engine that burns nothing never ends a march by burn
