"""The best cruise levels and speeds for programs."""

from __future__ import annotations

from math import isfinite
from typing import Any

import numpy as np
from numpy.typing import NDArray

from mission.outputs.records import VERSION
from mission.questions.best import LEVELS_OFF, BestCruise, Speeds
from mission.steady.best_levels import ClimbLevel
from mission.steady.level_flight import LevelSpeed, Limit

Array = NDArray[np.float64]
Record = dict[str, Any]
_KEYS = {
    "mach": "mach",
    "true_airspeed": "true_airspeed_m_per_s",
    "lift_coefficient": "lift_coefficient",
    "drag": "drag_n",
    "lift_to_drag": "lift_to_drag",
    "fuel_flow": "fuel_flow_kg_per_s",
    "specific_air_range": "specific_air_range_m_per_kg",
    "specific_ground_range": "specific_ground_range_m_per_kg",
    "thrust_margin": "thrust_over_drag_less_one",
}


def best_record(found: BestCruise) -> Record:
    """An answer as ``longlegs-best``: lists by mass, by level, or by level and then mass.

    Null stands where there is no level flight, and its limit says for want of what.
    """
    best, air = found.best, found.subject.air
    return {
        "format": "longlegs-best",
        "version": VERSION,
        "aircraft": found.subject.aircraft.name,
        "engine": found.subject.engine.name,
        "air": {
            "pressure_altitude_m": list(air.pressure_altitude),
            "temperature_deviation_k": list(air.temperature_deviation),
            "headwind_m_per_s": [-wind for wind in air.tailwind],
        },
        "rating": found.rating,
        "cost_index_kg_per_s": found.cost_index,
        "mass_kg": found.mass.tolist(),
        "best_level": {
            "pressure_altitude_m": _numbers(best.pressure_altitude),
            "weight_over_pressure_ratio_n": _numbers(best.weight_over_pressure_ratio),
            "limit": _limits(best.limit),
            **_speeds(found.at_best),
        },
        "within_one_percent": {
            "lowest_pressure_altitude_m": _numbers(found.level_band[0]),
            "highest_pressure_altitude_m": _numbers(found.level_band[1]),
            "slowest_mach": _numbers(found.mach_band[0]),
            "fastest_mach": _numbers(found.mach_band[1]),
        },
        "beside_the_best_level": {
            "level_difference_m": LEVELS_OFF.tolist(),
            "specific_air_range_share": [
                [share if share > 0.0 else None for share in row]
                for row in found.off_levels.tolist()
            ],
        },
        "highest_level": _climb(best.highest),
        "initial_cruise": _climb(found.initial_cruise),
        "ceiling": _climb(found.ceiling),
        "levels": {
            "pressure_altitude_m": found.pressure_altitude.tolist(),
            **_speeds(found.at_levels),
        },
    }


def _speeds(at: Speeds) -> Record:
    """Speeds by what they are best for, and what the climb rating leaves at the first of them."""
    return {
        "maximum_range": _speed(at.maximum_range),
        "long_range": _speed(at.long_range),
        "endurance": _speed(at.endurance),
        "greatest": _speed(at.greatest),
        "least_cost": None if at.least_cost is None else _speed(at.least_cost),
        "rate_of_climb_m_per_s": _numbers(at.rate_of_climb),
    }


def _speed(speed: LevelSpeed) -> Record:
    return {
        "is_flyable": speed.is_flyable.tolist(),
        **{key: _numbers(getattr(speed, name)) for name, key in _KEYS.items()},
        "limit": _limits(speed.limit),
    }


def _climb(level: ClimbLevel | None) -> Record | None:
    if level is None:
        return None
    return {
        "pressure_altitude_m": _numbers(level.pressure_altitude),
        "limit": _limits(level.limit),
    }


def _limits(codes: NDArray[np.int64]) -> list[Any]:
    """Names of limits, null for none, in lists as deep as the array."""
    return [_limits(each) if codes.ndim > 1 else _limit_name(int(each)) for each in codes]


def _limit_name(code: int) -> str | None:
    return Limit(code).name.lower() if code else None


def _numbers(values: Array) -> list[Any]:
    """Numbers, null for none, in lists as deep as the array."""
    return [
        _numbers(each) if values.ndim > 1 else float(each) if isfinite(each) else None
        for each in values
    ]
