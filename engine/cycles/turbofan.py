"""Turbofan with separate exhausts: two spools, a fan with or without booster, direct or geared.

Unknowns: fan pressure ratio, bypass ratio, high-pressure-compressor pressure ratio, turbine entry
temperature over engine-face temperature, corrected core airflow. Held from the design point: flow
capacity of both turbines and both nozzle throats.
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
from engine.parts.inlet import Inlet
from engine.parts.nozzle import Nozzle
from engine.parts.stream import Array, Stream


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
        fan_ratio, bypass_ratio, core_ratio, temperature_ratio, airflow = np.exp(unknowns)
        spools = run_spools(
            self.gas,
            self.low_spool,
            self.core,
            fan_ratio,
            bypass_ratio,
            core_ratio,
            temperature_ratio,
            airflow,
            situation,
        )
        bypass = spools.front.bypass
        inner = let_out(self.gas, self.exhaust_nozzle, None, spools.last, situation)
        outer = let_out(self.gas, self.bypass_nozzle, None, bypass, situation, "bypass_nozzle")
        return join_spools(
            spools,
            situation,
            stations={
                "21": spools.front.hub,
                "7": inner.nozzle_entry,
                "13": bypass,
                "17": outer.nozzle_entry,
            },
            jets={
                "9": (inner.nozzle_entry, inner.jet),
                "19": (outer.nozzle_entry, outer.jet),
            },
            areas={
                "core_nozzle": inner.jet.throat_area,
                "bypass_nozzle": outer.jet.throat_area,
            },
            flows={**inner.flows, **outer.flows},
        )
