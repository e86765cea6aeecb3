"""Straight jet with two spools: a low-pressure and a high-pressure compressor, each with a turbine.

Unknowns: both pressure ratios, turbine entry temperature over engine-face temperature, corrected
airflow. Held from the design point: flow capacity of both turbines and the nozzle throat.
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
from engine.parts.afterburner import Afterburner
from engine.parts.inlet import Inlet
from engine.parts.nozzle import Nozzle
from engine.parts.stream import Array, Stream, mix_in


@dataclass(frozen=True)
class TwoSpoolTurbojet:
    """A two-spool straight jet and its design point; its low spool has no bypass to feed."""

    gas: Gas
    fuel: Fuel
    inlet: Inlet
    low_spool: LowSpool
    core: Core
    exhaust_nozzle: Nozzle
    low_pressure_compressor_pressure_ratio: float
    high_pressure_compressor_pressure_ratio: float
    turbine_entry_temperature: float
    afterburner: Afterburner | None = None
    installation: Installation | None = None
    unknown_names: tuple[str, ...] = (
        "low_pressure_compressor_pressure_ratio",
        "high_pressure_compressor_pressure_ratio",
        "turbine_entry_temperature_ratio",
        "corrected_core_airflow",
    )

    def design_unknowns(self, face: Stream) -> Array:
        return np.log(
            [
                self.low_pressure_compressor_pressure_ratio,
                self.high_pressure_compressor_pressure_ratio,
                self.turbine_entry_temperature / float(face.total_temperature),
                1.0 / float(corrected_flow_factor(face)),
            ]
        )

    def evaluate(self, unknowns: Array, situation: Situation) -> Flowpath:
        gas, low, core, face = self.gas, self.low_spool, self.core, situation.face
        low_ratio, core_ratio, temperature_ratio, airflow = np.exp(unknowns)
        core_flow = airflow * corrected_flow_factor(face)
        front = run_front(gas, low, core_flow, low_ratio, np.zeros_like(core_flow), situation)
        hot = temperature_ratio * face.total_temperature
        flow = run_core(gas, core, front.core_entry, core_ratio, hot, situation)
        turbine = drive(gas, low, flow, front, situation)
        last = turbine.exit
        if core.downstream_cooling_fraction:
            last = mix_in(gas, last, flow.downstream_cooling)
        exhaust = let_out(gas, self.exhaust_nozzle, self.afterburner, last, situation)
        rises = {
            "low_pressure": (front.fan_rise, front.entry.total_temperature),
            "high_pressure": (flow.rise, front.core_entry.total_temperature),
        }
        return Flowpath(
            stations={
                "2": front.entry,
                "25": front.core_entry,
                "3": flow.delivery,
                "4": flow.combustor_exit,
                "41": flow.rotor_entry,
                "44": flow.rotor_exit,
                "45": flow.turbine_exit,
                "5": last,
                "7": exhaust.nozzle_entry,
            },
            jets={"9": (exhaust.nozzle_entry, exhaust.jet)},
            areas={
                "high_pressure_turbine": flow.turbine_area,
                "low_pressure_turbine": turbine.area,
                "core_nozzle": exhaust.jet.throat_area,
            },
            flows={**front.flows, **flow.flows, **exhaust.flows},
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
