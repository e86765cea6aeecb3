"""Combustor: fuel added until the exit reaches the turbine entry temperature asked for.

The fuel enters at the datum temperature of the gas model; the part of its heat that combustion
efficiency leaves out is an entry of the energy account, its products are taken as burnt.

At low power burning is slow. The fuel left over grows with a power of air loading; level and power
are least squares of the logarithms of ``EI_CO 10.1/43.0 + EI_HC`` at 30 and 7 % thrust of the 22
rows of ``tests/published/databank.csv`` (heats of formation give 10.1 MJ/kg for CO; unburnt
hydrocarbons count as fuel), against the loadings of the cycles made from these rows: the scatter
is a factor of 2.1 (root mean square), for combustors differ; 79 % of the variance is explained,
where loading relative to each design point explains 36 %. Typically 0.08 % is left over at 30 %
thrust; at 7 % it is 4 % at an overall pressure ratio of 10 and 0.3 % at one of 42.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import exp

import numpy as np

from engine.gas import Gas
from engine.parts.stream import Array, Stream

# Part of the fuel that slow burning leaves over at the reference loading (30 bar, 800 K, flow
# through the combustor as at the design point), and the power of loading it grows with.
SLOW_BURNING_LOSS = 4.2e-5
LOADING_EXPONENT = 1.75
_MOST_LEFT_OVER = 0.9
_REFERENCE_LOADING = 3e6**-0.8 * exp(-800.0 / 300.0) * 800.0**-0.5


@dataclass(frozen=True)
class Combustor:
    """Combustion efficiency, total pressure loss and the fuel's lower heating value [J/kg]."""

    efficiency: float
    pressure_loss_fraction: float
    lower_heating_value: float
    falls_off: bool = False

    def efficiency_at(self, loading: Array, design_loading: float) -> Array:
        """Efficiency [-] at a loading: the stated one, less what slow burning takes more of.

        The loss saturates, so that an iterate far from an answer still burns something.
        """
        if not self.falls_off:
            return np.asarray(self.efficiency)
        return self.efficiency - (_slow_burning(loading) - _slow_burning(design_loading))


def _slow_burning(loading: Array | float) -> Array:
    loss = SLOW_BURNING_LOSS * np.asarray(loading) ** LOADING_EXPONENT
    return loss / (1.0 + loss / _MOST_LEFT_OVER)


def air_loading(air: Stream) -> Array:
    """``W / (p^1.8 exp(T / 300 K))`` of a combustor, in SI units.

    Source: A. H. Lefebvre and D. R. Ballal, Gas Turbine Combustion, chapter on combustion
    performance (from memory).
    """
    return air.mass_flow / (air.total_pressure**1.8 * np.exp(air.total_temperature / 300.0))


def relative_loading(air_loading: Array | float, design_duct_flow: float) -> Array:
    """Air loading of a unit volume over that of the reference state, see SLOW_BURNING_LOSS.

    A combustor's volume is taken to go with the ``W sqrt(T) / p`` that it is designed for: equal
    velocities through equal lengths.
    """
    loading: Array = np.asarray(air_loading) / (design_duct_flow * _REFERENCE_LOADING)
    return loading


def burn(
    gas: Gas,
    combustor: Combustor,
    air: Stream,
    exit_temperature: Array,
    efficiency: Array | None = None,
) -> Stream:
    """The stream at the combustor exit, station 4, at a total temperature [K].

    ``efficiency`` [-] is that of the moment, the combustor's stated one where it is not given.
    """
    efficiency = np.asarray(combustor.efficiency) if efficiency is None else efficiency
    heat_release = efficiency * combustor.lower_heating_value
    ratio = gas.fuel_air_ratio_burnt(air.enthalpy, exit_temperature, heat_release, "hot")
    return Stream(
        np.asarray(exit_temperature),
        air.total_pressure * (1.0 - combustor.pressure_loss_fraction),
        air.mass_flow * (1.0 + ratio),
        ratio,
        (air.enthalpy + ratio * heat_release) / (1.0 + ratio),
        "hot",
    )


def pass_unlit(gas: Gas, loss_fraction: Array, air: Stream) -> Stream:
    """The stream at station 4 with no fuel: the same enthalpy, a given share of pressure lost."""
    temperature = gas.temperature_from_enthalpy(
        air.enthalpy, 0.0, "hot", guess=air.total_temperature
    )
    return Stream(
        temperature,
        air.total_pressure * (1.0 - loss_fraction),
        air.mass_flow,
        np.zeros_like(air.mass_flow),
        air.enthalpy,
        "hot",
    )
