"""What every span asks of the engine this sweep."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from engine.atmosphere import FlightCondition
from engine.quantities import STANDARD_GRAVITY
from mission.march import level, seeking, throttled
from mission.march.asking import Request
from mission.march.dead_engines import dead_drag
from mission.march.nodes import positions
from mission.march.rules import mach_at
from mission.march.span import SpeedRule
from mission.march.tracks import Track, flown_last
from mission.march.world import World

Array = NDArray[np.float64]
SAME_MACH = 1e-12


def request_of(world: World, tracks: list[Track], index: int) -> Request | None:
    """What a span asks this sweep; nothing where its answer still holds."""
    track, span = tracks[index], tracks[index].span
    if span.march == "book":
        return None
    if track.is_level:
        return _level_request(world, tracks, index)
    if span.is_static and track.answer is not None:
        return None
    if span.march in ("altitude", "energy"):
        return _slope_request(world, track)
    if span.march in ("stand", "turn"):
        return _speed_request(world, track)
    return _request_by_speed(world, tracks, index)


def _level_request(world: World, tracks: list[Track], index: int) -> Request:
    """Thrust equal to drag, at the speed of the rule or around the one sought."""
    track, span = tracks[index], tracks[index].span
    assert track.air is not None
    running = world.running(span)
    if span.end_speed.is_sought:
        best = track.mach if track.best is None else track.best
        asked = seeking.stencil(span, track.air, track.mach, best)
        track.flight = asked.at(seeking.own_row(span))
        resistance = _resistance(world, track, asked)
        thrust = seeking.demanded(span, resistance, running)
        return Request(asked, span.rating, thrust, track.unknowns)
    entry = _entry_mach(world, tracks, index)
    track.flight = level.level_flight(span, world, track.air, track.mass, entry)
    track.mach = np.broadcast_to(track.flight.mach, track.mass.shape)
    thrust = _resistance(world, track, track.flight) / running
    asked = track.flight.with_mach(np.broadcast_to(track.flight.mach, thrust.shape))
    return Request(asked, span.rating, thrust, track.unknowns)


def _resistance(world: World, track: Track, flight: FlightCondition) -> Array:
    """Drag [N] of level flight, or of a turn at a given load factor, dead engines included."""
    factor = 1.0 if track.span.load_factor is None else track.span.load_factor
    lift = factor * track.mass * STANDARD_GRAVITY
    dead = dead_drag(track, flight)
    return level.airframe_drag(track.span, world, flight, lift) + dead


def _slope_request(world: World, track: Track) -> Request:
    """A rating, or on a given path the thrust that holds it."""
    span = track.span
    assert track.flight is not None
    if not span.is_steered:
        return Request(track.flight, span.rating, start=track.unknowns)
    sine = throttled.steered_sine(span, track.flight)
    factor = throttled.acceleration_factor(span, track.flight)
    weight = track.mass * STANDARD_GRAVITY
    lift = weight * np.sqrt(1.0 - sine**2)
    resistance = level.airframe_drag(span, world, track.flight, lift)
    resistance = resistance + dead_drag(track, track.flight)
    thrust = (resistance + weight * sine * factor) / world.running(span)
    asked = track.flight.with_mach(np.broadcast_to(track.flight.mach, thrust.shape))
    return Request(asked, span.rating, thrust, track.unknowns)


def _speed_request(world: World, track: Track) -> Request:
    """Engines at a rating, at one speed."""
    span = track.span
    assert track.air is not None
    if span.march == "stand":
        track.flight = track.air.with_mach(track.mach[:, :1])
    else:
        track.flight = track.air.with_mach(
            mach_at(span.end_speed, world.aircraft, track.air, track.mass)
        )
    track.mach = np.broadcast_to(track.flight.mach, track.mass.shape)
    return Request(track.flight, span.rating, start=track.unknowns)


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


def _entry_mach(world: World, tracks: list[Track], index: int) -> Array:
    """Mach number (members,) that a level span begins with."""
    track, rule = tracks[index], tracks[index].span.start_speed
    before = flown_last(tracks[:index])
    if rule.depends_on_mass and before is not None:
        return np.asarray(before.mach[-1])
    assert track.air is not None
    return np.asarray(mach_at(rule, world.aircraft, track.air.at(slice(0, 1)), track.mass[:1])[0])
