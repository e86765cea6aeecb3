"""A fit for programs: the parameters with what is known of them, and every point."""

from __future__ import annotations

from math import isnan
from typing import Any

from engine.interface import Outcome
from engine.options.fit_trials import Answers
from engine.options.fitting import Fit, FittedParameter
from mission.outputs.records import VERSION

Record = dict[str, Any]


def fit_record(found: Fit, *, written: str) -> Record:
    """A fit as ``longlegs-fit``; ``written`` is the engine file."""
    return {
        "format": "longlegs-fit",
        "version": VERSION,
        "engine": found.engine,
        "points_file": found.points.where,
        "written": written,
        "data_count": found.points.data_count,
        "is_free_by_rule": found.is_free_by_rule,
        "has_settled": found.has_settled,
        "is_at_edge": found.is_at_edge,
        "evaluations": found.evaluations,
        "evaluations_without_answer": found.failed,
        "rms_error_before": found.rms_error(found.before),
        "rms_error_after": found.rms_error(found.after),
        "parameters": [_parameter(each) for each in found.parameters],
        "points": _points(found),
    }


def written_record(content: dict[str, Any], *, written: str) -> Record:
    """A brochure written out, fitted to nothing, as ``longlegs-fit``."""
    return {
        "format": "longlegs-fit",
        "version": VERSION,
        "engine": content["name"],
        "kind": content["kind"],
        "written": written,
        "data_count": 0,
        "parameters": [],
        "points": [],
    }


def _parameter(each: FittedParameter) -> Record:
    """Values in the unit that the engine file writes; the uncertainty null where none is told."""
    parameter, judgement = each.parameter, each.judgement
    told = judgement.uncertainty
    return {
        "key": parameter.key,
        "unit": parameter.unit,
        "start": parameter.in_unit(parameter.start),
        "value": parameter.in_unit(each.value),
        "lower_bound": parameter.in_unit(parameter.low),
        "upper_bound": parameter.in_unit(parameter.high),
        "is_at_bound": judgement.is_at_bound,
        "standard_uncertainty": None if told is None else parameter.in_unit(told),
        "is_determined": not judgement.gap,
        "not_determined_along": judgement.gap,
        "most_correlated_with": judgement.partner,
        "correlation": judgement.correlation,
    }


def _points(found: Fit) -> list[Record]:
    points = found.points
    return [
        {
            "line": int(points.line[i]) or None,
            "pressure_altitude_m": float(points.pressure_altitude[i]),
            "mach": float(points.mach[i]),
            "temperature_deviation_k": float(points.temperature_deviation[i]),
            "rating": str(points.rating[i]),
            "net_thrust_n": _number(points.net_thrust[i]),
            "fuel_flow_kg_per_s": _number(points.fuel_flow[i]),
            "before": _answer(found.before, i),
            "after": _answer(found.after, i),
        }
        for i in range(points.line.size)
    ]


def _answer(answers: Answers, i: int) -> Record:
    """What the engine gives; null where it has no answer, an error null where nothing is told."""
    is_answered = bool(answers.is_answered[i])
    values = {
        "net_thrust_n": answers.net_thrust[i],
        "fuel_flow_kg_per_s": answers.fuel_flow[i],
        "thrust_error": answers.thrust_error[i],
        "fuel_error": answers.fuel_error[i],
    }
    numbers = {key: _number(value) if is_answered else None for key, value in values.items()}
    return {"outcome": Outcome(int(answers.outcome[i])).name.lower(), **numbers}


def _number(value: Any) -> float | None:
    return None if isnan(value) else float(value)
