"""Engine options ranked on one mission."""

from __future__ import annotations

from pathlib import Path

import pytest
from mission_files import (
    AIRCRAFT,
    BYPASS_5,
    OUT_AND_DOWN,
    PROFILES,
    engine_content,
    load_all,
    mission_content,
    write,
)

from engine import load_engine
from engine.options.loading import engine_from_content
from mission.aircraft import load_aircraft
from mission.comparison import compare, mean_cruise_consumption
from mission.flight import fly
from mission.mission_file import load_mission
from mission.outputs.comparison_screen import comparison_screen
from mission.outputs.page import as_text
from mission.outputs.setting import Setting

CONSUMPTIONS = {"thirsty": "0.8 1/h", "frugal": "0.5 1/h", "middling": "0.65 1/h"}


def options(folder: Path, **thrusts: str) -> dict[str, object]:
    found = {}
    for name, consumption in CONSUMPTIONS.items():
        content = engine_content(
            name=name,
            specific_fuel_consumption=consumption,
            static_thrust=thrusts.get(name, "55 kN"),
        )
        found[name] = load_engine(write(folder, name, content))
    return found


def test_options_are_ranked_by_block_fuel(tmp_path: Path) -> None:
    mission, plane, _ = load_all(
        tmp_path, AIRCRAFT, engine_content(), mission_content(OUT_AND_DOWN, distance="900 nmi")
    )
    comparison = compare(mission, plane, options(tmp_path))
    assert list(comparison.flights) == ["frugal", "middling", "thirsty"]
    assert comparison.best == "frugal"
    fuels = [flight.totals.block_fuel for flight in comparison.flights.values()]
    assert fuels == sorted(fuels)


def test_each_option_is_the_flight_flown_alone(tmp_path: Path) -> None:
    mission, plane, _ = load_all(
        tmp_path, AIRCRAFT, engine_content(), mission_content(OUT_AND_DOWN, distance="900 nmi")
    )
    engines = options(tmp_path)
    for name, flight in compare(mission, plane, engines).flights.items():
        alone = fly(mission, plane, engines[name])
        assert flight.totals == alone.totals


def test_an_option_that_cannot_fly_stands_last_however_little_it_burns(tmp_path: Path) -> None:
    mission, plane, _ = load_all(
        tmp_path, AIRCRAFT, engine_content(), mission_content(OUT_AND_DOWN, distance="900 nmi")
    )
    comparison = compare(mission, plane, options(tmp_path, frugal="9 kN"))
    assert list(comparison.flights)[-1] == "frugal"
    assert comparison.best == "middling"
    assert comparison.flights["frugal"].failure is not None


def test_no_best_where_none_can_fly(tmp_path: Path) -> None:
    mission, plane, _ = load_all(
        tmp_path, AIRCRAFT, engine_content(), mission_content(OUT_AND_DOWN, distance="900 nmi")
    )
    weak = dict.fromkeys(CONSUMPTIONS, "9 kN")
    assert compare(mission, plane, options(tmp_path, **weak)).best is None


def test_mean_cruise_consumption_of_a_constant_engine(tmp_path: Path) -> None:
    mission, plane, engine = load_all(
        tmp_path, AIRCRAFT, engine_content(), mission_content(OUT_AND_DOWN, distance="900 nmi")
    )
    found = mean_cruise_consumption(fly(mission, plane, engine))
    assert found == pytest.approx(0.6 / 3600.0 / 9.80665, rel=1e-9)


def test_options_of_different_fuels_are_compared_by_heat() -> None:
    hydrogen = {"kind": "constant consumption", "name": "cold", "fuel": "hydrogen"}
    hydrogen |= {"specific_fuel_consumption": "0.2 1/h", "static_thrust": "60 kN"}
    engines = {"cold": engine_from_content(hydrogen, "cold"), "warm": load_engine(BYPASS_5)}
    mission = load_mission(PROFILES / "coast_watch.toml")
    twin = load_aircraft(PROFILES / "coast_watch_twin.toml")
    compared = compare(mission, twin, engines)
    setting = Setting(payload=1500.0, headwind=5.1, engine_count=2, is_fuel_as_needed=True)
    text = as_text(comparison_screen(compared, setting), 100)
    burnt = compared.flights["cold"].totals.block_fuel
    assert "Not the same fuel: compare the heat of it" in text
    assert f"{burnt * 119.96051e6 / 1e9:.1f} GJ of hydrogen" in text
