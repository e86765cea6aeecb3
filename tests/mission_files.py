"""Ordinary input files for mission tests: written as TOML to a folder, then loaded and flown.

The aircraft and engines here are plain numbers for tests, no real or notional type.
"""

from __future__ import annotations

import json
from copy import deepcopy
from pathlib import Path
from typing import Any

from engine import load_engine
from engine.interface import Engine
from mission.aircraft import Aircraft, load_aircraft
from mission.flight import fly
from mission.mission_file import Mission, load_mission
from mission.results import Flight, SegmentLog

Content = dict[str, Any]
PROFILES = Path(__file__).parents[1] / "profiles"
BYPASS_5 = PROFILES / "bypass_5.toml"

# A twin of 27 t with a parabolic polar; every published check changes what it needs.
AIRCRAFT: Content = {
    "name": "test twin",
    "engine_count": 2,
    "wing_area": "62 m**2",
    "masses": {
        "operating_empty": "15.5 t",
        "maximum_zero_fuel": "19.5 t",
        "maximum_ramp": "27.2 t",
        "maximum_take_off": "27 t",
        "maximum_landing": "24 t",
    },
    "fuel_tanks": {"capacity": "9 t"},
    "drag_polar": {"zero_lift_drag_coefficient": 0.0175, "induced_drag_factor": 0.042},
    "limits": {
        "maximum_lift_coefficient": 1.5,
        "take_off_lift_coefficient": 1.9,
        "approach_lift_coefficient": 2.2,
        "maximum_operating_mach": 0.82,
        "maximum_operating_calibrated_airspeed": "340 kt",
    },
}

# Thrust falls with density, fuel flow is thrust times one constant, idle is nothing at all.
CONSTANT_ENGINE: Content = {
    "kind": "constant consumption",
    "name": "constant consumption",
    "specific_fuel_consumption": "0.6 1/h",
    "static_thrust": "55 kN",
    "density_exponent": 0.8,
}

MISSION: Content = {
    "name": "test mission",
    "payload": "2.5 t",
    "fuel": {"as_needed": True},
}

# Climb, cruise the rest, descend: the segments of most unit tests.
OUT_AND_DOWN: list[Content] = [
    {"kind": "climb", "to": "FL350", "calibrated_airspeed": "280 kt", "mach": 0.74},
    {"kind": "cruise", "distance": "rest"},
    {"kind": "descent", "calibrated_airspeed": "280 kt", "mach": 0.74},
]

# Items of reserve rules of a mission's own.
CONTINGENCY: Content = {"kind": "share of trip fuel", "share": 0.05}
TO_ALTERNATE: Content = {"kind": "alternate"}
ALTERNATE: Content = {
    "distance": "180 nmi",
    "pressure_altitude": "FL200",
    "mach": 0.6,
    "calibrated_airspeed": "270 kt",
}


def final_reserve(time: str) -> Content:
    """A hold 1,500 ft above the aerodrome."""
    return {"kind": "hold", "time": time, "height": "1500 ft", "above": "aerodrome"}


def merged(base: Content, changes: Content) -> Content:
    """A copy of ``base`` with changes, tables merged key by key; None takes a key away."""
    result = deepcopy(base)
    for key, value in changes.items():
        if value is None:
            result.pop(key, None)
        elif isinstance(value, dict) and isinstance(result.get(key), dict):
            result[key] = merged(result[key], value)
        else:
            result[key] = deepcopy(value)
    return result


def aircraft_content(**changes: Any) -> Content:
    """The test twin with changes."""
    return merged(AIRCRAFT, changes)


def engine_content(**changes: Any) -> Content:
    """The constant-consumption engine with changes."""
    return merged(CONSTANT_ENGINE, changes)


def mission_content(segment: list[Content], **changes: Any) -> Content:
    """A mission of these segments with changes to everything else."""
    return merged(MISSION, changes) | {"segment": segment}


def to_toml(content: Content) -> str:
    """TOML text of a content: scalars and inline tables first, then ``[[segment]]`` entries."""
    lines = [f"{key} = {_value(v)}" for key, v in content.items() if key != "segment"]
    for entry in content.get("segment", []):
        lines += ["", "[[segment]]", *(f"{key} = {_value(v)}" for key, v in entry.items())]
    return "\n".join(lines) + "\n"


def _value(value: Any) -> str:
    if isinstance(value, list):
        return "[" + ", ".join(_value(v) for v in value) + "]"
    if isinstance(value, dict):
        return "{" + ", ".join(f"{key} = {_value(v)}" for key, v in value.items()) + "}"
    if isinstance(value, list):
        return "[" + ", ".join(map(_value, value)) + "]"
    if isinstance(value, bool | str):
        return json.dumps(value)
    return repr(float(value)) if isinstance(value, float) else str(value)


def write(folder: Path, name: str, content: Content) -> Path:
    """A file of that content in a folder."""
    path = folder / f"{name}.toml"
    path.write_text(to_toml(content), encoding="utf-8")
    return path


def load_all(
    folder: Path, aircraft: Content, engine: Content | Path, mission: Content
) -> tuple[Mission, Aircraft, Engine]:
    """Mission, aircraft and engine through their files and loaders."""
    engine_path = engine if isinstance(engine, Path) else write(folder, "engine", engine)
    return (
        load_mission(write(folder, "mission", mission)),
        load_aircraft(write(folder, "aircraft", aircraft)),
        load_engine(engine_path),
    )


def fly_files(
    folder: Path,
    *,
    mission: Content,
    aircraft: Content | None = None,
    engine: Content | Path | None = None,
    refinement: int = 1,
) -> Flight:
    """Write the files, load them, fly."""
    plane = AIRCRAFT if aircraft is None else aircraft
    power = CONSTANT_ENGINE if engine is None else engine
    return fly(*load_all(folder, plane, power, mission), refinement=refinement)


def segment(flight: Flight, name: str, number: int = 0) -> SegmentLog:
    """The log of the segment of that name (of the ``number``-th, counted from 0)."""
    return [log for log in flight.segments if log.name == name][number]
