"""Level change of speed: faster at a rating, slower at flight idle."""

from __future__ import annotations

from dataclasses import replace
from typing import Annotated, Literal

from pydantic import Field, model_validator

from engine.errors import InputRefused
from engine.quantities import Altitude, Speed
from mission.march.span import Span, SpeedRule
from mission.segments.base import RatingName, Segment
from mission.segments.here import Here


class Accelerate(Segment):
    """To a Mach number or a calibrated airspeed."""

    kind: Literal["acceleration"]
    name: str = "acceleration"
    to_mach: Annotated[float, Field(gt=0.0, lt=5.0)] | None = None
    to_calibrated_airspeed: Annotated[Speed, Field(gt=0.0)] | None = None
    from_mach: Annotated[float, Field(gt=0.0, lt=5.0)] | None = None
    pressure_altitude: Altitude | None = None
    rating: RatingName = "maximum_continuous"

    @model_validator(mode="after")
    def _one_speed(self) -> Accelerate:
        if (self.to_mach is None) == (self.to_calibrated_airspeed is None):
            raise ValueError("give either to_mach or to_calibrated_airspeed")
        return self

    def first_speed(self, here: Here) -> SpeedRule | None:
        """No bridge: it is one itself."""
        return None

    def lay(self, here: Here) -> tuple[list[Span], Here]:
        """The span of the change of speed."""
        altitude = here.altitude_or(self.pressure_altitude, "an acceleration")
        begins = here.speed
        if begins is None:
            if self.from_mach is None:
                raise InputRefused("give from_mach: there is no segment before to take it from")
            begins = SpeedRule("mach", self.from_mach)
        if self.to_mach is not None:
            ends = SpeedRule("mach", self.to_mach)
        else:
            ends = SpeedRule("calibrated", self.to_calibrated_airspeed)
        return [speed_span(here, altitude, begins, ends, self.rating)], replace(
            here, pressure_altitude=altitude, speed=ends, on_ground=False
        )


def speed_span(
    here: Here, altitude: float, begins: SpeedRule, ends: SpeedRule, rating: str
) -> Span:
    """A level change of speed; an end that no rule gives beforehand is its neighbour's."""

    def end(rule: SpeedRule) -> SpeedRule:
        known = not rule.depends_on_mass or rule.kind == "stall"
        return rule if known else SpeedRule("neighbour")

    return here.span(
        "speed",
        rating=rating,
        start_altitude=altitude,
        end_altitude=altitude,
        start_speed=end(begins),
        end_speed=end(ends),
    )
