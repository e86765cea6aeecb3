"""Forces on the aircraft: lift and drag at a mass, and the path angle of excess thrust."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray

from engine.atmosphere import FlightCondition
from engine.quantities import STANDARD_GRAVITY
from mission.aerodynamics import drag_coefficient
from mission.aircraft import Aircraft

Array = NDArray[np.float64]
STEEPEST = 60.0  # degrees of path angle; a steeper answer is refused
_STEEPEST_SINE = 0.9  # what an iterate may visit, beyond it
_HALVINGS = 52  # of an interval of load factors, down to round-off


def dynamic_pressure(flight: FlightCondition) -> Array:
    """Half density times true airspeed squared [Pa]."""
    return 0.5 * flight.density * flight.true_airspeed**2


def lift_coefficient(aircraft: Aircraft, flight: FlightCondition, lift: ArrayLike) -> Array:
    """Lift coefficient that a lift force [N] takes."""
    return np.asarray(lift) / (dynamic_pressure(flight) * aircraft.wing_area)


def drag(
    aircraft: Aircraft,
    flight: FlightCondition,
    lift: ArrayLike,
    drag_factor: ArrayLike = 1.0,
    drag_area: ArrayLike = 0.0,
) -> Array:
    """Drag [N] at a lift force [N].

    ``drag_factor`` multiplies the aircraft's own; ``drag_area`` [m2] is added for what stands in
    the wind.
    """
    coefficient = drag_coefficient(
        aircraft.polar, lift_coefficient(aircraft, flight, lift), flight.mach
    )
    area = aircraft.wing_area * aircraft.drag_factor * np.asarray(drag_factor)
    outside = aircraft.external_drag_area + np.asarray(drag_area)
    force: Array = dynamic_pressure(flight) * (coefficient * area + outside)
    return force


def stall_mach(
    aircraft: Aircraft, flight: FlightCondition, mass: Array, lift_limit: float
) -> Array:
    """Mach number at which a mass [kg] needs the lift coefficient ``lift_limit``."""
    weight = mass * STANDARD_GRAVITY
    return np.sqrt(weight / (0.7 * flight.static_pressure * aircraft.wing_area * lift_limit))


def load_factor_of_drag(
    aircraft: Aircraft,
    flight: FlightCondition,
    mass: Array,
    force: Array,
    most: Array,
    drag_factor: float = 1.0,
    drag_area: float = 0.0,
) -> Array:
    """Load factor at which drag is a given force [N], at most ``most`` and not below one.

    Drag rises with lift above its least, so that halving the interval finds it; where drag at one
    g is above the force the answer is one, and drag stays above it.
    """
    weight = mass * STANDARD_GRAVITY
    low = np.ones(np.broadcast_shapes(weight.shape, force.shape, most.shape))
    high = np.maximum(np.broadcast_to(most, low.shape), 1.0)
    for _ in range(_HALVINGS):
        middle = 0.5 * (low + high)
        is_more = drag(aircraft, flight, middle * weight, drag_factor, drag_area) > force
        low, high = np.where(is_more, low, middle), np.where(is_more, middle, high)
    return 0.5 * (low + high)


def path_angle_sine(
    aircraft: Aircraft,
    flight: FlightCondition,
    mass: Array,
    thrust: Array,
    acceleration_factor: Array,
    near: Array | None = None,
    drag_factor: ArrayLike = 1.0,
    drag_area: ArrayLike = 0.0,
) -> Array:
    """Sine of the geometric path angle where thrust [N] is not drag.

    ``(T - D) / W = sin(gamma) (1 + V/g dV/dh)`` with drag at lift = W cos(gamma); the factor in
    brackets is ``acceleration_factor``. Solved by fixed-point sweeps, which contract by the small
    share of induced drag that the cosine takes away, from ``near`` where it is given.
    """
    weight = mass * STANDARD_GRAVITY
    sine = np.zeros(np.broadcast_shapes(weight.shape, thrust.shape)) if near is None else near
    for _ in range(60):
        lift = weight * np.sqrt(1.0 - sine**2)
        resistance = drag(aircraft, flight, lift, drag_factor, drag_area)
        new = (thrust - resistance) / (weight * acceleration_factor)
        new = np.minimum(np.maximum(new, -_STEEPEST_SINE), _STEEPEST_SINE)
        change = np.max(np.abs(new - sine), initial=0.0)
        sine = new
        if change < 1e-15:
            break
    return sine
