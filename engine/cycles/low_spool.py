"""The low-pressure spool that turbofans share: fan, booster or none, and their turbine.

The fan's core side may have a pressure ratio and an efficiency of its own. Core side and booster
turn with the fan, so away from the design point their specific work keeps its ratio to the fan's.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from engine.cycles.core import CoreFlow
from engine.cycles.situation import Situation
from engine.gas import Gas
from engine.parts.compressor import compress, compress_by_work
from engine.parts.efficiency import Efficiency, shaft_drag
from engine.parts.stream import Array, Stream
from engine.parts.turbine import corrected_flow_area, expand_by_power, flow_share


@dataclass(frozen=True)
class LowSpool:
    """Fan, booster and the turbine that drives them.

    ``gearbox_efficiency`` is between turbine and fan only; 1 for a direct drive. Without
    ``hub_efficiency`` the fan does to the core's air what it does to the rest.
    """

    fan_efficiency: Efficiency
    booster_efficiency: Efficiency
    turbine_efficiency: Efficiency
    booster_pressure_ratio: float = 1.0
    hub_efficiency: Efficiency | None = None
    hub_pressure_ratio: float = 1.0
    mechanical_efficiency: float = 1.0
    gearbox_efficiency: float = 1.0


@dataclass(frozen=True)
class FrontFlow:
    """Streams between engine face and core entry; work [J/kg] and powers [W]."""

    entry: Stream
    hub: Stream
    core_entry: Stream
    bypass: Stream
    fan_rise: Array
    fan_power: Array
    booster_power: Array
    flows: dict[str, Array]
    work_ratios: dict[str, Array]


def run_front(
    gas: Gas,
    low: LowSpool,
    core_flow: Array,
    fan_pressure_ratio: Array,
    bypass_ratio: Array,
    situation: Situation,
) -> FrontFlow:
    """Fan and booster at a core airflow [kg/s], a pressure ratio and a bypass ratio; one shape."""
    entry = situation.face.with_flow(core_flow * (1.0 + bypass_ratio))
    flow_ratio = situation.flow_ratio("fan", entry.duct_flow)
    efficiency = low.fan_efficiency.of_compressor(flow_ratio)
    fan_exit = compress(gas, entry, fan_pressure_ratio, efficiency)
    fan_rise = fan_exit.enthalpy - entry.enthalpy
    hub = fan_exit.with_flow(core_flow)
    bypass = fan_exit.with_flow(core_flow * bypass_ratio)
    flows, ratios = {"fan": entry.duct_flow}, {}
    fan_power = entry.mass_flow * fan_rise
    if low.hub_efficiency is not None:
        hub_entry = entry.with_flow(core_flow)
        hub_efficiency = low.hub_efficiency.of_compressor(flow_ratio)
        hub = _turned_with_fan(
            gas, hub_entry, "hub", low.hub_pressure_ratio, hub_efficiency, fan_rise, situation
        )
        ratios["hub"] = (hub.enthalpy - entry.enthalpy) / fan_rise
        fan_power = bypass.mass_flow * fan_rise + core_flow * (hub.enthalpy - entry.enthalpy)
    core_entry = hub
    if low.booster_pressure_ratio != 1.0:
        flows["booster"] = hub.duct_flow
        boost = low.booster_efficiency.of_compressor(situation.flow_ratio("booster", hub.duct_flow))
        core_entry = _turned_with_fan(
            gas, hub, "booster", low.booster_pressure_ratio, boost, fan_rise, situation
        )
        ratios["booster"] = (core_entry.enthalpy - hub.enthalpy) / fan_rise
    return FrontFlow(
        entry=entry,
        hub=hub,
        core_entry=core_entry,
        bypass=bypass,
        fan_rise=fan_rise,
        fan_power=fan_power,
        booster_power=core_flow * (core_entry.enthalpy - hub.enthalpy),
        flows=flows,
        work_ratios=ratios,
    )


def _turned_with_fan(
    gas: Gas,
    stream: Stream,
    part: str,
    pressure_ratio: float,
    efficiency: Efficiency,
    fan_rise: Array,
    situation: Situation,
) -> Stream:
    """A stage on the fan's shaft: by pressure ratio at the design point, by work away from it."""
    if situation.sizing is None:
        return compress(gas, stream, np.asarray(pressure_ratio), efficiency)
    return compress_by_work(gas, stream, situation.sizing.work_ratios[part] * fan_rise, efficiency)


@dataclass(frozen=True)
class LowTurbine:
    """The low-pressure turbine at work: its exit, the area [m2] its flow needs, losses [W]."""

    exit: Stream
    area: Array
    mechanical_loss: Array
    loadings: dict[str, Array]


def drive(
    gas: Gas, low: LowSpool, flow: CoreFlow, front: FrontFlow, situation: Situation
) -> LowTurbine:
    """The turbine that gives fan and booster what they need."""
    entry = flow.turbine_exit
    drive_power = front.fan_power / low.gearbox_efficiency + front.booster_power
    power = drive_power + shaft_drag(
        drive_power,
        low.mechanical_efficiency,
        low.turbine_efficiency.falls_off and situation.is_lit,
        situation.flow_ratio("fan", front.entry.duct_flow),
    )
    speed_over_work = front.fan_rise * entry.mass_flow / power
    efficiency = low.turbine_efficiency.of_turbine(
        situation.loading_ratio("low_pressure_turbine", speed_over_work)
    )
    leaves = expand_by_power(gas, entry, power, efficiency)
    share = flow_share(leaves.total_pressure / entry.total_pressure, 0.0)
    return LowTurbine(
        exit=leaves,
        area=corrected_flow_area(gas, entry) / share,
        mechanical_loss=power - front.fan_power - front.booster_power,
        loadings={"low_pressure_turbine": speed_over_work},
    )
