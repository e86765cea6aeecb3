"""Mach number and altitude that a speed rule asks for at a mass."""

from __future__ import annotations

from dataclasses import fields
from functools import lru_cache

import numpy as np
from numpy.typing import NDArray

from engine.atmosphere import FlightCondition, flight_condition
from engine.quantities import STANDARD_GRAVITY
from mission.aerodynamics import best_lift_coefficient
from mission.aircraft import Aircraft
from mission.airspeeds import mach_from_calibrated_airspeed, pressure_altitude_from_pressure
from mission.forces import stall_mach
from mission.march.span import SpeedRule

Array = NDArray[np.float64]
SLOWEST_STALL_MULTIPLE = 1.2  # common practice, no source: least speed of a hold over stall speed


def mach_at(rule: SpeedRule, aircraft: Aircraft, air: FlightCondition, mass: Array) -> Array:
    """Mach number of a rule in still air at a mass [kg]; for least fuel a first guess."""
    shape = np.broadcast_shapes(air.shape, mass.shape)
    if rule.kind == "standstill":
        return np.zeros(shape)
    if rule.kind == "mach":
        return np.full(shape, rule.value)
    if rule.kind == "calibrated":
        assert rule.value is not None
        mach = mach_from_calibrated_airspeed(rule.value, air.static_pressure)
        return np.broadcast_to(mach, shape)
    if rule.kind == "stall":
        assert rule.value is not None
        return rule.value * stall_mach(aircraft, air, mass, rule.lift_limit)
    if rule.kind == "lift_coefficient":
        assert rule.value is not None
        return stall_mach(aircraft, air, mass, rule.value)
    guess = stall_mach(aircraft, air, mass, best_lift_coefficient(aircraft.polar))
    return np.clip(guess, *hold_bounds(aircraft, air, mass))


@lru_cache(maxsize=512)
def _still_air(altitude: float, deviation: float) -> FlightCondition:
    return flight_condition(altitude, 0.0, deviation)


def level_air(altitude: float, deviation: float, count: int) -> FlightCondition:
    """Still air at one pressure altitude [m], shape (count, 1)."""
    air = _still_air(altitude, deviation)
    return FlightCondition(*(np.full((count, 1), getattr(air, f.name)) for f in fields(air)))


def hold_bounds(aircraft: Aircraft, air: FlightCondition, mass: Array) -> tuple[Array, Array]:
    """Slowest and fastest Mach number at which a hold may look for its least fuel flow."""
    slow = SLOWEST_STALL_MULTIPLE * stall_mach(
        aircraft, air, mass, aircraft.maximum_lift_coefficient
    )
    fast = np.full(slow.shape, aircraft.maximum_operating_mach)
    return slow, np.maximum(fast, slow)


def cruise_climb_air(
    aircraft: Aircraft, mach: float, lift_coefficient: Array, mass: Array, deviation: float
) -> FlightCondition:
    """Flight condition where weight is lift at a held Mach number and lift coefficient."""
    pressure = mass * STANDARD_GRAVITY / (0.7 * mach**2 * aircraft.wing_area * lift_coefficient)
    altitude = np.clip(pressure_altitude_from_pressure(pressure), -1000.0, 20000.0)
    return flight_condition(altitude, mach, deviation)
