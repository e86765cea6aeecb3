"""The collocation march against an adaptive Runge-Kutta of order 8 on the same equations.

Both errors are bounded far below the tolerance: the flight's own by doubling its steps, the
reference's by its tolerance of 1e-9 a step (1e-10 moves it by 4e-10). Fuel has to agree to 1e-8.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import inf
from pathlib import Path
from typing import Any

import pytest
from mission_files import (
    BYPASS_5,
    aircraft_content,
    fly_files,
    load_all,
    mission_content,
    segment,
)
from reference_flight import Reference, State, cuts, mach_of

from mission.results import Flight

FOOT, KNOT = 0.3048, 1852.0 / 3600.0
RELATIVE = 1e-8
AIRSPEED, SLOW, HOLD, MACH = 285.0 * KNOT, 250.0 * KNOT, 240.0 * KNOT, 0.74
ELEVATION, TOP, HOLD_LEVEL, END = 500.0 * FOOT, 37000.0 * FOOT, 15000.0 * FOOT, 3000.0 * FOOT
LIMIT = 10000.0 * FOOT

MISSION: dict[str, Any] = mission_content(
    [
        {"kind": "taxi", "time": "7 min"},
        {"kind": "take-off"},
        {
            "kind": "climb",
            "to": "FL370",
            "calibrated_airspeed": "285 kt",
            "mach": MACH,
            "limited_below_10000_ft": True,
        },
        {"kind": "cruise", "distance": "700 nmi"},
        {
            "kind": "descent",
            "name": "first descent",
            "to": "15000 ft",
            "calibrated_airspeed": "285 kt",
            "mach": MACH,
        },
        {"kind": "loiter", "time": "40 min", "calibrated_airspeed": "240 kt"},
        {
            "kind": "descent",
            "name": "second descent",
            "to": "3000 ft",
            "calibrated_airspeed": "240 kt",
        },
    ],
    day="ISA+10",
    headwind="25 kt",
    departure={"elevation": "500 ft"},
    fuel={"as_needed": None, "load": "6 t"},
)
AIRCRAFT: dict[str, Any] = aircraft_content(
    drag_polar={
        "least_drag_lift_coefficient": 0.05,
        "drag_rise": {
            "drag_divergence_mach": 0.80,
            "at_lift_coefficient": 0.5,
            "fall_with_lift_coefficient": 0.1,
        },
    },
    fuel_flow_factor=1.02,
    drag_factor=1.01,
)


@dataclass(frozen=True)
class Both:
    """The program's flight and the reference's states by segment."""

    flight: Flight
    states: dict[str, State]
    calls: int


@pytest.fixture(scope="module")
def both(tmp_path_factory: pytest.TempPathFactory) -> Both:
    folder = tmp_path_factory.mktemp("reference")
    flight = fly_files(folder, mission=MISSION, aircraft=AIRCRAFT, engine=BYPASS_5, refinement=4)
    assert flight.failure is None
    _, aircraft, engine = load_all(folder, AIRCRAFT, BYPASS_5, MISSION)
    reference = Reference(aircraft, engine, 10.0, -25.0 * KNOT, tolerance=1e-9)

    def mach_at(airspeed: float, altitude: float) -> float:
        return mach_of(airspeed, float(reference.air(altitude, 0.0).static_pressure))

    states: dict[str, State] = {}
    state = State(15500.0 + 2500.0 + 6000.0)
    state = states["taxi"] = reference.stand(state, ELEVATION, 420.0)
    state, lift_off = reference.roll(state, ELEVATION, 1.2)
    states["take-off"] = state
    state = states["bridge to climb"] = reference.accelerate(
        state, ELEVATION, (lift_off, mach_at(SLOW, ELEVATION)), "climb"
    )
    climb = segment(flight, "climb").steps
    state = reference.slope(state, cuts(climb, ELEVATION, LIMIT), SLOW, inf, "climb")
    state = reference.accelerate(
        state, LIMIT, (mach_at(SLOW, LIMIT), mach_at(AIRSPEED, LIMIT)), "climb"
    )
    state = reference.slope(state, cuts(climb, LIMIT, TOP), AIRSPEED, MACH, "climb")
    states["climb"] = state
    state = states["cruise"] = reference.cruise(state, TOP, MACH, 700.0 * 1852.0)
    down = segment(flight, "first descent").steps
    state = states["first descent"] = reference.slope(
        state, cuts(down, HOLD_LEVEL, TOP)[::-1], AIRSPEED, MACH, "flight_idle"
    )
    held = mach_at(HOLD, HOLD_LEVEL)
    state = states["bridge to loiter"] = reference.accelerate(
        state, HOLD_LEVEL, (mach_at(AIRSPEED, HOLD_LEVEL), held), "flight_idle"
    )
    state = states["loiter"] = reference.level(state, HOLD_LEVEL, held, 2400.0, gains=False)
    down = segment(flight, "second descent").steps
    states["second descent"] = reference.slope(
        state, cuts(down, END, HOLD_LEVEL)[::-1], HOLD, inf, "flight_idle"
    )
    return Both(flight, states, reference.calls)


SEGMENTS = pytest.mark.parametrize(
    "name",
    [
        "taxi",
        "take-off",
        "bridge to climb",
        "climb",
        "cruise",
        "first descent",
        "bridge to loiter",
        "loiter",
        "second descent",
    ],
)


def test_the_same_segments_are_flown(both: Both) -> None:
    assert [log.name for log in both.flight.segments] == list(both.states)


@SEGMENTS
def test_fuel_burnt_up_to_the_end_of_each_segment(both: Both, name: str) -> None:
    start = both.flight.segments[0].mass_start
    burnt = start - segment(both.flight, name).mass_end
    # Relative to the fuel burnt so far, from the first taxi on.
    assert burnt == pytest.approx(start - both.states[name].mass, rel=RELATIVE)


@SEGMENTS
def test_time_and_distance_up_to_the_end_of_each_segment(both: Both, name: str) -> None:
    log = segment(both.flight, name)
    row = both.flight.segments.index(log)
    ground = sum(other.ground_distance for other in both.flight.segments[: row + 1])
    assert log.steps.elapsed_time[-1] == pytest.approx(both.states[name].time, rel=RELATIVE)
    assert ground == pytest.approx(both.states[name].ground, rel=RELATIVE, abs=1e-3)


def test_block_fuel(both: Both) -> None:
    expected = both.flight.segments[0].mass_start - both.states["second descent"].mass
    assert both.flight.totals.block_fuel == pytest.approx(expected, rel=RELATIVE)


def test_steps_as_they_come_are_as_near_as_reported(tmp_path: Path, both: Both) -> None:
    flight = fly_files(tmp_path, mission=MISSION, aircraft=AIRCRAFT, engine=BYPASS_5)
    expected = both.flight.segments[0].mass_start - both.states["second descent"].mass
    assert abs(flight.totals.block_fuel - expected) <= flight.totals.integration_error
