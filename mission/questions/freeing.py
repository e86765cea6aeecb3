"""A mission with its main distance made free and all the fuel loaded that fits."""

from __future__ import annotations

from engine.errors import InputRefused
from mission.mission_file import FuelTable, Mission, MissionFile
from mission.segments.cruise import Cruise
from mission.segments.loiter import Loiter


def freed(mission: Mission) -> Mission:
    """The mission to be flown as far as it goes.

    Free becomes the radius, or the mission's distance, or that of the leg that is longest, or the
    longest cruise. Raises :class:`InputRefused` where nothing of that is in the mission.
    """
    written = mission.written
    closed = written.model_copy(
        update={"fuel": FuelTable(to_take_off_mass="limit"), "segment": _without_free(written)}
    )
    if written.radius is not None:
        opened = closed.model_copy(update={"radius": "free"})
    elif written.distance is not None:
        opened = closed.model_copy(update={"distance": "free"})
    elif any(leg.distance is not None for leg in written.leg):
        opened = _leg_freed(closed)
    else:
        opened = _cruise_freed(mission, closed)
    return mission.model_copy(update={"written": opened})


def _without_free(written: MissionFile) -> list[object]:
    """Segments as they are; a loiter that is free has no time of its own to hold."""
    for segment in written.segment:
        if isinstance(segment, Loiter) and segment.is_free:
            raise InputRefused(
                f'time of "{segment.name}" is free, and reach varies the distance; give it a time'
            )
    return list(written.segment)


def _leg_freed(written: MissionFile) -> MissionFile:
    lengths = [leg.distance if isinstance(leg.distance, float) else 0.0 for leg in written.leg]
    free = [leg.distance == "free" for leg in written.leg]
    chosen = free.index(True) if any(free) else lengths.index(max(lengths))
    legs = [
        leg.model_copy(update={"distance": "free"}) if i == chosen else leg
        for i, leg in enumerate(written.leg)
    ]
    return written.model_copy(update={"leg": legs})


def _cruise_freed(mission: Mission, written: MissionFile) -> MissionFile:
    """The longest cruise by distance is free."""
    found = [
        (segment.distance if isinstance(segment.distance, float) else float("inf"), i)
        for i, segment in enumerate(written.segment)
        if isinstance(segment, Cruise) and segment.distance is not None and not segment.has_steps
    ]
    if not found:
        raise InputRefused(
            "has no distance, radius or cruise over a distance that could be stretched",
            where=mission.where,
            key="segment",
        )
    _, chosen = max(found)
    segments = [
        segment.model_copy(update={"distance": "free"}) if i == chosen else segment
        for i, segment in enumerate(written.segment)
    ]
    return written.model_copy(update={"segment": segments})


def station_of(mission: Mission) -> str | None:
    """Name of the longest loiter by time, which is the station of a radius mission."""
    found = [
        (segment.time, segment.name)
        for segment in mission.written.segment
        if isinstance(segment, Loiter) and isinstance(segment.time, float)
    ]
    return max(found)[1] if found else None
