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

    ``has_own_air`` tells that temperature or wind change with altitude or from leg to leg;
    ``stores`` are what hangs on the aircraft at the start, ``known`` what is known of the flight.
    """

    payload: float
    headwind: float
    engine_count: int
    is_fuel_as_needed: bool
    has_own_air: bool = False
    stores: Mapping[str, int] = field(default_factory=dict)
    known: KnownTable | None = None
