"""A span being solved: what the last sweep left for the next."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from engine.atmosphere import FlightCondition
from engine.interface import is_unanswered
from mission.march import throttled
from mission.march.asking import Answer
from mission.march.energy import energy_flight
from mission.march.nodes import interpolation_matrix
from mission.march.rules import level_air, mach_at
from mission.march.span import LEVEL, Nodes, Span, SpeedRule
from mission.march.world import World

Array = NDArray[np.float64]


@dataclass
class Track:
    """A span being solved. Private to the integrator.

    ``air`` is the still air of a level span; ``sine`` and ``drag`` are of a climb's or descent's
    path angle and [N]; ``best`` is the Mach number that a sought one is measured from;
    ``dead_drag`` [N] is of engines that do not run, ``dead_mach`` where it was found; ``start`` the
    engine's unknowns to begin with; ``rating`` the one flown, idle where a march by speed slows
    down.
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
    best: Array | None = None
    dead_drag: Array | None = None
    dead_mach: Array | None = None
    start: Array | None = None
    rating: str = ""
    mach_change: float = 0.0

    @property
    def is_level(self) -> bool:
        """Whether thrust is found from drag in level flight."""
        span = self.span
        return span.march in LEVEL or (span.march == "turn" and span.load_factor is not None)

    @property
    def is_sloped(self) -> bool:
        """Whether it climbs or descends."""
        return self.span.march == "altitude"

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
    if span.march == "altitude":
        track.flight = throttled.altitude_flight(span, world, count)
        track.mach = np.broadcast_to(track.flight.mach, mass.shape)
        track.sine = np.zeros(mass.shape)
    elif span.march == "energy":
        track.flight = energy_flight(span, count)
        track.mach = np.broadcast_to(track.flight.mach, mass.shape)
        track.sine = np.zeros(mass.shape)
    elif span.march != "book":
        track.air = level_air(span.start_altitude, span.air, count)
        track.mach = np.array(_guess_mach(span.end_speed, world, track.air, mass, before))
    return track


def refined(track: Track, old: Track, shift: Array) -> Track:
    """A first track as an earlier solution of its span, or of its like, left it.

    ``shift`` (members,) is what the mass at the stop differs by [kg].
    """
    to_new = interpolation_matrix(len(old.mass), len(track.mass))
    track.mass = to_new @ old.mass + shift
    if track.span.march not in ("altitude", "energy"):
        track.mach = np.broadcast_to(to_new @ old.mach, track.mass.shape).copy()
        if old.best is not None:
            track.best = np.broadcast_to(to_new @ old.best, track.mass.shape).copy()
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


def flown_last(tracks: list[Track]) -> Track | None:
    """The last span that has a speed: an allowance that is only booked has none."""
    return next((track for track in reversed(tracks) if track.span.march != "book"), None)
