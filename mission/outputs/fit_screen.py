"""A fit on the screen: how near the engine is now, what moved and how far that can be trusted."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from math import floor, log10
from textwrap import fill
from typing import Any

import numpy as np
from rich.console import Group, RenderableType
from rich.table import Table
from rich.text import Text

from engine.interface import Outcome
from engine.options.fit_parameters import Parameter
from engine.options.fit_trials import SMALL_THRUST, Answers
from engine.options.fitting import MOST_LEVERS, Fit, FittedParameter
from mission.outputs.page import (
    WIDEST,
    Column,
    bullets,
    caution,
    note,
    pairs,
    ruled_table,
    section,
    words,
)
from mission.outputs.units import ABSENT, METRIC, Scale, flight_level, number, signed
from mission.outputs.wording import in_plain_words

_FORCE, _FLOW = METRIC.force, METRIC.fuel_flow
_MOST_POINTS = 24  # on a screen; the worst ones where there are more
_LONG_KEY, _NARROW_RATING = 30, 12  # characters


def fit_screen(found: Fit, *, written: str, width: int = WIDEST) -> Group:
    """An engine fitted to points, the answer first; ``written`` is the engine file."""
    points = found.points
    count = len(found.parameters)
    parts: list[RenderableType] = [
        Text(found.engine, "bold"),
        Text(
            f"{count} parameter{'s' * (count != 1)} fitted to {points.data_count} data of "
            f"{points.line.size} points of {points.where}"
        ),
        Text(),
        Text(_answer(found), "bold"),
        section("Parameters", _parameters(found)),
        section("What the points tell of them", bullets(map(_told, found.parameters))),
        section(*_points(found, is_wide=width >= WIDEST)),
        Text(),
        *(note(text) for text in _remarks(found, written)),
    ]
    return Group(*parts, caution())


def written_screen(content: Mapping[str, Any], *, written: str) -> Group:
    """A brochure written out as the cycle that its four numbers make."""
    point = content["design_point"]
    rows = [(in_plain_words(key), str(value)) for key, value in point.items()]
    return Group(
        Text(str(content["name"]), "bold"),
        Text("an engine file made of four numbers, fitted to no points"),
        Text(),
        Text(f"Written to {written} as a {content['kind']}.", "bold"),
        section("Design point", pairs(rows)),
        caution(),
    )


def _answer(found: Fit) -> str:
    """The errors before and after, and the greatest that is left."""
    before, after = (100.0 * found.rms_error(a) for a in (found.before, found.after))
    both = np.stack([found.after.thrust_error, found.after.fuel_error])
    row, at = divmod(int(np.nanargmax(np.abs(both))), both.shape[1])
    what = ("net thrust", "fuel flow")[row]
    return (
        f"Root mean square error {number(before, 3)} % before, {number(after, 3)} % now; greatest "
        f"{_percent(both[row, at])} %, {what} of {found.points.place(at)}."
    )


def _percent(error: float) -> str:
    return signed(number(100.0 * error, 2))


def _parameters(found: Fit) -> Table:
    """A row a parameter, in the unit of the engine file."""
    table = ruled_table(
        [
            words("key", is_wrapped=False),
            Column("start"),
            Column("now"),
            Column("standard\nuncertainty"),
            words("unit", is_wrapped=False),
        ]
    )
    for each in found.parameters:
        parameter, told = each.parameter, each.judgement.uncertainty
        table.add_row(
            _on_two_lines(parameter.key),
            _value(parameter, parameter.start),
            _value(parameter, each.value),
            ABSENT if told is None else _uncertainty(parameter.in_unit(told)),
            parameter.unit,
        )
    return table


def _on_two_lines(key: str) -> str:
    before, dot, last = key.rpartition(".")
    return key if len(key) <= _LONG_KEY else f"{before}{dot}\n  {last}"


def _value(parameter: Parameter, value: float) -> str:
    """A value with a hundredth of its parameter's scale as the last digit."""
    decimals = max(0, 2 - floor(log10(parameter.in_unit(parameter.scale))))
    return number(parameter.in_unit(value), decimals)


def _uncertainty(value: float) -> str:
    return f"{value:.1e}" if value < 1e-4 else f"{value:.2g}" if value < 100.0 else f"{value:,.0f}"


