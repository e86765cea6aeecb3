"""Joints of a climb or descent that only the engine knows: where another limit takes over.

Thrust at a rating has a kink where the binding limit changes and a softer one where a nozzle
chokes. On a schedule of speed both depend on altitude alone, so that they are found once, by a
scan and a bracketed root, before any mass is known; the span is cut there.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from engine.atmosphere import flight_condition
from engine.interface import EngineState
from mission.march.asking import join
from mission.march.nodes import positions
from mission.march.span import Span
from mission.march.throttled import altitude_flight, on_schedule
from mission.march.world import World

Array = NDArray[np.float64]
_SCAN = 9  # nodes a span is looked at
_PIECES, _ROUNDS = 9, 3  # a bracket of 500 m ends below a metre, then on a straight line
_APART = 1.0  # m: no piece is shorter


@dataclass
class _Bracket:
    """A change of sign between two altitudes [m], of two limits' shares or a nozzle's choking."""

    span: int
    low: float
    high: float
    at_low: float
    at_high: float
    limits: tuple[int, int] | None
    nozzle: int
    start: Array

    @property
    def joint(self) -> float:
        """Where the sign changes, on the straight line between the ends [m]."""
        share = self.at_low / (self.at_low - self.at_high)
        return self.low + share * (self.high - self.low)

    def keep_change(self, altitudes: Array, values: list[float]) -> None:
        """Narrow to the first piece between altitudes inside whose ends differ in sign."""
        marks = [self.low, *map(float, altitudes), self.high]
        ends = [self.at_low, *values, self.at_high]
        for piece in range(len(marks) - 1):
            if ends[piece] * ends[piece + 1] <= 0.0 and ends[piece] != ends[piece + 1]:
                self.low, self.high = marks[piece], marks[piece + 1]
                self.at_low, self.at_high = ends[piece], ends[piece + 1]
                return

    def value(self, state: EngineState, index: int) -> float:
        """The quantity whose sign changes."""
        if self.limits is None:
            return float(state.choking[self.nozzle, index])
        first, second = self.limits
        shares = state.limit_shares[:, index]
        return float(shares[first] - shares[second])


def cut_at_joints(world: World, spans: Sequence[Span]) -> tuple[Span, ...]:
    """Spans with every march by altitude cut where the engine has a kink."""
    scanned = [i for i, span in enumerate(spans) if span.march == "altitude"]
    if not scanned:
        return tuple(spans)
    flights = [altitude_flight(spans[i], world, _SCAN) for i in scanned]
    ratings = np.repeat([spans[i].rating for i in scanned], _SCAN)
    state = world.engine.at(join(flights), rating=ratings)
    brackets = [
        bracket
        for place, i in enumerate(scanned)
        for bracket in _brackets(state, i, spans[i], place * _SCAN)
    ]
    _close_in(world, spans, brackets)
    return tuple(piece for i, span in enumerate(spans) for piece in _cut(span, i, brackets))


def _brackets(state: EngineState, index: int, span: Span, first: int) -> list[_Bracket]:
    """Changes of sign between neighbouring nodes of one scanned span."""
    altitude = span.start_altitude + positions(_SCAN) * (span.end_altitude - span.start_altitude)
    found: list[_Bracket] = []
    for left in range(_SCAN - 1):
        here, there = first + left, first + left + 1
        start = state.unknowns[:, here]
        ends = (float(altitude[left]), float(altitude[left + 1]))
        limits = (int(state.binding_limit[here]), int(state.binding_limit[there]))
        pairs: list[tuple[tuple[int, int] | None, int]] = []
        if limits[0] != limits[1] and min(limits) >= 0:
            pairs.append((limits, -1))
        pairs += [(None, nozzle) for nozzle in range(len(state.choking))]
        for pair, nozzle in pairs:
            bracket = _Bracket(index, *ends, 0.0, 0.0, pair, nozzle, start)
            bracket.at_low, bracket.at_high = (bracket.value(state, k) for k in (here, there))
            if bracket.at_low * bracket.at_high < 0.0:
                found.append(bracket)
    return found


def _close_in(world: World, spans: Sequence[Span], brackets: list[_Bracket]) -> None:
    """Look at every bracket in equal pieces, all in one call, and keep the piece that changes."""
    if not brackets:
        return
    inside = np.arange(1, _PIECES) / _PIECES
    for _ in range(_ROUNDS):
        altitudes = np.array([b.low + inside * (b.high - b.low) for b in brackets])
        air = flight_condition(altitudes, 0.0, world.temperature_deviation)
        flights = [on_schedule(spans[b.span], world, air.at(i)) for i, b in enumerate(brackets)]
        state = world.engine.at(
            join(flights),
            rating=np.repeat([spans[b.span].rating for b in brackets], inside.size),
            start=np.repeat(np.stack([b.start for b in brackets], axis=1), inside.size, axis=1),
        )
        for place, bracket in enumerate(brackets):
            first = place * inside.size
            values = [bracket.value(state, first + k) for k in range(inside.size)]
            bracket.start = state.unknowns[:, first]
            bracket.keep_change(altitudes[place], values)


def _cut(span: Span, index: int, brackets: list[_Bracket]) -> list[Span]:
    """One span in pieces at its closed brackets, none shorter than a metre."""
    rise = span.end_altitude - span.start_altitude
    marks = sorted((b.joint - span.start_altitude) / rise for b in brackets if b.span == index)
    kept: list[float] = []
    for mark in marks:
        before = kept[-1] if kept else 0.0
        if (mark - before) * abs(rise) > _APART and (1.0 - mark) * abs(rise) > _APART:
            kept.append(mark)
    return span.cut(tuple(kept)) if kept else [span]
