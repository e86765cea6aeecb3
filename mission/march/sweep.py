"""Sweeps: masses, distances and the closure of fuel, updated together until nothing moves.

Fuel burnt depends so weakly on mass that each sweep (rates at the masses of the last one, then
integrals, then new masses) brings several digits; a mass depends only on the fuel burnt after it
(before it, on the reserve flight), so that the error falls faster than any power.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from engine.atmosphere import FlightCondition, flight_condition
from mission.march import level, throttled
from mission.march.asking import Answer, Request, ask
from mission.march.nodes import integration_matrix, interpolation_matrix, positions
from mission.march.rules import mach_at
from mission.march.span import Nodes, Span, SpeedRule
from mission.march.world import World

Array = NDArray[np.float64]
MOST_SWEEPS = 60
SETTLED = 1e-12


@dataclass
class Track:
    """A span being solved: what the last sweep left for the next. Private to the integrator."""

    span: Span
    mass: Array
    mach: Array
    nodes: Nodes | None = None
    flight: FlightCondition | None = None
    answer: Answer | None = None
    air: FlightCondition | None = None
    mach_change: float = np.inf

    @property
    def is_level(self) -> bool:
        """Whether thrust is found from drag."""
        return self.span.march in ("distance", "time")


@dataclass(frozen=True)
class Marched:
    """Outcome of :func:`march`: the tracks, fuel by span, and how it ended.

    Attributes
    ----------
    tracks : one a span, in order
    fuel, time, ground, air : cumulative at the nodes of each span, (nodes, members)
    stop_mass : (members,) at the end of the mission part [kg]
    sweeps : how many it took
    change : last relative change of any mass
    """

    tracks: list[Track]
    fuel: list[Array]
    time: list[Array]
    ground: list[Array]
    air: list[Array]
    stop_mass: Array
    sweeps: int
    change: float


@dataclass(frozen=True)
class Parts:
    """Spans of the mission and of the reserve flight, with the distance each has to cover [m]."""

    mission: Sequence[Span]
    reserve: Sequence[Span] = ()
    mission_distance: float | None = None
    reserve_distance: float | None = None


Closure = Callable[[Array, Sequence[Array], Sequence[Array]], Array]


def march(
    world: World,
    parts: Parts,
    count: int,
    stop_mass: Array,
    close: Closure,
    start: Marched | None = None,
) -> Marched:
    """March all spans with ``count`` nodes each.

    ``stop_mass`` (members,) is a first guess of the mass at the end of the mission part;
    ``close(stop_mass, fuel, time)`` gives the next from the fuel and time of every span.
    ``start`` is an earlier solution, of other node count, to begin from.
    """
    spans = [*parts.mission, *parts.reserve]
    tracks = _first_tracks(world, spans, count, stop_mass, start)
    memory: dict[int, Array] = {}
    rests = _first_rests(parts, start)
    change = np.inf
    sweep = 0
    for sweep in range(1, MOST_SWEEPS + 1):
        _solve_engines(world, tracks, memory, rests)
        sums = _integrate(world, tracks, count)
        fuel, _, ground, _ = sums
        rests = _rest_distances(parts, spans, ground)
        new_stop = close(stop_mass, fuel, sums[1])
        change = _update_masses(tracks, fuel, new_stop, len(parts.mission))
        stop_mass = new_stop
        if not np.all(np.isfinite(stop_mass)) or np.any(stop_mass > 1e8):
            break
        if change < SETTLED and all(t.mach_change < 1e-9 for t in tracks):
            break
    return Marched(tracks, *sums, stop_mass, sweep, change)


def _first_tracks(
    world: World, spans: Sequence[Span], count: int, stop_mass: Array, start: Marched | None
) -> list[Track]:
    """Masses and Mach numbers to begin with: an earlier solution's, or one mass throughout."""
    tracks: list[Track] = []
    for index, span in enumerate(spans):
        mass = np.broadcast_to(stop_mass, (count, stop_mass.size)).copy()
        mach = np.full(mass.shape, 0.3)
        air = None
        if span.march in ("distance", "time") or (span.march in ("speed", "roll")):
            air = flight_condition(
                np.full((count, 1), span.start_altitude), 0.0, world.temperature_deviation
            )
            mach = np.array(_guess_mach(span.end_speed, world, air, mass, tracks), dtype=float)
        if start is not None:
            old = start.tracks[index]
            to_new = interpolation_matrix(len(old.mass), count)
            mass = np.broadcast_to(to_new @ old.mass, mass.shape).copy()
            mach = np.broadcast_to(to_new @ old.mach, mass.shape).copy()
        track = Track(span, mass, mach, air=air)
        if span.march == "altitude":
            track.flight = throttled.altitude_flight(span, world, count)
            track.mach = np.broadcast_to(track.flight.mach, mass.shape)
        tracks.append(track)
    return tracks


