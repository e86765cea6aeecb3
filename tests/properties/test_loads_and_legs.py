"""What every flight keeps that turns, drops, takes on fuel, or goes out and comes back."""

from __future__ import annotations

from itertools import pairwise
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from mission_files import Content, aircraft_content, final_reserve, mission_content
from mission_strategies import FEW, SOME, flown, of_mission

from engine.quantities import STANDARD_GRAVITY
from mission.results import Flight

ROUND_OFF = 1e-12  # of take-off mass: sums of some hundred numbers of sixteen digits
SWEPT = 1e-9  # relative: the sweeps stop when no mass moves by 1e-11 of itself
MILE = 1852.0
CARRIER = aircraft_content(
    stores={
        "pod": {"mass": "120 kg", "drag_area": "0.04 m**2", "most": 6},
        "tank": {"mass": "90 kg", "drag_area": "0.06 m**2", "fuel_capacity": "600 kg", "most": 2},
    },
    masses={"maximum_landing": "27 t"},
)
SPEEDS: Content = {"calibrated_airspeed": "280 kt", "mach": 0.7}


@st.composite
def happenings(draw: st.DrawFn) -> list[Content]:
    """Some of what can happen at a level, in any order."""
    pods, transfer = draw(st.integers(1, 3)), draw(st.integers(300, 1500))
    kinds: list[Content] = [
        {"kind": "turn", "turns": draw(st.sampled_from([0.5, 2.0])), "load_factor": 1.35},
        {"kind": "turn", "name": "hard turn", "time": "40 s"},
        {"kind": "release", "stores": {"pod": pods}},
        {"kind": "release", "name": "drop", "payload": f"{draw(st.integers(50, 400))} kg"},
        {"kind": "refuelling", "transfer": f"{transfer} kg", "time": "6 min"},
        {"kind": "loiter", "name": "watch", "fuel": "150 kg", "mach": 0.7},
        {"kind": "cruise", "name": "dash", "time": "5 min", "mach": 0.7},
    ]
    return draw(st.permutations(kinds))[: draw(st.integers(2, 7))]


@st.composite
def missions(draw: st.DrawFn) -> Content:
    """Up, a cruise, what happens there, home on a leg of its own, and perhaps away again."""
    segments: list[Content] = []
    if draw(st.booleans()):
        segments += [{"kind": "taxi", "time": "6 min"}, {"kind": "take-off"}]
    segments += [{"kind": "climb", "to": "FL290", **SPEEDS}, {"kind": "cruise", "distance": "rest"}]
    segments += draw(happenings())
    speed = draw(st.sampled_from([{"mach": 0.7}, {"speed": "long range"}]))
    segments += [
        {"kind": "cruise", "name": "home", "distance": "rest", "starts_leg": "home", **speed},
        {"kind": "descent", **SPEEDS},
        {"kind": "approach", "time": "3 min"},
    ]
    if draw(st.booleans()):
        segments.append(
            {
                "kind": "turnaround",
                "payload_off": "300 kg",
                "payload_on": "100 kg",
                "fuel_on": "1 t",
            }
        )
    fuel: Content = draw(
        st.sampled_from([{"load": "6 t"}, {"to_take_off_mass": "24 t"}, {"as_needed": True}])
    )
    legs = [
        {"name": "out", "distance": f"{draw(st.integers(150, 400))} nmi", "headwind": "15 kt"},
        {"name": "home", "distance": f"{draw(st.integers(150, 400))} nmi", "day": "ISA+9"},
    ]
    mission = mission_content(
        segments, leg=legs, stores={"pod": 3, "tank": draw(st.integers(1, 2))},
        reserves={"item": [final_reserve("20 min")]},
    )  # fmt: skip
    return mission | {"fuel": fuel}


def assert_mass_is_kept(flight: Flight) -> None:
    """Every row and the whole: mass lost is fuel and what is released, less what is received."""
    slack = ROUND_OFF * flight.totals.takeoff_mass
    rows = of_mission(flight)
    for log in rows:
        gone = log.fuel + log.mass_released - log.mass_received
        assert abs(log.mass_start - log.mass_end - gone) <= slack, log.name
    for before, after in pairwise(rows):
        assert abs(before.mass_end - after.mass_start) <= slack, after.name
    gone = sum(log.fuel + log.mass_released - log.mass_received for log in rows)
    assert abs(flight.totals.ramp_mass - rows[-1].mass_end - gone) <= slack
    assert abs(flight.totals.block_fuel - sum(log.fuel for log in rows)) <= slack


