"""A mission with its main distance made free and all the fuel loaded that fits."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Literal

from engine.errors import InputRefused
from mission.mission_file import FuelTable, Mission, MissionFile
from mission.segments import AnySegment
from mission.segments.cruise import Cruise
from mission.segments.loading import Release, Turnaround
from mission.segments.loiter import Loiter


def freed(mission: Mission) -> Mission:
    """The mission to be flown as far as it goes, fuel up to what limits there are.

    What is free in it stays so. Otherwise free becomes the radius, or the mission's distance, or
    that of its longest leg, or of its longest cruise over a distance. Raises :class:`InputRefused`
    where nothing of that is in the mission, or a time is free.
    """
    written = mission.written
    _refuse_free_time(mission)
    closed = written.model_copy(update={"fuel": FuelTable(to_take_off_mass="limit")})
    if written.free:
        return _with(mission, closed)
    for name in ("radius", "distance"):
        if getattr(written, name) is not None:
            return _with(mission, closed.model_copy(update={name: "free"}))
    return _with(mission, _longest_freed(mission, closed))


def at_payload(mission: Mission, payload: float) -> Mission:
    """The mission with another payload [kg]."""
    return _with(mission, mission.written.model_copy(update={"payload": payload}))


def on_station(mission: Mission, station: Loiter, time: float | Literal["free"]) -> Mission:
    """The mission with another time [s] of a loiter."""
    segments = [
        segment.model_copy(update={"time": time}) if segment is station else segment
        for segment in mission.written.segment
    ]
    return _with(mission, mission.written.model_copy(update={"segment": segments}))


def at_radius(mission: Mission, radius: float) -> Mission:
    """The mission with another radius [m]."""
    return _with(mission, mission.written.model_copy(update={"radius": radius}))


def station_of(mission: Mission) -> Loiter | None:
    """The longest loiter by time, which is the station of a radius mission."""
    found = [
        (segment.time, -number, segment)
        for number, segment in enumerate(mission.written.segment)
        if isinstance(segment, Loiter) and isinstance(segment.time, float)
    ]
    return max(found)[2] if found else None


def payload_that_leaves(segments: Sequence[AnySegment]) -> float:
    """Payload [kg] without which a mission cannot do what it says: released, or taken off."""
    aboard, least = 0.0, 0.0
    for segment in segments:
        if isinstance(segment, Release):
            aboard -= segment.payload or 0.0
        elif isinstance(segment, Turnaround):
            aboard -= segment.payload_off
        least = min(least, aboard)
        if isinstance(segment, Turnaround):
            aboard += segment.payload_on
    return max(0.0, -least)


def _with(mission: Mission, written: MissionFile) -> Mission:
    return mission.model_copy(update={"written": written})


def _refuse_free_time(mission: Mission) -> None:
    for segment in mission.written.segment:
        if isinstance(segment, Loiter) and segment.is_free:
            raise InputRefused(
                "its time is free, and reach varies the distance; give it a time",
                where=mission.where,
                key=f'segment "{segment.name}"',
            )


def _longest_freed(mission: Mission, written: MissionFile) -> MissionFile:
    """The longest leg is free, or the longest cruise over a distance."""
    legs = [(leg.distance, -i) for i, leg in enumerate(written.leg) if _is_length(leg.distance)]
    cruises = [
        (segment.distance, -i)
        for i, segment in enumerate(written.segment)
        if isinstance(segment, Cruise) and _is_length(segment.distance)
    ]
    if not legs and not cruises:
        raise InputRefused(
            "has no distance, radius or cruise over a distance that could be stretched",
            where=mission.where,
            key="segment",
        )
    name, parts = ("leg", written.leg) if legs else ("segment", written.segment)
    chosen = -max(legs or cruises)[1]
    changed = [
        part.model_copy(update={"distance": "free"}) if i == chosen else part
        for i, part in enumerate(parts)
    ]
    return written.model_copy(update={name: changed})


def _is_length(distance: object) -> bool:
    return isinstance(distance, float)
