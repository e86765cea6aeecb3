"""Best speeds of level flight, each found by one Newton step a sweep.

Least fuel flow for a time; best specific air range (fuel flow over true airspeed); 99 % of it on
the fast side; least cost of fuel and time over the ground; the fastest at which thrust at the
rating is drag. Slopes are finite differences: the engine is asked slower and faster with every
sweep. Definitions of maximum range and long range: common practice, no source; of the cost index:
fuel and time cost over ground speed (from memory).
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from engine.atmosphere import FlightCondition
from mission.march.rules import hold_bounds
from mission.march.span import Span
from mission.march.world import World

Array = NDArray[np.float64]
LONG_RANGE_SHARE = 0.99  # of the best specific air range
_STENCIL = 0.004  # Mach number to each side, for slope and curvature at the best
_SLOPE = 0.001  # Mach number faster, for the slope at a speed that is not a best
_LARGEST_MACH_STEP = 0.05
_LEAST_AHEAD = 0.002  # Mach number by which the long-range speed is above the best at least
_LEAST_THRUST = 1.0  # N
_HAIR = 1e-5  # of thrust, kept in hand at the greatest level speed: it is met, not passed


def own_row(span: Span) -> int:
    """Which row of a stencil is the speed flown."""
    return {"long_range": 3, "maximum_level": 0}.get(span.end_speed.kind, 1)


def stencil(span: Span, air: FlightCondition, mach: Array, best: Array) -> FlightCondition:
    """The conditions to ask the engine for: shape (rows, nodes, members)."""
    if span.end_speed.kind == "maximum_level":
        return air.with_mach(np.stack([mach, mach, mach + _SLOPE]))
    around = [best - _STENCIL, best, best + _STENCIL]
    if span.end_speed.kind == "long_range":
        around += [mach, mach + _SLOPE]
    return air.with_mach(np.stack(around))


def demanded(span: Span, resistance: Array, running: int) -> Array:
    """Net thrust [N] of one engine to ask for on a stencil; NaN where the rating itself is."""
    thrust: Array = resistance / running
    if span.end_speed.kind == "maximum_level":
        thrust = thrust.copy()
        thrust[1:] = np.nan
    return thrust


def next_machs(
    span: Span,
    world: World,
    flight: FlightCondition,
    mass: Array,
    best: Array,
    fuel_flow: Array,
    thrust: Array,
    resistance: Array,
) -> tuple[Array, Array]:
    """Next Mach number flown, and next best one, from the answers on a stencil.

    ``flight``, ``fuel_flow`` [kg/s], ``thrust`` and ``resistance`` [N] of the aircraft have the
    shape of the stencil (rows, nodes, members); ``best`` is the best so far. Both answers lie
    between 1.2 times the stall speed and the aircraft's greatest speeds.
    """
    slow, fast = hold_bounds(world.aircraft, flight.at(own_row(span)), mass)

    def bounded(mach: Array) -> Array:
        return np.minimum(np.maximum(mach, slow), fast)

    if span.end_speed.kind == "maximum_level":
        excess = (1.0 - _HAIR) * thrust[1:] - resistance[1:]
        slope = (excess[1] - excess[0]) / _SLOPE
        step = np.where(
            slope < 0.0,
            -excess[0] / _away_from_zero(slope),
            np.sign(excess[0]) * _LARGEST_MACH_STEP,
        )
        step = np.clip(step, -_LARGEST_MACH_STEP, _LARGEST_MACH_STEP)
        fastest = bounded(flight.mach[0] + step)
        return fastest, fastest
    # Where the rating gives less than drag, its fuel flow says nothing of what flying there costs.
    missing = np.maximum(resistance / np.maximum(thrust, _LEAST_THRUST), 1.0)
    cost = _cost(span, flight, fuel_flow * missing)
    better = bounded(best + _newton(*cost[:3]))
    if span.end_speed.kind != "long_range":
        return better, better
    mach = flight.mach[3]
    to_go = cost[1] / LONG_RANGE_SHARE - cost[3]
    slope = np.maximum((cost[4] - cost[3]) / _SLOPE, 0.0)
    step = np.clip(to_go / _away_from_zero(slope), -_LARGEST_MACH_STEP, _LARGEST_MACH_STEP)
    return bounded(np.maximum(mach + step, better + _LEAST_AHEAD)), better


def _cost(span: Span, flight: FlightCondition, fuel_flow: Array) -> Array:
    """What is to be least: fuel per time or air distance, or fuel and time per ground distance."""
    rule = span.end_speed
    if rule.kind == "least_fuel":
        return fuel_flow
    if rule.kind == "least_cost":
        assert rule.value is not None
        ground = flight.true_airspeed + span.air.tailwind_at(flight.pressure_altitude)
        return (fuel_flow + rule.value) / np.maximum(ground, 1.0)
    return fuel_flow / flight.true_airspeed


def _newton(slower: Array, here: Array, faster: Array) -> Array:
    """Step to the least of a quantity known at a stencil; downhill where it is not convex."""
    slope = (faster - slower) / (2.0 * _STENCIL)
    curvature = (faster - 2.0 * here + slower) / _STENCIL**2
    convex = curvature > 0.0
    step = np.where(
        convex, -slope / np.where(convex, curvature, 1.0), -np.sign(slope) * _LARGEST_MACH_STEP
    )
    return np.clip(step, -_LARGEST_MACH_STEP, _LARGEST_MACH_STEP)


def _away_from_zero(slope: Array) -> Array:
    return np.where(slope == 0.0, np.inf, slope)
