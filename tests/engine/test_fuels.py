"""Fuels: the registry, what an engine file may say of them, and engines that burn them."""

from __future__ import annotations

import re
from math import inf
from typing import Any

import numpy as np
import pytest
from engine_files import Content, load, turbofan_content, turbojet_content

from engine.atmosphere import flight_condition
from engine.errors import InputRefused
from engine.fuels import FUELS, KEROSENE
from engine.gas.species import SPECIES
from engine.interface import Engine, Outcome
from engine.options.loading import engine_from_content

CONSTANT: Content = {
    "kind": "constant consumption",
    "name": "constant",
    "specific_fuel_consumption": "0.6 1/h",
    "static_thrust": "50 kN",
}
OWN: Content = {
    "name": "lamp oil",
    "hydrogen_carbon_ratio": 2.0,
    "lower_heating_value": "43.4 MJ/kg",
    "density": "0.79 kg/L",
}


def engine(kind: str, **changes: Any) -> Engine:
    contents = {
        "turbofan": turbofan_content(),
        "turbojet": turbojet_content(),
        "constant": dict(CONSTANT),
    }
    return engine_from_content(contents[kind] | changes, "some.toml")


@pytest.mark.parametrize("name", FUELS)
def test_products_weigh_what_the_fuel_and_its_oxygen_weigh(name: str) -> None:
    fuel = FUELS[name]
    oxygen = SPECIES["O2"].molar_mass * (fuel.carbon_atoms + fuel.hydrogen_atoms / 4.0)

    products = fuel.carbon_dioxide_index + fuel.water_index

    assert products == pytest.approx(1.0 + oxygen / fuel.molar_mass, rel=1e-12)
    per_mole = fuel.water_index * fuel.molar_mass
    expected = fuel.hydrogen_atoms / 2.0 * SPECIES["H2O"].molar_mass
    assert per_mole == pytest.approx(expected, rel=1e-12)


def test_hydrogen_has_no_carbon() -> None:
    hydrogen = FUELS["hydrogen"]
    assert hydrogen.carbon_dioxide_index == 0.0
    assert hydrogen.hydrogen_carbon_ratio == inf
    assert FUELS["methane"].hydrogen_carbon_ratio == 4.0


def test_every_fuel_says_where_it_comes_from() -> None:
    assert list(FUELS) == [fuel.name for fuel in FUELS.values()]
    assert all(len(fuel.source) > 20 and fuel.storage for fuel in FUELS.values())


def test_the_blend_lies_between_its_halves() -> None:
    """Half of a cubic metre of each: 402 kg of Jet A-1 and 377.5 kg of paraffins."""
    blend = FUELS["paraffinic synthetic blend"]
    heat = 402.0 * 43.15e6 + 377.5 * 44.1e6
    carbon_dioxide = 402.0 * KEROSENE.carbon_dioxide_index + 377.5 * 12.0 * 44.0095 / 170.33484

    assert blend.density == pytest.approx(779.5, rel=1e-12)
    assert blend.lower_heating_value == pytest.approx(heat / 779.5, rel=1e-12)
    assert blend.carbon_dioxide_index == pytest.approx(carbon_dioxide / 779.5, rel=1e-7)


@pytest.mark.parametrize("kind", ["turbofan", "turbojet", "constant"])
def test_an_engine_of_any_kind_knows_its_fuel(kind: str) -> None:
    assert engine(kind).fuel == KEROSENE
    assert engine(kind, fuel="hydrogen").fuel == FUELS["hydrogen"]
    assert engine(kind, fuel={"name": "hydrogen"}).fuel == FUELS["hydrogen"]
    own = engine(kind, fuel=OWN).fuel
    assert (own.name, own.hydrogen_carbon_ratio) == ("lamp oil", 2.0)
    assert (own.lower_heating_value, own.density) == (43.4e6, 790.0)


def test_a_fuel_of_ones_own_by_its_atoms() -> None:
    by_atoms = OWN | {"carbon_atoms": 10.0, "hydrogen_atoms": 20.0}
    del by_atoms["hydrogen_carbon_ratio"]

    one, other = load(turbofan_content({"fuel": OWN})), load(turbofan_content({"fuel": by_atoms}))

    flight = flight_condition(10668.0, 0.78)
    flows = [e.at_rating(flight, "cruise").fuel_flow for e in (one, other)]
    assert flows[0] == pytest.approx(flows[1], rel=1e-12)
    pure = OWN | {"carbon_atoms": 0.0, "hydrogen_atoms": 1.0, "hydrogen_carbon_ratio": None}
    pure = {key: value for key, value in pure.items() if value is not None}
    assert engine("turbojet", fuel=pure).fuel.carbon_dioxide_index == 0.0


