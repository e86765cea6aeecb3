"""What every gas model offers: properties of air and lean products, elementwise on arrays.

``fuel_air_ratio`` is kilograms of fuel burnt per kilogram of dry air in the stream. ``section``
names the part of the engine the stream is in (:data:`SECTIONS`); a model whose properties follow
from temperature and composition takes no notice of it.
"""

from __future__ import annotations

from typing import Literal, Protocol

import numpy as np
from numpy.typing import ArrayLike, NDArray

Array = NDArray[np.float64]
Section = Literal["cold", "hot", "mixed", "reheated"]
SECTIONS: tuple[Section, ...] = ("cold", "hot", "mixed", "reheated")


class Gas(Protocol):
    """A gas model; all quantities in SI, per kilogram of the mixture."""

    @property
    def lowest_temperature(self) -> float:
        """Temperature [K] below which an answer may not be believed."""
        ...

    @property
    def highest_temperature(self) -> float:
        """Temperature [K] above which an answer may not be believed."""
        ...

    def gas_constant(self, fuel_air_ratio: ArrayLike, section: Section) -> Array:
        """Specific gas constant [J/(kg K)]."""
        ...

    def heat_capacity(
        self, temperature: ArrayLike, fuel_air_ratio: ArrayLike, section: Section
    ) -> Array:
        """Heat capacity at constant pressure [J/(kg K)]."""
        ...

    def enthalpy(
        self, temperature: ArrayLike, fuel_air_ratio: ArrayLike, section: Section
    ) -> Array:
        """Sensible enthalpy [J/kg] above the model's datum temperature."""
        ...

    def entropy(self, temperature: ArrayLike, fuel_air_ratio: ArrayLike, section: Section) -> Array:
        """Entropy [J/(kg K)] at a fixed pressure; only differences at one composition count."""
        ...

    def temperature_from_enthalpy(
        self,
        enthalpy: ArrayLike,
        fuel_air_ratio: ArrayLike,
        section: Section,
        guess: ArrayLike | None = None,
    ) -> Array:
        """Inverse of :meth:`enthalpy` [K]."""
        ...

    def temperature_from_entropy(
        self,
        entropy: ArrayLike,
        fuel_air_ratio: ArrayLike,
        section: Section,
        guess: ArrayLike | None = None,
    ) -> Array:
        """Inverse of :meth:`entropy` [K]."""
        ...

    def critical_temperature(
        self, total_temperature: ArrayLike, fuel_air_ratio: ArrayLike, section: Section
    ) -> Array:
        """Static temperature [K] at which the stream moves at its speed of sound."""
        ...

    def fuel_air_ratio_burnt(
        self,
        enthalpy_in: ArrayLike,
        temperature_out: ArrayLike,
        heat_release: ArrayLike,
        section: Section,
    ) -> Array:
        """Fuel-air ratio that takes air of a total enthalpy to a total temperature.

        ``heat_release`` [J/kg] is what each kilogram of fuel gives, combustion efficiency
        included; the fuel enters at the datum temperature.
        """
        ...
