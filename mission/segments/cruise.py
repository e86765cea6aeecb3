"""Cruise: thrust equals drag, lift equals weight, over a ground distance."""

from __future__ import annotations

from dataclasses import replace
from typing import Annotated, Literal

from pydantic import Field, field_validator

from engine.errors import InputRefused
from engine.quantities import Altitude, parse_quantity
from engine.reading import Table
from mission.march.span import Span, SpeedRule
from mission.segments.climb import RatingName
from mission.segments.here import Here
from mission.segments.schedule import mach_of

LONGEST = 1e8  # m, more than twice around the earth
Held = Literal["altitude and mach", "altitude and lift coefficient", "mach and lift coefficient"]


class Cruise(Table):
    """What is held and how far; a held value that is not given is the one at the start."""

    kind: Literal["cruise"]
    name: str = "cruise"
    distance: float | Literal["rest"]
    holds: Held = "altitude and mach"
    pressure_altitude: Altitude | None = None
    mach: Annotated[float, Field(gt=0.0, lt=5.0)] | None = None
    lift_coefficient: Annotated[float, Field(gt=0.0, lt=5.0)] | None = None
    rating: RatingName = "cruise"
    drag_factor: Annotated[float, Field(gt=0.0, le=10.0)] = 1.0
    fuel_flow_factor: Annotated[float, Field(gt=0.0, le=10.0)] = 1.0

    @field_validator("distance", mode="before")
    @classmethod
    def _distance(cls, text: object) -> object:
        if text == "rest":
            return text
        length = parse_quantity(text, "distance")
        if not 0.0 < length <= LONGEST:
            raise ValueError(f"'{text}' is not a distance above zero and up to 100,000 km")
        return length

    def first_speed(self, here: Here) -> SpeedRule | None:
        """Speed this segment begins with, for the bridge before it."""
        if self.holds == "altitude and lift coefficient":
            if self.lift_coefficient is None:
                return None
            return SpeedRule("lift_coefficient", self.lift_coefficient)
        return None if self.mach is None else SpeedRule("mach", self.mach)

    def lay(self, here: Here) -> tuple[list[Span], Here]:
        """The span of the cruise and where it ends."""
        climbs = self.holds == "mach and lift coefficient"
        if climbs and self.lift_coefficient is not None and here.pressure_altitude is not None:
            raise InputRefused(
                "lift_coefficient with mach sets the altitude, which the segment before has set "
                "already; leave lift_coefficient out to hold the one at the start"
            )
        altitude = self._altitude(here, climbs=climbs)
        speed = self._speed(here, altitude)
        if self.distance == "rest" and here.distance is None:
            raise InputRefused('distance = "rest" needs the mission\'s distance at its top')
        span = Span(
            segment=here.row,
            march="distance",
            rating=self.rating,
            start_altitude=altitude,
            end_altitude=altitude,
            start_speed=here.speed or speed,
            end_speed=speed,
            extent=None if self.distance == "rest" else float(self.distance),
            holds_lift_coefficient=climbs,
            lift_coefficient=self.lift_coefficient if climbs else None,
            drag_factor=self.drag_factor,
            fuel_flow_factor=self.fuel_flow_factor,
            is_reserve=here.is_reserve,
        )
        ends_at = None if climbs else altitude
        return [span], replace(here, pressure_altitude=ends_at, speed=speed, on_ground=False)

    def _altitude(self, here: Here, *, climbs: bool) -> float:
        """Where the cruise begins; for a given Mach number and lift coefficient found in flight."""
        if climbs and self.lift_coefficient is not None:
            return 11000.0
        return here.altitude_or(self.pressure_altitude, "a cruise")

    def _speed(self, here: Here, altitude: float) -> SpeedRule:
        incoming = here.speed
        if self.holds == "altitude and lift coefficient":
            if self.lift_coefficient is None and incoming is None:
                raise InputRefused(
                    "give lift_coefficient: there is no segment before to take it from"
                )
            return SpeedRule("lift_coefficient", self.lift_coefficient)
        mach = self.mach
        if mach is None:
            if incoming is None or incoming.depends_on_mass:
                raise InputRefused("give mach: the segment before does not end at a given speed")
            mach = mach_of(incoming, altitude)
        return SpeedRule("mach", mach)
