"""Fuel and reserves: what is burnt, what is carried, and by which rule."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import numpy as np
import pytest
from mission_files import (
    ALTERNATE,
    CONTINGENCY,
    OUT_AND_DOWN,
    TO_ALTERNATE,
    Content,
    aircraft_content,
    final_reserve,
    fly_files,
    mission_content,
    segment,
)

from engine.quantities import FOOT, NAUTICAL_MILE
from mission.results import Flight

WHOLE: list[Content] = [
    {"kind": "taxi", "name": "taxi out", "time": "9 min"},
    {"kind": "allowance", "name": "warm-up", "fuel": "25 kg"},
    {"kind": "take-off"},
    *OUT_AND_DOWN,
    {"kind": "approach", "time": "4 min"},
    {"kind": "taxi", "name": "taxi in", "time": "5 min"},
    {"kind": "allowance", "name": "shut-down", "fuel": "7 kg"},
]


def planned(folder: Path, segments: list[Content] | None = None, **changes: Any) -> Flight:
    mission = mission_content(segments or OUT_AND_DOWN, distance="1000 nmi", **changes)
    flight = fly_files(folder, mission=mission)
    assert flight.failure is None
    return flight


def item(flight: Flight, name: str) -> float:
    return {entry.item: entry.fuel for entry in flight.reserves}[name]


def test_contingency_is_a_share_of_trip_fuel(tmp_path: Path) -> None:
    flight = planned(tmp_path, reserves={"item": [CONTINGENCY]})
    assert item(flight, "contingency") == pytest.approx(0.05 * flight.totals.trip_fuel, rel=1e-12)
    assert flight.totals.fuel_left == pytest.approx(item(flight, "contingency"), rel=1e-9)
    assert [log.purpose for log in flight.segments] == ["mission"] * 3


def test_the_final_reserve_is_flown_at_1500_ft_for_its_time(tmp_path: Path) -> None:
    flight = planned(
        tmp_path,
        reserves={"item": [final_reserve("30 min")]},
        destination={"elevation": "2000 ft"},
    )
    hold = flight.segments[-1]
    assert hold.purpose == "reserve"
    assert hold.time == pytest.approx(1800.0)
    assert hold.steps.pressure_altitude == pytest.approx(3500.0 * FOOT, abs=0.01)
    assert item(flight, "final reserve") == pytest.approx(hold.fuel, rel=1e-12)
    # Its mass is the mass at the stop: the mission's last.
    assert hold.mass_start == pytest.approx(segment(flight, "descent").mass_end, rel=1e-12)


def test_the_final_reserve_is_held_at_the_alternate(tmp_path: Path) -> None:
    flight = planned(
        tmp_path,
        reserves={
            "item": [TO_ALTERNATE, final_reserve("30 min")],
            "alternate": ALTERNATE | {"elevation": "4000 ft"},
        },
        destination={"elevation": "300 ft"},
    )
    assert flight.segments[-1].steps.pressure_altitude == pytest.approx(5500.0 * FOOT, abs=0.01)


def test_the_alternate_is_flown_over_its_distance(tmp_path: Path) -> None:
    flight = planned(tmp_path, reserves={"item": [TO_ALTERNATE], "alternate": ALTERNATE})
    reserve = [log for log in flight.segments if log.purpose == "reserve"]
    kinds = [log.kind for log in reserve if log.kind != "acceleration"]
    assert kinds[-3:] == ["climb", "cruise", "descent"]
    covered = sum(log.ground_distance for log in reserve)
    assert covered == pytest.approx(180.0 * NAUTICAL_MILE, rel=1e-9)
    fuel = sum(log.fuel for log in reserve)
    assert item(flight, "alternate") == pytest.approx(fuel, rel=1e-9)
    cruise = next(log for log in reserve if log.kind == "cruise")
    assert cruise.steps.pressure_altitude == pytest.approx(20000.0 * FOOT, abs=0.01)
    assert cruise.steps.mach == pytest.approx(0.6, abs=1e-6)


def test_reserves_add_up_and_are_left_at_the_stop(tmp_path: Path) -> None:
    flight = planned(
        tmp_path,
        WHOLE,
        reserves={
            "item": [CONTINGENCY | {"share": 0.03}, TO_ALTERNATE, final_reserve("30 min")],
            "alternate": ALTERNATE,
        },
    )
    total = flight.totals
    assert [entry.item for entry in flight.reserves] == [
        "contingency",
        "alternate",
        "final reserve",
    ]
    assert total.reserve_fuel == pytest.approx(sum(e.fuel for e in flight.reserves), rel=1e-12)
    assert total.fuel_left == pytest.approx(total.reserve_fuel, rel=1e-9)
    assert total.loaded_fuel == pytest.approx(total.block_fuel + total.reserve_fuel, rel=1e-9)
    # After the reserve flight just the contingency is left, unburnt.
    assert flight.segments[-1].fuel_left == pytest.approx(item(flight, "contingency"), rel=1e-6)


def test_block_from_engine_start_and_trip_from_take_off_to_landing(tmp_path: Path) -> None:
    flight = planned(tmp_path, WHOLE)
    total, logs = flight.totals, {log.name: log for log in flight.segments}
    assert total.block_fuel == pytest.approx(sum(log.fuel for log in flight.segments), rel=1e-12)
    outside = ("taxi out", "warm-up", "taxi in", "shut-down")
    expected = total.block_fuel - sum(logs[name].fuel for name in outside)
    assert total.trip_fuel == pytest.approx(expected, rel=1e-9)
    assert total.trip_time == pytest.approx(
        total.block_time - logs["taxi out"].time - logs["taxi in"].time, rel=1e-12
    )
    assert total.ramp_mass == logs["taxi out"].mass_start
    assert total.takeoff_mass == pytest.approx(logs["take-off"].mass_start, rel=1e-15)
    assert total.landing_mass == pytest.approx(logs["approach and landing"].mass_end, rel=1e-15)


def test_unusable_fuel_is_carried_and_never_burnt(tmp_path: Path) -> None:
    mission = mission_content(OUT_AND_DOWN, distance="1000 nmi")
    dry = fly_files(tmp_path, mission=mission)
    wet = fly_files(
        tmp_path, mission=mission, aircraft=aircraft_content(fuel_tanks={"unusable": "200 kg"})
    )
    assert wet.totals.landing_mass == pytest.approx(dry.totals.landing_mass + 200.0, abs=1e-6)
    assert wet.totals.block_fuel > dry.totals.block_fuel
    assert wet.totals.fuel_left == pytest.approx(0.0, abs=1e-6)


def test_a_given_load_leaves_what_is_not_burnt(tmp_path: Path) -> None:
    flight = planned(tmp_path, fuel={"as_needed": None, "load": "4 t"})
    total = flight.totals
    assert total.loaded_fuel == pytest.approx(4000.0, rel=1e-12)
    assert total.ramp_mass == pytest.approx(22000.0, rel=1e-12)
    assert total.fuel_left == pytest.approx(4000.0 - total.block_fuel, rel=1e-12)
    assert total.fuel_margin == total.fuel_left


def test_what_carrying_a_reserve_costs(tmp_path: Path) -> None:
    """The cost is the trip fuel saved without it, here found by flying lighter."""
    reserves = {"item": [final_reserve("45 min")]}
    flight = planned(tmp_path, reserves=reserves)
    (hold,) = flight.reserves
    lighter = planned(tmp_path)
    assert hold.carriage_cost == pytest.approx(
        flight.totals.trip_fuel - lighter.totals.trip_fuel, rel=1e-4
    )
    # Some per cent of its mass: range over speed, consumption and lift-to-drag ratio.
    assert 0.02 < hold.carriage_cost / hold.fuel < 0.25


def test_reserves_are_flown_on_the_same_clock(tmp_path: Path) -> None:
    flight = planned(tmp_path, reserves={"item": [final_reserve("30 min")]})
    hold = flight.segments[-1].steps.elapsed_time
    assert hold[0] == pytest.approx(flight.totals.block_time, rel=1e-12)
    assert np.all(np.diff(hold) > 0.0)


@pytest.mark.parametrize("last", ["descent", "approach"])
def test_a_second_take_off_is_part_of_the_trip(tmp_path: Path, last: str) -> None:
    """A touch-and-go ends the trip neither at the first landing nor nowhere."""
    again = [{"kind": "take-off", "name": "take-off again"}, *OUT_AND_DOWN]
    segments = [*WHOLE[2:7], *again[:2], OUT_AND_DOWN[2] | {"name": "last descent"}]
    if last == "approach":
        segments.append({"kind": "approach", "name": "last approach", "time": "4 min"})
    flight = planned(tmp_path, segments)
    names = [log.name for log in flight.segments]
    assert names[0] == "take-off"
    assert flight.totals.trip_fuel == pytest.approx(flight.totals.block_fuel, rel=1e-12)
    assert flight.totals.landing_mass == pytest.approx(flight.segments[-1].mass_end, rel=1e-15)


def test_a_take_off_may_be_the_last_thing(tmp_path: Path) -> None:
    segments = [*WHOLE[2:7], {"kind": "take-off", "name": "take-off again"}, OUT_AND_DOWN[0]]
    flight = planned(tmp_path, segments)
    assert flight.segments[-1].name == "climb"
    assert flight.totals.landing_mass == pytest.approx(flight.segments[-1].mass_end, rel=1e-15)
