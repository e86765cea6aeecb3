"""What the aircraft file bounds, passed on the way: what, where, by how much and what to try."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from mission_files import (
    Content,
    aircraft_content,
    engine_content,
    fly_files,
    mission_content,
    segment,
    write,
)
from small_flight import steps as made_steps

from mission.aircraft import Aircraft, load_aircraft
from mission.boundaries import passed_boundaries
from mission.results import Failure, Flight, Steps

UP: Content = {"kind": "climb", "to": "FL350", "calibrated_airspeed": "280 kt", "mach": 0.74}
OUT: Content = {"kind": "cruise", "name": "out", "distance": "rest"}
DOWN: Content = {"kind": "descent", "calibrated_airspeed": "280 kt", "mach": 0.74}
MACHS = [0.0, 0.5, 0.7, 0.75, 0.85]
LIFTS = [0.0, 0.2, 0.4, 0.6, 0.8, 1.0]


def flown(folder: Path, segments: list[Content], **changes: Any) -> Flight:
    return fly_files(
        folder,
        mission=mission_content(segments, distance="500 nmi"),
        aircraft=aircraft_content(**changes),
        engine=engine_content(static_thrust="75 kN"),
    )


def failure_of(flight: Flight) -> Failure:
    assert flight.failure is not None
    return flight.failure


def table(machs: list[float], lifts: list[float]) -> Content:
    """The test twin's parabola as a table."""
    row = [0.0175 + 0.042 * lift**2 for lift in lifts]
    return {"machs": machs, "lift_coefficients": lifts, "drag_coefficients": [row] * len(machs)}


def with_polar(folder: Path, polar: Content, segments: list[Content]) -> Flight:
    return fly_files(
        folder,
        mission=mission_content(segments, distance="500 nmi"),
        aircraft=aircraft_content(drag_polar=None) | {"drag_polar": polar},
        engine=engine_content(static_thrust="75 kN"),
    )


def test_a_table_of_the_parabola_flies_as_the_parabola(tmp_path: Path) -> None:
    law = flown(tmp_path, [UP, OUT, DOWN])
    other = with_polar(tmp_path, table(MACHS, [i / 20.0 for i in range(21)]), [UP, OUT, DOWN])
    assert law.failure is None
    assert other.failure is None
    # A table by 0.05 is off by 7e-6 of 0.02 at the worst lift coefficients; see test_polars.
    assert other.totals.block_fuel == pytest.approx(law.totals.block_fuel, rel=2e-4)


def test_beyond_the_table_in_mach_number(tmp_path: Path) -> None:
    failure = failure_of(with_polar(tmp_path, table([0.0, 0.5, 0.7], LIFTS), [UP, OUT, DOWN]))
    assert failure.what == "Mach number in the drag polar's table"
    assert failure.segment == "climb"
    assert failure.value > failure.bound == 0.7
    assert failure.advice == "stay within 0 to 0.7, or give drag_polar a table that goes further"


def test_below_the_table_in_mach_number(tmp_path: Path) -> None:
    failure = failure_of(with_polar(tmp_path, table([0.5, 0.7, 0.85], LIFTS), [UP, OUT, DOWN]))
    assert failure.what == "Mach number in the drag polar's table"
    assert failure.value < failure.bound == 0.5


def test_a_table_over_mach_alone_is_bounded_too(tmp_path: Path) -> None:
    polar: Content = {
        "machs": [0.0, 0.7],
        "zero_lift_drag_coefficient": [0.0175, 0.0175],
        "induced_drag_factor": [0.042, 0.042],
    }
    failure = failure_of(with_polar(tmp_path, polar, [UP, OUT, DOWN]))
    assert (failure.what, failure.bound) == ("Mach number in the drag polar's table", 0.7)


def test_beyond_the_table_in_lift(tmp_path: Path) -> None:
    failure = failure_of(with_polar(tmp_path, table(MACHS, [0.0, 0.15, 0.3]), [UP, OUT, DOWN]))
    assert failure.what == "lift coefficient in the drag polar's table"
    assert failure.value > failure.bound == 0.3
    low = failure_of(with_polar(tmp_path, table(MACHS, [0.35, 0.6, 1.0]), [UP, OUT, DOWN]))
    assert low.what == "lift coefficient in the drag polar's table"
    assert low.value < low.bound == 0.35


