"""Straight jet with one spool: inlet, compressor, combustor, turbine, afterburner or none, nozzle.

Unknowns: compressor pressure ratio, turbine entry temperature over engine-face temperature,
corrected airflow. Held from the design point: flow capacity of the turbine and the nozzle throat.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from engine.cycles.core import Core, behind_last_turbine, run_core
from engine.cycles.exhaust import let_out
from engine.cycles.flowpath import Flowpath, core_limits, corrected_flow_factor
from engine.cycles.situation import Situation
from engine.fuels import Fuel
from engine.gas import Gas
from engine.installation.drag import Installation
from engine.parts.afterburner import Afterburner
from engine.parts.inlet import Inlet
from engine.parts.nozzle import Nozzle
from engine.parts.stream import Array, Stream


@dataclass(frozen=True)
class Turbojet:
    """A straight jet and its design point."""

    gas: Gas
    fuel: Fuel
    inlet: Inlet
    core: Core
    exhaust_nozzle: Nozzle
    pressure_ratio: float
    turbine_entry_temperature: float
    afterburner: Afterburner | None = None
    installation: Installation | None = None
    unknown_names: tuple[str, ...] = (
        "compressor_pressure_ratio",
        "turbine_entry_temperature_ratio",
        "corrected_core_airflow",
    )

    def design_unknowns(self, face: Stream) -> Array:
        airflow = 1.0 / float(corrected_flow_factor(face))
        temperature = self.turbine_entry_temperature / float(face.total_temperature)
        return np.log([self.pressure_ratio, temperature, airflow])

    def evaluate(self, unknowns: Array, situation: Situation) -> Flowpath:
        gas, face = self.gas, situation.face
        pressure_ratio, temperature_ratio, airflow = np.exp(unknowns)
        entry = face.with_flow(airflow * corrected_flow_factor(face))
        hot = temperature_ratio * face.total_temperature
        flow = run_core(gas, self.core, entry, pressure_ratio, hot, situation)
        last = behind_last_turbine(gas, self.core, flow.turbine_exit, flow)
        exhaust = let_out(gas, self.exhaust_nozzle, self.afterburner, last, situation)
        rises = {"high_pressure": (flow.rise, entry.total_temperature)}
        stations = {
            "2": entry,
            "3": flow.delivery,
            "4": flow.combustor_exit,
            "41": flow.rotor_entry,
            "5": last,
            "7": exhaust.nozzle_entry,
        }
        return Flowpath(
            stations=stations,
            jets={"9": (exhaust.nozzle_entry, exhaust.jet)},
            areas={"turbine": flow.turbine_area, "core_nozzle": exhaust.jet.throat_area},
            flows={**flow.flows, **exhaust.flows},
            loadings=flow.loadings,
            limits=core_limits(flow.combustor_exit, flow.delivery, rises, situation.sizing),
            shaft_power=situation.taken.shaft_power + np.zeros_like(flow.rise),
            bleed=flow.bleed,
            mechanical_loss=flow.mechanical_loss,
            unburnt_fuel=flow.unburnt_fuel,
            fuel_flow=flow.fuel_flow,
            spool_rises=rises,
        )
