"""What every span makes of the engine's answer."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from engine.atmosphere import FlightCondition
from engine.quantities import STANDARD_GRAVITY
from mission.forces import drag, path_angle_sine
from mission.march import energy, level, seeking, throttled, turning
from mission.march.asking import join
from mission.march.dead_engines import dead_drag
from mission.march.span import Propulsion
from mission.march.tracks import Track
from mission.march.world import World

Array = NDArray[np.float64]


@dataclass(frozen=True)
class Slopes:
    """All climbs and descents of a flight, their path angles solved in one array.

    ``flight`` and ``factor`` (the acceleration factor) are those of the tracks one below another,
    ``drag_factor`` and ``drag_area`` [m2] what they are configured with.
    """

    tracks: list[Track]
    flight: FlightCondition
    factor: Array
    drag_factor: Array
    drag_area: Array

    def solve(self, world: World) -> None:
        """Path angle and drag of every track at the masses of the last sweep."""
        aircraft = world.aircraft
        mass = np.concatenate([track.mass for track in self.tracks])
        near = np.concatenate([track.sine for track in self.tracks if track.sine is not None])
        dead = np.concatenate([dead_drag_along(track) for track in self.tracks])
        thrust = np.concatenate([_thrust(world, track) for track in self.tracks])
        sine = path_angle_sine(
            aircraft, self.flight, mass, thrust - dead, self.factor, near,
            self.drag_factor, self.drag_area,
        )  # fmt: skip
        resistance = dead + drag(
            aircraft,
            self.flight,
            mass * STANDARD_GRAVITY * np.sqrt(1.0 - sine**2),
            self.drag_factor,
            self.drag_area,
        )
        count = len(self.tracks)
        for track, own_sine, own_drag in zip(
            self.tracks, np.split(sine, count), np.split(resistance, count), strict=True
        ):
            track.sine, track.drag = own_sine, own_drag


def dead_drag_along(track: Track) -> Array:
    """Drag [N] of the engines that do not run, at the nodes."""
    assert track.flight is not None
    return np.broadcast_to(dead_drag(track, track.flight), track.mass.shape)


def _thrust(world: World, track: Track) -> Array:
    assert track.answer is not None
    thrust = track.answer.net_thrust * world.running(track.span)
    return np.broadcast_to(thrust, track.mass.shape)


def slopes_of(tracks: list[Track]) -> Slopes | None:
    """The climbs and descents among some tracks, ready to be solved together, if there are any."""
    chosen = [track for track in tracks if track.is_sloped]
    flights = [track.flight for track in chosen if track.flight is not None]
    if not flights:
        return None
    factors = [
        throttled.acceleration_factor(track.span, flight)
        for track, flight in zip(chosen, flights, strict=True)
    ]
    rows = [len(track.mass) for track in chosen]
    configured = [track.span.configuration for track in chosen]
    return Slopes(
        chosen,
        join(flights).at((slice(None), None)),
        np.concatenate(factors),
        np.repeat([c.drag_factor for c in configured], rows)[:, None],
        np.repeat([c.drag_area for c in configured], rows)[:, None],
    )


def set_nodes(world: World, track: Track, rest: Array, free: Array, added: Array) -> None:
    """Nodes of a span from the engine's answer and the masses of the last sweep.

    ``rest`` (members,) is the distance [m] left for it, ``free`` what the flight is solved for,
    ``added`` what members carry on top of the mission's payload [kg].
    """
    span, mass = track.span, track.mass
    if span.march == "book":
        return
    assert track.flight is not None
    propulsion = _propulsion(world, track)
    dead = dead_drag_along(track)
    if track.is_level and span.march != "turn":
        extent = _extent(track, rest, free, added)
        lift = mass * STANDARD_GRAVITY
        resistance = level.airframe_drag(span, world, track.flight, lift) + dead
        track.nodes = level.level_nodes(span, track.flight, mass, extent, propulsion, resistance)
    elif span.march == "turn":
        track.nodes = turning.turn_nodes(span, world, track.flight, mass, propulsion, dead)
    elif span.march == "altitude":
        assert track.sine is not None
        assert track.drag is not None
        track.nodes = throttled.climb_nodes(
            span, track.flight, mass, propulsion, track.sine, track.drag
        )
    elif span.march == "energy":
        assert track.sine is not None
        track.nodes, track.sine = energy.energy_nodes(
            span, world, track.flight, mass, propulsion, dead, track.sine
        )
    elif span.march == "stand":
        track.nodes = throttled.standing_nodes(span, track.flight, mass, propulsion)
    else:
        track.nodes = throttled.acceleration_nodes(
            span, world, track.flight, mass, propulsion, dead
        )


def _extent(track: Track, rest: Array, free: Array, added: Array) -> Array:
    """Distance [m], time [s] or burn [kg] of a level span, shape (members,)."""
    span = track.span
    if span.is_free:
        return free
    if span.march == "burn":
        if span.burn is not None:
            return np.atleast_1d(span.burn)
        assert span.end_mass is not None
        end = span.end_mass + (added if span.ends_by_fuel else 0.0)
        to_burn: Array = np.maximum(track.mass[0] - end, 0.0)
        return to_burn
    left: Array = np.maximum(rest, 0.0)
    return left if span.extent is None else np.atleast_1d(span.extent)


def _propulsion(world: World, track: Track) -> Propulsion:
    """Thrust and fuel flow of all engines at the nodes; a sought speed moves on by its step."""
    span, mass, answer = track.span, track.mass, track.answer
    assert answer is not None
    assert track.flight is not None
    aircraft, running = world.aircraft, world.running(span)
    flow_factor = running * aircraft.fuel_flow_factor * span.configuration.fuel_flow_factor
    flow, thrust, outcome = answer.fuel_flow * flow_factor, answer.net_thrust, answer.outcome
    held_by = answer.held_by
    if track.is_level and span.end_speed.is_sought:
        own = seeking.own_row(span)
        _seek(world, track, flow, thrust * running)
        flow, thrust, outcome, held_by = flow[own], thrust[own], outcome[own], held_by[own]
    return Propulsion(
        np.broadcast_to(thrust * running, mass.shape),
        np.broadcast_to(flow, mass.shape),
        np.broadcast_to(outcome, mass.shape),
        np.broadcast_to(held_by, mass.shape),
    )


def _seek(world: World, track: Track, flow: Array, thrust: Array) -> None:
    """The next Mach number of a sought speed, from the answers on its stencil."""
    span = track.span
    assert track.air is not None
    best = track.mach if track.best is None else track.best
    asked = seeking.stencil(span, track.air, track.mach, best)
    lift = track.mass * STANDARD_GRAVITY
    resistance = level.airframe_drag(span, world, asked, lift) + dead_drag(track, asked)
    mach, better = seeking.next_machs(
        span, world, asked, track.mass, best, flow, thrust, resistance
    )
    track.mach_change = float(np.max(np.abs(mach - track.mach)))
    track.mach, track.best = mach, better
