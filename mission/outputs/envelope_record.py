"""An engine's envelope for programs: one rating as JSON, and all levels as rows of a CSV."""

from __future__ import annotations

from itertools import product
from typing import Any

import numpy as np

from engine.envelope import COLUMNS, SHARE, Envelope
from engine.interface import Outcome
from mission.outputs.records import VERSION
from mission.outputs.wording import day_in_words

Record = dict[str, Any]


def envelope_record(found: Envelope) -> Record:
    """One rating as ``longlegs-envelope``: a row an altitude, null where there is no answer."""
    answered = found.is_answered[0]

    def rows(values: Any) -> list[list[Any]]:
        return [
            [value if here else None for value, here in zip(row, there, strict=True)]
            for row, there in zip(values[0].tolist(), answered.tolist(), strict=True)
        ]

    return {
        "format": "longlegs-envelope",
        "version": VERSION,
        "engine": found.engine,
        "rating": str(found.levels[0]),
        "day": day_in_words(found.temperature_deviation),
        "pressure_altitude_m": found.pressure_altitude.tolist(),
        "mach": found.mach.tolist(),
        "net_thrust_n": rows(found.net_thrust),
        "fuel_flow_kg_per_s": rows(found.fuel_flow),
        "binding_limit": rows(found.binding_limit),
        "outcome": [[Outcome(code).name.lower() for code in row] for row in found.outcome[0]],
    }


def envelope_csv(found: Envelope) -> str:
    """A row a point, what it is in comments above; points without an answer are left out."""
    day = day_in_words(found.temperature_deviation)
    lost = int(np.count_nonzero(~found.is_answered))
    comments = [
        f"engine: {found.engine}",
        f"day: {day}",
        "units: SI, as the column names end; thrust and fuel flow are of one engine",
        *SHARE,
        f'to fly it: an engine file with kind = "tabulated", a name, day = "{day}", and points = '
        "the name of this file",
        *([f"without an answer, left out: {lost} of {found.outcome.size} points"] if lost else []),
    ]
    lines = [*(f"# {comment}" for comment in comments), ",".join(COLUMNS)]
    places = product(found.levels, found.pressure_altitude.tolist(), found.mach.tolist())
    values = zip(
        places,
        found.net_thrust.ravel().tolist(),
        found.fuel_flow.ravel().tolist(),
        found.is_answered.ravel().tolist(),
        strict=True,
    )
    lines += [
        f"{altitude:.12g},{mach:.12g},{level},{thrust:.8g},{fuel:.8g}"
        for (level, altitude, mach), thrust, fuel, is_answered in values
        if is_answered
    ]
    return "\n".join(lines) + "\n"
