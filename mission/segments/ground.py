"""Taxi and take-off: engines running on the ground."""

from __future__ import annotations

from dataclasses import replace
from typing import Annotated, Literal

from pydantic import Field

from engine.errors import InputRefused
from engine.quantities import Time
from mission.march.span import STANDSTILL, Span, SpeedRule
from mission.segments.base import Segment
from mission.segments.here import Here

LIFT_OFF_MULTIPLE = 1.2  # lift-off over stall speed; common practice, no source


class Taxi(Segment):
    """Ground idle for a time."""

    kind: Literal["taxi"]
    name: str = "taxi"
    time: Annotated[Time, Field(gt=0.0)]

    def first_speed(self, here: Here) -> SpeedRule | None:
        """No bridge: standing engines have no speed."""
        return None

    def lay(self, here: Here) -> tuple[list[Span], Here]:
        """The span of the taxi."""
        elevation = _elevation(here, "the aircraft is in the air; put an approach before this taxi")
        span = here.span(
            "stand",
            rating="ground_idle",
            start_altitude=elevation,
            end_altitude=elevation,
            extent=self.time,
        )
        return [span], replace(here, pressure_altitude=elevation, speed=None, on_ground=True)


class TakeOff(Segment):
    """Roll at take-off rating to 1.2 times the stall speed."""

    kind: Literal["take-off"]
    name: str = "take-off"

    def first_speed(self, here: Here) -> SpeedRule | None:
        """No bridge: it starts at a standstill."""
        return None

    def lay(self, here: Here) -> tuple[list[Span], Here]:
        """The span of the roll."""
        elevation = _elevation(here, "the aircraft is in the air already")
        lift_off = SpeedRule("stall", LIFT_OFF_MULTIPLE, here.aircraft.take_off_lift_coefficient)
        span = here.span(
            "roll",
            rating="take_off",
            start_altitude=elevation,
            end_altitude=elevation,
            start_speed=STANDSTILL,
            end_speed=lift_off,
        )
        return [span], replace(here, pressure_altitude=elevation, speed=lift_off, on_ground=False)


def _elevation(here: Here, refusal: str) -> float:
    """Pressure altitude [m] of the ground stood on, the departure's where nothing came before."""
    if here.pressure_altitude is None:
        return here.departure_elevation
    if not here.on_ground:
        raise InputRefused(refusal)
    return here.pressure_altitude
