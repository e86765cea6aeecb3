"""The best cruise levels and speeds as a person reads them, the answer for one mass first."""

from __future__ import annotations

from collections.abc import Iterator
from math import isfinite

from rich.console import Group, RenderableType
from rich.text import Text

from mission.outputs.best_tables import (
    Shown,
    best_held_by,
    by_level,
    by_mass,
    off_level,
    ranges_below,
)
from mission.outputs.limit_words import lack_in_words
from mission.outputs.page import WIDEST, apart, caution, note, pairs, section
from mission.outputs.units import METRIC, Scale, Unit, Units
from mission.outputs.wording import TIMES, day_in_words, in_plain_words
from mission.questions.best import BestCruise
from mission.steady.best_levels import SEARCH_ENDS, ClimbLevel

_KEY = (
    "SAR specific air range; long range 99 % of the greatest, faster; W/delta weight over ambient "
    "pressure in standard sea-level pressures. Speeds are looked for from 1.2 times the stall "
    "speed to the greatest operating Mach number and airspeed."
)
_COST = " Least cost: of fuel and time over the ground."
_CLIMBS = (
    "At climb rating, speed held: 300 ft/min at the Mach number of the best level, 100 ft/min at "
    "the speed that climbs best."
)

_LEVELS = (
    "Climb is what the climb rating leaves, thrust the share of the rating that bounds it, both at "
    "the speed of maximum range. Where thrust is short, what it is over drag is told for the speed "
    "that leaves most."
)


def best_screen(found: BestCruise, *, units: Units = METRIC, width: int = 100) -> Group:
    """Best levels and speeds by mass, then by level."""
    shown = Shown.of(found, units)
    is_wide = width >= WIDEST
    middle = shown.mass.full(float(found.mass[found.middle]))
    key = _KEY if found.at_best.least_cost is None else _KEY + _COST
    parts: list[RenderableType] = [
        Text(found.subject.aircraft.name, "bold"),
        Text(", ".join(_setting(found, units))),
        Text(),
        pairs([(f"at {middle}", _answer(shown))], strong=True),
        pairs(_doubt(shown)),
        section("Best level and speed by mass", by_mass(shown, is_wide=is_wide), note(key)),
        section("What other levels cost, and how high it climbs", off_level(shown, is_wide=is_wide),
                note(_CLIMBS)),
        section(f"Speeds by level at {middle}", *apart(by_level(shown, is_wide=is_wide)),
                note(_LEVELS)),
    ]  # fmt: skip
    if found.mass.size > 1:
        tables, legend = ranges_below(shown, width)
        title = "Specific air range below the best of each mass, %"
        parts.append(section(title, *apart(tables), note(legend) if legend else None))
    return Group(*parts, caution())


def _setting(found: BestCruise, units: Units) -> Iterator[str]:
    """Engines, air, cost of time and rating."""
    aircraft, air = found.subject.aircraft, found.subject.air
    yield f"{aircraft.engine_count} {TIMES} {found.subject.engine.name}"
    days, winds = set(air.temperature_deviation), set(air.tailwind)
    yield day_in_words(days.pop()) if len(days) == 1 else "temperature by altitude"
    if len(winds) > 1:
        yield "wind by altitude"
    elif wind := winds.pop():
        said = Scale.of(units.speed, [wind], 2).full(abs(wind))
        yield f"{'tailwind' if wind > 0.0 else 'headwind'} {said}"
    else:
        yield "still air"
    if found.cost_index:
        unit = Unit(f"{units.mass.name}/min", units.mass.size / 60.0)
        yield f"cost index {Scale.of(unit, [found.cost_index], 2).full(found.cost_index)}"
    yield f"thrust up to {in_plain_words(found.rating)} rating"


def _answer(shown: Shown) -> str:
    """Best level and speed of the middle mass."""
    found, best = shown.found, shown.found.best
    i, speed = found.middle, found.best.speed
    if not bool(speed.is_flyable[i]):
        return f"no level can be flown: {lack_in_words(int(speed.limit[i]))}"
    held = best_held_by(best, i)
    return (
        f"{shown.level(float(best.pressure_altitude[i]))}, Mach {float(speed.mach[i]):.3f}: "
        f"{shown.reach.full(float(speed.specific_air_range[i]))} of specific air range, "
        f"{shown.flow.full(float(speed.fuel_flow[i]))}{f', held by {held}' if held else ''}"
    )


def _doubt(shown: Shown) -> list[tuple[str, str]]:
    """How flat the best is, and whether the aircraft climbs there."""
    found, best = shown.found, shown.found.best
    low, high = (float(end[found.middle]) for end in found.level_band)
    if not isfinite(low):
        return []
    slow, fast = (float(end[found.middle]) for end in found.mach_band)
    level = float(best.pressure_altitude[found.middle])
    rows = [
        ("doubt", f"99 % of it from {shown.level(low)} to {shown.level(high)}, each at its best "
         f"speed; at {shown.level(level)} from Mach {slow:.3f} to {fast:.3f}"),
    ]  # fmt: skip
    if found.initial_cruise is not None and found.ceiling is not None:
        first = _to(shown, found.initial_cruise)
        text = f"300 ft/min is left {first}, 100 ft/min {_to(shown, found.ceiling)}"
        reached = float(found.initial_cruise.pressure_altitude[found.middle])
        rows.append(("climb", text if reached >= level else f"{text}: short of the best level"))
    return rows


def _to(shown: Shown, level: ClimbLevel) -> str:
    """Up to where a rate of climb is left."""
    i = shown.found.middle
    altitude, limit = float(level.pressure_altitude[i]), int(level.limit[i])
    if not isfinite(altitude):
        return "nowhere"
    end = " and beyond" if limit in SEARCH_ENDS else ""
    return f"up to {shown.level(altitude)}{end}"
