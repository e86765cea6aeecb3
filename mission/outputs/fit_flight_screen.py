"""Factors fitted to a known flight on the screen: the lines for the file, then the doubt."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

from rich.console import Group, RenderableType
from rich.table import Table
from rich.text import Text

from mission.outputs.failure import failure_headline
from mission.outputs.known_words import error_percent, known_name, known_scale
from mission.outputs.page import (
    WIDEST,
    Column,
    caution,
    note,
    pairs,
    ruled_table,
    section,
    words,
)
from mission.outputs.units import METRIC, number, signed
from mission.outputs.wording import in_plain_words
from mission.questions.factor_search import GREATEST, LEAST
from mission.questions.fit_flight import FittedFactor, FittedKnown, FlightFit
from mission.questions.told_factors import FACTORS, MOST_DOUBT

_ABSORBED = (
    "The factors take up every other error too: of the engine, the polar, the masses, the weather "
    "and how the flight was flown. They hold for this aircraft with this engine near this mission, "
    "and nowhere else until a second known flight bears them out."
)


def fit_flight_screen(found: FlightFit, *, width: int = WIDEST) -> Group:
    """Factors of the aircraft file with which a known mission comes out, the answer first."""
    flight, free = found.flight, [factor for factor in found.factors if factor.is_free]
    parts: list[RenderableType] = [
        Text(flight.mission, "bold"),
        Text(f"{flight.aircraft} with {flight.engine}{_task(found, len(free))}"),
        Text(),
        *(Text(line, "bold") for line in answer(found)),
    ]
    if found.blocked is not None:
        parts.append(section("Why", pairs(_why(found))))
    elif free:
        lines = Text("\n".join(pasted(factor) for factor in free))
        where = "For the aircraft file, above its first table and in place of what it says"
        parts.append(section(where, lines))
    if found.knowns:
        parts.append(section("Factors", _factors(found.factors)))
        parts.append(section("What is known, and how it comes out", _knowns(found.knowns, width)))
    parts += [Text(), *(note(text) for text in _remarks(found))]
    return Group(*parts, caution())


def pasted(factor: FittedFactor) -> str:
    """A factor as a line of the aircraft file, to a thousandth of a percent."""
    return f"{factor.key} = {round(factor.value, 5):g}"


def answer(found: FlightFit) -> Iterable[str]:
    """The factors and how near the knowns come, or why there are none; a sentence a line."""
    if found.blocked is not None:
        tried = " and ".join(
            f"{key} = {value:.4g}"
            for key, value in zip(FACTORS, found.blocked.factors, strict=True)
        )
        yield f"Cannot be fitted: with {tried} the mission cannot be flown."
        return
    values = " and ".join(pasted(factor) for factor in found.factors if factor.is_free)
    worst = max(found.knowns, key=lambda known: abs(known.value.error))
    off = error_percent(worst.value)
    if len(found.knowns) == 1:
        yield f"With {values} the {known_name(worst.value)} comes out to {off} %."
    else:
        yield (
            f"With {values} the {len(found.knowns)} knowns come out, at worst {off} % off "
            f"({known_name(worst.value)})."
        )
    if not found.has_settled:
        yield (
            f"They had not settled after {found.flights} flights: write them into the aircraft "
            "file and fit again from there."
        )
    if found.flight.failure is not None:
        reason = failure_headline(found.flight.failure, METRIC)
        yield f"With these factors the mission cannot be flown: {reason}"


def _task(found: FlightFit, free: int) -> str:
    if not free:
        return ""
    count = len(found.knowns)
    factors, knowns = ("s" * (number != 1) for number in (free, count))
    return f": {free} factor{factors} fitted to {count} known{knowns}"


def _why(found: FlightFit) -> Iterable[tuple[str, str]]:
    assert found.blocked is not None
    failure = found.blocked.flight.failure
    if failure is not None:
        yield "what failed", failure_headline(failure, METRIC)
    if not found.knowns:
        yield (
            "what to try",
            "look at the mission, or write factors into the aircraft file with which it can be "
            "flown: the fit starts from there",
        )
        return
    yield (
        "what to try",
        "look at the knowns: they lead to where the mission cannot be flown; the tables show how "
        "far the fit came",
    )


def _factors(factors: Sequence[FittedFactor]) -> Table:
    table = ruled_table(
        [
            words("factor", is_wrapped=False),
            Column("in the\nfile"),
            Column("now"),
            Column("moves, with 1 % of error\nin every known, by %"),
        ]
    )
    for factor in factors:
        doubt = "held" if factor.doubt is None else number(factor.doubt, 2)
        table.add_row(factor.key, number(factor.start, 4), number(factor.value, 4), doubt)
    return table


def _knowns(knowns: Sequence[FittedKnown], width: int) -> Table:
    """A row a known: what is flown before and now, and how it answers to the factors."""
    table = ruled_table(
        [
            words("what"),
            words("unit", is_wrapped=False),
            Column("known"),
            Column("flown\nbefore"),
            Column("flown\nnow"),
            Column("off\n%"),
            *(Column(f"% for 1 % of\n{in_plain_words(key)}") for key in FACTORS),
        ],
        gap=2 if width >= WIDEST else 1,
    )
    for known in knowns:
        value = known.value
        scale = known_scale(value)
        table.add_row(
            known_name(value),
            scale.unit.name,
            *(scale.bare(each) for each in (value.known, known.before, value.flown)),
            error_percent(value),
            *(signed(number(slope, 2)) for slope in known.slopes),
        )
    return table


def _remarks(found: FlightFit) -> Iterable[str]:
    if found.held_because:
        held = next((factor.key for factor in found.factors if not factor.is_free), "")
        yield f"{held} is held. {found.held_because[0].upper()}{found.held_because[1:]}."
    for factor in found.factors:
        if factor.doubt is not None and factor.doubt > MOST_DOUBT:
            yield (
                f"These knowns hardly tell {factor.key} here: 1 % of error in every one of them "
                f"moves it by {number(factor.doubt, 1)} %."
            )
    if found.blocked is None:
        yield _ABSORBED
    yield f"Flights flown: {found.flights}. A factor may go from {LEAST:g} to {GREATEST:g}."
