"""A row a segment: what it burnt first, then the state at its end."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from functools import partial

import numpy as np
from numpy.typing import NDArray
from rich.table import Table

from mission.outputs.page import INDENT, Column, fold, ruled_table, words
from mission.outputs.units import ABSENT, METRIC, Scale, Units, flight_level, number
from mission.results import Flight, SegmentLog, Steps

Array = NDArray[np.float64]
_LEAST_BAR, _BAR = 4, 16  # characters for a share of 100 %
_LEAST_NAME = 20  # characters; with less for the names the rows become two tables
_EIGHTHS = " ▏▎▍▌▋▊▉"
_IDLE = ("flight_idle", "ground_idle")
_LARGE_CONSUMPTION = 100.0  # shown without decimals from here on


@dataclass(frozen=True)
class Scales:
    """Units and decimals of the columns, the same for every row of a flight."""

    units: Units
    fuel: Scale
    mass: Scale
    distance: Scale
    force: Scale
    fuel_flow: Scale
    specific_air_range: Scale


def scales_of(flight: Flight, units: Units) -> Scales:
    """Scales that give every column a fixed number of decimals."""
    total, steps = flight.totals, [log.steps for log in flight.segments]
    ramp = total.ramp_mass
    air_ranges = [float(air_range(s)[-1]) for s in steps]
    return Scales(
        units=units,
        fuel=Scale.of(units.mass, [total.block_fuel]),
        mass=Scale.of(units.gross_mass(ramp), [ramp], 5),
        distance=Scale.of(units.distance, [total.ground_distance, total.air_distance]),
        force=Scale.of(units.force, [float(np.max(s.thrust)) for s in steps]),
        fuel_flow=Scale.of(units.fuel_flow, [float(np.max(s.fuel_flow)) for s in steps]),
        specific_air_range=Scale.of(units.specific_air_range, air_ranges),
    )


def bar(share: float, length: int) -> str:
    """A horizontal bar, in eighths of a character; the faintest mark for what is not nothing."""
    eighths = round(min(max(share, 0.0), 1.0) * length * 8)
    if eighths == 0 and share > 0.0:
        eighths = 1
    return "█" * (eighths // 8) + _EIGHTHS[eighths % 8].strip()


def air_range(steps: Steps) -> Array:
    """Air distance per fuel [m/kg]; NaN on the ground and where no fuel flows."""
    flying = (steps.lift > 0.0) & (steps.fuel_flow > 0.0)
    speed = steps.true_airspeed * np.cos(steps.flight_path_angle)
    return np.where(flying, speed / np.where(flying, steps.fuel_flow, 1.0), np.nan)


def consumption(steps: Steps) -> Array:
    """Specific fuel consumption [kg/(N s)]; NaN where there is no positive thrust."""
    pushing = steps.thrust > 0.0
    return np.where(pushing, steps.fuel_flow / np.where(pushing, steps.thrust, 1.0), np.nan)


def lift_to_drag(steps: Steps) -> Array:
    """Lift over drag; NaN on the ground."""
    flying = (steps.lift > 0.0) & (steps.drag > 0.0)
    return np.where(flying, steps.lift / np.where(flying, steps.drag, 1.0), np.nan)


def altitude_text(units: Units, pressure_altitude: float) -> str:
    """Pressure altitude [m] as a flight level or in the unit of altitude."""
    if units is METRIC:
        return flight_level(pressure_altitude)
    return number(round(pressure_altitude / units.altitude.size, 0), 0)


def consumption_text(units: Units, value: float) -> str:
    """Specific fuel consumption [kg/(N s)] as a number."""
    shown = value / units.specific_fuel_consumption.size
    if abs(shown) >= _LARGE_CONSUMPTION:
        return number(shown, 0)
    return number(shown, 2 if units is METRIC or shown >= 10.0 else 3)


def altitude_header(units: Units) -> str:
    """Header of a column of pressure altitudes."""
    return units.altitude.name if units is METRIC else f"alt.\n{units.altitude.name}"


def consumption_unit(units: Units) -> str:
    """Name of the unit of specific fuel consumption on two lines, for a narrow column."""
    return units.specific_fuel_consumption.name.replace("/", "/\n", 1)


def thrust_share_text(log: SegmentLog, step: int = -1) -> str:
    """Thrust as a share of the segment's rating [%], ``idle`` where the engine is held there.

    A level change of speed downwards is flown at idle whatever its rating says.
    """
    steps = log.steps
    if log.rating in _IDLE or (
        log.kind == "acceleration" and steps.true_airspeed[-1] < steps.true_airspeed[0]
    ):
        return "idle"
    rating, thrust = float(steps.rating_thrust[step]), float(steps.thrust[step])
    return number(100.0 * thrust / rating, 0) if rating > 0.0 else ABSENT


@dataclass(frozen=True)
class _Filled:
    """A column with what fills it: a cell from a row, and the cell beside the total."""

    header: str
    cell: Callable[[SegmentLog], str]
    total: str = ""


def _burnt(flight: Flight, scales: Scales, bar_length: int, whole: float) -> list[_Filled]:
    """What a segment burns, its share of ``whole`` [kg], and how long and far it goes."""
    total, fuel, distance = flight.totals, scales.fuel, scales.distance
    of = "block" if whole == total.block_fuel else "burnt"

    def share(log: SegmentLog) -> str:
        part = log.fuel / whole if whole > 0.0 else 0.0
        return f"{bar(part, bar_length):<{bar_length}}{number(100.0 * part, 1):>5}"

    return [
        _Filled(f"fuel\n{fuel.unit.name}", lambda log: fuel.bare(log.fuel),
                fuel.bare(total.block_fuel)),
        _Filled(f"share of\n{of} %", share, "100.0"),
        _Filled(f"time\n{scales.units.time.name}", lambda log: number(log.time / 60.0, 1),
                number(total.block_time / 60.0, 1)),
        _Filled(f"dist.\n{distance.unit.name}", lambda log: distance.bare(log.ground_distance),
                distance.bare(total.ground_distance)),
    ]  # fmt: skip


def _mach_text(log: SegmentLog) -> str:
    """Mach number at the end; none of what is booked, not flown: no time, no speed."""
    mach = float(log.steps.mach[-1])
    return number(mach, 3) if log.time > 0.0 or mach > 0.0 else ABSENT


def _where(scales: Scales) -> list[_Filled]:
    altitude = partial(altitude_text, scales.units)
    return [
        _Filled(
            altitude_header(scales.units),
            lambda log: altitude(float(log.steps.pressure_altitude[-1])),
        ),
        _Filled("Mach", _mach_text),
    ]


def _state(flight: Flight, scales: Scales) -> list[_Filled]:
    units, mass, ranges = scales.units, scales.mass, scales.specific_air_range

    def end(values: Array) -> float:
        return float(values[-1])

    return [
        _Filled(f"mass\n{mass.unit.name}", lambda log: mass.bare(log.mass_end)),
        _Filled("thrust\n%", thrust_share_text),
        _Filled(f"sfc\n{consumption_unit(units)}",
                lambda log: consumption_text(units, end(consumption(log.steps)))),
        _Filled("L/D", lambda log: number(end(lift_to_drag(log.steps)), 1)),
        _Filled(f"SAR\n{ranges.unit.name}", lambda log: ranges.bare(end(air_range(log.steps)))),
        _Filled(f"left\n{scales.fuel.unit.name}", lambda log: scales.fuel.bare(log.fuel_left),
                scales.fuel.bare(flight.totals.fuel_left)),
    ]  # fmt: skip


def segment_tables(
    flight: Flight, shown: Sequence[SegmentLog], scales: Scales, width: int, *, with_total: bool
) -> list[Table]:
    """The rows of a log as one table, or as two where that would squeeze the names."""
    shape = _Shape(shown, width, with_total)
    where, state = _where(scales), _state(flight, scales)
    whole = flight.totals.block_fuel if with_total else sum(log.fuel for log in shown)

    def with_bar(wanted: int, others: list[_Filled]) -> tuple[int, list[_Filled]]:
        """Columns whose bar takes what the names leave, and the room that the names then have."""
        room = shape.room_for_names([*_burnt(flight, scales, _LEAST_BAR, whole), *others])
        longer = min(max(room - wanted, 0), _BAR - _LEAST_BAR)
        return room - longer, [*_burnt(flight, scales, _LEAST_BAR + longer, whole), *others]

    room, columns = with_bar(shape.longest_name, [*where, *state])
    if room < shape.longest_name:  # names wrap anyway: the bar may as well take a little
        room, columns = with_bar(_LEAST_NAME, [*where, *state])
    if room >= _LEAST_NAME:
        return [shape.table(columns)]
    return [shape.table(with_bar(shape.longest_name, where)[1]), shape.table(state)]


@dataclass(frozen=True)
class _Shape:
    """Rows to show, the width there is, and whether a line of totals stands under them."""

    shown: Sequence[SegmentLog]
    width: int
    with_total: bool

    def room_for_names(self, filled: Sequence[_Filled]) -> int:
        """Characters left for the names beside some columns."""
        taken = [
            max(len(text) for text in [*item.header.split("\n"), item.total, *self.cells(item)])
            for item in filled
        ]
        return self.width - INDENT - sum(taken) - len(taken)

    @property
    def longest_name(self) -> int:
        """Characters of the longest name."""
        return max(len(log.name) for log in self.shown)

    def cells(self, item: _Filled) -> list[str]:
        """Text of a column for every row."""
        return [item.cell(log) for log in self.shown]

    def table(self, filled: Sequence[_Filled]) -> Table:
        """The mission's rows, their total, and the reserve flight below it."""
        table = ruled_table([words("segment"), *(Column(item.header) for item in filled)], gap=1)
        room = self.room_for_names(filled)
        names = [fold(log.name, room) for log in self.shown]
        rows = list(zip(names, *(self.cells(item) for item in filled), strict=True))
        count = sum(log.purpose == "mission" for log in self.shown)
        for row in rows[:count]:
            table.add_row(*row)
        if self.with_total:
            table.add_section()
            table.add_row("block total", *(item.total for item in filled))
        if rows[count:]:
            table.add_section()
            table.add_row("reserve flight:")
        for row in rows[count:]:
            table.add_row(*row)
        return table
