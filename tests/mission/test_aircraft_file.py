"""The aircraft file: what is read, what is assumed and said, and what is refused."""

from __future__ import annotations

import pickle
from math import inf, pi, sqrt
from pathlib import Path

import numpy as np
import pytest
from mission_files import Content, aircraft_content, write

from engine.errors import InputRefused
from engine.fuels import FUELS, KEROSENE
from engine.quantities import KNOT
from mission.aerodynamics import (
    LEFT_OUT,
    best_lift_coefficient,
    buffet_lift_coefficient,
    buffet_mach_bounds,
    drag_coefficient,
)
from mission.aircraft import Aircraft, Store, governing_tank_limit, load_aircraft, usable_fuel
from mission.polars.parabola import Parabola


def loaded(folder: Path, content: Content) -> Aircraft:
    return load_aircraft(write(folder, "aircraft", content))


def test_values_come_in_si(tmp_path: Path) -> None:
    plane = loaded(tmp_path, aircraft_content(fuel_tanks={"capacity": "9 t", "unusable": "60 kg"}))
    assert plane.operating_empty_mass == 15500.0
    assert plane.maximum_ramp_mass == 27200.0
    assert usable_fuel(plane, KEROSENE) == 8940.0
    assert plane.unusable_fuel == 60.0
    assert plane.wing_area == 62.0
    assert plane.engine_count == 2
    assert plane.maximum_operating_calibrated_airspeed == pytest.approx(340.0 * KNOT)


@pytest.mark.parametrize(
    ("tanks", "fuel", "usable", "governs"),
    [
        ({"capacity": "9 t"}, "hydrogen", 8940.0, "capacity"),
        ({"capacity": "9 t", "volume": "12 m**3"}, "kerosene", 8940.0, "capacity"),
        ({"capacity": "9 t", "volume": "11000 L"}, "kerosene", 11.0 * 800.0 - 60.0, "volume"),
        ({"capacity": "9 t", "volume": "12 m**3"}, "hydrogen", 12.0 * 70.8 - 60.0, "volume"),
        ({"capacity": None, "volume": "12 m**3"}, "methane", 12.0 * 422.6 - 60.0, "volume"),
    ],
)
def test_tanks_hold_the_lesser_of_a_mass_and_a_volume(
    tmp_path: Path, tanks: Content, fuel: str, usable: float, governs: str
) -> None:
    plane = loaded(tmp_path, aircraft_content(fuel_tanks={**tanks, "unusable": "60 kg"}))
    assert usable_fuel(plane, FUELS[fuel]) == pytest.approx(usable, rel=1e-12)
    assert governing_tank_limit(plane, FUELS[fuel]) == governs


def test_induced_drag_from_oswald_efficiency(tmp_path: Path) -> None:
    polar = {"induced_drag_factor": None, "oswald_efficiency": 0.8, "aspect_ratio": 9.5}
    plane = loaded(tmp_path, aircraft_content(drag_polar=polar))
    assert isinstance(plane.polar, Parabola)
    assert plane.polar.induced_drag_factor == pytest.approx(1.0 / (pi * 0.8 * 9.5), rel=1e-12)


def test_polar_with_least_drag_off_zero_lift(tmp_path: Path) -> None:
    plane = loaded(tmp_path, aircraft_content(drag_polar={"least_drag_lift_coefficient": 0.1}))
    assert drag_coefficient(plane.polar, 0.5, 0.3) == pytest.approx(0.0175 + 0.042 * 0.4**2)
    best = best_lift_coefficient(plane.polar)
    assert best == pytest.approx(sqrt(0.0175 / 0.042 + 0.1**2))
    for other in (0.98 * best, 1.02 * best):
        ratio = other / drag_coefficient(plane.polar, other, 0.3)
        assert ratio < best / drag_coefficient(plane.polar, best, 0.3)


def test_what_is_not_said_is_listed(tmp_path: Path) -> None:
    plane = loaded(
        tmp_path,
        aircraft_content(
            masses={"maximum_ramp": None},
            limits={"take_off_lift_coefficient": None, "approach_lift_coefficient": None},
        ),
    )
    assert plane.maximum_ramp_mass == plane.maximum_take_off_mass
    assert plane.take_off_lift_coefficient == plane.maximum_lift_coefficient
    said = "\n".join(plane.assumed)
    for expected in (
        "limits.take_off_lift_coefficient = 1.5",
        "limits.approach_lift_coefficient = 1.5",
        "masses.maximum_ramp",
        "fuel_tanks.unusable = 0.0",
        "drag_polar.least_drag_lift_coefficient = 0.0",
    ):
        assert expected in said


