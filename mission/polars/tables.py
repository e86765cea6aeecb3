"""What a user writes about a parabolic drag polar."""

from __future__ import annotations

from math import pi, radians
from pathlib import Path
from typing import Annotated

from pydantic import Field, model_validator

from engine.quantities import Angle
from engine.reading import Table
from mission.polars.interface import Polar
from mission.polars.parabola import DragRise, Parabola, korn_drag_rise

ZeroLiftDrag = Annotated[float, Field(gt=0.0, le=0.5)]
LeastDragLift = Annotated[float, Field(ge=-0.5, le=1.0)]
_RISE_MACHS = (0.3, 1.2)  # of drag divergence, the fastest for which a fourth power is believed


class PolarTable(Table):
    """A drag polar as written, of any kind."""

    def polar(self, folder: Path) -> Polar:
        """The polar; files are named from ``folder``."""
        raise NotImplementedError


class RiseTable(Table):
    """A drag rise as written, of any kind."""

    def drag_rise(self) -> DragRise:
        """The drag rise."""
        raise NotImplementedError


class DragRiseTable(RiseTable):
    """Drag divergence as a Mach number; it falls with lift as Korn's unswept wing has it."""

    drag_divergence_mach: Annotated[float, Field(gt=_RISE_MACHS[0], lt=_RISE_MACHS[1])]
    at_lift_coefficient: Annotated[float, Field(ge=0.0, le=1.5)] = 0.5
    fall_with_lift_coefficient: Annotated[float, Field(ge=0.0, le=1.0)] = 0.1

    def drag_rise(self) -> DragRise:
        """The drag rise as its three numbers."""
        return DragRise(**self.model_dump())


class KornRiseTable(RiseTable):
    """Drag divergence by Korn's relation, from what the wing is."""

    technology_factor: Annotated[float, Field(ge=0.5, le=1.2)]
    sweep: Annotated[Angle, Field(ge=0.0, le=radians(60.0))]
    thickness_ratio: Annotated[float, Field(gt=0.0, le=0.3)]

    @model_validator(mode="after")
    def _in_range(self) -> KornRiseTable:
        mach = self.drag_rise().drag_divergence_mach
        if not _RISE_MACHS[0] < mach < _RISE_MACHS[1]:
            raise ValueError(
                f"these make the drag divergence Mach number {mach:.3f} at no lift, outside "
                f"{_RISE_MACHS[0]:g} to {_RISE_MACHS[1]:g}: change sweep or thickness_ratio, or "
                "give the polar as tables over machs"
            )
        return self

    def drag_rise(self) -> DragRise:
        """The drag rise by Korn's relation."""
        return korn_drag_rise(self.technology_factor, self.sweep, self.thickness_ratio)


class _AnyParabolaTable(PolarTable):
    zero_lift_drag_coefficient: ZeroLiftDrag
    induced_drag_factor: Annotated[float, Field(gt=0.0, le=1.0)] | None = None
    oswald_efficiency: Annotated[float, Field(gt=0.2, le=1.2)] | None = None
    aspect_ratio: Annotated[float, Field(gt=0.3, le=60.0)] | None = None
    least_drag_lift_coefficient: LeastDragLift = 0.0
    drag_rise: RiseTable | None = None

    @model_validator(mode="after")
    def _one_induced_drag(self) -> _AnyParabolaTable:
        pair = (self.oswald_efficiency, self.aspect_ratio)
        by_pair = None not in pair
        if (self.induced_drag_factor is None) != by_pair or (not by_pair and pair != (None, None)):
            raise ValueError(
                "give either induced_drag_factor, or oswald_efficiency with aspect_ratio"
            )
        return self

    def polar(self, folder: Path) -> Parabola:
        """The parabola with its drag rise."""
        factor = self.induced_drag_factor
        if factor is None:
            assert self.oswald_efficiency is not None
            assert self.aspect_ratio is not None
            factor = 1.0 / (pi * self.oswald_efficiency * self.aspect_ratio)
        return Parabola(
            self.zero_lift_drag_coefficient,
            factor,
            self.least_drag_lift_coefficient,
            None if self.drag_rise is None else self.drag_rise.drag_rise(),
        )


class ParabolaTable(_AnyParabolaTable):
    """A parabola; its drag rise, if any, begins at a Mach number given."""

    drag_rise: DragRiseTable | None = None


class SweptParabolaTable(_AnyParabolaTable):
    """A parabola whose drag rise follows from the wing."""

    drag_rise: KornRiseTable
