"""The boundary of a mission for programs."""

from __future__ import annotations

from typing import Any

from mission.outputs.records import VERSION, failure_record
from mission.outputs.wording import day_in_words
from mission.questions.reach import Point, Reach

Record = dict[str, Any]


def reach_record(found: Reach) -> Record:
    """A boundary as ``longlegs-reach``, its points in the order of rising reach."""
    return {
        "format": "longlegs-reach",
        "version": VERSION,
        "mission": found.mission,
        "aircraft": found.aircraft,
        "engine": found.engine,
        "day": day_in_words(found.day),
        "reach": "radius" if found.is_radius else "ground distance",
        "station": found.station,
        "greatest_payload_by": found.top,
        "error_s" if found.station else "error_m": found.error,
        "flights": found.flights,
        "plans": found.plans,
        "points": [_point(found, point) for point in found.points],
    }


def _point(found: Reach, point: Point) -> Record:
    failure = point.failure
    head: Record = {
        "corner": point.corner,
        "payload_kg": point.payload,
        "radius_m" if found.is_radius else "ground_distance_m": point.reach,
        "station_time_s": point.station_time,
        "held_by": list(point.governs),
        "flown": point.is_flown,
        "failure": failure if isinstance(failure, str) else failure_record(failure),
    }
    total = point.totals
    if total is None:
        return head
    return {
        **head,
        "block_fuel_kg": total.block_fuel,
        "loaded_fuel_kg": total.loaded_fuel,
        "reserve_fuel_kg": total.reserve_fuel,
        "fuel_margin_kg": total.fuel_margin,
        "takeoff_mass_kg": total.takeoff_mass,
        "landing_mass_kg": total.landing_mass,
        "block_time_s": total.block_time,
    }
