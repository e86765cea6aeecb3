"""What every span of a flight shares: aircraft, engine, day and wind."""

from __future__ import annotations

from dataclasses import dataclass

from engine.interface import Engine
from mission.aircraft import Aircraft


@dataclass(frozen=True)
class World:
    """Aircraft, engine, temperature deviation [K] and tailwind [m/s] of one flight."""

    aircraft: Aircraft
    engine: Engine
    temperature_deviation: float
    tailwind: float
