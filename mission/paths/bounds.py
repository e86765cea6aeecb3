"""What bounds a climb at each pressure altitude, by name: altitudes and Mach numbers.

The aircraft is clean and flies at lift equal to weight, its buffet margin kept. All bounds are
those that the flight itself is held to.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from engine.atmosphere import HIGHEST_PRESSURE_ALTITUDE, FlightCondition
from engine.quantities import STANDARD_GRAVITY
from mission.aerodynamics import buffet_lift_coefficient, buffet_mach_bounds, polar_coverage
from mission.airspeeds import mach_from_calibrated_airspeed
from mission.forces import stall_mach
from mission.paths.climber import Climber

Array = NDArray[np.float64]
Bounds = dict[str, Array]
_ALTITUDE = "pressure altitude in the engine's table"
_MACH = "Mach number in the engine's table"
_POLAR_MACH = "Mach number in the drag polar's table"
_POLAR_LIFT = "lift coefficient in the drag polar's table"
_BUFFET_MACH = "Mach number in the table of buffet onset"
_BUFFET_POINTS = 4001  # over the Mach numbers of buffet onset


def lowest_altitudes(climber: Climber) -> dict[str, float]:
    """Least pressure altitudes [m]."""
    table = climber.engine.coverage
    covered = {} if table is None else {_ALTITUDE: table.pressure_altitude[0]}
    return {"ground elevation": climber.ground_elevation, **covered}


def highest_altitudes(climber: Climber) -> dict[str, float]:
    """Greatest pressure altitudes [m]."""
    table = climber.engine.coverage
    covered = {} if table is None else {_ALTITUDE: table.pressure_altitude[1]}
    return {
        "top of the atmosphere": HIGHEST_PRESSURE_ALTITUDE,
        "maximum pressure altitude": climber.aircraft.maximum_pressure_altitude,
        **covered,
    }


def slowest_machs(climber: Climber, air: FlightCondition) -> Bounds:
    """Least Mach numbers in some air."""
    aircraft, multiple = climber.aircraft, climber.least_over_stall
    stall = _mach_of_lift(climber, air, aircraft.maximum_lift_coefficient)
    bounds = {f"{multiple:g} times stall speed": multiple * stall}
    table, polar = climber.engine.coverage, polar_coverage(aircraft.polar)
    if table is not None:
        bounds[_MACH] = np.full(air.shape, table.mach[0])
    if polar is not None:
        bounds[_POLAR_MACH] = np.full(air.shape, polar.mach[0])
        bounds[_POLAR_LIFT] = _mach_of_lift(climber, air, polar.lift_coefficient[1])
    if aircraft.buffet_onset is not None:
        bounds[_buffet_name(climber)] = _buffet_machs(climber, air)[0]
    return bounds


def fastest_machs(climber: Climber, air: FlightCondition) -> Bounds:
    """Greatest Mach numbers in some air."""
    aircraft, pressure = climber.aircraft, air.static_pressure
    airspeed = aircraft.maximum_operating_calibrated_airspeed
    bounds = {
        "maximum operating Mach number": np.full(air.shape, aircraft.maximum_operating_mach),
        "maximum operating calibrated airspeed": mach_from_calibrated_airspeed(airspeed, pressure),
        "dynamic pressure": np.sqrt(aircraft.maximum_dynamic_pressure / (0.7 * pressure)),
    }
    table, polar = climber.engine.coverage, polar_coverage(aircraft.polar)
    buffet = buffet_mach_bounds(aircraft)
    if table is not None:
        bounds[_MACH] = np.full(air.shape, table.mach[1])
    if polar is not None:
        bounds[_POLAR_MACH] = np.full(air.shape, polar.mach[1])
        if polar.lift_coefficient[0] > 0.0:
            bounds[_POLAR_LIFT] = _mach_of_lift(climber, air, polar.lift_coefficient[0])
    if buffet is not None:
        bounds[_BUFFET_MACH] = np.full(air.shape, buffet[1])
        bounds[_buffet_name(climber)] = _buffet_machs(climber, air)[1]
    return bounds


def _mach_of_lift(climber: Climber, air: FlightCondition, lift_coefficient: float) -> Array:
    mass = np.full(air.shape, climber.mass)
    return stall_mach(climber.aircraft, air, mass, lift_coefficient)


def _buffet_name(climber: Climber) -> str:
    return f"buffet onset at {climber.aircraft.buffet_load_factor:g} g"


def _buffet_machs(climber: Climber, air: FlightCondition) -> tuple[Array, Array]:
    """Least and greatest Mach number at which a manoeuvre stays below buffet onset.

    ``CL M^2`` of onset has to be at least what the load takes, which grows as pressure falls. It is
    greatest at some Mach number, from which the answers are looked for to both sides; where even
    that does not suffice, the least is above the greatest.
    """
    aircraft = climber.aircraft
    ends = buffet_mach_bounds(aircraft)
    assert ends is not None
    mach = np.linspace(*ends, _BUFFET_POINTS)
    borne = buffet_lift_coefficient(aircraft, mach) * mach**2
    load = max(aircraft.buffet_load_factor, 1.0) * climber.mass * STANDARD_GRAVITY
    needed = load / (0.7 * air.static_pressure * aircraft.wing_area)
    top = int(np.argmax(borne))
    rising = np.minimum.accumulate(borne[top::-1])[::-1]
    falling = np.minimum.accumulate(borne[top:])
    short = np.sqrt(np.maximum(needed / borne[top], 1.0))
    slow = np.interp(needed, rising, mach[: top + 1]) * short
    fast = np.interp(-needed, -falling, mach[top:]) / short
    return slow, fast
