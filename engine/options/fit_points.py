"""Reading the points that an engine is to meet: thrust and fuel flow, one point a line."""

from __future__ import annotations

import difflib
import math
from dataclasses import dataclass
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from engine.atmosphere import (
    HIGHEST_PRESSURE_ALTITUDE,
    LARGEST_TEMPERATURE_DEVIATION,
    LOWEST_PRESSURE_ALTITUDE,
)
from engine.envelope import COLUMNS, WINDMILLING
from engine.errors import InputRefused
from engine.interface import IDLES, OPTIONAL_RATINGS, RATINGS
from engine.options.csv_rows import (
    HIGHEST_MACH,
    HIGHEST_SHARE,
    by_column,
    read_csv,
    rows_of,
    value_of,
)
from engine.quantities import day_text, parse_day

Array = NDArray[np.float64]
DAY_COLUMN = "temperature_deviation_k"
DEMAND = ""  # the rating of a point whose thrust is asked for, not told
_ALTITUDE, _MACH, _RATING, _THRUST, _FUEL = COLUMNS
_WORDS = (*RATINGS, *OPTIONAL_RATINGS, *IDLES)
# Fuel flow over thrust [kg/(N s)] of anything that burns, from an open rotor to reheat at part
# thrust, with room around it: common practice, no source.
_LEAST_CONSUMPTION, _MOST_CONSUMPTION = 2e-6, 300e-6
_Point = tuple[float, float, float, str, float | None]  # with the thrust where it is asked for
_DAY_REMARK = "# day:"  # how the points that `longlegs envelope` writes tell their day


@dataclass(frozen=True)
class FitPoints:
    """The points of a file, N of them.

    Attributes
    ----------
    where : the file
    line : (N,) of the file; 0 for what a brochure tells
    pressure_altitude, mach, temperature_deviation : (N,) [m], [-], [K]
    rating : (N,) names of ratings and idles, or :data:`DEMAND`
    net_thrust : (N,) [N]: what a rating or idle gives, NaN where the point does not tell; where
        the rating is :data:`DEMAND` what is asked for
    fuel_flow : (N,) [kg/s], NaN where the point does not tell
    unlit_count : rows of the file that are left out, being of an unlit engine
    """

    where: str
    line: NDArray[np.int64]
    pressure_altitude: Array
    mach: Array
    temperature_deviation: Array
    rating: NDArray[np.str_]
    net_thrust: Array
    fuel_flow: Array
    unlit_count: int = 0

    @property
    def is_demand(self) -> NDArray[np.bool_]:
        """Where a thrust is asked for, and only fuel flow is a datum."""
        return np.asarray(self.rating == DEMAND)

    @property
    def has_thrust(self) -> NDArray[np.bool_]:
        """Where thrust is a datum."""
        return ~self.is_demand & np.isfinite(self.net_thrust)

    @property
    def has_fuel(self) -> NDArray[np.bool_]:
        """Where fuel flow is a datum."""
        return np.isfinite(self.fuel_flow)

    @property
    def data_count(self) -> int:
        """How many numbers the engine is to meet."""
        return int(self.has_thrust.sum() + self.has_fuel.sum())

    def place(self, i: int) -> str:
        """Where a point is written, in words."""
        return f"line {self.line[i]}" if self.line[i] else "the brochure's own point"

    def with_static(self, net_thrust: float, fuel_flow: float) -> FitPoints:
        """One more, first: the fuel flow [kg/s] of a thrust [N] at rest at sea level."""
        return FitPoints(
            self.where,
            np.append(0, self.line),
            np.append(0.0, self.pressure_altitude),
            np.append(0.0, self.mach),
            np.append(0.0, self.temperature_deviation),
            np.append(DEMAND, self.rating),
            np.append(net_thrust, self.net_thrust),
            np.append(fuel_flow, self.fuel_flow),
            self.unlit_count,
        )