@pytest.mark.parametrize(
    ("fuel", "said"),
    [
        ("hydrogn", "'hydrogn' is no fuel known here: kerosene, Jet A, Jet A-1, paraffinic "
                    "synthetic blend, methane, hydrogen; or write a table with name"),
        ({"name": "lamp oil"}, "'lamp oil' is no fuel known here: kerosene"),
        ({"name": "hydrogen", "density": "60 kg/m**3"}, "'hydrogen' has values of its own here"),
        ({**OWN, "density": None}, "a fuel of your own is a table with name"),
        ({**OWN, "hydrogen_carbon_ratio": None}, "a fuel of your own is a table with name"),
        ({**OWN, "carbon_atoms": 1.0}, "give either hydrogen_carbon_ratio, or carbon_atoms and"),
        (
            {**OWN, "hydrogen_carbon_ratio": None, "carbon_atoms": 1.0},
            "give either hydrogen_carbon_ratio, or carbon_atoms and hydrogen_atoms",
        ),
        ({"carbon_atoms": 0.0, "hydrogen_atoms": 0.0}, "of which one is above 0"),
        (3, "a table belongs here"),
    ],
)  # fmt: skip
@pytest.mark.parametrize("kind", ["turbofan", "constant"])
def test_what_is_no_fuel_is_refused(kind: str, fuel: Any, said: str) -> None:
    if isinstance(fuel, dict):
        fuel = {key: value for key, value in fuel.items() if value is not None}
    with pytest.raises(InputRefused, match=re.escape(said)) as caught:
        engine(kind, fuel=fuel)

    assert caught.value.key == "fuel"


def test_only_what_nobody_said_is_assumed() -> None:
    assert not any(line.startswith("fuel") for line in engine("turbofan", fuel="methane").assumed)
    assert not any(line.startswith("fuel") for line in engine("turbofan", fuel=OWN).assumed)
    changed = engine("turbofan", fuel={"lower_heating_value": "42.8 MJ/kg"})
    assert "fuel.name = kerosene" in changed.assumed
    assert not any("heating" in line for line in changed.assumed)
    assert changed.fuel.lower_heating_value == 42.8e6
    assert changed.fuel.carbon_dioxide_index == KEROSENE.carbon_dioxide_index


def cycle(kind: str, fuel: str) -> Any:
    """An engine of one thrust at its design point, its idle flame held at equal heat."""
    if kind == "turbofan":
        floor = 0.006 * KEROSENE.lower_heating_value / FUELS[fuel].lower_heating_value
        changes: Content = {"idle.flight.fuel_air_ratio": floor}
        return load(turbofan_content({"fuel": fuel, **changes}))
    size = {"design_point.airflow": None, "design_point.net_thrust": "30 kN"}
    return load(turbojet_content({"fuel": fuel, **size}))


@pytest.mark.parametrize("kind", ["turbofan", "turbojet"])
@pytest.mark.parametrize("fuel", ["methane", "hydrogen"])
def test_engines_match_and_close_their_account_all_over_the_envelope(kind: str, fuel: str) -> None:
    flight = flight_condition(np.linspace(0.0, 12500.0, 6)[:, None], [[0.0, 0.3, 0.6, 0.85]])
    burns = cycle(kind, fuel)
    for rating in ("take_off", "cruise", "flight_idle", "ground_idle"):
        state = burns.at_rating(flight, rating)
        assert np.all(state.outcome == Outcome.MET), rating
        assert np.max(np.abs(state.energy.residual)) < 1e-9


@pytest.mark.parametrize("kind", ["turbofan", "turbojet"])
@pytest.mark.parametrize("fuel", ["methane", "hydrogen"])
def test_fuel_flow_goes_nearly_with_the_heating_value(kind: str, fuel: str) -> None:
    """More steam in the products expands a little better: up to 3 % less heat with hydrogen."""
    flight = flight_condition(np.linspace(0.0, 12500.0, 6)[:, None], [[0.0, 0.3, 0.6, 0.85]])
    kerosene, other = cycle(kind, "kerosene"), cycle(kind, fuel)
    thrust = 0.6 * kerosene.at_rating(flight, "cruise").net_thrust

    flows = [e.at_thrust(flight, thrust, rating="take_off").fuel_flow for e in (kerosene, other)]

    heat = flows[1] / flows[0] * FUELS[fuel].lower_heating_value / KEROSENE.lower_heating_value
    assert np.all((heat > 0.965) & (heat < 1.01))
    assert np.all(flows[1] < flows[0])
