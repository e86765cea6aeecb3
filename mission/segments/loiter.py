"""Loiter: thrust equals drag for a time, no ground distance gained."""

from __future__ import annotations

from dataclasses import replace
from typing import Annotated, Literal

from pydantic import Field, model_validator

from engine.quantities import Altitude, Speed, Time
from engine.reading import Table
from mission.march.span import Span, SpeedRule
from mission.segments.climb import RatingName
from mission.segments.here import Here


class Loiter(Table):
    """At a given speed, or at the speed of least fuel flow where none is given."""

    kind: Literal["loiter"]
    name: str = "loiter"
    time: Annotated[Time, Field(gt=0.0)]
    pressure_altitude: Altitude | None = None
    mach: Annotated[float, Field(gt=0.0, lt=5.0)] | None = None
    calibrated_airspeed: Annotated[Speed, Field(gt=0.0)] | None = None
    rating: RatingName = "cruise"
    drag_factor: Annotated[float, Field(gt=0.0, le=10.0)] = 1.0
    fuel_flow_factor: Annotated[float, Field(gt=0.0, le=10.0)] = 1.0

    @model_validator(mode="after")
    def _one_speed(self) -> Loiter:
        if self.mach is not None and self.calibrated_airspeed is not None:
            raise ValueError("give mach or calibrated_airspeed, or neither for least fuel flow")
        return self

    def first_speed(self, here: Here) -> SpeedRule:
        """Speed this segment begins with, for the bridge before it."""
        if self.mach is not None:
            return SpeedRule("mach", self.mach)
        if self.calibrated_airspeed is not None:
            return SpeedRule("calibrated", self.calibrated_airspeed)
        return SpeedRule("least_fuel")

    def lay(self, here: Here) -> tuple[list[Span], Here]:
        """The span of the loiter and where it ends."""
        altitude = here.altitude_or(self.pressure_altitude, "a loiter")
        speed = self.first_speed(here)
        span = Span(
            segment=here.row,
            march="time",
            rating=self.rating,
            start_altitude=altitude,
            end_altitude=altitude,
            start_speed=here.speed or speed,
            end_speed=speed,
            extent=self.time,
            gains_distance=False,
            drag_factor=self.drag_factor,
            fuel_flow_factor=self.fuel_flow_factor,
            is_reserve=here.is_reserve,
        )
        return [span], replace(here, pressure_altitude=altitude, speed=speed, on_ground=False)
