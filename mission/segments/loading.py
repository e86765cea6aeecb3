"""What comes aboard and what leaves: stores and payload released, fuel received, turnarounds."""

from __future__ import annotations

from collections import Counter
from dataclasses import replace
from typing import Annotated, Literal

from pydantic import Field, model_validator

from engine.errors import InputRefused
from engine.quantities import Altitude, Mass, Speed, Time
from mission.march.span import Span, SpeedRule
from mission.segments.base import RatingName, Segment
from mission.segments.here import Here, Load

Count = Annotated[int, Field(ge=1, le=1000)]


class Release(Segment):
    """Payload dropped or stores let go in flight; takes no time."""

    kind: Literal["release"]
    name: str = "release"
    payload: Annotated[Mass, Field(gt=0.0)] | None = None
    stores: Annotated[dict[str, Count], Field(default_factory=dict)]

    @model_validator(mode="after")
    def _something(self) -> Release:
        if self.payload is None and not self.stores:
            raise ValueError('give payload = "500 kg", or stores = {marker = 2}, say')
        return self

    def first_speed(self, here: Here) -> SpeedRule | None:
        """No bridge: it happens at the speed there is."""
        return None

    def lay(self, here: Here) -> tuple[list[Span], Here]:
        """A booking of the mass, and a lighter aircraft after it."""
        load = without(here.load, self.payload or 0.0, self.stores)
        leaves = here.load.mass(here.aircraft) - load.mass(here.aircraft)
        return _changed(here, load, leaves, 0.0)


class Turnaround(Segment):
    """On the ground: payload off and on, fuel taken on; engines off, no time counted."""

    kind: Literal["turnaround"]
    name: str = "turnaround"
    payload_off: Annotated[Mass, Field(ge=0.0)] = 0.0
    payload_on: Annotated[Mass, Field(ge=0.0)] = 0.0
    fuel_on: Annotated[Mass, Field(ge=0.0)] = 0.0

    def first_speed(self, here: Here) -> SpeedRule | None:
        """No bridge: it stands."""
        return None

    def lay(self, here: Here) -> tuple[list[Span], Here]:
        """Bookings of what leaves and of what comes aboard."""
        if here.pressure_altitude is None:
            raise InputRefused("nothing was flown yet: load the aircraft for its first flight")
        if not here.on_ground:
            raise InputRefused("the aircraft is in the air; put an approach before this turnaround")
        left = without(here.load, self.payload_off, {})
        load = replace(left, payload=left.payload + self.payload_on)
        return _changed(here, load, self.payload_off, self.payload_on + self.fuel_on)


class Refuelling(Segment):
    """Fuel taken on in flight at a constant rate, level at one speed."""

    kind: Literal["refuelling"]
    name: str = "refuelling"
    transfer: Annotated[Mass, Field(gt=0.0)]
    time: Annotated[Time, Field(gt=0.0)]
    pressure_altitude: Altitude | None = None
    mach: Annotated[float, Field(gt=0.0, lt=5.0)] | None = None
    calibrated_airspeed: Annotated[Speed, Field(gt=0.0)] | None = None
    rating: RatingName = "maximum_continuous"

    @model_validator(mode="after")
    def _one_speed(self) -> Refuelling:
        if self.mach is not None and self.calibrated_airspeed is not None:
            raise ValueError("give mach or calibrated_airspeed, not both")
        return self

    def first_speed(self, here: Here) -> SpeedRule | None:
        """Speed this segment begins with, for the bridge before it."""
        if self.mach is not None:
            return SpeedRule("mach", self.mach)
        if self.calibrated_airspeed is not None:
            return SpeedRule("calibrated", self.calibrated_airspeed)
        return None

    def lay(self, here: Here) -> tuple[list[Span], Here]:
        """The span at the tanker and where it ends."""
        altitude = here.altitude_or(self.pressure_altitude, "a refuelling")
        speed = self.first_speed(here) or here.speed
        if speed is None or speed.depends_on_mass:
            raise InputRefused("give mach: the segment before does not end at a given speed")
        span = here.span(
            "time",
            rating=self.rating,
            start_altitude=altitude,
            end_altitude=altitude,
            start_speed=here.speed or speed,
            end_speed=speed,
            extent=self.time,
            received=self.transfer,
        )
        return [span], replace(here, pressure_altitude=altitude, speed=speed, on_ground=False)


def without(load: Load, payload: float, stores: dict[str, int]) -> Load:
    """A load less what leaves; :class:`InputRefused` where there is not so much aboard."""
    if payload > load.payload + 1e-9:
        raise InputRefused(
            f"payload: {payload:,.0f} kg leave, and {load.payload:,.0f} kg are aboard"
        )
    for name, count in stores.items():
        aboard = load.stores.get(name, 0)
        if count > aboard:
            named = ", ".join(f"{n} {other}" for other, n in load.stores.items() if n) or "none"
            raise InputRefused(f"stores: {count} {name} leave, and aboard are {named}")
    left = Counter(load.stores)
    left.subtract(stores)
    return Load(load.payload - payload, dict(left))


def _changed(here: Here, load: Load, leaves: float, comes: float) -> tuple[list[Span], Here]:
    """A booking [kg] of what comes aboard, one of what leaves, and the aircraft after both.

    In this order the mass between them is not below that of a dry aircraft.
    """
    altitude = here.pressure_altitude or 0.0
    spans = [
        here.span("book", start_altitude=altitude, end_altitude=altitude, received=amount)
        for amount in (comes, -leaves)
    ]
    drag_area = load.drag_area(here.aircraft)
    return spans, replace(
        here, load=load, configuration=replace(here.configuration, drag_area=drag_area)
    )
