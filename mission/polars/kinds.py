"""Which kind of drag polar the keys of a table ask for."""

from __future__ import annotations

from typing import Any

from mission.polars.tables import KornRiseTable, ParabolaTable, PolarTable, SweptParabolaTable


def polar_kind(written: Any) -> type[PolarTable]:
    """The kind of polar that the keys of a table ask for; without any, the plain parabola."""
    if not isinstance(written, dict):
        return ParabolaTable
    is_list = isinstance(written.get("zero_lift_drag_coefficient"), list)
    if is_list or written.keys() & {"machs", "lift_coefficients", "drag_coefficients", "points"}:
        from mission.polars import given_tables  # noqa: PLC0415  few files need them

        return given_tables.polar_kind(written)
    rise = written.get("drag_rise")
    is_korn = isinstance(rise, dict) and rise.keys() & KornRiseTable.model_fields.keys()
    return SweptParabolaTable if is_korn else ParabolaTable
