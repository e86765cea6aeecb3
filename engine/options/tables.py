"""The tables of an engine file that several kinds share."""

from __future__ import annotations

from typing import Annotated, ClassVar, Literal

from pydantic import Field, model_validator

from engine.installation.drag import AFTERBODY_COEFFICIENT
from engine.quantities import (
    Altitude,
    Area,
    Day,
    Force,
    Length,
    Mass,
    MassFlow,
    Power,
    Pressure,
    SpecificHeat,
    Temperature,
)
from engine.reading import Table

Ratio = Annotated[float, Field(gt=0.0, allow_inf_nan=False)]
PressureRatio = Annotated[float, Field(ge=1.0, le=100.0, allow_inf_nan=False)]
Share = Annotated[float, Field(ge=0.0, lt=1.0, allow_inf_nan=False)]
EfficiencyValue = Annotated[float, Field(gt=0.3, le=1.0, allow_inf_nan=False)]
MachNumber = Annotated[float, Field(ge=0.0, le=5.0, allow_inf_nan=False)]
Speed = Annotated[float, Field(ge=0.3, le=1.5, allow_inf_nan=False)]  # over the design point's
HotTemperature = Annotated[Temperature, Field(gt=500.0, le=2500.0)]


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
    turbine_entry_temperature: HotTemperature

    @model_validator(mode="after")
    def _one_size(self) -> DesignPointBase:
        if (self.net_thrust is None) == (self.airflow is None):
            raise ValueError("give either net_thrust or airflow, to say how large the engine is")
        return self


class GasSection(Table):
    heat_capacity: Annotated[SpecificHeat, Field(gt=0.0)]
    heat_capacity_ratio: Annotated[float, Field(gt=1.0, lt=2.0)]


class SectionalGasTable(Table):
    """Constant properties by section, for hand checks."""

    cold: GasSection
    hot: GasSection
    mixed: GasSection | None = None
    reheated: GasSection | None = None


class InletTable(Table):
    """Subsonic recovery as a number or by the type of inlet."""

    type: Literal["podded", "straight duct", "S-duct"] | None = None
    total_pressure_recovery: Annotated[float, Field(gt=0.3, le=1.0)] | None = None
    has_standard_ram_recovery: bool = False
    isentropic_efficiency: EfficiencyValue | None = None

    @model_validator(mode="after")
    def _one_recovery(self) -> InletTable:
        ways = (self.type, self.total_pressure_recovery, self.isentropic_efficiency)
        if sum(way is not None for way in ways) > 1:
            raise ValueError("give one of type, total_pressure_recovery or isentropic_efficiency")
        return self


class InstallationTable(Table):
    """Areas of what surrounds the engine; a drag is charged where its area is given."""

    capture_area: Annotated[Area, Field(gt=0.0)] | None = None
    afterbody_area: Annotated[Area, Field(gt=0.0)] | None = None
    afterbody_coefficient: Annotated[float, Field(ge=0.0, le=1.0)] = AFTERBODY_COEFFICIENT


class PodTable(Table):
    """What is known of the pod; the rest is estimated, for the Mach number it is built for."""

    greatest_mach: Annotated[float, Field(gt=0.0, le=5.0)] = 0.85
    fan_diameter: Annotated[Length, Field(gt=0.0)] | None = None
    length: Annotated[Length, Field(gt=0.0)] | None = None
    maximum_diameter: Annotated[Length, Field(gt=0.0)] | None = None
    dry_mass: Annotated[Mass, Field(gt=0.0)] | None = None
    installed_mass: Annotated[Mass, Field(gt=0.0)] | None = None
    wetted_area: Annotated[Area, Field(gt=0.0)] | None = None
    drag_area: Annotated[Area, Field(gt=0.0)] | None = None


class ScaleTable(Table):
    """The whole engine larger or smaller; ``static_thrust`` is that of take-off on a standard day
    at sea level, ``airflow`` that of the design point.
    """

    factor: Annotated[float, Field(ge=0.02, le=20.0)] | None = None
    static_thrust: Annotated[Force, Field(gt=0.0)] | None = None
    airflow: Annotated[MassFlow, Field(gt=0.0)] | None = None

    @model_validator(mode="after")
    def _one_way(self) -> ScaleTable:
        if len(self.model_fields_set) != 1:
            raise ValueError("give one of factor, static_thrust or airflow")
        return self


class CombustorTable(Table):
    efficiency: EfficiencyValue = 0.995
    pressure_loss_fraction: Share = 0.05


class CoolingTable(Table):
    """Fractions of high-pressure-compressor entry flow.

    Vane air is taken at delivery; the rest at a share of the compressor's rise of enthalpy.
    """

    vane_fraction: Share = 0.0
    rotor_fraction: Share = 0.0
    downstream_fraction: Share = 0.0
    rotor_rise: Annotated[float, Field(gt=0.0, le=1.0)] = 1.0
    downstream_rise: Annotated[float, Field(gt=0.0, le=1.0)] = 1.0


class PhaseOffTakesTable(Table):
    """What differs in one phase of flight."""

    customer_bleed_fraction: Share | None = None
    shaft_power: Annotated[Power, Field(ge=0.0)] | None = None


