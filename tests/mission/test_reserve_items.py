"""Items of reserve rules in flight, on an engine whose consumption is one number.

At constant consumption c (weight of fuel per thrust and time) a hold at the speed of least fuel
flow is one at the greatest lift-to-drag ratio E, and burns m (1 - exp(-c t / E)) of a mass m.
"""

from __future__ import annotations

from itertools import pairwise
from math import exp, sqrt
from pathlib import Path
from typing import Any

import pytest
from mission_files import (
    AIRCRAFT,
    ALTERNATE,
    CONTINGENCY,
    OUT_AND_DOWN,
    TO_ALTERNATE,
    Content,
    engine_content,
    final_reserve,
    fly_files,
    mission_content,
    segment,
)

from engine.quantities import FOOT, NAUTICAL_MILE
from mission.reserves.items import (
    Alternate,
    FuelFlowMargin,
    Hold,
    ShareOfInitialFuel,
    ShareOfTripFuel,
    ShareOfTripTime,
    TimeAtCruiseConsumption,
    TimeAtTripConsumption,
    Trip,
)
from mission.reserves.pricing import price
from mission.results import Flight

CONSUMPTION = 0.6 / 3600.0  # 1/s
_POLAR = AIRCRAFT["drag_polar"]
BEST = 0.5 / sqrt(_POLAR["zero_lift_drag_coefficient"] * _POLAR["induced_drag_factor"])
# The slope of fuel flow is a difference over 0.004 of Mach number to each side, some 1.5 % of it:
# that puts the speed off by its square, 1e-4, and fuel, flat there, above the least by 5e-8.
HELD = 1e-7
MILITARY = {"rule": "classic military"}


def held(mass: float, time: float, factor: float = 1.0) -> float:
    """Fuel [kg] of a hold of so many seconds from a mass [kg]."""
    return mass * (1.0 - exp(-factor * CONSUMPTION * time / BEST))


def _drag_over_lift(coefficient: float) -> float:
    zero_lift, induced = _POLAR["zero_lift_drag_coefficient"], _POLAR["induced_drag_factor"]
    return float((zero_lift + induced * coefficient**2) / coefficient)


def planned(folder: Path, reserves: Content, miles: int = 1000, **changes: Any) -> Flight:
    mission = mission_content(OUT_AND_DOWN, distance=f"{miles} nmi", reserves=reserves, **changes)
    flight = fly_files(folder, mission=mission)
    assert flight.failure is None
    return flight


def kept(flight: Flight) -> dict[str, float]:
    return {line.item: line.fuel for line in flight.reserves}


def notes(flight: Flight) -> dict[str, str]:
    return {line.item: line.note for line in flight.reserves}


# --- Priced by hand -----------------------------------------------------------------------------

# A trip of 3,000 kg in 200 min, 0.2 kg/s in its cruise.
TRIP = Trip(fuel=3000.0, time=12000.0, cruise_fuel_flow=0.2, initial_fuel=0.0)


@pytest.mark.parametrize(
    ("entry", "flown", "fuel"),
    [
        (ShareOfTripFuel(0.05), 0.0, 150.0),
        (ShareOfTripFuel(0.05, 300.0), 160.0, 160.0),
        (ShareOfTripFuel(0.05, 300.0), 140.0, 150.0),
        (TimeAtTripConsumption(1200.0), 0.0, 300.0),
        (TimeAtTripConsumption(1200.0, 300.0), 310.0, 310.0),
        (ShareOfTripTime(0.10), 0.0, 240.0),
        (TimeAtCruiseConsumption(2700.0), 0.0, 540.0),
        (Alternate(), 700.0, 700.0),
        (Hold(1800.0), 400.0, 400.0),
    ],
)
def test_each_item_by_hand(entry: Any, flown: float, fuel: float) -> None:
    _, (found,) = price((entry,), (flown,), TRIP, 3100.0, None)
    assert found == pytest.approx(fuel, rel=1e-15)


def test_a_share_of_initial_fuel_counts_itself() -> None:
    """L = 3,100 + 400 + 0.05 L: 3,684.2 kg, of which 184.2."""
    items = (Hold(1200.0), ShareOfInitialFuel(0.05), FuelFlowMargin(0.05))
    trip, fuels = price(items, (400.0, 0.0, 0.0), TRIP, 3100.0, None)
    assert trip.initial_fuel == pytest.approx(3500.0 / 0.95, rel=1e-15)
    assert fuels == pytest.approx((400.0, 0.05 * 3500.0 / 0.95, 0.0), rel=1e-15)


