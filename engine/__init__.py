"""Engine cycles: what thrust and fuel flow a jet engine gives anywhere in its envelope."""

from __future__ import annotations

from importlib import import_module
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from engine.atmosphere import FlightCondition, flight_condition
    from engine.errors import CycleCannotRun, InputRefused, LonglegsError, OutOfRange
    from engine.interface import Engine, EngineState, Outcome
    from engine.options.loading import load_engine
    from engine.scaling import scaled, scaled_to

__all__ = [
    "CycleCannotRun",
    "Engine",
    "EngineState",
    "FlightCondition",
    "InputRefused",
    "LonglegsError",
    "OutOfRange",
    "Outcome",
    "flight_condition",
    "load_engine",
    "scaled",
    "scaled_to",
]

_ROOMS = {
    "CycleCannotRun": "engine.errors",
    "Engine": "engine.interface",
    "EngineState": "engine.interface",
    "FlightCondition": "engine.atmosphere",
    "InputRefused": "engine.errors",
    "LonglegsError": "engine.errors",
    "OutOfRange": "engine.errors",
    "Outcome": "engine.interface",
    "flight_condition": "engine.atmosphere",
    "load_engine": "engine.options.loading",
    "scaled": "engine.scaling",
    "scaled_to": "engine.scaling",
}


def __getattr__(name: str) -> Any:
    """Load a room when its first name is used, so that ``longlegs --help`` loads none."""
    if name not in _ROOMS:
        raise AttributeError(f"module 'engine' has no attribute {name!r}")
    return getattr(import_module(_ROOMS[name]), name)
