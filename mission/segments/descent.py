"""Descent at flight idle on a speed schedule."""

from __future__ import annotations

from typing import Literal

from engine.errors import InputRefused
from engine.quantities import FOOT, Altitude
from mission.march.span import Span, SpeedRule
from mission.segments.here import Here
from mission.segments.schedule import Scheduled, lay_schedule, schedule_start

APPROACH_HEIGHT = 1500.0 * FOOT  # above the destination; common practice, no source


class Descent(Scheduled):
    """``to`` a pressure altitude, by default 1,500 ft above the destination."""

    kind: Literal["descent"]
    name: str = "descent"
    to: Altitude | None = None

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
        return lay_schedule(here, start, end, self.rules(), "flight_idle")