def test_a_share_of_a_given_load_is_just_that() -> None:
    _, fuels = price((Hold(1200.0), ShareOfInitialFuel(0.05)), (400.0, 0.0), TRIP, 3100.0, 6000.0)
    assert fuels == pytest.approx((400.0, 300.0), rel=1e-15)


def test_a_trip_that_takes_no_time_has_no_fuel_flow() -> None:
    nowhere = Trip(fuel=50.0, time=0.0, cruise_fuel_flow=0.0, initial_fuel=0.0)
    assert TimeAtTripConsumption(1200.0).fuel(0.0, nowhere) == 0.0


# --- Flown --------------------------------------------------------------------------------------


def test_a_hold_burns_what_the_closed_form_says(tmp_path: Path) -> None:
    flight = planned(tmp_path, {"item": [final_reserve("30 min")]})
    landed = flight.segments[-1].mass_start
    assert kept(flight)["final reserve"] == pytest.approx(held(landed, 1800.0), rel=HELD)


def test_contingency_is_not_less_than_a_hold_over_the_destination(tmp_path: Path) -> None:
    """From the mass at the stop, whatever the alternate and its elevation."""
    items = [CONTINGENCY | {"share": 0.001, "least_hold_time": "5 min"}, TO_ALTERNATE]
    flight = planned(tmp_path, {"item": items, "alternate": ALTERNATE | {"elevation": "5000 ft"}})
    expected = held(flight.totals.landing_mass, 300.0)
    assert expected > 0.001 * flight.totals.trip_fuel
    assert kept(flight)["contingency"] == pytest.approx(expected, rel=HELD)
    assert notes(flight)["contingency"] == "5 min hold 1,500 ft above the destination, carried"


def test_the_larger_of_share_and_hold_counts(tmp_path: Path) -> None:
    items = [CONTINGENCY | {"least_hold_time": "1 min"}]
    flight = planned(tmp_path, {"item": items})
    assert kept(flight)["contingency"] == pytest.approx(0.05 * flight.totals.trip_fuel, rel=1e-12)
    assert notes(flight)["contingency"] == "5 % of trip fuel, carried"


def test_what_is_flown_aside_is_no_part_of_the_reserve_flight(tmp_path: Path) -> None:
    items = [CONTINGENCY | {"least_hold_time": "5 min"}, final_reserve("30 min")]
    flight = planned(tmp_path, {"item": items})
    assert [log.name for log in flight.segments] == [
        "climb", "cruise", "descent", "final reserve hold",
    ]  # fmt: skip
    for before, after in pairwise(flight.segments):
        assert after.mass_start == pytest.approx(before.mass_end, rel=1e-14)


def test_a_hold_flown_aside_has_limits_too(tmp_path: Path) -> None:
    """Over a destination too high for its thrust: it is told, with the row that fails."""
    short = [OUT_AND_DOWN[0] | {"to": "FL100", "mach": 0.4}, {"kind": "cruise", "distance": "rest"}]
    mission = mission_content(
        short,
        distance="300 nmi",
        destination={"elevation": "38000 ft"},
        reserves={"item": [CONTINGENCY | {"least_hold_time": "5 min"}]},
    )
    flight = fly_files(tmp_path, mission=mission, engine=engine_content(static_thrust="12 kN"))
    assert flight.failure is not None
    assert flight.failure.segment == "contingency hold"
    assert "thrust" in flight.failure.what
    assert flight.segments[-1].name == "contingency hold"


def test_times_are_priced_at_the_flow_of_the_longest_cruise(tmp_path: Path) -> None:
    items = [
        {"kind": "share of trip time", "share": 0.1},
        {"kind": "time at cruise consumption", "time": "45 min"},
        {"kind": "time at trip consumption", "time": "20 min", "name": "twenty minutes"},
    ]
    flight = planned(tmp_path, {"item": items})
    cruise, total = segment(flight, "cruise"), flight.totals
    flow = cruise.fuel / cruise.time
    assert kept(flight) == pytest.approx(
        {
            "contingency": 0.1 * total.trip_time * flow,
            "final reserve": 2700.0 * flow,
            "twenty minutes": 1200.0 * total.trip_fuel / total.trip_time,
        },
        rel=1e-12,
    )
    assert total.fuel_left == pytest.approx(sum(kept(flight).values()), rel=1e-9)


