"""Allowance: fuel that is booked, not flown; or engines held at a rating for a time."""

from __future__ import annotations

from dataclasses import replace
from typing import Annotated, Literal

from pydantic import Field, model_validator

from engine.errors import InputRefused
from engine.quantities import Altitude, Mass, Time
from mission.march.span import STANDSTILL, Span, SpeedRule
from mission.segments.base import RatingName, Segment
from mission.segments.here import Here


class Allowance(Segment):
    """One of a fuel mass, a fraction of the mass at its start, or a time at a rating.

    A time is at the speed the aircraft has, or at ``mach``. With ``to`` the allowance also stands
    for the way to a pressure altitude.
    """

    kind: Literal["allowance"]
    name: str = "allowance"
    fuel: Annotated[Mass, Field(ge=0.0)] | None = None
    mass_fraction: Annotated[float, Field(ge=0.0, lt=0.9)] | None = None
    time: Annotated[Time, Field(gt=0.0)] | None = None
    rating: RatingName | Literal["flight_idle", "ground_idle"] | None = None
    mach: Annotated[float, Field(ge=0.0, lt=5.0)] | None = None
    to: Altitude | None = None

    @model_validator(mode="after")
    def _one_amount(self) -> Allowance:
        given = [v is not None for v in (self.fuel, self.mass_fraction, self.time)]
        if sum(given) != 1:
            raise ValueError("give one of fuel, mass_fraction, or time with rating")
        if (self.time is None) != (self.rating is None):
            raise ValueError("time and rating go together")
        if self.mach is not None and self.time is None:
            raise ValueError("mach goes with time and rating")
        return self

    def first_speed(self, here: Here) -> SpeedRule | None:
        """No bridge: nothing is flown."""
        return None

    def lay(self, here: Here) -> tuple[list[Span], Here]:
        """The span of the allowance."""
        if self.time is not None:
            span = self._running(here)
        else:
            altitude = here.pressure_altitude or 0.0
            span = here.span(
                "book",
                start_altitude=altitude,
                end_altitude=altitude,
                booked_fuel=self.fuel or 0.0,
                booked_fraction=self.mass_fraction or 0.0,
            )
        if self.to is None:
            return [span], here
        return [span], replace(here, pressure_altitude=self.to, speed=None, on_ground=False)

    def _running(self, here: Here) -> Span:
        """Engines at a rating for the time, where the aircraft is; no force, no way."""
        altitude = here.pressure_altitude
        if altitude is None:
            altitude = here.departure_elevation
        speed = STANDSTILL if here.speed is None else here.speed
        if self.mach is not None:
            speed = SpeedRule("mach", self.mach)
        if speed.depends_on_mass:
            raise InputRefused("give mach: the segment before does not end at a given speed")
        assert self.rating is not None
        return here.span(
            "stand",
            rating=self.rating,
            start_altitude=altitude,
            end_altitude=altitude,
            end_speed=speed,
            extent=self.time,
        )
