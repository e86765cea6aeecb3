"""Reading the points of a tabulated engine: a full grid of altitude, Mach number and level."""

from __future__ import annotations

import math
from dataclasses import dataclass
from itertools import pairwise, product
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from engine.atmosphere import HIGHEST_PRESSURE_ALTITUDE, LOWEST_PRESSURE_ALTITUDE
from engine.envelope import COLUMNS, LOWEST, REHEATED, WINDMILLING, Level
from engine.errors import InputRefused
from engine.interface import IDLES, RATINGS
from engine.options.csv_rows import (
    HIGHEST_MACH,
    HIGHEST_SHARE,
    by_column,
    read_csv,
    rows_of,
    value_of,
)

Array = NDArray[np.float64]
_RATINGS = (REHEATED, *RATINGS)
_WORDS = (*_RATINGS, *IDLES, WINDMILLING)
_ALTITUDE, _MACH, _RATING, _THRUST, _FUEL = COLUMNS
_FEWEST_SHARES = 2  # above idle: from fewer no part power can be read
_Key = tuple[Level, float, float]


@dataclass(frozen=True)
class Points:
    """The points of a file.

    Attributes
    ----------
    pressure_altitude, mach : (A,) [m] and (M,), rising
    levels : ratings by name, and shares of thrust as numbers, which rise
    net_thrust, fuel_flow : by level, (A, M) [N], [kg/s]
    """

    pressure_altitude: Array
    mach: Array
    levels: tuple[Level, ...]
    net_thrust: dict[Level, Array]
    fuel_flow: dict[Level, Array]

    @property
    def words(self) -> tuple[str, ...]:
        """Ratings and idles by name, and windmilling where it is given."""
        return tuple(level for level in self.levels if isinstance(level, str))

    @property
    def ratings(self) -> tuple[str, ...]:
        """Ratings by name."""
        return tuple(word for word in self.words if word in _RATINGS)

    @property
    def shares(self) -> tuple[Level, ...]:
        """Levels in the order of thrust: flight idle, then the numbers."""
        return (LOWEST, *(level for level in self.levels if not isinstance(level, str)))

    @property
    def dry_count(self) -> int:
        """How many of the shares are without reheat."""
        return sum(1 for level in self.shares if isinstance(level, str) or level <= 1.0)


@dataclass(frozen=True)
class _Row:
    line: int
    net_thrust: float
    fuel_flow: float


def read_points(path: Path) -> Points:
    """The points of a CSV file as ``longlegs envelope`` writes it.

    Raises :class:`InputRefused` naming file, line, the values that show what is wrong, and what
    to do.
    """
    text = read_csv(path, remedy="; points names a CSV beside the TOML")
    try:
        return _gridded(_rows(text))
    except InputRefused as refusal:
        raise InputRefused(refusal.what, where=str(path), key=refusal.key) from None


def _rows(text: str) -> dict[_Key, _Row]:
    """Rows by level, altitude and Mach number; comments and blank lines left out."""
    lines = rows_of(text)
    line, header = next(lines, (1, []))
    if tuple(header) != COLUMNS:
        found = ", ".join(header) or "nothing"
        raise InputRefused(f"the header is {','.join(COLUMNS)}, not {found}", key=f"line {line}")
    rows: dict[_Key, _Row] = {}
    for line, cells in lines:
        try:
            key, row = _row(line, cells)
        except ValueError as error:
            raise InputRefused(str(error), key=f"line {line}") from None
        if key in rows:
            raise InputRefused(
                f"{_place(key)} is given already in line {rows[key].line}: {rows[key].net_thrust:g}"
                f" N there, {row.net_thrust:g} N here; take one out",
                key=f"line {line}",
            )
        rows[key] = row
    return rows


def _row(line: int, cells: list[str]) -> tuple[_Key, _Row]:
    """One row as numbers within their ranges; ValueError where it is none."""
    given = by_column(COLUMNS, cells)
    altitude = value_of(given, _ALTITUDE, LOWEST_PRESSURE_ALTITUDE, HIGHEST_PRESSURE_ALTITUDE)
    mach = value_of(given, _MACH, 0.0, HIGHEST_MACH)
    level = _level(given)
    fuel = value_of(given, _FUEL, -math.inf, math.inf)
    if level == WINDMILLING and fuel != 0.0:
        raise ValueError(f"{_FUEL} = {fuel:g}; an engine that windmills burns none: write 0")
    if level != WINDMILLING and not fuel > 0.0:
        raise ValueError(f"{_FUEL} = {fuel:g}; a lit engine burns fuel: it is above 0")
    thrust = value_of(given, _THRUST, -math.inf, math.inf)
    return (level, altitude, mach), _Row(line, thrust, fuel)


