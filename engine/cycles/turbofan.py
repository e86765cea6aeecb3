"""Turbofan with separate exhausts: two spools, a fan with or without booster, direct or geared.

Unknowns: fan pressure ratio, bypass ratio, high-pressure-compressor pressure ratio, turbine entry
temperature over engine-face temperature, corrected core airflow. Held from the design point: flow
capacity of both turbines and both nozzle throats. The booster turns with the fan, so its specific
work keeps its ratio to the fan's.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from engine.cycles.core import Core, run_core, unlit_loss
from engine.cycles.flowpath import Flowpath, Sizing, corrected_flow_factor, spool_speeds
from engine.fuels import Fuel
from engine.gas import Gas
from engine.parts.compressor import compress, compress_by_work
from engine.parts.efficiency import Efficiency
from engine.parts.inlet import Inlet
from engine.parts.nozzle import Nozzle, discharge
from engine.parts.stream import Array, Stream, mix_in
from engine.parts.turbine import corrected_flow_area, expand_by_power, flow_share


@dataclass(frozen=True)
class LowSpool:
    """Fan, booster and the turbine that drives them.

    ``gearbox_efficiency`` is between turbine and fan only; 1 for a direct drive.
    """

    fan_efficiency: Efficiency
    booster_efficiency: Efficiency
    turbine_efficiency: Efficiency
    mechanical_efficiency: float = 1.0
    gearbox_efficiency: float = 1.0


@dataclass(frozen=True)
class Turbofan:
    """A separate-exhaust turbofan and its design point."""

    gas: Gas
    fuel: Fuel
    inlet: Inlet
    low_spool: LowSpool
    core: Core
    core_nozzle: Nozzle
    bypass_nozzle: Nozzle
    bypass_ratio: float
    fan_pressure_ratio: float
    booster_pressure_ratio: float
    high_pressure_compressor_pressure_ratio: float
    turbine_entry_temperature: float
    unknown_names: tuple[str, ...] = (
        "fan_pressure_ratio",
        "bypass_ratio",
        "high_pressure_compressor_pressure_ratio",
        "turbine_entry_temperature_ratio",
        "corrected_core_airflow",
    )

    def design_unknowns(self, face: Stream) -> Array:
        return np.log(
            [
                self.fan_pressure_ratio,
                self.bypass_ratio,
                self.high_pressure_compressor_pressure_ratio,
                self.turbine_entry_temperature / float(face.total_temperature),
                1.0 / float(corrected_flow_factor(face)),
            ]
        )

    def _boost(self, hub: Stream, fan_rise: Array, sizing: Sizing | None) -> Stream:
        """Station 25 from 21: by pressure ratio at the design point, by work away from it."""
        efficiency = self.low_spool.booster_efficiency
        if self.booster_pressure_ratio == 1.0:
            return hub
        if sizing is None:
            return compress(self.gas, hub, np.asarray(self.booster_pressure_ratio), efficiency)
        return compress_by_work(self.gas, hub, sizing.booster_rise_ratio * fan_rise, efficiency)

    def evaluate(
        self,
        unknowns: Array,
        face: Stream,
        ambient_pressure: Array,
        sizing: Sizing | None,
        *,
        is_lit: bool,
    ) -> Flowpath:
        gas, low, core = self.gas, self.low_spool, self.core
        fan_ratio, bypass_ratio, core_ratio, temperature_ratio, airflow = np.exp(unknowns)
        core_flow = airflow * corrected_flow_factor(face)
        entry = face.with_flow(core_flow * (1.0 + bypass_ratio))
        fan_exit = compress(gas, entry, fan_ratio, low.fan_efficiency)
        fan_rise = fan_exit.enthalpy - entry.enthalpy
        hub = fan_exit.with_flow(core_flow)
        bypass = fan_exit.with_flow(core_flow * bypass_ratio)
        core_entry = self._boost(hub, fan_rise, sizing)
        hot = temperature_ratio * face.total_temperature if is_lit else None
        design = {} if is_lit or sizing is None else sizing.duct_flows
        flow = run_core(
            gas, core, core_entry, core_ratio, hot, design_combustor_flow=design.get("combustor")
        )

        fan_power = entry.mass_flow * fan_rise
        booster_power = core_flow * (core_entry.enthalpy - hub.enthalpy)
        drive_power = fan_power / low.gearbox_efficiency + booster_power
        low_power = drive_power / low.mechanical_efficiency
        low_entry = flow.turbine_exit
        low_exit = expand_by_power(gas, low_entry, low_power, low.turbine_efficiency)
        share = flow_share(low_exit.total_pressure / low_entry.total_pressure, 0.0)
        last = low_exit
        if core.downstream_cooling_fraction:
            last = mix_in(gas, low_exit, flow.downstream_cooling)
        core_duct = last.with_pressure_loss(
            unlit_loss(self.core_nozzle.pressure_loss_fraction, last, design.get("core_nozzle"))
        )
        bypass_duct = bypass.with_pressure_loss(
            unlit_loss(
                self.bypass_nozzle.pressure_loss_fraction, bypass, design.get("bypass_nozzle")
            )
        )
        core_jet = discharge(gas, self.core_nozzle, core_duct, ambient_pressure)
        bypass_jet = discharge(gas, self.bypass_nozzle, bypass_duct, ambient_pressure)
        losses = (
            low_power - fan_power - booster_power
            + flow.turbine_power - flow.compressor_power - core.shaft_power
        )  # fmt: skip
        rises = {
            "low_pressure": (fan_rise, entry.total_temperature),
            "high_pressure": (flow.rise, core_entry.total_temperature),
        }
        return Flowpath(
            stations={
                "2": entry,
                "21": hub,
                "25": core_entry,
                "3": flow.delivery,
                "4": flow.combustor_exit,
                "41": flow.rotor_entry,
                "44": flow.rotor_exit,
                "45": low_entry,
                "5": last,
                "7": core_duct,
                "13": bypass,
                "17": bypass_duct,
            },
            jets={"9": (core_duct, core_jet), "19": (bypass_duct, bypass_jet)},
            areas={
                "high_pressure_turbine": flow.turbine_area,
                "low_pressure_turbine": corrected_flow_area(gas, low_entry) / share,
                "core_nozzle": core_jet.throat_area,
                "bypass_nozzle": bypass_jet.throat_area,
            },
            duct_flows={
                "combustor": flow.combustor_entry.duct_flow,
                "core_nozzle": last.duct_flow,
                "bypass_nozzle": bypass.duct_flow,
            },
            limits=_limits(flow.combustor_exit, flow.delivery, rises, sizing),
            shaft_power=np.full_like(flow.rise, core.shaft_power),
            bleed=flow.bleed,
            mechanical_loss=losses,
            fuel_flow=flow.fuel_flow,
            spool_rises=rises,
        )


def _limits(
    hot: Stream,
    delivery: Stream,
    rises: dict[str, tuple[Array, Array]],
    sizing: Sizing | None,
) -> Array:
    """Values of LIMIT_NAMES, stacked."""
    low = spool_speeds(rises, "low_pressure", sizing)
    high = spool_speeds(rises, "high_pressure", sizing)
    return np.stack(
        np.broadcast_arrays(
            hot.total_temperature,
            delivery.total_temperature,
            delivery.total_pressure,
            *low,
            *high,
            hot.fuel_air_ratio,
        )
    )
