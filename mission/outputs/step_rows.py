"""The steps of every segment, both ends included."""

from __future__ import annotations

from collections.abc import Callable, Sequence

import numpy as np
from rich.console import Group
from rich.table import Table

from mission.outputs.page import Column, ruled_table, section
from mission.outputs.segment_rows import (
    Scales,
    air_range,
    altitude_header,
    altitude_text,
    consumption,
    consumption_text,
    consumption_unit,
    lift_to_drag,
    thrust_share_text,
)
from mission.outputs.units import number
from mission.results import SegmentLog

_WIDE = 100
_Cells = tuple[Column, Callable[[int], str]]


def step_sections(shown: Sequence[SegmentLog], scales: Scales, width: int) -> list[Group]:
    """A table of steps for every segment, numbered from 0 as a failure counts them."""
    return [
        section(f"Steps of {log.name}", _steps(log, scales, is_wide=width >= _WIDE))
        for log in shown
    ]


def _steps(log: SegmentLog, scales: Scales, *, is_wide: bool) -> Table:
    cells = _cells(log, scales, is_wide=is_wide)
    table = ruled_table([Column("step"), *(column for column, _ in cells)], gap=1)
    for step in range(len(log.steps.mass)):
        table.add_row(str(step), *(cell(step) for _, cell in cells))
    return table


def _cells(log: SegmentLog, scales: Scales, *, is_wide: bool) -> list[_Cells]:
    """Columns and what fills them; a narrow screen leaves out what the others give."""
    steps, units = log.steps, scales.units
    speed = steps.true_airspeed / units.speed.size
    sfc, ratio, ranges = consumption(steps), lift_to_drag(steps), air_range(steps)
    angle = np.degrees(steps.flight_path_angle)
    force, flow = scales.force, scales.fuel_flow
    chosen: list[tuple[str, Callable[[int], str], bool]] = [
        (f"elapsed\n{units.time.name}", lambda i: number(steps.elapsed_time[i] / 60.0, 2), True),
        (altitude_header(units), lambda i: altitude_text(units, steps.pressure_altitude[i]), True),
        ("Mach", lambda i: number(steps.mach[i], 3), True),
        (f"true\n{units.speed.name}", lambda i: number(speed[i], 1), is_wide),
        ("path\ndeg", lambda i: number(angle[i], 2), is_wide),
        (f"mass\n{scales.mass.unit.name}", lambda i: scales.mass.bare(steps.mass[i]), True),
        (f"thrust\n{force.unit.name}", lambda i: force.bare(steps.thrust[i]), True),
        ("share\n%", lambda i: thrust_share_text(log, i), True),
        (f"drag\n{force.unit.name}", lambda i: force.bare(steps.drag[i]), True),
        (f"fuel flow\n{flow.unit.name}", lambda i: flow.bare(steps.fuel_flow[i]), True),
        (f"sfc\n{consumption_unit(units)}", lambda i: consumption_text(units, sfc[i]),
         True),
        ("L/D", lambda i: number(ratio[i], 1), is_wide),
        (f"SAR\n{units.specific_air_range.name}",
         lambda i: scales.specific_air_range.bare(ranges[i]), is_wide),
    ]  # fmt: skip
    return [(Column(header), cell) for header, cell, is_shown in chosen if is_shown]
