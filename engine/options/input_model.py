"""What an engineer writes about an engine in TOML, what is known first standing first."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Annotated, Any, Literal, get_args

from pydantic import Field, model_validator

from engine.errors import InputRefused
from engine.options.fuel_table import FuelTable
from engine.options.tables import (
    AfterburnerTable,
    CombustorTable,
    CoolingTable,
    DesignPointBase,
    EfficiencyTable,
    EfficiencyValue,
    IdlesTable,
    InletTable,
    InstallationTable,
    MixerTable,
    NozzleTable,
    OffTakesTable,
    PodTable,
    PressureRatio,
    PropellerTable,
    RatingsTable,
    ScaleTable,
    SectionalGasTable,
)
from engine.quantities import Day, Force, SpecificFuelConsumption
from engine.reading import Table, check


class CycleEngineFile(Table):
    """What every computed engine states besides its design point."""

    name: str
    note: str = ""
    fuel: FuelTable = FuelTable()
    sectional_gas: SectionalGasTable | None = None
    inlet: InletTable = InletTable()
    installation: InstallationTable = InstallationTable()
    pod: PodTable = PodTable()
    scale: ScaleTable | None = None
    combustor: CombustorTable = CombustorTable()
    cooling: CoolingTable = CoolingTable()
    off_takes: OffTakesTable = OffTakesTable()
    ratings: RatingsTable
    idle: IdlesTable


def _refuse_second_spool(ratings: RatingsTable) -> None:
    """Refuse ceilings on the speed of a spool that a kind does not have."""
    for name, rating in ratings:
        for key in ("low_pressure_speed", "corrected_low_pressure_speed"):
            if rating is not None and getattr(rating, key) is not None:
                raise ValueError(
                    f"ratings.{name}.{key}: the gas generator of this kind has one spool; use "
                    "corrected_high_pressure_speed"
                )


class EfficienciesBase(Table):
    mechanical: EfficiencyValue = 0.99
    away_from_design: Literal["fall off", "constant"] = "fall off"


class TurbojetDesignPoint(DesignPointBase):
    compressor_pressure_ratio: PressureRatio


class TurbojetEfficiencies(EfficienciesBase):
    compressor: EfficiencyTable
    turbine: EfficiencyTable


class ReheatedFile(CycleEngineFile):
    """A kind that may have an afterburner."""

    nozzle: NozzleTable = NozzleTable()
    afterburner: AfterburnerTable | None = None

    @model_validator(mode="after")
    def _reheat_needs_an_afterburner(self) -> ReheatedFile:
        named = [
            name
            for name, rating in self.ratings
            if rating is not None and rating.afterburner_temperature is not None
        ]
        if self.afterburner is None and named:
            raise ValueError(
                f"ratings.{named[0]} has an afterburner_temperature, but there is no [afterburner]"
            )
        return self


class TurbojetFile(ReheatedFile):
    kind: Literal["turbojet"]
    design_point: TurbojetDesignPoint
    efficiencies: TurbojetEfficiencies

    @model_validator(mode="after")
    def _one_spool(self) -> TurbojetFile:
        _refuse_second_spool(self.ratings)
        return self


class TwoSpoolDesignPoint(DesignPointBase):
    low_pressure_compressor_pressure_ratio: Annotated[float, Field(gt=1.0, le=20.0)]
    high_pressure_compressor_pressure_ratio: PressureRatio


class TwoSpoolEfficiencies(EfficienciesBase):
    low_pressure_compressor: EfficiencyTable
    high_pressure_compressor: EfficiencyTable
    high_pressure_turbine: EfficiencyTable
    low_pressure_turbine: EfficiencyTable


class TwoSpoolTurbojetFile(ReheatedFile):
    kind: Literal["two-spool turbojet"]
    design_point: TwoSpoolDesignPoint
    efficiencies: TwoSpoolEfficiencies


class TurbofanDesignPoint(DesignPointBase):
    """``fan_hub_pressure_ratio`` is that of the core's side, where it differs."""

    bypass_ratio: Annotated[float, Field(gt=0.0, le=30.0)]
    fan_pressure_ratio: Annotated[float, Field(gt=1.0, le=10.0)]
    fan_hub_pressure_ratio: Annotated[float, Field(gt=1.0, le=10.0)] | None = None
    booster_pressure_ratio: PressureRatio = 1.0
    high_pressure_compressor_pressure_ratio: PressureRatio


class TurbofanEfficiencies(EfficienciesBase):
    fan: EfficiencyTable
    fan_hub: EfficiencyTable | None = None
    booster: EfficiencyTable | None = None
    high_pressure_compressor: EfficiencyTable
    high_pressure_turbine: EfficiencyTable
    low_pressure_turbine: EfficiencyTable
    gearbox: EfficiencyValue = 1.0


