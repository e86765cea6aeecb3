"""Cruise: thrust equals drag, lift equals weight, over a ground distance."""

from __future__ import annotations

from dataclasses import replace
from typing import Annotated, Literal

from pydantic import Field, field_validator, model_validator

from engine.errors import InputRefused
from engine.quantities import Altitude, Length, Mass, MassFlow, Time, parse_quantity
from mission.march.span import Span, SpeedKind, SpeedRule
from mission.segments.base import Level, RatingName, Segment
from mission.segments.here import Here
from mission.segments.schedule import mach_of

LONGEST = 1e8  # m, more than twice around the earth
Held = Literal["altitude and mach", "altitude and lift coefficient", "mach and lift coefficient"]
BestSpeed = Literal["maximum range", "long range", "least cost", "greatest level"]
_SOUGHT: dict[BestSpeed, SpeedKind] = {
    "maximum range": "maximum_range",
    "long range": "long_range",
    "least cost": "least_cost",
    "greatest level": "maximum_level",
}


class Cruise(Segment):
    """What is held and how far; a held value that is not given is the one at the start.

    Instead of a Mach number a best ``speed`` may be asked for, and the best level of all for
    ``pressure_altitude``. With ``step_levels`` or ``step_height`` it climbs inside as soon as the
    next level is better and can be reached at 300 ft/min.
    """

    kind: Literal["cruise"]
    name: str = "cruise"
    distance: float | Literal["rest", "free"] | None = None
    time: Annotated[Time, Field(gt=0.0)] | None = None
    until_fuel: Annotated[Mass, Field(ge=0.0)] | None = None
    holds: Held = "altitude and mach"
    pressure_altitude: Level | None = None
    mach: Annotated[float, Field(gt=0.0, lt=5.0)] | None = None
    speed: BestSpeed | None = None
    cost_index: Annotated[MassFlow, Field(ge=0.0)] | None = None
    lift_coefficient: Annotated[float, Field(gt=0.0, lt=5.0)] | None = None
    step_levels: Annotated[list[Altitude], Field(default_factory=list)]
    step_height: Annotated[Length, Field(ge=100.0)] | None = None
    rating: RatingName = "cruise"
    drag_factor: Annotated[float, Field(gt=0.0, le=10.0)] = 1.0
    fuel_flow_factor: Annotated[float, Field(gt=0.0, le=10.0)] = 1.0

    @field_validator("distance", mode="before")
    @classmethod
    def _distance(cls, text: object) -> object:
        if text in ("rest", "free"):
            return text
        length = parse_quantity(text, "distance")
        if not 0.0 < length <= LONGEST:
            raise ValueError(f"'{text}' is not a distance above zero and up to 100,000 km")
        return length

    @model_validator(mode="after")
    def _one_of_each(self) -> Cruise:
        ends = [value is not None for value in (self.distance, self.time, self.until_fuel)]
        if sum(ends) != 1:
            raise ValueError(
                'give one of distance ("rest" for what is left of the leg), time, or until_fuel'
            )
        if self.speed is not None and self.mach is not None:
            raise ValueError("give mach or speed, not both")
        if (self.speed == "least cost") != (self.cost_index is not None):
            raise ValueError('speed = "least cost" and cost_index = "30 kg/min", say, go together')
        if self.holds != "altitude and mach" and (self.speed or self.has_steps):
            raise ValueError('speed and steps go with holds = "altitude and mach"')
        if self.step_levels and self.step_height is not None:
            raise ValueError("give step_levels or step_height, not both")
        if self.step_levels != sorted(set(self.step_levels)):
            raise ValueError("step_levels must rise from one to the next")
        if self.has_steps and self.distance != "rest" and self.until_fuel is None:
            raise ValueError('steps go with distance = "rest" or until_fuel')
        return self

    @property
    def has_steps(self) -> bool:
        """Whether it may climb inside."""
        return bool(self.step_levels) or self.step_height is not None

    @property
    def is_free(self) -> bool:
        """Whether its distance is what the flight is solved for."""
        return self.distance == "free"

    def first_speed(self, here: Here) -> SpeedRule | None:
        """Speed this segment begins with, for the bridge before it."""
        if self.holds == "altitude and lift coefficient":
            if self.lift_coefficient is None:
                return None
            return SpeedRule("lift_coefficient", self.lift_coefficient)
        return self.given_speed()

    def given_speed(self) -> SpeedRule | None:
        """The Mach number or best speed asked for; None where the one at the start is held."""
        if self.speed is not None:
            return SpeedRule(_SOUGHT[self.speed], self.cost_index)
        return None if self.mach is None else SpeedRule("mach", self.mach)

    def lay(self, here: Here) -> tuple[list[Span], Here]:
        """The spans of the cruise and where it ends."""
        climbs = self.holds == "mach and lift coefficient"
        if climbs and self.lift_coefficient is not None and here.pressure_altitude is not None:
            raise InputRefused(
                "lift_coefficient with mach sets the altitude, which the segment before has set "
                "already; leave lift_coefficient out to hold the one at the start"
            )
        altitude = self._altitude(here, climbs=climbs)
        speed = self._speed(here, altitude)
        if self.distance == "rest" and here.leg.distance is None and not here.leg.is_free:
            raise InputRefused(
                'distance = "rest" needs a distance at the top of the mission or leg'
            )
        own = self.configured(here)
        span = own.span(
            self._march,
            rating=self.rating,
            start_altitude=altitude,
            end_altitude=altitude,
            start_speed=here.speed or speed,
            end_speed=speed,
            extent=self.distance if isinstance(self.distance, float) else self.time,
            is_free=self.is_free,
            end_mass=self._end_mass(here),
            ends_by_fuel=self.until_fuel is not None,
            holds_lift_coefficient=climbs,
            lift_coefficient=self.lift_coefficient if climbs else None,
        )
        after = replace(here, pressure_altitude=altitude, speed=speed, on_ground=False)
        if climbs:
            return [span], replace(after, pressure_altitude=None)
        if self.has_steps:
            from mission.segments.steps import with_steps  # noqa: PLC0415  needed by few missions

            spans, there = with_steps(self, own, span)
            return spans, replace(there, configuration=here.configuration)
        return [span], after

    def configured(self, here: Here) -> Here:
        """The aircraft as this cruise flies it, its levels and climbs in steps included."""
        return replace(
            here,
            configuration=replace(
                here.configuration,
                drag_factor=self.drag_factor,
                fuel_flow_factor=self.fuel_flow_factor,
            ),
        )

    @property
    def _march(self) -> Literal["distance", "time", "burn"]:
        if self.until_fuel is not None:
            return "burn"
        return "distance" if self.time is None else "time"

    def _end_mass(self, here: Here) -> float | None:
        if self.until_fuel is None:
            return None
        return here.load.empty_mass(here.aircraft) + self.until_fuel

    def _altitude(self, here: Here, *, climbs: bool) -> float:
        """Where the cruise begins; for a given Mach number and lift coefficient found in flight."""
        if climbs and self.lift_coefficient is not None:
            return 11000.0
        if self.pressure_altitude == "best":
            if here.pressure_altitude is not None:
                return here.pressure_altitude
            from mission.segments.levels import best_level  # noqa: PLC0415  needed by few missions

            speed = self.given_speed()
            if speed is None:
                raise InputRefused('pressure_altitude = "best" needs mach or speed')
            return best_level(self, here, speed, here.row)
        return here.altitude_or(self.pressure_altitude, "a cruise")

    def _speed(self, here: Here, altitude: float) -> SpeedRule:
        incoming = here.speed
        if self.holds == "altitude and lift coefficient":
            if self.lift_coefficient is None and incoming is None:
                raise InputRefused(
                    "give lift_coefficient: there is no segment before to take it from"
                )
            return SpeedRule("lift_coefficient", self.lift_coefficient)
        given = self.given_speed()
        if given is not None:
            return given
        if incoming is None or incoming.depends_on_mass:
            raise InputRefused("give mach: the segment before does not end at a given speed")
        return SpeedRule("mach", mach_of(incoming, altitude))
