"""What engines with a low- and a high-pressure spool share, however their streams leave."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np

from engine.cycles.core import Core, CoreFlow, behind_last_turbine, run_core
from engine.cycles.flowpath import Flowpath, core_limits, corrected_flow_factor
from engine.cycles.low_spool import FrontFlow, LowSpool, LowTurbine, drive, run_front
from engine.cycles.situation import Situation
from engine.gas import Gas
from engine.parts.nozzle import Jet
from engine.parts.stream import Array, Stream


@dataclass(frozen=True)
class TwoSpools:
    """Both spools at work; ``last`` is the stream behind the last turbine and its cooling air."""

    front: FrontFlow
    core: CoreFlow
    turbine: LowTurbine
    last: Stream


def run_spools(
    gas: Gas,
    low: LowSpool,
    core: Core,
    fan_pressure_ratio: Array,
    bypass_ratio: Array,
    core_pressure_ratio: Array,
    temperature_ratio: Array,
    corrected_airflow: Array,
    situation: Situation,
) -> TwoSpools:
    """Both spools at their unknowns; of a straight jet the fan is the first compressor.

    ``temperature_ratio`` is turbine entry over engine-face temperature, ``corrected_airflow``
    [kg/s] that of the core at the engine face.
    """
    face = situation.face
    core_flow = corrected_airflow * corrected_flow_factor(face)
    front = run_front(gas, low, core_flow, fan_pressure_ratio, bypass_ratio, situation)
    hot = temperature_ratio * face.total_temperature
    flow = run_core(gas, core, front.core_entry, core_pressure_ratio, hot, situation)
    turbine = drive(gas, low, flow, front, situation)
    return TwoSpools(front, flow, turbine, behind_last_turbine(gas, core, turbine.exit, flow))


def join_spools(
    spools: TwoSpools,
    situation: Situation,
    *,
    stations: Mapping[str, Stream],
    jets: Mapping[str, tuple[Stream, Jet]],
    areas: Mapping[str, Array],
    flows: Mapping[str, Array],
    loadings: Mapping[str, Array] | None = None,
) -> Flowpath:
    """The whole engine, from both spools and what an arrangement has besides them.

    Each mapping is as in a :class:`Flowpath`, by the names of what is not of the spools.
    """
    front, flow, turbine = spools.front, spools.core, spools.turbine
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
            "5": spools.last,
            **stations,
        },
        jets=jets,
        areas={
            "high_pressure_turbine": flow.turbine_area,
            "low_pressure_turbine": turbine.area,
            **areas,
        },
        flows={**front.flows, **flow.flows, **flows},
        loadings={**flow.loadings, **turbine.loadings, **(loadings or {})},
        limits=core_limits(flow.combustor_exit, flow.delivery, rises, situation.sizing),
        shaft_power=situation.taken.shaft_power + np.zeros_like(flow.rise),
        bleed=flow.bleed,
        mechanical_loss=flow.mechanical_loss + turbine.mechanical_loss,
        unburnt_fuel=flow.unburnt_fuel,
        fuel_flow=flow.fuel_flow,
        spool_rises=rises,
        work_ratios=front.work_ratios,
    )
