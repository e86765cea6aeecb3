"""Gas of constant heat capacity and ratio of heat capacities in each section, for hand checks.

The textbooks' model: one pair for the cold, one for the hot, one for the reheated section, with
``R = cp (gamma - 1) / gamma`` in each. Enthalpy is ``cp T`` from the absolute zero, as the authors
write their energy balances; with one pair for the whole engine their examples do not come out.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from engine.gas.interface import Array, Section


@dataclass(frozen=True)
class SectionalGas:
    """Heat capacity [J/(kg K)] and ratio of heat capacities by section."""

    heat_capacities: Mapping[str, float]
    heat_capacity_ratios: Mapping[str, float]
    lowest_temperature: float = 1.0
    highest_temperature: float = 1.0e4

    def gas_constant(self, fuel_air_ratio: ArrayLike, section: Section) -> Array:
        gamma = self.heat_capacity_ratios[section]
        constant = self.heat_capacities[section] * (gamma - 1.0) / gamma
        return np.full(np.shape(fuel_air_ratio), constant)

    def heat_capacity(
        self, temperature: ArrayLike, fuel_air_ratio: ArrayLike, section: Section
    ) -> Array:
        shape = np.broadcast_shapes(np.shape(temperature), np.shape(fuel_air_ratio))
        return np.full(shape, self.heat_capacities[section])

    def enthalpy(
        self, temperature: ArrayLike, fuel_air_ratio: ArrayLike, section: Section
    ) -> Array:
        return self.heat_capacity(temperature, fuel_air_ratio, section) * temperature

    def entropy(self, temperature: ArrayLike, fuel_air_ratio: ArrayLike, section: Section) -> Array:
        return self.heat_capacity(temperature, fuel_air_ratio, section) * np.log(temperature)

    def temperature_from_enthalpy(
        self,
        enthalpy: ArrayLike,
        fuel_air_ratio: ArrayLike,
        section: Section,
        guess: ArrayLike | None = None,
    ) -> Array:
        return enthalpy / self.heat_capacity(enthalpy, fuel_air_ratio, section)

    def temperature_from_entropy(
        self,
        entropy: ArrayLike,
        fuel_air_ratio: ArrayLike,
        section: Section,
        guess: ArrayLike | None = None,
    ) -> Array:
        return np.exp(entropy / self.heat_capacity(entropy, fuel_air_ratio, section))

    def critical_temperature(
        self, total_temperature: ArrayLike, fuel_air_ratio: ArrayLike, section: Section
    ) -> Array:
        return np.asarray(total_temperature) * 2.0 / (self.heat_capacity_ratios[section] + 1.0)

    def fuel_air_ratio_burnt(
        self,
        enthalpy_in: ArrayLike,
        temperature_out: ArrayLike,
        heat_release: ArrayLike,
        section: Section,
    ) -> Array:
        enthalpy_out = self.heat_capacities[section] * np.asarray(temperature_out)
        return (enthalpy_out - enthalpy_in) / (heat_release - enthalpy_out)
