"""A span being solved: what it asks of the engine each sweep and what it makes of the answer."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from engine.atmosphere import FlightCondition
from engine.interface import is_unanswered
from engine.quantities import STANDARD_GRAVITY
from mission.forces import drag, path_angle_sine
from mission.march import level, throttled
from mission.march.asking import Answer, Request, join
from mission.march.nodes import interpolation_matrix, positions
from mission.march.rules import level_air, mach_at
from mission.march.span import Nodes, Propulsion, Span, SpeedRule
from mission.march.world import World

Array = NDArray[np.float64]
SAME_MACH = 1e-12


@dataclass
class Track:
    """A span being solved: what the last sweep left for the next. Private to the integrator.

    ``air`` is the still air of a level span; ``sine`` and ``drag`` are of a climb's or descent's
    path angle and [N]; ``start`` the engine's unknowns to begin with;
    ``rating`` the one flown, idle where a march by speed slows down.
    """

    span: Span
    mass: Array
    mach: Array
    nodes: Nodes | None = None
    flight: FlightCondition | None = None
    answer: Answer | None = None
    air: FlightCondition | None = None
    sine: Array | None = None
    drag: Array | None = None
    start: Array | None = None
    rating: str = ""
    mach_change: float = np.inf

    @property
    def is_level(self) -> bool:
        """Whether thrust is found from drag."""
        return self.span.march in ("distance", "time")

    @property
    def is_lost(self) -> bool:
        """Whether the engine had no answer somewhere along the span."""
        return self.answer is not None and bool(np.any(is_unanswered(self.answer.outcome)))

    @property
    def unknowns(self) -> Array | None:
        """Where the next engine call may start."""
        return self.start if self.answer is None else self.answer.unknowns


def first_track(
    world: World, span: Span, count: int, stop_mass: Array, before: Track | None
) -> Track:
    """A span before anything is known: one mass throughout, a guess of its speed."""
    mass = np.broadcast_to(stop_mass, (count, stop_mass.size)).copy()
    track = Track(span, mass, np.zeros(mass.shape), rating=span.rating)
    deviation = world.temperature_deviation
    if span.march == "altitude":
        track.flight = throttled.altitude_flight(span, world, count)
        track.mach = np.broadcast_to(track.flight.mach, mass.shape)
        track.sine = np.zeros(mass.shape)
    elif span.march != "book":
        track.air = level_air(span.start_altitude, deviation, count)
        track.mach = np.array(_guess_mach(span.end_speed, world, track.air, mass, before))
    return track


def refined(track: Track, old: Track, shift: Array) -> Track:
    """A first track as an earlier solution of its span, or of its like, left it.

    ``shift`` (members,) is what the mass at the stop differs by [kg].
    """
    to_new = interpolation_matrix(len(old.mass), len(track.mass))
    track.mass = to_new @ old.mass + shift
    if track.span.march != "altitude":
        track.mach = np.broadcast_to(to_new @ old.mach, track.mass.shape).copy()
    if old.unknowns is not None and old.unknowns.size:
        track.start = to_new @ old.unknowns
    return track


def _guess_mach(
    rule: SpeedRule, world: World, air: FlightCondition, mass: Array, before: Track | None
) -> Array:
    """Mach number of a rule before anything is known; the last span's where it names none."""
    unnamed = rule.kind == "neighbour" or (rule.kind == "lift_coefficient" and rule.value is None)
    if unnamed:
        last = np.full((1, mass.shape[1]), 0.5) if before is None else before.mach[-1:]
        return np.broadcast_to(last, mass.shape)
    return np.broadcast_to(mach_at(rule, world.aircraft, air, mass), mass.shape)


def request_of(world: World, tracks: list[Track], index: int) -> Request | None:
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
        asked = asked.with_mach(np.broadcast_to(asked.mach, thrust.shape))
        return Request(asked, span.rating, thrust, track.unknowns)
    if span.is_static and track.answer is not None:
        return None
    if span.march == "altitude":
        assert track.flight is not None
        return Request(track.flight, span.rating, start=track.unknowns)
    if span.march == "stand":
        assert track.air is not None
        track.flight = track.air.with_mach(track.mach[:, :1])
        return Request(track.flight, span.rating, start=track.unknowns)
    return _request_by_speed(world, tracks, index)


def _request_by_speed(world: World, tracks: list[Track], index: int) -> Request | None:
    """A march by speed: its ends may be those of its neighbours in the last sweep."""
    track, span = tracks[index], tracks[index].span
    assert track.air is not None
    first = _end_mach(world, track, span.start_speed, flown_last(tracks[:index]), -1)
    last = _end_mach(world, track, span.end_speed, flown_last(tracks[:index:-1]), 0)
    mach = first + positions(len(track.mass))[:, None] * (last - first)
    if track.answer is not None and np.max(np.abs(mach - track.mach)) < SAME_MACH:
        return None
    track.flight = track.air.with_mach(mach)
    track.mach = np.broadcast_to(track.flight.mach, track.mass.shape)
    slows_down = span.march == "speed" and float(np.mean(last - first)) < 0.0
    track.rating = "flight_idle" if slows_down else span.rating
    return Request(track.flight, track.rating, start=track.unknowns)


