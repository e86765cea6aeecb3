"""What a user writes about a drag polar given as tables, and the polar made from it."""

from __future__ import annotations

from pathlib import Path
from typing import Annotated, Any

from pydantic import Field, model_validator

from mission.polars.drag_table import DragTable
from mission.polars.lists import IsList, Mach, refuse_not_rising, refuse_other_count
from mission.polars.over_mach import ParabolaOverMach
from mission.polars.piecewise import Interpolation
from mission.polars.points_file import (
    FEWEST,
    HIGHEST_DRAG,
    HIGHEST_LIFT,
    LOWEST_LIFT,
    read_drag_table,
)
from mission.polars.tables import LeastDragLift, PolarTable, ZeroLiftDrag

Lift = Annotated[float, Field(ge=LOWEST_LIFT, le=HIGHEST_LIFT)]
Drag = Annotated[float, Field(gt=0.0, le=HIGHEST_DRAG)]
# Linear theory of a plain supersonic wing: sqrt(M^2 - 1) / 4, 1.2 at Mach 5.
FactorAtMach = Annotated[float, Field(gt=0.0, le=2.0)]
_FEWEST_MACHS, _FEWEST_LIFTS = FEWEST


class ParabolaOverMachTable(PolarTable):
    """A parabola at each of several Mach numbers."""

    machs: Annotated[list[Mach], IsList]
    zero_lift_drag_coefficient: Annotated[list[ZeroLiftDrag], IsList]
    induced_drag_factor: Annotated[list[FactorAtMach], IsList]
    least_drag_lift_coefficient: Annotated[list[LeastDragLift], IsList] | None = None
    interpolation: Interpolation = "monotone cubic"

    @model_validator(mode="after")
    def _one_for_each(self) -> ParabolaOverMachTable:
        refuse_not_rising("machs", self.machs, _FEWEST_MACHS)
        for name in ("zero_lift_drag_coefficient", "induced_drag_factor"):
            refuse_other_count(name, getattr(self, name), "machs", len(self.machs))
        if self.least_drag_lift_coefficient is not None:
            least = self.least_drag_lift_coefficient
            refuse_other_count("least_drag_lift_coefficient", least, "machs", len(self.machs))
        return self

    def polar(self, folder: Path) -> ParabolaOverMach:
        """The polar over Mach number."""
        least = self.least_drag_lift_coefficient or [0.0] * len(self.machs)
        return ParabolaOverMach(
            tuple(self.machs),
            tuple(self.zero_lift_drag_coefficient),
            tuple(self.induced_drag_factor),
            tuple(least),
            self.interpolation,
        )


class DragTableTable(PolarTable):
    """Drag coefficients in lists: a row for each Mach number, a column for each lift."""

    machs: Annotated[list[Mach], IsList]
    lift_coefficients: Annotated[list[Lift], IsList]
    drag_coefficients: Annotated[list[Annotated[list[Drag], IsList]], IsList]
    interpolation: Interpolation = "monotone cubic"

    @model_validator(mode="after")
    def _full_grid(self) -> DragTableTable:
        refuse_not_rising("machs", self.machs, _FEWEST_MACHS)
        refuse_not_rising("lift_coefficients", self.lift_coefficients, _FEWEST_LIFTS)
        refuse_other_count("drag_coefficients", self.drag_coefficients, "machs", len(self.machs))
        columns = len(self.lift_coefficients)
        for number, row in enumerate(self.drag_coefficients, 1):
            refuse_other_count(f"drag_coefficients {number}", row, "lift_coefficients", columns)
        return self

    def polar(self, folder: Path) -> DragTable:
        """The table."""
        return DragTable(
            tuple(self.machs),
            tuple(self.lift_coefficients),
            tuple(map(tuple, self.drag_coefficients)),
            self.interpolation,
        )


class DragPointsTable(PolarTable):
    """A drag table in a CSV beside the file."""

    points: str
    interpolation: Interpolation = "monotone cubic"

    def polar(self, folder: Path) -> DragTable:
        """The table of the file."""
        return read_drag_table(folder / self.points, self.interpolation)


def polar_kind(written: dict[str, Any]) -> type[PolarTable]:
    """The kind of table that the keys of a polar ask for."""
    if "points" in written:
        return DragPointsTable
    if "drag_coefficients" in written or "lift_coefficients" in written:
        return DragTableTable
    return ParabolaOverMachTable
