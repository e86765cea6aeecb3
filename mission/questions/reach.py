"""How far with what payload, or for how long on station: the boundary of a mission.

Payload-range: at every payload all the fuel that tanks, ramp mass and take-off mass allow is
loaded, and flown but for the reserves. The corners are the greatest payload, the tanks full at
take-off mass, and no payload (ferry): common practice, no source. Radius against time on station
likewise, at the mission's own payload.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import Any

import numpy as np
from numpy.typing import NDArray

from engine.interface import Engine
from mission.aircraft import Aircraft, governing_tank_limit
from mission.coverage import refuse_missing_ratings, refuse_other_day
from mission.errors import CannotBeFlown
from mission.fuel_plan import add_up
from mission.limits import first_failure
from mission.logbook import segment_logs, totals
from mission.march.world import World
from mission.mission_file import Mission
from mission.questions.freeing import freed, station_of
from mission.questions.members import Group, Wanted, solve_members
from mission.results import Failure, Totals

Array = NDArray[np.float64]
POINTS = 40
_ROUNDS = 4  # in which the greatest payload comes down to what landing mass allows
_SAME_MASS = 0.5  # kg


@dataclass(frozen=True)
class Point:
    """One flight of the boundary: what it carries, how far, and what holds it there.

    Attributes
    ----------
    payload : [kg]
    station_time : [s] at the station of a radius mission
    reach : ground distance or radius [m]
    totals : of the whole flight
    governs : the limit that bounds the fuel loaded
    corner : its name where it is a corner, else empty
    failure : why the flight cannot be flown, None where it can
    """

    payload: float
    station_time: float
    reach: float
    totals: Totals
    governs: str
    corner: str
    failure: Failure | None


@dataclass(frozen=True)
class Reach:
    """The boundary in the order of falling payload, or of rising time on station.

    ``top`` says what bounds the first point's payload; ``flights`` how many whole flights a point
    took; ``groups`` how many plans the points share; ``is_radius`` that reach is a radius.
    """

    mission: str
    aircraft: str
    engine: str
    points: tuple[Point, ...]
    top: str
    is_radius: bool
    station: str
    flights: int
    groups: int

    @property
    def corners(self) -> tuple[Point, ...]:
        """The corners alone."""
        return tuple(point for point in self.points if point.corner)


def reach(mission: Mission, aircraft: Aircraft, engine: Engine, *, points: int = POINTS) -> Reach:
    """The boundary of a mission with an aircraft and an engine.

    Raises :class:`engine.errors.InputRefused` for a mission that has nothing to stretch,
    :class:`mission.errors.CannotBeFlown` where no payload leaves fuel for the least distance.
    """
    refuse_other_day(mission, engine)
    open_mission = freed(mission)
    world = World(aircraft, engine)
    if open_mission.written.radius == "free":
        return _radius(open_mission, world, points)
    return _payload_range(open_mission, world, points)


def _payload_range(mission: Mission, world: World, count: int) -> Reach:
    aircraft, written = world.aircraft, mission.written
    first = _flown(mission, world, np.array([0.0]))
    others = first.empty - written.payload
    by_zero_fuel = aircraft.maximum_zero_fuel_mass - others
    most, top = by_zero_fuel, "zero-fuel mass"
    found = first
    payloads = np.array([0.0])
    for _ in range(_ROUNDS):
        payloads = _payloads(most, first, aircraft, count)
        found = _flown(mission, world, payloads)
        over = found.totals[0].landing_mass - aircraft.maximum_landing_mass
        if over <= _SAME_MASS:
            break
        most, top = most - over, "landing mass"
    names = _corner_names(payloads, most, first.full_tanks_payload)
    return _reach_of(mission, world, found, payloads, np.zeros(payloads.size), names, top)


def _payloads(most: float, first: _Flown, aircraft: Aircraft, count: int) -> Array:
    """Payloads [kg] from the greatest to none, the corner with full tanks exactly among them."""
    if most <= 0.0:
        raise CannotBeFlown(
            f"no payload is left: {aircraft.name} is at its greatest zero-fuel or landing mass "
            "without any"
        )
    corner = first.full_tanks_payload
    if not 0.0 < corner < most:
        return np.linspace(most, 0.0, count)
    before = min(max(round(count * (most - corner) / most), 4), count - 4)
    return np.concatenate(
        [np.linspace(most, corner, before), np.linspace(corner, 0.0, count - before + 1)[1:]]
    )


def _corner_names(payloads: Array, most: float, full_tanks: float) -> list[str]:
    names = [""] * payloads.size
    names[0], names[-1] = "greatest payload", "ferry, no payload"
    if 0.0 < full_tanks < most:
        names[int(np.argmin(np.abs(payloads - full_tanks)))] = "tanks full"
    return names


@dataclass(frozen=True)
class _Flown:
    """Members flown: groups, totals and failures in the members' order.

    ``empty`` is the mission's mass without usable fuel [kg]; ``full_tanks_payload`` the payload at
    which full tanks meet take-off or ramp mass [kg].
    """

    groups: list[Group]
    totals: list[Totals]
    failures: list[Failure | None]
    values: Array
    has_answer: NDArray[np.bool_]
    empty: float
    full_tanks_payload: float


def _flown(
    mission: Mission,
    world: World,
    payloads: Array,
    station: tuple[str, Array] | None = None,
) -> _Flown:
    """Every payload [kg] flown as far as its fuel goes."""
    written = mission.written
    wanted = Wanted(payloads - written.payload, station)
    groups = solve_members(mission, world, wanted)
    count = payloads.size
    sums: list[Any] = [None] * count
    failures: list[Failure | None] = [None] * count
    values, has_answer = np.zeros(count), np.zeros(count, dtype=bool)
    for group in groups:
        refuse_missing_ratings(mission, group.plan, world.engine)
        for place, member in enumerate(group.members):
            plan, alone = group.member(place)
            total = totals(plan, alone, add_up(plan, written, alone.integrals), 0.0)
            logs = segment_logs(world, plan, alone)
            failures[member] = first_failure(world, plan, alone, written, total, logs, closes=True)
            sums[member] = total
            values[member] = group.root.value[place]
            has_answer[member] = group.root.has_answer[place]
    plan = groups[0].plan
    taxi = sums[0].ramp_mass - sums[0].takeoff_mass
    to_limit = min(world.aircraft.maximum_take_off_mass + taxi, plan.most_ramp_mass)
    return _Flown(
        groups, sums, failures, values, has_answer, plan.first_empty_mass,
        to_limit - (plan.first_empty_mass - written.payload) - plan.most_fuel,
    )  # fmt: skip


def _radius(mission: Mission, world: World, count: int) -> Reach:
    """Radius against time on station: from no time to all the time there is at no radius."""
    station = station_of(mission)
    payload = np.array([mission.written.payload])
    if station is None:
        found = _flown(mission, world, payload)
        return _reach_of(mission, world, found, payload, np.zeros(1), ["radius"], "payload")
    longest = _longest_time(mission, world, station)
    times = np.linspace(0.0, longest, count)
    payloads = np.full(count, mission.written.payload)
    found = _flown(mission, world, payloads, (station, np.maximum(times, 1.0)))
    names = [""] * count
    names[0], names[-1] = "no time on station", "longest on station"
    made = _reach_of(mission, world, found, payloads, times, names, "payload")
    return replace(made, station=station)


def _longest_time(mission: Mission, world: World, station: str) -> float:
    """Time on station [s] that is left at the least radius, by chords of the margin there."""
    payload = np.array([mission.written.payload])
    low, high = 0.0, 3600.0
    for _ in range(6):
        found = _flown(mission, world, payload, (station, np.array([high])))
        if not found.has_answer[0]:
            break
        low, high = high, 2.0 * high
    for _ in range(10):
        middle = 0.5 * (low + high)
        found = _flown(mission, world, payload, (station, np.array([middle])))
        low, high = (middle, high) if found.has_answer[0] else (low, middle)
    return low


def _reach_of(
    mission: Mission,
    world: World,
    found: _Flown,
    payloads: Array,
    times: Array,
    names: list[str],
    top: str,
) -> Reach:
    """The boundary from flown members."""
    if not found.has_answer.any():
        total = found.totals[0]
        raise CannotBeFlown(
            f"no distance is short enough: {-total.fuel_margin:,.0f} kg of fuel are missing at the "
            "least; carry less, or take larger tanks"
        )
    is_radius = mission.written.radius == "free"
    points = tuple(
        Point(
            payload=float(payloads[i]),
            station_time=float(times[i]),
            reach=float(found.values[i]) if is_radius else found.totals[i].ground_distance,
            totals=found.totals[i],
            governs=_governs(world, found, found.totals[i]),
            corner=names[i],
            failure=found.failures[i],
        )
        for i in range(payloads.size)
    )
    return Reach(
        mission=mission.name,
        aircraft=world.aircraft.name,
        engine=world.engine.name,
        points=points,
        top=top,
        is_radius=is_radius,
        station="",
        flights=max(group.root.flights for group in found.groups),
        groups=len(found.groups),
    )


def _governs(world: World, found: _Flown, total: Totals) -> str:
    """What bounds the fuel that is loaded."""
    aircraft, plan = world.aircraft, found.groups[0].plan
    rooms = {
        "take-off mass": aircraft.maximum_take_off_mass - total.takeoff_mass,
        "ramp mass": aircraft.maximum_ramp_mass - total.ramp_mass,
        f"tank {governing_tank_limit(aircraft, world.engine.fuel)}": plan.most_fuel
        - total.loaded_fuel,
    }
    return min(rooms, key=lambda name: abs(rooms[name]))
