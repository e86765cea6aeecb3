"""Turbofan with separate exhausts: two spools, a fan with or without booster, direct or geared.

Unknowns: fan pressure ratio, bypass ratio, high-pressure-compressor pressure ratio, turbine entry
temperature over engine-face temperature, corrected core airflow. Held from the design point: flow
capacity of both turbines and both nozzle throats.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from engine.cycles.core import Core, run_core
from engine.cycles.exhaust import let_out
from engine.cycles.flowpath import Flowpath, core_limits, corrected_flow_factor
from engine.cycles.low_spool import LowSpool, drive, run_front
from engine.cycles.situation import Situation
from engine.fuels import Fuel
from engine.gas import Gas
from engine.installation.drag import Installation
from engine.parts.inlet import Inlet
from engine.parts.nozzle import Nozzle
from engine.parts.stream import Array, Stream, mix_in


@dataclass(frozen=True)
class Turbofan:
    """A separate-exhaust turbofan and its design point."""

    gas: Gas
    fuel: Fuel
    inlet: Inlet
    low_spool: LowSpool
    core: Core
    exhaust_nozzle: Nozzle
    bypass_nozzle: Nozzle
    bypass_ratio: float
    fan_pressure_ratio: float
    high_pressure_compressor_pressure_ratio: float
    turbine_entry_temperature: float
    afterburner: None = None
    installation: Installation | None = None
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

    def evaluate(self, unknowns: Array, situation: Situation) -> Flowpath:
        gas, low, core, face = self.gas, self.low_spool, self.core, situation.face
        fan_ratio, bypass_ratio, core_ratio, temperature_ratio, airflow = np.exp(unknowns)
        core_flow = airflow * corrected_flow_factor(face)
        front = run_front(gas, low, core_flow, fan_ratio, bypass_ratio, situation)
        hot = temperature_ratio * face.total_temperature
        flow = run_core(gas, core, front.core_entry, core_ratio, hot, situation)
        turbine = drive(gas, low, flow, front, situation)
        last = turbine.exit
        if core.downstream_cooling_fraction:
            last = mix_in(gas, last, flow.downstream_cooling)
        inner = let_out(gas, self.exhaust_nozzle, None, last, situation)
        outer = let_out(gas, self.bypass_nozzle, None, front.bypass, situation, "bypass_nozzle")
        rises = {
            "low_pressure": (front.fan_rise, front.entry.total_temperature),
            "high_pressure": (flow.rise, front.core_entry.total_temperature),
        }
        return Flowpath(
            stations={
                "2": front.entry,
                "21": front.hub,
                "25": front.core_entry,
                "3": flow.delivery,
                "4": flow.combustor_exit,
                "41": flow.rotor_entry,
                "44": flow.rotor_exit,
                "45": flow.turbine_exit,
                "5": last,
                "7": inner.nozzle_entry,
                "13": front.bypass,
                "17": outer.nozzle_entry,
            },
            jets={
                "9": (inner.nozzle_entry, inner.jet),
                "19": (outer.nozzle_entry, outer.jet),
            },
            areas={
                "high_pressure_turbine": flow.turbine_area,
                "low_pressure_turbine": turbine.area,
                "core_nozzle": inner.jet.throat_area,
                "bypass_nozzle": outer.jet.throat_area,
            },
            flows={**front.flows, **flow.flows, **inner.flows, **outer.flows},
            loadings={**flow.loadings, **turbine.loadings},
            limits=core_limits(flow.combustor_exit, flow.delivery, rises, situation.sizing),
            shaft_power=situation.taken.shaft_power + np.zeros_like(flow.rise),
            bleed=flow.bleed,
            mechanical_loss=flow.mechanical_loss + turbine.mechanical_loss,
            unburnt_fuel=flow.unburnt_fuel,
            fuel_flow=flow.fuel_flow,
            spool_rises=rises,
            work_ratios=front.work_ratios,
        )
