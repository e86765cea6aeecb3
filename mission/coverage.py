"""What a flight asks of an engine that it does not have: a rating, or a point outside its table."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from engine.errors import InputRefused
from engine.interface import Coverage, Engine, Outcome
from engine.quantities import day_text
from mission.mission_file import Mission
from mission.plan import FlightPlan, legs_of
from mission.results import Steps

Array = NDArray[np.float64]


def refuse_other_day(mission: Mission, engine: Engine) -> None:
    """Refuse a mission on another day than the engine's table, before anything is flown."""
    table = engine.coverage
    if table is None:
        return
    days = np.array([d for leg in legs_of(mission.written) for d in leg.air.temperature_deviation])
    other = days[~table.is_day(days)]
    if other.size:
        ours, theirs = day_text(float(other[0])), day_text(table.temperature_deviation)
        raise InputRefused(
            f'= "{ours}", and the table of {engine.name} is of {theirs}; fly it on {theirs}, or '
            f"write a table of {ours} with `longlegs envelope ENGINE --day {ours} --csv FILE`",
            where=mission.where,
            key="day",
        )


def refuse_missing_ratings(mission: Mission, plan: FlightPlan, engine: Engine) -> None:
    """Refuse a mission with a segment at a rating that the engine does not have."""
    known = (*engine.ratings, *engine.idles)
    for span in (*plan.parts.mission, *plan.parts.reserve):
        if span.rating and span.rating not in known:
            raise InputRefused(
                f'asks for rating = "{span.rating}", which {engine.name} does not have; it has '
                f"{', '.join(known)}: give the segment one of these, or fly another engine",
                where=mission.where,
                key=f'segment "{plan.rows[span.segment].name}"',
            )


def outside(
    table: Coverage | None, steps: Steps, outcome: NDArray[np.int64]
) -> list[tuple[NDArray[np.bool_], str, Array, Array, str, str]]:
    """Steps at which the engine has no answer for want of table: by quantity, with value, bound,
    unit, and what to try.
    """
    if table is None:
        return []
    (low, high), (slow, fast) = table.pressure_altitude, table.mach
    advice = (
        f"stay inside the engine's table, pressure altitude {low:g} to {high:g} m and Mach "
        f"{slow:g} to {fast:g}, or give it one that reaches further"
    )
    is_lost = outcome == Outcome.OUTSIDE_TABLE
    return [
        (is_lost & table.is_beyond(value, ends), f"{name} in the engine's table", value,
         np.where(value > ends[1], ends[1], ends[0]), unit, advice)
        for name, value, ends, unit in (
            ("pressure altitude", steps.pressure_altitude, table.pressure_altitude, "m"),
            ("Mach number", steps.mach, table.mach, ""),
        )
    ]  # fmt: skip
