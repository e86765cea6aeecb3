"""Trials of a fit: an engine file with other values, sized and asked for all points at once."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field, replace
from typing import Any

import numpy as np
from numpy.typing import NDArray

from engine.atmosphere import FlightCondition, flight_condition
from engine.cycle_engine import CycleEngine
from engine.errors import InputRefused, LonglegsError
from engine.interface import IDLES, EngineState, Outcome, is_unanswered
from engine.options.fit_parameters import Parameter, put
from engine.options.fit_points import FitPoints
from engine.options.loading import engine_from_content
from engine.ratings import REHEAT_ROWS

Array = NDArray[np.float64]
# Relative: a thrust near zero, as at idle in flight, is compared with this share of the greatest.
SMALL_THRUST = 0.05
_PENALTY = 10.0  # relative error where there is no answer, far above any that is one
_STEP = 1e-4  # of a scale, for differences
_CLOSE = 0.1  # scales
_PART_POWER = "part power"
_NAMED = 3  # points without an answer that are named
_WHY = {Outcome.NOT_CONVERGED: "finds no balance", Outcome.UNPHYSICAL: "has no physical state"}


@dataclass(frozen=True)
class Answers:
    """What an engine gives at N points.

    Attributes
    ----------
    net_thrust, fuel_flow : (N,) [N], [kg/s]
    outcome : (N,) values of :class:`engine.interface.Outcome`
    thrust_error, fuel_error : (N,) relative, NaN where the point does not tell; of a thrust asked
        for what is missing, 0 where it is met; 10 where there is no answer
    """

    net_thrust: Array
    fuel_flow: Array
    outcome: NDArray[np.int64]
    thrust_error: Array
    fuel_error: Array

    @property
    def is_answered(self) -> NDArray[np.bool_]:
        """Where there is an answer, (N,)."""
        return ~is_unanswered(self.outcome)

    @property
    def rows(self) -> Array:
        """All errors there are, those of thrust first."""
        both = np.concatenate([self.thrust_error, self.fuel_error])
        told: Array = both[~np.isnan(both)]
        return told


@dataclass(frozen=True)
class Trial:
    """One engine tried: its errors, and the unknowns a near trial may start from."""

    x: Array
    rows: Array
    answers: Answers | None = None
    unknowns: Array | None = None

    @property
    def is_answered(self) -> bool:
        """Whether every point has an answer."""
        return self.answers is not None and bool(self.answers.is_answered.all())


@dataclass
class Bench:
    """Where engines are tried at the points.

    ``base`` is the trial that later ones start from; ``evaluations`` counts engines sized and
    asked, and ``failed`` holds where there was one without an answer somewhere.
    """

    content: Mapping[str, Any]
    where: str
    points: FitPoints
    flight: FlightCondition
    base: Trial
    evaluations: int = 1
    failed: list[Array] = field(default_factory=list)

    @classmethod
    def of(cls, content: Mapping[str, Any], where: str, points: FitPoints) -> Bench:
        """A bench with the engine as it is written; refused where that has no answer."""
        try:
            flight = flight_condition(
                points.pressure_altitude, points.mach, points.temperature_deviation
            )
        except LonglegsError as refusal:
            raise InputRefused(str(refusal), where=points.where) from None
        engine = _engine(content, where)
        _refuse_unknown_ratings(engine, points)
        state = _ask(engine, points, flight, None)
        answers = _answers(points, state)
        refuse_unanswered(
            answers,
            points,
            "the engine to start from",
            "change the engine file so that it can run there, or take them out",
        )
        base = Trial(np.zeros(0), answers.rows, answers, state.unknowns)
        return cls(content, where, points, flight, base)

    def run(self, parameters: Sequence[Parameter], x: Array) -> Trial:
        """One trial of parameters in their scales; without an answer it has a large error.

        It grows with the distance from the base, so that it leads back.
        """
        values = {
            p.place: p.exactly(float(v) * p.scale) for p, v in zip(parameters, x, strict=True)
        }
        self.evaluations += 1
        try:
            engine = _engine(put(self.content, values), self.where)
            state = _ask(engine, self.points, self.flight, self.base.unknowns)
        except LonglegsError:
            self.failed.append(x)
            away = float(np.linalg.norm(x - self.base.x)) if self.base.x.size else 0.0
            return Trial(x, np.full_like(self.base.rows, _PENALTY * (1.0 + away)))
        answers = _answers(self.points, state)
        trial = Trial(x, answers.rows, answers, state.unknowns)
        if not trial.is_answered:
            self.failed.append(x)
        return trial

    def is_at_edge(self, x: Array) -> bool:
        """Whether there was no answer close by."""
        return any(np.linalg.norm(x - lost) < _CLOSE for lost in self.failed if lost.size == x.size)

    def slopes(self, parameters: Sequence[Parameter], x: Array) -> Array:
        """Derivatives (rows, p) of the errors at the base, whose parameters in scales are ``x``."""
        return np.stack([self._slope(parameters, x, j) for j in range(len(x))], axis=1)

    def _slope(self, parameters: Sequence[Parameter], x: Array, j: int) -> Array:
        """One column, by a step to the side that has room, or the other if it has no answer."""
        parameter = parameters[j]
        is_high = x[j] + _STEP > parameter.high / parameter.scale
        for step in (-_STEP, _STEP) if is_high else (_STEP, -_STEP):
            beside = x.copy()
            beside[j] += step
            trial = self.run(parameters, beside)
            if trial.is_answered:
                return (trial.rows - self.base.rows) / step
        value = parameter.in_unit(x[j] * parameter.scale)
        raise InputRefused(
            f"{parameter.key} = {value:.6g} {parameter.unit}".rstrip() + " is at the edge of "
            "what the engine can run with, on both sides; start from other values",
            where=self.where,
        )

    def cold(self, values: Mapping[tuple[str, ...], str | float]) -> Answers:
        """What an engine file with these values gives when it is read by itself."""
        self.evaluations += 1
        engine = _engine(put(self.content, values), self.where)
        return _answers(self.points, _ask(engine, self.points, self.flight, None))


def _engine(content: Mapping[str, Any], where: str) -> CycleEngine:
    engine = engine_from_content(dict(content), where)
    assert isinstance(engine, CycleEngine), "other kinds have been refused"
    return engine


def _ask(
    engine: CycleEngine, points: FitPoints, flight: FlightCondition, start: Array | None
) -> EngineState:
    """All points in one call.

    A point that asks for a thrust does not say under which rating it was flown: it is held below
    the loosest of each limit that the ratings have, with the off-takes of cruise.
    """
    part_power = replace(
        engine.bounds["cruise"], bounds=_loosest(engine), flat_to=None, throttle_ratio=None
    )
    asked = replace(engine, bounds={**engine.bounds, _PART_POWER: part_power})
    return asked.at(
        flight,
        rating=np.where(points.is_demand, _PART_POWER, points.rating),
        net_thrust=np.where(points.is_demand, points.net_thrust, np.nan),
        start=start,
    )


def _loosest(engine: CycleEngine) -> Array:
    """The highest of each ceiling; the afterburner's own are of the rating that has one."""
    ceilings = [engine.bounds[name] for name in engine.ratings]
    bounds = np.max([rating.bounds for rating in ceilings], axis=0)
    for rating in ceilings:
        if rating.is_reheated:
            bounds[REHEAT_ROWS] = rating.bounds[REHEAT_ROWS]
    return np.asarray(bounds)


