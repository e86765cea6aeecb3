"""Balances that every flight keeps, on random missions and on two with a cycle engine."""

from __future__ import annotations

from itertools import pairwise
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from mission_files import BYPASS_5, CONTINGENCY, Content, final_reserve, mission_content
from mission_strategies import FEW, LEVEL_KINDS, SOME, flown, missions, of_mission

from engine.quantities import NAUTICAL_MILE, STANDARD_GRAVITY
from mission.results import Flight, SegmentLog

ROUND_OFF = 1e-12  # of take-off mass: sums of some hundred numbers of sixteen digits
SWEPT = 1e-9  # relative: the sweeps stop when no mass moves by 1e-11 of itself

SCHEDULE = {"calibrated_airspeed": "280 kt", "mach": 0.72}
WITH_CYCLE_ENGINE: dict[str, Content] = {
    "out and home": mission_content(
        [
            {"kind": "taxi", "time": "9 min"},
            {"kind": "take-off"},
            {"kind": "climb", "to": "FL360", **SCHEDULE},
            {"kind": "cruise", "distance": "rest", "holds": "mach and lift coefficient"},
            {"kind": "descent", **SCHEDULE},
            {"kind": "approach", "time": "4 min", "drag_factor": 2.0},
            {"kind": "taxi", "name": "taxi in", "time": "5 min"},
        ],
        distance="900 nmi",
        day="ISA+8",
        headwind="30 kt",
        reserves={"item": [CONTINGENCY, final_reserve("30 min")]},
    ),
    "watch": mission_content(
        [
            {"kind": "climb", "to": "FL250", **SCHEDULE, "limited_below_10000_ft": True},
            {"kind": "loiter", "time": "1 h"},
            {"kind": "cruise", "distance": "300 nmi", "mach": 0.65},
            {"kind": "descent", "calibrated_airspeed": "260 kt"},
        ],
        day="ISA-10",
    ),
}


@pytest.fixture(scope="module", params=list(WITH_CYCLE_ENGINE))
def cycle_flight(request: pytest.FixtureRequest) -> Flight:
    return flown(WITH_CYCLE_ENGINE[request.param], engine=BYPASS_5)


def assert_mass_is_kept(flight: Flight) -> None:
    slack = ROUND_OFF * flight.totals.takeoff_mass
    for log in flight.segments:
        gone = log.fuel + log.mass_released - log.mass_received
        assert abs(log.mass_start - log.mass_end - gone) <= slack, log.name
        assert log.mass_start == log.steps.mass[0]
        assert log.mass_end == log.steps.mass[-1]
    for before, after in pairwise(flight.segments):
        assert abs(before.mass_end - after.mass_start) <= slack, after.name
    rows = of_mission(flight)
    burnt = sum(log.fuel for log in rows)
    assert abs(rows[0].mass_start - rows[-1].mass_end - burnt) <= slack
    assert abs(flight.totals.block_fuel - burnt) <= slack


def assert_forces_balance(flight: Flight) -> None:
    for log in flight.segments:
        steps = log.steps
        assert steps.weight == pytest.approx(steps.mass * STANDARD_GRAVITY, rel=1e-12)
        airborne = steps.lift > 0.0
        lift = steps.weight * np.cos(steps.flight_path_angle)
        assert steps.lift[airborne] == pytest.approx(lift[airborne], rel=SWEPT), log.name
        if log.kind in LEVEL_KINDS:
            assert steps.thrust == pytest.approx(steps.drag, rel=SWEPT), log.name
            assert np.all(steps.flight_path_angle == 0.0)
        if log.kind == "climb":
            assert np.all(steps.thrust > steps.drag), log.name
        if log.kind == "descent":
            assert np.all(steps.thrust < steps.drag), log.name


def assert_time_passes(flight: Flight) -> None:
    elapsed = np.concatenate([log.steps.elapsed_time for log in flight.segments])
    assert elapsed[0] == 0.0
    # A joint stands twice, and its two times are sums of the same pieces.
    assert np.all(np.diff(elapsed) >= -1e-9)
    for log in flight.segments:
        taken = log.steps.elapsed_time[-1] - log.steps.elapsed_time[0]
        assert taken == pytest.approx(log.time, rel=1e-9, abs=1e-6)
        assert np.all(np.diff(log.steps.mass) <= 1e-9)


