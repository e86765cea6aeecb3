"""What is known of a mission that was flown: the ``known`` table of its file, against a flight."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import TYPE_CHECKING, Annotated, ClassVar, Literal

from pydantic import AfterValidator, Field, ValidationInfo, model_validator

from engine.quantities import Mass, Time
from engine.reading import Table

if TYPE_CHECKING:
    from mission.results import Flight, SegmentLog

KnownFuel = Annotated[Mass, Field(gt=0.0)] | None
KnownTime = Annotated[Time, Field(gt=0.0)] | None


class KnownSegmentTable(Table):
    """Fuel, time or both of one segment, by its name; a bridge before it is not counted."""

    name: str
    fuel: KnownFuel = None
    time: KnownTime = None

    @model_validator(mode="after")
    def _says_something(self) -> KnownSegmentTable:
        if self.fuel is None and self.time is None:
            raise ValueError('give fuel = "670 kg", say, time = "22 min", or both')
        return self


class KnownTable(Table):
    """Fuels of the whole mission, and of segments."""

    example: ClassVar[str] = 'block_fuel = "4.3 t"'
    block_fuel: KnownFuel = None
    trip_fuel: KnownFuel = None
    segment: Annotated[list[KnownSegmentTable], Field(default_factory=list, max_length=200)]

    @model_validator(mode="after")
    def _says_something(self) -> KnownTable:
        if self.block_fuel is None and self.trip_fuel is None and not self.segment:
            raise ValueError(
                'is empty; give block_fuel = "4.3 t", say, trip_fuel, or a [[known.segment]] '
                "with its name and its fuel or time"
            )
        return self


def _told_apart(known: KnownTable | None, info: ValidationInfo) -> KnownTable | None:
    """Refuse a known whose name is that of no segment, or of more than one."""
    names = [segment.name for segment in info.data.get("segment", ())]
    wanted = [segment.name for segment in known.segment] if known is not None and names else []
    for name in wanted:
        if wanted.count(name) > 1:
            raise ValueError(f'two [[known.segment]] are named "{name}"; make one of them')
        if names.count(name) > 1:
            raise ValueError(
                f'"{name}" is the name of {names.count(name)} segments; give the one that is '
                "meant a name of its own"
            )
        if name not in names:
            raise ValueError(
                f'"{name}" is the name of no segment; there are {", ".join(dict.fromkeys(names))}'
            )
    return known


Known = Annotated[KnownTable | None, AfterValidator(_told_apart)]


@dataclass(frozen=True)
class KnownValue:
    """One known [kg or s] against the same of a flight.

    ``segment`` is empty for the whole mission, ``what`` is the key of its table.
    """

    segment: str
    what: str
    unit: Literal["kg", "s"]
    known: float
    flown: float

    @property
    def key(self) -> str:
        """Where it stands in the mission file."""
        of = f'segment "{self.segment}".' if self.segment else ""
        return f"known.{of}{self.what}"

    @property
    def error(self) -> float:
        """Flown less known, as a share of the known."""
        return self.flown / self.known - 1.0


def known_against_flown(known: KnownTable, flight: Flight) -> tuple[KnownValue, ...]:
    """Every known beside what the flight makes of it, in the order of the table."""
    rows = {log.name: log for log in flight.segments if log.purpose == "mission"}
    total = flight.totals
    whole = [
        KnownValue("", what, "kg", value, flown)
        for what, value, flown in (
            ("block_fuel", known.block_fuel, total.block_fuel),
            ("trip_fuel", known.trip_fuel, total.trip_fuel),
        )
        if value is not None
    ]
    return (*whole, *(each for one in known.segment for each in _of_segment(one, rows[one.name])))


def _of_segment(known: KnownSegmentTable, log: SegmentLog) -> Iterator[KnownValue]:
    if known.fuel is not None:
        yield KnownValue(known.name, "fuel", "kg", known.fuel, log.fuel)
    if known.time is not None:
        yield KnownValue(known.name, "time", "s", known.time, log.time)
