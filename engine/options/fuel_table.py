"""What a user writes about the fuel: the name of a known one, or the values of one of their own."""

from __future__ import annotations

from typing import Annotated

from pydantic import Field, model_validator

from engine.fuels import FUELS, KEROSENE, Fuel
from engine.quantities import Density, SpecificEnergy
from engine.reading import Table

_OWN = (
    "a table with name, hydrogen_carbon_ratio (or carbon_atoms and hydrogen_atoms), "
    "lower_heating_value and density"
)


class FuelTable(Table):
    """A known fuel by name alone, or a fuel of one's own; without a name, changes of kerosene."""

    name: str = KEROSENE.name
    hydrogen_carbon_ratio: Annotated[float, Field(ge=0.0, le=4.0)] | None = None
    carbon_atoms: Annotated[float, Field(ge=0.0, le=100.0)] | None = None
    hydrogen_atoms: Annotated[float, Field(ge=0.0, le=400.0)] | None = None
    lower_heating_value: Annotated[SpecificEnergy, Field(gt=0.0)] = KEROSENE.lower_heating_value
    density: Annotated[Density, Field(gt=0.0)] = KEROSENE.density

    @model_validator(mode="before")
    @classmethod
    def _from_name(cls, written: object) -> object:
        return {"name": written} if isinstance(written, str) else written

    @model_validator(mode="after")
    def _known_or_whole(self) -> FuelTable:
        said, is_known = self.model_fields_set, self.name in FUELS
        if self.is_by_name and not is_known:
            known = ", ".join(FUELS)
            raise ValueError(f"'{self.name}' is no fuel known here: {known}; or write {_OWN}")
        if "name" not in said or self.is_by_name:
            return self
        if is_known:
            raise ValueError(
                f"'{self.name}' has values of its own here: write fuel = \"{self.name}\", or give "
                "your fuel another name"
            )
        missing = [name for name in ("lower_heating_value", "density") if name not in said]
        if self.hydrogen_carbon_ratio is None and self.carbon_atoms is None:
            missing.insert(0, "hydrogen_carbon_ratio (or carbon_atoms and hydrogen_atoms)")
        if missing:
            raise ValueError(
                f"'{self.name}' is no fuel known here, and of your own it lacks "
                f"{' and '.join(missing)}: a fuel of your own is {_OWN}"
            )
        return self

    @model_validator(mode="after")
    def _one_composition(self) -> FuelTable:
        atoms = (self.carbon_atoms, self.hydrogen_atoms)
        is_by_ratio = self.hydrogen_carbon_ratio is not None
        if (atoms != (None, None) and (is_by_ratio or None in atoms)) or atoms == (0.0, 0.0):
            raise ValueError(
                "give either hydrogen_carbon_ratio, or carbon_atoms and hydrogen_atoms, of which "
                "one is above 0"
            )
        return self

    @property
    def is_by_name(self) -> bool:
        """Whether the name is all that is said."""
        return self.model_fields_set == {"name"}

    def to_fuel(self) -> Fuel:
        """The fuel as data."""
        if self.is_by_name or not self.model_fields_set:
            return FUELS[self.name]
        carbon, hydrogen = KEROSENE.carbon_atoms, KEROSENE.hydrogen_atoms
        if self.hydrogen_carbon_ratio is not None:
            carbon, hydrogen = 1.0, self.hydrogen_carbon_ratio
        elif self.carbon_atoms is not None and self.hydrogen_atoms is not None:
            carbon, hydrogen = self.carbon_atoms, self.hydrogen_atoms
        return Fuel(self.name, carbon, hydrogen, self.lower_heating_value, self.density)
