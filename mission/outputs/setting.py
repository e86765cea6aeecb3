"""What a log says of a flight beyond its results: how it was loaded and where it came from."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from mission.known import KnownTable


@dataclass(frozen=True)
class Setting:
    """Payload [kg], headwind [m/s], number of engines, and the rule that loaded the fuel.

    ``stores`` are those it takes off with, by name; ``air_changes`` says by what day and wind
    change, "altitude" or "leg", and is empty where one of each holds throughout; ``known`` is what
    is known of the flight.
    """

    payload: float
    headwind: float
    engine_count: int
    is_fuel_as_needed: bool
    stores: Mapping[str, int] = field(default_factory=dict)
    air_changes: str = ""
    known: KnownTable | None = None