@pytest.mark.parametrize(
    "fuel", [{"as_needed": True}, {"load": "4 t"}, {"to_take_off_mass": "22 t"}], ids=str
)
def test_initial_fuel_is_what_is_loaded(tmp_path: Path, fuel: Content) -> None:
    """However it is given, whatever is burnt before take-off, leaves or comes aboard."""
    up, out, down = OUT_AND_DOWN
    segments = [
        {"kind": "allowance", "fuel": "60 kg"},
        {"kind": "take-off"},
        up,
        {"kind": "release", "payload": "300 kg"},
        {"kind": "refuelling", "transfer": "400 kg", "time": "6 min", "mach": 0.7},
        out,
        down,
    ]
    items = [{"kind": "share of initial fuel", "share": 0.05}, final_reserve("20 min")]
    reserves = {"item": items}
    mission = mission_content(segments, distance="900 nmi", reserves=reserves) | {"fuel": fuel}
    flight = fly_files(tmp_path, mission=mission)
    assert flight.failure is None
    share = kept(flight)["share of initial fuel"]
    assert share == pytest.approx(0.05 * flight.totals.loaded_fuel, rel=1e-9)


def test_a_free_distance_keeps_the_reserves(tmp_path: Path) -> None:
    """Carriage costs are of the distance found, not of none."""
    mission = mission_content(
        OUT_AND_DOWN,
        distance="free",
        fuel={"as_needed": None, "load": "4 t"},
        reserves={"rule": "classic military"},
    )
    flight = fly_files(tmp_path, mission=mission)
    assert flight.failure is None
    assert flight.totals.fuel_left == pytest.approx(sum(kept(flight).values()), rel=1e-6)
    assert kept(flight)["share of initial fuel"] == pytest.approx(200.0, rel=1e-12)
    miles = flight.totals.ground_distance / NAUTICAL_MILE
    given = planned(tmp_path, {"rule": "classic military"}, miles=round(miles))
    for line, other in zip(flight.reserves, given.reserves, strict=True):
        assert line.carriage_cost == pytest.approx(other.carriage_cost, rel=1e-3)


def test_a_fuel_flow_margin_is_burnt(tmp_path: Path) -> None:
    margin = {"kind": "fuel-flow margin", "share": 0.05}
    booked = [{"kind": "allowance", "fuel": "80 kg"}, *OUT_AND_DOWN]
    items = [final_reserve("30 min"), margin]
    mission = mission_content(booked, distance="900 nmi", reserves={"item": items})
    flight = fly_files(tmp_path, mission=mission)
    raised = fly_files(
        tmp_path,
        mission=mission | {"reserves": {"item": items[:1]}},
        engine=engine_content(specific_fuel_consumption="0.63 1/h"),
    )
    for log, other in zip(flight.segments, raised.segments, strict=True):
        assert log.fuel == pytest.approx(other.fuel, rel=1e-10), log.name
        assert log.mass_start == pytest.approx(other.mass_start, rel=1e-12)
    # Of 1.05 parts burnt 0.05 are margin; fuel that is only booked is no flow.
    block = flight.totals.block_fuel
    assert flight.fuel_flow_margin == pytest.approx((block - 80.0) * 0.05 / 1.05, rel=1e-12)
    assert raised.fuel_flow_margin == 0.0
    assert flight.totals.fuel_left == pytest.approx(kept(flight)["final reserve"], rel=1e-9)


def test_no_credit_for_descent_lengthens_the_cruise_by_it(tmp_path: Path) -> None:
    plain = planned(tmp_path, {})
    flight = planned(tmp_path, {"item": [{"kind": "no distance credit for descent"}]})
    assert segment(flight, "descent").ground_distance == 0.0
    assert segment(flight, "descent").air_distance > 0.0
    way = segment(flight, "climb").ground_distance + segment(flight, "cruise").ground_distance
    assert way == pytest.approx(1000.0 * NAUTICAL_MILE, rel=1e-9)
    assert flight.totals.ground_distance == pytest.approx(way, rel=1e-12)
    assert flight.totals.block_fuel > plain.totals.block_fuel
    assert flight.reserves == ()


