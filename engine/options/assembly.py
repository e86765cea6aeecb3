"""From what is written about a cycle to the arrangement of its parts and its ratings."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from typing import Any

import numpy as np

from engine.cycles.core import Core
from engine.cycles.flowpath import LIMIT_NAMES, Arrangement, Flowpath
from engine.cycles.low_spool import LowSpool
from engine.cycles.mixed_turbofan import MixedTurbofan, Mixer
from engine.cycles.situation import OffTakes, Sizing
from engine.cycles.turbofan import Turbofan
from engine.cycles.turbojet import Turbojet
from engine.cycles.turboprop import PowerTrain, Turboprop
from engine.cycles.two_spool_turbojet import TwoSpoolTurbojet
from engine.errors import InputRefused
from engine.gas import Gas, RealGas, SectionalGas
from engine.installation.drag import Installation
from engine.installation.inlets import inlet_type
from engine.interface import OPTIONAL_RATINGS, RATINGS
from engine.matching import Throttle
from engine.options.input_model import (
    CycleEngineFile,
    EfficienciesBase,
    MixedTurbofanFile,
    ReheatedFile,
    TurbofanDesignPoint,
    TurbofanEfficiencies,
    TurbofanFile,
    TurbojetFile,
    TurbopropFile,
    TwoSpoolTurbojetFile,
)
from engine.options.tables import (
    AfterburnerTable,
    EfficiencyTable,
    GasSection,
    IdleTable,
    NozzleTable,
    RatingTable,
)
from engine.parts.afterburner import Afterburner
from engine.parts.combustor import Combustor
from engine.parts.efficiency import Efficiency
from engine.parts.inlet import Inlet
from engine.parts.nozzle import Nozzle
from engine.ratings import AFTERBURNER_FUEL, Rating, Ratings


def arrange(written: CycleEngineFile) -> Arrangement:
    """The parts of an engine, joined; its afterburner is fitted once the design point is known."""
    arrangement: Arrangement = _ARRANGE[type(written)](written)
    return arrangement


def ratings_of(written: CycleEngineFile) -> Ratings:
    """Ratings and idles by name, with what the aircraft takes off in each phase."""
    found = {}
    for name in (*RATINGS, *OPTIONAL_RATINGS):
        table: RatingTable | None = getattr(written.ratings, name)
        if table is not None:
            found[name] = _rating(written, table, name)
    for name, idle in (("flight_idle", written.idle.flight), ("ground_idle", written.idle.ground)):
        taken = OffTakes.of(*written.off_takes.of(name))
        found[name] = Rating(Throttle.FLOOR, _bounds(idle, 0.0), taken)
    return found


def _rating(written: CycleEngineFile, table: RatingTable, name: str) -> Rating:
    bounds = _bounds(table, np.inf)
    gas = _gas(written)
    if table.afterburner_fuel_air_ratio is None and isinstance(gas, RealGas):
        bounds[AFTERBURNER_FUEL] = gas.stoichiometric_fuel_air_ratio
    taken = OffTakes.of(*written.off_takes.of(name))
    return Rating(Throttle.CEILING, bounds, taken, table.flat_to, table.throttle_ratio)


def _bounds(table: RatingTable | IdleTable, absent: float) -> np.ndarray:
    values = [getattr(table, name, None) for name in LIMIT_NAMES]
    return np.array([absent if value is None else value for value in values])


def fit_afterburner(
    arrangement: Arrangement, written: CycleEngineFile, path: Flowpath
) -> Arrangement:
    """The arrangement with its lit pressure loss referred to the design point's temperatures."""
    if not isinstance(written, ReheatedFile) or written.afterburner is None:
        return arrangement
    table, entry = written.afterburner, float(path.jets["9"][0].total_temperature)
    _refuse_cold("afterburner.temperature", table.temperature, entry)
    for name, rating in written.ratings:
        if rating is not None and rating.afterburner_temperature is not None:
            key = f"ratings.{name}.afterburner_temperature"
            _refuse_cold(key, rating.afterburner_temperature, entry)
            _refuse_rich(arrangement.gas, rating, name)
    fitted = replace(
        _afterburner(written, table), reference_temperature_ratio=table.temperature / entry
    )
    return replace(arrangement, afterburner=fitted)


def _refuse_cold(key: str, temperature: float, entry: float) -> None:
    """An afterburner heats what enters it; both temperatures in K."""
    if temperature <= entry:
        raise InputRefused(
            f"= {temperature:.0f} K is not above the {entry:.0f} K that the dry engine leaves at "
            "its design point; raise it",
            key=key,
        )


