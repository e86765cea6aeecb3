"""How far with what payload, or for how long on station: the boundary of a mission.

Payload-range: at every payload all the fuel that tanks, ramp mass and take-off mass allow is
loaded, and flown but for the reserves. Time on station against radius likewise, at the mission's
own payload.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from engine.errors import InputRefused
from engine.interface import Engine
from mission.aircraft import Aircraft
from mission.coverage import refuse_other_day
from mission.errors import CannotBeFlown
from mission.march.world import World
from mission.mission_file import Mission
from mission.plan import FlightPlan
from mission.questions.freeing import (
    at_payload,
    at_radius,
    freed,
    on_station,
    payload_that_leaves,
    station_of,
)
from mission.questions.members import Solved, Wanted, first_plan, solve_members
from mission.questions.payload_corners import governing, loads_of, refuse_below
from mission.questions.results_of_members import Result, results_of
from mission.results import Failure, Totals
from mission.segments.loiter import Loiter

Array = NDArray[np.float64]
POINTS, FEWEST, MOST = 40, 9, 400
_INSIDE = 1e-4  # of the least and the greatest radius, by which points stay between them
_ROUGHLY = 1e-5  # of the fuel aboard, to which the greatest radius is found
_BELOW_LANDING = 0.05  # kg, by which a payload stays below what landing mass allows


@dataclass(frozen=True)
class Point:
    """One flight of the boundary: what it carries, how far, and what holds it there.

    Attributes
    ----------
    payload : [kg]
    station_time : [s] at the station of a radius mission
    reach : ground distance, or radius [m]
    totals : of the whole flight; None where it could not even be laid out
    governs : the limits that bound the fuel loaded, more than one at a corner
    corner : its name where it is a corner, else empty
    failure : why the flight cannot be flown, in words where it could not be laid out; else None
    """

    payload: float
    station_time: float
    reach: float
    totals: Totals | None
    governs: tuple[str, ...]
    corner: str
    failure: Failure | str | None

    @property
    def is_flown(self) -> bool:
        """Whether this can be flown."""
        return self.failure is None


@dataclass(frozen=True)
class Reach:
    """The boundary in the order of rising reach.

    Attributes
    ----------
    top : what bounds the first point's payload; empty where payload is the mission's own
    is_radius : reach is a radius, not a ground distance
    station : name of the loiter whose time varies; empty where payload does
    error : greatest change with twice the steps, of reach [m], of time on station [s] where that
        varies
    unclosed : points whose fuel the search left unspent
    flights : whole flights that a point took at the most
    plans : how many plans the points share
    """

    mission: str
    aircraft: str
    engine: str
    day: float
    points: tuple[Point, ...]
    top: str
    is_radius: bool
    station: str
    error: float
    unclosed: int
    flights: int
    plans: int

    @property
    def corners(self) -> tuple[Point, ...]:
        """The corners alone."""
        return tuple(point for point in self.points if point.corner)

    @property
    def flown(self) -> tuple[Point, ...]:
        """What can be flown."""
        return tuple(point for point in self.points if point.is_flown)


@dataclass(frozen=True)
class _Asked:
    """Points before they are flown: payloads [kg] and radii [m] (count,), names of corners.

    Radii are None where they are what is solved for.
    """

    mission: Mission
    world: World
    payloads: Array
    radii: Array | None
    corners: dict[int, str]
    plan: FlightPlan
    top: str = ""
    station: str = ""


def reach(mission: Mission, aircraft: Aircraft, engine: Engine, *, points: int = POINTS) -> Reach:
    """The boundary of a mission with an aircraft and an engine.

    Raises :class:`engine.errors.InputRefused` for a mission that has nothing to stretch,
    :class:`mission.errors.CannotBeFlown` where no point has fuel for the least distance.
    """
    if not FEWEST <= points <= MOST:
        raise InputRefused(f"= {points}; allowed are {FEWEST} to {MOST}", key="points")
    refuse_other_day(mission, engine)
    opened, world = freed(mission), World(aircraft, engine)
    station = station_of(opened) if opened.written.radius == "free" else None
    if station is None:
        return _by_payload(opened, world, points)
    return _by_radius(opened, world, station, points)


def _by_payload(mission: Mission, world: World, count: int) -> Reach:
    """Reach against payload, from the greatest to the least.

    Where the landing mass bounds it the greatest payload is found from the masses of the first
    boundary flown.
    """
    least = payload_that_leaves(mission.written.segment)
    bare = at_payload(mission, least)
    plan = first_plan(bare, world)
    loads = loads_of(world, plan, least)

    def asked_up_to(most: float, top: str) -> _Asked:
        payloads = loads.spread(most, count)
        corners = {
            int(np.argmin(np.abs(payloads - payload))): name
            for payload, name in loads.corners(most).items()
        }
        return _Asked(bare, world, payloads, None, corners, plan, top)

    asked = asked_up_to(loads.by_zero_fuel, "zero-fuel mass")
    solved = solve_members(bare, world, Wanted(asked.payloads - least))
    results = results_of(bare, world, solved)
    most = _most_by_landing(asked, results)
    if most is not None:
        refuse_below(most, least, "landing mass")
        asked = asked_up_to(most, "landing mass")
        solved = solve_members(bare, world, Wanted(asked.payloads - least))
        results = results_of(bare, world, solved)
    return _reach(asked, solved, results)


def _most_by_landing(asked: _Asked, results: list[Result | CannotBeFlown]) -> float | None:
    """The payload [kg] that lands at the greatest landing mass, where the greatest lands above."""
    known = [
        (found.totals.landing_mass, float(payload))
        for found, payload in zip(results, asked.payloads, strict=True)
        if isinstance(found, Result)
    ]
    masses, payloads = np.array(known[::-1]).T
    limit = asked.world.aircraft.maximum_landing_mass
    if masses[-1] <= limit:
        return None
    if masses[0] > limit:
        return float(payloads[0] - (masses[0] - limit))
    return float(np.interp(limit, masses, payloads)) - _BELOW_LANDING


def _by_radius(mission: Mission, world: World, station: Loiter, count: int) -> Reach:
    """Time on station against radius: from the least radius to that which leaves no time."""
    alone = Wanted(np.zeros(1))
    passes = on_station(mission, station, 0.0)
    farthest = results_of(passes, world, solve_members(passes, world, alone, _ROUGHLY))[0]
    _refuse_no_answer([farthest])
    assert isinstance(farthest, Result)
    low, high = farthest.least * (1.0 + _INSIDE), farthest.free * (1.0 - _INSIDE)
    radii = np.linspace(low, max(low, high), count)
    stays = at_radius(on_station(mission, station, "free"), farthest.least)
    solved = solve_members(stays, world, Wanted(np.zeros(count), radii))
    asked = _Asked(
        stays,
        world,
        np.full(count, mission.written.payload),
        radii,
        {0: "longest on station", count - 1: "no time on station"},
        first_plan(stays, world),
        station=station.name,
    )
    return _reach(asked, solved, results_of(stays, world, solved), farthest.flights)


def _reach(
    asked: _Asked, solved: Solved, results: list[Result | CannotBeFlown], before: int = 0
) -> Reach:
    """The boundary from flown members, ``before`` of whose flights were for something else."""
    _refuse_no_answer(results)
    flown = [found for found in results if isinstance(found, Result)]
    world = asked.world
    points = tuple(_point(asked, i, found) for i, found in enumerate(results))
    return Reach(
        mission=asked.mission.name,
        aircraft=world.aircraft.name,
        engine=world.engine.name,
        day=asked.mission.written.day,
        points=points,
        top=asked.top,
        is_radius=asked.mission.written.radius is not None,
        station=asked.station,
        error=max((found.error for found in flown if found.failure is None), default=0.0),
        unclosed=sum(not found.is_closed for found in flown if found.has_answer),
        flights=max(found.flights for found in flown) + before,
        plans=len(solved.groups),
    )


def _point(asked: _Asked, place: int, found: Result | CannotBeFlown) -> Point:
    payload, corner = float(asked.payloads[place]), asked.corners.get(place, "")
    radius = None if asked.radii is None else float(asked.radii[place])
    if isinstance(found, CannotBeFlown):
        return Point(payload, 0.0, radius or 0.0, None, (), corner, found.what)
    far = found.free if asked.mission.written.radius == "free" else found.totals.ground_distance
    return Point(
        payload=payload,
        station_time=0.0 if radius is None else found.free,
        reach=far if radius is None else radius,
        totals=found.totals,
        governs=governing(asked.world, asked.plan, found.totals),
        corner=corner,
        failure=found.failure,
    )


def _refuse_no_answer(results: list[Result | CannotBeFlown]) -> None:
    """Refuse where none has fuel for the least distance, naming the least that is missing."""
    flown = [found for found in results if isinstance(found, Result)]
    if not flown:
        raise next(found for found in results[::-1] if isinstance(found, CannotBeFlown))
    if any(found.has_answer for found in flown):
        return
    missing = min(-found.totals.fuel_margin for found in flown)
    raise CannotBeFlown(
        f"no distance is short enough: {missing:,.0f} kg of fuel are missing at the least; carry "
        "less, keep smaller reserves, or take larger tanks"
    )
