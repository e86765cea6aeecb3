"""Approach and landing: level at 1.3 times the stall speed for a time, then on the ground."""

from __future__ import annotations

from dataclasses import replace
from typing import Annotated, Literal

from pydantic import Field

from engine.errors import InputRefused
from engine.quantities import FOOT, Time
from mission.march.span import Span, SpeedRule
from mission.segments.base import Segment
from mission.segments.here import Here

HIGHEST_START = 5000.0 * FOOT  # above the destination; the way down is inside the time
STALL_MULTIPLE = 1.3  # approach over stall speed; common practice, no source


class Approach(Segment):
    """Gear and flaps add what the aircraft file says they do; no distance is credited.

    ``drag_factor`` multiplies the clean aircraft's drag, where the file says nothing of them.
    """

    kind: Literal["approach"]
    name: str = "approach and landing"
    time: Annotated[Time, Field(gt=0.0)]
    drag_factor: Annotated[float, Field(gt=0.0, le=10.0)] = 1.0

    def first_speed(self, here: Here) -> SpeedRule:
        """Speed this segment begins with, for the bridge before it."""
        return approach_speed(here)

    def lay(self, here: Here) -> tuple[list[Span], Here]:
        """The span of the approach; the mission is on the ground after it."""
        altitude = here.altitude_or(here.pressure_altitude, "an approach")
        height = altitude - here.destination_elevation
        if height > HIGHEST_START:
            raise InputRefused(
                f"begins {height / FOOT:,.0f} ft above the destination, at most "
                f"{HIGHEST_START / FOOT:,.0f} ft is allowed; put a descent before it"
            )
        speed = approach_speed(here)
        aircraft = here.aircraft
        down = aircraft.gear_drag_increment + aircraft.approach_flaps_drag_increment
        configured = replace(
            here.configuration,
            drag_factor=self.drag_factor,
            drag_area=here.configuration.drag_area + down * aircraft.wing_area,
        )
        span = here.span(
            "time",
            configuration=configured,
            rating="take_off",
            start_altitude=altitude,
            end_altitude=altitude,
            start_speed=here.speed or speed,
            end_speed=speed,
            extent=self.time,
            gains_distance=False,
        )
        landed = replace(
            here, pressure_altitude=here.destination_elevation, speed=None, on_ground=True
        )
        return [span], landed


def approach_speed(here: Here) -> SpeedRule:
    """Speed of the approach, and of a go-around from it."""
    return SpeedRule("stall", STALL_MULTIPLE, here.aircraft.approach_lift_coefficient)
