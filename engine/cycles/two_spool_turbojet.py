"""Straight jet with two spools: a low-pressure and a high-pressure compressor, each with a turbine.

Unknowns: both pressure ratios, turbine entry temperature over engine-face temperature, corrected
airflow. Held from the design point: flow capacity of both turbines and the nozzle throat.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from engine.cycles.core import Core
from engine.cycles.exhaust import let_out
from engine.cycles.flowpath import Flowpath, corrected_flow_factor
from engine.cycles.low_spool import LowSpool
from engine.cycles.situation import Situation
from engine.cycles.two_spools import join_spools, run_spools
from engine.fuels import Fuel
from engine.gas import Gas
from engine.installation.drag import Installation
from engine.parts.afterburner import Afterburner
from engine.parts.inlet import Inlet
from engine.parts.nozzle import Nozzle
from engine.parts.stream import Array, Stream


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
        low_ratio, core_ratio, temperature_ratio, airflow = np.exp(unknowns)
        spools = run_spools(
            self.gas,
            self.low_spool,
            self.core,
            low_ratio,
            np.zeros_like(airflow),
            core_ratio,
            temperature_ratio,
            airflow,
            situation,
        )
        exhaust = let_out(self.gas, self.exhaust_nozzle, self.afterburner, spools.last, situation)
        return join_spools(
            spools,
            situation,
            stations={"7": exhaust.nozzle_entry},
            jets={"9": (exhaust.nozzle_entry, exhaust.jet)},
            areas={"core_nozzle": exhaust.jet.throat_area},
            flows=exhaust.flows,
        )
