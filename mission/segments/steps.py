"""Step climbs inside a cruise: up to the next level as soon as it is better and can be reached."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from mission.march.span import Span, SpeedRule
from mission.segments.acceleration import speed_span
from mission.segments.here import Here
from mission.segments.levels import LEAST_CLIMB, merits
from mission.segments.schedule import lay_schedule, zones

if TYPE_CHECKING:
    from mission.segments.cruise import Cruise

Array = NDArray[np.float64]
_MASSES = 17  # looked at from the take-off mass down to the empty one
_SAME_LEVEL = 0.01  # m
_HIGHEST = 20000.0  # m, beyond which no cruise goes
_MOST_STEPS = 20
# Of mass for each metre of a step: what is burnt after it at least, the climb itself included.
_AHEAD = 1e-5
_MASS_THAT_MATTERS = 2e-3  # relative, of the mass at the end


def with_steps(cruise: Cruise, here: Here, span: Span) -> tuple[list[Span], Here]:
    """The cruise in pieces, each until the mass at which the next level is better."""
    levels = _levels(cruise, here, span.start_altitude)
    place = f"steps from {span.start_altitude:.0f} m"
    chosen = here.choices.at(
        here.row, place, 1.0, lambda _: _step_masses(cruise, here, span, levels), matters=np.inf
    )
    count = here.choices.at(
        here.row,
        f"number of {place}",
        here.mass_at(here.row, -1),
        lambda mass: _count(here, place, chosen, levels, mass),
        end=-1,
        matters=_MASS_THAT_MATTERS,
        is_exact=True,
    )
    spans: list[Span] = []
    here = replace(here, pressure_altitude=span.start_altitude, speed=span.end_speed)
    for (mass, mach), level in zip(chosen[:count], levels[1:], strict=False):
        at = span if here.pressure_altitude is None else _at(span, here.pressure_altitude)
        spans.append(replace(at, march="burn", extent=None, end_mass=mass, ends_by_fuel=False))
        climb, here = _climb(here, span, level, mach)
        spans += climb
    assert here.pressure_altitude is not None
    spans.append(_at(span, here.pressure_altitude))
    return spans, replace(here, speed=span.end_speed, on_ground=False)


def _count(
    here: Here,
    place: str,
    chosen: list[tuple[float, float]],
    levels: list[float],
    mass: float,
) -> int:
    """How many steps are worth it with a mass [kg] at the end of the cruise.

    None before an earlier plan has said what the cruise burns; never more than the plan before had,
    or one that saves its own fuel would come and go.
    """
    if here.row not in here.masses:
        return 0
    rises = np.diff(levels)
    ends = [m * (1.0 - _AHEAD * rise) for (m, _), rise in zip(chosen, rises, strict=False)]
    return here.choices.no_more(here.row, place, int(sum(end > mass for end in ends)))


def _at(span: Span, altitude: float) -> Span:
    """The cruise at another level."""
    return replace(span, start_altitude=altitude, end_altitude=altitude)


def _levels(cruise: Cruise, here: Here, start: float) -> list[float]:
    """The level it begins at, and those it may step to."""
    ceiling = here.aircraft.maximum_pressure_altitude
    if here.world.engine.coverage is not None:
        ceiling = min(ceiling, here.world.engine.coverage.pressure_altitude[1])
    if cruise.step_height is None:
        above = cruise.step_levels
    else:
        above = [start + (n + 1) * cruise.step_height for n in range(_MOST_STEPS)]
    most = min(ceiling, _HIGHEST) + _SAME_LEVEL
    return [start, *(level for level in above if start < level <= most)]


def _step_masses(
    cruise: Cruise, here: Here, span: Span, levels: list[float]
) -> list[tuple[float, float]]:
    """Mass [kg] below which each level after the first is better, and the Mach number there."""
    aircraft = here.aircraft
    masses = np.linspace(aircraft.maximum_ramp_mass, here.load.empty_mass(aircraft), _MASSES)
    found = merits(here, span.end_speed, cruise.rating, np.array(levels), masses)
    steps: list[tuple[float, float]] = []
    most = np.inf
    for below in range(len(levels) - 1):
        now, then = found.merit[below], found.merit[below + 1]
        with np.errstate(invalid="ignore"):
            gain = np.where(np.isfinite(now), (then - now) / np.abs(now), np.sign(then))
        excess = np.minimum(gain, found.climb[below + 1] / LEAST_CLIMB - 1.0)
        mass = _first_positive(masses, excess)
        if mass is None:
            break
        most = min(most, mass)
        mach = float(np.interp(-most, -masses, found.mach[below]))
        steps.append((most, mach))
    return steps


def _first_positive(masses: Array, excess: Array) -> float | None:
    """The mass, coming from the heaviest, at which an excess is positive for the first time."""
    is_better = excess >= 0.0
    if not is_better.any():
        return None
    after = int(np.argmax(is_better))
    if after == 0 or not np.isfinite(excess[after - 1]):
        return float(masses[after])
    share = excess[after - 1] / (excess[after - 1] - excess[after])
    return float(masses[after - 1] + share * (masses[after] - masses[after - 1]))


def _climb(here: Here, cruise: Span, level: float, mach: float) -> tuple[list[Span], Here]:
    """Up to the next level at climb rating; a sought speed is left for it and found again."""
    assert here.pressure_altitude is not None
    rule = cruise.end_speed
    if rule.kind == "mach":
        spans, there = lay_schedule(
            here, here.pressure_altitude, level, zones(None, rule.value, limited=False), "climb"
        )
        return spans, there
    held = SpeedRule("mach", mach)
    spans, there = lay_schedule(
        here, here.pressure_altitude, level, zones(None, mach, limited=False), "climb"
    )
    before = speed_span(here, here.pressure_altitude, rule, held, "climb")
    after = speed_span(there, level, held, rule, "maximum_continuous")
    return [before, *spans, after], replace(there, speed=rule)
