"""What a log says of a flight beyond its results: how it was loaded and where it came from."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True)
class Setting:
    """Payload [kg], headwind [m/s], number of engines, and the rule that loaded the fuel."""

    payload: float
    headwind: float
    engine_count: int
    is_fuel_as_needed: bool
