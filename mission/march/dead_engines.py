"""Drag of engines that do not run and are turned by the air, all spans in one engine call.

It goes with the square of the Mach number close around the one it was found at, and is found again
where a span's speed has moved on.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from engine.atmosphere import FlightCondition
from mission.march.asking import join
from mission.march.span import LEVEL
from mission.march.tracks import Track
from mission.march.world import World

Array = NDArray[np.float64]
_CLOSE = 1e-4  # Mach number: a square law errs by less than 1e-5 of the drag so near by
_FLOWN = (*LEVEL, "altitude", "energy", "speed", "turn")


def find_dead_drags(world: World, tracks: Sequence[Track]) -> None:
    """The drag along every span with dead engines whose speed has moved since it was found."""
    if not world.engine.is_known_unlit:
        return
    moved: list[tuple[Track, FlightCondition]] = []
    for track in tracks:
        if track.span.configuration.engines_out and track.span.march in _FLOWN:
            flight = _flight(track)
            known = track.dead_mach
            if known is None or np.max(np.abs(flight.mach - known)) > _CLOSE:
                moved.append((track, flight))
    if not moved:
        return
    thrust = world.engine.windmilling(join([flight for _, flight in moved])).net_thrust
    ends = np.cumsum([flight.mach.size for _, flight in moved])[:-1]
    for (track, flight), own in zip(moved, np.split(thrust, ends), strict=True):
        track.dead_drag = -track.span.configuration.engines_out * own.reshape(flight.shape)
        track.dead_mach = flight.mach


def _flight(track: Track) -> FlightCondition:
    """Where a span is flown, as far as it is known."""
    if track.air is None:
        assert track.flight is not None
        return track.flight
    return track.air.with_mach(np.maximum(track.mach, _CLOSE))


def dead_drag(track: Track, flight: FlightCondition) -> Array:
    """Drag [N] of dead engines at a condition near the one it was found at; shapes broadcast."""
    if track.dead_drag is None or track.dead_mach is None:
        return np.zeros((1, 1))
    drag: Array = track.dead_drag * (flight.mach / track.dead_mach) ** 2
    return drag
