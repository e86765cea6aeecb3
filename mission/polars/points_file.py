"""Reading a drag table from a CSV: a row a point of a full grid of Mach and lift coefficient."""

from __future__ import annotations

from itertools import product
from pathlib import Path

from engine.errors import InputRefused
from engine.options.csv_rows import HIGHEST_MACH, by_column, read_csv, rows_of, value_of
from mission.polars.drag_table import DragTable
from mission.polars.piecewise import Interpolation

COLUMNS = ("mach", "lift_coefficient", "drag_coefficient")
LOWEST_LIFT, HIGHEST_LIFT, HIGHEST_DRAG = -3.0, 6.0, 5.0
FEWEST = (2, 3)  # Mach numbers; lift coefficients, of which two make no polar
_Point = tuple[float, float]


def read_drag_table(path: Path, interpolation: Interpolation) -> DragTable:
    """The drag table of a CSV file.

    Raises :class:`InputRefused` naming file, line, the values that show what is wrong, and what
    to do.
    """
    text = read_csv(path, remedy="; points names a CSV beside the TOML")
    try:
        return _gridded(_rows(text), interpolation)
    except InputRefused as refusal:
        raise InputRefused(refusal.what, where=str(path), key=refusal.key) from None


def _rows(text: str) -> dict[_Point, float]:
    """Drag coefficient by Mach number and lift coefficient."""
    lines = rows_of(text)
    line, header = next(lines, (1, []))
    if tuple(header) != COLUMNS:
        found = ", ".join(header) or "nothing"
        raise InputRefused(f"the header is {','.join(COLUMNS)}, not {found}", key=f"line {line}")
    rows: dict[_Point, float] = {}
    given_in: dict[_Point, int] = {}
    for line, cells in lines:
        try:
            point, drag = _row(cells)
        except ValueError as error:
            raise InputRefused(str(error), key=f"line {line}") from None
        if point in rows:
            raise InputRefused(
                f"{_place(point)} is given already in line {given_in[point]}: {rows[point]:g} "
                f"there, {drag:g} here; take one out",
                key=f"line {line}",
            )
        rows[point], given_in[point] = drag, line
    return rows


def _row(cells: list[str]) -> tuple[_Point, float]:
    """One row as numbers within their ranges; ValueError where it is none."""
    given = by_column(COLUMNS, cells)
    mach = value_of(given, COLUMNS[0], 0.0, HIGHEST_MACH)
    lift = value_of(given, COLUMNS[1], LOWEST_LIFT, HIGHEST_LIFT)
    drag = value_of(given, COLUMNS[2], 0.0, HIGHEST_DRAG)
    if not drag > 0.0:
        raise ValueError(f"{COLUMNS[2]} = 0; drag is above 0")
    return (mach, lift), drag


def _gridded(rows: dict[_Point, float], interpolation: Interpolation) -> DragTable:
    """Rows as a table, looked at for holes."""
    machs, lifts = (sorted({point[axis] for point in rows}) for axis in (0, 1))
    for axis, name, fewest in zip((machs, lifts), COLUMNS, FEWEST, strict=False):
        if len(axis) < fewest:
            raise InputRefused(f"{len(axis)} values of {name}; a table has at least {fewest}")
    for point in product(machs, lifts):
        if point not in rows:
            raise InputRefused(
                f"there is no row for {_place(point)}: {len(rows)} rows stand where {len(machs)} "
                f"Mach numbers and {len(lifts)} lift coefficients need {len(machs) * len(lifts)}; "
                "add it, or take out what its Mach number or lift coefficient has elsewhere"
            )
    drags = tuple(tuple(rows[mach, lift] for lift in lifts) for mach in machs)
    return DragTable(tuple(machs), tuple(lifts), drags, interpolation)


def _place(point: _Point) -> str:
    return f"{COLUMNS[0]} {point[0]:g} and {COLUMNS[1]} {point[1]:g}"
