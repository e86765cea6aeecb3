"""The aircraft as a person writes it: masses, tanks, wing, polar, limits, what hangs below."""

from __future__ import annotations

from functools import lru_cache
from typing import Annotated, Any

from pydantic import Field, create_model, model_validator

from engine.quantities import Altitude, Area, Length, Mass, Pressure, Speed, Volume
from engine.reading import Table
from mission.polars.kinds import polar_kind
from mission.polars.lists import IsList, Mach, refuse_not_rising, refuse_other_count
from mission.polars.tables import PolarTable

PositiveMass = Annotated[Mass, Field(gt=0.0)]
Factor = Annotated[float, Field(gt=0.0, le=10.0, allow_inf_nan=False)]
LiftLimit = Annotated[float, Field(gt=0.2, le=5.0)]
OnsetLift = Annotated[float, Field(gt=0.0, le=5.0)]
DragIncrement = Annotated[float, Field(ge=0.0, le=0.5)]


class MassesTable(Table):
    operating_empty: PositiveMass
    maximum_zero_fuel: PositiveMass
    maximum_ramp: PositiveMass | None = None
    maximum_take_off: PositiveMass
    maximum_landing: PositiveMass


class FuelTanksTable(Table):
    """What the tanks hold at most: a mass, a volume, or both, of which the lesser governs."""

    capacity: PositiveMass | None = None
    volume: Annotated[Volume, Field(gt=0.0)] | None = None
    unusable: Annotated[Mass, Field(ge=0.0)] = 0.0

    @model_validator(mode="after")
    def _some_bound(self) -> FuelTanksTable:
        if self.capacity is None and self.volume is None:
            raise ValueError('give capacity = "9 t", or volume = "11000 L", or both')
        if self.capacity is not None and self.unusable >= self.capacity:
            raise ValueError("unusable is not below capacity")
        return self


class DragIncrementsTable(Table):
    """What gear and flaps add to the zero-lift drag coefficient, on wing area."""

    gear: DragIncrement = 0.0
    take_off_flaps: DragIncrement = 0.0
    approach_flaps: DragIncrement = 0.0


class StoreTable(Table):
    """One kind of thing that hangs below the aircraft, empty."""

    mass: PositiveMass
    drag_area: Annotated[Area, Field(ge=0.0)] | None = None
    drag_coefficient: DragIncrement | None = None
    fuel_capacity: Annotated[Mass, Field(ge=0.0)] = 0.0
    most: Annotated[int, Field(ge=1, le=100)] = 1

    @model_validator(mode="after")
    def _one_drag(self) -> StoreTable:
        if (self.drag_area is None) == (self.drag_coefficient is None):
            raise ValueError(
                'give either drag_area = "0.02 m**2", or drag_coefficient on wing area'
            )
        return self


class BuffetTable(Table):
    """Lift coefficients at which buffet begins, by Mach number."""

    machs: Annotated[list[Mach], IsList]
    lift_coefficients: Annotated[list[OnsetLift], IsList]

    @model_validator(mode="after")
    def _one_for_each(self) -> BuffetTable:
        refuse_not_rising("machs", self.machs, 2)
        refuse_other_count("lift_coefficients", self.lift_coefficients, "machs", len(self.machs))
        return self


class LimitsTable(Table):
    maximum_lift_coefficient: LiftLimit
    take_off_lift_coefficient: LiftLimit | None = None
    approach_lift_coefficient: LiftLimit | None = None
    maximum_operating_mach: Annotated[float, Field(gt=0.1, le=3.0)]
    maximum_operating_calibrated_airspeed: Annotated[Speed, Field(gt=10.0)]
    # Transports: least limit load factor upwards, 14 CFR 25.337, from memory.
    maximum_load_factor: Annotated[float, Field(gt=1.0, le=12.0)] = 2.5
    maximum_dynamic_pressure: Annotated[Pressure, Field(gt=0.0)] | None = None
    maximum_pressure_altitude: Altitude | None = None
    buffet: BuffetTable | None = None
    buffet_load_factor: Annotated[float, Field(ge=1.0, le=4.0)] | None = None

    @model_validator(mode="after")
    def _buffet_known(self) -> LimitsTable:
        if self.buffet_load_factor is not None and self.buffet is None:
            raise ValueError(
                "buffet_load_factor has nothing to act on: give buffet too, a table of machs and "
                "lift_coefficients at its onset"
            )
        return self


class InstallationTable(Table):
    """Room for engines: the largest fan or nacelle that fits."""

    fan_diameter_clearance: Annotated[Length, Field(gt=0.0)]


class AircraftFile(Table):
    """An aircraft file; :func:`file_model` puts the kind of its polar in."""

    name: str
    note: str = ""
    engine_count: Annotated[int, Field(ge=1, le=12)]
    reference_engine: str = ""
    wing_area: Annotated[Area, Field(gt=0.0)]
    masses: MassesTable
    fuel_tanks: FuelTanksTable
    drag_polar: PolarTable
    limits: LimitsTable
    drag_increments: DragIncrementsTable | None = None
    stores: Annotated[dict[str, StoreTable], Field(default_factory=dict)]
    installation: InstallationTable | None = None
    drag_factor: Factor = 1.0
    fuel_flow_factor: Factor = 1.0

    @model_validator(mode="after")
    def _masses_in_order(self) -> AircraftFile:
        masses = self.masses
        if masses.operating_empty > masses.maximum_zero_fuel:
            raise ValueError("masses.operating_empty is above masses.maximum_zero_fuel")
        if masses.maximum_zero_fuel > masses.maximum_take_off:
            raise ValueError("masses.maximum_zero_fuel is above masses.maximum_take_off")
        if masses.maximum_ramp is not None and masses.maximum_ramp < masses.maximum_take_off:
            raise ValueError("masses.maximum_ramp is below masses.maximum_take_off")
        if masses.maximum_landing > masses.maximum_take_off:
            raise ValueError("masses.maximum_landing is above masses.maximum_take_off")
        return self


def file_model(content: dict[str, Any]) -> type[AircraftFile]:
    """The model of an aircraft file with the kind of polar that its content asks for."""
    return _with_polar(polar_kind(content.get("drag_polar")))


@lru_cache
def _with_polar(kind: type[PolarTable]) -> type[AircraftFile]:
    return create_model("AircraftFile", __base__=AircraftFile, drag_polar=(kind, ...))
