"""Descent on a speed schedule: at flight idle, or on a given path."""

from __future__ import annotations

from typing import Annotated, Any, Literal

from pydantic import Field, model_validator

from engine.errors import InputRefused
from engine.quantities import FOOT, Altitude, Angle, Speed
from mission.march.span import Span, SpeedRule
from mission.segments.here import Here
from mission.segments.schedule import Scheduled, lay_schedule, schedule_start

APPROACH_HEIGHT = 1500.0 * FOOT  # above the destination; common practice, no source


class Descent(Scheduled):
    """``to`` a pressure altitude, by default 1,500 ft above the destination.

    At flight idle, or with ``path_angle`` or ``rate_of_descent`` (geometric, positive) at the
    thrust that holds it.
    """

    kind: Literal["descent"]
    name: str = "descent"
    to: Altitude | None = None
    path_angle: Annotated[Angle, Field(gt=0.0, lt=0.5)] | None = None
    rate_of_descent: Annotated[Speed, Field(gt=0.0)] | None = None

    @model_validator(mode="after")
    def _one_path(self) -> Descent:
        if self.path_angle is not None and self.rate_of_descent is not None:
            raise ValueError("give path_angle or rate_of_descent, or neither for flight idle")
        return self

    def first_speed(self, here: Here) -> SpeedRule | None:
        """Speed this segment begins with, for the bridge before it."""
        start = here.pressure_altitude
        return None if start is None else schedule_start(self.rules(), start, upwards=False)

    def lay(self, here: Here) -> tuple[list[Span], Here]:
        """Spans of the descent and where it ends."""
        end = here.destination_elevation + APPROACH_HEIGHT if self.to is None else self.to
        start = here.altitude_or(None, "a descent")
        if end >= start:
            raise InputRefused(
                f"to = {end / FOOT:,.0f} ft is not below {start / FOOT:,.0f} ft, where the "
                "descent begins"
            )
        given: dict[str, Any]
        if self.path_angle is not None:
            given = {"path_angle": -self.path_angle}
        elif self.rate_of_descent is not None:
            given = {"vertical_speed": -self.rate_of_descent}
        else:
            return lay_schedule(here, start, end, self.rules(), "flight_idle")
        return lay_schedule(here, start, end, self.rules(), "maximum_continuous", **given)
