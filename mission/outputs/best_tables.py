"""Tables of the best cruise: by mass, beside the best level, by level, by both."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass
from string import ascii_lowercase

import numpy as np
from numpy.typing import NDArray
from rich.table import Table

from mission.outputs.limit_words import held_in_words, lack_in_words, verdict
from mission.outputs.page import INDENT, Column, ruled_table, words
from mission.outputs.segment_rows import altitude_header, altitude_text
from mission.outputs.units import ABSENT, METRIC, Scale, Units, number
from mission.questions.best import LEVELS_OFF, BestCruise
from mission.steady.best_levels import SEARCH_ENDS, BestLevel, ClimbLevel
from mission.steady.level_flight import LevelSpeed

Array = NDArray[np.float64]
Cells = tuple[str, Callable[[int], str]]
_CELL, _GAP = 8, 2  # characters of a column of the table by level and mass


@dataclass(frozen=True)
class Shown:
    """An answer with the units and decimals that all of its tables share."""

    found: BestCruise
    units: Units
    mass: Scale
    reach: Scale
    flow: Scale

    @classmethod
    def of(cls, found: BestCruise, units: Units) -> Shown:
        """Decimals that suit the greatest values."""
        masses = found.mass.tolist()
        best = found.best.speed
        ranges = [
            *best.specific_air_range,
            *found.at_levels.maximum_range.specific_air_range.ravel(),
        ]
        return cls(
            found,
            units,
            Scale.of(units.gross_mass(max(masses)), masses, 4),
            Scale.of(units.specific_air_range, ranges),
            Scale.of(units.fuel_flow, best.fuel_flow.tolist()),
        )

    def altitude(self, pressure_altitude: float) -> str:
        """A level in a cell, absent where there is none."""
        is_known = np.isfinite(pressure_altitude)
        return altitude_text(self.units, pressure_altitude) if is_known else ABSENT

    def level(self, pressure_altitude: float) -> str:
        """A level in a sentence."""
        text = altitude_text(self.units, pressure_altitude)
        return f"FL{text}" if self.units is METRIC else f"{text} {self.units.altitude.name}"


def _table(first: list[Cells], rows: int, held: Callable[[int], str] | None, gap: int) -> Table:
    """Columns of numbers, then one of words that says what holds the row."""
    heads = [Column(header) for header, _ in first]
    table = ruled_table([*heads, *([words("held by")] if held else [])], gap=gap)
    for row in range(rows):
        cells = [cell(row) for _, cell in first]
        table.add_row(*cells, *([held(row)] if held else []))
    return table


def _mach(speed: LevelSpeed) -> Callable[[int], str]:
    return lambda i: number(float(speed.mach[i]), 3)


def by_mass(shown: Shown, *, is_wide: bool) -> Table:
    """Best level of each mass and the speeds at it."""
    found, units = shown.found, shown.units
    best, force = found.best, units.force
    speed = best.speed
    ratio = Scale.of(force, best.weight_over_pressure_ratio.tolist())
    columns: list[Cells] = [
        (f"mass\n{shown.mass.unit.name}", lambda i: shown.mass.bare(float(found.mass[i]))),
        (altitude_header(units), lambda i: shown.altitude(float(best.pressure_altitude[i]))),
        ("\nMach", _mach(speed)),
        ("long range\nMach", _mach(found.at_best.long_range)),
        *_least_cost(found.at_best.least_cost),
        (f"SAR\n{shown.reach.unit.name}",
         lambda i: shown.reach.bare(float(speed.specific_air_range[i]))),
        (f"fuel flow\n{shown.flow.unit.name}",
         lambda i: shown.flow.bare(float(speed.fuel_flow[i]))),
        *([("\nL/D", lambda i: number(float(speed.lift_to_drag[i]), 1))] if is_wide else []),
        (f"W/delta\n{force.name}", lambda i: ratio.bare(float(best.weight_over_pressure_ratio[i]))),
    ]  # fmt: skip
    return _table(columns, found.mass.size, lambda i: best_held_by(best, i), _GAP if is_wide else 1)


def best_held_by(best: BestLevel, index: int) -> str:
    """What holds the speed of a best level, then the level, or why there is none."""
    speed = best.speed
    if not bool(speed.is_flyable[index]):
        return f"no level: {lack_in_words(int(speed.limit[index]))}"
    limits = (int(speed.limit[index]), int(best.limit[index]))
    return ", ".join(text for text in map(held_in_words, limits) if text)


def _least_cost(speed: LevelSpeed | None) -> list[Cells]:
    return [] if speed is None else [("least cost\nMach", _mach(speed))]


def off_level(shown: Shown, *, is_wide: bool) -> Table:
    """What other levels cost, and how high each mass climbs."""
    found = shown.found
    feet = [f"{off / 0.3048:+,.0f} ft\n%" for off in LEVELS_OFF]
    columns: list[Cells] = [
        (f"mass\n{shown.mass.unit.name}", lambda i: shown.mass.bare(float(found.mass[i]))),
        (f"best\n{shown.units.altitude.name}",
         lambda i: shown.altitude(float(found.best.pressure_altitude[i]))),
        *((head, _costs(found, row)) for row, head in enumerate(feet)),
        (f"300 ft/min\nto {shown.units.altitude.name}", _climbs(shown, found.initial_cruise)),
        (f"100 ft/min\nto {shown.units.altitude.name}", _climbs(shown, found.ceiling)),
    ]  # fmt: skip
    return _table(columns, found.mass.size, None, _GAP if is_wide else 1)


def _costs(found: BestCruise, row: int) -> Callable[[int], str]:
    """How much less far a fuel goes at a level, in per cent."""
    shares = found.off_levels[row]
    return lambda i: number(100.0 * (1.0 - float(shares[i])), 1) if shares[i] > 0.0 else ABSENT


def _climbs(shown: Shown, level: ClimbLevel | None) -> Callable[[int], str]:
    """How high a rate of climb is left; over it where the search ends first."""

    def cell(i: int) -> str:
        if level is None:
            return ABSENT
        text = shown.altitude(float(level.pressure_altitude[i]))
        is_end = int(level.limit[i]) in SEARCH_ENDS
        return f"> {text}" if is_end else text

    return cell


def by_level(shown: Shown, *, is_wide: bool) -> list[Table]:
    """Speeds at each level, of one mass, in one table or two."""
    found = shown.found
    range_first, others = _at_range(shown), _other_speeds(shown)
    speeds = found.at_levels.maximum_range.at((slice(None), found.middle))
    rows = found.pressure_altitude.size

    def held(i: int) -> str:
        return verdict(speeds, i)

    if is_wide:
        return [_table([*range_first, *others], rows, held, 1)]
    return [
        _table(range_first, rows, held, _GAP),
        _table([range_first[0], *others], rows, None, _GAP),
    ]


def _at_range(shown: Shown) -> list[Cells]:
    """The level, then the speed of maximum range and what it comes to."""
    found, at, here = shown.found, shown.found.at_levels, (slice(None), shown.found.middle)
    best, climb = at.maximum_range.at(here), shown.units.vertical_speed
    whole = float(found.best.speed.specific_air_range[found.middle])
    left = at.rate_of_climb[here]
    rate = Scale.of(climb, left.tolist(), 3)

    def below(i: int) -> str:
        return number(100.0 * (1.0 - float(best.specific_air_range[i]) / whole), 1)

    def share(i: int) -> str:
        is_flyable = bool(best.is_flyable[i])
        return number(100.0 / (1.0 + float(best.thrust_margin[i])), 0) if is_flyable else ABSENT

    return [
        (altitude_header(shown.units), lambda i: shown.altitude(float(found.pressure_altitude[i]))),
        ("range\nMach", _mach(best)),
        (f"SAR\n{shown.reach.unit.name}",
         lambda i: shown.reach.bare(float(best.specific_air_range[i]))),
        ("below\nbest %", below),
        ("thrust\n%", share),
        (f"climb\n{climb.name}", lambda i: rate.bare(float(left[i]))),
    ]  # fmt: skip


def _other_speeds(shown: Shown) -> list[Cells]:
    """Mach numbers that are best for something else."""
    at, here = shown.found.at_levels, (slice(None), shown.found.middle)
    least_cost = None if at.least_cost is None else at.least_cost.at(here)
    return [
        ("long range\nMach", _mach(at.long_range.at(here))),
        *_least_cost(least_cost),
        ("endurance\nMach", _mach(at.endurance.at(here))),
        ("greatest\nMach", _mach(at.greatest.at(here))),
    ]


def ranges_below(shown: Shown, width: int) -> tuple[list[Table], str]:
    """Specific air range by level and mass below the best of each mass; why some have none."""
    found, ranges = shown.found, shown.found.at_levels.maximum_range
    best = found.best.speed.specific_air_range
    marks = _marks(ranges)

    def cell(row: int, column: int) -> str:
        if not ranges.is_flyable[row, column]:
            return f"{ABSENT} {marks[int(ranges.limit[row, column])]}"
        share = float(ranges.specific_air_range[row, column] / best[column])
        return f"{number(100.0 * (1.0 - share), 1)}  "

    legend = "; ".join(f"{mark} {lack_in_words(lack)}" for lack, mark in marks.items())
    said = f"No level flight ({ABSENT}) for want of: {legend}." if legend else ""
    return [_grid(shown, columns, cell) for columns in _beside(found.mass.size, width)], said


def _marks(ranges: LevelSpeed) -> dict[int, str]:
    """A letter for each reason that there is no level flight somewhere."""
    lacks = ranges.limit[~ranges.is_flyable].tolist()
    return dict(zip(dict.fromkeys(lacks), ascii_lowercase, strict=False))


def _beside(count: int, width: int) -> Iterator[range]:
    """As many masses beside each other as fit."""
    fitting = max((width - INDENT - _CELL) // (_CELL + _GAP), 1)
    for first in range(0, count, fitting):
        yield range(first, min(first + fitting, count))


def _grid(shown: Shown, columns: range, cell: Callable[[int, int], str]) -> Table:
    found, unit = shown.found, shown.mass.unit.name
    heads = [Column(f"{shown.mass.bare(float(found.mass[c]))}  ") for c in columns]
    table = ruled_table([Column(f"{shown.units.altitude.name}\\{unit}"), *heads], gap=_GAP)
    for row, altitude in enumerate(found.pressure_altitude):
        table.add_row(shown.altitude(float(altitude)), *(cell(row, c) for c in columns))
    return table
