"""Fuels unlike kerosene: what the tanks hold of them, and what a flight says about its fuel."""

from __future__ import annotations

from pathlib import Path

import pytest
from mission_files import OUT_AND_DOWN, Content, aircraft_content, fly_files, mission_content
from mission_files import engine_content as constant

from engine.fuels import FUELS
from mission.outputs.flight_log import flight_log
from mission.outputs.page import as_text
from mission.outputs.records import flight_record
from mission.outputs.setting import Setting
from mission.outputs.units import TRADE
from mission.results import Flight

SETTING = Setting(payload=2500.0, headwind=0.0, engine_count=2, is_fuel_as_needed=True)
# Consumption of the same heat: kerosene's 0.6 per hour by the ratio of heating values.
HYDROGEN: Content = {"fuel": "hydrogen", "specific_fuel_consumption": "0.21523 1/h"}


def flown(folder: Path, tanks: Content, engine: Content, miles: int = 900) -> Flight:
    return fly_files(
        folder,
        mission=mission_content(OUT_AND_DOWN, distance=f"{miles} nmi"),
        aircraft=aircraft_content(fuel_tanks=tanks),
        engine=constant(**engine),
    )


def about_tanks(flight: Flight) -> list[str]:
    return [text for text in flight.warnings if text.startswith("tanks")]


def margin(flight: Flight, name: str) -> float:
    return next(m.bound for m in flight.margins if m.name == name)


def test_hydrogen_does_not_fit_into_kerosene_tanks(tmp_path: Path) -> None:
    """A mass of 9 t and 11 m3: the kerosene fits either way, of hydrogen 759 kg do."""
    tanks = {"capacity": "9 t", "volume": "11 m**3", "unusable": "20 kg"}
    kerosene, hydrogen = (flown(tmp_path, tanks, engine, 2000) for engine in ({}, HYDROGEN))

    assert kerosene.failure is None
    assert margin(kerosene, "fuel loaded, by tank volume") == pytest.approx(11.0 * 800.0 - 20.0)
    failure = hydrogen.failure
    assert failure is not None
    assert failure.what == "usable fuel to load, by tank volume"
    assert failure.bound == pytest.approx(11.0 * 70.8 - 20.0)
    assert failure.value == pytest.approx(hydrogen.totals.loaded_fuel)
    assert failure.value > failure.bound
    text = " ".join(as_text(flight_log(hydrogen, SETTING), 100).split())
    assert "usable fuel to load, by tank volume: " in text
    assert "kg is above 759 kg, by " in text
    assert flight_record(hydrogen)["failure"]["what"] == failure.what


def test_tanks_for_hydrogen_fly_it(tmp_path: Path) -> None:
    flight = flown(tmp_path, {"capacity": "9 t", "volume": "40 m**3"}, HYDROGEN)
    assert flight.failure is None
    assert about_tanks(flight) == []
    assert margin(flight, "fuel loaded, by tank volume") == pytest.approx(40.0 * 70.8)


def test_a_capacity_in_mass_governs_where_it_is_less(tmp_path: Path) -> None:
    flight = flown(tmp_path, {"capacity": "1 t", "volume": "40 m**3"}, {})
    assert flight.failure is not None
    assert flight.failure.what == "usable fuel to load, by tank capacity"
    assert flight.failure.bound == 1000.0


def test_tanks_known_by_mass_alone_are_pointed_at(tmp_path: Path) -> None:
    flight = flown(tmp_path, {}, HYDROGEN)
    loaded = flight.totals.loaded_fuel
    assert about_tanks(flight) == [
        f"tanks: the aircraft bounds them by mass alone; {loaded:,.0f} kg of hydrogen take "
        f"{loaded / 70.8:,.1f} m3, as much kerosene {loaded / 800.0:,.1f} m3: give "
        "fuel_tanks.volume",
    ]
    assert about_tanks(flown(tmp_path, {}, {"fuel": "Jet A"})) == []


@pytest.mark.parametrize("name", FUELS)
def test_a_flight_tells_its_fuel_and_its_carbon_dioxide(tmp_path: Path, name: str) -> None:
    fuel = FUELS[name]
    flight = flown(tmp_path, {}, {"fuel": name})
    record = flight_record(flight)
    expected = flight.totals.block_fuel * fuel.carbon_dioxide_index
    assert record["fuel"]["name"] == name
    assert record["fuel"]["carbon_dioxide_kg_per_kg"] == fuel.carbon_dioxide_index
    assert record["totals"]["carbon_dioxide_kg"] == pytest.approx(expected, rel=1e-12)
    assert (expected == 0.0) == (name == "hydrogen")


def test_the_log_tells_them_too(tmp_path: Path) -> None:
    metric = as_text(flight_log(flown(tmp_path, {}, {}), SETTING), 100)
    block = float(flown(tmp_path, {}, {}).totals.block_fuel)
    assert (
        f"Fuel: kerosene. Carbon dioxide of the block fuel: {3.15648 * block:,.0f} kg, 3.156 "
        "times its mass."
    ) in " ".join(metric.split())
    trade = as_text(flight_log(flown(tmp_path, {}, HYDROGEN), SETTING, units=TRADE), 100)
    assert (
        "Fuel: hydrogen (liquid at 20 K). Carbon dioxide of the block fuel: 0 lb, 0.000 times its "
        "mass."
    ) in " ".join(trade.split())
