"""What an engine gives at one rating over altitude and Mach number, and what holds it there."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator
from string import ascii_lowercase

import numpy as np
from numpy.typing import NDArray
from rich.console import Group, RenderableType
from rich.table import Table
from rich.text import Text

from engine.envelope import Envelope, grid
from engine.interface import Outcome
from mission.outputs.page import INDENT, Column, caution, note, ruled_table, section
from mission.outputs.units import ABSENT, METRIC, Scale, Unit, flight_level
from mission.outputs.wording import day_in_words, in_plain_words

Array = NDArray[np.float64]
_FORCE, _FLOW = METRIC.force, METRIC.fuel_flow
_LEVEL_STEP = 50.0 * METRIC.altitude.size  # m: rows every fifty flight levels
_MACH_STEPS = (0.15, 0.2, 0.3, 0.4, 0.5, 1.0)
_MOST_ROWS, _MOST_COLUMNS = 16, 8  # of a grid that nobody asked for
_CORNER = "FL\\Mach"
_GAP = 2
_NAMED = 3  # places without an answer that are named
_WHY = {
    Outcome.NOT_CONVERGED: "the engine finds no balance",
    Outcome.UNPHYSICAL: "the engine has no physical state",
    Outcome.OUTSIDE_TABLE: "the engine's table ends before",
}


def screen_altitudes(low: float, high: float) -> Array:
    """Flight levels in round steps from ``low`` to ``high`` [m]."""
    steps = (_LEVEL_STEP * count for count in (1, 2, 4))
    return _few(low, high, steps, _MOST_ROWS)


def screen_machs(low: float, high: float) -> Array:
    """Mach numbers in round steps that fit beside each other."""
    return _few(low, high, _MACH_STEPS, _MOST_COLUMNS)


def _few(low: float, high: float, steps: Iterable[float], most: int) -> Array:
    """The finest grid with no more than so many values."""
    for step in steps:
        found = grid(low, high, step)
        if found.size <= most:
            break
    return found


def envelope_screen(found: Envelope, *, written: str = "", width: int = 100) -> Group:
    """Thrust and fuel flow at the first level of an envelope, the answer first.

    ``written`` says what went to a file besides.
    """
    rating = str(found.levels[0])
    name = in_plain_words(rating) + ("" if rating.endswith("idle") else " rating")
    parts: list[RenderableType] = [
        Text(found.engine, "bold"),
        Text(f"one engine at {name}, {day_in_words(found.temperature_deviation)}"),
        Text(),
        Text(_answer(found), "bold"),
    ]
    marks = _marks(found)
    thrust, flow = found.net_thrust[0], found.fuel_flow[0]
    legend = "; ".join(f"{mark} {in_plain_words(limit)}" for limit, mark in marks.items())
    held = note(f"The letter is of the limit that holds it: {legend}.") if legend else None
    parts += [
        section(f"Net thrust, {_FORCE.name}", *_tables(found, thrust, _FORCE, marks, width), held),
        section(f"Fuel flow, {_FLOW.name}", *_tables(found, flow, _FLOW, {}, width)),
    ]
    remarks = [text for text in (_unanswered(found), written) if text]
    if remarks:
        parts += [Text(), *(note(text) for text in remarks)]
    return Group(*parts, caution())


def _answer(found: Envelope) -> str:
    """Greatest and least thrust with where they are, and the range of consumption."""
    answered = found.is_answered[0]
    if not answered.any():
        return "The engine has no answer anywhere on this grid."
    thrust = np.where(answered, found.net_thrust[0], np.nan)
    scale = Scale.of(_FORCE, thrust.ravel())
    count = found.mach.size
    most, least = (
        f"{scale.full(float(thrust.flat[at]))} at {_place(found, *divmod(int(at), count))}"
        for at in (np.nanargmax(thrust), np.nanargmin(thrust))
    )
    return f"Net thrust from {most}, to {least}{_consumption(found)}."


def _consumption(found: Envelope) -> str:
    """The range of specific fuel consumption, where thrust is positive everywhere."""
    thrust, fuel = (
        values[0][found.is_answered[0]] for values in (found.net_thrust, found.fuel_flow)
    )
    if np.any(thrust <= 0.0):
        return ""
    unit = METRIC.specific_fuel_consumption
    scale = Scale.of(unit, fuel / thrust)
    low, high = float(np.min(fuel / thrust)), float(np.max(fuel / thrust))
    return f"; specific fuel consumption {scale.bare(low)} to {scale.full(high)}"


def _place(found: Envelope, row: int, column: int) -> str:
    level = flight_level(float(found.pressure_altitude[row]))
    return f"FL{level}, Mach {found.mach[column]:.3g}"


def _marks(found: Envelope) -> dict[str, str]:
    """A letter for each limit that holds the rating somewhere, in the order met."""
    limits = found.binding_limit[0][found.is_answered[0]]
    met = [str(name) for name in dict.fromkeys(limits.tolist()) if name != "none"]
    return dict(zip(met, ascii_lowercase, strict=False))


def _tables(
    found: Envelope, values: Array, unit: Unit, marks: dict[str, str], width: int
) -> Iterator[Table]:
    """Rows of altitude, columns of Mach number, as many beside each other as fit."""
    answered, scale = found.is_answered[0], Scale.of(unit, values.ravel())

    def cell(row: int, column: int) -> str:
        mark = marks.get(str(found.binding_limit[0, row, column]), " ")
        text = scale.bare(float(values[row, column]))
        if not answered[row, column]:
            text, mark = ABSENT, " "
        return f"{text} {mark}" if marks else text

    rows, columns = range(found.pressure_altitude.size), range(found.mach.size)
    widest = max(len(cell(row, column)) for row in rows for column in columns)
    fitting = max((width - INDENT - len(_CORNER)) // (widest + _GAP), 1)
    for first in range(0, found.mach.size, fitting):
        yield _table(found, columns[first : first + fitting], cell, has_marks=bool(marks))


def _table(
    found: Envelope, columns: range, cell: Callable[[int, int], str], *, has_marks: bool
) -> Table:
    room = "  " if has_marks else ""
    heads = [Column(f"{found.mach[column]:.3g}{room}") for column in columns]
    table = ruled_table([Column(_CORNER), *heads], gap=_GAP)
    for row, altitude in enumerate(found.pressure_altitude):
        table.add_row(flight_level(float(altitude)), *(cell(row, column) for column in columns))
    return table


def _unanswered(found: Envelope) -> str:
    """How many points have no answer, and why."""
    outcome = found.outcome[0]
    lost = ~found.is_answered[0]
    if not lost.any():
        return ""
    said = []
    for code, why in _WHY.items():
        places = np.argwhere(outcome == code)
        if len(places):
            named = [_place(found, row, column) for row, column in places[:_NAMED].tolist()]
            more = f" and {len(places) - _NAMED} more" if len(places) > _NAMED else ""
            said.append(f"{why} at {'; '.join(named)}{more}")
    count = int(np.count_nonzero(lost))
    return f"{count} of {lost.size} points have no answer ({ABSENT}): {'. '.join(said)}."
