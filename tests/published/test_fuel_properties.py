"""Fuels and their products against Cantera and against what regulations print."""

from __future__ import annotations

import cantera
import numpy as np
import pytest
from plain_gas import AIR, JOINT, NASA_GAS_CONSTANT, SPECIES
from scipy.optimize import brentq

from engine.fuels import FUELS, Fuel
from engine.gas import RealGas

NASA_MASSES = {"methane": 16.04246e-3, "hydrogen": 2.01588e-3}  # kg/mol, the report's C and H
SYMBOLS = {"methane": "CH4", "hydrogen": "H2"}
ATOMS = {
    "N2": "{N: 2}", "O2": "{O: 2}", "Ar": "{Ar: 1}", "CO2": "{C: 1, O: 2}", "H2O": "{H: 2, O: 1}",
}  # fmt: skip
LEAN = {"methane": [0.005, 0.02, 0.045, 0.057], "hydrogen": [0.002, 0.01, 0.02, 0.029]}
CASES = [(name, ratio) for name, ratios in LEAN.items() for ratio in ratios]
COLD = 298.15
CANTERA = pytest.mark.source(
    "B. J. McBride, M. J. Zehe and S. Gordon, NASA/TP-2002-211556, coefficients (read), burnt to "
    "equilibrium at 500 K and evaluated by Cantera; grade own"
)


@pytest.fixture(scope="module")
def gas() -> cantera.Solution:
    """Air, complete products and both fuels; Cantera finds by itself what burning leaves."""
    entries = [
        f"- name: {name}\n  composition: {ATOMS[name]}\n  thermo:\n    model: NASA9\n"
        f"    temperature-ranges: [200.0, {JOINT}, 6000.0]\n    data:\n    - {low}\n    - {high}\n"
        for name, (_, low, high) in SPECIES.items()
    ]
    phase = "phases:\n- name: gas\n  thermo: ideal-gas\n  elements: [N, O, Ar, C, H]\n"
    names = f"  species:\n  - species: [{', '.join(SPECIES)}]\n"
    names += "  - nasa_gas.yaml/species: [CH4, H2]\n"
    return cantera.Solution(yaml=phase + names + "species:\n" + "".join(entries))


def air_moles() -> dict[str, float]:
    """Moles of each species in a kilogram of dry air."""
    mass = sum(share * SPECIES[name][0] for name, share in AIR.items()) / 1e3
    return {name: share / mass for name, share in AIR.items()}


def burnt(gas: cantera.Solution, fuel: str, ratio: float) -> dict[str, float]:
    """Moles [mol] of the species that a kilogram of air and ``ratio`` of fuel burn to."""
    before = {**air_moles(), SYMBOLS[fuel]: ratio / NASA_MASSES[fuel]}
    gas.TPX = 500.0, 1e5, before
    gas.equilibrate("TP", rtol=1e-12)
    total = before["N2"] / gas["N2"].X[0]
    return {name: total * gas[name].X[0] for name in SPECIES}


def enthalpy(gas: cantera.Solution, moles: dict[str, float], temperature: float) -> float:
    """Absolute enthalpy [J] of so many moles, with NASA's gas constant."""
    gas.TPX = temperature, 1e5, moles
    over_constant = float(gas.enthalpy_mole) / cantera.gas_constant
    return over_constant * NASA_GAS_CONSTANT * sum(moles.values())


@CANTERA
@pytest.mark.parametrize(("name", "ratio"), CASES)
def test_product_enthalpies_are_canteras(gas: cantera.Solution, name: str, ratio: float) -> None:
    temperatures = np.array([220.0, 298.15, 600.0, 999.0, 1001.0, 1600.0, 2400.0])
    products = burnt(gas, name, ratio)
    zero = enthalpy(gas, products, COLD)
    expected = np.array([enthalpy(gas, products, t) - zero for t in temperatures]) / (1.0 + ratio)

    found = RealGas(FUELS[name]).enthalpy(temperatures, ratio)

    # Absolute: round-off of heats of formation of some MJ/kg.
    assert found == pytest.approx(expected, rel=1e-6, abs=1e-3)


@CANTERA
@pytest.mark.parametrize(("name", "ratio"), CASES)
@pytest.mark.parametrize("delivery", [400.0, 850.0])
def test_burnt_fuel_air_ratio_is_canteras(
    gas: cantera.Solution, name: str, ratio: float, delivery: float
) -> None:
    fuel = {SYMBOLS[name]: ratio / NASA_MASSES[name]}
    products = burnt(gas, name, ratio)
    entering = enthalpy(gas, air_moles(), delivery) + enthalpy(gas, fuel, COLD)
    hot = brentq(lambda t: enthalpy(gas, products, t) - entering, 300.0, 3500.0, xtol=1e-9)
    released = enthalpy(gas, air_moles(), COLD) + enthalpy(gas, fuel, COLD)
    released = (released - enthalpy(gas, products, COLD)) / ratio

    model = RealGas(FUELS[name])
    found = model.fuel_air_ratio_burnt(model.enthalpy(delivery, 0.0), hot, released)

    assert float(found) == pytest.approx(ratio, rel=1e-6)


