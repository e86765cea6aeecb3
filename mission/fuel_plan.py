"""Fuel: the load that meets the reserves exactly or a given one; what each reserve is and costs.

Contingency is a fraction of trip fuel, not less than a time at the mean fuel flow of the longest
cruise (of the trip where there is none); it is carried unburnt. Alternate and final reserve are
flown, in that order, from the mass at the end of the mission.
"""

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

Array = NDArray[np.float64]
_LIKE_KEROSENE = 0.1  # share of its density within which a mass of fuel tells a volume


@dataclass(frozen=True)
class Sums:
    """Fuel [kg] and time [s] of the parts of a flight that fuel planning asks for."""

    mission_fuel: float
    trip_fuel: float
    alternate_fuel: float
    hold_fuel: float
    contingency: float

    @property
    def reserves(self) -> float:
        """All that must be aboard at the end of the mission [kg]."""
        return self.contingency + self.alternate_fuel + self.hold_fuel


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
    trip = np.isin(rows, list(trip_rows(plan))) & is_mission
    trip_fuel = float(burnt[trip].sum())
    hold_row = len(plan.rows) - 1 if written.reserves.final_reserve_time > 0.0 else -1
    is_hold = ~is_mission & (rows == hold_row)
    rate = _consumption(plan, burnt, taken, rows, trip)
    reserves = written.reserves
    contingency = max(
        reserves.contingency_fraction * trip_fuel, reserves.contingency_least_time * rate
    )
    return Sums(
        mission_fuel=float(burnt[is_mission].sum()),
        trip_fuel=trip_fuel,
        alternate_fuel=float(burnt[~is_mission & ~is_hold].sum()),
        hold_fuel=float(burnt[is_hold].sum()),
        contingency=contingency,
    )


def _consumption(
    plan: FlightPlan, burnt: Array, taken: Array, rows: Array, trip: NDArray[np.bool_]
) -> float:
    """Mean fuel flow [kg/s] of the longest cruise, or of the trip where it has none."""
    cruises = [i for i in trip_rows(plan) if plan.rows[i].kind == "cruise"]
    times = {i: float(taken[trip & (rows == i)].sum()) for i in cruises}
    chosen = trip if not times else trip & (rows == max(times, key=lambda i: times[i]))
    total = float(taken[chosen].sum())
    return float(burnt[chosen].sum()) / total if total > 0.0 else 0.0


def closure(plan: FlightPlan, written: MissionFile, aircraft: Aircraft) -> Closure:
    """The mass at the end of the mission that the fuel asked for leaves."""
    spans = plan.parts.mission
    received = sum(span.received for span in spans)
    first = trip_rows(plan)[0]
    before = [i for i, span in enumerate(spans) if span.segment < first]

    def as_needed(stop: Array, integrals: Integrals) -> Array:
        reserves = [add_up(plan, written, integrals, m).reserves for m in range(stop.size)]
        return plan.stop_empty_mass + np.array(reserves)

    def given(stop: Array, integrals: Integrals) -> Array:
        assert written.fuel.load is not None
        burnt = sum(fuel[-1] for fuel in integrals.fuel[: len(spans)])
        return plan.first_empty_mass + written.fuel.load + received - burnt

    def to_take_off_mass(stop: Array, integrals: Integrals) -> Array:
        mass = written.fuel.to_take_off_mass
        wanted = mass if isinstance(mass, float) else aircraft.maximum_take_off_mass
        burnt = sum(fuel[-1] for fuel in integrals.fuel[: len(spans)])
        on_ground = sum(integrals.fuel[i][-1] - spans[i].received for i in before)
        return np.broadcast_to(wanted + on_ground + received - burnt, stop.shape)

    if written.fuel.as_needed:
        return as_needed
    return to_take_off_mass if written.fuel.load is None else given


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
