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
from mission.solving import TOLERANCE, Root, largest_with_margin

Array = NDArray[np.float64]
_LEAST_RATE = 1e-12  # kg/m or kg/s: where nothing stretches the answer is the guess
_MOST_STEPS = 6  # on the final nodes
_SETTLED = 1e-9  # of mass: the margin is a small difference of fuels


@dataclass(frozen=True)
class _Asked:
    """A plan with something free, and how it is marched."""

    world: World
    plan: FlightPlan
    written: MissionFile
    count: int
    close: Closure

    def fly(self, free: Array, stop: Array, start: Marched | None) -> Marched:
        """All members at their free values."""
        return march(
            self.world, self.plan.parts, self.count, stop, self.close, start, _SETTLED, free
        )

    def margins(self, flown: Marched) -> Array:
        """Fuel left over the reserves [kg]; minus infinity where there is no flight.

        Less where the tanks run dry before fuel comes aboard.
        """
        if not flown.is_settled:
            return np.full(flown.stop_mass.shape, -np.inf)
        members = range(flown.stop_mass.size)
        sums = [add_up(self.plan, self.written, flown.integrals, m) for m in members]
        reserves = np.array([each.reserves for each in sums])
        margin: Array = (
            flown.stop_mass - self.plan.stop_empty_mass - self.plan.parts.added - reserves
        )
        return np.minimum(margin, _least_aboard(self.plan, flown))


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
) -> tuple[Marched, Root]:
    """The free value at which the fuel margin is nothing, and the flight there.

    ``near`` is an earlier flight of the same spans, ``earlier`` the root of a plan alike. Fuel
    margin is closed to 1e-7 of the fuel burnt. The root's flights are those of both plans.
    """
    asked = _Asked(world, plan, written, count, close)
    nothing = np.zeros_like(stop)
    first = asked.fly(nothing, stop, near)
    flown = [first]
    margin = asked.margins(first)
    least = _least(plan, first)
    rate = np.maximum(np.sum(_rates(plan, first), axis=0), _LEAST_RATE)
    burnt = np.sum([fuel[-1] for fuel in first.integrals.fuel], axis=0)
    guess = least + np.maximum(margin, 0.0) / rate if earlier is None else earlier.value

    def again(free: Array) -> Array:
        start = flown[-1] if flown[-1].is_settled else first
        flown.append(asked.fly(free, start.stop_mass, start))
        return asked.margins(flown[-1])

    tolerance = TOLERANCE * np.maximum(margin + burnt, 1.0)
    root = largest_with_margin(again, least, guess, tolerance, at_least=margin)
    before = 0 if earlier is None else earlier.flights
    return flown[-1], replace(root, flights=root.flights + before)


def closed_again(
    world: World, plan: FlightPlan, written: MissionFile, close: Closure, fine: Marched, root: Root
) -> tuple[Marched, Root]:
    """The flight with its final nodes closed as its root was with few: by a step or two more."""
    asked = _Asked(world, plan, written, len(fine.tracks[0].mass), close)
    burnt = np.sum([fuel[-1] for fuel in fine.integrals.fuel], axis=0)
    for _ in range(_MOST_STEPS):
        margin = asked.margins(fine)
        if not np.all(root.has_answer) or np.all(np.abs(margin) <= TOLERANCE * burnt):
            break
        rate = np.maximum(np.sum(_rates(plan, fine), axis=0), _LEAST_RATE)
        value = root.value + margin / rate
        fine = asked.fly(value, fine.stop_mass, fine)
        root = replace(root, value=value, margin=margin, flights=root.flights + 1)
    return fine, root


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


def _rates(plan: FlightPlan, flown: Marched) -> list[Array]:
    """Fuel per free metre or second [kg] of each span that stretches, as it begins (members,)."""
    rates = [np.zeros_like(flown.stop_mass)]
    for track in flown.tracks:
        if track.nodes is None or not stretches(plan, track.span):
            continue
        flow, pace = track.nodes.propulsion.fuel_flow[0], track.nodes.rate[0]
        rates.append(flow / np.where(np.isfinite(pace), np.maximum(pace, 1.0), 1.0))
    return rates


def stretches(plan: FlightPlan, span: Span) -> bool:
    """Whether a span grows with the free value."""
    return span.is_free or (span.takes_rest and span.leg in plan.parts.free_legs)


def solution_of(written: MissionFile, root: Root | None) -> Solution | None:
    """What a flight was solved for; None where nothing is free."""
    if root is None:
        return None
    name = written.free[0]
    return Solution(
        name=name,
        value=float(root.value[0]),
        unit="s" if name.startswith("time") else "m",
        flights=root.flights,
        has_answer=bool(root.has_answer[0]),
    )