def _refuse_rich(gas: Gas, rating: RatingTable, name: str) -> None:
    """More fuel than the air can burn is no bound."""
    ratio = rating.afterburner_fuel_air_ratio
    if ratio is None or not isinstance(gas, RealGas):
        return
    richest = gas.stoichiometric_fuel_air_ratio
    if ratio > richest:
        raise InputRefused(
            f"= {ratio:g} is above {richest:.4f}, the stoichiometric ratio of the fuel, at which "
            "all oxygen is used; lower it or leave it out",
            key=f"ratings.{name}.afterburner_fuel_air_ratio",
        )


def refuse_propeller(written: CycleEngineFile, sizing: Sizing) -> None:
    """Refuse a propeller that would be better than its disc without any blade drag."""
    profile = sizing.loadings.get("propeller_profile", 1.0)
    if isinstance(written, TurbopropFile) and profile > 1.0:
        stated, diameter = written.propeller.efficiency, written.propeller.diameter
        assert stated is not None  # a profile factor that is given is at most 1
        raise InputRefused(
            f"= {stated:g} is above the {stated / profile:.3f} that a disc of {diameter:g} m has "
            "at this power, speed and height with no blade drag at all; lower it to some 0.9 "
            "of that, or enlarge propeller.diameter",
            key="propeller.efficiency",
        )


def _afterburner(written: CycleEngineFile, table: AfterburnerTable | None) -> Any:
    if table is None:
        return None
    return Afterburner(
        efficiency=table.efficiency,
        lower_heating_value=written.fuel.to_fuel().lower_heating_value,
        dry_pressure_loss_fraction=table.dry_pressure_loss_fraction,
        lit_pressure_loss_fraction=table.lit_pressure_loss_fraction,
        reference_temperature_ratio=2.0,
    )


def _efficiency(table: EfficiencyTable, whole: EfficienciesBase) -> Efficiency:
    falls_off = whole.away_from_design == "fall off"
    if table.polytropic is not None:
        return Efficiency(table.polytropic, "polytropic", falls_off)
    assert table.isentropic is not None
    return Efficiency(table.isentropic, "isentropic", falls_off)


def _gas(written: CycleEngineFile) -> Gas:
    table = written.sectional_gas
    if table is None:
        return RealGas(written.fuel.to_fuel())
    sections: dict[str, GasSection] = {"cold": table.cold, "hot": table.hot}
    sections["mixed"] = table.mixed or table.hot
    sections["reheated"] = table.reheated or table.hot
    return SectionalGas(
        {name: section.heat_capacity for name, section in sections.items()},
        {name: section.heat_capacity_ratio for name, section in sections.items()},
    )


def _common(written: CycleEngineFile) -> dict[str, Any]:
    """What every arrangement has."""
    return {
        "gas": _gas(written),
        "fuel": written.fuel.to_fuel(),
        "inlet": _inlet(written),
        "installation": _installation(written),
    }


def _inlet(written: CycleEngineFile) -> Inlet:
    table, recovery = written.inlet, written.inlet.total_pressure_recovery
    if table.type is not None:
        recovery = inlet_type(table.type).total_pressure_recovery
    return Inlet(
        1.0 if recovery is None else recovery,
        table.has_standard_ram_recovery,
        table.isentropic_efficiency,
    )


def _installation(written: CycleEngineFile) -> Installation | None:
    table = written.installation
    if table.capture_area is None and table.afterbody_area is None:
        return None
    return Installation(**table.model_dump())


def _nozzle(table: NozzleTable) -> Nozzle:
    return Nozzle(**table.model_dump())


def _core(
    written: CycleEngineFile,
    whole: EfficienciesBase,
    compressor: EfficiencyTable,
    turbine: EfficiencyTable,
) -> Core:
    cooling = written.cooling
    bleed = max(written.off_takes.of(name)[0] for name in written.off_takes.phases)
    total = cooling.vane_fraction + cooling.rotor_fraction + cooling.downstream_fraction + bleed
    if total >= 0.5:
        raise InputRefused(
            f"cooling and customer bleed take {total:.0%} of the core's air; less than half is "
            "allowed",
            key="cooling",
        )
    return Core(
        compressor_efficiency=_efficiency(compressor, whole),
        turbine_efficiency=_efficiency(turbine, whole),
        combustor=Combustor(
            written.combustor.efficiency,
            written.combustor.pressure_loss_fraction,
            written.fuel.to_fuel().lower_heating_value,
            whole.away_from_design == "fall off",
        ),
        vane_cooling_fraction=cooling.vane_fraction,
        rotor_cooling_fraction=cooling.rotor_fraction,
        downstream_cooling_fraction=cooling.downstream_fraction,
        rotor_cooling_rise=cooling.rotor_rise,
        downstream_cooling_rise=cooling.downstream_rise,
        mechanical_efficiency=whole.mechanical,
    )


