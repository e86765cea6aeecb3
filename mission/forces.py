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


def dynamic_pressure(flight: FlightCondition) -> Array:
    """Half density times true airspeed squared [Pa]."""
    return 0.5 * flight.density * flight.true_airspeed**2


def lift_coefficient(aircraft: Aircraft, flight: FlightCondition, lift: ArrayLike) -> Array:
    """Lift coefficient that a lift force [N] takes."""
    return np.asarray(lift) / (dynamic_pressure(flight) * aircraft.wing_area)


def drag(
    aircraft: Aircraft, flight: FlightCondition, lift: ArrayLike, drag_factor: float = 1.0
) -> Array:
    """Drag [N] at a lift force [N]; ``drag_factor`` multiplies the aircraft's own."""
    coefficient = drag_coefficient(
        aircraft.polar, lift_coefficient(aircraft, flight, lift), flight.mach
    )
    area = aircraft.wing_area * aircraft.drag_factor * drag_factor
    return coefficient * dynamic_pressure(flight) * area


def stall_mach(
    aircraft: Aircraft, flight: FlightCondition, mass: Array, lift_limit: float
) -> Array:
    """Mach number at which a mass [kg] needs the lift coefficient ``lift_limit``."""
    weight = mass * STANDARD_GRAVITY
    return np.sqrt(weight / (0.7 * flight.static_pressure * aircraft.wing_area * lift_limit))


def path_angle_sine(
    aircraft: Aircraft,
    flight: FlightCondition,
    mass: Array,
    thrust: Array,
    acceleration_factor: Array,
    near: Array | None = None,
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
        new = (thrust - drag(aircraft, flight, lift)) / (weight * acceleration_factor)
        new = np.minimum(np.maximum(new, -_STEEPEST_SINE), _STEEPEST_SINE)
        change = np.max(np.abs(new - sine), initial=0.0)
        sine = new
        if change < 1e-15:
            break
    return sine
