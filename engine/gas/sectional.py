"""Gas of constant heat capacity and ratio of heat capacities in each section, for hand checks.

The textbooks' model: one pair each for the cold, the hot, the mixed and the reheated section, with
``R = cp (gamma - 1) / gamma`` in each. Enthalpy is ``cp T`` from the absolute zero, as the authors
write their energy balances; with one pair for the whole engine their examples do not come out.
The mixed pair stays the same whatever the shares of the streams that mix.
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
        heat_capacity = self.heat_capacity(temperature, fuel_air_ratio, section)
        return heat_capacity * np.asarray(temperature, dtype=np.float64)

    def entropy(self, temperature: ArrayLike, fuel_air_ratio: ArrayLike, section: Section) -> Array:
        heat_capacity = self.heat_capacity(temperature, fuel_air_ratio, section)
        return heat_capacity * np.log(np.asarray(temperature, dtype=np.float64))

    def temperature_from_enthalpy(
        self,
        enthalpy: ArrayLike,
        fuel_air_ratio: ArrayLike,
        section: Section,
        guess: ArrayLike | None = None,
    ) -> Array:
        heat_capacity = self.heat_capacity(enthalpy, fuel_air_ratio, section)
        return np.asarray(enthalpy, dtype=np.float64) / heat_capacity

    def temperature_from_entropy(
        self,
        entropy: ArrayLike,
        fuel_air_ratio: ArrayLike,
        section: Section,
        guess: ArrayLike | None = None,
    ) -> Array:
        heat_capacity = self.heat_capacity(entropy, fuel_air_ratio, section)
        return np.exp(np.asarray(entropy, dtype=np.float64) / heat_capacity)

    def critical_temperature(
        self, total_temperature: ArrayLike, fuel_air_ratio: ArrayLike, section: Section
    ) -> Array:
        total = np.asarray(total_temperature, dtype=np.float64)
        return total * (2.0 / (self.heat_capacity_ratios[section] + 1.0))

    def fuel_air_ratio_burnt(
        self,
        enthalpy_in: ArrayLike,
        temperature_out: ArrayLike,
        heat_release: ArrayLike,
        section: Section,
    ) -> Array:
        enthalpy_out = self.heat_capacities[section] * np.asarray(temperature_out, dtype=np.float64)
        needed = enthalpy_out - np.asarray(enthalpy_in, dtype=np.float64)
        return needed / (np.asarray(heat_release, dtype=np.float64) - enthalpy_out)
