"""The boundary of a mission: its corners, its points flown alone, its screen and its record."""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from mission_files import (
    PROFILES,
    Content,
    aircraft_content,
    engine_content,
    mission_content,
    write,
)

from engine import load_engine
from engine.errors import InputRefused
from engine.interface import Engine
from mission.aircraft import Aircraft, load_aircraft
from mission.errors import CannotBeFlown
from mission.flight import fly
from mission.mission_file import Mission, load_mission
from mission.outputs.page import as_text
from mission.outputs.reach_record import reach_record
from mission.outputs.reach_screen import reach_screen
from mission.questions.reach import Reach, reach

ERROR = 1e-5  # of reach: five nodes a span in a batch against nine in a flight alone
UP: Content = {"kind": "climb", "to": "FL350", "calibrated_airspeed": "280 kt", "mach": 0.74}
OUT: Content = {"kind": "cruise", "distance": "rest"}
DOWN: Content = {"kind": "descent", "calibrated_airspeed": "280 kt", "mach": 0.74}
RESERVES: Content = {"rule": "14 CFR 91.151, day"}
LEGS: list[Content] = [
    {"name": "out", "distance": "radius"},
    {"name": "home", "distance": "radius"},
]


def loaded(
    folder: Path, segments: list[Content], plane: Content | None = None, **changes: Any
) -> tuple[Mission, Aircraft, Engine]:
    content = mission_content(segments, **({"reserves": RESERVES} | changes))
    return (
        load_mission(write(folder, "mission", content)),
        load_aircraft(write(folder, "plane", plane or aircraft_content())),
        load_engine(write(folder, "engine", engine_content())),
    )


@pytest.fixture(scope="module")
def boundary(tmp_path_factory: pytest.TempPathFactory) -> tuple[Reach, Mission, Aircraft, Engine]:
    taxi: Content = {"kind": "taxi", "time": "10 min"}
    folder = tmp_path_factory.mktemp("reach")
    asked = loaded(folder, [taxi, {"kind": "take-off"}, UP, OUT, DOWN], distance="800 nmi")
    return reach(*asked, points=12), *asked


def test_corners_are_where_limits_meet(
    boundary: tuple[Reach, Mission, Aircraft, Engine],
) -> None:
    found, _, aircraft, _ = boundary
    names = [point.corner for point in found.corners]
    assert names == ["greatest payload", "tanks full", "ferry, no payload"]
    heavy, full, empty = (point.totals for point in found.corners)
    assert heavy is not None
    assert full is not None
    assert empty is not None
    assert heavy.ramp_mass - heavy.loaded_fuel == pytest.approx(aircraft.maximum_zero_fuel_mass)
    assert heavy.takeoff_mass == pytest.approx(aircraft.maximum_take_off_mass, abs=1e-3)
    assert full.takeoff_mass == pytest.approx(aircraft.maximum_take_off_mass, abs=1e-3)
    assert full.loaded_fuel == pytest.approx(aircraft.tank_capacity, abs=1e-3)
    assert empty.loaded_fuel == pytest.approx(aircraft.tank_capacity, abs=1e-3)
    assert found.corners[-1].payload == 0.0


def test_less_payload_goes_farther_and_no_fuel_is_left(
    boundary: tuple[Reach, Mission, Aircraft, Engine],
) -> None:
    found = boundary[0]
    assert np.all(np.diff([point.payload for point in found.points]) < 0.0)
    assert np.all(np.diff([point.reach for point in found.points]) > 0.0)
    for point in found.points:
        assert point.is_flown
        assert point.totals is not None
        assert abs(point.totals.fuel_margin) < 1e-6 * point.totals.loaded_fuel
        assert point.totals.reserve_fuel > 0.0