def test_the_classic_military_rule_by_hand(tmp_path: Path) -> None:
    flight = planned(tmp_path, MILITARY)
    hold = flight.segments[-1]
    assert hold.steps.pressure_altitude == pytest.approx(0.0, abs=1e-9)
    landed = flight.totals.landing_mass
    assert kept(flight) == pytest.approx(
        {
            "final reserve": held(landed, 1200.0, 1.05),
            "share of initial fuel": 0.05 * flight.totals.loaded_fuel,
        },
        rel=HELD,
    )
    assert flight.fuel_flow_margin == pytest.approx(flight.totals.block_fuel * 0.05 / 1.05)


def test_business_ifr_is_flown_step_by_step(tmp_path: Path) -> None:
    way = {key: value for key, value in ALTERNATE.items() if key != "distance"}
    reserves = {"rule": "business IFR", "alternate": way | {"approach_time": "4 min"}}
    flight = planned(tmp_path, reserves, destination={"elevation": "600 ft"})
    logs = [log for log in flight.segments if log.purpose == "reserve"]
    assert [log.name for log in logs if log.kind != "acceleration"] == [
        "climb to hold", "hold for clearance", "alternate climb", "alternate cruise",
        "alternate descent", "final reserve hold", "alternate approach",
    ]  # fmt: skip
    rows = {log.name: log for log in logs}
    assert logs[0].steps.pressure_altitude[0] == pytest.approx(600.0 * FOOT, abs=0.01)
    for name, minutes in (("hold for clearance", 5.0), ("final reserve hold", 30.0)):
        assert rows[name].steps.pressure_altitude == pytest.approx(5000.0 * FOOT, abs=0.01)
        assert rows[name].time == pytest.approx(60.0 * minutes, rel=1e-12)
        start = rows[name].mass_start
        assert rows[name].fuel == pytest.approx(held(start, 60.0 * minutes), rel=HELD)
    covered = sum(log.ground_distance for log in logs)
    assert covered == pytest.approx(200.0 * NAUTICAL_MILE, rel=1e-9)
    # What is neither of the holds is the way, bridges and approach included.
    holds = rows["hold for clearance"].fuel + rows["final reserve hold"].fuel
    alternate = sum(log.fuel for log in logs) - holds
    assert kept(flight) == pytest.approx(
        {
            "hold for clearance": rows["hold for clearance"].fuel,
            "alternate": alternate,
            "final reserve": rows["final reserve hold"].fuel,
        },
        rel=1e-9,
    )


def test_an_approach_at_the_alternate_is_flown_after_the_hold(tmp_path: Path) -> None:
    items = [TO_ALTERNATE, final_reserve("30 min")]
    way = ALTERNATE | {"approach_time": "4 min", "approach_drag_factor": 1.8}
    flight = planned(tmp_path, {"item": items, "alternate": way})
    approach = flight.segments[-1]
    assert (approach.name, approach.time) == ("alternate approach", pytest.approx(240.0))
    assert approach.steps.drag / approach.steps.weight == pytest.approx(
        1.8 * _drag_over_lift(AIRCRAFT["limits"]["approach_lift_coefficient"] / 1.3**2), rel=1e-6
    )
    reserve = sum(log.fuel for log in flight.segments if log.purpose == "reserve")
    hold = segment(flight, "final reserve hold").fuel
    assert kept(flight)["alternate"] == pytest.approx(reserve - hold, rel=1e-9)


def test_where_no_alternate_is_required(tmp_path: Path) -> None:
    flight = planned(tmp_path, {"rule": "ICAO Annex 6", "alternate_required": False})
    assert list(kept(flight)) == ["contingency", "destination hold", "final reserve"]
    landed = flight.totals.landing_mass
    first, last = flight.segments[-2:]
    assert (first.name, last.name) == ("destination hold", "final reserve hold")
    assert first.fuel == pytest.approx(held(landed, 900.0), rel=HELD)
    assert last.fuel == pytest.approx(held(landed - first.fuel, 1800.0), rel=HELD)
    assert first.steps.pressure_altitude == pytest.approx(1500.0 * FOOT, abs=0.01)
    bare = planned(tmp_path, {"rule": "14 CFR 91.167", "alternate_required": False})
    assert list(kept(bare)) == ["final reserve"]
