"""What climbs, in which air, and how fast it gains energy there."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from engine.atmosphere import FlightCondition
from engine.interface import Engine, is_unanswered
from engine.quantities import FOOT, STANDARD_GRAVITY
from mission.aircraft import Aircraft
from mission.forces import drag

Array = NDArray[np.float64]


@dataclass(frozen=True)
class Climber:
    """An aircraft of one mass with its engines at one rating, in the air of a day.

    Attributes
    ----------
    aircraft, engine, rating : rating by name
    mass : [kg], held along the whole path
    air : flight condition at pressure altitudes [m] and Mach numbers, arrays of one shape
    air_kinks : pressure altitudes [m] at which a slope of the air changes, the standard
        atmosphere's own left out
    engine_count : how many are running
    extra_drag_area : of what hangs outside, times dynamic pressure [m2]
    ground_elevation : pressure altitude below which no path goes [m]
    least_rate : specific excess power at which a climb is over [m/s]; 100 ft/min, an operational
        ceiling's rate of climb
    least_over_stall : least speed as a multiple of stall speed; common practice, no source
    """

    aircraft: Aircraft
    engine: Engine
    rating: str
    mass: float
    air: Callable[[Array, Array], FlightCondition]
    engine_count: int
    air_kinks: tuple[float, ...] = ()
    extra_drag_area: float = 0.0
    ground_elevation: float = 0.0
    least_rate: float = 100.0 * FOOT / 60.0
    least_over_stall: float = 1.2


@dataclass(frozen=True)
class Rates:
    """What a climber does at a flight condition; arrays of its shape.

    Attributes
    ----------
    excess_power : specific, ``(T - D) V / W`` at lift equal to weight [m/s]
    fuel_flow : of all running engines [kg/s]
    is_answered : whether the engine has a state there; the others' numbers mean nothing
    unknowns : the engine's own, where a call near by may start, (n, ...)
    regime : whole numbers at whose change the engine has a kink, (k, ...): on which side of each
        of its kinks it is, and which limit governs
    """

    excess_power: Array
    fuel_flow: Array
    is_answered: NDArray[np.bool_]
    unknowns: Array
    regime: NDArray[np.int64]


def rates(climber: Climber, flight: FlightCondition, start: Array | None = None) -> Rates:
    """Excess power and fuel flow at a rating; ``start`` as :class:`engine.interface.Engine` has it.

    Excess power is the rate at which energy height grows, height geometric.
    """
    state = climber.engine.at_rating(flight, climber.rating, start=start)
    weight = climber.mass * STANDARD_GRAVITY
    lift, area = np.full(flight.shape, weight), climber.extra_drag_area
    resistance = drag(climber.aircraft, flight, lift, drag_area=area)
    excess = climber.engine_count * state.net_thrust - resistance
    factor = climber.engine_count * climber.aircraft.fuel_flow_factor
    return Rates(
        excess_power=excess * flight.true_airspeed / weight,
        fuel_flow=factor * state.fuel_flow,
        is_answered=~is_unanswered(state.outcome),
        unknowns=state.unknowns,
        regime=np.stack([*(state.kinks > 0.0), state.binding_limit, state.dry_limit]).astype(int),
    )
