"""What every rating of the engines comes to at one point of the flight envelope."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from engine.atmosphere import FlightCondition
from engine.interface import EngineState, is_unanswered
from engine.quantities import STANDARD_GRAVITY
from mission.aerodynamics import buffet_lift_coefficient
from mission.aircraft import Aircraft
from mission.airspeeds import calibrated_mach_slope, climb_acceleration_factor
from mission.forces import STEEPEST, drag, load_factor_of_drag, path_angle_sine, stall_mach
from mission.march.turning import turn_rate

Array = NDArray[np.float64]
Flags = NDArray[np.bool_]
_SLACK = 1e-6  # of a load factor


@dataclass(frozen=True)
class AtRatings:
    """All engines together at ratings and flight idle, arrays (R,) over their names.

    NaN stands where the engine has no state, where a path is steeper than 60 degrees, and for the
    turn of an aircraft that thrust does not keep level.

    Attributes
    ----------
    names, is_answered
    thrust, margin : thrust, and what it is above drag [N]
    fuel_flow, specific_fuel_consumption : [kg/s], [kg/(N s)]
    held_by : the limit of the engine that governs
    excess_power : specific, of level flight [m/s]
    climb : rate of climb at a true airspeed held [m/s]
    climb_at_mach, climb_at_airspeed : the same at a Mach number and at a calibrated airspeed held
    path_angle : of ``climb``, relative to the air [rad]
    load_factor : greatest of a level turn that is sustained
    load_limit : what bounds it: thrust, lift, structure, buffet
    turn_rate, turn_radius : [rad/s], [m]
    """

    names: tuple[str, ...]
    is_answered: Flags
    thrust: Array
    margin: Array
    fuel_flow: Array
    specific_fuel_consumption: Array
    held_by: NDArray[np.str_]
    excess_power: Array
    climb: Array
    climb_at_mach: Array
    climb_at_airspeed: Array
    path_angle: Array
    load_factor: Array
    load_limit: NDArray[np.str_]
    turn_rate: Array
    turn_radius: Array


def load_factors(aircraft: Aircraft, flight: FlightCondition, stall: float) -> dict[str, float]:
    """Load factors that lift, structure and, where it is known, the onset of buffet allow."""
    coefficient = (stall / float(flight.mach)) ** 2 * aircraft.maximum_lift_coefficient
    factors = {
        "lift": (float(flight.mach) / stall) ** 2,
        "structure": aircraft.maximum_load_factor,
    }
    if aircraft.buffet_onset is not None:
        factors["buffet"] = float(buffet_lift_coefficient(aircraft, flight.mach)) / coefficient
    return factors


def at_ratings(
    aircraft: Aircraft,
    flight: FlightCondition,
    mass: float,
    names: tuple[str, ...],
    state: EngineState,
) -> AtRatings:
    """What the ratings come to, the last member of the call left out."""
    count = len(names)
    is_answered = ~is_unanswered(state.outcome[:count])
    thrust = np.where(is_answered, state.net_thrust[:count] * aircraft.engine_count, np.nan)
    flow = state.fuel_flow[:count] * aircraft.engine_count * aircraft.fuel_flow_factor
    masses, weight = np.full(count, mass), mass * STANDARD_GRAVITY
    margin = thrust - drag(aircraft, flight, weight)
    sines = [
        _sine(aircraft, flight, masses, thrust, factor)
        for factor in (
            np.asarray(1.0),
            climb_acceleration_factor(flight, 0.0),
            climb_acceleration_factor(flight, calibrated_mach_slope(flight)),
        )
    ]
    climbs = [flight.true_airspeed * sine for sine in sines]
    factor, limit = _turns(aircraft, flight, masses, thrust, margin)
    rate = turn_rate(factor, flight.true_airspeed)
    with np.errstate(divide="ignore"):
        radius = flight.true_airspeed / rate
    return AtRatings(
        names=names,
        is_answered=is_answered,
        thrust=thrust,
        margin=margin,
        fuel_flow=np.where(is_answered, flow, np.nan),
        specific_fuel_consumption=np.where(
            is_answered, state.specific_fuel_consumption[:count] * aircraft.fuel_flow_factor, np.nan
        ),
        held_by=state.binding_limit_names[:count],
        excess_power=flight.true_airspeed * margin / weight,
        climb=climbs[0],
        climb_at_mach=climbs[1],
        climb_at_airspeed=climbs[2],
        path_angle=np.arcsin(sines[0]),
        load_factor=factor,
        load_limit=limit,
        turn_rate=rate,
        turn_radius=radius,
    )


def _sine(
    aircraft: Aircraft, flight: FlightCondition, mass: Array, thrust: Array, factor: Array
) -> Array:
    """Sine of the path angle; NaN without thrust, and where these equations end."""
    known = np.where(np.isfinite(thrust), thrust, 0.0)
    sine = path_angle_sine(aircraft, flight, mass, known, factor)
    is_flown = np.isfinite(thrust) & (np.abs(sine) <= np.sin(np.radians(STEEPEST)))
    return np.where(is_flown, sine, np.nan)


def _turns(
    aircraft: Aircraft, flight: FlightCondition, mass: Array, thrust: Array, margin: Array
) -> tuple[Array, NDArray[np.str_]]:
    """Greatest load factor of a sustained level turn, and what bounds it."""
    stall = stall_mach(aircraft, flight, mass, aircraft.maximum_lift_coefficient)
    bounds = {
        name: np.full(mass.shape, value)
        for name, value in load_factors(aircraft, flight, float(stall[0])).items()
    }
    named = np.array(list(bounds))
    stacked = np.stack(list(bounds.values()))
    most = np.min(stacked, axis=0)
    keeps_level = (margin >= 0.0) & (most >= 1.0)
    force = np.where(keeps_level, thrust, 0.0)
    factor = load_factor_of_drag(aircraft, flight, mass, force, most)
    is_thrust = factor < most * (1.0 - _SLACK)
    limit = np.where(is_thrust, "thrust", named[np.argmin(stacked, axis=0)])
    return np.where(keeps_level, factor, np.nan), limit
