"""Turn or combat: level turning flight at one speed, by change of heading or by time."""

from __future__ import annotations

from dataclasses import replace
from math import tau
from typing import Annotated, Literal

from pydantic import Field, model_validator

from engine.errors import InputRefused
from engine.quantities import Altitude, Speed, Time
from mission.march.span import Span, SpeedRule
from mission.segments.base import RatingName, Segment
from mission.segments.here import Here


class Turn(Segment):
    """``turns`` full circles, or for a ``time``; no ground distance gained.

    With ``load_factor`` thrust follows from drag. Without it the engine stands at its rating and
    turns as hard as thrust sustains, lift and structure allowing.
    """

    kind: Literal["turn"]
    name: str = "turn"
    turns: Annotated[float, Field(gt=0.0, le=1000.0)] | None = None
    time: Annotated[Time, Field(gt=0.0)] | None = None
    load_factor: Annotated[float, Field(gt=1.0, le=15.0)] | None = None
    pressure_altitude: Altitude | None = None
    mach: Annotated[float, Field(gt=0.0, lt=5.0)] | None = None
    calibrated_airspeed: Annotated[Speed, Field(gt=0.0)] | None = None
    rating: RatingName = "maximum_continuous"

    @model_validator(mode="after")
    def _one_each(self) -> Turn:
        if (self.turns is None) == (self.time is None):
            raise ValueError("give either turns or time")
        if self.mach is not None and self.calibrated_airspeed is not None:
            raise ValueError("give mach or calibrated_airspeed, not both")
        return self

    def first_speed(self, here: Here) -> SpeedRule | None:
        """Speed this segment begins with, for the bridge before it."""
        if self.mach is not None:
            return SpeedRule("mach", self.mach)
        if self.calibrated_airspeed is not None:
            return SpeedRule("calibrated", self.calibrated_airspeed)
        return None

    def lay(self, here: Here) -> tuple[list[Span], Here]:
        """The span of the turn and where it ends."""
        altitude = here.altitude_or(self.pressure_altitude, "a turn")
        speed = self.first_speed(here) or here.speed
        if speed is None or speed.depends_on_mass:
            raise InputRefused("give mach: the segment before does not end at a given speed")
        span = here.span(
            "turn",
            rating=self.rating,
            start_altitude=altitude,
            end_altitude=altitude,
            start_speed=here.speed or speed,
            end_speed=speed,
            extent=self.time if self.turns is None else tau * self.turns,
            is_by_heading=self.turns is not None,
            load_factor=self.load_factor,
            gains_distance=False,
        )
        return [span], replace(here, pressure_altitude=altitude, speed=speed, on_ground=False)
