"""The mission as a person writes it: payload, day, fuel, reserves, and an ordered list."""

from __future__ import annotations

from pathlib import Path
from typing import Annotated, Any

from pydantic import Field, model_validator

from engine.quantities import Altitude, Day, Distance, Mass, Speed, Time
from engine.reading import Table, check, defaults_used, read_toml
from mission.segments import AnySegment
from mission.segments.cruise import LONGEST

Fraction = Annotated[float, Field(ge=0.0, lt=1.0)]


class FuelTable(Table):
    """Either a given load of usable fuel at engine start, or as much as is needed."""

    load: Annotated[Mass, Field(gt=0.0)] | None = None
    as_needed: bool = False

    @model_validator(mode="after")
    def _one_way(self) -> FuelTable:
        if self.load is not None and self.as_needed:
            raise ValueError(
                "load and as_needed contradict each other: give the load, or as_needed = true"
            )
        if self.load is None and not self.as_needed:
            raise ValueError('give load = "9.5 t", say, or as_needed = true')
        return self


class AlternateTable(Table):
    """Flown from the destination as a climb, a cruise and a descent of its own."""

    distance: Annotated[Distance, Field(gt=0.0, le=LONGEST)]
    pressure_altitude: Altitude
    mach: Annotated[float, Field(gt=0.0, lt=5.0)]
    calibrated_airspeed: Annotated[Speed, Field(gt=0.0)]
    limited_below_10000_ft: bool = False
    elevation: Altitude | None = None


class ReservesTable(Table):
    """Contingency is priced from the flown trip and carried; the rest is flown."""

    contingency_fraction: Fraction = 0.0
    contingency_least_time: Annotated[Time, Field(ge=0.0)] = 0.0
    alternate: AlternateTable | None = None
    final_reserve_time: Annotated[Time, Field(ge=0.0)] = 0.0


class PlaceTable(Table):
    elevation: Altitude = 0.0


class MissionFile(Table):
    """A mission file."""

    name: str
    note: str = ""
    aircraft: str = ""
    engine: str = ""
    engine_options: Annotated[list[str], Field(default_factory=list)]
    payload: Annotated[Mass, Field(ge=0.0)]
    distance: Annotated[Distance, Field(gt=0.0, le=LONGEST)] | None = None
    day: Day = 0.0
    headwind: Annotated[Speed, Field(ge=-100.0, le=100.0)] = 0.0
    departure: PlaceTable = PlaceTable()
    destination: PlaceTable = PlaceTable()
    fuel: FuelTable
    reserves: ReservesTable = ReservesTable()
    segment: Annotated[list[AnySegment], Field(min_length=1, max_length=200)]


class Mission(Table):
    """A checked mission, with where it came from and what it left unsaid."""

    written: MissionFile
    where: str
    assumed: tuple[str, ...]

    @property
    def name(self) -> str:
        """The mission's name."""
        return self.written.name


def load_mission(path: str | Path) -> Mission:
    """Read a mission file; :class:`engine.errors.InputRefused` names file, key and value."""
    where = Path(path)
    return mission_from_content(read_toml(where), str(where))


def mission_from_content(content: dict[str, Any], where: str) -> Mission:
    """The same from the content of a file, ``where`` naming it in a refusal."""
    written = check(content, MissionFile, where)
    assumed = defaults_used(written)
    for number, segment in enumerate(written.segment, 1):
        assumed += [
            f"segment {number} {segment.name}: {line}"
            for line in defaults_used(segment)
            if not line.startswith("name =")
        ]
    return Mission(written=written, where=where, assumed=tuple(assumed))
