"""The aircraft file: what is read, what is assumed and said, and what is refused."""

from __future__ import annotations

from math import pi, sqrt
from pathlib import Path

import pytest
from mission_files import Content, aircraft_content, write

from engine.errors import InputRefused
from engine.fuels import FUELS, KEROSENE
from engine.quantities import KNOT
from mission.aerodynamics import best_lift_coefficient, drag_coefficient
from mission.aircraft import Aircraft, governing_tank_limit, load_aircraft, usable_fuel


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
    ],
)
def test_refusals_name_the_file_and_the_key(tmp_path: Path, changes: Content, match: str) -> None:
    with pytest.raises(InputRefused, match=match) as refusal:
        loaded(tmp_path, aircraft_content(**changes))
    assert refusal.value.where.endswith("aircraft.toml")


def test_a_file_that_is_not_there(tmp_path: Path) -> None:
    with pytest.raises(InputRefused, match=r"none\.toml: there is no such file"):
        load_aircraft(tmp_path / "none.toml")
