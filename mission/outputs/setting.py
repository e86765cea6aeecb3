"""What a log says of a flight beyond its results: how it was loaded and where it came from."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field


@dataclass(frozen=True)
class Setting:
    """Payload [kg], headwind [m/s], number of engines, and the rule that loaded the fuel.

    ``has_own_air`` tells that temperature or wind change with altitude or from leg to leg;
    ``stores`` are what hangs on the aircraft at the start.
    """

    payload: float
    headwind: float
    engine_count: int
    is_fuel_as_needed: bool
    has_own_air: bool = False
    stores: Mapping[str, int] = field(default_factory=dict)
