"""Which limit of the engine holds its thrust, segment by segment in the order flown."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from itertools import groupby

from mission.outputs.units import flight_level
from mission.outputs.wording import in_plain_words
from mission.results import SegmentLog, Steps

_STEADY_ALTITUDE = 1.0  # m: less than that apart is the same level
_MOST_RUNS = 4  # with more the limits are told without their places


def holders(logs: Sequence[SegmentLog]) -> Iterable[tuple[str, str]]:
    """Rows of a segment's name and what holds it; those whose thrust follows from drag left out.

    Where another limit takes over, its flight level or Mach number is told, unless they change
    often, as along many step climbs.
    """
    for log in logs:
        held = log.steps.held_by.tolist()
        at_rating = [step for step, name in enumerate(held) if name]
        runs = [(name, list(steps)) for name, steps in groupby(at_rating, held.__getitem__)]
        told = [in_plain_words(name) for name, _ in runs]
        if len(runs) > _MOST_RUNS:
            yield log.name, f"in turn {', '.join(dict.fromkeys(told))}"
            continue
        for place, (_, steps) in enumerate(runs[:-1]):
            told[place] += f" to {_where(log.steps, steps[-1])}"
        if told:
            yield log.name, ", then ".join(told)


def _where(steps: Steps, at: int) -> str:
    """A step by what changes along its segment: flight level, or Mach number on a level."""
    altitude = steps.pressure_altitude
    if abs(float(altitude[-1] - altitude[0])) > _STEADY_ALTITUDE:
        return f"FL{flight_level(float(altitude[at]))}"
    return f"Mach {float(steps.mach[at]):.3f}"
