"""The reserve flight: what a rule's flown items become, segment by segment.

From a missed approach at the destination to the alternate, with its holds; without an alternate
the holds alone, over the destination. Beside it, from the mass at the stop, the hold that a
contingency is not to be less than. Holds are flown on the mission's day.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import Literal

from mission.march.span import RESERVE_LEG, Span
from mission.reserves.items import (
    HOLD_HEIGHT,
    Alternate,
    Hold,
    Item,
    alternate_of,
    credits_descents,
    fuel_flow_factor,
    least_hold_time,
)
from mission.reserves.tables import AlternateTable, ReservesTable
from mission.segments import AnySegment
from mission.segments.approach import Approach, approach_speed
from mission.segments.climb import Climb
from mission.segments.cruise import Cruise
from mission.segments.descent import Descent
from mission.segments.here import Here
from mission.segments.loiter import Loiter


@dataclass(frozen=True)
class Stage:
    """A segment of the reserve flight.

    Attributes
    ----------
    item : index of the rule's item that it is flown for; a bridge before it that of ``way``
    way : index of the alternate's item, or of the item itself where there is none
    start : where it begins; None for where the stage before ended
    purpose : part of the reserve flight, or flown aside from the mass at the stop
    """

    item: int
    way: int
    segment: AnySegment
    start: Here | None = None
    purpose: Literal["reserve", "aside"] = "reserve"


def reserve_stages(reserves: ReservesTable, here: Here) -> list[Stage]:
    """Stages in the order flown; ``here`` is where the mission ends."""
    items = reserves.rule_in_force.items
    over = replace(
        here,
        pressure_altitude=None,
        speed=None,
        on_ground=False,
        is_reserve=True,
        departure_elevation=here.destination_elevation,
        leg=replace(here.leg, number=RESERVE_LEG, distance=None, is_free=False),
        ahead=(),
    )
    index, alternate = alternate_of(items)
    if alternate is None or reserves.alternate is None:
        stages = _holds(items, 0, over)
    else:
        stages = _by_way_of(reserves.alternate, items, index, alternate, over)
    return [*stages, *_least_holds(items, over)]


def _holds(items: Sequence[Item], first: int, place: Here) -> list[Stage]:
    """Holds over one place, each begun afresh at its own altitude and speed."""
    return [
        Stage(i, i, _hold(item, place.destination_elevation), place)
        for i, item in enumerate(items)
        if isinstance(item, Hold) and i >= first
    ]


def _hold(item: Hold, elevation: float) -> Loiter:
    return Loiter.model_construct(
        kind="loiter",
        name=item.name if "hold" in item.name else f"{item.name} hold",
        time=item.time,
        pressure_altitude=item.altitude(elevation),
    )


def _by_way_of(
    table: AlternateTable, items: Sequence[Item], way: int, alternate: Alternate, over: Here
) -> list[Stage]:
    """The way to the alternate, with a hold before it and holds at its end."""
    elevation = over.destination_elevation if table.elevation is None else table.elevation
    leg = replace(over.leg, distance=alternate.distance, destination_elevation=elevation)
    there = replace(over, leg=leg)
    start = replace(there, pressure_altitude=over.departure_elevation, speed=approach_speed(over))
    at_the_end = _holds(items, way, there)
    ends = [i.altitude(elevation) for i in items[way:] if isinstance(i, Hold)]
    stages: list[Stage] = []
    for index, item in enumerate(items[:way]):
        if isinstance(item, Hold):
            altitude = item.altitude(over.departure_elevation)
            stages.append(Stage(way, way, _climb(table, "climb to hold", altitude)))
            stages.append(Stage(index, way, _hold(item, over.departure_elevation)))
    for segment in _alternate_segments(table, ends[0] if ends else elevation + HOLD_HEIGHT):
        stages.append(Stage(way, way, segment))
    if at_the_end:  # the first hold is where the descent ends, and bridged to
        at_the_end[0] = replace(at_the_end[0], way=way, start=None)
    stages += at_the_end
    if table.approach_time > 0.0:
        stages.append(Stage(way, way, _approach(table)))
    stages[0] = replace(stages[0], start=start)
    return stages


def _climb(table: AlternateTable, name: str, to: float) -> Climb:
    return Climb.model_construct(
        kind="climb",
        name=name,
        to=to,
        calibrated_airspeed=table.calibrated_airspeed,
        mach=table.mach,
        limited_below_10000_ft=table.limited_below_10000_ft,
    )


def _alternate_segments(table: AlternateTable, end: float) -> list[AnySegment]:
    """Climb, cruise, and descent to a pressure altitude [m] at the alternate."""
    return [
        _climb(table, "alternate climb", table.pressure_altitude),
        Cruise.model_construct(
            kind="cruise", name="alternate cruise", distance="rest", mach=table.mach
        ),
        Descent.model_construct(
            kind="descent",
            name="alternate descent",
            to=end,
            calibrated_airspeed=table.calibrated_airspeed,
            mach=table.mach,
            limited_below_10000_ft=table.limited_below_10000_ft,
        ),
    ]


def _approach(table: AlternateTable) -> Approach:
    return Approach.model_construct(
        kind="approach",
        name="alternate approach",
        time=table.approach_time,
        drag_factor=table.approach_drag_factor,
    )


def _least_holds(items: Sequence[Item], over: Here) -> list[Stage]:
    """Holds over the destination that priced items are not to be less than."""
    elevation = over.destination_elevation
    return [
        Stage(i, i, _hold(Hold(time, name=item.name), elevation), over, "aside")
        for i, item in enumerate(items)
        if (time := least_hold_time(item)) > 0.0
    ]


def as_flown(span: Span, kind: str, purpose: str, items: Sequence[Item]) -> Span:
    """A span of a row of that kind and purpose, in the manner that a rule's items ask for."""
    factor = span.configuration.fuel_flow_factor * fuel_flow_factor(items)
    return replace(
        span,
        is_reserve=purpose != "mission",
        is_aside=purpose == "aside",
        configuration=replace(span.configuration, fuel_flow_factor=factor),
        gains_distance=span.gains_distance and (kind != "descent" or credits_descents(items)),
    )
