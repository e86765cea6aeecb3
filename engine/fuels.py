"""Fuels as data: what burning one kilogram gives, and what the tanks must hold."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True)
class Fuel:
    """A hydrocarbon fuel C_nH_m that burns completely to CO2 and water vapour.

    Attributes
    ----------
    hydrogen_carbon_ratio : hydrogen atoms per carbon atom
    lower_heating_value : [J/kg] at 298.15 K, liquid fuel, water as vapour
    density : [kg/m3]
    """

    name: str
    hydrogen_carbon_ratio: float
    lower_heating_value: float
    density: float


# C12H23 as the model fuel; heating value from heats of formation, liquid C12H23 -303.403 kJ/mol
# (from memory), CO2 -393.510 and H2O -241.826 kJ/mol (NASA/TP-2002-211556). Density: default of
# 0.8 kg/litre in UK Order 2021/534, article 28, giving effect to ICAO CORSIA.
KEROSENE = Fuel("kerosene", 23.0 / 12.0, 43.0319e6, 800.0)
