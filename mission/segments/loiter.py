"""Loiter: thrust equals drag for a time or a mass of fuel, no ground distance gained."""

from __future__ import annotations

from dataclasses import replace
from typing import Annotated, Literal

from pydantic import Field, field_validator, model_validator

from engine.quantities import Altitude, Mass, Speed, parse_quantity
from mission.march.span import Span, SpeedRule
from mission.segments.base import RatingName, Segment
from mission.segments.here import Here


class Loiter(Segment):
    """At a given speed, or at the speed of least fuel flow where none is given."""

    kind: Literal["loiter"]
    name: str = "loiter"
    time: float | Literal["free"] | None = None
    fuel: Annotated[Mass, Field(gt=0.0)] | None = None
    until_fuel: Annotated[Mass, Field(ge=0.0)] | None = None
    pressure_altitude: Altitude | None = None
    mach: Annotated[float, Field(gt=0.0, lt=5.0)] | None = None
    calibrated_airspeed: Annotated[Speed, Field(gt=0.0)] | None = None
    rating: RatingName = "cruise"
    drag_factor: Annotated[float, Field(gt=0.0, le=10.0)] = 1.0
    fuel_flow_factor: Annotated[float, Field(gt=0.0, le=10.0)] = 1.0

    @field_validator("time", mode="before")
    @classmethod
    def _time(cls, text: object) -> object:
        if text == "free":
            return text
        length = parse_quantity(text, "time")
        if not length > 0.0:
            raise ValueError(f"'{text}' is not a time above zero")
        return length

    @model_validator(mode="after")
    def _one_end(self) -> Loiter:
        if sum(value is not None for value in (self.time, self.fuel, self.until_fuel)) != 1:
            raise ValueError("give one of time, fuel to burn, or until_fuel")
        return self

    @property
    def is_free(self) -> bool:
        """Whether its time is what the flight is solved for."""
        return self.time == "free"

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
        until = self.until_fuel
        span = here.span(
            "burn" if self.time is None else "time",
            configuration=replace(
                here.configuration,
                drag_factor=self.drag_factor,
                fuel_flow_factor=self.fuel_flow_factor,
            ),
            rating=self.rating,
            start_altitude=altitude,
            end_altitude=altitude,
            start_speed=here.speed or speed,
            end_speed=speed,
            extent=self.time if isinstance(self.time, float) else None,
            is_free=self.is_free,
            burn=self.fuel,
            end_mass=None if until is None else here.load.empty_mass(here.aircraft) + until,
            ends_by_fuel=until is not None,
            gains_distance=False,
        )
        return [span], replace(here, pressure_altitude=altitude, speed=speed, on_ground=False)
