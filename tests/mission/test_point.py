"""One point of the envelope: parts that add up, turns and climbs bounded, faults in words."""

from __future__ import annotations

from dataclasses import replace
from math import inf
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from mission_files import BYPASS_5, PROFILES, aircraft_content, engine_content, write

from engine import flight_condition, load_engine
from engine.interface import Engine
from mission.aerodynamics import BuffetOnset
from mission.aircraft import Aircraft, load_aircraft
from mission.forces import drag
from mission.questions.faults import faults
from mission.questions.point import Point, point

THERE = flight_condition(37000.0 * 0.3048, 0.76, 10.0)


@pytest.fixture(scope="module")
def twin() -> tuple[Aircraft, Engine]:
    """The demo's aircraft without the limits that tests put in one by one, and its engine."""
    bounded = load_aircraft(PROFILES / "coast_watch_twin.toml")
    free = replace(
        bounded,
        buffet_onset=None,
        maximum_pressure_altitude=inf,
        maximum_dynamic_pressure=inf,
    )
    return free, load_engine(BYPASS_5)


@pytest.fixture(scope="module")
def found(twin: tuple[Aircraft, Engine]) -> Point:
    return point(*twin, THERE, 23e3)


def test_drag_adds_up_by_cause(found: Point) -> None:
    force = found.drag_coefficient * found.dynamic_pressure * found.aircraft.wing_area
    assert force == pytest.approx(found.drag, rel=1e-12)
    assert set(found.drag_parts) == {"zero_lift", "induced", "wave"}
    hung = replace(found.aircraft, external_drag_area=0.31, drag_factor=1.1)
    heavier = point(hung, found.engine, THERE, 23e3)
    assert heavier.drag_parts["hung outside"] == pytest.approx(0.31 / 62.0)
    force = heavier.drag_coefficient * heavier.dynamic_pressure * 62.0
    assert force == pytest.approx(heavier.drag, rel=1e-12)


def test_level_flight_is_what_one_engine_says(found: Point) -> None:
    alone = found.engine.at_thrust(THERE, found.drag / 2.0, rating="cruise")
    assert found.fuel_flow == pytest.approx(2.0 * float(alone.fuel_flow), rel=1e-8)
    assert found.level_thrust == pytest.approx(found.drag, rel=1e-9)
    speed = float(THERE.true_airspeed)
    assert found.specific_air_range == pytest.approx(speed / found.fuel_flow)
    assert faults(found) == ()


def test_everything_comes_from_one_call(
    twin: tuple[Aircraft, Engine], monkeypatch: pytest.MonkeyPatch
) -> None:
    calls = []
    kind = type(twin[1])
    whole = kind.at

    def counted(self: Any, *args: Any, **more: Any) -> Any:
        calls.append(self)
        return whole(self, *args, **more)

    monkeypatch.setattr(kind, "at", counted)
    point(*twin, THERE, 23e3)
    assert len(calls) == 1


def test_climbs(found: Point) -> None:
    """Above the tropopause a Mach number held is a true airspeed held, on any day."""
    at = found.at_ratings
    weight, speed = 23e3 * 9.80665, float(THERE.true_airspeed)
    assert at.excess_power == pytest.approx(speed * at.margin / weight)
    assert at.climb_at_mach == pytest.approx(at.climb, rel=1e-12)
    assert (np.abs(at.climb_at_airspeed) < np.abs(at.climb)).all()
    # sin(gamma) at the lift of the climb: drag at it balances exactly.
    lift = weight * np.cos(at.path_angle)
    left = at.thrust - drag(found.aircraft, THERE, lift)
    assert np.sin(at.path_angle) == pytest.approx(left / weight, rel=1e-9)
    assert at.path_angle[at.names.index("flight_idle")] < 0.0
    low = point(found.aircraft, found.engine, flight_condition(5000.0, 0.5), 23e3).at_ratings
    assert (low.climb_at_mach[:4] > low.climb[:4]).all()


@pytest.mark.parametrize(
    ("changes", "limit", "factor"),
    [
        ({"maximum_load_factor": 1.2}, "structure", 1.2),
        ({"buffet_onset": BuffetOnset((0.3, 0.9), (0.55, 0.55))}, "buffet", None),
        ({"maximum_lift_coefficient": 0.5}, "lift", None),
    ],
)
def test_turns_are_bounded_by_name(
    found: Point, changes: dict[str, Any], limit: str, factor: float | None
) -> None:
    bounded = point(replace(found.aircraft, **changes), found.engine, THERE, 23e3)
    at = bounded.at_ratings
    assert at.load_limit[0] == limit
    assert at.load_factor[0] == pytest.approx(factor or bounded.load_factors[limit], rel=1e-9)
    assert at.load_factor[0] < found.at_ratings.load_factor[0]