class OffTakesTable(Table):
    """Off-takes at the design point and, unless said otherwise, under every rating and idle."""

    customer_bleed_fraction: Share = 0.0
    shaft_power: Annotated[Power, Field(ge=0.0)] = 0.0
    take_off: PhaseOffTakesTable = PhaseOffTakesTable()
    maximum_continuous: PhaseOffTakesTable = PhaseOffTakesTable()
    climb: PhaseOffTakesTable = PhaseOffTakesTable()
    cruise: PhaseOffTakesTable = PhaseOffTakesTable()
    maximum_afterburning: PhaseOffTakesTable = PhaseOffTakesTable()
    flight_idle: PhaseOffTakesTable = PhaseOffTakesTable()
    ground_idle: PhaseOffTakesTable = PhaseOffTakesTable()

    @property
    def phases(self) -> tuple[str, ...]:
        """Names of the phases, which are those of ratings and idles."""
        return tuple(name for name, value in self if isinstance(value, PhaseOffTakesTable))

    def of(self, phase: str) -> tuple[float, float]:
        """Bleed fraction and shaft power [W] of a phase, named as its rating or idle is."""
        special: PhaseOffTakesTable = getattr(self, phase)
        bleed, power = special.customer_bleed_fraction, special.shaft_power
        return (
            self.customer_bleed_fraction if bleed is None else bleed,
            self.shaft_power if power is None else power,
        )


class NozzleTable(Table):
    kind: Literal["convergent", "convergent-divergent", "given exit pressure"] = "convergent"
    isentropic_efficiency: EfficiencyValue = 1.0
    gross_thrust_coefficient: EfficiencyValue = 1.0
    pressure_loss_fraction: Share = 0.0
    exit_pressure_ratio: Ratio = 1.0


class AfterburnerTable(Table):
    """``temperature`` is that at which the lit pressure loss is stated; ratings hold their own."""

    temperature: HotTemperature
    efficiency: EfficiencyValue = 0.93
    dry_pressure_loss_fraction: Share = 0.02
    lit_pressure_loss_fraction: Share = 0.06

    @model_validator(mode="after")
    def _more_when_lit(self) -> AfterburnerTable:
        if self.lit_pressure_loss_fraction < self.dry_pressure_loss_fraction:
            raise ValueError("lit_pressure_loss_fraction is below dry_pressure_loss_fraction")
        return self


class MixerTable(Table):
    core_mach: Annotated[float, Field(gt=0.05, lt=0.95)] = 0.45
    core_pressure_loss_fraction: Share = 0.0
    bypass_pressure_loss_fraction: Share = 0.0
    pressure_loss_fraction: Share = 0.0
    effectiveness: Annotated[float, Field(ge=0.0, le=1.0)] = 1.0


class PropellerTable(Table):
    """``efficiency`` is that of the design point; at rest a ``profile_factor`` stands for it."""

    example: ClassVar[str] = 'diameter = "3.6 m" and efficiency = 0.85'
    diameter: Annotated[Length, Field(gt=0.0)]
    efficiency: Annotated[float, Field(gt=0.1, lt=1.0)] | None = None
    profile_factor: Annotated[float, Field(gt=0.1, le=1.0)] | None = None
    solidity: Annotated[float, Field(gt=0.0, lt=1.0)] = 0.12

    @model_validator(mode="after")
    def _one_quality(self) -> PropellerTable:
        if (self.efficiency is None) == (self.profile_factor is None):
            raise ValueError("give either efficiency, of a moving design point, or profile_factor")
        return self


class RatingTable(Table):
    """Ceilings; the least governs. Speeds are relative to the design point."""

    example: ClassVar[str] = 'turbine_entry_temperature = "1400 K"'
    turbine_entry_temperature: Annotated[Temperature, Field(gt=300.0, le=2500.0)] | None = None
    compressor_delivery_temperature: Annotated[Temperature, Field(gt=200.0)] | None = None
    compressor_delivery_pressure: Annotated[Pressure, Field(gt=0.0)] | None = None
    corrected_low_pressure_speed: Speed | None = None
    low_pressure_speed: Speed | None = None
    corrected_high_pressure_speed: Speed | None = None
    high_pressure_speed: Speed | None = None
    propeller_shaft_power: Annotated[Power, Field(gt=0.0)] | None = None
    throttle_ratio: Annotated[float, Field(ge=0.7, le=1.5)] | None = None
    flat_to: Day | None = None
    afterburner_temperature: HotTemperature | None = None
    afterburner_fuel_air_ratio: Annotated[float, Field(gt=0.0, lt=0.2)] | None = None

    @model_validator(mode="after")
    def _some_limit(self) -> RatingTable:
        if not self.model_fields_set - {"flat_to", "throttle_ratio"}:
            raise ValueError("a rating needs at least one limit, turbine_entry_temperature say")
        if self.throttle_ratio is not None and self.turbine_entry_temperature is None:
            raise ValueError("throttle_ratio lowers turbine_entry_temperature, which is missing")
        if self.afterburner_fuel_air_ratio is not None and self.afterburner_temperature is None:
            raise ValueError("afterburner_fuel_air_ratio needs afterburner_temperature beside it")
        return self


class RatingsTable(Table):
    take_off: RatingTable
    maximum_continuous: RatingTable
    climb: RatingTable
    cruise: RatingTable
    maximum_afterburning: RatingTable | None = None

    @model_validator(mode="after")
    def _lights_the_afterburner(self) -> RatingsTable:
        lit = self.maximum_afterburning
        if lit is not None and lit.afterburner_temperature is None:
            raise ValueError(
                'maximum_afterburning needs an afterburner_temperature, "1900 K" say; without one '
                "it lights nothing"
            )
        return self


class IdleTable(Table):
    """Floors; the highest governs. Speed is relative to the design point."""

    example: ClassVar[str] = "corrected_high_pressure_speed = 0.6"
    corrected_high_pressure_speed: Annotated[float, Field(ge=0.1, le=1.0)] | None = None
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
