"""What an engineer writes about an engine in TOML, what is known first standing first."""

from __future__ import annotations

from typing import Annotated, Literal

from pydantic import Field, model_validator

from engine.quantities import (
    Altitude,
    Day,
    Density,
    Force,
    MassFlow,
    Power,
    Pressure,
    SpecificEnergy,
    SpecificFuelConsumption,
    SpecificHeat,
    Temperature,
)
from engine.reading import Table

Ratio = Annotated[float, Field(gt=0.0, allow_inf_nan=False)]
PressureRatio = Annotated[float, Field(ge=1.0, le=100.0, allow_inf_nan=False)]
Share = Annotated[float, Field(ge=0.0, lt=1.0, allow_inf_nan=False)]
EfficiencyValue = Annotated[float, Field(gt=0.3, le=1.0, allow_inf_nan=False)]
MachNumber = Annotated[float, Field(ge=0.0, le=5.0, allow_inf_nan=False)]


class EfficiencyTable(Table):
    """One of the two definitions."""

    polytropic: EfficiencyValue | None = None
    isentropic: EfficiencyValue | None = None

    @model_validator(mode="after")
    def _one_definition(self) -> EfficiencyTable:
        if (self.polytropic is None) == (self.isentropic is None):
            raise ValueError("give either polytropic or isentropic, for example {polytropic = 0.9}")
        return self


class DesignPointBase(Table):
    """Where the engine is sized, and how large."""

    pressure_altitude: Altitude
    mach: MachNumber
    day: Day = 0.0
    net_thrust: Annotated[Force, Field(gt=0.0, le=5e6)] | None = None
    airflow: Annotated[MassFlow, Field(gt=0.0, le=1e4)] | None = None
    turbine_entry_temperature: Annotated[Temperature, Field(gt=500.0, le=2500.0)]

    @model_validator(mode="after")
    def _one_size(self) -> DesignPointBase:
        if (self.net_thrust is None) == (self.airflow is None):
            raise ValueError("give either net_thrust or airflow, to say how large the engine is")
        return self


class TurbojetDesignPoint(DesignPointBase):
    compressor_pressure_ratio: PressureRatio


class TurbofanDesignPoint(DesignPointBase):
    bypass_ratio: Annotated[float, Field(gt=0.0, le=30.0)]
    fan_pressure_ratio: Annotated[float, Field(gt=1.0, le=10.0)]
    booster_pressure_ratio: PressureRatio = 1.0
    high_pressure_compressor_pressure_ratio: PressureRatio


class FuelTable(Table):
    """Kerosene where nothing is said."""

    name: str = "kerosene"
    hydrogen_carbon_ratio: Annotated[float, Field(ge=0.0, le=4.0)] = 23.0 / 12.0
    lower_heating_value: Annotated[SpecificEnergy, Field(gt=0.0)] = 43.0319e6
    density: Annotated[Density, Field(gt=0.0)] = 800.0


class GasSection(Table):
    heat_capacity: Annotated[SpecificHeat, Field(gt=0.0)]
    heat_capacity_ratio: Annotated[float, Field(gt=1.0, lt=2.0)]


class SectionalGasTable(Table):
    """Constant properties by section, for hand checks."""

    cold: GasSection
    hot: GasSection
    reheated: GasSection | None = None


class InletTable(Table):
    total_pressure_recovery: Annotated[float, Field(gt=0.3, le=1.0)] = 1.0
    has_standard_ram_recovery: bool = False
    isentropic_efficiency: EfficiencyValue | None = None


class CombustorTable(Table):
    efficiency: EfficiencyValue = 0.995
    pressure_loss_fraction: Share = 0.05


class CoolingTable(Table):
    """Fractions of high-pressure-compressor entry flow, all taken at its delivery."""

    vane_fraction: Share = 0.0
    rotor_fraction: Share = 0.0
    downstream_fraction: Share = 0.0


class OffTakesTable(Table):
    customer_bleed_fraction: Share = 0.0
    shaft_power: Annotated[Power, Field(ge=0.0)] = 0.0


