"""Level turns: the load factor that thrust sustains, and the rate and radius of a turn.

Sustained load factor ``n = (T/W)(L/D)`` at the lift of the turn, rate ``g sqrt(n^2 - 1) / V``,
radius ``V^2 / (g sqrt(n^2 - 1))``. Source: L. M. Nicolai and G. E. Carichner, Fundamentals of
Aircraft and Airship Design, vol. I, table 3.2; D. P. Raymer, Aircraft Design, chapter 17.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray

from engine.atmosphere import FlightCondition
from engine.quantities import STANDARD_GRAVITY
from mission.aerodynamics import least_drag_lift_coefficient
from mission.aircraft import Aircraft
from mission.forces import drag, dynamic_pressure
from mission.questions.searching import falling_root

Array = NDArray[np.float64]


def lift_load_factor(
    aircraft: Aircraft, flight: FlightCondition, mass: Array, coefficient: ArrayLike
) -> Array:
    """Load factor at which a mass [kg] takes a lift coefficient."""
    force = np.asarray(coefficient) * dynamic_pressure(flight) * aircraft.wing_area
    return force / (mass * STANDARD_GRAVITY)


def sustained_load_factor(
    aircraft: Aircraft, flight: FlightCondition, mass: Array, thrust: Array
) -> Array:
    """Greatest load factor, up to that of greatest lift, at which drag is not above thrust [N].

    Below one where thrust is less than the drag of level flight; NaN where it is less than that of
    any lift.
    """
    weight = mass * STANDARD_GRAVITY
    shape = np.broadcast_shapes(flight.shape, weight.shape, thrust.shape)

    def surplus(load_factor: Array) -> Array:
        return thrust / drag(aircraft, flight, load_factor * weight) - 1.0

    least = least_drag_lift_coefficient(aircraft.polar, flight.mach)
    low, high = (
        np.broadcast_to(lift_load_factor(aircraft, flight, mass, coefficient), shape)
        for coefficient in (np.maximum(least, 0.0), aircraft.maximum_lift_coefficient)
    )
    found = falling_root(surplus, low, high)
    found = np.where(surplus(high[None])[0] >= 0.0, high, found)
    return np.where(surplus(low[None])[0] >= 0.0, found, np.nan)


def turn_rate(true_airspeed: Array, load_factor: Array) -> Array:
    """Rate of a level turn [rad/s]; NaN below a load factor of one."""
    return STANDARD_GRAVITY * _sideways(load_factor) / true_airspeed


def turn_radius(true_airspeed: Array, load_factor: Array) -> Array:
    """Radius of a level turn [m]; infinite straight on, NaN below a load factor of one."""
    with np.errstate(divide="ignore"):
        return true_airspeed**2 / (STANDARD_GRAVITY * _sideways(load_factor))


def _sideways(load_factor: Array) -> Array:
    """Share of weight that pulls sideways."""
    is_level = load_factor >= 1.0
    return np.where(is_level, np.sqrt(np.where(is_level, load_factor, 1.0) ** 2 - 1.0), np.nan)
