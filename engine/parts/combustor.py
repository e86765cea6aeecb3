"""Combustor: fuel added until the exit reaches the turbine entry temperature asked for.

The fuel enters at the datum temperature of the gas model; the part of its heat that combustion
efficiency leaves out is an entry of the energy account, its products are taken as burnt.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from engine.gas import Gas
from engine.parts.stream import Array, Stream

# Efficiency lost to slow burning at the design loading, and the power of loading it grows with.
LOSS_AT_DESIGN = 2e-4
LOADING_EXPONENT = 1.2


@dataclass(frozen=True)
class Combustor:
    """Combustion efficiency, total pressure loss and the fuel's lower heating value [J/kg]."""

    efficiency: float
    pressure_loss_fraction: float
    lower_heating_value: float
    falls_off: bool = False

    def efficiency_at(self, loading_ratio: Array) -> Array:
        """Efficiency [-] at a loading over that of the design point.

        The loss to slow burning grows with a power of loading; it saturates, so that an iterate
        far from an answer still burns something.
        """
        if not self.falls_off:
            return np.asarray(self.efficiency)
        loss = LOSS_AT_DESIGN * loading_ratio**LOADING_EXPONENT
        least = LOSS_AT_DESIGN / (1.0 + LOSS_AT_DESIGN)
        return self.efficiency - (loss / (1.0 + loss) - least)


def combustor_loading(air: Stream) -> Array:
    """Air loading ``W / (p^1.8 exp(T / 300 K))`` of a combustor, in SI units.

    Source: A. H. Lefebvre and D. R. Ballal, Gas Turbine Combustion, chapter on combustion
    performance (from memory).
    """
    return air.mass_flow / (air.total_pressure**1.8 * np.exp(air.total_temperature / 300.0))


def burn(
    gas: Gas,
    combustor: Combustor,
    air: Stream,
    exit_temperature: Array,
    efficiency: Array | None = None,
) -> Stream:
    """The stream at the combustor exit, station 4, at a total temperature [K]."""
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