class TurbofanFile(CycleEngineFile):
    kind: Literal["turbofan"]
    design_point: TurbofanDesignPoint
    efficiencies: TurbofanEfficiencies
    core_nozzle: NozzleTable = NozzleTable()
    bypass_nozzle: NozzleTable = NozzleTable()


class MixedTurbofanFile(ReheatedFile):
    kind: Literal["mixed turbofan"]
    design_point: TurbofanDesignPoint
    efficiencies: TurbofanEfficiencies
    mixer: MixerTable = MixerTable()

    @model_validator(mode="after")
    def _reheat_needs_full_mixing(self) -> MixedTurbofanFile:
        if self.afterburner is not None and self.mixer.effectiveness != 1.0:
            raise ValueError(
                "mixer.effectiveness is for an engine without afterburner, which burns in a stream "
                "that is mixed; leave it out"
            )
        return self


class TurbopropDesignPoint(DesignPointBase):
    """``power_turbine_share`` is of the ideal drop of enthalpy down to ambient pressure."""

    compressor_pressure_ratio: PressureRatio
    power_turbine_share: Annotated[float, Field(gt=0.2, lt=1.0)]


class TurbopropEfficiencies(EfficienciesBase):
    compressor: EfficiencyTable
    turbine: EfficiencyTable
    power_turbine: EfficiencyTable
    gearbox: EfficiencyValue = 0.985


class TurbopropFile(CycleEngineFile):
    kind: Literal["turboprop"]
    design_point: TurbopropDesignPoint
    efficiencies: TurbopropEfficiencies
    propeller: PropellerTable
    nozzle: NozzleTable = NozzleTable()

    @model_validator(mode="after")
    def _one_spool(self) -> TurbopropFile:
        _refuse_second_spool(self.ratings)
        return self

    @model_validator(mode="after")
    def _efficiency_needs_speed(self) -> TurbopropFile:
        if self.propeller.efficiency is not None and self.design_point.mach == 0.0:
            raise ValueError(
                "propeller.efficiency is thrust power over shaft power, which is 0 at rest, where "
                "the design point is; give propeller.profile_factor, 0.85 say"
            )
        return self


class ConstantConsumptionFile(Table):
    """Static sea-level thrust and one specific fuel consumption."""

    kind: Literal["constant consumption"]
    name: str
    note: str = ""
    specific_fuel_consumption: Annotated[SpecificFuelConsumption, Field(gt=0.0)]
    static_thrust: Annotated[Force, Field(gt=0.0)]
    fuel: FuelTable = FuelTable()
    density_exponent: Annotated[float, Field(ge=0.0, le=2.0)] = 0.0


class TabulatedFile(Table):
    """An engine known by the points of a table, which holds for one day."""

    kind: Literal["tabulated"]
    name: str
    note: str = ""
    points: str
    day: Day  # of the table: nothing in it would show a wrong one
    fuel: FuelTable = FuelTable()


class BrochureFile(Table):
    """Four numbers, from which a stated rule makes a cycle: see engine/options/brochure.py."""

    kind: Literal["brochure"]
    name: str
    note: str = ""
    static_thrust: Annotated[Force, Field(gt=0.0, le=5e6)]
    static_specific_fuel_consumption: Annotated[SpecificFuelConsumption, Field(gt=0.0)]
    bypass_ratio: Annotated[float, Field(ge=0.0, le=20.0)]
    overall_pressure_ratio: Annotated[float, Field(ge=3.0, le=80.0)]
    fuel: FuelTable = FuelTable()


AnyCycleFile = (
    TurbojetFile | TwoSpoolTurbojetFile | TurbofanFile | MixedTurbofanFile | TurbopropFile
)


AnyEngineFile = AnyCycleFile | BrochureFile | ConstantConsumptionFile | TabulatedFile


class EngineFile(Table):
    """Any engine, told apart by its kind."""

    engine: Annotated[AnyEngineFile, Field(discriminator="kind")]


_MODELS: dict[str, type[AnyEngineFile]] = {
    get_args(model.model_fields["kind"].annotation)[0]: model for model in get_args(AnyEngineFile)
}
# Keys that only files of other subjects have.
_OTHER_FILES = {"segment": "a mission", "masses": "an aircraft"}


def check_engine(content: Mapping[str, Any], where: str) -> AnyEngineFile:
    """The content of an engine file, checked; :class:`InputRefused` names key and value."""
    if "kind" not in content:
        for key, subject in _OTHER_FILES.items():
            if key in content:
                raise InputRefused(
                    f"is the file of {subject}, and one of an engine is wanted; `longlegs list` "
                    "names engines",
                    where=where,
                )
    model = _MODELS.get(str(content.get("kind")))
    if model is not None:
        return check(dict(content), model, where)
    try:
        return check({"engine": dict(content)}, EngineFile, where).engine
    except InputRefused as refusal:
        key = refusal.key.removeprefix("engine").removeprefix(".")
        shown = "" if "kind" in content else "; the engines of `longlegs list` are examples"
        raise InputRefused(refusal.what + shown, where=where, key=key) from None