def read_fit_points(path: Path) -> FitPoints:
    """The points of a CSV file; its header names the columns, in any order.

    The columns are those of ``longlegs envelope --csv`` and, if the day is not standard,
    ``temperature_deviation_k``. A rating that is a number, a share of thrust there, is a point
    whose thrust is asked for, like one whose rating is empty. Rows rated windmilling, which tables
    for flying have, are counted and left out.

    Raises :class:`InputRefused` naming file, line, column, value and what is allowed.
    """
    text = read_csv(path)
    try:
        return _points(text, str(path))
    except InputRefused as refusal:
        raise InputRefused(refusal.what, where=str(path), key=refusal.key) from None


def _points(text: str, where: str) -> FitPoints:
    lines = rows_of(text)
    line, header = next(lines, (1, []))
    _check_header(header, line)
    if DAY_COLUMN not in header:
        _refuse_unsaid_day(text)
    rows: dict[_Point, tuple[int, float | None, float | None]] = {}
    unlit_count = 0
    for line, cells in lines:
        try:
            given = by_column(header, cells)
            if _is_unlit(given):
                unlit_count += 1
                continue
            point, thrust, fuel = _row(given)
            if point in rows:
                raise ValueError(_given_twice(point, rows[point], thrust, fuel))
        except ValueError as error:
            raise InputRefused(str(error), key=f"line {line}") from None
        rows[point] = (line, thrust, fuel)
    if not rows:
        raise InputRefused("there are no points below the header; add one a line")
    altitude, mach, day, rating, _ = zip(*rows, strict=True)
    number, thrusts, fuels = zip(*rows.values(), strict=True)
    return FitPoints(
        where,
        np.array(number),
        np.array(altitude),
        np.array(mach),
        np.array(day),
        np.array(rating),
        np.array(thrusts, dtype=float),  # None becomes NaN
        np.array(fuels, dtype=float),
        unlit_count,
    )


def _check_header(header: list[str], line: int) -> None:
    allowed = (*COLUMNS, DAY_COLUMN)
    layout = f"the header is {','.join(COLUMNS)} and, where it is needed, {DAY_COLUMN}"
    for name in header:
        if name not in allowed:
            near = difflib.get_close_matches(name, allowed, n=1)
            hint = f"; did you mean {near[0]}?" if near else ";"
            raise InputRefused(f"'{name}' is no column{hint} {layout}", key=f"line {line}")
        if header.count(name) > 1:
            raise InputRefused(f"{name} stands there twice; {layout}", key=f"line {line}")
    for name in COLUMNS:
        if name not in header:
            raise InputRefused(f"there is no column {name}; {layout}", key=f"line {line}")


def _refuse_unsaid_day(text: str) -> None:
    """A table written for a day that is not standard says so in a comment alone."""
    for number, line in enumerate(text.splitlines(), start=1):
        if line.lower().startswith(_DAY_REMARK):
            try:
                deviation = parse_day(line[len(_DAY_REMARK) :])
            except ValueError:
                continue
            if deviation:
                raise InputRefused(
                    f"the points are of a day {deviation:+g} K from standard: say so in a column "
                    f"{DAY_COLUMN}, {deviation:g} in every row; without it they would be taken as "
                    "ISA",
                    key=f"line {number}",
                )