def _guess_mach(
    rule: SpeedRule, world: World, air: FlightCondition, mass: Array, before: list[Track]
) -> Array:
    """Mach number of a rule before anything is known; the last span's where it names none."""
    unnamed = rule.kind == "neighbour" or (rule.kind == "lift_coefficient" and rule.value is None)
    if unnamed:
        last = before[-1].mach[-1:] if before else np.full((1, mass.shape[1]), 0.5)
        return np.broadcast_to(last, mass.shape)
    return np.broadcast_to(mach_at(rule, world.aircraft, air, mass), mass.shape)


def _first_rests(parts: Parts, start: Marched | None) -> dict[bool, Array]:
    if start is None:
        return {
            False: np.atleast_1d(parts.mission_distance or 0.0),
            True: np.atleast_1d(parts.reserve_distance or 0.0),
        }
    spans = [*parts.mission, *parts.reserve]
    return _rest_distances(parts, spans, start.ground)


def _rest_distances(
    parts: Parts, spans: Sequence[Span], ground: Sequence[Array]
) -> dict[bool, Array]:
    """Distance left for the cruise that flies the rest, by part (reserve or not), (members,)."""
    rests: dict[bool, Array] = {}
    split = len(parts.mission)
    for is_reserve, total in ((False, parts.mission_distance), (True, parts.reserve_distance)):
        chosen = range(split, len(spans)) if is_reserve else range(split)
        flown = [ground[i][-1] for i in chosen if not _takes_rest(spans[i])]
        rests[is_reserve] = np.atleast_1d((total or 0.0) - np.sum(flown, axis=0))
    return rests


def _takes_rest(span: Span) -> bool:
    return span.march == "distance" and span.extent is None


def _solve_engines(
    world: World, tracks: list[Track], memory: dict[int, Array], rests: dict[bool, Array]
) -> None:
    """Ask the engine for every span whose condition moved, and set its nodes."""
    requests: dict[int, Request] = {}
    for index, track in enumerate(tracks):
        request = _request(world, tracks, index)
        if request is not None:
            requests[index] = request
    for index, answer in ask(world.engine, requests, memory).items():
        tracks[index].answer = answer
    reserve_from = len(tracks)
    for index, track in enumerate(tracks):
        if track.span.is_reserve:
            reserve_from = min(reserve_from, index)
        rest = rests[index >= reserve_from]
        _set_nodes(world, track, rest)


def _request(world: World, tracks: list[Track], index: int) -> Request | None:
    """What a span asks this sweep; nothing where its answer still holds."""
    track, span = tracks[index], tracks[index].span
    count = world.aircraft.engine_count
    if span.march == "book":
        return None
    if track.is_level:
        assert track.air is not None
        if span.end_speed.kind == "least_fuel":
            track.flight = track.air.with_mach(track.mach)
            asked = level.least_fuel_stencil(track.flight)
        else:
            entry = _entry_mach(world, tracks, index)
            track.flight = level.level_flight(span, world, track.air, track.mass, entry)
            asked = track.flight
        track.mach = np.broadcast_to(track.flight.mach, track.mass.shape)
        thrust = level.level_drag(span, world, asked, track.mass) / count
        return Request(
            asked.with_mach(np.broadcast_to(asked.mach, thrust.shape)), span.rating, thrust
        )
    if span.is_static and track.answer is not None:
        return None
    if span.march == "altitude":
        assert track.flight is not None
        return Request(track.flight, span.rating)
    if span.march == "stand":
        track.flight = flight_condition(
            np.full((len(track.mass), 1), span.start_altitude), 0.0, world.temperature_deviation
        )
        return Request(track.flight, span.rating)
    return _request_by_speed(world, tracks, index)


def _request_by_speed(world: World, tracks: list[Track], index: int) -> Request | None:
    """A march by speed: its ends may be those of its neighbours in the last sweep."""
    track, span = tracks[index], tracks[index].span
    assert track.air is not None
    first = _end_mach(world, track, span.start_speed, tracks[index - 1] if index else None, -1)
    after = tracks[index + 1] if index + 1 < len(tracks) else None
    last = _end_mach(world, track, span.end_speed, after, 0)
    mach = first + positions(len(track.mass))[:, None] * (last - first)
    if track.answer is not None and np.max(np.abs(mach - track.mach)) < SETTLED:
        return None
    track.flight = track.air.with_mach(mach)
    track.mach = np.broadcast_to(track.flight.mach, track.mass.shape)
    slows_down = span.march == "speed" and float(np.mean(last - first)) < 0.0
    return Request(track.flight, "flight_idle" if slows_down else span.rating)


