"""Steady level marches: thrust equals drag and lift equals weight at every node.

By distance (cruise) or by time (loiter, approach). Altitude and Mach number are held; or altitude
and lift coefficient; or Mach number and lift coefficient, a cruise-climb, flown as level: the
work of its slow rise is not charged (the log says how much that would be). A hold at the speed of
least fuel flow moves its Mach number by one Newton step on fuel flow a sweep.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from engine.atmosphere import FlightCondition
from engine.quantities import STANDARD_GRAVITY
from mission.forces import drag, stall_mach
from mission.march.rules import cruise_climb_air, hold_bounds, mach_at
from mission.march.span import Nodes, Propulsion, Span
from mission.march.world import World

Array = NDArray[np.float64]
SLOWEST_GROUND_SPEED = 1.0  # m/s: below it a distance does not end
_STENCIL = 0.004  # Mach number to each side, for slope and curvature of fuel flow
_LARGEST_MACH_STEP = 0.05


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
    return cruise_climb_air(aircraft, mach, coefficient, mass, world.temperature_deviation)


def cruise_climb_coefficient(
    span: Span, world: World, air: FlightCondition, mass: Array, mach: float
) -> Array:
    """Lift coefficient a cruise-climb holds: given, or the one at its start altitude."""
    if span.lift_coefficient is not None:
        return np.full((1, mass.shape[1]), span.lift_coefficient)
    weight = mass[:1] * STANDARD_GRAVITY
    force: Array = 0.7 * air.static_pressure[:1] * mach**2 * world.aircraft.wing_area
    return weight / force


def least_fuel_stencil(flight: FlightCondition) -> FlightCondition:
    """The condition slower, as it is, and faster by the stencil: shape (3, nodes, members)."""
    offsets = np.array([-_STENCIL, 0.0, _STENCIL])[:, None, None]
    return flight.with_mach(flight.mach + offsets)


def least_fuel_step(world: World, flight: FlightCondition, mass: Array, fuel_flow: Array) -> Array:
    """Next Mach number of a hold from the fuel flows (3, nodes, members) of its stencil."""
    slower, here, faster = fuel_flow
    slope = (faster - slower) / (2.0 * _STENCIL)
    curvature = (faster - 2.0 * here + slower) / _STENCIL**2
    convex = curvature > 0.0
    newton = -slope / np.where(convex, curvature, 1.0)
    step = np.where(convex, newton, -np.sign(slope) * _LARGEST_MACH_STEP)
    step = np.clip(step, -_LARGEST_MACH_STEP, _LARGEST_MACH_STEP)
    slowest, fastest = hold_bounds(world.aircraft, flight, mass)
    bounded: Array = np.minimum(np.maximum(flight.mach + step, slowest), fastest)
    return bounded


def level_drag(span: Span, world: World, flight: FlightCondition, mass: Array) -> Array:
    """Drag [N] at lift equal to weight."""
    return drag(world.aircraft, flight, mass * STANDARD_GRAVITY, span.drag_factor)


def level_nodes(
    span: Span,
    world: World,
    flight: FlightCondition,
    mass: Array,
    extent: Array,
    propulsion: Propulsion,
) -> Nodes:
    """Nodes of a level march over a ground distance [m] or a time [s], shape (members,)."""
    if span.march == "distance":
        rate = np.broadcast_to(flight.true_airspeed + world.tailwind, mass.shape)
        time_rate = extent / np.maximum(rate, SLOWEST_GROUND_SPEED)
    else:
        rate = np.full_like(mass, np.inf)
        time_rate = np.broadcast_to(extent, mass.shape)
    return Nodes(
        flight=flight,
        mass=mass,
        time_rate=time_rate,
        propulsion=propulsion,
        drag=level_drag(span, world, flight, mass),
        lift=mass * STANDARD_GRAVITY,
        path_angle=np.zeros_like(mass),
        rate=rate,
    )
