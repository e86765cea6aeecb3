"""Climb at a rating on a speed schedule; excess thrust sets the path angle."""

from __future__ import annotations

from typing import Annotated, Literal

from pydantic import Field, model_validator

from engine.errors import InputRefused
from engine.quantities import FOOT, Altitude, Speed
from engine.reading import Table
from mission.march.span import Span, SpeedRule
from mission.segments.here import Here
from mission.segments.schedule import lay_schedule, schedule_start, zones

RatingName = Literal["take_off", "maximum_continuous", "climb", "cruise"]


class Climb(Table):
    """``to`` a pressure altitude; with both speeds given the lower one governs."""

    kind: Literal["climb"]
    name: str = "climb"
    to: Altitude
    calibrated_airspeed: Annotated[Speed, Field(gt=0.0)] | None = None
    mach: Annotated[float, Field(gt=0.0, lt=5.0)] | None = None
    limited_below_10000_ft: bool = False
    rating: RatingName = "climb"

    @model_validator(mode="after")
    def _some_speed(self) -> Climb:
        if self.calibrated_airspeed is None and self.mach is None:
            raise ValueError("give calibrated_airspeed, mach, or both")
        return self

    def rules(self) -> list[tuple[float, SpeedRule]]:
        """Speed rules upwards."""
        return zones(self.calibrated_airspeed, self.mach, limited=self.limited_below_10000_ft)

    def first_speed(self, here: Here) -> SpeedRule | None:
        """Speed this segment begins with, for the bridge before it."""
        return schedule_start(self.rules(), self._start(here), upwards=True)

    def lay(self, here: Here) -> tuple[list[Span], Here]:
        """Spans of the climb and where it ends."""
        start = self._start(here)
        if self.to <= start:
            raise InputRefused(
                f"to = {self.to / FOOT:,.0f} ft is not above {start / FOOT:,.0f} ft, where the "
                "climb begins"
            )
        return lay_schedule(here, start, self.to, self.rules(), self.rating)

    def _start(self, here: Here) -> float:
        at = here.pressure_altitude
        return here.departure_elevation if at is None else at