def _end_mach(
    world: World, track: Track, rule: SpeedRule, neighbour: Track | None, end: int
) -> Array:
    """Mach number (1, members) at one end of a march by speed."""
    if rule.kind == "neighbour":
        assert neighbour is not None
        return neighbour.mach[end][None, :]
    assert track.air is not None
    edge = 0 if end == -1 else -1
    air = track.air.at(slice(0, 1))
    if not rule.depends_on_mass:
        return mach_at(rule, world.aircraft, air, np.ones((1, 1)))
    return mach_at(rule, world.aircraft, air, track.mass[edge][None, :])


def _entry_mach(world: World, tracks: list[Track], index: int) -> Array:
    """Mach number (members,) that a level span begins with."""
    span, track = tracks[index].span, tracks[index]
    rule = span.start_speed
    if rule.kind == "neighbour":
        return np.asarray(tracks[index - 1].mach[-1])
    assert track.air is not None
    return np.asarray(mach_at(rule, world.aircraft, track.air.at(slice(0, 1)), track.mass[:1])[0])


def _set_nodes(world: World, track: Track, rest: Array) -> None:
    """Nodes of a span from the engine's answer and the masses of the last sweep."""
    span, answer, mass = track.span, track.answer, track.mass
    if span.march == "book":
        return
    assert answer is not None
    assert track.flight is not None
    aircraft = world.aircraft
    flow, thrust, outcome = answer.fuel_flow, answer.net_thrust, answer.outcome
    flow = flow * (aircraft.engine_count * aircraft.fuel_flow_factor * span.fuel_flow_factor)
    thrust = thrust * aircraft.engine_count
    track.mach_change = 0.0
    if track.is_level and span.end_speed.kind == "least_fuel":
        better = level.least_fuel_step(world, track.flight, mass, flow)
        track.mach_change = float(np.max(np.abs(better - track.mach)))
        track.mach = better
        flow, thrust, outcome = flow[1], thrust[1], outcome[1]
    shape = mass.shape
    flow, thrust = np.broadcast_to(flow, shape), np.broadcast_to(thrust, shape)
    outcome = np.broadcast_to(outcome, shape)
    if track.is_level:
        extent = np.maximum(rest, 0.0) if span.extent is None else np.atleast_1d(span.extent)
        track.nodes = level.level_nodes(
            span, world, track.flight, mass, extent, thrust, flow, outcome
        )
    elif span.march == "altitude":
        track.nodes = throttled.climb_nodes(span, world, track.flight, mass, thrust, flow, outcome)
    elif span.march == "stand":
        track.nodes = throttled.standing_nodes(span, track.flight, mass, thrust, flow, outcome)
    else:
        track.nodes = throttled.acceleration_nodes(
            world, track.flight, mass, thrust, flow, outcome, on_ground=span.march == "roll"
        )


def _integrate(
    world: World, tracks: list[Track], count: int
) -> tuple[list[Array], list[Array], list[Array], list[Array]]:
    """Fuel [kg], time [s], ground and air distance [m] from the start of each span."""
    matrix = integration_matrix(count)
    fuel: list[Array] = []
    time: list[Array] = []
    ground: list[Array] = []
    air: list[Array] = []
    for track in tracks:
        nodes, span = track.nodes, track.span
        if nodes is None:
            share = positions(count)[:, None]
            fuel.append(share * (span.booked_fuel + span.booked_fraction * track.mass[0]))
            for sums in (time, ground, air):
                sums.append(np.zeros_like(track.mass))
            continue
        forward = nodes.flight.true_airspeed * np.cos(nodes.path_angle)
        in_air = span.march not in ("roll", "stand")
        covered = (forward + world.tailwind) if in_air and span.gains_distance else 0.0 * forward
        fuel.append(matrix @ (nodes.fuel_flow * nodes.time_rate))
        time.append(matrix @ nodes.time_rate)
        ground.append(matrix @ (covered * nodes.time_rate))
        air.append(matrix @ ((forward if in_air else 0.0 * forward) * nodes.time_rate))
    return fuel, time, ground, air


def _update_masses(
    tracks: list[Track], fuel: Sequence[Array], stop_mass: Array, mission_count: int
) -> float:
    """New masses at all nodes from the mass at the end of the mission; their relative change."""
    change = 0.0
    after = np.zeros_like(stop_mass)
    for index in range(mission_count - 1, -1, -1):
        new = stop_mass + after + (fuel[index][-1] - fuel[index])
        after = after + fuel[index][-1]
        change = max(change, _replace_mass(tracks[index], new))
    before = np.zeros_like(stop_mass)
    for index in range(mission_count, len(tracks)):
        new = stop_mass - before - fuel[index]
        before = before + fuel[index][-1]
        change = max(change, _replace_mass(tracks[index], new))
    return change


def _replace_mass(track: Track, new: Array) -> float:
    change = float(np.max(np.abs(new - track.mass) / track.mass))
    track.mass = np.maximum(new, 1.0)
    return change
