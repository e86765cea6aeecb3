"""Taxi and take-off: engines running on the ground."""

from __future__ import annotations

from typing import Annotated, Literal

from pydantic import Field

from engine.errors import InputRefused
from engine.quantities import Time
from engine.reading import Table
from mission.march.span import STANDSTILL, Span, SpeedRule
from mission.segments.here import Here

LIFT_OFF_MULTIPLE = 1.2  # lift-off over stall speed; common practice, no source


class Taxi(Table):
    """Ground idle for a time."""

    kind: Literal["taxi"]
    name: str = "taxi"
    time: Annotated[Time, Field(gt=0.0)]

    def first_speed(self, here: Here) -> SpeedRule | None:
        """No bridge: standing engines have no speed."""
        return None

    def lay(self, here: Here) -> tuple[list[Span], Here]:
        """The span of the taxi."""
        if not here.on_ground and here.pressure_altitude is not None:
            raise InputRefused("the aircraft is in the air; put an approach before this taxi")
        elevation = here.pressure_altitude
        if elevation is None:
            elevation = here.departure_elevation
        span = Span(
            segment=here.row,
            march="stand",
            rating="ground_idle",
            start_altitude=elevation,
            end_altitude=elevation,
            extent=self.time,
        )
        return [span], here.now(pressure_altitude=elevation, speed=None, on_ground=True)


class TakeOff(Table):
    """Roll at take-off rating to 1.2 times the stall speed."""

    kind: Literal["take-off"]
    name: str = "take-off"

    def first_speed(self, here: Here) -> SpeedRule | None:
        """No bridge: it starts at a standstill."""
        return None

    def lay(self, here: Here) -> tuple[list[Span], Here]:
        """The span of the roll."""
        if not here.on_ground and here.pressure_altitude is not None:
            raise InputRefused("the aircraft is in the air already")
        elevation = here.pressure_altitude
        if elevation is None:
            elevation = here.departure_elevation
        lift_off = SpeedRule("stall", LIFT_OFF_MULTIPLE, here.aircraft.take_off_lift_coefficient)
        span = Span(
            segment=here.row,
            march="roll",
            rating="take_off",
            start_altitude=elevation,
            end_altitude=elevation,
            start_speed=STANDSTILL,
            end_speed=lift_off,
        )
        return [span], here.now(pressure_altitude=elevation, speed=lift_off, on_ground=False)
