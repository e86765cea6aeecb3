"""Joints of a climb or descent that only the engine knows: where another limit takes over.

Thrust at a rating has a kink where the binding limit changes and a softer one where a nozzle
chokes. On a schedule of speed both depend on altitude alone, so that they are found once, by
looking closer and closer, before any mass is known; the span is cut there.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from engine.atmosphere import flight_condition
from engine.interface import EngineState
from mission.march.asking import join
from mission.march.span import Span
from mission.march.throttled import on_schedule
from mission.march.world import World

Array = NDArray[np.float64]
_PIECES = 8  # equal parts of the way that a span, then each part with a change, is looked at in
_ROUNDS = 4  # 10 km then end at 2.5 m, and the rest on a straight line
_APART = 1.0  # m: no piece is shorter


@dataclass(frozen=True)
class _Change:
    """A part of a span, between altitudes [m], in which a nozzle chokes or another limit governs.

    ``at_low`` and ``at_high`` are of one quantity whose sign changes: the choking of the nozzle,
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
        """Where the sign changes, on the straight line between the ends [m]."""
        return self.low + self.at_low / (self.at_low - self.at_high) * (self.high - self.low)


def cut_at_joints(world: World, spans: Sequence[Span]) -> tuple[Span, ...]:
    """Spans with every march by altitude cut where the engine has a kink."""
    parts: dict[tuple[int, float, float], Array | None] = {
        (i, span.start_altitude, span.end_altitude): None
        for i, span in enumerate(spans)
        if span.march == "altitude"
    }
    changes: list[_Change] = []
    for _ in range(_ROUNDS):
        if not parts:
            break
        changes = _look(world, spans, parts)
        parts = {(change.span, change.low, change.high): change.start for change in changes}
    return tuple(piece for i, span in enumerate(spans) for piece in _cut(span, i, changes))


def _look(
    world: World, spans: Sequence[Span], parts: Mapping[tuple[int, float, float], Array | None]
) -> list[_Change]:
    """All changes inside some parts of spans, all looked at in one engine call."""
    way = np.linspace(0.0, 1.0, _PIECES + 1)
    altitudes = np.array([_inside(low + way * (high - low)) for _, low, high in parts])
    air = flight_condition(altitudes, 0.0, world.temperature_deviation)
    flights = [on_schedule(spans[i], world, air.at(row)) for row, (i, _, _) in enumerate(parts)]
    starts = [start for start in parts.values() if start is not None]
    state = world.engine.at(
        join(flights),
        rating=np.repeat([spans[i].rating for i, _, _ in parts], way.size),
        start=np.repeat(np.stack(starts, axis=1), way.size, axis=1) if starts else None,
    )
    return [
        change
        for row, (i, _, _) in enumerate(parts)
        for change in _changes(state, row * way.size, i, altitudes[row])
    ]


def _inside(altitudes: Array) -> Array:
    """Altitudes with the ends a hair inside, each part of a span seeing its own side of a joint."""
    hair = 1e-6 * np.sign(altitudes[-1] - altitudes[0])
    altitudes[0] += hair
    altitudes[-1] -= hair
    return altitudes


def _changes(state: EngineState, first: int, span: int, altitudes: Array) -> list[_Change]:
    """Changes between neighbouring altitudes, whose states begin at ``first``."""
    found: list[_Change] = []
    for piece in range(len(altitudes) - 1):
        here, there = first + piece, first + piece + 1
        signs = [(float(nozzle[here]), float(nozzle[there])) for nozzle in state.choking]
        before, after = int(state.binding_limit[here]), int(state.binding_limit[there])
        if before != after and min(before, after) >= 0:
            shares = state.limit_shares[:, [here, there]]
            at_low, at_high = shares[before] - shares[after]
            signs.append((float(at_low), float(at_high)))
        found += [
            _Change(
                span,
                float(altitudes[piece]),
                float(altitudes[piece + 1]),
                at_low,
                at_high,
                state.unknowns[:, here],
            )
            for at_low, at_high in signs
            if at_low * at_high <= 0.0 and at_low != at_high
        ]
    return found


def _cut(span: Span, index: int, changes: list[_Change]) -> list[Span]:
    """One span in pieces at its changes, none shorter than a metre."""
    rise = span.end_altitude - span.start_altitude
    marks = sorted((c.joint - span.start_altitude) / rise for c in changes if c.span == index)
    kept: list[float] = []
    for mark in marks:
        before = kept[-1] if kept else 0.0
        if (mark - before) * abs(rise) > _APART and (1.0 - mark) * abs(rise) > _APART:
            kept.append(mark)
    return span.cut(tuple(kept)) if kept else [span]
