"""Approach and landing: level at 1.3 times the stall speed for a time, then on the ground."""

from __future__ import annotations

from typing import Annotated, Literal

from pydantic import Field

from engine.quantities import Time
from engine.reading import Table
from mission.march.span import Span, SpeedRule
from mission.segments.here import Here

STALL_MULTIPLE = 1.3  # approach over stall speed; common practice, no source


class Approach(Table):
    """``drag_factor`` stands for flaps and gear; no distance is credited."""

    kind: Literal["approach"]
    name: str = "approach and landing"
    time: Annotated[Time, Field(gt=0.0)]
    drag_factor: Annotated[float, Field(gt=0.0, le=10.0)] = 1.0

    def first_speed(self, here: Here) -> SpeedRule:
        """Speed this segment begins with, for the bridge before it."""
        return SpeedRule("stall", STALL_MULTIPLE, here.aircraft.approach_lift_coefficient)

    def lay(self, here: Here) -> tuple[list[Span], Here]:
        """The span of the approach; the mission is on the ground after it."""
        altitude = here.altitude_or(here.pressure_altitude, "an approach")
        speed = self.first_speed(here)
        span = Span(
            segment=here.row,
            march="time",
            rating="take_off",
            start_altitude=altitude,
            end_altitude=altitude,
            start_speed=here.speed or speed,
            end_speed=speed,
            extent=self.time,
            gains_distance=False,
            drag_factor=self.drag_factor,
            is_reserve=here.is_reserve,
        )
        landed = here.now(pressure_altitude=here.destination_elevation, speed=None, on_ground=True)
        return [span], landed