def assert_sums_hold(flight: Flight, mission: dict[str, Any]) -> None:
    total, rows = flight.totals, of_mission(flight)
    assert total.block_time == pytest.approx(sum(log.time for log in rows), rel=1e-12)
    assert total.ground_distance == pytest.approx(
        sum(log.ground_distance for log in rows), rel=1e-12
    )
    assert total.air_distance == pytest.approx(sum(log.air_distance for log in rows), rel=1e-12)
    if "distance" in mission:
        wanted = float(mission["distance"].removesuffix(" nmi")) * NAUTICAL_MILE
        assert total.ground_distance == pytest.approx(wanted, rel=1e-9)
    assert total.loaded_fuel == pytest.approx(total.block_fuel + total.fuel_left, rel=1e-12)
    assert total.reserve_fuel == pytest.approx(
        sum(item.fuel for item in flight.reserves), rel=1e-12, abs=1e-9
    )
    assert total.trip_fuel <= total.block_fuel * (1.0 + 1e-12)
    assert total.landing_mass == pytest.approx(total.takeoff_mass - total.trip_fuel, rel=1e-12)


def assert_causes_add_up(flight: Flight) -> None:
    for check in flight.cross_check:
        difference = check.integrated_fuel - check.breguet_fuel
        assert sum(check.causes.values()) == pytest.approx(difference, rel=1e-9, abs=1e-9)


def assert_carriage_costs(flight: Flight) -> None:
    for item in flight.reserves:
        assert 0.0 < item.carriage_cost < item.fuel, item.item


def assert_all_finite(flight: Flight) -> None:
    for log in flight.segments:
        numbers = [v for name, v in vars(log.steps).items() if name != "held_by"]
        assert all(np.all(np.isfinite(values)) for values in numbers), log.name
    assert all(np.isfinite(value) for value in vars(flight.totals).values())


@given(mission=missions())
@SOME
def test_balances_of_random_missions(mission: Content) -> None:
    flight = flown(mission)
    assert flight.failure is None
    assert_mass_is_kept(flight)
    assert_forces_balance(flight)
    assert_time_passes(flight)
    assert_sums_hold(flight, mission)
    assert_causes_add_up(flight)
    assert_carriage_costs(flight)
    assert_all_finite(flight)


def test_mass_is_kept_with_a_cycle_engine(cycle_flight: Flight) -> None:
    assert cycle_flight.failure is None
    assert_mass_is_kept(cycle_flight)
    assert_all_finite(cycle_flight)


def test_forces_balance_with_a_cycle_engine(cycle_flight: Flight) -> None:
    assert_forces_balance(cycle_flight)


def test_time_passes_with_a_cycle_engine(cycle_flight: Flight) -> None:
    assert_time_passes(cycle_flight)


def test_causes_add_up_with_a_cycle_engine(cycle_flight: Flight) -> None:
    assert_causes_add_up(cycle_flight)
    assert_carriage_costs(cycle_flight)


@given(mission=missions(headwind="0 kt"))
@FEW
def test_no_wind_no_difference_of_distances(mission: Content) -> None:
    for log in flown(mission).segments:
        if log.ground_distance > 0.0:
            assert log.air_distance == pytest.approx(log.ground_distance, rel=1e-12), log.name


def energy(log: SegmentLog, step: int) -> float:
    """Energy per weight [m], height as pressure altitude, which on a standard day it is."""
    steps = log.steps
    kinetic = steps.true_airspeed[step] ** 2 / (2.0 * STANDARD_GRAVITY)
    return float(steps.pressure_altitude[step] + kinetic)


@given(mission=missions(day="ISA", headwind="0 kt"))
@FEW
def test_excess_thrust_work_is_energy_gained(mission: Content) -> None:
    """Over every climb, descent and change of speed, integral of (T - D) V / W dt is d(energy)."""
    flight = flown(mission, refinement=4)
    for log in flight.segments:
        if log.kind not in ("climb", "descent", "acceleration"):
            continue
        steps = log.steps
        power = (steps.thrust - steps.drag) * steps.true_airspeed / steps.weight
        done = float(np.trapezoid(power, steps.elapsed_time))
        gained = energy(log, -1) - energy(log, 0)
        # Trapezia on 33 nodes a span, whose error falls by four when they are doubled: 0.05 %.
        assert done == pytest.approx(gained, rel=1e-3), log.name
