"""Legs of a mission: how far, in what air, to which place."""

from __future__ import annotations

from typing import Annotated, Literal

from pydantic import Field, field_validator, model_validator

from engine.quantities import Altitude, Day, Speed, parse_quantity
from engine.reading import Table
from mission.air import Air
from mission.segments.cruise import LONGEST

Headwind = Annotated[Speed, Field(ge=-100.0, le=100.0)]


class AirTable(Table):
    """Temperature and wind by pressure altitude, in lists of one length, altitudes rising."""

    example = 'pressure_altitude = ["0 ft", "FL350"] and headwind = ["5 kt", "40 kt"]'
    pressure_altitude: Annotated[list[Altitude], Field(min_length=2, max_length=100)]
    day: list[Day] | None = None
    headwind: list[Headwind] | None = None

    @model_validator(mode="after")
    def _lists_agree(self) -> AirTable:
        if self.day is None and self.headwind is None:
            raise ValueError("give day, headwind, or both, a value for each pressure_altitude")
        count = len(self.pressure_altitude)
        for name, values in (("day", self.day), ("headwind", self.headwind)):
            if values is not None and len(values) != count:
                raise ValueError(f"{name} has {len(values)} values for {count} pressure altitudes")
        if any(
            b <= a for a, b in zip(self.pressure_altitude, self.pressure_altitude[1:], strict=False)
        ):
            raise ValueError("pressure_altitude must rise from one to the next")
        return self


def air_of(day: float, headwind: float, table: AirTable | None) -> Air:
    """The air of a leg: one day [K] and headwind [m/s], or by altitude where the table says."""
    if table is None:
        return Air((day,), (-headwind,))
    count = len(table.pressure_altitude)
    return Air(
        tuple([day] * count if table.day is None else table.day),
        tuple(-wind for wind in ([headwind] * count if table.headwind is None else table.headwind)),
        tuple(table.pressure_altitude),
    )


def refuse_two_airs(day: object, headwind: object, table: AirTable | None) -> None:
    """Refuse a day or headwind beside a table that gives the same by altitude."""
    for name, given in (("day", day), ("headwind", headwind)):
        if table is not None and given is not None and getattr(table, name) is not None:
            raise ValueError(f"{name} and air.{name} contradict each other: give one of them")


def distance_or_word(text: object, *allowed: str) -> object:
    """A distance [m] from text, or one of the words allowed."""
    if text in allowed:
        return text
    length = parse_quantity(text, "distance")
    if not 0.0 < length <= LONGEST:
        raise ValueError(f"'{text}' is not a distance above zero and up to 100,000 km")
    return length


class LegTable(Table):
    """One leg; what it does not say is the mission's."""

    name: str
    distance: float | Literal["radius", "free"] | None = None
    day: Day | None = None
    headwind: Headwind | None = None
    air: AirTable | None = None
    elevation: Altitude | None = None

    @field_validator("distance", mode="before")
    @classmethod
    def _distance(cls, text: object) -> object:
        return distance_or_word(text, "radius", "free")

    @model_validator(mode="after")
    def _one_air(self) -> LegTable:
        refuse_two_airs(self.day, self.headwind, self.air)
        return self
