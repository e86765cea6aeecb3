"""Straight jet: one spool, one nozzle.

Unknowns: compressor pressure ratio, turbine entry temperature over engine-face temperature,
corrected airflow. What is held from the design point: the turbine's flow capacity and the nozzle
throat.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from engine.cycles.core import Core, run_core, unlit_loss
from engine.cycles.flowpath import Flowpath, Sizing, corrected_flow_factor, spool_speeds
from engine.fuels import Fuel
from engine.gas import Gas
from engine.parts.inlet import Inlet
from engine.parts.nozzle import Nozzle, discharge
from engine.parts.stream import Array, Stream, mix_in


@dataclass(frozen=True)
class Turbojet:
    """A straight jet and its design point."""

    gas: Gas
    fuel: Fuel
    inlet: Inlet
    core: Core
    nozzle: Nozzle
    pressure_ratio: float
    turbine_entry_temperature: float
    unknown_names: tuple[str, ...] = (
        "compressor_pressure_ratio",
        "turbine_entry_temperature_ratio",
        "corrected_core_airflow",
    )

    def design_unknowns(self, face: Stream) -> Array:
        airflow = 1.0 / float(corrected_flow_factor(face))
        temperature = self.turbine_entry_temperature / float(face.total_temperature)
        return np.log([self.pressure_ratio, temperature, airflow])

    def evaluate(
        self,
        unknowns: Array,
        face: Stream,
        ambient_pressure: Array,
        sizing: Sizing | None,
        *,
        is_lit: bool,
    ) -> Flowpath:
        gas, core = self.gas, self.core
        pressure_ratio, temperature_ratio, airflow = np.exp(unknowns)
        entry = face.with_flow(airflow * corrected_flow_factor(face))
        hot = temperature_ratio * face.total_temperature if is_lit else None
        design = {} if is_lit or sizing is None else sizing.duct_flows
        flow = run_core(
            gas, core, entry, pressure_ratio, hot, design_combustor_flow=design.get("combustor")
        )
        last = flow.turbine_exit
        if core.downstream_cooling_fraction:
            last = mix_in(gas, last, flow.downstream_cooling)
        ahead_of_nozzle = last.with_pressure_loss(
            unlit_loss(self.nozzle.pressure_loss_fraction, last, design.get("core_nozzle"))
        )
        jet = discharge(gas, self.nozzle, ahead_of_nozzle, ambient_pressure)
        rises = {"high_pressure": (flow.rise, entry.total_temperature)}
        corrected, physical = spool_speeds(rises, "high_pressure", sizing)
        hot_stream = flow.combustor_exit
        limits = np.stack(
            np.broadcast_arrays(
                hot_stream.total_temperature,
                flow.delivery.total_temperature,
                flow.delivery.total_pressure,
                corrected,
                physical,
                corrected,
                physical,
                hot_stream.fuel_air_ratio,
            )
        )
        stations = {
            "2": entry,
            "3": flow.delivery,
            "4": hot_stream,
            "41": flow.rotor_entry,
            "5": last,
            "7": ahead_of_nozzle,
        }
        return Flowpath(
            stations=stations,
            jets={"9": (ahead_of_nozzle, jet)},
            areas={"turbine": flow.turbine_area, "core_nozzle": jet.throat_area},
            duct_flows={"combustor": flow.combustor_entry.duct_flow, "core_nozzle": last.duct_flow},
            limits=limits,
            shaft_power=np.full_like(flow.rise, core.shaft_power),
            bleed=flow.bleed,
            mechanical_loss=flow.turbine_power - flow.compressor_power - core.shaft_power,
            fuel_flow=flow.fuel_flow,
            spool_rises=rises,
        )
