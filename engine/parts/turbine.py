"""Turbines: power drawn to temperature and pressure drop and back, and the flow they can swallow.

Flow capacity follows Stodola's ellipse; with a critical pressure ratio it is the law of a single
choking row: constant where the exit pressure is below it. Source: A. Stodola, Steam and Gas
Turbines, 1927; D. H. Cooke, "On Prediction of Off-Design Multistage Turbine Pressures by
Stodola's Ellipse", J. Eng. Gas Turbines and Power 107, 1985 (both from memory).
"""

from __future__ import annotations

import numpy as np

from engine.gas import Gas
from engine.parts.efficiency import Efficiency
from engine.parts.stream import Array, Stream, signed_root


def expand_by_power(gas: Gas, stream: Stream, power: Array, efficiency: Efficiency) -> Stream:
    """The stream after a turbine has drawn ``power`` [W] from it."""
    f, section = stream.fuel_air_ratio, stream.section
    drop = power / stream.mass_flow
    enthalpy = stream.enthalpy - drop
    cp = gas.heat_capacity(stream.total_temperature, f, section)
    guess = np.maximum(stream.total_temperature - drop / cp, 0.2 * stream.total_temperature)
    temperature = gas.temperature_from_enthalpy(enthalpy, f, section, guess=guess)
    entropy_in = gas.entropy(stream.total_temperature, f, section)
    if efficiency.kind == "polytropic":
        change = (gas.entropy(temperature, f, section) - entropy_in) / efficiency.value
    else:
        ideal_enthalpy = stream.enthalpy - drop / efficiency.value
        ideal = gas.temperature_from_enthalpy(ideal_enthalpy, f, section, guess=temperature)
        change = gas.entropy(ideal, f, section) - entropy_in
    pressure = stream.total_pressure * np.exp(change / gas.gas_constant(f, section))
    return Stream(temperature, pressure, stream.mass_flow, f, enthalpy, section)


def expand_by_pressure(
    gas: Gas, stream: Stream, exit_to_entry_pressure: Array, efficiency: Efficiency
) -> Stream:
    """The stream after a turbine that takes its total pressure down by a ratio."""
    f, section = stream.fuel_air_ratio, stream.section
    entropy_in = gas.entropy(stream.total_temperature, f, section)
    ideal_change = gas.gas_constant(f, section) * np.log(exit_to_entry_pressure)
    guess = stream.total_temperature * exit_to_entry_pressure ** (0.25 * efficiency.value)
    if efficiency.kind == "polytropic":
        entropy_out = entropy_in + efficiency.value * ideal_change
        temperature = gas.temperature_from_entropy(entropy_out, f, section, guess=guess)
        enthalpy = gas.enthalpy(temperature, f, section)
    else:
        ideal = gas.temperature_from_entropy(entropy_in + ideal_change, f, section, guess=guess)
        drop = efficiency.value * (stream.enthalpy - gas.enthalpy(ideal, f, section))
        enthalpy = stream.enthalpy - drop
        temperature = gas.temperature_from_enthalpy(enthalpy, f, section, guess=guess)
    pressure = stream.total_pressure * exit_to_entry_pressure
    return Stream(temperature, pressure, stream.mass_flow, f, enthalpy, section)


def corrected_flow_area(gas: Gas, stream: Stream) -> Array:
    """Area [m2] of the choked throat that would just pass the stream.

    ``W sqrt(R T) / (p Gamma)``, with ``Gamma`` from the ratio of heat capacities at ``T``.
    """
    f, section = stream.fuel_air_ratio, stream.section
    gas_constant = gas.gas_constant(f, section)
    cp = gas.heat_capacity(stream.total_temperature, f, section)
    gamma = cp / (cp - gas_constant)
    vacuum = np.sqrt(gamma) * (2.0 / (gamma + 1.0)) ** ((gamma + 1.0) / (2.0 * (gamma - 1.0)))
    root = np.sqrt(gas_constant * stream.total_temperature)
    return stream.mass_flow * root / (stream.total_pressure * vacuum)


def flow_share(exit_to_entry_pressure: Array, critical_ratio: float) -> Array:
    """Share of its choked flow that a turbine passes at a ratio of total pressures.

    Negative where the exit pressure is above the entry's, which only an iteration visits.
    ``critical_ratio`` 0 is Stodola's ellipse for many rows; 0.5 about one choking row.
    """
    beyond = np.maximum(exit_to_entry_pressure - critical_ratio, 0.0) / (1.0 - critical_ratio)
    return signed_root(1.0 - beyond**2)
