"""One point of the flight envelope for programs."""

from __future__ import annotations

from math import isfinite
from typing import Any

from engine.interface import Outcome
from mission.outputs.records import VERSION
from mission.outputs.wording import day_in_words
from mission.questions.faults import faults
from mission.questions.point import Point

Record = dict[str, Any]
_RATING_KEYS = {
    "thrust": "thrust_n",
    "margin": "thrust_over_drag_n",
    "fuel_flow": "fuel_flow_kg_per_s",
    "specific_fuel_consumption": "specific_fuel_consumption_kg_per_n_s",
    "excess_power": "specific_excess_power_m_per_s",
    "climb": "rate_of_climb_m_per_s",
    "climb_at_mach": "rate_of_climb_at_mach_m_per_s",
    "climb_at_airspeed": "rate_of_climb_at_calibrated_airspeed_m_per_s",
    "path_angle": "flight_path_angle_rad",
    "load_factor": "sustained_load_factor",
    "turn_rate": "turn_rate_rad_per_s",
    "turn_radius": "turn_radius_m",
}


def point_record(point: Point) -> Record:
    """A point as ``longlegs-point``; null where there is no such thing."""
    flight = point.flight
    is_level = isfinite(point.fuel_flow)
    return {
        "format": "longlegs-point",
        "version": VERSION,
        "aircraft": point.aircraft.name,
        "engine": point.engine.name,
        "engine_count": point.aircraft.engine_count,
        "day": day_in_words(float(flight.temperature_deviation)),
        "pressure_altitude_m": float(flight.pressure_altitude),
        "mach": float(flight.mach),
        "mass_kg": point.mass,
        "weight_n": point.weight,
        "static_temperature_k": float(flight.static_temperature),
        "total_temperature_k": point.total_temperature,
        "static_pressure_pa": float(flight.static_pressure),
        "dynamic_pressure_pa": point.dynamic_pressure,
        "true_airspeed_m_per_s": float(flight.true_airspeed),
        "calibrated_airspeed_m_per_s": point.calibrated_airspeed,
        "equivalent_airspeed_m_per_s": point.equivalent_airspeed,
        "energy_height_m": point.energy_height,
        "lift_coefficient": point.lift_coefficient,
        "drag_coefficient": point.drag_coefficient,
        "drag_coefficient_parts": dict(point.drag_parts),
        "lift_to_drag": point.weight / point.drag,
        "drag_n": point.drag,
        "stall_mach": point.stall_mach,
        "stall_calibrated_airspeed_m_per_s": point.stall_airspeed,
        "load_factors": dict(point.load_factors),
        "level_flight": {
            "rating": point.rating,
            "outcome": Outcome(point.outcome).name.lower(),
            "thrust_n": point.level_thrust if is_level else None,
            "fuel_flow_kg_per_s": point.fuel_flow if is_level else None,
            "specific_fuel_consumption_kg_per_n_s": (
                point.specific_fuel_consumption if is_level else None
            ),
            "specific_air_range_m_per_kg": point.specific_air_range if is_level else None,
        },
        "ratings": [_rating(point, i) for i in range(len(point.at_ratings.names))],
        "faults": [vars(fault) for fault in faults(point)],
    }


def _rating(point: Point, index: int) -> Record:
    at = point.at_ratings
    is_answered = bool(at.is_answered[index])
    has_turn = isfinite(float(at.load_factor[index]))
    return {
        "rating": at.names[index],
        "binding_limit": str(at.held_by[index]) if is_answered else None,
        **{key: _finite(getattr(at, name)[index]) for name, key in _RATING_KEYS.items()},
        "load_factor_bound": str(at.load_limit[index]) if has_turn else None,
    }


def _finite(value: Any) -> float | None:
    return float(value) if isfinite(value) else None
