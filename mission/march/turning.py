"""Level turns: lift is the load factor times weight, at a speed held.

With the load factor given, thrust follows from drag. Without it the engine stands at its rating
and the load factor is the greatest at which drag is not above thrust, bounded by the greatest lift
and by the structure. Turn rate ``g sqrt(n^2 - 1) / V`` and radius after J. D. Anderson, Aircraft
Performance and Design, section 6.2 (from memory).
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from engine.atmosphere import FlightCondition
from engine.quantities import STANDARD_GRAVITY
from mission.aircraft import Aircraft
from mission.forces import load_factor_of_drag, stall_mach
from mission.march.level import airframe_drag
from mission.march.span import Nodes, Propulsion, Span
from mission.march.world import World

Array = NDArray[np.float64]
SLOWEST_TURN = 1e-4  # rad/s: below it a change of heading does not end


def most_load_factor(aircraft: Aircraft, flight: FlightCondition, mass: Array) -> Array:
    """Greatest load factor of lift and structure."""
    by_lift = (
        flight.mach / stall_mach(aircraft, flight, mass, aircraft.maximum_lift_coefficient)
    ) ** 2
    return np.minimum(by_lift, aircraft.maximum_load_factor)


def turn_rate(load_factor: Array, true_airspeed: Array) -> Array:
    """Rate of change of heading [rad/s] of a level turn."""
    side: Array = np.sqrt(np.maximum(load_factor**2 - 1.0, 0.0))
    return STANDARD_GRAVITY * side / true_airspeed


def load_factors(
    span: Span, world: World, flight: FlightCondition, mass: Array, force: Array
) -> Array:
    """Load factor at the nodes: given, or what a force [N] against drag sustains."""
    if span.load_factor is not None:
        return np.full(mass.shape, span.load_factor)
    configured = span.configuration
    return load_factor_of_drag(
        world.aircraft,
        flight,
        mass,
        force,
        most_load_factor(world.aircraft, flight, mass),
        configured.drag_factor,
        configured.drag_area,
    )


def turn_nodes(
    span: Span,
    world: World,
    flight: FlightCondition,
    mass: Array,
    propulsion: Propulsion,
    dead_drag: Array,
) -> Nodes:
    """Nodes of a turn through a change of heading [rad], or for a time [s]."""
    factor = load_factors(span, world, flight, mass, propulsion.thrust - dead_drag)
    lift = factor * mass * STANDARD_GRAVITY
    speed = np.broadcast_to(flight.true_airspeed, mass.shape)
    rate = turn_rate(factor, speed)
    assert span.extent is not None
    time_rate = np.full(mass.shape, span.extent)
    if span.is_by_heading:
        time_rate = span.extent / np.maximum(rate, SLOWEST_TURN)
    return Nodes(
        flight=flight,
        mass=mass,
        time_rate=time_rate,
        propulsion=propulsion,
        drag=dead_drag + airframe_drag(span, world, flight, lift),
        lift=lift,
        path_angle=np.zeros_like(mass),
        rate=rate,
    )
