"""Fuel: the load that meets the reserves exactly, or a given one; what the trip is."""

from __future__ import annotations

from dataclasses import dataclass
from math import isinf

import numpy as np
from numpy.typing import NDArray

from engine.fuels import KEROSENE, Fuel
from mission.aircraft import Aircraft
from mission.march.sweep import Closure, Integrals
from mission.mission_file import MissionFile
from mission.plan import FlightPlan
from mission.reserves.items import Trip, fuel_flow_factor
from mission.reserves.pricing import price

Array = NDArray[np.float64]
_LIKE_KEROSENE = 0.1  # share of its density within which a mass of fuel tells a volume


@dataclass(frozen=True)
class Sums:
    """What fuel planning asks of a flight, fuels in [kg].

    Attributes
    ----------
    mission_fuel : burnt from the first row to the last of the mission
    trip : what reserves are priced from
    reserves_flown, reserve_fuels : flown for, and kept aboard for, each item of the reserve rule
    fuel_flow_margin : the part of mission fuel that a fuel-flow margin of the rule has added
    """

    mission_fuel: float
    trip: Trip
    reserves_flown: tuple[float, ...]
    reserve_fuels: tuple[float, ...]
    fuel_flow_margin: float

    @property
    def trip_fuel(self) -> float:
        """Burnt from take-off to landing [kg]."""
        return self.trip.fuel

    @property
    def reserves(self) -> float:
        """All that must be aboard at the end of the mission [kg]."""
        return sum(self.reserve_fuels)


def trip_rows(plan: FlightPlan) -> range:
    """Rows from the start of take-off to the end of landing.

    Without a take-off it starts with the first row that is no taxi. It ends with the last row
    that is flown, and the allowances that follow it on the spot: they stand for the landing.
    """
    kinds = [row.kind for row in plan.rows if row.purpose == "mission"]
    moving = [i for i, kind in enumerate(kinds) if kind != "taxi"] or list(range(len(kinds)))
    flown = [i for i in moving if kinds[i] != "allowance"] or moving
    first = kinds.index("take-off") if "take-off" in kinds else moving[0]
    last = flown[-1]
    while kinds[last + 1 : last + 2] == ["allowance"]:
        last += 1
    return range(first, last + 1)


def add_up(plan: FlightPlan, written: MissionFile, integrals: Integrals, member: int = 0) -> Sums:
    """Sums of one member from the integrals along every span."""
    spans = [*plan.parts.mission, *plan.parts.reserve]
    burnt = np.array([f[-1, member] for f in integrals.fuel])
    taken = np.array([t[-1, member] for t in integrals.time])
    rows = np.array([span.segment for span in spans])
    is_mission = np.arange(len(spans)) < len(plan.parts.mission)
    is_trip = np.isin(rows, list(trip_rows(plan))) & is_mission
    trip = Trip(
        fuel=float(burnt[is_trip].sum()),
        time=float(taken[is_trip].sum()),
        cruise_fuel_flow=_cruise_fuel_flow(plan, burnt, taken, rows, is_trip),
        initial_fuel=0.0,
    )
    items = written.reserves.rule_in_force.items
    flown_for = np.array([plan.rows[row].item for row in rows])
    flown = tuple(float(burnt[flown_for == index].sum()) for index in range(len(items)))
    mission_fuel = float(burnt[is_mission].sum())
    received = sum(span.received for span in plan.parts.mission)
    fuel_received = received - (plan.stop_empty_mass - plan.first_empty_mass)
    loads = loaded(plan, written, integrals)
    load = None if loads is None else float(loads[member if loads.size > 1 else 0])
    trip, fuels = price(items, flown, trip, mission_fuel - fuel_received, load)
    by_flow = is_mission & np.array([span.march != "book" for span in spans])
    margin = float(burnt[by_flow].sum()) * (1.0 - 1.0 / fuel_flow_factor(items))
    return Sums(mission_fuel, trip, flown, fuels, margin)


def loaded(plan: FlightPlan, written: MissionFile, integrals: Integrals) -> Array | None:
    """Usable fuel at engine start [kg], one or (members,); None where it is as needed."""
    if written.fuel.as_needed:
        return None
    if plan.take_off_mass is None:
        assert written.fuel.load is not None
        return np.array([written.fuel.load])
    first = trip_rows(plan)[0]
    lost = np.zeros(1)
    for span, fuel in zip(plan.parts.mission, integrals.fuel, strict=False):
        if span.segment < first:
            lost = lost + fuel[-1] - span.received
    empty = plan.first_empty_mass + plan.parts.added
    most = np.minimum(plan.most_fuel, plan.most_ramp_mass - empty)
    return np.minimum(plan.take_off_mass + lost - empty, most)


def _cruise_fuel_flow(
    plan: FlightPlan, burnt: Array, taken: Array, rows: Array, trip: NDArray[np.bool_]
) -> float:
    """Mean fuel flow [kg/s] of the longest cruise, or of the trip where it has none."""
    cruises = [i for i in trip_rows(plan) if plan.rows[i].kind == "cruise"]
    times = {i: float(taken[trip & (rows == i)].sum()) for i in cruises}
    chosen = trip if not times else trip & (rows == max(times, key=lambda i: times[i]))
    total = float(taken[chosen].sum())
    return float(burnt[chosen].sum()) / total if total > 0.0 else 0.0


def closure(plan: FlightPlan, written: MissionFile) -> Closure:
    """The mass at the end of the mission that the fuel asked for leaves."""
    spans, added = plan.parts.mission, plan.parts.added
    received = sum(span.received for span in spans)

    def as_needed(stop: Array, integrals: Integrals) -> Array:
        reserves = [add_up(plan, written, integrals, m).reserves for m in range(stop.size)]
        mass: Array = plan.stop_empty_mass + added + np.array(reserves)
        return mass

    def given(stop: Array, integrals: Integrals) -> Array:
        load = loaded(plan, written, integrals)
        assert load is not None
        burnt = np.sum([fuel[-1] for fuel in integrals.fuel[: len(spans)]], axis=0)
        mass: Array = plan.first_empty_mass + added + load + received - burnt
        return mass

    return as_needed if written.fuel.as_needed else given


def tank_warnings(aircraft: Aircraft, fuel: Fuel, loaded: float) -> tuple[str, ...]:
    """What to know of tanks that are bounded by mass alone, with a fuel unlike kerosene in them."""
    is_alike = abs(fuel.density / KEROSENE.density - 1.0) < _LIKE_KEROSENE
    if is_alike or not isinf(aircraft.tank_volume):
        return ()
    return (
        f"tanks: the aircraft bounds them by mass alone; {loaded:,.0f} kg of {fuel.name} take "
        f"{loaded / fuel.density:,.1f} m3, as much kerosene {loaded / KEROSENE.density:,.1f} m3: "
        "give fuel_tanks.volume",
    )
