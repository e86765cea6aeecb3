"""The mission as a person writes it: payload, day, fuel, reserves, and an ordered list."""

from __future__ import annotations

from pathlib import Path
from typing import Annotated, Any, Literal

from pydantic import Field, field_validator, model_validator

from engine.quantities import Altitude, Day, Length, Mass, parse_quantity
from engine.reading import Table, check, defaults_used, read_toml
from mission.known import Known
from mission.legs import AirTable, Headwind, LegTable, distance_or_word
from mission.reserves.tables import ReservesTable
from mission.segments import AnySegment
from mission.segments.loading import Count


class FuelTable(Table):
    """A given load of usable fuel at engine start, or up to a take-off mass, or as is needed."""

    load: Annotated[Mass, Field(gt=0.0)] | None = None
    to_take_off_mass: float | Literal["limit"] | None = None
    as_needed: bool = False

    @field_validator("to_take_off_mass", mode="before")
    @classmethod
    def _mass(cls, text: object) -> object:
        if text == "limit":
            return text
        mass = parse_quantity(text, "mass")
        if not mass > 0.0:
            raise ValueError(f"'{text}' is not a mass above zero")
        return mass

    @model_validator(mode="after")
    def _one_way(self) -> FuelTable:
        given = [self.load is not None, self.to_take_off_mass is not None, self.as_needed]
        if sum(given) > 1:
            raise ValueError(
                "load, to_take_off_mass and as_needed contradict each other: give one of them"
            )
        if not any(given):
            raise ValueError(
                'give load = "9.5 t", say, or to_take_off_mass = "limit", or as_needed = true'
            )
        return self


class PlaceTable(Table):
    elevation: Altitude = 0.0


class DepartureTable(PlaceTable):
    """``runway`` is the field length available; nothing is checked against it where unsaid."""

    runway: Annotated[Length, Field(gt=0.0, le=20_000.0)] | None = None


class MissionFile(Table):
    """A mission file."""

    name: str
    note: str = ""
    aircraft: str = ""
    engine: str = ""
    engine_options: Annotated[list[str], Field(default_factory=list)]
    payload: Annotated[Mass, Field(ge=0.0)]
    stores: Annotated[dict[str, Count], Field(default_factory=dict)]
    distance: float | Literal["free"] | None = None
    radius: float | Literal["free"] | None = None
    day: Day = 0.0
    headwind: Headwind = 0.0
    air: AirTable | None = None
    leg: Annotated[list[LegTable], Field(default_factory=list, max_length=50)]
    departure: DepartureTable = DepartureTable()
    destination: PlaceTable = PlaceTable()
    fuel: FuelTable
    reserves: ReservesTable = ReservesTable()
    segment: Annotated[list[AnySegment], Field(min_length=1, max_length=200)]
    known: Known = None  # of the same mission flown: what `longlegs fit --flight` meets

    @field_validator("distance", "radius", mode="before")
    @classmethod
    def _distance(cls, text: object) -> object:
        return distance_or_word(text, "free")

    @model_validator(mode="after")
    def _legs_agree(self) -> MissionFile:
        wants_radius = any(leg.distance == "radius" for leg in self.leg)
        if self.distance is not None and self.leg:
            raise ValueError("distance belongs to each leg where legs are given, or use radius")
        if wants_radius != (self.radius is not None):
            raise ValueError(
                'radius = "300 nmi", say, and a leg with distance = "radius" go together'
            )
        names = [leg.name for leg in self.leg]
        if len(set(names)) != len(names):
            raise ValueError("two legs have one name")
        starts = [segment.starts_leg for segment in self.segment if segment.starts_leg]
        wanted = names if starts[:1] == names[:1] else names[1:]
        if starts != wanted:
            raise ValueError(
                "each leg after the first begins with a segment that has starts_leg = its name, in "
                f"their order: legs {', '.join(names) or 'none'}; started: "
                f"{', '.join(starts) or 'none'}"
            )
        if len(self.free) > 1:
            raise ValueError(f"only one thing can be free, and these are: {', '.join(self.free)}")
        if self.free and self.fuel.as_needed:
            raise ValueError(
                f"{self.free[0]} is free: give fuel.load or fuel.to_take_off_mass, which it is "
                "solved for, not as_needed"
            )
        return self

    @property
    def free(self) -> tuple[str, ...]:
        """What is marked as free, by name; the flight is solved for it."""
        own = [name for name in ("distance", "radius") if getattr(self, name) == "free"]
        legs = [f'distance of leg "{leg.name}"' for leg in self.leg if leg.distance == "free"]
        segments = [
            f'{"distance" if segment.kind == "cruise" else "time"} of "{segment.name}"'
            for segment in self.segment
            if getattr(segment, "is_free", False)
        ]
        return (*own, *legs, *segments)


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
