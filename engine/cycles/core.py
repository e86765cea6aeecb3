"""The gas generator that every arrangement shares: compressor, combustor, cooled turbine."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from engine.cycles.situation import Situation
from engine.gas import Gas
from engine.parts.combustor import Combustor, air_loading, burn, pass_unlit, relative_loading
from engine.parts.compressor import compress
from engine.parts.efficiency import Efficiency, shaft_drag
from engine.parts.stream import Array, Stream, mix_in
from engine.parts.turbine import corrected_flow_area, expand_by_power, flow_share


@dataclass(frozen=True)
class Core:
    """High-pressure spool, from compressor entry to turbine exit.

    Attributes
    ----------
    compressor_efficiency, turbine_efficiency : of the high-pressure spool
    vane_cooling_fraction : of compressor entry flow, joins ahead of the rotor (station 41)
    rotor_cooling_fraction : of compressor entry flow, joins behind the turbine
    downstream_cooling_fraction : of compressor entry flow, joins behind the last turbine
    rotor_cooling_rise, downstream_cooling_rise : share of the compressor's rise of enthalpy at
        which that air is taken; 1 at delivery
    mechanical_efficiency : of the spool at the design point
    turbine_critical_pressure_ratio : below this exit-to-entry ratio the turbine is choked
    """

    compressor_efficiency: Efficiency
    turbine_efficiency: Efficiency
    combustor: Combustor
    vane_cooling_fraction: float = 0.0
    rotor_cooling_fraction: float = 0.0
    downstream_cooling_fraction: float = 0.0
    rotor_cooling_rise: float = 1.0
    downstream_cooling_rise: float = 1.0
    mechanical_efficiency: float = 1.0
    turbine_critical_pressure_ratio: float = 0.5


@dataclass(frozen=True)
class CoreFlow:
    """Streams and powers of the gas generator at work.

    ``turbine_area`` [m2] is the choked throat its turbine would need; ``rise`` the specific work
    [J/kg] of the compressor; powers in W; ``flows`` and ``loadings`` as in a Flowpath.
    """

    delivery: Stream
    bleed: Stream
    combustor_exit: Stream
    rotor_entry: Stream
    rotor_exit: Stream
    turbine_exit: Stream
    downstream_cooling: Stream
    turbine_area: Array
    rise: Array
    mechanical_loss: Array
    unburnt_fuel: Array
    fuel_flow: Array
    flows: dict[str, Array]
    loadings: dict[str, Array]


def run_core(
    gas: Gas,
    core: Core,
    entry: Stream,
    pressure_ratio: Array,
    turbine_entry_temperature: Array,
    situation: Situation,
) -> CoreFlow:
    """The gas generator between its entry and the turbine exit; an unlit one takes no fuel.

    ``pressure_ratio`` is of the compressor, ``turbine_entry_temperature`` [K] total, at station 4;
    arrays of one shape.
    """
    flow_ratio = situation.flow_ratio("high_pressure_compressor", entry.duct_flow)
    efficiency = core.compressor_efficiency.of_compressor(flow_ratio)
    delivery = compress(gas, entry, pressure_ratio, efficiency)
    flow, rise = entry.mass_flow, delivery.enthalpy - entry.enthalpy
    bleed = delivery.with_flow(situation.taken.customer_bleed_fraction * flow)
    vane_air = delivery.with_flow(core.vane_cooling_fraction * flow)
    rotor_air, rotor_saved = _tap(
        delivery, rise, core.rotor_cooling_fraction * flow, core.rotor_cooling_rise
    )
    last_air, last_saved = _tap(
        delivery, rise, core.downstream_cooling_fraction * flow, core.downstream_cooling_rise
    )
    taken = bleed.mass_flow + vane_air.mass_flow + rotor_air.mass_flow + last_air.mass_flow
    burner_air = delivery.with_flow(flow - taken)
    loading = air_loading(burner_air)
    hot, unburnt = _heat(gas, core, burner_air, turbine_entry_temperature, loading, situation)

    rotor_entry = mix_in(gas, hot, vane_air) if core.vane_cooling_fraction else hot
    delivered = flow * rise - rotor_saved - last_saved + situation.taken.shaft_power
    turbine_power = delivered + shaft_drag(
        delivered,
        core.mechanical_efficiency,
        core.turbine_efficiency.falls_off and situation.is_lit,
        flow_ratio,
    )
    speed_over_work = rise * rotor_entry.mass_flow / turbine_power
    rotor_exit, area = _expand(gas, core, rotor_entry, turbine_power, speed_over_work, situation)
    turbine_exit = mix_in(gas, rotor_exit, rotor_air) if core.rotor_cooling_fraction else rotor_exit
    return CoreFlow(
        delivery=delivery,
        bleed=bleed,
        combustor_exit=hot,
        rotor_entry=rotor_entry,
        rotor_exit=rotor_exit,
        turbine_exit=turbine_exit,
        downstream_cooling=last_air,
        turbine_area=area,
        rise=rise,
        mechanical_loss=turbine_power - delivered,
        unburnt_fuel=unburnt,
        fuel_flow=hot.mass_flow - burner_air.mass_flow,
        flows={
            "high_pressure_compressor": entry.duct_flow,
            "combustor": burner_air.duct_flow,
            "combustor_loading": loading,
        },
        loadings={"high_pressure_turbine": speed_over_work},
    )


def _expand(
    gas: Gas,
    core: Core,
    entry: Stream,
    power: Array,
    speed_over_work: Array,
    situation: Situation,
) -> tuple[Stream, Array]:
    """The rotor's exit at the power [W] of its turbine, and the choked throat [m2] it would need.

    ``speed_over_work`` [kg/J] is its loading, with which efficiency goes away from design.
    """
    efficiency = core.turbine_efficiency.of_turbine(
        situation.loading_ratio("high_pressure_turbine", speed_over_work)
    )
    leaves = expand_by_power(gas, entry, power, efficiency)
    share = flow_share(
        leaves.total_pressure / entry.total_pressure, core.turbine_critical_pressure_ratio
    )
    return leaves, corrected_flow_area(gas, entry) / share


def behind_last_turbine(gas: Gas, core: Core, leaves: Stream, flow: CoreFlow) -> Stream:
    """What leaves the last turbine, with the cooling air that joins behind it."""
    if not core.downstream_cooling_fraction:
        return leaves
    return mix_in(gas, leaves, flow.downstream_cooling)


def _tap(delivery: Stream, rise: Array, flow: Array, share: float) -> tuple[Stream, Array]:
    """Cooling air taken at a share of the compressor's rise, and the power that this saves [W].

    Only its flow and enthalpy count where it joins; its temperature stays that of delivery.
    """
    air = delivery.with_flow(flow)
    if share == 1.0:
        return air, np.zeros_like(rise)
    unspent = (1.0 - share) * rise
    return replace(air, enthalpy=delivery.enthalpy - unspent), flow * unspent


def _heat(
    gas: Gas,
    core: Core,
    air: Stream,
    temperature: Array,
    loading: Array,
    situation: Situation,
) -> tuple[Stream, Array]:
    """The stream behind the combustor, and the heat of what did not burn [W]."""
    combustor = core.combustor
    if not situation.is_lit:
        loss = situation.duct_loss("combustor", combustor.pressure_loss_fraction, air)
        return pass_unlit(gas, loss, air), np.zeros_like(air.mass_flow)
    efficiency = np.asarray(combustor.efficiency)
    if situation.sizing is not None:
        design = situation.sizing.flows
        efficiency = combustor.efficiency_at(
            relative_loading(loading, design["combustor"]),
            float(relative_loading(design["combustor_loading"], design["combustor"])),
        )
    hot = burn(gas, combustor, air, temperature, efficiency)
    fuel_flow = hot.mass_flow - air.mass_flow
    return hot, fuel_flow * combustor.lower_heating_value * (1.0 - efficiency)