def _end_mach(
    world: World, track: Track, rule: SpeedRule, neighbour: Track | None, end: int
) -> Array:
    """Mach number (1, members) at one end of a march by speed."""
    if rule.kind == "neighbour":
        assert neighbour is not None
        near: Array = neighbour.mach[end][None, :]
        return near
    assert track.air is not None
    edge = 0 if end == -1 else -1
    air = track.air.at(slice(0, 1))
    if not rule.depends_on_mass:
        return mach_at(rule, world.aircraft, air, np.ones((1, 1)))
    return mach_at(rule, world.aircraft, air, track.mass[edge][None, :])


def flown_last(tracks: list[Track]) -> Track | None:
    """The last span that has a speed: an allowance that is only booked has none."""
    return next((track for track in reversed(tracks) if track.span.march != "book"), None)


def _entry_mach(world: World, tracks: list[Track], index: int) -> Array:
    """Mach number (members,) that a level span begins with."""
    track, rule = tracks[index], tracks[index].span.start_speed
    before = flown_last(tracks[:index])
    if rule.depends_on_mass and before is not None:
        return np.asarray(before.mach[-1])
    assert track.air is not None
    return np.asarray(mach_at(rule, world.aircraft, track.air.at(slice(0, 1)), track.mass[:1])[0])


@dataclass(frozen=True)
class Slopes:
    """All climbs and descents of a flight, their path angles solved in one array.

    ``flight`` and ``factor`` (the acceleration factor) are those of the tracks one below another.
    """

    tracks: list[Track]
    flight: FlightCondition
    factor: Array

    def solve(self, world: World) -> None:
        """Path angle and drag of every track at the masses of the last sweep."""
        aircraft = world.aircraft
        mass = np.concatenate([track.mass for track in self.tracks])
        near = np.concatenate([track.sine for track in self.tracks if track.sine is not None])
        thrust = np.concatenate(
            [
                np.broadcast_to(track.answer.net_thrust, track.mass.shape)
                for track in self.tracks
                if track.answer is not None
            ]
        )
        thrust = thrust * aircraft.engine_count
        sine = path_angle_sine(aircraft, self.flight, mass, thrust, self.factor, near)
        resistance = drag(aircraft, self.flight, mass * STANDARD_GRAVITY * np.sqrt(1.0 - sine**2))
        count = len(self.tracks)
        for track, own_sine, own_drag in zip(
            self.tracks, np.split(sine, count), np.split(resistance, count), strict=True
        ):
            track.sine, track.drag = own_sine, own_drag


def slopes_of(tracks: list[Track]) -> Slopes | None:
    """The climbs and descents among some tracks, ready to be solved together, if there are any."""
    chosen = [track for track in tracks if track.flight is not None and track.sine is not None]
    flights = [track.flight for track in chosen if track.flight is not None]
    if not flights:
        return None
    factors = [
        throttled.acceleration_factor(track.span, flight)
        for track, flight in zip(chosen, flights, strict=True)
    ]
    return Slopes(chosen, join(flights).at((slice(None), None)), np.concatenate(factors))


def set_nodes(world: World, track: Track, rest: Array) -> None:
    """Nodes of a span from the engine's answer and the masses of the last sweep."""
    span, answer, mass = track.span, track.answer, track.mass
    track.mach_change = 0.0
    if span.march == "book":
        return
    assert answer is not None
    assert track.flight is not None
    aircraft = world.aircraft
    flow_factor = aircraft.engine_count * aircraft.fuel_flow_factor * span.fuel_flow_factor
    flow, thrust, outcome = answer.fuel_flow * flow_factor, answer.net_thrust, answer.outcome
    held_by = answer.held_by
    if track.is_level and span.end_speed.kind == "least_fuel":
        better = level.least_fuel_step(world, track.flight, mass, flow)
        track.mach_change = float(np.max(np.abs(better - track.mach)))
        track.mach = better
        flow, thrust, outcome, held_by = flow[1], thrust[1], outcome[1], held_by[1]
    propulsion = Propulsion(
        np.broadcast_to(thrust * aircraft.engine_count, mass.shape),
        np.broadcast_to(flow, mass.shape),
        np.broadcast_to(outcome, mass.shape),
        np.broadcast_to(held_by, mass.shape),
    )
    if track.is_level:
        extent = np.maximum(rest, 0.0) if span.extent is None else np.atleast_1d(span.extent)
        track.nodes = level.level_nodes(span, world, track.flight, mass, extent, propulsion)
    elif span.march == "altitude":
        assert track.sine is not None
        assert track.drag is not None
        track.nodes = throttled.climb_nodes(
            span, track.flight, mass, propulsion, track.sine, track.drag
        )
    elif span.march == "stand":
        track.nodes = throttled.standing_nodes(span, track.flight, mass, propulsion)
    else:
        track.nodes = throttled.acceleration_nodes(
            world, track.flight, mass, propulsion, on_ground=span.march == "roll"
        )