def test_a_turn_that_thrust_does_not_sustain_is_none(found: Point) -> None:
    at = found.at_ratings
    idle = at.names.index("flight_idle")
    assert np.isnan([at.load_factor[idle], at.turn_rate[idle], at.turn_radius[idle]]).all()


@pytest.mark.parametrize(
    ("changes", "where", "what"),
    [
        ({}, (37000.0, 0.83), ["Mach number", "thrust at cruise rating against drag"]),
        ({}, (5000.0, 0.6), ["calibrated airspeed"]),
        ({}, (37000.0, 0.36), ["lift coefficient"]),
        ({}, (46000.0, 0.75), ["thrust at cruise rating against drag"]),
        ({"maximum_pressure_altitude": 9000.0}, (37000.0, 0.76), ["pressure altitude"]),
        ({"maximum_dynamic_pressure": 5000.0}, (37000.0, 0.76), ["dynamic pressure"]),
        (
            {"buffet_onset": BuffetOnset((0.3, 0.8), (0.5, 0.5))},
            (37000.0, 0.76),
            ["lift coefficient of 1.3 g against buffet onset"],
        ),
        (
            {"buffet_onset": BuffetOnset((0.3, 0.7), (0.9, 0.8))},
            (37000.0, 0.76),
            ["Mach number in the table of buffet onset"],
        ),
    ],
)
def test_faults_are_told_with_value_and_bound(
    twin: tuple[Aircraft, Engine],
    changes: dict[str, Any],
    where: tuple[float, float],
    what: list[str],
) -> None:
    there = flight_condition(where[0] * 0.3048, where[1], 10.0)
    told = faults(point(replace(twin[0], **changes), twin[1], there, 23e3))
    assert [fault.what for fault in told] == what
    assert all(fault.advice for fault in told)
    if "thrust" in what[0]:
        assert told[0].value < told[0].bound
    else:
        assert told[0].value > told[0].bound


def test_a_polar_and_an_engine_in_tables_are_not_left(tmp_path: Path) -> None:
    row = [0.0175 + 0.042 * lift**2 for lift in (0.0, 0.1, 0.2, 0.3)]
    polar = {"machs": [0.4, 0.7], "lift_coefficients": [0.0, 0.1, 0.2, 0.3],
             "drag_coefficients": [row] * 2}  # fmt: skip
    content = aircraft_content(drag_polar=None) | {"drag_polar": polar}
    aircraft = load_aircraft(write(tmp_path, "aircraft", content))
    engine = load_engine(PROFILES / "tabulated_fan.toml")
    table = engine.coverage
    assert table is not None
    height = table.pressure_altitude[1] + 500.0
    there = flight_condition(height, 0.72, table.temperature_deviation)
    told = faults(point(aircraft, engine, there, 18e3))
    assert [fault.what for fault in told] == [
        "Mach number in the drag polar's table",
        "lift coefficient in the drag polar's table",
        "pressure altitude in the engine's table",
    ]
    assert told[-1].bound == table.pressure_altitude[1]


def test_more_idle_thrust_than_drag_and_no_engine_state(tmp_path: Path) -> None:
    aircraft = load_aircraft(write(tmp_path, "aircraft", aircraft_content()))
    engine = load_engine(write(tmp_path, "engine", engine_content(static_thrust="55 kN")))
    known = point(aircraft, engine, THERE, 20e3)
    for outcome, what in ((1, "thrust at flight idle against drag"), (3, "engine states found")):
        told = faults(replace(known, outcome=outcome))
        assert what in told[0].what


def test_steeper_than_the_equations_hold_is_absent(tmp_path: Path) -> None:
    aircraft = load_aircraft(write(tmp_path, "aircraft", aircraft_content()))
    engine = load_engine(write(tmp_path, "engine", engine_content(static_thrust="200 kN")))
    at = point(aircraft, engine, flight_condition(0.0, 0.4), 17e3).at_ratings
    assert np.isnan(at.climb[0])
    assert np.isfinite(at.excess_power[0])