def _level(given: dict[str, str]) -> Level:
    """A rating by name, or a share as a number; a share of zero is flight idle."""
    text = given[_RATING]
    name = text.replace("-", "_")
    if name in _WORDS:
        return name
    if not name[:1].isdigit() and name[:1] != ".":
        raise ValueError(
            f"{_RATING} = '{text}' is none of {', '.join(_WORDS)}, nor a share of thrust from 0 up"
        )
    return value_of(given, _RATING, 0.0, HIGHEST_SHARE) or LOWEST


def _gridded(rows: dict[_Key, _Row]) -> Points:
    """Rows as arrays over their grid, looked at for holes and for thrust that does not rise."""
    axes: list[set[float]] = [{key[1] for key in rows}, {key[2] for key in rows}]
    for axis, name in zip(axes, COLUMNS, strict=False):
        if len(axis) < 2:
            raise InputRefused(f"{len(axis)} value of {name}; a grid has at least 2 of each")
    altitudes, machs = (sorted(axis) for axis in axes)
    levels = _ordered({key[0] for key in rows})
    grid = list(product(altitudes, machs))
    for level, (altitude, mach) in product(levels, grid):
        if (level, altitude, mach) not in rows:
            there = len(levels) * len(grid)
            raise InputRefused(
                f"there is no row for {_place((level, altitude, mach))}: {len(rows)} rows stand "
                f"where {len(altitudes)} altitudes, {len(machs)} Mach numbers and {len(levels)} "
                f"ratings need {there}; add it, or take out what its altitude, Mach number or "
                f"rating has elsewhere"
            )
    _refuse_falling(rows, levels, grid)
    shape = len(altitudes), len(machs)

    def on_grid(name: str) -> dict[Level, Array]:
        return {
            level: np.array([getattr(rows[level, *point], name) for point in grid]).reshape(shape)
            for level in levels
        }

    return Points(
        np.array(altitudes), np.array(machs), levels, on_grid("net_thrust"), on_grid("fuel_flow")
    )


def _ordered(levels: set[Level]) -> tuple[Level, ...]:
    """Words as this file lists them, then shares as they rise; refused where levels lack."""
    words = [word for word in _WORDS if word in levels]
    shares = sorted(level for level in levels if not isinstance(level, str))
    dry = [share for share in shares if share <= 1.0]
    if LOWEST not in words:
        raise InputRefused(f"there is no row of {LOWEST}; it is the lower end of thrust everywhere")
    if len(dry) < _FEWEST_SHARES:
        raise InputRefused(
            "part power is read from rows whose rating is a share of thrust, 0.5 say: shares above "
            f"0 and up to 1 are {len(dry)} here, and at least {_FEWEST_SHARES} are needed"
        )
    return (*words, *shares)


def _refuse_falling(
    rows: dict[_Key, _Row], levels: tuple[Level, ...], grid: list[tuple[float, float]]
) -> None:
    """Thrust rises from idle through the shares, and every rating is above idle."""
    shares: list[Level] = [level for level in levels if not isinstance(level, str)]
    ratings = [level for level in levels if level in _RATINGS]
    neighbours: list[tuple[Level, Level]] = list(pairwise([LOWEST, *shares]))
    neighbours += [(LOWEST, rating) for rating in ratings]
    for (low, high), point in product(neighbours, grid):
        below, above = rows[low, *point], rows[high, *point]
        if not above.net_thrust > below.net_thrust:
            raise InputRefused(
                f"{_place((high, *point))} has {above.net_thrust:g} N, which is not above the "
                f"{below.net_thrust:g} N of {_named(low)} there (line {below.line}); thrust has to "
                "rise from level to level: correct one of them",
                key=f"line {above.line}",
            )


def _named(level: Level) -> str:
    return level if isinstance(level, str) else f"share {level:g}"


def _place(key: _Key) -> str:
    level, altitude, mach = key
    return f"{_named(level)} at {COLUMNS[0]} {altitude:g} and {COLUMNS[1]} {mach:g}"
