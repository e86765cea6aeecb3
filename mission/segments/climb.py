"""Climb at a rating; excess thrust sets the path angle."""

from __future__ import annotations

from typing import Annotated, Literal

from pydantic import Field, model_validator

from engine.errors import InputRefused
from engine.quantities import FOOT, Speed
from mission.march.span import SLOWEST_CLIMB, Span, SpeedRule
from mission.segments.base import Level, RatingName
from mission.segments.cruise import Cruise
from mission.segments.here import Here
from mission.segments.schedule import Scheduled, lay_schedule, schedule_start

BestPath = Literal["best rate", "least fuel", "least time"]
_SLOWER = 0.5  # times the rate of climb asked for: what pressure altitude may rise at


class Climb(Scheduled):
    """On a schedule of speed or along a best path, ``to`` a pressure altitude.

    ``to = "best"`` is the best level of the cruise that follows. With ``until_rate_of_climb`` it
    ends where no more than that rate is left, ``to`` being the highest it may come to.
    """

    kind: Literal["climb"]
    name: str = "climb"
    to: Level
    until_rate_of_climb: Annotated[Speed, Field(gt=0.0)] | None = None
    path: BestPath | None = None
    to_mach: Annotated[float, Field(gt=0.0, lt=5.0)] | None = None
    rating: RatingName = "climb"

    @model_validator(mode="after")
    def _path_alone(self) -> Climb:
        if self.path is not None and (self.has_schedule or self.until_rate_of_climb is not None):
            raise ValueError(
                "path finds the speeds: leave out calibrated_airspeed, mach, "
                "limited_below_10000_ft and until_rate_of_climb"
            )
        if (self.path is None) != (self.to_mach is None):
            raise ValueError("path and to_mach, the Mach number at its end, go together")
        return self

    @property
    def _needs_schedule(self) -> bool:
        return self.path is None

    def first_speed(self, here: Here) -> SpeedRule | None:
        """Speed this segment begins with, for the bridge before it."""
        if self.path is not None:
            return None
        return schedule_start(self.rules(), self._start(here), upwards=True)

    def lay(self, here: Here) -> tuple[list[Span], Here]:
        """Spans of the climb and where it ends."""
        start, end = self._start(here), self._end(here)
        if end <= start:
            raise InputRefused(
                f"to = {end / FOOT:,.0f} ft is not above {start / FOOT:,.0f} ft, where the "
                "climb begins"
            )
        if self.path is not None:
            from mission.segments.best_climb import lay_path  # noqa: PLC0415  needed by few

            return lay_path(self, here, start, end)
        if self.until_rate_of_climb is not None:
            return self._lay_slow(here, start, end)
        return lay_schedule(here, start, end, self.rules(), self.rating)

    def _lay_slow(self, here: Here, start: float, highest: float) -> tuple[list[Span], Here]:
        """Spans up to where no more than the rate asked for is left."""
        from mission.segments.climbing import slow_climb  # noqa: PLC0415  needed by few missions

        assert self.until_rate_of_climb is not None
        found = slow_climb(self, here, start, highest)
        # Pressure altitude passes slower than height on a warm day: below the rate is no end.
        least = min(SLOWEST_CLIMB, _SLOWER * self.until_rate_of_climb)
        return lay_schedule(
            here,
            start,
            found.pressure_altitude,
            self.rules(),
            self.rating,
            cuts=found.cuts,
            least_rate=least,
        )

    def _start(self, here: Here) -> float:
        at = here.pressure_altitude
        return here.departure_elevation if at is None else at

    def _end(self, here: Here) -> float:
        """Where it ends; the best level is that of the next cruise."""
        if self.to != "best":
            return float(self.to)
        from mission.segments.levels import best_level  # noqa: PLC0415  needed by few missions

        cruise = next((s for s in here.ahead if isinstance(s, Cruise)), None)
        if cruise is None:
            raise InputRefused('to = "best" is the best level of a cruise, and none follows')
        speed = cruise.given_speed()
        if speed is None and self.mach is not None:
            speed = SpeedRule("mach", self.mach)
        if speed is None:
            raise InputRefused(f'to = "best" needs the mach or speed of cruise "{cruise.name}"')
        return best_level(cruise, here, speed, here.row, end=-1)
