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

from engine.interface import EngineState
from mission.march.asking import join
from mission.march.nodes import positions
from mission.march.span import Span
from mission.march.throttled import altitude_flight, scheduled_flight
from mission.march.world import World

Array = NDArray[np.float64]
_SCAN = 9  # nodes a span is looked at
_ROUNDS = 12
_CLOSE = 0.1  # m: a kink this far off costs the square of its share of a piece
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
    joint: float = np.inf
    moved: float = np.inf
    last_side: int = 0

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
    """Illinois' variant of the false position on all brackets at once."""
    live = brackets
    for _ in range(_ROUNDS):
        if not live:
            break
        guesses = [_false_position(bracket) for bracket in live]
        flights = [
            scheduled_flight(spans[bracket.span], world, np.array([guess]))
            for bracket, guess in zip(live, guesses, strict=True)
        ]
        state = world.engine.at(
            join(flights),
            rating=np.array([spans[bracket.span].rating for bracket in live]),
            start=np.stack([bracket.start for bracket in live], axis=1),
        )
        for place, (bracket, guess) in enumerate(zip(live, guesses, strict=True)):
            bracket.start = state.unknowns[:, place]
            _narrow(bracket, guess, bracket.value(state, place))
        live = [bracket for bracket in live if abs(bracket.moved) > _CLOSE]


def _false_position(bracket: _Bracket) -> float:
    share = bracket.at_low / (bracket.at_low - bracket.at_high)
    return bracket.low + share * (bracket.high - bracket.low)


def _narrow(bracket: _Bracket, guess: float, value: float) -> None:
    """Keep the half with the change of sign; halve the weight of an end kept twice."""
    bracket.moved, bracket.joint = guess - bracket.joint, guess
    side = 1 if value * bracket.at_low > 0.0 else -1
    if side == 1:
        bracket.low, bracket.at_low = guess, value
    else:
        bracket.high, bracket.at_high = guess, value
    if side == bracket.last_side:
        bracket.at_high *= 0.5 if side == 1 else 1.0
        bracket.at_low *= 0.5 if side == -1 else 1.0
    bracket.last_side = side


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
