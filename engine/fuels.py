"""Fuels as data: what burning one kilogram gives, and what the tanks must hold.

Heating values hold at 298.15 K, the datum of the gas models, where every fuel enters the
combustor: kerosenes as liquid, methane and hydrogen as gas. What warms a cold fuel up to there is
left out, as if it came from heat that is lost anyway: from the liquid boiling at 1 atm it takes
4.43 MJ/kg of hydrogen (3.7 % of its heating value) and 0.91 MJ/kg of methane (1.8 %), own
evaluation of Cantera's equations of state. An engine that burnt fuel for it would burn about that
share more.

Carbon dioxide and water are those of complete combustion in the engine, not of a life cycle.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import inf

# kg/mol, as in the molar masses of NASA/TP-2002-211556.
_CARBON_MASS, _HYDROGEN_MASS, _OXYGEN_MASS = 12.0107e-3, 1.00794e-3, 15.9994e-3


@dataclass(frozen=True)
class Fuel:
    """A fuel C_nH_m that burns completely to carbon dioxide and water vapour.

    Attributes
    ----------
    carbon_atoms, hydrogen_atoms : in a molecule, or any two numbers in that ratio
    lower_heating_value : [J/kg] at 298.15 K, water as vapour
    density : [kg/m3] as it is in the tanks
    storage : how the tanks hold it
    source : where the values come from
    """

    name: str
    carbon_atoms: float
    hydrogen_atoms: float
    lower_heating_value: float
    density: float
    storage: str = ""
    source: str = ""

    @property
    def molar_mass(self) -> float:
        """Mass [kg] of a mole of what ``carbon_atoms`` and ``hydrogen_atoms`` count."""
        return self.carbon_atoms * _CARBON_MASS + self.hydrogen_atoms * _HYDROGEN_MASS

    @property
    def hydrogen_carbon_ratio(self) -> float:
        """Hydrogen atoms per carbon atom; infinite where there is no carbon."""
        return self.hydrogen_atoms / self.carbon_atoms if self.carbon_atoms else inf

    @property
    def carbon_dioxide_index(self) -> float:
        """Carbon dioxide [kg] from a kilogram of fuel."""
        return self.carbon_atoms * (_CARBON_MASS + 2.0 * _OXYGEN_MASS) / self.molar_mass

    @property
    def water_index(self) -> float:
        """Water vapour [kg] from a kilogram of fuel."""
        return self.hydrogen_atoms * (_HYDROGEN_MASS + _OXYGEN_MASS / 2.0) / self.molar_mass


def _blended(name: str, first: Fuel, second: Fuel, volume_share: float, source: str) -> Fuel:
    """Two fuels mixed, ``volume_share`` of the second; volumes add up.

    The carbon atoms are those of the first fuel.
    """
    volumes = ((first, 1.0 - volume_share), (second, volume_share))
    density = sum(fuel.density * volume for fuel, volume in volumes)
    moles = [(fuel, fuel.density * volume / fuel.molar_mass) for fuel, volume in volumes]
    carbon = sum(fuel.carbon_atoms * amount for fuel, amount in moles)
    hydrogen = sum(fuel.hydrogen_atoms * amount for fuel, amount in moles)
    heat = sum(fuel.lower_heating_value * fuel.density * volume for fuel, volume in volumes)
    return Fuel(
        name,
        first.carbon_atoms,
        first.carbon_atoms * hydrogen / carbon,
        heat / density,
        density,
        first.storage,
        source,
    )


KEROSENE = Fuel(
    "kerosene",
    12.0,
    23.0,
    43.0319e6,
    800.0,
    "liquid",
    "C12H23 as the model fuel; heating value from heats of formation, liquid C12H23 "
    "-303.403 kJ/mol (from memory), CO2 -393.510 and H2O -241.826 kJ/mol (NASA/TP-2002-211556); "
    "density: default of UK Order 2021/534, article 28, giving effect to ICAO CORSIA",
)
_JET_A = Fuel(
    "Jet A",
    12.0,
    23.0,
    43.02e6,
    820.0,
    "liquid",
    "composition: model fuel C12H23; heating value: typical, as given on secondary pages; density: "
    "typical at 15 C, from memory",
)
_JET_A1 = Fuel(
    "Jet A-1",
    12.0,
    23.0,
    43.15e6,
    804.0,
    "liquid",
    "composition: model fuel C12H23; heating value: typical, as given on secondary pages; density: "
    "typical at 15 C, from memory, allowed 775 to 840 kg/m3",
)
_PARAFFINIC = Fuel(
    "synthetic paraffinic kerosene",
    12.0,
    26.0,
    44.1e6,
    755.0,
    "liquid",
    "composition: dodecane as the model fuel; heating value and density: typical, from memory",
)
_BLEND = _blended(
    "paraffinic synthetic blend",
    _JET_A1,
    _PARAFFINIC,
    0.5,
    "half of the volume Jet A-1, half synthetic paraffinic kerosene of model composition C12H26, "
    "44.1 MJ/kg and 755 kg/m3 (from memory)",
)
_METHANE = Fuel(
    "methane",
    1.0,
    4.0,
    50.02736e6,
    422.6,
    "liquid at 112 K",
    "heating value from heats of formation, CH4 -74.6 kJ/mol (from memory), CO2 -393.510 and H2O "
    "-241.826 kJ/mol (NASA/TP-2002-211556); density: boiling at 1 atm, own evaluation of Cantera's "
    "equation of state",
)
_HYDROGEN = Fuel(
    "hydrogen",
    0.0,
    2.0,
    119.96051e6,
    70.8,
    "liquid at 20 K",
    "heating value from the heat of formation of H2O, -241.826 kJ/mol (NASA/TP-2002-211556); "
    "density: boiling at 1 atm, own evaluation of Cantera's equation of state",
)

FUELS = {fuel.name: fuel for fuel in (KEROSENE, _JET_A, _JET_A1, _BLEND, _METHANE, _HYDROGEN)}