def _turbojet(written: TurbojetFile) -> Turbojet:
    whole, point = written.efficiencies, written.design_point
    return Turbojet(
        **_common(written),
        core=_core(written, whole, whole.compressor, whole.turbine),
        exhaust_nozzle=_nozzle(written.nozzle),
        pressure_ratio=point.compressor_pressure_ratio,
        turbine_entry_temperature=point.turbine_entry_temperature,
        afterburner=_afterburner(written, written.afterburner),
    )


def _two_spool_turbojet(written: TwoSpoolTurbojetFile) -> TwoSpoolTurbojet:
    whole, point = written.efficiencies, written.design_point
    compressor = _efficiency(whole.low_pressure_compressor, whole)
    return TwoSpoolTurbojet(
        **_common(written),
        low_spool=LowSpool(
            fan_efficiency=compressor,
            booster_efficiency=compressor,
            turbine_efficiency=_efficiency(whole.low_pressure_turbine, whole),
            mechanical_efficiency=whole.mechanical,
        ),
        core=_core(written, whole, whole.high_pressure_compressor, whole.high_pressure_turbine),
        exhaust_nozzle=_nozzle(written.nozzle),
        low_pressure_compressor_pressure_ratio=point.low_pressure_compressor_pressure_ratio,
        high_pressure_compressor_pressure_ratio=point.high_pressure_compressor_pressure_ratio,
        turbine_entry_temperature=point.turbine_entry_temperature,
        afterburner=_afterburner(written, written.afterburner),
    )


def _low_spool(whole: TurbofanEfficiencies, point: TurbofanDesignPoint) -> LowSpool:
    has_hub = whole.fan_hub is not None or point.fan_hub_pressure_ratio is not None
    return LowSpool(
        fan_efficiency=_efficiency(whole.fan, whole),
        booster_efficiency=_efficiency(whole.booster or whole.fan, whole),
        turbine_efficiency=_efficiency(whole.low_pressure_turbine, whole),
        booster_pressure_ratio=point.booster_pressure_ratio,
        hub_efficiency=_efficiency(whole.fan_hub or whole.fan, whole) if has_hub else None,
        hub_pressure_ratio=point.fan_hub_pressure_ratio or point.fan_pressure_ratio,
        mechanical_efficiency=whole.mechanical,
        gearbox_efficiency=whole.gearbox,
    )


def _two_spools(written: TurbofanFile | MixedTurbofanFile) -> dict[str, Any]:
    """What turbofans share, however their streams leave."""
    whole, point = written.efficiencies, written.design_point
    return {
        **_common(written),
        "low_spool": _low_spool(whole, point),
        "core": _core(written, whole, whole.high_pressure_compressor, whole.high_pressure_turbine),
        "bypass_ratio": point.bypass_ratio,
        "fan_pressure_ratio": point.fan_pressure_ratio,
        "high_pressure_compressor_pressure_ratio": point.high_pressure_compressor_pressure_ratio,
        "turbine_entry_temperature": point.turbine_entry_temperature,
    }


def _turbofan(written: TurbofanFile) -> Turbofan:
    return Turbofan(
        **_two_spools(written),
        exhaust_nozzle=_nozzle(written.core_nozzle),
        bypass_nozzle=_nozzle(written.bypass_nozzle),
    )


def _mixed_turbofan(written: MixedTurbofanFile) -> MixedTurbofan:
    return MixedTurbofan(
        **_two_spools(written),
        mixer=Mixer(**written.mixer.model_dump()),
        exhaust_nozzle=_nozzle(written.nozzle),
        afterburner=_afterburner(written, written.afterburner),
    )


def _turboprop(written: TurbopropFile) -> Turboprop:
    whole, point, propeller = written.efficiencies, written.design_point, written.propeller
    return Turboprop(
        **_common(written),
        core=_core(written, whole, whole.compressor, whole.turbine),
        train=PowerTrain(
            turbine_efficiency=_efficiency(whole.power_turbine, whole),
            propeller_diameter=propeller.diameter,
            propeller_solidity=propeller.solidity,
            mechanical_efficiency=whole.mechanical,
            gearbox_efficiency=whole.gearbox,
            propeller_efficiency=propeller.efficiency,
            profile_factor=propeller.profile_factor,
        ),
        exhaust_nozzle=_nozzle(written.nozzle),
        pressure_ratio=point.compressor_pressure_ratio,
        turbine_entry_temperature=point.turbine_entry_temperature,
        power_turbine_share=point.power_turbine_share,
    )


_ARRANGE: dict[type[CycleEngineFile], Callable[[Any], Any]] = {
    TurbojetFile: _turbojet,
    TwoSpoolTurbojetFile: _two_spool_turbojet,
    TurbofanFile: _turbofan,
    MixedTurbofanFile: _mixed_turbofan,
    TurbopropFile: _turboprop,
}