def test_points_flown_alone_come_out_alike(
    boundary: tuple[Reach, Mission, Aircraft, Engine],
) -> None:
    found, mission, aircraft, engine = boundary
    for point in (*found.corners, found.points[2]):
        assert point.totals is not None
        fuel = mission.written.fuel.model_copy(
            update={"load": point.totals.loaded_fuel, "as_needed": False}
        )
        written = mission.written.model_copy(
            update={"payload": point.payload, "fuel": fuel, "distance": "free"}
        )
        alone = fly(mission.model_copy(update={"written": written}), aircraft, engine)
        assert alone.solution is not None
        assert alone.solution.value == pytest.approx(point.reach, rel=ERROR)
        assert alone.totals.block_fuel == pytest.approx(point.totals.block_fuel, rel=ERROR)


def test_few_flights_a_point_in_one_batch(
    boundary: tuple[Reach, Mission, Aircraft, Engine],
) -> None:
    assert boundary[0].plans == 1
    assert boundary[0].flights <= 12


def test_landing_mass_may_bound_the_payload(tmp_path: Path) -> None:
    plane = aircraft_content(masses={"maximum_landing": "19.2 t"})
    mission, aircraft, engine = loaded(tmp_path, [UP, OUT, DOWN], plane, distance="800 nmi")
    found = reach(mission, aircraft, engine, points=10)
    assert found.top == "landing mass"
    first = found.points[0].totals
    assert first is not None
    assert first.landing_mass == pytest.approx(19200.0, abs=1.0)


def test_time_on_station_falls_with_radius(tmp_path: Path) -> None:
    watch: Content = {"kind": "loiter", "name": "watch", "time": "20 min"}
    home = OUT | {"name": "home", "starts_leg": "home", "mach": 0.74}
    segments = [UP, OUT, watch, home, DOWN]
    asked = loaded(tmp_path, segments, radius="300 nmi", leg=LEGS)
    found = reach(*asked, points=9)
    assert found.is_radius
    assert found.station == "watch"
    times = [point.station_time for point in found.points]
    assert np.all(np.diff(times) < 0.0)
    assert times[-1] < 10.0
    assert np.all(np.diff([point.reach for point in found.points]) > 0.0)


def test_refusals(tmp_path: Path) -> None:
    with pytest.raises(InputRefused, match="no distance, radius or cruise over a distance"):
        reach(*loaded(tmp_path, [UP, DOWN]))
    asked = loaded(tmp_path, [UP, OUT, DOWN], distance="800 nmi")
    with pytest.raises(InputRefused, match="points: = 3; allowed are"):
        reach(*asked, points=3)
    tiny = aircraft_content(fuel_tanks={"capacity": "120 kg"})
    with pytest.raises(CannotBeFlown, match="no distance is short enough"):
        reach(*loaded(tmp_path, [UP, OUT, DOWN], tiny, distance="800 nmi"), points=9)


@pytest.mark.parametrize("width", [80, 100])
def test_the_screen_is_within_its_width_and_says_the_corners_first(
    boundary: tuple[Reach, Mission, Aircraft, Engine], width: int
) -> None:
    found = boundary[0]
    lines = as_text(reach_screen(found, width=width), width).splitlines()
    assert max(len(line) for line in lines) <= width
    assert lines[3].startswith("greatest payload")
    assert any("tanks full" in line for line in lines[3:6])
    assert any("\u2502" in line and "ferry, no payload" in line for line in lines)


def test_the_record_is_json_with_units(
    boundary: tuple[Reach, Mission, Aircraft, Engine],
) -> None:
    record = json.loads(json.dumps(reach_record(boundary[0]), allow_nan=False))
    assert record["format"] == "longlegs-reach"
    assert next(p["corner"] for p in record["points"] if p["corner"]) == "greatest payload"
    assert {"payload_kg", "ground_distance_m", "block_fuel_kg", "reserve_fuel_kg"} <= set(
        record["points"][0]
    )


def test_the_ferry_is_reached_in_groups() -> None:
    """A cruise-climb ends where its mass has it, so that members share what follows in groups."""
    mission = load_mission(PROFILES / "ferry.toml")
    aircraft = load_aircraft(PROFILES / "coast_watch_twin.toml")
    found = reach(mission, aircraft, load_engine(PROFILES / "bypass_5.toml"), points=9)
    assert found.plans > 1
    assert found.points[-1].reach > found.points[0].reach