class NozzleTable(Table):
    kind: Literal["convergent", "convergent-divergent", "given exit pressure"] = "convergent"
    isentropic_efficiency: EfficiencyValue = 1.0
    gross_thrust_coefficient: EfficiencyValue = 1.0
    pressure_loss_fraction: Share = 0.0
    exit_pressure_ratio: Ratio = 1.0


class RatingTable(Table):
    """Ceilings; the least governs. Speeds are relative to the design point."""

    turbine_entry_temperature: Annotated[Temperature, Field(gt=300.0, le=2500.0)] | None = None
    compressor_delivery_temperature: Annotated[Temperature, Field(gt=200.0)] | None = None
    compressor_delivery_pressure: Annotated[Pressure, Field(gt=0.0)] | None = None
    corrected_low_pressure_speed: Ratio | None = None
    low_pressure_speed: Ratio | None = None
    corrected_high_pressure_speed: Ratio | None = None
    high_pressure_speed: Ratio | None = None

    @model_validator(mode="after")
    def _some_limit(self) -> RatingTable:
        if not self.model_fields_set:
            raise ValueError("a rating needs at least one limit, turbine_entry_temperature say")
        return self


class RatingsTable(Table):
    take_off: RatingTable
    maximum_continuous: RatingTable
    climb: RatingTable
    cruise: RatingTable


class IdleTable(Table):
    """Floors; the highest governs. Speed is relative to the design point."""

    corrected_high_pressure_speed: Ratio | None = None
    compressor_delivery_pressure: Annotated[Pressure, Field(gt=0.0)] | None = None
    fuel_air_ratio: Annotated[float, Field(gt=0.0, lt=0.06)] | None = None

    @model_validator(mode="after")
    def _some_floor(self) -> IdleTable:
        if not self.model_fields_set:
            raise ValueError("idle needs at least one floor, corrected_high_pressure_speed say")
        return self


class IdlesTable(Table):
    flight: IdleTable
    ground: IdleTable


class CycleEngineFile(Table):
    """What every computed engine states besides its design point."""

    name: str
    note: str = ""
    fuel: FuelTable = FuelTable()
    sectional_gas: SectionalGasTable | None = None
    inlet: InletTable = InletTable()
    combustor: CombustorTable = CombustorTable()
    cooling: CoolingTable = CoolingTable()
    off_takes: OffTakesTable = OffTakesTable()
    ratings: RatingsTable
    idle: IdlesTable


class TurbojetEfficiencies(Table):
    compressor: EfficiencyTable
    turbine: EfficiencyTable
    mechanical: EfficiencyValue = 0.99


class TurbojetFile(CycleEngineFile):
    kind: Literal["turbojet"]
    design_point: TurbojetDesignPoint
    efficiencies: TurbojetEfficiencies
    nozzle: NozzleTable = NozzleTable()


class TurbofanEfficiencies(Table):
    fan: EfficiencyTable
    booster: EfficiencyTable | None = None
    high_pressure_compressor: EfficiencyTable
    high_pressure_turbine: EfficiencyTable
    low_pressure_turbine: EfficiencyTable
    mechanical: EfficiencyValue = 0.99
    gearbox: EfficiencyValue = 1.0


class TurbofanFile(CycleEngineFile):
    kind: Literal["turbofan"]
    design_point: TurbofanDesignPoint
    efficiencies: TurbofanEfficiencies
    core_nozzle: NozzleTable = NozzleTable()
    bypass_nozzle: NozzleTable = NozzleTable()


class ConstantConsumptionFile(Table):
    """Static sea-level thrust and one specific fuel consumption."""

    kind: Literal["constant consumption"]
    name: str
    note: str = ""
    specific_fuel_consumption: Annotated[SpecificFuelConsumption, Field(gt=0.0)]
    static_thrust: Annotated[Force, Field(gt=0.0)]
    density_exponent: Annotated[float, Field(ge=0.0, le=2.0)] = 0.0


class EngineFile(Table):
    """Any engine, told apart by its kind."""

    engine: Annotated[
        TurbojetFile | TurbofanFile | ConstantConsumptionFile, Field(discriminator="kind")
    ]