BUFFET = {"machs": [0.3, 0.7, 0.8], "lift_coefficients": [1.2, 0.9, 0.7]}
TANK = {"mass": "120 kg", "drag_area": "0.02 m**2", "fuel_capacity": "450 kg", "most": 2}
CAMERA = {"mass": "80 kg", "drag_coefficient": 0.001}


def test_increments_stores_and_room_come_in_si(tmp_path: Path) -> None:
    plane = loaded(
        tmp_path,
        aircraft_content(
            drag_increments={"gear": 0.02, "take_off_flaps": 0.011, "approach_flaps": 0.04},
            stores={"drop_tank": TANK, "camera_pod": CAMERA},
            installation={"fan_diameter_clearance": "190 mm"},
        ),
    )
    assert plane.gear_drag_increment == 0.02
    assert plane.take_off_flaps_drag_increment == 0.011
    assert plane.approach_flaps_drag_increment == 0.04
    assert plane.fan_diameter_clearance == pytest.approx(0.19)
    assert dict(plane.stores) == {
        "drop_tank": Store("drop_tank", 120.0, 0.02, 450.0, 2),
        "camera_pod": Store("camera_pod", 80.0, 0.001 * 62.0, 0.0, 1),
    }
    said = "\n".join(plane.assumed)
    assert "stores.camera_pod.fuel_capacity = 0.0" in said
    assert "stores.camera_pod.most = 1" in said
    assert "stores.drop_tank" not in said
    assert "drag_increments" not in said


def test_limits_come_in_si(tmp_path: Path) -> None:
    plane = loaded(
        tmp_path,
        aircraft_content(
            limits={
                "maximum_load_factor": 7.3,
                "maximum_dynamic_pressure": "40 kPa",
                "maximum_pressure_altitude": "FL410",
                "buffet": BUFFET,
            }
        ),
    )
    assert plane.maximum_load_factor == 7.3
    assert plane.maximum_dynamic_pressure == 40000.0
    assert plane.maximum_pressure_altitude == pytest.approx(41000.0 * 0.3048)
    assert plane.buffet_load_factor == 1.3
    assert "limits.buffet_load_factor = 1.3" in plane.assumed
    other = aircraft_content(limits={"buffet": BUFFET, "buffet_load_factor": 1.5})
    assert loaded(tmp_path, other).buffet_load_factor == 1.5


def test_without_limits_nothing_is_bounded(tmp_path: Path) -> None:
    plane = loaded(tmp_path, aircraft_content())
    assert plane.maximum_dynamic_pressure == plane.maximum_pressure_altitude == inf
    assert plane.fan_diameter_clearance == inf
    assert dict(plane.stores) == {}
    assert plane.gear_drag_increment == 0.0
    assert buffet_mach_bounds(plane) is None
    assert buffet_lift_coefficient(plane, 0.7) == inf
    assert buffet_lift_coefficient(plane, np.full((2, 3), 0.7)).tolist() == [[inf] * 3] * 2
    said = "\n".join(plane.assumed)
    assert "limits.maximum_load_factor = 2.5" in said
    assert "drag_increments = 0.0" in said
    assert "buffet" not in said


def test_buffet_begins_on_straight_lines_held_at_the_ends(tmp_path: Path) -> None:
    plane = loaded(tmp_path, aircraft_content(limits={"buffet": BUFFET}))
    machs = [[0.0, 0.3, 0.5], [0.75, 0.8, 0.9]]
    onset = buffet_lift_coefficient(plane, machs)
    assert onset == pytest.approx(np.array([[1.2, 1.2, 1.05], [0.8, 0.7, 0.7]]), rel=1e-14)
    assert buffet_mach_bounds(plane) == (0.0, 0.8)


def test_what_no_file_can_say_is_said(tmp_path: Path) -> None:
    assert loaded(tmp_path, aircraft_content()).assumed[-1] == LEFT_OUT
    assert "Reynolds number" in LEFT_OUT
    assert "trim" in LEFT_OUT


def test_an_aircraft_reaches_a_worker_whole(tmp_path: Path) -> None:
    content = aircraft_content(stores={"tank": TANK}, limits={"buffet": BUFFET})
    plane = loaded(tmp_path, content)
    again = pickle.loads(pickle.dumps(plane))
    assert again == plane
    assert hash(again) == hash(plane)


def test_nothing_is_listed_that_is_said(tmp_path: Path) -> None:
    said = "\n".join(loaded(tmp_path, aircraft_content()).assumed)
    assert "lift_coefficient = 1.5" not in said
    assert "maximum_ramp" not in said