def assert_fuel_is_kept(flight: Flight, mission: Content) -> None:
    """Fuel loaded and taken on is burnt or left; payload and stores do not count."""
    received = sum(
        float(part["transfer"].split()[0])
        for part in mission["segment"]
        if part["kind"] == "refuelling"
    )
    received += sum(1000.0 for part in mission["segment"] if part["kind"] == "turnaround")
    total = flight.totals
    left = total.loaded_fuel + received - total.block_fuel
    assert total.fuel_left == pytest.approx(left, abs=1e-7)
    assert total.fuel_margin == pytest.approx(left - total.reserve_fuel, abs=1e-7)
    last = of_mission(flight)[-1]
    assert last.fuel_left == pytest.approx(left, abs=1e-7)


def assert_forces_balance(flight: Flight) -> None:
    for log in of_mission(flight):
        steps = log.steps
        if log.kind in ("cruise", "loiter", "refuelling", "approach"):
            assert steps.lift == pytest.approx(steps.weight, rel=SWEPT), log.name
            assert steps.thrust == pytest.approx(steps.drag, rel=SWEPT), log.name
        if log.name == "turn":
            assert steps.lift == pytest.approx(1.35 * steps.weight, rel=SWEPT)
            assert steps.thrust == pytest.approx(steps.drag, rel=SWEPT)
        if log.name == "hard turn":
            assert np.all(steps.drag <= steps.thrust * (1.0 + SWEPT))
            assert np.all(steps.lift <= 2.5 * steps.weight * (1.0 + SWEPT))
        assert steps.weight == pytest.approx(steps.mass * STANDARD_GRAVITY, rel=1e-12)


@given(mission=missions())
@SOME
def test_what_every_such_flight_keeps(mission: Content) -> None:
    flight = flown(mission, aircraft=CARRIER)
    assert_mass_is_kept(flight)
    assert_fuel_is_kept(flight, mission)
    assert_forces_balance(flight)
    for leg in mission["leg"]:
        wanted = float(leg["distance"].split()[0]) * MILE
        covered = sum(log.ground_distance for log in of_mission(flight) if log.leg == leg["name"])
        assert covered == pytest.approx(wanted, abs=1.0)
    if flight.failure is None:
        for check in flight.cross_check:
            difference = check.integrated_fuel - check.breguet_fuel
            assert sum(check.causes.values()) == pytest.approx(difference, rel=1e-9, abs=1e-9)


@given(mission=missions())
@FEW
def test_the_integration_error_is_honest(mission: Content) -> None:
    few, many = (flown(mission, aircraft=CARRIER, refinement=n).totals for n in (1, 4))
    moved = abs(few.block_fuel - many.block_fuel)
    assert moved <= few.integration_error + 1e-10 * few.takeoff_mass


# --- there and back in a wind -----------------------------------------------------------------


def out_and_back(wind: float, distance: float, level: int, **speed: Any) -> Flight:
    """Out into a wind and back with it [kt], or the other way round where it is negative."""
    up = {"kind": "climb", "to": f"FL{level}", **SPEEDS}
    down = {"kind": "descent", **SPEEDS}
    segments = [
        up,
        {"kind": "cruise", "distance": "rest", **speed},
        down,
        up | {"name": "up again", "starts_leg": "home"},
        {"kind": "cruise", "name": "back", "distance": "rest", **speed},
        down | {"name": "down again"},
    ]
    legs = [
        {"name": "out", "distance": "radius", "headwind": f"{wind} kt"},
        {"name": "home", "distance": "radius", "headwind": f"{-wind} kt"},
    ]
    return flown(mission_content(segments, leg=legs, radius=f"{distance} nmi"))


@given(
    wind=st.floats(5.0, 90.0),
    distance=st.floats(250.0, 900.0),
    level=st.integers(240, 390),
    speed=st.sampled_from([{}, {"speed": "long range"}, {"speed": "maximum range"}]),
    way=st.sampled_from([-1.0, 1.0]),
)
@SOME
def test_there_and_back_in_a_wind_costs_more_than_in_still_air(
    wind: float, distance: float, level: int, speed: Content, way: float
) -> None:
    windy, still = (
        out_and_back(way * blows, distance, level, **speed).totals for blows in (wind, 0.0)
    )
    assert windy.block_fuel > still.block_fuel
    if not speed:  # a speed that is sought answers to the mass, which is greater in the wind
        assert windy.block_time > still.block_time
    assert windy.ground_distance == pytest.approx(still.ground_distance, abs=2.0)
