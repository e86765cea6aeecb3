"""What leaving dissociation out costs in an afterburner: the docstring of engine.gas.real, redone.

Kerosene burns in lean products of its own. With Cantera the same enthalpy and elements are brought
to equilibrium at the same pressure; the difference of the two temperatures is the error. Thrust is
that of a nozzle which expands from there to 1 bar: complete products against the equilibrium
composition, both frozen from the nozzle entry on.
"""

from __future__ import annotations

import re
from collections.abc import Callable
from functools import lru_cache
from math import sqrt

import cantera
import numpy as np
import pytest
from plain_gas import moles
from scipy.optimize import brentq

from engine.fuels import KEROSENE
from engine.gas import real
from engine.gas.real import DISSOCIATION_FELT_ABOVE, RealGas
from engine.parts.nozzle import Nozzle, discharge
from engine.parts.stream import Stream

GAS = RealGas(KEROSENE)
ENTRY_RATIO, ENTRY_TEMPERATURE = 0.02, 1100.0
PRESSURE, AMBIENT = 2.5e5, 1e5
PRODUCTS = ("N2", "O2", "AR", "CO2", "H2O", "CO", "H2", "OH", "O", "H")
OWN = pytest.mark.source(
    "G. P. Smith et al., GRI-Mech 3.0 thermodynamic data (read), equilibrium by Cantera; grade own"
)


@lru_cache
def phase(*more: str) -> cantera.Solution:
    """Dissociating products, nitric oxide among them where it is named."""
    known = {s.name: s for s in cantera.Species.list_from_file("gri30.yaml")}
    return cantera.Solution(
        thermo="ideal-gas", species=[known[name] for name in (*PRODUCTS, *more)]
    )


def fuel_air_ratio(temperature: float) -> float:
    """Of the afterburner, at the temperature [K] that complete combustion is to reach."""

    def excess(ratio: float) -> float:
        entering = (1.0 + ENTRY_RATIO) * float(GAS.enthalpy(ENTRY_TEMPERATURE, ENTRY_RATIO))
        heat = entering + (ratio - ENTRY_RATIO) * KEROSENE.lower_heating_value
        return (1.0 + ratio) * float(GAS.enthalpy(temperature, ratio)) - heat

    return float(brentq(excess, ENTRY_RATIO, 0.068, xtol=1e-12))


def complete_products(ratio: float) -> dict[str, float]:
    """Moles of what kerosene burns to without dissociation, by Cantera's names."""
    found = moles(ratio, KEROSENE.hydrogen_carbon_ratio)
    return {name.upper(): amount for name, amount in found.items()}


def jet_speed(gas: cantera.Solution) -> float:
    """Speed [m/s] after frozen expansion to ambient pressure, which is gross thrust per flow."""
    composition, entropy, enthalpy = gas.X, gas.entropy_mass, gas.enthalpy_mass
    gas.SPX = entropy, AMBIENT, composition
    return sqrt(2.0 * (enthalpy - gas.enthalpy_mass))


def errors(temperature: float, *more: str, pressure: float = PRESSURE) -> tuple[float, float]:
    """Relative errors of temperature and of gross thrust, complete combustion over equilibrium."""
    gas = phase(*more)
    complete = complete_products(fuel_air_ratio(temperature))
    gas.TPX = temperature, pressure, complete
    gas.equilibrate("HP", rtol=1e-10)
    found = float(gas.T)
    dissociated = jet_speed(gas)
    gas.TPX = temperature, pressure, complete
    return temperature / found - 1.0, jet_speed(gas) / dissociated - 1.0


def passes_one_percent(error: Callable[[float], float]) -> float:
    """Temperature [K] at which an error comes to 1 %."""
    return float(brentq(lambda t: error(t) - 0.01, 1800.0, 2400.0, xtol=0.1))


def printed(row: str) -> list[float]:
    """Numbers of a row of the docstring's table, those in brackets after their neighbours."""
    lines = [line for line in (real.__doc__ or "").splitlines() if line.strip().startswith(row)]
    assert len(lines) == 1
    return [float(text) for text in re.findall(r"[\d.]+", lines[0].split(row)[1])]


@OWN
@pytest.mark.parametrize("temperature", [1800, 2000, 2200])
def test_errors_in_an_afterburner(temperature: int) -> None:
    hotter, with_oxide, stronger, stronger_with_oxide = printed(f"{temperature} ")

    plain, oxide = errors(temperature), errors(temperature, "NO")

    found = [100.0 * error for error in (*plain, *oxide)]
    assert found == pytest.approx([hotter, stronger, with_oxide, stronger_with_oxide], abs=0.0051)


@OWN
@pytest.mark.parametrize(
    ("temperature", "ratio", "lowers", "with_oxide"),
    [(1800.0, 0.035, 0.05, 0.4), (2000.0, 0.04, 0.16, 0.7), (2400.0, 0.055, 1.1, 1.7)],
)
def test_errors_in_a_combustor(
    temperature: float, ratio: float, lowers: float, with_oxide: float
) -> None:
    """The docstring's figures at 30 bar, to their last digit."""
    for more, printed_percent in (((), lowers), (("NO",), with_oxide)):
        gas = phase(*more)
        gas.TPX = temperature, 30e5, complete_products(ratio)
        gas.equilibrate("HP", rtol=1e-10)
        half_digit = 0.005 if more == () and lowers < 1.0 else 0.05
        assert 100.0 * (1.0 - gas.T / temperature) == pytest.approx(printed_percent, abs=half_digit)


@OWN
def test_where_an_error_passes_one_percent() -> None:
    found = [
        passes_one_percent(lambda t, more=more, which=which: errors(t, *more)[which])
        for which in (0, 1)
        for more in ((), ("NO",))
    ]

    assert found == pytest.approx(printed("passes 1 % at [K]"), abs=0.6)


@OWN
@pytest.mark.parametrize(("pressure", "temperature"), [(2e5, 2144), (3e5, 2169)])
def test_pressure_holds_dissociation_back(pressure: float, temperature: int) -> None:
    found = passes_one_percent(lambda t: errors(t, pressure=pressure)[0])

    assert found == pytest.approx(temperature, abs=0.6)
    assert "2144 and 2169 K" in " ".join((real.__doc__ or "").split())


@OWN
def test_the_constant_is_where_temperature_errs_by_one_percent() -> None:
    of_temperature, of_thrust = errors(DISSOCIATION_FELT_ABOVE)

    assert 0.95e-2 < of_temperature < 1e-2
    assert of_thrust < 0.5e-2


@OWN
@pytest.mark.parametrize("temperature", [1800.0, 2000.0, 2200.0])
def test_the_complete_products_expand_as_the_nozzle_of_the_engine(temperature: float) -> None:
    """The expansion above is the engine's own; the two sets of data hardly differ."""
    ratio = fuel_air_ratio(temperature)
    gas = phase()
    gas.TPX = temperature, PRESSURE, complete_products(ratio)
    stream = Stream(
        np.array(temperature), np.array(PRESSURE), np.array(1.0), np.array(ratio),
        GAS.enthalpy(temperature, ratio), "reheated",
    )  # fmt: skip

    jet = discharge(GAS, Nozzle("convergent-divergent"), stream, np.array(AMBIENT))

    speed = jet_speed(gas)
    assert float(jet.gross_thrust) == pytest.approx(speed, rel=1e-4)
