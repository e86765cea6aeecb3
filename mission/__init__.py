"""Missions: what a jet aircraft burns, how long it takes, and whether it can be flown."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from mission.aircraft import Aircraft, load_aircraft
    from mission.comparison import Comparison, compare
    from mission.flight import fly
    from mission.mission_file import Mission, load_mission
    from mission.results import Flight

__all__ = [
    "Aircraft",
    "Comparison",
    "Flight",
    "Mission",
    "compare",
    "fly",
    "load_aircraft",
    "load_mission",
]

_ROOMS = {
    "Aircraft": "mission.aircraft",
    "Comparison": "mission.comparison",
    "Flight": "mission.results",
    "Mission": "mission.mission_file",
    "compare": "mission.comparison",
    "fly": "mission.flight",
    "load_aircraft": "mission.aircraft",
    "load_mission": "mission.mission_file",
}


def __getattr__(name: str) -> Any:
    """Load a room when its first name is used, so that ``longlegs --help`` loads none."""
    if name not in _ROOMS:
        raise AttributeError(f"module 'mission' has no attribute {name!r}")
    import importlib

    return getattr(importlib.import_module(_ROOMS[name]), name)