def _row(given: dict[str, str]) -> tuple[_Point, float | None, float | None]:
    """One point, its thrust and its fuel flow; ValueError where it is none."""
    altitude = value_of(given, _ALTITUDE, LOWEST_PRESSURE_ALTITUDE, HIGHEST_PRESSURE_ALTITUDE)
    mach = value_of(given, _MACH, 0.0, HIGHEST_MACH)
    most = LARGEST_TEMPERATURE_DEVIATION
    day = value_of(given, DAY_COLUMN, -most, most) if given.get(DAY_COLUMN) else 0.0
    rating = _rating(given)
    thrust = value_of(given, _THRUST, -math.inf, math.inf) if given[_THRUST] else None
    fuel = value_of(given, _FUEL, -math.inf, math.inf) if given[_FUEL] else None
    if fuel is not None and not fuel > 0.0:
        raise ValueError(f"{_FUEL} = {fuel:g}; a lit engine burns fuel: it is above 0")
    if rating == DEMAND and (thrust is None or fuel is None):
        missing = _THRUST if thrust is None else _FUEL
        raise ValueError(
            f"{missing} is empty; where no rating is named, {_THRUST} is what is asked for and "
            f"{_FUEL} what it takes: give both, or name a rating of {', '.join(_WORDS)}"
        )
    if thrust is None and fuel is None:
        raise ValueError(
            f"{_THRUST} and {_FUEL} are both empty; give one at least, or take the line out"
        )
    if thrust is not None:
        _refuse_thrust(given, rating, thrust, fuel)
    return (altitude, mach, day, rating, thrust if rating == DEMAND else None), thrust, fuel


def _refuse_thrust(given: dict[str, str], rating: str, thrust: float, fuel: float | None) -> None:
    """ValueError for a thrust that no rating gives, or that no engine gives for its fuel.

    Idle thrust, and a small share of thrust in a table, may be near zero.
    """
    if rating not in (*IDLES, DEMAND) and thrust < 0.0:
        raise ValueError(f"{_THRUST} = {thrust:g}; only an idle may give less than none")
    if rating in IDLES or fuel is None or not thrust > 0.0:
        return
    consumption, is_share = fuel / thrust, bool(given[_RATING]) and rating == DEMAND
    if consumption < _LEAST_CONSUMPTION or (consumption > _MOST_CONSUMPTION and not is_share):
        slips = {3600.0: "kg/h in place of kg/s", 1000.0: "kN in place of N"}
        fitting = [
            slip
            for factor, slip in slips.items()
            if _LEAST_CONSUMPTION <= consumption / factor <= _MOST_CONSUMPTION
        ]
        hint = f": {' or '.join(fitting)}?" if fitting else "; check both"
        raise ValueError(
            f"{_FUEL} = {fuel:g} over {_THRUST} = {thrust:g} is {consumption * 1e6:.4g} mg/(N s), "
            f"outside the {_LEAST_CONSUMPTION * 1e6:g} to {_MOST_CONSUMPTION * 1e6:g} of engines"
            f"{hint}"
        )


def _is_unlit(given: dict[str, str]) -> bool:
    """Whether a row is of an engine that burns nothing and is turned by the air."""
    return given[_RATING] == WINDMILLING and given[_FUEL] in ("0", "0.0", "")


def _given_twice(
    point: _Point,
    before: tuple[int, float | None, float | None],
    thrust: float | None,
    fuel: float | None,
) -> str:
    """What is said of a point that stands there already."""
    altitude, mach, day, rating, _ = point
    line, *values = before
    there, here = (
        " and ".join(
            f"{value:g} {unit}"
            for value, unit in zip(pair, ("N", "kg/s"), strict=True)
            if value is not None
        )
        for pair in (values, (thrust, fuel))
    )
    return (
        f"{rating or 'this thrust'} at {altitude:g} m, Mach {mach:g}, {day_text(day)} is given "
        f"already in line {line}: {there} there, {here} here; take one out"
    )


def _rating(given: dict[str, str]) -> str:
    """A rating or idle by name; a share of thrust is a thrust asked for."""
    text = given[_RATING]
    name = text.replace("-", "_")
    if name in (DEMAND, *_WORDS):
        return name
    if name[:1].isdigit() or name[:1] == ".":
        value_of(given, _RATING, 0.0, HIGHEST_SHARE)
        return DEMAND
    near = difflib.get_close_matches(name, _WORDS, n=1)
    hint = f"; did you mean {near[0]}?" if near else "."
    raise ValueError(
        f"{_RATING} = '{text}' is none of {', '.join(_WORDS)}{hint} Leave it empty where the "
        "thrust is asked for"
    )
