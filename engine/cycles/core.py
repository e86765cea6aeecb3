"""The gas generator that every arrangement shares: compressor, combustor, cooled turbine."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from engine.gas import Gas
from engine.parts.combustor import Combustor, burn, pass_unlit
from engine.parts.compressor import compress
from engine.parts.efficiency import Efficiency
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
    customer_bleed_fraction : of compressor entry flow, taken at compressor delivery
    shaft_power : taken off the spool [W]
    mechanical_efficiency : of the spool
    turbine_critical_pressure_ratio : below this exit-to-entry ratio the turbine is choked
    """

    compressor_efficiency: Efficiency
    turbine_efficiency: Efficiency
    combustor: Combustor
    vane_cooling_fraction: float = 0.0
    rotor_cooling_fraction: float = 0.0
    downstream_cooling_fraction: float = 0.0
    customer_bleed_fraction: float = 0.0
    shaft_power: float = 0.0
    mechanical_efficiency: float = 1.0
    turbine_critical_pressure_ratio: float = 0.5


@dataclass(frozen=True)
class CoreFlow:
    """Streams and powers of the gas generator at work.

    ``turbine_area`` [m2] is the choked throat its turbine would need; ``rise`` the specific work
    [J/kg] of the compressor; powers in W.
    """

    delivery: Stream
    bleed: Stream
    combustor_entry: Stream
    combustor_exit: Stream
    rotor_entry: Stream
    rotor_exit: Stream
    turbine_exit: Stream
    downstream_cooling: Stream
    turbine_area: Array
    rise: Array
    turbine_power: Array
    compressor_power: Array
    fuel_flow: Array


def unlit_loss(design_loss: float, stream: Stream, design_flow: float | None) -> Array:
    """Share of total pressure [-] that a duct takes from a stream in an engine that is out.

    A lit engine keeps nearly the same corrected flow in its ducts and so the share of its design
    point; windmilling has a fraction of it, and the share goes with its square, as friction does
    (common practice, no source). Held at 0.9 at most, for iterates far from an answer.
    """
    if design_flow is None:
        return np.asarray(design_loss)
    return np.minimum(design_loss * (stream.duct_flow / design_flow) ** 2, 0.9)


def run_core(
    gas: Gas,
    core: Core,
    entry: Stream,
    pressure_ratio: Array,
    turbine_entry_temperature: Array | None,
    *,
    design_combustor_flow: float | None = None,
) -> CoreFlow:
    """The gas generator between its entry and the turbine exit; unlit where no temperature.

    ``design_combustor_flow`` is what :func:`unlit_loss` compares with; only an unlit engine asks.
    """
    delivery = compress(gas, entry, pressure_ratio, core.compressor_efficiency)
    flow = entry.mass_flow
    bleed = delivery.with_flow(core.customer_bleed_fraction * flow)
    vane_air = delivery.with_flow(core.vane_cooling_fraction * flow)
    rotor_air = delivery.with_flow(core.rotor_cooling_fraction * flow)
    last_air = delivery.with_flow(core.downstream_cooling_fraction * flow)
    taken = bleed.mass_flow + vane_air.mass_flow + rotor_air.mass_flow + last_air.mass_flow
    burner_air = delivery.with_flow(flow - taken)
    if turbine_entry_temperature is None:
        design_loss = core.combustor.pressure_loss_fraction
        hot = pass_unlit(
            gas, unlit_loss(design_loss, burner_air, design_combustor_flow), burner_air
        )
    else:
        hot = burn(gas, core.combustor, burner_air, turbine_entry_temperature)
    rotor_entry = mix_in(gas, hot, vane_air) if core.vane_cooling_fraction else hot
    rise = delivery.enthalpy - entry.enthalpy
    compressor_power = flow * rise
    turbine_power = (compressor_power + core.shaft_power) / core.mechanical_efficiency
    rotor_exit = expand_by_power(gas, rotor_entry, turbine_power, core.turbine_efficiency)
    share = flow_share(
        rotor_exit.total_pressure / rotor_entry.total_pressure,
        core.turbine_critical_pressure_ratio,
    )
    turbine_exit = mix_in(gas, rotor_exit, rotor_air) if core.rotor_cooling_fraction else rotor_exit
    return CoreFlow(
        delivery=delivery,
        bleed=bleed,
        combustor_entry=burner_air,
        combustor_exit=hot,
        rotor_entry=rotor_entry,
        rotor_exit=rotor_exit,
        turbine_exit=turbine_exit,
        downstream_cooling=last_air,
        turbine_area=corrected_flow_area(gas, rotor_entry) / share,
        rise=rise,
        turbine_power=turbine_power,
        compressor_power=compressor_power,
        fuel_flow=hot.mass_flow - burner_air.mass_flow,
    )
