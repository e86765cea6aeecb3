"""From an engine file to an engine behind the one interface."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import numpy as np

from engine.atmosphere import flight_condition
from engine.options.constant_consumption import ConstantConsumptionEngine
from engine.cycle_engine import CycleEngine
from engine.cycles.core import Core
from engine.cycles.flowpath import LIMIT_NAMES
from engine.cycles.sizing import size
from engine.cycles.turbofan import LowSpool, Turbofan
from engine.cycles.turbojet import Turbojet
from engine.errors import InputRefused, OutOfRange
from engine.fuels import Fuel
from engine.gas import Gas, RealGas, SectionalGas
from engine.options.input_model import (
    ConstantConsumptionFile,
    CycleEngineFile,
    EfficiencyTable,
    EngineFile,
    GasSection,
    IdleTable,
    NozzleTable,
    RatingTable,
    TurbofanFile,
    TurbojetFile,
)
from engine.interface import RATINGS, Engine
from engine.parts.combustor import Combustor
from engine.parts.efficiency import Efficiency
from engine.parts.inlet import Inlet
from engine.parts.nozzle import Nozzle
from engine.reading import check, defaults_used, read_toml


def load_engine(path: str | Path) -> Engine:
    """Read an engine file, size the engine, and give it behind the one interface.

    Raises
    ------
    InputRefused
        naming file, key, value and what is allowed.
    CycleCannotRun
        for a cycle without a physical design point.
    """
    where = Path(path)
    return engine_from_content(read_toml(where), str(where))


def engine_from_content(content: dict[str, Any], where: str) -> Engine:
    """The same from the content of a file, ``where`` naming it in a refusal."""
    try:
        written = check({"engine": content}, EngineFile, where).engine
    except InputRefused as refusal:
        key = refusal.key.removeprefix("engine").removeprefix(".")
        raise InputRefused(refusal.what, where=where, key=key) from None
    assumed = tuple(line for line in defaults_used(written) if "hydrogen_carbon" not in line)
    if isinstance(written, ConstantConsumptionFile):
        return ConstantConsumptionEngine(
            name=written.name,
            specific_fuel_consumption=written.specific_fuel_consumption,
            static_thrust=dict.fromkeys(RATINGS, written.static_thrust),
            density_exponent=written.density_exponent,
            assumed=assumed,
        )
    point = written.design_point
    try:
        arrangement = (
            _turbojet(written) if isinstance(written, TurbojetFile) else _turbofan(written)
        )
        flight = flight_condition(point.pressure_altitude, point.mach, point.day)
        sizing, _ = size(arrangement, flight, airflow=point.airflow, net_thrust=point.net_thrust)
    except OutOfRange as refusal:
        raise InputRefused(str(refusal), where=where, key="design_point") from None
    except InputRefused as refusal:
        key = refusal.key or "design_point"
        raise type(refusal)(refusal.what, where=where, key=key) from None
    ratings, idle = written.ratings, written.idle
    return CycleEngine(
        name=written.name,
        arrangement=arrangement,
        sizing=sizing,
        ceilings={name: _bounds(getattr(ratings, name), np.inf) for name in RATINGS},
        floors={"flight_idle": _bounds(idle.flight, 0.0), "ground_idle": _bounds(idle.ground, 0.0)},
        combustion_efficiency=written.combustor.efficiency,
        assumed=assumed,
    )


def _bounds(table: RatingTable | IdleTable, absent: float) -> np.ndarray:
    values = [getattr(table, name, None) for name in LIMIT_NAMES]
    return np.array([absent if value is None else value for value in values])


def _efficiency(table: EfficiencyTable) -> Efficiency:
    if table.polytropic is not None:
        return Efficiency(table.polytropic, "polytropic")
    assert table.isentropic is not None
    return Efficiency(table.isentropic, "isentropic")


def _fuel(written: CycleEngineFile) -> Fuel:
    table = written.fuel
    return Fuel(table.name, table.hydrogen_carbon_ratio, table.lower_heating_value, table.density)


def _gas(written: CycleEngineFile) -> Gas:
    table = written.sectional_gas
    if table is None:
        return RealGas(_fuel(written))
    sections: dict[str, GasSection] = {"cold": table.cold, "hot": table.hot}
    sections["reheated"] = table.reheated or table.hot
    return SectionalGas(
        {name: section.heat_capacity for name, section in sections.items()},
        {name: section.heat_capacity_ratio for name, section in sections.items()},
    )


def _inlet(written: CycleEngineFile) -> Inlet:
    return Inlet(**written.inlet.model_dump())


def _nozzle(table: NozzleTable) -> Nozzle:
    return Nozzle(**table.model_dump())


def _core(
    written: CycleEngineFile, compressor: EfficiencyTable, turbine: EfficiencyTable, mech: float
) -> Core:
    cooling, taken = written.cooling, written.off_takes
    total = (
        cooling.vane_fraction
        + cooling.rotor_fraction
        + cooling.downstream_fraction
        + taken.customer_bleed_fraction
    )
    if total >= 0.5:
        raise InputRefused(
            f"cooling and customer bleed take {total:.0%} of the core's air; less than half is "
            "allowed",
            key="cooling",
        )
    return Core(
        compressor_efficiency=_efficiency(compressor),
        turbine_efficiency=_efficiency(turbine),
        combustor=Combustor(
            written.combustor.efficiency,
            written.combustor.pressure_loss_fraction,
            written.fuel.lower_heating_value,
        ),
        vane_cooling_fraction=cooling.vane_fraction,
        rotor_cooling_fraction=cooling.rotor_fraction,
        downstream_cooling_fraction=cooling.downstream_fraction,
        customer_bleed_fraction=taken.customer_bleed_fraction,
        shaft_power=taken.shaft_power,
        mechanical_efficiency=mech,
    )


def _turbojet(written: TurbojetFile) -> Turbojet:
    efficiencies, point = written.efficiencies, written.design_point
    return Turbojet(
        gas=_gas(written),
        fuel=_fuel(written),
        inlet=_inlet(written),
        core=_core(written, efficiencies.compressor, efficiencies.turbine, efficiencies.mechanical),
        nozzle=_nozzle(written.nozzle),
        pressure_ratio=point.compressor_pressure_ratio,
        turbine_entry_temperature=point.turbine_entry_temperature,
    )


def _turbofan(written: TurbofanFile) -> Turbofan:
    efficiencies, point = written.efficiencies, written.design_point
    return Turbofan(
        gas=_gas(written),
        fuel=_fuel(written),
        inlet=_inlet(written),
        low_spool=LowSpool(
            fan_efficiency=_efficiency(efficiencies.fan),
            booster_efficiency=_efficiency(efficiencies.booster or efficiencies.fan),
            turbine_efficiency=_efficiency(efficiencies.low_pressure_turbine),
            mechanical_efficiency=efficiencies.mechanical,
            gearbox_efficiency=efficiencies.gearbox,
        ),
        core=_core(
            written,
            efficiencies.high_pressure_compressor,
            efficiencies.high_pressure_turbine,
            efficiencies.mechanical,
        ),
        core_nozzle=_nozzle(written.core_nozzle),
        bypass_nozzle=_nozzle(written.bypass_nozzle),
        bypass_ratio=point.bypass_ratio,
        fan_pressure_ratio=point.fan_pressure_ratio,
        booster_pressure_ratio=point.booster_pressure_ratio,
        high_pressure_compressor_pressure_ratio=point.high_pressure_compressor_pressure_ratio,
        turbine_entry_temperature=point.turbine_entry_temperature,
    )
