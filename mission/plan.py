"""From the mission file to spans: segments laid one after another, jumps bridged or refused."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field, replace
from typing import Literal

import numpy as np

from engine.errors import InputRefused
from mission.aircraft import Aircraft, usable_fuel
from mission.legs import air_of
from mission.march.span import RESERVE_LEG, Span, SpeedRule
from mission.march.sweep import Parts
from mission.march.world import World
from mission.mission_file import Mission, MissionFile
from mission.reserves.items import alternate_of
from mission.reserves.laying import as_flown, reserve_stages
from mission.reserves.tables import ReservesTable
from mission.segments import AnySegment
from mission.segments.acceleration import speed_span
from mission.segments.choices import Choices
from mission.segments.climb import Climb
from mission.segments.here import Here, Leg, Load
from mission.segments.schedule import is_same_speed

Purpose = Literal["mission", "reserve", "aside"]
_ON_GROUND = ("taxi", "take-off", "allowance", "turnaround")


@dataclass(frozen=True)
class Row:
    """One row of the log: a segment of the file, or a bridge between two.

    ``empty_mass`` is the aircraft's without usable fuel at its end [kg], ``tank_capacity`` the fuel
    that stores hold then [kg]. What is flown aside, only to be priced, is no row to show. ``item``
    is the index of the reserve rule's item that a reserve or an aside is flown for.
    """

    name: str
    kind: str
    purpose: Purpose
    empty_mass: float
    tank_capacity: float = 0.0
    leg: str = ""
    item: int = -1


@dataclass(frozen=True)
class FlightPlan:
    """Rows of the log and the spans that fly them.

    ``first_empty_mass`` is without usable fuel before anything leaves or comes aboard [kg],
    ``first_tank_capacity`` the fuel that stores hold then [kg]; ``take_off_mass`` [kg] is what
    fuel is loaded up to, if that is how it is given; ``most_fuel`` and ``most_ramp_mass`` [kg] then
    bound it too, where it is loaded to the limit.
    """

    rows: tuple[Row, ...]
    parts: Parts
    first_empty_mass: float
    first_tank_capacity: float = 0.0
    take_off_mass: float | None = None
    most_fuel: float = np.inf
    most_ramp_mass: float = np.inf

    @property
    def has_cruise_climb(self) -> bool:
        """Whether what follows a cruise begins where it happens to end."""
        return any(span.holds_lift_coefficient for span in self.parts.mission)

    @property
    def stop_empty_mass(self) -> float:
        """Mass [kg] without usable fuel at the end of the mission."""
        return [row for row in self.rows if row.purpose == "mission"][-1].empty_mass


@dataclass
class _Laid:
    """What has been laid so far."""

    here: Here
    rows: list[Row] = field(default_factory=list)
    spans: list[Span] = field(default_factory=list)

    def lay(self, segment: AnySegment, purpose: Purpose) -> None:
        """One segment, with a bridge before it where the speed jumps."""
        if self.here.on_ground and segment.kind not in _ON_GROUND:
            raise InputRefused("the aircraft stands on the ground; put a take-off before it")
        self.bridge(segment, purpose)
        self.here = replace(self.here, row=len(self.rows))
        spans, self.here = segment.lay(self.here)
        self.spans += spans
        self._row(segment.name, segment.kind, purpose)

    def _row(self, name: str, kind: str, purpose: Purpose) -> None:
        aircraft, load = self.here.aircraft, self.here.load
        self.rows.append(
            Row(
                name,
                kind,
                purpose,
                load.empty_mass(aircraft),
                load.tank_capacity(aircraft),
                self.here.leg.name,
            )
        )

    def bridge(self, segment: AnySegment, purpose: Purpose) -> None:
        """A level change of speed of its own where two segments do not meet in speed."""
        before, after = self.here.speed, segment.first_speed(self.here)
        altitude = self.here.pressure_altitude
        if before is None or after is None or altitude is None or self.here.on_ground:
            return
        if _same_speed(before, after, altitude):
            return
        self.here = replace(self.here, row=len(self.rows))
        rating = "maximum_continuous" if segment.kind == "cruise" else "climb"
        if isinstance(segment, Climb):
            rating = segment.rating
        self.spans.append(speed_span(self.here, altitude, before, after, rating))
        self._row(f"bridge to {segment.name}", "acceleration", purpose)
        self.here = replace(self.here, speed=after)


def _same_speed(before: SpeedRule, after: SpeedRule, altitude: float) -> bool:
    """Whether two rules give one Mach number at an altitude; not known where mass decides."""
    if before.depends_on_mass or after.depends_on_mass:
        return before == after and before.kind == "lift_coefficient"
    return is_same_speed(before, after, altitude)


def lay_out(
    mission: Mission,
    world: World,
    masses: Mapping[int, tuple[float, float]],
    cruise_climb_ends: Mapping[int, float],
    choices: Choices,
) -> FlightPlan:
    """All rows and spans of a mission and its reserve flight.

    ``masses`` [kg] at both ends of each row and ``cruise_climb_ends``, by row the pressure
    altitude [m] at which a cruise-climb was found to end, are of an earlier plan as it was flown;
    ``choices`` are what was chosen for its masses. Raises :class:`InputRefused` naming the segment.
    """
    written, reserves = mission.written, mission.written.reserves
    legs = legs_of(written)
    load = Load(written.payload, written.stores)
    _refuse_stores(mission, world.aircraft)
    laid = _Laid(
        Here(
            world=world,
            pressure_altitude=None,
            speed=None,
            on_ground=False,
            departure_elevation=written.departure.elevation,
            leg=legs[0],
            load=load,
            masses=masses,
            choices=choices,
        )
    )
    laid.here = replace(
        laid.here,
        configuration=replace(laid.here.configuration, drag_area=load.drag_area(world.aircraft)),
    )
    for number, segment in enumerate(written.segment, 1):
        leg = next((leg for leg in legs if leg.name and leg.name == segment.starts_leg), None)
        laid.here = replace(
            laid.here, leg=leg or laid.here.leg, ahead=tuple(written.segment[number:])
        )
        try:
            _refuse_fuel_left_twice(written, segment)
            laid.lay(segment, "mission")
        except InputRefused as refusal:
            key = f'segment {number} "{segment.name}"'
            raise type(refusal)(refusal.what, where=mission.where, key=key) from None
        if laid.here.pressure_altitude is None and segment.kind == "cruise":
            end = cruise_climb_ends.get(len(laid.rows) - 1)
            laid.here = replace(laid.here, pressure_altitude=end or laid.spans[-1].start_altitude)
    mission_spans = list(laid.spans)
    for leg in legs:
        _refuse_rest(mission, leg, [span for span in mission_spans if span.leg == leg.number])
    laid.spans = []
    _lay_reserves(mission, laid)
    distances = {leg.number: leg.distance for leg in legs if leg.distance is not None}
    _, alternate = alternate_of(reserves.rule_in_force.items)
    if alternate is not None and alternate.distance is not None:
        distances[RESERVE_LEG] = alternate.distance
    return FlightPlan(
        rows=tuple(laid.rows),
        parts=Parts(
            tuple(_as_flown(span, laid, reserves) for span in mission_spans),
            tuple(_as_flown(span, laid, reserves) for span in laid.spans),
            distances,
            frozenset(leg.number for leg in legs if leg.is_free),
        ),
        first_empty_mass=load.empty_mass(world.aircraft),
        first_tank_capacity=load.tank_capacity(world.aircraft),
        take_off_mass=_take_off_mass(written, world.aircraft),
        **(_most(world, load) if written.fuel.to_take_off_mass == "limit" else {}),
    )


def _most(world: World, load: Load) -> dict[str, float]:
    """What tanks and ramp mass let the fuel be [kg]."""
    tanks = usable_fuel(world.aircraft, world.engine.fuel) + load.tank_capacity(world.aircraft)
    return {"most_fuel": tanks, "most_ramp_mass": world.aircraft.maximum_ramp_mass}


def _take_off_mass(written: MissionFile, aircraft: Aircraft) -> float | None:
    mass = written.fuel.to_take_off_mass
    return aircraft.maximum_take_off_mass if mass == "limit" else _metres(mass)


def legs_of(written: MissionFile) -> list[Leg]:
    """The legs of a mission; without any in the file one that is all of it."""
    elevation = written.destination.elevation
    whole = air_of(written.day, written.headwind, written.air)
    if not written.leg:
        is_free = written.distance == "free"
        distance = None if is_free else written.distance
        return [Leg(0, "", _metres(distance), is_free, whole, elevation)]
    legs = []
    for number, leg in enumerate(written.leg):
        distance = written.radius if leg.distance == "radius" else leg.distance
        day = written.day if leg.day is None else leg.day
        headwind = written.headwind if leg.headwind is None else leg.headwind
        is_own = (leg.day, leg.headwind, leg.air) != (None, None, None)
        legs.append(
            Leg(
                number,
                leg.name,
                _metres(distance),
                distance == "free",
                air_of(day, headwind, leg.air) if is_own else whole,
                elevation if leg.elevation is None else leg.elevation,
            )
        )
    return legs


def _metres(distance: float | str | None) -> float | None:
    return distance if isinstance(distance, float) else None


def _refuse_fuel_left_twice(written: MissionFile, segment: AnySegment) -> None:
    """Fuel as needed is what the segments after this one and the reserves leave it."""
    if written.fuel.as_needed and getattr(segment, "until_fuel", None) is not None:
        raise InputRefused(
            "until_fuel contradicts fuel.as_needed, where what follows says how much is left: give "
            "fuel.load or fuel.to_take_off_mass, or this segment a time, distance or fuel"
        )


def _refuse_stores(mission: Mission, aircraft: Aircraft) -> None:
    """Stores that the aircraft does not know, or more than it can carry."""
    for name, count in mission.written.stores.items():
        store = aircraft.stores.get(name)
        if store is None:
            known = ", ".join(aircraft.stores) or "none"
            what = f"is not known to {aircraft.name}; its file has: {known}"
            raise InputRefused(what, where=mission.where, key=f"stores.{name}")
        if count > store.most:
            what = f"= {count}; {aircraft.name} carries at most {store.most}"
            raise InputRefused(what, where=mission.where, key=f"stores.{name}")


def _refuse_rest(mission: Mission, leg: Leg, spans: Sequence[Span]) -> None:
    """A leg's distance and exactly one cruise for the rest of it go together."""
    rests = [s for s in spans if s.takes_rest]
    place = f' of leg "{leg.name}"' if leg.name else ""
    if len(rests) > 1:
        raise InputRefused(
            f'two cruises{place} have distance = "rest"; give all but one a distance',
            where=mission.where,
            key="segment",
        )
    if (leg.distance is not None or leg.is_free) and not rests:
        given = "" if leg.distance is None else f"= {leg.distance / 1852.0:,.0f} nmi "
        raise InputRefused(
            f'{given}is given{place}, but no cruise has distance = "rest" to meet it',
            where=mission.where,
            key="distance",
        )


def _lay_reserves(mission: Mission, laid: _Laid) -> None:
    """The reserve flight, each of its rows with the item that it is flown for."""
    reserves = mission.written.reserves
    key = "reserves" if reserves.alternate is None else "reserves.alternate"
    for stage in reserve_stages(reserves, laid.here):
        first = len(laid.rows)
        laid.here = stage.start or laid.here
        try:
            laid.lay(stage.segment, stage.purpose)
        except InputRefused as refusal:
            what = f'"{stage.segment.name}": {refusal.what}'
            raise type(refusal)(what, where=mission.where, key=key) from None
        *bridges, own = laid.rows[first:]
        ways = [replace(row, item=stage.way) for row in bridges]
        laid.rows[first:] = [*ways, replace(own, item=stage.item)]


def _as_flown(span: Span, laid: _Laid, reserves: ReservesTable) -> Span:
    row = laid.rows[span.segment]
    return as_flown(span, row.kind, row.purpose, reserves.rule_in_force.items)
