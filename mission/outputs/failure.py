"""Why a mission cannot be flown, in one plain statement."""

from __future__ import annotations

from mission.outputs.partial import failing_row
from mission.outputs.segment_rows import Scales, altitude_text
from mission.outputs.units import METRIC, Scale, Unit, Units, number
from mission.results import Failure, Flight, SegmentLog

_SAME = 1e-9  # relative: values nearer than that are one
_LARGEST_PERCENT = 1000.0  # beyond it a share of the bound says nothing


def limit_unit(name: str, unit: str, units: Units) -> Unit:
    """The unit to show a limit in that comes with an SI unit."""
    if unit == "kg":
        return units.mass
    if unit == "N":
        return units.force
    if unit == "m/s":
        return units.vertical_speed if name.startswith("rate of") else units.speed
    if unit == "m" and name.startswith(
        ("pressure altitude", "take-off field length", "fan diameter")
    ):
        return units.length
    if unit == "m":
        return units.distance
    return Unit(unit, 1.0)


def limit_scale(name: str, unit: str, values: list[float], units: Units) -> Scale:
    """The same with decimals: four digits, and enough of them to tell the values apart."""
    shown = limit_unit(name, unit, units)
    scale = Scale.of(shown, values)
    apart = max(values) - min(values) > _SAME * max(abs(value) for value in values)
    while apart and len({scale.bare(value) for value in values}) < 2 and scale.decimals < 6:
        scale = Scale(shown, scale.decimals + 1)
    return scale


def failure_headline(failure: Failure, units: Units) -> str:
    """What failed and where in one sentence, for the head of a log or the row of a table."""
    return f'{shortfall(failure, units)}; in "{failure.segment}" at step {failure.step}'


def failure_statement(flight: Flight, units: Units, scales: Scales) -> list[tuple[str, str]]:
    """Segment, step, what failed against what and by how much, and what to try."""
    failure = flight.failure
    if failure is None:
        return []
    log = flight.segments[failing_row(failure, [log.name for log in flight.segments])]
    where = f'"{failure.segment}", step {failure.step} of {len(log.steps.mass) - 1}'
    return [
        ("segment", f"{where}: {_state(log, failure.step, units, scales)}"),
        ("what failed", shortfall(failure, units)),
        ("what to try", failure.advice),
    ]


def shortfall(failure: Failure, units: Units) -> str:
    """Value against bound with units, and by how much it misses."""
    scale = limit_scale(failure.what, failure.unit, [failure.value, failure.bound], units)
    value, bound = scale.full(failure.value).strip(), scale.full(failure.bound).strip()
    misses = abs(failure.value - failure.bound)
    word = "below" if failure.value < failure.bound else "above"
    by = scale.full(misses).strip()
    percent = 100.0 * misses / abs(failure.bound) if failure.bound else _LARGEST_PERCENT
    share = f" ({number(percent, 1)} %)" if percent < _LARGEST_PERCENT else ""
    return f"{failure.what.replace('_', ' ')}: {value} is {word} {bound}, by {by}{share}"


def _state(log: SegmentLog, step: int, units: Units, scales: Scales) -> str:
    steps = log.steps
    altitude = altitude_text(units, float(steps.pressure_altitude[step]))
    level = f"FL{altitude}" if units is METRIC else f"{altitude} {units.altitude.name}"
    mach, mass = float(steps.mach[step]), float(steps.mass[step])
    time = float(steps.elapsed_time[step]) / 60.0
    return f"{level}, Mach {mach:.3f}, {scales.mass.full(mass)}, {time:,.1f} min from the start"
