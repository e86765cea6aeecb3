"""An engine fails; and the way down to the level that the others hold."""

from __future__ import annotations

from dataclasses import replace
from typing import Annotated, Literal

from pydantic import Field, model_validator

from engine.errors import InputRefused
from engine.quantities import Speed
from mission.march.span import Span, SpeedRule
from mission.segments.base import Segment
from mission.segments.here import Here

SLOWEST_DRIFTDOWN = 100.0 * 0.3048 / 60.0  # m/s: 100 ft/min; common practice, no source


class EngineFailure(Segment):
    """From here on fewer engines run; the dead ones are turned by the air and drag."""

    kind: Literal["engine failure"]
    name: str = "engine failure"
    engines: Annotated[int, Field(ge=1, le=11)] = 1

    def first_speed(self, here: Here) -> SpeedRule | None:
        """No bridge: it happens at the speed there is."""
        return None

    def lay(self, here: Here) -> tuple[list[Span], Here]:
        """Nothing flown; a configuration with dead engines from here on."""
        out = here.configuration.engines_out + self.engines
        if out >= here.aircraft.engine_count:
            raise InputRefused(
                f"{out} of {here.aircraft.engine_count} engines would be dead; one at least has "
                "to run"
            )
        altitude = here.pressure_altitude or 0.0
        span = here.span("book", start_altitude=altitude, end_altitude=altitude)
        return [span], replace(here, configuration=replace(here.configuration, engines_out=out))


class Driftdown(Segment):
    """From cruise down at a rating to where the descent has slowed to a rate.

    At a calibrated airspeed or Mach number, or at the calibrated airspeed of least drag where the
    driftdown begins.
    """

    kind: Literal["driftdown"]
    name: str = "driftdown"
    calibrated_airspeed: Annotated[Speed, Field(gt=0.0)] | None = None
    mach: Annotated[float, Field(gt=0.0, lt=5.0)] | None = None
    until_rate_of_descent: Annotated[Speed, Field(gt=0.0)] = SLOWEST_DRIFTDOWN
    rating: Literal["maximum_continuous", "take_off"] = "maximum_continuous"

    @model_validator(mode="after")
    def _one_speed(self) -> Driftdown:
        if self.mach is not None and self.calibrated_airspeed is not None:
            raise ValueError("give mach or calibrated_airspeed, or neither for least drag")
        return self

    def first_speed(self, here: Here) -> SpeedRule | None:
        """Speed this segment begins with, for the bridge before it."""
        from mission.segments.driftdown import driftdown_speed  # noqa: PLC0415  needed by few

        return driftdown_speed(self, here)

    def lay(self, here: Here) -> tuple[list[Span], Here]:
        """Spans of the descent to the level that the running engines hold."""
        from mission.segments.driftdown import lay_driftdown  # noqa: PLC0415  needed by few

        return lay_driftdown(self, here)