def test_buffet_stops_a_flight_and_its_margin_warns(tmp_path: Path) -> None:
    """Onset this side or that of the cruise's greatest lift coefficient, and of 1.3 times it."""
    steps = segment(flown(tmp_path, [UP, OUT, DOWN]), "out").steps
    coefficient = float(max(steps.lift / (0.7 * steps.static_pressure * steps.mach**2 * 62.0)))

    def flight_at(share: float, factor: float | None) -> Flight:
        onset = {"machs": [0.7, 0.8], "lift_coefficients": [share * coefficient] * 2}
        limits = {"buffet": onset, "buffet_load_factor": factor}
        return flown(tmp_path, [UP, OUT, DOWN], limits=limits)

    for share, factor, is_kept in ((1.31, None, True), (1.29, None, False), (1.29, 1.2, True)):
        flight = flight_at(share, factor)
        (margin,) = (m for m in flight.margins if m.name == "load factor to buffet onset")
        assert flight.failure is None
        assert margin.is_met == is_kept
        assert margin.value == pytest.approx(share, rel=1e-3)
        assert any("buffet" in warning for warning in flight.warnings) != is_kept
    failure = failure_of(flight_at(0.99, None))
    assert failure.what == "lift coefficient against buffet onset"
    assert failure.bound == pytest.approx(0.99 * coefficient, rel=1e-12)
    assert failure.value > failure.bound


def test_beyond_the_last_mach_number_of_buffet(tmp_path: Path) -> None:
    buffet = {"machs": [0.3, 0.7], "lift_coefficients": [1.6, 1.4]}
    failure = failure_of(flown(tmp_path, [UP, OUT, DOWN], limits={"buffet": buffet}))
    assert failure.what == "Mach number in the table of buffet onset"
    assert failure.bound == 0.7
    assert failure.segment == "climb"


def test_buffet_of_the_clean_wing_is_not_asked_with_flaps(tmp_path: Path) -> None:
    approach: Content = {"kind": "approach", "name": "approach", "time": "4 min"}
    buffet = {"machs": [0.0, 0.5, 0.8], "lift_coefficients": [0.9, 0.9, 0.9]}
    flight = flown(tmp_path, [UP, OUT, DOWN, approach], limits={"buffet": buffet})
    steps = segment(flight, "approach").steps
    coefficient = steps.lift / (0.7 * steps.static_pressure * steps.mach**2 * 62.0)
    assert max(coefficient) > 1.0
    assert flight.failure is None


@pytest.mark.parametrize(
    ("limits", "what", "unit", "where"),
    [
        ({"maximum_pressure_altitude": "FL330"}, "pressure altitude", "m", "climb"),
        ({"maximum_dynamic_pressure": "9 kPa"}, "dynamic pressure", "Pa", "climb"),
    ],
)
def test_ceiling_and_dynamic_pressure(
    tmp_path: Path, limits: Content, what: str, unit: str, where: str
) -> None:
    failure = failure_of(flown(tmp_path, [UP, OUT, DOWN], limits=limits))
    assert (failure.what, failure.unit, failure.segment) == (what, unit, where)
    assert failure.value > failure.bound


@pytest.mark.parametrize(("share", "is_flown"), [(1.00001, True), (0.99999, False)])
def test_dynamic_pressure_is_that_of_the_steps(
    tmp_path: Path, share: float, is_flown: bool
) -> None:
    most = share * 0.7 * 30089.6 * 0.7**2  # 30,000 ft: ISO 2533:1975, six digits
    limits = {"maximum_dynamic_pressure": f"{most} Pa"}
    flight = flown(tmp_path, [OUT | {"mach": 0.7, "pressure_altitude": "FL300"}], limits=limits)
    assert (flight.failure is None) == is_flown


def by_name(plane: Aircraft, flown: Steps, lift: list[float], is_clean: list[bool]) -> Content:
    """Where each boundary is passed, and its value there, by the boundary's name."""
    return {
        name: (passed.tolist(), value)
        for passed, name, value, *_ in passed_boundaries(
            plane, flown, np.array(lift), np.array(is_clean)
        )
    }


LEVEL = made_steps(
    elapsed=[0.0, 1.0, 2.0], altitude=3000.0, mach=0.6, speed=200.0, mass=[9e3] * 3,
    lift_to_drag=15.0, thrust=1e4, fuel_flow=0.2, rating_thrust=4e4,
)  # fmt: skip


def test_a_load_factor_of_lift_beyond_weight(tmp_path: Path) -> None:
    plane = load_aircraft(write(tmp_path, "aircraft", aircraft_content()))
    pulled = replace(LEVEL, lift=LEVEL.weight * [1.0, 2.4, 2.6])
    passed, value = by_name(plane, pulled, [0.2, 0.48, 0.52], [True] * 3)["load factor"]
    assert passed == [False, False, True]
    assert value == pytest.approx([1.0, 2.4, 2.6], rel=1e-12)


def test_the_end_of_the_buffet_table_is_not_asked_with_flaps(tmp_path: Path) -> None:
    buffet = {"machs": [0.1, 0.5], "lift_coefficients": [1.4, 1.2]}
    content = aircraft_content(limits={"buffet": buffet})
    plane = load_aircraft(write(tmp_path, "aircraft", content))
    found = by_name(plane, LEVEL, [0.2] * 3, [True, False, True])
    assert found["Mach number in the table of buffet onset"][0] == [True, False, True]
