"""Airspeeds of compressible flow, and heights that follow from them.

Calibrated airspeed is defined through impact pressure and the standard sea-level air. Source:
ISO 2533:1975 for the air; the isentropic pitot equation as in Young, Performance of the Jet
Transport Airplane, chapter 6 (from memory). Arrays of any broadcastable shape, SI.
"""

from __future__ import annotations

import numpy as np
from ambiance import CONST
from numpy.typing import ArrayLike, NDArray

from engine.atmosphere import FlightCondition
from engine.quantities import STANDARD_GRAVITY

Array = NDArray[np.float64]
_SEA_LEVEL_PRESSURE = 101325.0
_SEA_LEVEL_SPEED_OF_SOUND = float(np.sqrt(1.4 * CONST.R * 288.15))
_SEA_LEVEL_DENSITY = 1.225
_MOST_STEPS, _SETTLED = 40, 1e-14


def impact_pressure_ratio(mach: ArrayLike) -> Array:
    """Impact pressure over static pressure; above Mach 1 behind the normal shock of the probe.

    Rayleigh's pitot formula: Ames Research Staff, Equations, Tables, and Charts for Compressible
    Flow, NACA Report 1135, equation 100 (from memory), with 1.4 for the ratio of heat capacities.
    """
    square = np.asarray(mach, dtype=float) ** 2
    shock = np.maximum(square, 1.0)
    behind = (1.2 * shock) ** 3.5 * (6.0 / (7.0 * shock - 1.0)) ** 2.5
    return np.where(square > 1.0, behind, (1.0 + 0.2 * square) ** 3.5) - 1.0


def _impact_slope(mach: Array) -> Array:
    """Derivative of :func:`impact_pressure_ratio` with Mach number."""
    square = mach**2
    shock = np.maximum(square, 1.0)
    behind = (impact_pressure_ratio(mach) + 1.0) * 7.0 * (2.0 * shock - 1.0)
    subsonic = 1.4 * mach * (1.0 + 0.2 * square) ** 2.5
    return np.where(square > 1.0, behind / (mach * (7.0 * shock - 1.0)), subsonic)


def mach_from_impact_pressure_ratio(ratio: ArrayLike) -> Array:
    """Inverse of :func:`impact_pressure_ratio`, by Newton's method above Mach 1."""
    target = np.asarray(ratio, dtype=float)
    mach = np.sqrt(5.0 * ((target + 1.0) ** (2.0 / 7.0) - 1.0))
    is_fast = mach > 1.0
    for _ in range(_MOST_STEPS):
        if not np.any(is_fast):
            break
        step = (impact_pressure_ratio(mach) - target) / np.maximum(_impact_slope(mach), 1e-9)
        step = np.where(is_fast, step, 0.0)
        mach = np.where(is_fast, np.maximum(mach - step, 1.0), mach)
        if np.max(np.abs(step)) < _SETTLED:
            break
    return mach


def mach_from_calibrated_airspeed(airspeed: ArrayLike, static_pressure: ArrayLike) -> Array:
    """Mach number at a calibrated airspeed [m/s] and static pressure [Pa]."""
    impact = impact_pressure_ratio(np.asarray(airspeed) / _SEA_LEVEL_SPEED_OF_SOUND)
    pressure_ratio = _SEA_LEVEL_PRESSURE / np.asarray(static_pressure, dtype=float)
    return mach_from_impact_pressure_ratio(impact * pressure_ratio)


def calibrated_airspeed(mach: ArrayLike, static_pressure: ArrayLike) -> Array:
    """Calibrated airspeed [m/s] at a Mach number and static pressure [Pa]."""
    pressure = np.asarray(static_pressure, dtype=float)
    impact = impact_pressure_ratio(mach) * pressure / _SEA_LEVEL_PRESSURE
    return _SEA_LEVEL_SPEED_OF_SOUND * mach_from_impact_pressure_ratio(impact)


def equivalent_airspeed(flight: FlightCondition) -> Array:
    """Equivalent airspeed [m/s]: true airspeed times the root of the density ratio."""
    return flight.true_airspeed * np.sqrt(flight.density / _SEA_LEVEL_DENSITY)


def crossover_altitude(airspeed: float, mach: float) -> float:
    """Pressure altitude [m] where a calibrated airspeed [m/s] and a Mach number agree."""
    impact = impact_pressure_ratio(airspeed / _SEA_LEVEL_SPEED_OF_SOUND)
    pressure = _SEA_LEVEL_PRESSURE * impact / impact_pressure_ratio(mach)
    return float(pressure_altitude_from_pressure(pressure))


def pressure_altitude_from_pressure(static_pressure: ArrayLike) -> Array:
    """Pressure altitude [m] of a static pressure [Pa], up to 20 km.

    ISO 2533:1975, with the base pressures that ``ambiance`` uses in :mod:`engine.atmosphere`.
    """
    pressure = np.asarray(static_pressure, dtype=float)
    by_base: dict[float, dict[str, float]] = {
        layer["H_base"]: layer for layer in CONST.LAYER_DICTS.values()
    }
    troposphere, stratosphere = by_base[0.0], by_base[11.0e3]
    exponent: float = -CONST.R * troposphere["beta"] / STANDARD_GRAVITY
    warming = (pressure / _SEA_LEVEL_PRESSURE) ** exponent - 1.0
    below = 288.15 / troposphere["beta"] * warming
    scale_height: float = CONST.R * stratosphere["T"] / STANDARD_GRAVITY
    above = stratosphere["H_base"] - scale_height * np.log(pressure / stratosphere["p"])
    return np.where(pressure > stratosphere["p"], below, above)


def calibrated_mach_slope(flight: FlightCondition) -> Array:
    """Change of Mach number with pressure altitude [1/m] at constant calibrated airspeed."""
    mach = flight.mach
    standard_temperature = flight.static_temperature - flight.temperature_deviation
    pressure_slope = STANDARD_GRAVITY / (CONST.R * standard_temperature)
    rise: Array = impact_pressure_ratio(mach) * pressure_slope
    return rise / _impact_slope(mach)


def climb_acceleration_factor(flight: FlightCondition, mach_slope: ArrayLike) -> Array:
    """``1 + V/g dV/dh`` of a climb whose Mach number changes by ``mach_slope`` [1/m].

    The slope is along pressure altitude, 0 at constant Mach number; h is geometric height, which on
    a day that is not standard grows by temperature over standard temperature.
    """
    sound, temperature = flight.speed_of_sound, flight.static_temperature
    sound_slope = sound / (2.0 * temperature) * flight.lapse_rate
    geometric = (temperature - flight.temperature_deviation) / temperature
    speed_slope: Array = (sound * np.asarray(mach_slope) + flight.mach * sound_slope) * geometric
    return 1.0 + flight.true_airspeed / STANDARD_GRAVITY * speed_slope


def energy_height(height: ArrayLike, true_airspeed: ArrayLike) -> Array:
    """Height [m] at which the same energy would be all potential."""
    return np.asarray(height) + np.asarray(true_airspeed) ** 2 / (2.0 * STANDARD_GRAVITY)