@pytest.mark.source(
    "Default of 3.16 kg of carbon dioxide from a kilogram of Jet A: UK Order 2021/534, article 28, "
    "and Canadian SOR/96-433, section 1000.03, both giving effect to ICAO CORSIA; grade read"
)
@pytest.mark.parametrize("name", ["Jet A", "Jet A-1", "kerosene"])
def test_carbon_dioxide_of_jet_fuel_is_that_of_the_regulation(name: str) -> None:
    # To the last printed digit.
    assert FUELS[name].carbon_dioxide_index == pytest.approx(3.16, abs=0.005)


@pytest.mark.source(
    "Heats of formation of CH4, CO2 and H2O in the NASA TM-4513 data that come with Cantera, molar "
    "masses there; grade read"
)
@pytest.mark.parametrize(
    ("name", "carbon", "hydrogen"), [("methane", 1.0, 4.0), ("hydrogen", 0.0, 2.0)]
)
def test_heating_values_follow_from_heats_of_formation(
    name: str, carbon: float, hydrogen: float
) -> None:
    wanted = ("CH4", "H2", "CO2", "H2O", "O2")
    listed = cantera.Species.list_from_file("nasa_gas.yaml")
    known = {s.name: s for s in listed if s.name in wanted}
    formed = {name: species.thermo.h(COLD) for name, species in known.items()}  # J/kmol
    products = carbon * formed["CO2"] + hydrogen / 2.0 * formed["H2O"]
    heat = formed[SYMBOLS[name]] - products
    expected = heat / known[SYMBOLS[name]].molecular_weight

    # Atomic masses of another table: hydrogen 1.008 against 1.00794.
    assert FUELS[name].lower_heating_value == pytest.approx(expected, rel=8e-5)


@pytest.mark.source(
    "J. B. Heywood, Internal Combustion Engine Fundamentals, table D.4: stoichiometric air-fuel "
    "ratios 34.3 of hydrogen and 17.23 of methane; from memory"
)
@pytest.mark.parametrize(("name", "air"), [("hydrogen", 34.3), ("methane", 17.23)])
def test_stoichiometric_fuel_air_ratio(name: str, air: float) -> None:
    # To the last printed digit.
    found = 1.0 / RealGas(FUELS[name]).stoichiometric_fuel_air_ratio
    assert found == pytest.approx(air, abs=0.05 if air > 20.0 else 0.01)


@CANTERA
@pytest.mark.parametrize("name", ["methane", "hydrogen"])
def test_stoichiometric_mixture_leaves_no_oxygen(gas: cantera.Solution, name: str) -> None:
    ratio = RealGas(FUELS[name]).stoichiometric_fuel_air_ratio
    there, leaner = burnt(gas, name, ratio), burnt(gas, name, 0.999 * ratio)

    oxygen = air_moles()["O2"]
    assert there["O2"] < 1e-6 * oxygen
    assert leaner["O2"] == pytest.approx(1e-3 * oxygen, rel=1e-6)


@pytest.mark.source(
    "W. C. Reynolds, Thermodynamic Properties in SI (title from memory), equations of state, "
    "evaluated by Cantera; grade own"
)
@pytest.mark.parametrize(
    ("name", "substance", "heat", "share"),
    [("methane", "Methane", 0.91e6, 0.018), ("hydrogen", "Hydrogen", 4.43e6, 0.037)],
)
def test_cold_fuels_are_as_dense_and_as_cold_as_said(
    name: str, substance: str, heat: float, share: float
) -> None:
    """The docstring of engine.fuels: boiling liquid at 1 atm, and what warms it to 298.15 K."""
    fuel: Fuel = FUELS[name]
    pure = getattr(cantera, substance)()
    pure.PQ = 101325.0, 0.0
    cold, boiling = float(pure.enthalpy_mass), float(pure.T)
    assert fuel.density == pytest.approx(float(pure.density), abs=0.05)
    assert fuel.storage == f"liquid at {boiling:.0f} K"
    pure.TP = COLD, 101325.0
    warmed = float(pure.enthalpy_mass) - cold
    assert warmed == pytest.approx(heat, abs=0.005e6)
    assert warmed / fuel.lower_heating_value == pytest.approx(share, abs=0.0005)
