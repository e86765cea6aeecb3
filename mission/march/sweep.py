"""Sweeps: masses, distances and the closure of fuel, updated together until nothing moves.

Fuel burnt depends so weakly on mass that each sweep (rates at the masses of the last one, then
integrals, then new masses) brings several digits; a mass depends only on the fuel burnt after it
(before it, on the reserve flight), so that the error falls faster than any power.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from mission.march.asking import ask
from mission.march.dead_engines import find_dead_drags
from mission.march.nodes import integration_matrix, positions
from mission.march.outcomes import set_nodes, slopes_of
from mission.march.requests import request_of
from mission.march.span import Span
from mission.march.tracks import Track, first_track, flown_last, refined
from mission.march.world import World

Array = NDArray[np.float64]
MOST_SWEEPS = 40
_PATIENCE = 6  # sweeps after which an engine without an answer ends the march
SETTLED = 1e-11
_SETTLED_MACH = 1e-6  # fuel flow is flat at its least: its error is the square of this
_ROUGHER = 20.0  # how much rougher a sought Mach number may be than masses
_UNSETTLED = 1e-6
_HEAVIEST = 1e8  # kg: a mass on its way to nowhere


@dataclass(frozen=True)
class Parts:
    """Spans of the mission and of the reserve flight.

    ``distances`` [m] are what legs have to cover over the ground, by leg, one or (members,); a leg
    of ``free_legs`` covers what the flight is solved for instead. ``added`` (members,) is what
    members carry on top of the mission's payload [kg].
    """

    mission: Sequence[Span]
    reserve: Sequence[Span] = ()
    distances: Mapping[int, float | Array] = field(default_factory=dict)
    free_legs: frozenset[int] = frozenset()
    added: Array = field(default_factory=lambda: np.zeros(1), compare=False)


@dataclass(frozen=True)
class Integrals:
    """From the start of each span to its nodes, a list of arrays (nodes, members).

    Attributes
    ----------
    fuel : [kg]
    time : [s]
    ground, air : distance over the ground and through the air [m]
    """

    fuel: list[Array]
    time: list[Array]
    ground: list[Array]
    air: list[Array]


@dataclass(frozen=True)
class Marched:
    """Outcome of :func:`march`.

    Attributes
    ----------
    tracks : one a span, in order
    integrals : along each span
    stop_mass : (members,) at the end of the mission part [kg]
    sweeps : how many it took
    change : last relative change of any mass
    """

    tracks: list[Track]
    integrals: Integrals
    stop_mass: Array
    sweeps: int
    change: float

    @property
    def is_lost(self) -> bool:
        """Whether the engine had no answer somewhere."""
        return any(track.is_lost for track in self.tracks)

    @property
    def is_settled(self) -> bool:
        """Whether the sweeps came to rest; if not, no mass closes the fuel."""
        return bool(np.all(np.isfinite(self.stop_mass))) and self.change < _UNSETTLED

    @property
    def row_masses(self) -> dict[int, tuple[float, float]]:
        """Mass [kg] at both ends of each row of the log, of the first member."""
        masses: dict[int, tuple[float, float]] = {}
        for track in self.tracks:
            row = track.span.segment
            start = masses[row][0] if row in masses else float(track.mass[0, 0])
            masses[row] = (start, float(track.mass[-1, 0]))
        return masses


Closure = Callable[[Array, Integrals], Array]


def march(
    world: World,
    parts: Parts,
    count: int,
    stop_mass: Array,
    close: Closure,
    start: Marched | None = None,
    settled: float = SETTLED,
    free: Array | None = None,
) -> Marched:
    """March all spans with ``count`` nodes each.

    ``stop_mass`` (members,) is a first guess of the mass at the end of the mission part;
    ``close(stop_mass, integrals)`` gives the next. ``start`` is an earlier solution of the same
    spans, of any node count, to begin from. The sweeps end when no mass moves by more than
    ``settled`` of itself. ``free`` (members,) is what free spans and legs are to cover [m, s].
    """
    tracks = _first_tracks(world, parts, count, stop_mass, start)
    slopes = slopes_of(tracks)
    free = np.zeros_like(stop_mass) if free is None else free
    for sweep in range(1, MOST_SWEEPS + 1):
        _ask_engine(world, tracks)
        if slopes is not None:
            slopes.solve(world)
        integrals = _integrate(world, tracks, parts, free)
        stop_mass = close(stop_mass, integrals)
        change = _update_masses(tracks, integrals.fuel, stop_mass, len(parts.mission))
        is_lost = bool(np.any(~(stop_mass < _HEAVIEST)))
        is_lost |= any(t.is_lost for t in tracks if t.span.is_static or sweep >= _PATIENCE)
        is_found = all(t.mach_change < max(_SETTLED_MACH, _ROUGHER * settled) for t in tracks)
        if is_lost or (change < settled and is_found):
            break
    return Marched(tracks, integrals, stop_mass, sweep, change)


def _first_tracks(
    world: World, parts: Parts, count: int, stop_mass: Array, start: Marched | None
) -> list[Track]:
    tracks: list[Track] = []
    for index, span in enumerate([*parts.mission, *parts.reserve]):
        if start is not None:
            track = first_track(world, span, count, stop_mass, None)
            tracks.append(refined(track, start.tracks[index], stop_mass - start.stop_mass))
        else:
            tracks.append(first_track(world, span, count, stop_mass, flown_last(tracks)))
    return tracks


def _ask_engine(world: World, tracks: list[Track]) -> None:
    """One engine call for every span whose condition moved."""
    find_dead_drags(world, tracks)
    asked = {index: request_of(world, tracks, index) for index in range(len(tracks))}
    requests = {index: request for index, request in asked.items() if request is not None}
    for index, answer in ask(world.engine, requests).items():
        tracks[index].answer = answer


def _integrate(world: World, tracks: list[Track], parts: Parts, free: Array) -> Integrals:
    """Nodes of all spans and the integrals along them; what flies the rest of a distance last.

    The rest then answers to the other spans of this sweep, not of the one before, which would
    make the sweeps swing.
    """
    sums: dict[int, tuple[Array, Array, Array, Array]] = {}
    left: dict[int, Array] = {leg: np.atleast_1d(total) for leg, total in parts.distances.items()}
    left |= dict.fromkeys(parts.free_legs, free)
    nothing = np.zeros(1)
    for index in sorted(range(len(tracks)), key=lambda i: tracks[i].span.takes_rest):
        track = tracks[index]
        leg = track.span.leg
        set_nodes(world, track, left.get(leg, nothing), free, parts.added)
        sums[index] = _integrals_along(track)
        if not track.span.takes_rest:
            left[leg] = left.get(leg, nothing) - sums[index][2][-1]
    fuel, time, ground, air = zip(*(sums[index] for index in range(len(tracks))), strict=True)
    return Integrals(list(fuel), list(time), list(ground), list(air))


def _integrals_along(track: Track) -> tuple[Array, Array, Array, Array]:
    """Fuel [kg], time [s], ground and air distance [m] from the start of a span to its nodes."""
    nodes, span, count = track.nodes, track.span, len(track.mass)
    if nodes is None:
        booked = span.booked_fuel + span.booked_fraction * track.mass[0]
        none = np.zeros_like(track.mass)
        return positions(count)[:, None] * booked, none, none, none
    in_air = span.march not in ("roll", "stand")
    forward = nodes.flight.true_airspeed * np.cos(nodes.path_angle) * in_air
    wind = span.air.tailwind_at(nodes.flight.pressure_altitude)
    covered = (forward + wind) * (in_air and span.gains_distance)
    matrix = integration_matrix(count)
    return (
        matrix @ (nodes.propulsion.fuel_flow * nodes.time_rate),
        matrix @ nodes.time_rate,
        matrix @ (covered * nodes.time_rate),
        matrix @ (forward * nodes.time_rate),
    )


def _update_masses(
    tracks: list[Track], fuel: Sequence[Array], stop_mass: Array, mission_count: int
) -> float:
    """New masses at all nodes from the mass at the end of the mission; their relative change."""
    change = 0.0
    after = np.zeros_like(stop_mass)
    for index in range(mission_count - 1, -1, -1):
        lost = fuel[index] - _received(tracks[index])
        new = stop_mass + after + (lost[-1] - lost)
        after = after + lost[-1]
        change = max(change, _replace_mass(tracks[index], new))
    before = np.zeros_like(stop_mass)
    for index in range(mission_count, len(tracks)):
        is_aside = tracks[index].span.is_aside
        lost = fuel[index] - _received(tracks[index])
        new = stop_mass - lost - (0.0 if is_aside else before)
        before = before + (0.0 if is_aside else lost[-1])
        change = max(change, _replace_mass(tracks[index], new))
    return change


def _received(track: Track) -> Array:
    """Mass [kg] taken on (released where negative) up to each node, evenly along the span."""
    return track.span.received * positions(len(track.mass))[:, None]


def _replace_mass(track: Track, new: Array) -> float:
    change = float(np.max(np.abs(new - track.mass) / track.mass))
    track.mass = np.maximum(new, 1.0)
    return change
