"""Thrust where a case is flown, of a running engine and of one that is out, in one engine call."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from engine.atmosphere import FlightCondition, flight_condition
from engine.interface import Engine, is_unanswered
from engine.quantities import STANDARD_GRAVITY
from mission.aerodynamics import polar_coverage
from mission.aircraft import Aircraft
from mission.field.cases import Case, drag_increment, lift_limit
from mission.forces import drag, lift_coefficient, stall_mach
from mission.march.asking import Request, ask, join

Array = NDArray[np.float64]
Flags = NDArray[np.bool_]
_SLACK = 1e-6


@dataclass(frozen=True)
class Place:
    """What a state is asked for; all broadcast.

    Attributes
    ----------
    mass : [kg]
    pressure_altitude : of the runway [m]
    temperature_deviation : [K]
    drag_area : of what hangs in the wind besides [m2]
    """

    mass: ArrayLike
    pressure_altitude: ArrayLike = 0.0
    temperature_deviation: ArrayLike = 0.0
    drag_area: ArrayLike = 0.0


@dataclass(frozen=True)
class State:
    """A case flown; all arrays have the shape that its place broadcasts to.

    Attributes
    ----------
    case : what is flown
    mass : [kg]
    drag_area : of what hangs in the wind besides [m2]
    flight : air and speed
    running : net thrust of one engine at its rating [N]
    unlit : net thrust of one engine that is out [N], below zero where its drag is known, else zero
    is_answered : whether the engine had an answer; both thrusts are NaN where it had none
    """

    case: Case
    mass: Array
    drag_area: Array
    flight: FlightCondition
    running: Array
    unlit: Array
    is_answered: Flags


def states(
    aircraft: Aircraft, engine: Engine, asked: Sequence[tuple[Case, Place]]
) -> tuple[State, ...]:
    """States in the order asked: one call for engines that run, one for those that are out."""
    flights = [_flight(aircraft, case, place) for case, place in asked]
    answers = ask(
        engine, {i: Request(flights[i], case.rating) for i, (case, _) in enumerate(asked)}
    )
    unlit = _unlit(engine, {i: flights[i] for i, (case, _) in enumerate(asked) if case.engines_out})
    found = []
    for i, (case, place) in enumerate(asked):
        shape = flights[i].shape
        thrust, is_answered = unlit.get(i, (np.zeros(shape), True))
        is_answered = is_answered & ~is_unanswered(answers[i].outcome)
        found.append(
            State(
                case,
                np.broadcast_to(np.asarray(place.mass, dtype=float), shape),
                np.broadcast_to(np.asarray(place.drag_area, dtype=float), shape),
                flights[i],
                np.where(is_answered, answers[i].net_thrust, np.nan),
                np.where(is_answered, thrust, np.nan),
                is_answered,
            )
        )
    return tuple(found)


def _flight(aircraft: Aircraft, case: Case, place: Place) -> FlightCondition:
    """Air and speed of a case, in the shape that its place broadcasts to."""
    altitude = np.asarray(place.pressure_altitude, dtype=float) + case.height
    altitude = np.add(altitude, np.zeros(np.shape(place.drag_area)))
    air = flight_condition(altitude, 0.0, place.temperature_deviation)
    mass = np.asarray(place.mass, dtype=float)
    stall = stall_mach(aircraft, air, mass, lift_limit(aircraft, case))
    return air.with_mach(case.stall_multiple * stall)


def _unlit(engine: Engine, flights: dict[int, FlightCondition]) -> dict[int, tuple[Array, Flags]]:
    """Net thrust [N] of an unlit engine, and whether it had an answer, by the keys of flights."""
    if not flights or not engine.is_known_unlit:
        return {}
    state = engine.windmilling(join(list(flights.values())))
    ends = np.cumsum([flight.mach.size for flight in flights.values()])[:-1]
    parts = zip(
        flights.items(),
        np.split(state.net_thrust, ends),
        np.split(~is_unanswered(state.outcome), ends),
        strict=True,
    )
    return {
        key: (thrust.reshape(flight.shape), is_answered.reshape(flight.shape))
        for (key, flight), thrust, is_answered in parts
    }


def gradient(aircraft: Aircraft, state: State) -> Array:
    """Steady gradient of climb, (T - D) / W with lift equal to weight; NaN without an answer.

    That is the sine of the path angle, which for gradients up to 5 % is their tangent to 0.13 %.
    Drag is the clean polar's with what gear and flaps add, and the unlit engines'; the rudder that
    holds a one-sided thrust is left out.
    """
    out = state.case.engines_out
    thrust = (aircraft.engine_count - out) * state.running + out * state.unlit
    weight = state.mass * STANDARD_GRAVITY
    added = drag_increment(aircraft, state.case) * aircraft.wing_area * aircraft.drag_factor
    resistance = drag(aircraft, state.flight, weight, 1.0, added + state.drag_area)
    return np.asarray((thrust - resistance) / weight)


def is_in_polar(aircraft: Aircraft, state: State) -> Flags:
    """Where the drag polar is given; outside a table it holds its edge's drag."""
    coverage = polar_coverage(aircraft.polar)
    if coverage is None:
        return np.ones(state.flight.shape, dtype=bool)
    lift = lift_coefficient(aircraft, state.flight, state.mass * STANDARD_GRAVITY)
    pairs = ((lift, coverage.lift_coefficient), (state.flight.mach, coverage.mach))
    inside = [(x >= low - _SLACK) & (x <= high + _SLACK) for x, (low, high) in pairs]
    return np.asarray(inside[0] & inside[1])
