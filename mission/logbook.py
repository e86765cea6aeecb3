"""From marched spans to the rows of the log and the totals of the flight."""

from __future__ import annotations

from dataclasses import fields
from typing import Any

import numpy as np
from numpy.typing import NDArray

from engine.quantities import STANDARD_GRAVITY
from mission.fuel_plan import Sums, trip_rows
from mission.march.asking import Request, ask
from mission.march.level import airframe_drag
from mission.march.nodes import integration_matrix
from mission.march.outcomes import dead_drag_along
from mission.march.sweep import Marched
from mission.march.tracks import Track
from mission.march.world import World
from mission.plan import FlightPlan
from mission.results import SegmentLog, Steps, Totals

Array = NDArray[np.float64]


def segment_logs(
    world: World, plan: FlightPlan, marched: Marched, *, in_full: bool = True
) -> tuple[SegmentLog, ...]:
    """One log a row, in the order flown; reserves last, on the same clock.

    Without thrust at ratings, which takes an engine call, and impulse where it is not ``in_full``.
    """
    rating_thrust = _rating_thrusts(world, marched) if in_full else {}
    logs: list[SegmentLog] = []
    clock = 0.0
    for number, row in enumerate(plan.rows):
        chosen = [i for i, track in enumerate(marched.tracks) if track.span.segment == number]
        pieces: list[Steps] = []
        began = clock
        altitude = logs[-1].steps.pressure_altitude[-1] if logs else 0.0
        for index in chosen:
            track, time = marched.tracks[index], marched.integrals.time[index][:, 0]
            pieces.append(_steps(world, track, time + clock, rating_thrust.get(index), altitude))
            clock += float(time[-1])
        steps = _joined(pieces)
        logs.append(
            SegmentLog(
                name=row.name,
                kind=row.kind,
                purpose=row.purpose,
                rating=marched.tracks[chosen[-1]].rating,
                fuel=_sum(marched.integrals.fuel, chosen),
                time=clock - began,
                ground_distance=_sum(marched.integrals.ground, chosen),
                air_distance=_sum(marched.integrals.air, chosen),
                mass_start=float(steps.mass[0]),
                mass_end=float(steps.mass[-1]),
                mass_released=-sum(min(marched.tracks[i].span.received, 0.0) for i in chosen),
                mass_received=sum(max(marched.tracks[i].span.received, 0.0) for i in chosen),
                fuel_left=float(steps.mass[-1]) - row.empty_mass,
                steps=steps,
                leg=row.leg,
                impulse=float(sum(_impulse(marched.tracks[i]) for i in chosen if in_full)),
            )
        )
    return tuple(logs)


def _sum(sums: list[Array], chosen: list[int], member: int = 0) -> float:
    return float(sum(sums[i][-1, member] for i in chosen))


def _impulse(track: Track) -> float:
    """Thrust over time [N s] along a span."""
    if track.nodes is None:
        return 0.0
    weights = integration_matrix(len(track.mass))[-1]
    return float(weights @ (track.nodes.propulsion.thrust * track.nodes.time_rate)[:, 0])


def _rating_thrusts(world: World, marched: Marched) -> dict[int, Array]:
    """Thrust [N] of the aircraft at its rating along every level span, in one engine call."""
    requests: dict[int, Request] = {}
    for index, track in enumerate(marched.tracks):
        if (track.is_level or track.span.is_steered) and track.nodes is not None:
            flight = track.nodes.flight
            requests[index] = Request(
                flight.with_mach(np.broadcast_to(flight.mach, track.mass.shape)),
                track.span.rating,
            )
    answers = ask(world.engine, requests)
    return {
        index: world.running(marched.tracks[index].span) * answer.net_thrust[:, 0]
        for index, answer in answers.items()
    }


def _steps(
    world: World, track: Track, elapsed: Array, rating_thrust: Array | None, altitude: float
) -> Steps:
    nodes, mass = track.nodes, track.mass[:, 0]
    if nodes is None:
        return _booked_steps(track, elapsed, altitude)
    flight, propulsion = nodes.flight, nodes.propulsion

    def column(value: Any) -> Any:
        return np.broadcast_to(value, track.mass.shape)[:, 0]

    resistance = nodes.drag
    if track.span.march == "turn":
        resistance = dead_drag_along(track) + airframe_drag(
            track.span, world, flight, track.mass * STANDARD_GRAVITY
        )
    thrust = column(propulsion.thrust)
    return Steps(
        elapsed_time=elapsed,
        pressure_altitude=column(flight.pressure_altitude),
        mach=column(flight.mach),
        true_airspeed=column(flight.true_airspeed),
        mass=mass,
        lift=column(nodes.lift),
        weight=mass * STANDARD_GRAVITY,
        drag=column(nodes.drag),
        thrust=thrust,
        fuel_flow=column(propulsion.fuel_flow),
        flight_path_angle=column(nodes.path_angle),
        rating_thrust=thrust if rating_thrust is None else rating_thrust,
        level_drag=column(resistance),
        held_by=column(propulsion.held_by),
    )


def _booked_steps(track: Track, elapsed: Array, altitude: float) -> Steps:
    """Both ends of an allowance: nothing is flown, so there are no forces and no speed."""
    mass, none = track.mass[[0, -1], 0], np.zeros(2)
    return Steps(
        elapsed_time=elapsed[[0, -1]],
        pressure_altitude=none + (track.span.start_altitude or altitude),
        mach=none,
        true_airspeed=none,
        mass=mass,
        lift=none,
        weight=mass * STANDARD_GRAVITY,
        drag=none,
        thrust=none,
        fuel_flow=none,
        flight_path_angle=none,
        rating_thrust=none,
        level_drag=none,
        held_by=np.array(["", ""]),
    )


def _joined(pieces: list[Steps]) -> Steps:
    return Steps(
        *(np.concatenate([getattr(p, f.name) for p in pieces]).copy() for f in fields(Steps))
    )


def totals(
    plan: FlightPlan,
    marched: Marched,
    sums: Sums,
    integration_error: float,
    member: int = 0,
) -> Totals:
    """Totals of the mission part, after the definitions in DEVELOPERS.md, of one member."""
    spans, added = plan.parts.mission, float(plan.parts.added[member])
    mission = list(range(len(spans)))
    rows = set(trip_rows(plan))
    trip = [i for i in mission if spans[i].segment in rows]
    masses = [track.mass[:, member] for track in marched.tracks]
    ramp = float(masses[0][0])
    left = float(marched.stop_mass[member]) - plan.stop_empty_mass - added
    return Totals(
        block_fuel=sums.mission_fuel,
        trip_fuel=sums.trip_fuel,
        reserve_fuel=sums.reserves,
        loaded_fuel=ramp - plan.first_empty_mass - added,
        fuel_left=left,
        fuel_margin=left - sums.reserves,
        block_time=_sum(marched.integrals.time, mission, member),
        trip_time=_sum(marched.integrals.time, trip, member),
        ground_distance=_sum(marched.integrals.ground, mission, member),
        air_distance=_sum(marched.integrals.air, mission, member),
        ramp_mass=ramp,
        takeoff_mass=float(masses[trip[0]][0]),
        landing_mass=float(masses[trip[-1]][-1]),
        integration_error=integration_error,
    )
