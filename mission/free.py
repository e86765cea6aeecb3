"""A mission with something free in it: how far, or how long, its fuel lets it go."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from mission.fuel_plan import add_up
from mission.march.span import Span
from mission.march.sweep import Closure, Marched, march
from mission.march.world import World
from mission.mission_file import MissionFile
from mission.plan import FlightPlan
from mission.results import Solution
from mission.solving import TOLERANCE, Root, Search, largest_with_margin

Array = NDArray[np.float64]
_LEAST_RATE = 1e-12  # kg/m or kg/s: where nothing stretches the answer is the guess
_MOST_STEPS = 6  # on the final nodes
_CLOSED = 1e-6  # of the fuel aboard, to which a margin counts as nothing
_SETTLED = 1e-9  # of mass: the margin is a small difference of fuels


@dataclass(frozen=True)
class _Asked:
    """A plan with something free, and how it is marched."""

    world: World
    plan: FlightPlan
    count: int
    close: Closure

    def fly(self, free: Array, stop: Array, start: Marched | None) -> Marched:
        """All members at their free values."""
        return march(
            self.world, self.plan.parts, self.count, stop, self.close, start, _SETTLED, free
        )


def fuel_margins(plan: FlightPlan, written: MissionFile, flown: Marched) -> Array:
    """Fuel left over the reserves [kg] (members,); minus infinity where there is no flight.

    Less where the tanks run dry before fuel comes aboard.
    """
    if not flown.is_settled:
        return np.full(flown.stop_mass.shape, -np.inf)
    sums = [add_up(plan, written, flown.integrals, m) for m in range(flown.stop_mass.size)]
    reserves = np.array([each.reserves for each in sums])
    margin: Array = flown.stop_mass - plan.stop_empty_mass - plan.parts.added - reserves
    return np.minimum(margin, _least_aboard(plan, flown))


def _least_aboard(plan: FlightPlan, flown: Marched) -> Array:
    """The least usable fuel [kg] aboard anywhere in the mission, shape (members,)."""
    empty = [plan.first_empty_mass, *(row.empty_mass for row in plan.rows)]
    spans = plan.parts.mission
    aboard = [
        track.mass.min(axis=0) - min(empty[span.segment : span.segment + 2])
        for span, track in zip(spans, flown.tracks, strict=False)
    ]
    least: Array = np.min(aboard, axis=0) - plan.parts.added
    return least


def solve_free(
    world: World,
    plan: FlightPlan,
    written: MissionFile,
    count: int,
    stop: Array,
    close: Closure,
    near: Marched | None,
    earlier: Root | None,
    tolerance: float = TOLERANCE,
) -> tuple[Marched, Root]:
    """The free value at which the fuel margin is nothing, and the flight there.

    ``near`` is an earlier flight of the same spans, ``earlier`` the root of a plan alike, about
    which the search begins. Fuel margin is closed to ``tolerance`` of the fuel aboard. The root's
    flights are those of both.
    """
    asked = _Asked(world, plan, count, close)
    flown: list[Marched] = []

    def margin(free: Array) -> Array:
        start = next((each for each in reversed(flown) if each.is_settled), None)
        begin = stop if start is None else start.stop_mass
        flown.append(asked.fly(free, begin, start or near))
        return fuel_margins(plan, written, flown[-1])

    search = None if earlier is None else replace(earlier.search, guess=earlier.value)
    if search is None or earlier is None or not np.all(earlier.has_answer):
        nothing = np.zeros_like(stop)
        at_least = margin(nothing)
        least, first = _least(plan, flown[0]), flown[0]
        if len(plan.parts.free_legs) > 1:  # the shortest of all of them, which some lengthen
            at_least = margin(least)
        search = _search(plan, first, least, at_least, search)
    root = largest_with_margin(margin, search, tolerance)
    if not flown:
        margin(root.value)
    before = 0 if earlier is None else earlier.flights
    return flown[-1], replace(root, flights=len(flown) + before)


def closed_again(
    world: World, plan: FlightPlan, written: MissionFile, close: Closure, fine: Marched, root: Root
) -> tuple[Marched, Root]:
    """The flight with its final nodes closed as its root was with few: by a step or two more."""
    asked = _Asked(world, plan, len(fine.tracks[0].mass), close)
    rate = fuel_per_free(plan, fine, -1)
    for _ in range(_MOST_STEPS):
        margin = fuel_margins(plan, written, fine)
        is_closed = np.abs(margin) <= TOLERANCE * root.search.aboard
        if not np.all(root.has_answer) or np.all(is_closed):
            break
        value = root.value + margin / rate
        fine = asked.fly(value, fine.stop_mass, fine)
        root = replace(root, value=value, margin=margin, flights=root.flights + 1)
    return fine, root


def _search(
    plan: FlightPlan, first: Marched, least: Array, at_least: Array, earlier: Search | None
) -> Search:
    """Where to look for the root, from a flight of the least there is and the margin [kg] there."""
    guess = least + np.maximum(at_least, 0.0) / fuel_per_free(plan, first, 0)
    burnt = np.sum([fuel[-1] for fuel in first.integrals.fuel], axis=0)
    return Search(
        least=least,
        at_least=at_least,
        guess=guess if earlier is None else earlier.guess,
        aboard=np.maximum(at_least + burnt, 1.0),
    )


def _least(plan: FlightPlan, flown: Marched) -> Array:
    """The least free value: a leg's ground distance without the cruise that takes the rest.

    All of that cruise: how far it goes between two steps answers to the free value too.
    """
    least = np.zeros_like(flown.stop_mass)
    resting = {track.span.segment for track in flown.tracks if track.span.takes_rest}
    for leg in plan.parts.free_legs:
        chosen = [
            ground[-1]
            for track, ground in zip(flown.tracks, flown.integrals.ground, strict=True)
            if track.span.leg == leg and track.span.segment not in resting
        ]
        least = np.maximum(least, sum(chosen, np.zeros_like(least)))
    return least


def fuel_per_free(plan: FlightPlan, flown: Marched, node: int) -> Array:
    """Fuel per free metre or second [kg] of all that stretches, at a node of it (members,)."""
    total = np.full_like(flown.stop_mass, _LEAST_RATE)
    for track in flown.tracks:
        if track.nodes is None or not stretches(plan, track.span):
            continue
        flow, pace = track.nodes.propulsion.fuel_flow[node], track.nodes.rate[node]
        total += flow / np.where(np.isfinite(pace), np.maximum(pace, 1.0), 1.0)
    return total


def stretches(plan: FlightPlan, span: Span) -> bool:
    """Whether a span grows with the free value."""
    return span.is_free or (span.takes_rest and span.leg in plan.parts.free_legs)


def solution_of(written: MissionFile, root: Root | None) -> Solution | None:
    """What a flight was solved for; None where nothing is free."""
    if root is None:
        return None
    name = written.free[0]
    is_closed = abs(root.margin[0]) <= _CLOSED * root.search.aboard[0]
    return Solution(
        name=name,
        value=float(root.value[0]),
        unit="s" if name.startswith("time") else "m",
        flights=root.flights,
        has_answer=bool(root.has_answer[0] and is_closed),
    )
