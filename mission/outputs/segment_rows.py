"""A row a segment: what it burnt first, then the state at its end."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Sequence
from dataclasses import dataclass
from functools import partial

import numpy as np
from numpy.typing import NDArray
from rich.table import Table

from mission.outputs.page import Column, ruled_table, words
from mission.outputs.units import ABSENT, METRIC, Scale, Units, flight_level, number
from mission.results import Flight, SegmentLog, Steps

Array = NDArray[np.float64]
_BAR = 7  # characters at 100 columns
_EIGHTHS = " ▏▎▍▌▋▊▉"
_IDLE = ("flight_idle", "ground_idle")
_LARGE_CONSUMPTION = 100.0  # shown without decimals from here on
_ONE_TABLE = 100  # columns that the table needs to stand in one piece


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
    return number(shown, 2 if units is METRIC else 3)


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


def _burnt(flight: Flight, scales: Scales, bar_length: int) -> list[_Filled]:
    block = flight.totals.block_fuel or 1.0
    units = scales.units
    total = flight.totals
    return [
        _Filled(Column(f"fuel\n{scales.fuel.unit.name}"), lambda log: scales.fuel.bare(log.fuel),
                scales.fuel.bare(total.block_fuel)),
        _Filled(words("share of", is_wrapped=False), lambda log: bar(log.fuel / block, bar_length)),
        _Filled(Column("block\n%"), lambda log: number(100.0 * log.fuel / block, 1), "100.0"),
        _Filled(Column(f"time\n{units.time.name}"), lambda log: number(log.time / 60.0, 1),
                number(total.block_time / 60.0, 1)),
        _Filled(Column(f"dist.\n{scales.distance.unit.name}"),
                lambda log: scales.distance.bare(log.ground_distance),
                scales.distance.bare(total.ground_distance)),
    ]  # fmt: skip


def _where(scales: Scales) -> list[_Filled]:
    altitude = partial(altitude_text, scales.units)
    header = "FL" if scales.units is METRIC else f"altitude\n{scales.units.altitude.name}"
    return [
        _Filled(Column(header), lambda log: altitude(float(log.steps.pressure_altitude[-1]))),
        _Filled(Column("Mach"), lambda log: number(float(log.steps.mach[-1]), 3)),
    ]


def _state(flight: Flight, scales: Scales) -> list[_Filled]:
    units = scales.units

    def end(values: Array) -> float:
        return float(values[-1])

    return [
        _Filled(Column(f"mass\n{scales.mass.unit.name}"), lambda log: scales.mass.bare(log.mass_end)),
        _Filled(Column("thrust\n%"), thrust_share_text),
        _Filled(Column(f"sfc\n{units.specific_fuel_consumption.name}"),
                lambda log: consumption_text(units, end(consumption(log.steps)))),
        _Filled(Column("L/D"), lambda log: number(end(lift_to_drag(log.steps)), 1)),
        _Filled(Column(f"SAR\n{units.specific_air_range.name}"),
                lambda log: scales.specific_air_range.bare(end(air_range(log.steps)))),
        _Filled(Column(f"left\n{scales.fuel.unit.name}"),
                lambda log: scales.fuel.bare(log.fuel_left),
                scales.fuel.bare(flight.totals.fuel_left)),
    ]  # fmt: skip


@dataclass(frozen=True)
class _Filled:
    """A column with what fills it: a cell from a row, and the cell beside the total."""

    column: Column
    cell: Callable[[SegmentLog], str]
    total: str = ""


def segment_tables(
    flight: Flight, shown: Sequence[SegmentLog], scales: Scales, width: int, *, with_total: bool
) -> list[Table]:
    """The rows of a log as one table, or as two of fewer columns where it is narrow."""
    wide = width >= _ONE_TABLE
    burnt, where, state = (
        _burnt(flight, scales, _BAR if wide else 2 * _BAR),
        _where(scales),
        _state(flight, scales),
    )
    groups = [burnt + where + state] if wide else [burnt + where, state]
    return [_table(shown, group, with_total=with_total) for group in groups]


def _table(shown: Sequence[SegmentLog], filled: list[_Filled], *, with_total: bool) -> Table:
    table = ruled_table([words("segment"), *(item.column for item in filled)])

    def add(logs: Iterable[SegmentLog]) -> None:
        for log in logs:
            table.add_row(log.name, *(item.cell(log) for item in filled))

    mission = [log for log in shown if log.purpose == "mission"]
    reserve = [log for log in shown if log.purpose != "mission"]
    add(mission)
    if with_total:
        table.add_section()
        table.add_row("block total", *(item.total for item in filled))
    if reserve:
        table.add_section()
        add(reserve)
    return table
