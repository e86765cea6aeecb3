"""Joints that only engine and polar know: where another limit takes over, or a table goes on.

Thrust at a rating has a kink where the binding limit changes or total temperature passes a theta
break, and a softer one where a nozzle chokes. Along a way (a climb on its schedule, a change of
speed at one altitude) both depend on the way's variable alone, so that they are found once, by
looking closer and closer, before any mass is known; the span is cut there. So it is where a polar
over Mach number passes from one of its rows to the next.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from engine.atmosphere import flight_condition
from engine.interface import EngineState
from mission.march.asking import join
from mission.march.span import Span
from mission.march.ways import Way, ways_of
from mission.march.world import World

Array = NDArray[np.float64]
_PIECES = 8  # equal parts of a way, then of each part with a change, that are looked at
_ROUNDS = 4  # 10 km then end at 2.5 m, and the rest on a straight line


@dataclass(frozen=True)
class _Change:
    """A part of a way in which there is a kink.

    ``at_low`` and ``at_high`` are of one quantity whose sign changes: one that the engine names,
    or the share of the limit that governs at ``low`` less that of the one at ``high``.
    """

    span: int
    low: float
    high: float
    at_low: float
    at_high: float
    start: Array

    @property
    def joint(self) -> float:
        """Where the sign changes, on the straight line between the ends."""
        return self.low + self.at_low / (self.at_low - self.at_high) * (self.high - self.low)


_Parts = Mapping[tuple[int, float, float], Array | None]
Ends = tuple[float, float]


@dataclass(frozen=True)
class Joints:
    """Spans, the ways along them, and the values at which the engine has a kink, by span."""

    spans: tuple[Span, ...]
    ways: Mapping[int, Way]
    values: Mapping[int, tuple[float, ...]]

    def cut(self, flown: Mapping[int, Ends] | None = None) -> tuple[Span, ...]:
        """The spans in pieces; ``flown`` are the ends of ways as a flight had them.

        Without them a way is cut only where it leads at every mass.
        """
        return tuple(piece for _, piece in self._pieces(flown))

    def ends_of(self, first: Array, last: Array) -> dict[int, Ends]:
        """Ends of the marches by speed, from the Mach numbers at the ends of the first pieces."""
        ends: dict[int, Ends] = {}
        for row, (i, piece) in enumerate(self._pieces(None)):
            if i in self.ways and piece.march not in ("altitude", "energy"):
                begins = ends[i][0] if i in ends else float(first[row])
                ends[i] = (begins, float(last[row]))
        return ends

    def _pieces(self, flown: Mapping[int, Ends] | None) -> Iterator[tuple[int, Span]]:
        for i, span in enumerate(self.spans):
            if i not in self.ways:
                yield i, span
                continue
            way = self.ways[i]
            ends = way.surely if flown is None else flown.get(i, way.surely)
            for piece in _cut(way, ends, self.values.get(i, ())):
                yield i, piece


def find_joints(world: World, spans: Sequence[Span]) -> Joints:
    """Where the engine has a kink on the way of every march at a rating."""
    ways = ways_of(world, spans)
    parts: _Parts = {(i, way.low, way.high): None for i, way in ways.items()}
    changes: list[_Change] = []
    for _ in range(_ROUNDS):
        if not parts:
            break
        changes = _look(world, ways, parts)
        parts = {(change.span, change.low, change.high): change.start for change in changes}
    values = {i: tuple(c.joint for c in changes if c.span == i) for i in ways}
    return Joints(tuple(spans), ways, values)


def _look(world: World, ways: Mapping[int, Way], parts: _Parts) -> list[_Change]:
    """All changes inside some parts of ways, all looked at in one engine call."""
    steps = np.linspace(0.0, 1.0, _PIECES + 1)
    values = np.array([_inside(low + steps * (high - low)) for _, low, high in parts])
    along = [ways[i] for i, _, _ in parts]
    altitudes = [way.altitudes(row) for way, row in zip(along, values, strict=True)]
    days = [way.span.air.deviation_at(row) for way, row in zip(along, altitudes, strict=True)]
    air = flight_condition(np.array(altitudes), 0.0, np.array(days))
    flights = [
        way.flights(world, row, air.at(place))
        for place, (way, row) in enumerate(zip(along, values, strict=True))
    ]
    flown = join(flights)
    starts = [start for start in parts.values() if start is not None]
    state = world.engine.at(
        flown,
        rating=np.repeat([ways[i].rating for i, _, _ in parts], steps.size),
        start=np.repeat(np.stack(starts, axis=1), steps.size, axis=1) if starts else None,
    )
    knots = np.array(world.aircraft.polar.kink_machs)[:, None]
    kinks = np.concatenate([state.kinks, flown.mach - knots])
    return [
        change
        for row, (i, _, _) in enumerate(parts)
        for change in _changes(state, kinks, row * steps.size, i, values[row])
    ]


def _inside(values: Array) -> Array:
    """Values with the ends a hair inside, each part of a way seeing its own side of a joint."""
    hair = 1e-6 * min(1.0, abs(values[-1] - values[0])) * np.sign(values[-1] - values[0])
    values[0] += hair
    values[-1] -= hair
    return values


def _changes(
    state: EngineState, kinks: Array, first: int, span: int, values: Array
) -> list[_Change]:
    """Changes between neighbouring values, whose states and ``kinks`` begin at ``first``."""
    found: list[_Change] = []
    for piece in range(len(values) - 1):
        here, there = first + piece, first + piece + 1
        signs = [(float(kink[here]), float(kink[there])) for kink in kinks]
        for governs in (state.binding_limit, state.dry_limit):
            before, after = int(governs[here]), int(governs[there])
            if before != after and min(before, after) >= 0:
                shares = state.limit_shares[:, [here, there]]
                at_low, at_high = shares[before] - shares[after]
                signs.append((float(at_low), float(at_high)))
        found += [
            _Change(
                span,
                float(values[piece]),
                float(values[piece + 1]),
                at_low,
                at_high,
                state.unknowns[:, here],
            )
            for at_low, at_high in signs
            if at_low * at_high <= 0.0 and at_low != at_high
        ]
    return found


def _cut(way: Way, ends: Ends, joints: tuple[float, ...]) -> list[Span]:
    """A way's span in pieces at the joints between its ends, none shorter than worth a cut."""
    begins, finishes = ends
    direction = 1.0 if way.high > way.low else -1.0
    kept: list[float] = []
    for joint in sorted(joints, key=lambda value: direction * value):
        before = kept[-1] if kept else begins
        if min(direction * (joint - before), direction * (finishes - joint)) > way.least:
            kept.append(joint)
    return way.span.cut(tuple(kept)) if kept else [way.span]
