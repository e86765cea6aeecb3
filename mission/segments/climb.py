"""Climb at a rating on a speed schedule; excess thrust sets the path angle."""

from __future__ import annotations

from typing import Literal

from engine.errors import InputRefused
from engine.quantities import FOOT, Altitude
from mission.march.span import Span, SpeedRule
from mission.segments.here import Here
from mission.segments.schedule import Scheduled, lay_schedule, schedule_start

RatingName = Literal["take_off", "maximum_continuous", "climb", "cruise", "maximum_afterburning"]


class Climb(Scheduled):
    """``to`` a pressure altitude."""

    kind: Literal["climb"]
    name: str = "climb"
    to: Altitude
    rating: RatingName = "climb"

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
