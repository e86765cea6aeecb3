"""Field length and climbs for programs."""

from __future__ import annotations

from typing import Any

from mission.field.result import ClimbCheck, FieldPerformance

Record = dict[str, Any]


def field_record(field: FieldPerformance | None) -> Record:
    """SI with the unit in each key; empty without a take-off, a length that is not is left out."""
    if field is None:
        return {}
    lengths = {
        "field_length_m": field.length,
        "balanced_field_length_m": field.balanced_length,
        "all_engine_field_length_m": field.all_engine_length,
        "runway_m": field.runway,
    }
    return {
        "take_off": field.take_off,
        "take_off_mass_kg": field.take_off_mass,
        "pressure_altitude_m": field.pressure_altitude,
        "temperature_deviation_k": field.temperature_deviation,
        "v2_calibrated_airspeed_m_per_s": field.v2,
        **{key: length for key, length in lengths.items() if length is not None},
        "governed_by": field.governed_by,
        "climbs": [_climb(climb) for climb in field.climbs],
        "remarks": list(field.remarks),
    }


def _climb(climb: ClimbCheck) -> Record:
    return {
        "name": climb.name,
        "rule": f"14 CFR {climb.paragraph}",
        "engines_running": climb.engines_running,
        "mass_kg": climb.mass,
        "calibrated_airspeed_m_per_s": climb.calibrated_airspeed,
        "gradient": climb.gradient,
        "required_gradient": climb.required,
        "is_met": climb.is_met,
    }
