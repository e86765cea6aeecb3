"""Ways along which the engine's thrust at a rating is known before any mass is.

A march by altitude on a schedule of speed is one, a march by speed at one altitude another. An end
of the latter may depend on mass: it lies between those of the lightest and the heaviest aircraft.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from engine.atmosphere import FlightCondition, flight_condition
from mission.march.rules import level_air, mach_at
from mission.march.span import Span, SpeedRule
from mission.march.throttled import on_schedule
from mission.march.world import World

Array = NDArray[np.float64]
Range = tuple[float, float]
_LEAST_RISE, _LEAST_MACH = 1.0, 1e-3  # m, Mach number: no piece of a span is shorter


@dataclass(frozen=True)
class Way:
    """A span, from one value of its march's variable to another, in the order flown.

    ``low`` and ``high`` are altitudes [m] or Mach numbers, as far apart as any mass may have them;
    ``surely`` are those between which it flies at every mass; ``least`` is the shortest piece
    worth a cut.
    """

    span: Span
    rating: str
    low: float
    high: float
    surely: Range
    least: float

    def flights(self, world: World, variable: Array) -> FlightCondition:
        """Flight condition at values of the variable."""
        deviation = world.temperature_deviation
        if self.span.march == "altitude":
            air = flight_condition(variable, 0.0, deviation)
            return on_schedule(self.span, world, air)
        air = level_air(self.span.start_altitude, deviation, variable.size)
        return FlightCondition(
            *(getattr(air, name)[:, 0] for name in air.__dataclass_fields__)
        ).with_mach(variable)


def ways_of(world: World, spans: Sequence[Span]) -> dict[int, Way]:
    """Ways by the index of their span."""
    found = {}
    for i, span in enumerate(spans):
        way = None
        if span.march == "altitude":
            ends = (span.start_altitude, span.end_altitude)
            way = Way(span, span.rating, *ends, ends, _LEAST_RISE)
        elif span.march in ("speed", "roll"):
            way = _by_speed(world, spans, i)
        if way is not None:
            found[i] = way
    return found


def _by_speed(world: World, spans: Sequence[Span], index: int) -> Way | None:
    """The way of a march by speed; none where its ends are not known apart."""
    span = spans[index]
    starts = _machs(world, span, span.start_speed, _neighbour(spans[:index], "end"))
    ends = _machs(world, span, span.end_speed, _neighbour(spans[:index:-1], "start"))
    if starts is None or ends is None:
        return None
    if ends[0] - starts[1] > _LEAST_MACH:
        return Way(span, span.rating, starts[0], ends[1], (starts[1], ends[0]), _LEAST_MACH)
    if span.march == "speed" and starts[0] - ends[1] > _LEAST_MACH:
        surely = (starts[0], ends[1])
        return Way(span, "flight_idle", starts[1], ends[0], surely, _LEAST_MACH)
    return None


def _neighbour(others: Sequence[Span], end: str) -> SpeedRule | None:
    """The speed at the near end of the nearest span that has a speed."""
    near = next((other for other in reversed(others) if other.march != "book"), None)
    if near is None:
        return None
    return near.end_speed if end == "end" else near.start_speed


def _machs(world: World, span: Span, rule: SpeedRule, neighbour: SpeedRule | None) -> Range | None:
    """Least and greatest Mach number of a rule over all masses; None where it names none."""
    known = neighbour if rule.kind == "neighbour" else rule
    if (
        known is None
        or known.kind in ("neighbour", "least_fuel")
        or (known.kind == "lift_coefficient" and known.value is None)
    ):
        return None
    aircraft = world.aircraft
    masses = np.array([[aircraft.operating_empty_mass, aircraft.maximum_ramp_mass]])
    air = level_air(span.start_altitude, world.temperature_deviation, 1)
    machs = mach_at(known, aircraft, air, masses)
    return float(machs.min()), float(machs.max())
