"""What every span of a flight shares: aircraft and engine."""

from __future__ import annotations

from dataclasses import dataclass

from engine.interface import Engine
from mission.aircraft import Aircraft
from mission.march.span import Span


@dataclass(frozen=True)
class World:
    """Aircraft and engine of one flight."""

    aircraft: Aircraft
    engine: Engine

    def running(self, span: Span) -> int:
        """Engines that run on a span."""
        return self.aircraft.engine_count - span.configuration.engines_out
