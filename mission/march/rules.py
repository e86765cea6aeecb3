"""Mach number and altitude that a speed rule asks for at a mass."""

from __future__ import annotations

from dataclasses import fields
from functools import lru_cache

import numpy as np
from numpy.typing import NDArray

from engine.atmosphere import FlightCondition
from engine.quantities import STANDARD_GRAVITY
from mission.aerodynamics import best_lift_coefficient
from mission.air import Air
from mission.aircraft import Aircraft
from mission.airspeeds import mach_from_calibrated_airspeed, pressure_altitude_from_pressure
from mission.forces import stall_mach
from mission.march.span import SpeedRule

Array = NDArray[np.float64]
SLOWEST_STALL_MULTIPLE = 1.2  # common practice, no source: least speed of a hold over stall speed
_RANGE_SHARE = 3.0**-0.5  # of the lift coefficient of least drag: best range at one altitude
_FIRST_SHARE = 0.95  # of the fastest allowed, where the search for the greatest speed begins


def mach_at(rule: SpeedRule, aircraft: Aircraft, air: FlightCondition, mass: Array) -> Array:
    """Mach number of a rule in still air at a mass [kg]; for a sought speed a first guess."""
    shape = np.broadcast_shapes(air.shape, mass.shape)
    if rule.kind == "standstill":
        return np.zeros(shape)
    if rule.kind == "mach":
        return np.full(shape, rule.value)
    if rule.kind == "calibrated":
        assert rule.value is not None
        mach = mach_from_calibrated_airspeed(rule.value, air.static_pressure)
        return np.broadcast_to(mach, shape)
    if rule.is_sought:
        return _first_guess(rule, aircraft, air, mass)
    assert rule.value is not None
    if rule.kind == "stall":
        return rule.value * stall_mach(aircraft, air, mass, rule.lift_limit)
    return stall_mach(aircraft, air, mass, rule.value)


def _first_guess(rule: SpeedRule, aircraft: Aircraft, air: FlightCondition, mass: Array) -> Array:
    """Where the search for a best speed begins."""
    slow, fast = hold_bounds(aircraft, air, mass)
    if rule.kind == "maximum_level":
        return np.maximum(slow, _FIRST_SHARE * fast)
    best = float(best_lift_coefficient(aircraft.polar))
    share = 1.0 if rule.kind == "least_fuel" else _RANGE_SHARE
    return np.clip(stall_mach(aircraft, air, mass, share * best), slow, fast)


@lru_cache(maxsize=512)
def _still_air(altitude: float, air: Air) -> FlightCondition:
    return air.condition(altitude)


def level_air(altitude: float, air: Air, count: int) -> FlightCondition:
    """Still air at one pressure altitude [m], shape (count, 1)."""
    still = _still_air(altitude, air)
    return FlightCondition(*(np.full((count, 1), getattr(still, f.name)) for f in fields(still)))


def hold_bounds(aircraft: Aircraft, air: FlightCondition, mass: Array) -> tuple[Array, Array]:
    """Slowest and fastest Mach number at which a best speed is looked for."""
    slow = SLOWEST_STALL_MULTIPLE * stall_mach(
        aircraft, air, mass, aircraft.maximum_lift_coefficient
    )
    by_airspeed = mach_from_calibrated_airspeed(
        aircraft.maximum_operating_calibrated_airspeed, air.static_pressure
    )
    fast = np.broadcast_to(np.minimum(aircraft.maximum_operating_mach, by_airspeed), slow.shape)
    return slow, np.maximum(fast, slow)


def cruise_climb_air(
    aircraft: Aircraft, mach: float, lift_coefficient: Array, mass: Array, air: Air
) -> FlightCondition:
    """Flight condition where weight is lift at a held Mach number and lift coefficient."""
    pressure = mass * STANDARD_GRAVITY / (0.7 * mach**2 * aircraft.wing_area * lift_coefficient)
    altitude = np.clip(pressure_altitude_from_pressure(pressure), -1000.0, 20000.0)
    return air.condition(altitude, mach)