def _told(each: FittedParameter) -> str:
    """Whether the points determine a parameter, and what it goes with."""
    parameter, judgement = each.parameter, each.judgement
    low, high = (_value(parameter, bound) for bound in (parameter.low, parameter.high))
    span = f"{low} to {high}" + (f" {parameter.unit}" if parameter.unit else "")
    if judgement.is_at_bound:
        is_low = each.value - parameter.low < parameter.high - each.value
        side, bound, beyond = ("lower", low, "less") if is_low else ("upper", high, "more")
        return (
            f"{parameter.key}: at its {side} bound, {bound}, and the points ask for {beyond}; "
            f"allowed is {span}"
        )
    verdict = f"not determined by these points, along {judgement.gap}"
    if not judgement.gap:
        verdict = "determined"
    goes = ""
    if judgement.partner:
        goes = f"; moves most with {judgement.partner}, correlation {judgement.correlation:+.2f}"
    return f"{parameter.key}: {verdict}{goes}; allowed is {span}"


def _points(found: Fit, *, is_wide: bool) -> tuple[str, Table]:
    """Title and table of the points, the worst of them where they are many."""
    points = found.points
    worst = np.nanmax(np.abs([found.after.thrust_error, found.after.fuel_error]), axis=0)
    shown = np.sort(np.argsort(-worst)[:_MOST_POINTS])
    has_days = bool(np.any(points.temperature_deviation))
    heads = [
        Column("line"),
        Column("FL"),
        Column("Mach"),
        *([Column("ISA\nK")] if has_days else []),
        words("asked", is_wrapped=False),
        Column(f"thrust\n{_FORCE.name}"),
        Column("before\n%"),
        Column("now\n%"),
        Column(f"fuel\n{_FLOW.name}"),
        Column("before\n%"),
        Column("now\n%"),
    ]
    table = ruled_table(heads, gap=2 if is_wide else 1)
    thrust = Scale.of(_FORCE, points.net_thrust[shown])
    fuel = Scale.of(_FLOW, points.fuel_flow[shown])
    for i in shown:
        rating = in_plain_words(str(points.rating[i])) or "thrust"
        table.add_row(
            str(points.line[i] or ABSENT),
            flight_level(float(points.pressure_altitude[i])),
            number(float(points.mach[i]), 2),
            *([signed(f"{points.temperature_deviation[i]:g}")] if has_days else []),
            rating if is_wide else fill(rating, _NARROW_RATING),
            thrust.bare(float(points.net_thrust[i])),
            *(_thrust_error(found, answers, i) for answers in (found.before, found.after)),
            fuel.bare(float(points.fuel_flow[i])),
            *(_error(answers, answers.fuel_error, i) for answers in (found.before, found.after)),
        )
    title = "Points, and how far the engine is from them"
    if shown.size < points.line.size:
        title = f"The {shown.size} of {points.line.size} points that are furthest off"
    return title, table


def _thrust_error(found: Fit, answers: Answers, i: int) -> str:
    """A thrust that was asked for is met, or there is an error."""
    if found.points.is_demand[i] and int(answers.outcome[i]) == Outcome.MET:
        return "met"
    return _error(answers, answers.thrust_error, i)


def _error(answers: Answers, errors: np.ndarray, i: int) -> str:
    if np.isnan(errors[i]):
        return ""
    return _percent(float(errors[i])) if answers.is_answered[i] else ABSENT


def _remarks(found: Fit, written: str) -> Iterable[str]:
    """What else there is to know, the file last."""
    if not found.has_settled:
        yield f"The fit had not settled after {found.evaluations} engines tried."
    if found.is_at_edge:
        yield (
            "The fit ended beside values with which the engine cannot run, and these may have held "
            "it up: try another start."
        )
    if found.is_free_by_rule:
        yield (
            "No --free was given. Free are the first keys of a list that these data can tell "
            "apart: one for each of the first two data, one for every three more, "
            f"{MOST_LEVERS} at most; size only where a thrust is given."
        )
    if not np.all(found.points.line):
        yield "The point without a line is the brochure's own static fuel consumption."
    if found.points.unlit_count:
        yield f"{found.points.unlit_count} rows rated windmilling are left out: nothing burns."
    if _is_small(found):
        yield (
            f"A thrust below {100.0 * SMALL_THRUST:g} % of the greatest is compared with that "
            "share of it."
        )
    if any(each.judgement.uncertainty is None for each in found.parameters):
        yield (
            "No uncertainty is given where there are as many parameters as data, at a bound, and "
            "for what the points do not determine."
        )
    failed = f", {found.failed} of them without an answer" if found.failed else ""
    yield f"Engines sized and asked: {found.evaluations}{failed}. Written to {written}."


def _is_small(found: Fit) -> bool:
    thrust = np.abs(found.points.net_thrust[np.isfinite(found.points.net_thrust)])
    return thrust.size > 0 and bool(np.min(thrust) < SMALL_THRUST * np.max(thrust))
