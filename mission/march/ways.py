"""Ways along which the engine's thrust at a rating is known before any mass is.

A march by altitude on a schedule of speed is one, a march by speed at one altitude another. An end
of the latter may depend on mass: it lies between those of the lightest and the heaviest aircraft.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from engine.atmosphere import FlightCondition
from mission.march.rules import hold_bounds, level_air, mach_at
from mission.march.span import SPEEDING_UP, Span, SpeedRule
from mission.march.throttled import on_schedule
from mission.march.world import World

Array = NDArray[np.float64]
Range = tuple[float, float]
_LEAST_RISE, _LEAST_MACH = 1.0, 1e-3  # m, Mach number: no piece of a span is shorter


@dataclass(frozen=True)
class Way:
    """A span, from one value of its march's variable to another, in the order flown.

    ``low`` and ``high`` are altitudes, energy heights [m] or Mach numbers, as far apart as any
    mass may have them; ``surely`` are those between which it flies at every mass; ``least`` is the
    shortest piece worth a cut.
    """

    span: Span
    rating: str
    low: float
    high: float
    surely: Range
    least: float

    def altitudes(self, variable: Array) -> Array:
        """Pressure altitude [m] at values of the variable."""
        if self.span.march == "altitude":
            return variable
        if self.span.path is not None:
            return self.span.path.at(variable)[0]
        return np.full_like(variable, self.span.start_altitude)

    def flights(self, world: World, variable: Array, air: FlightCondition) -> FlightCondition:
        """Flight condition at values of the variable, in the still air of its altitudes."""
        if self.span.march == "altitude":
            return on_schedule(self.span, world, air)
        if self.span.path is not None:
            return air.with_mach(self.span.path.at(variable)[1])
        return air.with_mach(variable)


def ways_of(world: World, spans: Sequence[Span]) -> dict[int, Way]:
    """Ways by the index of their span."""
    found = {}
    for i, span in enumerate(spans):
        way = None
        if span.march == "energy":
            if span.path is None or span.path.held_by != SPEEDING_UP:
                continue  # the search for the path has cut it at the engine's kinks already
            ends = (span.start_energy, span.end_energy)
            way = Way(span, span.rating, *ends, ends, _LEAST_RISE)
        elif span.march == "altitude" and not span.is_steered:
            ends = (span.start_altitude, span.end_altitude)
            way = Way(span, span.rating, *ends, ends, _LEAST_RISE)
        elif span.march in ("speed", "roll"):
            way = _by_speed(world, spans, i)
        if way is not None:
            found[i] = way
    return found


def _by_speed(world: World, spans: Sequence[Span], index: int) -> Way | None:
    """The way of a march by speed; none where an end has no speed of its own.

    Where its ends may lie on either side of each other it surely leads nowhere yet.
    """
    span = spans[index]
    starts = _machs(world, span, span.start_speed, _neighbour(spans[:index], "end"))
    ends = _machs(world, span, span.end_speed, _neighbour(spans[:index:-1], "start"))
    if starts is None or ends is None:
        return None
    slows_down = span.march == "speed" and ends.likely < starts.likely
    if slows_down:
        low, high, surely = starts.highest, ends.lowest, (starts.lowest, ends.highest)
    else:
        low, high, surely = starts.lowest, ends.highest, (starts.highest, ends.lowest)
    direction = -1.0 if slows_down else 1.0
    if direction * (high - low) <= _LEAST_MACH:
        return None
    if direction * (surely[1] - surely[0]) <= 0.0:
        surely = (low, low)
    return Way(span, "flight_idle" if slows_down else span.rating, low, high, surely, _LEAST_MACH)


def _neighbour(others: Sequence[Span], end: str) -> SpeedRule | None:
    """The speed at the near end of the nearest span that has a speed."""
    near = next((other for other in reversed(others) if other.march != "book"), None)
    if near is None:
        return None
    return near.end_speed if end == "end" else near.start_speed


@dataclass(frozen=True)
class _Machs:
    """Mach numbers of a rule over all masses, and a likely one."""

    lowest: float
    likely: float
    highest: float


def _machs(world: World, span: Span, rule: SpeedRule, neighbour: SpeedRule | None) -> _Machs | None:
    """What a rule may come to at any mass; None where it names no speed."""
    known = neighbour if rule.kind == "neighbour" else rule
    if known is None or known.kind == "neighbour":
        return None
    if known.kind == "lift_coefficient" and known.value is None:
        return None
    aircraft = world.aircraft
    masses = np.array([[aircraft.operating_empty_mass, aircraft.maximum_ramp_mass]])
    air = level_air(span.start_altitude, span.air, 1)
    machs = mach_at(known, aircraft, air, masses)
    lowest, highest = machs.min(), machs.max()
    if known.is_sought:
        slow, fast = hold_bounds(aircraft, air, masses)
        lowest, highest = slow.min(), fast.max()
    return _Machs(float(lowest), float(machs.mean()), float(highest))
