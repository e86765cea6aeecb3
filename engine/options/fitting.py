"""Fitting: parameters of an engine file such that its cycle meets given points.

Least squares of the relative errors of net thrust and fuel flow within bounds, by the trust region
reflective method (Branch, Coleman and Li, SIAM J. Sci. Comput. 21 (1999), 1-23, as SciPy has it).
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace
from typing import Any

import numpy as np
from numpy.typing import NDArray
from scipy.optimize import least_squares

from engine.errors import InputRefused
from engine.options.fit_judgement import Judgement, gaps, judge
from engine.options.fit_parameters import Parameter, choose, free_parameters, is_inside, put
from engine.options.fit_points import FitPoints
from engine.options.fit_reach import refuse_far
from engine.options.fit_trials import Answers, Bench, Trial, refuse_unanswered
from engine.options.input_model import AnyCycleFile, BrochureFile, CycleEngineFile, check_engine
from engine.options.loading import brochure_content

Array = NDArray[np.float64]
# Where no keys are asked for: the first of these that the data tell apart.
_SIZES = (
    "scale.static_thrust",
    "scale.airflow",
    "design_point.net_thrust",
    "design_point.airflow",
)
LEVERS = (
    *_SIZES,
    "efficiencies.high_pressure_compressor",
    "efficiencies.compressor",
    "design_point.turbine_entry_temperature",
    "efficiencies.low_pressure_turbine",
    "efficiencies.power_turbine",
    "efficiencies.turbine",
    "design_point.fan_pressure_ratio",
    "design_point.low_pressure_compressor_pressure_ratio",
    "ratings.take_off.turbine_entry_temperature",
    "ratings.climb.turbine_entry_temperature",
    "ratings.cruise.turbine_entry_temperature",
)
MOST_LEVERS = 6
_TOLD_APART = 0.02  # of the greatest singular value, for a key that nobody asked for
_SETTLED = 1e-6  # relative change of the sum of squares
_SHORT = 1e-8  # relative change of the parameters
_FLAT = 1e-8  # slope of the sum of squares, by a scale
_MOST_TRIALS = 60
_SMALL_STEP, _SMALL_MISS = 0.5, 0.02  # scales, and share of a change: derivatives still hold
_ROUND_OFF = 1e-9  # of rows: no reason to take derivatives anew
_NEAR_BOUND = 0.02  # of a scale: nearer to a bound and pushed against it, a parameter is at it


@dataclass(frozen=True)
class FittedParameter:
    """A parameter, the value that was found [SI], and what the points tell of it."""

    parameter: Parameter
    value: float
    judgement: Judgement


@dataclass(frozen=True)
class Fit:
    """An engine fitted to points.

    Attributes
    ----------
    engine : its name
    content : of the engine file that gives it
    points : what it was fitted to
    parameters : in the order asked for
    before, after : the engine at the points, as it was written and as it is written now
    is_free_by_rule : whether the parameters are of :data:`LEVERS`, none having been asked for
    has_settled : whether the fit ended because nothing changed any more
    is_at_edge : whether close by there is an engine without an answer, which may have held it up
    evaluations : how often an engine was sized and asked
    failed : how many of them had no answer somewhere
    """

    engine: str
    content: dict[str, Any]
    points: FitPoints
    parameters: tuple[FittedParameter, ...]
    before: Answers
    after: Answers
    is_free_by_rule: bool
    has_settled: bool
    is_at_edge: bool
    evaluations: int
    failed: int

    def rms_error(self, answers: Answers) -> float:
        """Root mean square of the relative errors over the data."""
        return float(np.sqrt(np.sum(answers.rows**2) / self.points.data_count))


def fit(content: dict[str, Any], where: str, points: FitPoints, keys: Sequence[str] = ()) -> Fit:
    """Fit parameters of an engine file, ``where`` naming it, to points.

    Of a brochure the engine file is meant that its four numbers make, and its static fuel
    consumption is one more datum.
    ``keys`` are the parameters (:mod:`engine.options.fit_parameters`). Without them they are the
    first of :data:`LEVERS` that the points tell apart: one for each of the first two data and one
    for every three more, :data:`MOST_LEVERS` at most; size only where a thrust is a datum.

    Raises
    ------
    InputRefused
        for a kind of engine without a cycle, an unknown key, more parameters than data, parameters
        that the points do not determine, data far from what the engine as written gives
        (:mod:`engine.options.fit_reach`), or points where it, or the engine fitted, has no answer.
    CycleCannotRun
        for an engine as written without a physical design point.
    """
    written = check_engine(content, where)
    if isinstance(written, BrochureFile):
        thrust = written.static_thrust
        points = points.with_static(thrust, thrust * written.static_specific_fuel_consumption)
    content = cycle_content(content, where)
    whole = check_engine(content, where)
    assert isinstance(whole, AnyCycleFile)  # as it is the content of a cycle
    known = free_parameters(whole, content)
    chosen = choose(keys, known)
    _refuse_too_many(chosen, points)
    bench = Bench.of(content, where, points)
    first = bench.base
    assert first.answers is not None
    sized = {p.key for p in chosen} if chosen else known.keys() if points.has_thrust.any() else ()
    refuse_far(
        first.answers, points, is_size_free=any(key in sized for key in (*_SIZES, "scale.factor"))
    )
    if chosen:
        slopes = bench.slopes(chosen, _start(chosen))
        _refuse_undetermined(chosen, slopes, points)
    else:
        chosen, slopes = _levers(bench, known)
    trial, slopes, has_settled = _solve(bench, chosen, slopes)
    at_bound = _at_bound(chosen, trial, slopes)
    values = [_value(p, x, held) for p, x, held in zip(chosen, trial.x, at_bound, strict=True)]
    final = {p.place: p.written(value) for p, value in zip(chosen, values, strict=True)}
    after = bench.cold(final)
    refuse_unanswered(
        after,
        points,
        "the engine that the fit ended with",
        "nothing is written: start from other values, or free other keys",
    )
    judged = judge(chosen, at_bound, slopes, float(after.rows @ after.rows), points.data_count)
    return Fit(
        engine=str(content["name"]),
        content=put(content, final),
        points=points,
        parameters=tuple(
            FittedParameter(*each) for each in zip(chosen, values, judged, strict=True)
        ),
        before=first.answers,
        after=after,
        is_free_by_rule=not keys,
        has_settled=has_settled,
        is_at_edge=bench.is_at_edge(trial.x),
        evaluations=bench.evaluations,
        failed=len(bench.failed),
    )


def cycle_content(content: dict[str, Any], where: str) -> dict[str, Any]:
    """Content of an engine file with a cycle: a brochure's four numbers written out, others as is.

    Raises :class:`InputRefused` for a kind that has no cycle.
    """
    written = check_engine(content, where)
    if isinstance(written, BrochureFile):
        return brochure_content(written, content.get("fuel"), where)
    if not isinstance(written, CycleEngineFile):
        raise InputRefused(
            f'= "{written.kind}", which has no cycle to fit; start from a turbojet, two-spool '
            "turbojet, turbofan, mixed turbofan, turboprop or brochure",
            where=where,
            key="kind",
        )
    return content


def _refuse_too_many(parameters: Sequence[Parameter], points: FitPoints) -> None:
    if len(parameters) > points.data_count:
        raise InputRefused(
            f"{len(parameters)} parameters are free and {points.where} holds {points.data_count} "
            "data (a thrust or a fuel flow each; a thrust asked for is none): free fewer, or give "
            "more points",
            key="--free",
        )


def _refuse_undetermined(parameters: Sequence[Parameter], slopes: Array, points: FitPoints) -> None:
    """Before any fitting: what moves no datum, alone or together with others."""
    for direction, text in gaps(parameters, slopes):
        if np.count_nonzero(np.abs(direction) > 1e-3) == 1:
            why = (
                f"moves none of the {points.data_count} data where the fit starts ({text}): "
                "nothing there depends on it, or another limit governs"
            )
        else:
            why = f"move none of the {points.data_count} data when they go together: {text}"
        keys = [p.key for p, x in zip(parameters, direction, strict=True) if abs(x) > 1e-3]
        raise InputRefused(
            f"{' and '.join(keys)} {why}. Free one less, or give points that tell",
            where=points.where,
            key="--free",
        )


def _levers(bench: Bench, known: Mapping[str, Parameter]) -> tuple[list[Parameter], Array]:
    """Parameters where none are asked for, and the derivatives by them."""
    count = bench.points.data_count
    most = min(count, 2 + max(count - 2, 0) // 3, MOST_LEVERS)
    chosen: list[Parameter] = []
    slopes = np.empty((bench.base.rows.size, 0))
    skipped = () if bench.points.has_thrust.any() else _SIZES
    for parameter in (known[key] for key in LEVERS if key in known and key not in skipped):
        if len(chosen) == most:
            break
        if not is_inside(parameter):
            continue
        column = bench.slopes([parameter], _start([parameter]))
        trial = np.concatenate([slopes, column], axis=1)
        values = np.linalg.svd(trial, compute_uv=False)
        has_gap = gaps([*chosen, parameter], trial)
        if not has_gap and values[len(chosen)] > _TOLD_APART * values[0]:
            chosen, slopes = [*chosen, parameter], trial
    if not chosen:
        raise InputRefused(
            f"none of {', '.join(key for key in LEVERS if key in known)} moves these points; "
            "say what may with --free",
            where=bench.points.where,
        )
    return chosen, slopes


def _start(parameters: Sequence[Parameter]) -> Array:
    return np.array([p.start / p.scale for p in parameters])


def _solve(
    bench: Bench, parameters: Sequence[Parameter], slopes: Array
) -> tuple[Trial, Array, bool]:
    """The best trial, the derivatives there, and whether the fit has settled.

    Derivatives cost as many trials as there are parameters: they are kept as long as they foretell
    what a small step does.
    """
    bench.base = replace(bench.base, x=_start(parameters))
    tried: dict[bytes, Trial] = {bench.base.x.tobytes(): bench.base}
    kept = _Slopes(bench.base, slopes)

    def rows(x: Array) -> Array:
        key = x.tobytes()
        if key not in tried:
            tried[key] = bench.run(parameters, x)
        return tried[key].rows

    def derivatives(x: Array) -> Array:
        nonlocal kept
        bench.base = tried[x.tobytes()]
        if not kept.foretell(bench.base):
            kept = _Slopes(bench.base, bench.slopes(parameters, x))
        return kept.slopes

    found = least_squares(
        rows,
        bench.base.x,
        derivatives,
        bounds=(
            [p.low / p.scale for p in parameters],
            [p.high / p.scale for p in parameters],
        ),
        method="trf",
        ftol=_SETTLED,
        xtol=_SHORT,
        gtol=_FLAT,
        max_nfev=_MOST_TRIALS,
    )
    return tried[found.x.tobytes()], kept.slopes, bool(found.status > 0)


@dataclass(frozen=True)
class _Slopes:
    """Derivatives and where they were taken."""

    at: Trial
    slopes: Array

    def foretell(self, trial: Trial) -> bool:
        """Whether they still hold at another trial."""
        step, change = trial.x - self.at.x, trial.rows - self.at.rows
        miss = float(np.linalg.norm(self.slopes @ step - change))
        allowed = max(_SMALL_MISS * float(np.linalg.norm(change)), _ROUND_OFF)
        return float(np.max(np.abs(step))) <= _SMALL_STEP and miss <= allowed


def _at_bound(parameters: Sequence[Parameter], trial: Trial, slopes: Array) -> NDArray[np.bool_]:
    """Which parameters lie at a bound and would go on: less error is beyond it."""
    low = np.array([p.low / p.scale for p in parameters])
    high = np.array([p.high / p.scale for p in parameters])
    uphill = slopes.T @ trial.rows
    is_low = (trial.x - low < _NEAR_BOUND) & (uphill > 0.0)
    is_high = (high - trial.x < _NEAR_BOUND) & (uphill < 0.0)
    return np.asarray(is_low | is_high)


def _value(parameter: Parameter, x: float, is_at_bound: bool) -> float:
    """A value [SI] with the digits that the file has, put on its bound where it is at one."""
    value = float(x) * parameter.scale
    if is_at_bound:
        is_low = value - parameter.low < parameter.high - value
        value = parameter.low if is_low else parameter.high
    return min(max(parameter.rounded(value), parameter.low), parameter.high)