@pytest.mark.parametrize(
    ("changes", "match"),
    [
        ({"wing_aera": "3 m**2"}, r"wing_aera: unknown key; did you mean wing_area\?"),
        (
            {"masses": {"operating_empty": None, "operating_emty": "15 t"}},
            r"masses\.operating_emty: unknown key; did you mean operating_empty\?",
        ),
        ({"wing_area": None}, r"wing_area: is missing|wing_area.*missing"),
        ({"wing_area": 62}, r"wing_area: 62 has no unit"),
        ({"wing_area": "62 kg"}, r"wing_area: 'kg' is not a unit of area"),
        ({"wing_area": "-62 m**2"}, r"wing_area.*greater than 0"),
        ({"masses": {"operating_empty": "20 t"}}, "operating_empty is above.*maximum_zero_fuel"),
        ({"masses": {"maximum_zero_fuel": "29 t"}}, "maximum_zero_fuel is above.*maximum_take_off"),
        ({"masses": {"maximum_ramp": "20 t"}}, "maximum_ramp is below.*maximum_take_off"),
        ({"fuel_tanks": {"unusable": "9 t"}}, "fuel_tanks: unusable is not below capacity"),
        ({"fuel_tanks": {"capacity": None}}, 'fuel_tanks: give capacity = "9 t", or volume = '),
        ({"fuel_tanks": {"volume": "11 t"}}, r"fuel_tanks\.volume: 't' is not a unit of volume"),
        ({"fuel_tanks": {"volume": "0 L"}}, r"fuel_tanks\.volume.*greater than 0"),
        (
            {"drag_polar": {"aspect_ratio": 9.0}},
            "either induced_drag_factor, or oswald_efficiency with aspect_ratio",
        ),
        (
            {"drag_polar": {"induced_drag_factor": None, "aspect_ratio": 9.0}},
            "either induced_drag_factor, or oswald_efficiency with aspect_ratio",
        ),
        (
            {"drag_polar": {"induced_drag_factor": None}},
            "either induced_drag_factor, or oswald_efficiency with aspect_ratio",
        ),
        ({"engine_count": 2.5}, r"engine_count.*2\.5"),
        ({"engine_count": 0}, r"engine_count.*0"),
        ({"drag_factor": float("nan")}, r"drag_factor.*nan"),
        ({"limits": {"maximum_operating_mach": "0.8"}}, r"maximum_operating_mach.*'0\.8'"),
        ({"drag_increments": {"gear": -0.01}}, r"drag_increments\.gear: = -0\.01; it should be"),
        (
            {"drag_increments": {"gears": 0.01}},
            r"drag_increments\.gears: unknown key; did you mean",
        ),
        ({"stores": {"tank": {"mass": "9 kg"}}}, r"stores\.tank: give either drag_area = "),
        (
            {"stores": {"tank": TANK | {"drag_coefficient": 0.001}}},
            r"stores\.tank: give either drag_area = .*, or drag_coefficient on wing area",
        ),
        ({"stores": {"tank": TANK | {"mass": 9}}}, r"stores\.tank\.mass: 9 has no unit"),
        ({"stores": {"tank": TANK | {"most": 0}}}, r"stores\.tank\.most: = 0; it should be"),
        (
            {"stores": {"tank": TANK | {"drag_aera": "1 m**2"}}},
            r"stores\.tank\.drag_aera: unknown key; did you mean drag_area\?",
        ),
        ({"stores": {"tank": 3}}, r"stores\.tank: = 3; a table belongs here"),
        (
            {"limits": {"maximum_dynamic_pressure": 40000}},
            r"maximum_dynamic_pressure: 40000 has no",
        ),
        ({"limits": {"maximum_load_factor": 0.9}}, r"maximum_load_factor: = 0\.9; it should be"),
        (
            {"limits": {"buffet_load_factor": 1.3}},
            "limits: buffet_load_factor has nothing to act on: give buffet too",
        ),
        (
            {"limits": {"buffet": BUFFET | {"machs": [0.3, 0.8, 0.7]}}},
            r"limits\.buffet: machs has to rise from entry to entry: 0\.7 follows 0\.8",
        ),
        (
            {"limits": {"buffet": BUFFET | {"lift_coefficients": [1.2, 0.9]}}},
            r"limits\.buffet: lift_coefficients has 2 entries where machs has 3",
        ),
        (
            {"installation": {"fan_diameter_clearance": "1.9 kg"}},
            r"installation\.fan_diameter_clearance: 'kg' is not a unit of length",
        ),
    ],
)
def test_refusals_name_the_file_and_the_key(tmp_path: Path, changes: Content, match: str) -> None:
    with pytest.raises(InputRefused, match=match) as refusal:
        loaded(tmp_path, aircraft_content(**changes))
    assert refusal.value.where.endswith("aircraft.toml")


def test_a_file_that_is_not_there(tmp_path: Path) -> None:
    with pytest.raises(InputRefused, match=r"none\.toml: there is no such file"):
        load_aircraft(tmp_path / "none.toml")