def _answers(points: FitPoints, state: EngineState) -> Answers:
    """The state at the points beside what they tell."""
    lost = is_unanswered(state.outcome)
    largest = np.nanmax(np.abs(points.net_thrust), initial=0.0)
    size = np.maximum(np.abs(points.net_thrust), SMALL_THRUST * largest)
    with np.errstate(all="ignore"):
        thrust = (state.net_thrust - points.net_thrust) / size
        fuel = (state.fuel_flow - points.fuel_flow) / points.fuel_flow
    thrust = np.where(points.is_demand & (state.outcome == Outcome.MET), 0.0, thrust)
    told = points.has_thrust | points.is_demand
    thrust = np.where(told, np.where(lost, _PENALTY, thrust), np.nan)
    fuel = np.where(points.has_fuel, np.where(lost, _PENALTY, fuel), np.nan)
    return Answers(state.net_thrust, state.fuel_flow, state.outcome, thrust, fuel)


def _refuse_unknown_ratings(engine: CycleEngine, points: FitPoints) -> None:
    known = (*engine.ratings, *IDLES)
    for i in np.flatnonzero(~points.is_demand & ~np.isin(points.rating, known)).tolist():
        raise InputRefused(
            f"rating = {points.rating[i]}, which {engine.name} has not; it has {', '.join(known)}",
            where=points.where,
            key=points.place(i),
        )


def refuse_unanswered(answers: Answers, points: FitPoints, which: str, remedy: str) -> None:
    """Refuse an engine, named by ``which``, that has no answer at some point."""
    lost = np.flatnonzero(~answers.is_answered)
    if lost.size == 0:
        return
    named = "; ".join(
        f"{points.place(i)}, {points.pressure_altitude[i]:g} m at Mach {points.mach[i]:g}: "
        f"it {_WHY[Outcome(int(answers.outcome[i]))]}"
        for i in lost[:_NAMED].tolist()
    )
    more = f"; and {lost.size - _NAMED} more" if lost.size > _NAMED else ""
    raise InputRefused(
        f"{which} has no answer at {lost.size} of {points.line.size} points ({named}{more}); "
        f"{remedy}",
        where=points.where,
    )
