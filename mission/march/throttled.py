"""Marches at a rating: what thrust there is decides how fast the march goes.

By altitude (climb at a rating, descent at idle): excess thrust sets the path angle, with the
acceleration that the schedule of speed demands. By speed (level acceleration and deceleration):
excess thrust over mass. Take-off roll: thrust less rolling friction, no lift and drag counted.
Standing: engines running, nothing moves.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from engine.atmosphere import FlightCondition
from engine.quantities import STANDARD_GRAVITY
from mission.airspeeds import calibrated_mach_slope, climb_acceleration_factor
from mission.march.level import airframe_drag
from mission.march.nodes import positions
from mission.march.rules import mach_at
from mission.march.span import Nodes, Propulsion, Span
from mission.march.world import World

Array = NDArray[np.float64]
ROLLING_FRICTION = 0.02  # dry hard runway; common practice, no source
SLOWEST_ACCELERATION = 0.01  # m/s2: below it a change of speed does not end
_INSIDE = 1e-6  # m: nodes stand this far inside a joint, each piece seeing its own side of it


def altitude_flight(span: Span, world: World, count: int) -> FlightCondition:
    """Flight condition at the nodes of a march by altitude, shape (count, 1)."""
    altitude = span.start_altitude + positions(count)[:, None] * (
        span.end_altitude - span.start_altitude
    )
    low, high = sorted((span.start_altitude, span.end_altitude))
    inside = np.clip(altitude, low + _INSIDE, max(high - _INSIDE, low + _INSIDE))
    return on_schedule(span, world, span.air.condition(inside))


def on_schedule(span: Span, world: World, air: FlightCondition) -> FlightCondition:
    """Flight condition in still air at the speed of a march by altitude."""
    return air.with_mach(mach_at(span.start_speed, world.aircraft, air, np.ones(1)))


def acceleration_factor(span: Span, flight: FlightCondition) -> Array:
    """``1 + V/g dV/dh`` along the schedule, height geometric."""
    is_mach = span.start_speed.kind == "mach"
    return climb_acceleration_factor(flight, 0.0 if is_mach else calibrated_mach_slope(flight))


def _pressure_to_geometric(flight: FlightCondition) -> Array:
    """Change of pressure altitude with geometric height on a day that is not standard."""
    standard = flight.static_temperature - flight.temperature_deviation
    return standard / flight.static_temperature


def steered_sine(span: Span, flight: FlightCondition) -> Array:
    """Sine of the path angle of a descent whose angle [rad] or rate [m/s] is given."""
    if span.path_angle is not None:
        return np.full(flight.shape, np.sin(span.path_angle))
    assert span.vertical_speed is not None
    return span.vertical_speed / flight.true_airspeed


def climb_nodes(
    span: Span,
    flight: FlightCondition,
    mass: Array,
    propulsion: Propulsion,
    sine: Array,
    resistance: Array,
) -> Nodes:
    """Nodes of a march by altitude at the sine of its path angle, with its drag [N]."""
    vertical = flight.true_airspeed * sine * _pressure_to_geometric(flight)
    rate = vertical * np.sign(span.end_altitude - span.start_altitude)
    height = abs(span.end_altitude - span.start_altitude)
    return Nodes(
        flight=flight,
        mass=mass,
        time_rate=height / np.maximum(rate, span.least_rate),
        propulsion=propulsion,
        drag=resistance,
        lift=mass * STANDARD_GRAVITY * np.sqrt(1.0 - sine**2),
        path_angle=np.arcsin(sine),
        rate=rate,
    )


def acceleration_nodes(
    span: Span,
    world: World,
    flight: FlightCondition,
    mass: Array,
    propulsion: Propulsion,
    dead_drag: Array,
) -> Nodes:
    """Nodes of a march by speed, level or along the runway."""
    weight = mass * STANDARD_GRAVITY
    if span.march == "roll":
        lift, resistance = np.zeros_like(mass), np.zeros_like(mass)
        net = propulsion.thrust - ROLLING_FRICTION * weight
    else:
        lift = weight
        resistance = dead_drag + airframe_drag(span, world, flight, weight)
        net = propulsion.thrust - resistance
    speed = flight.true_airspeed
    change = speed[-1] - speed[0]
    rate = net / mass * np.where(change < 0.0, -1.0, 1.0)
    return Nodes(
        flight=flight,
        mass=mass,
        time_rate=np.abs(change) / np.maximum(rate, SLOWEST_ACCELERATION),
        propulsion=propulsion,
        drag=resistance,
        lift=lift,
        path_angle=np.zeros_like(mass),
        rate=np.where(np.abs(change) < 1e-9, np.inf, rate),
    )


def standing_nodes(
    span: Span,
    flight: FlightCondition,
    mass: Array,
    propulsion: Propulsion,
) -> Nodes:
    """Nodes of a stand of given time with the engines at a rating."""
    none = np.zeros_like(mass)
    return Nodes(
        flight=flight,
        mass=mass,
        time_rate=np.full_like(mass, span.extent),
        propulsion=propulsion,
        drag=none,
        lift=none,
        path_angle=none,
        rate=np.full_like(mass, np.inf),
    )
