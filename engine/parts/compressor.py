"""Fans, boosters and compressors: pressure ratio to enthalpy rise, and back.

With entropy as a function of temperature, polytropic efficiency is
``R ln(pressure ratio) / (s(T_out) - s(T_in))``; for constant heat capacity that is the textbooks'
exponent. Source: Saravanamuttoo, Rogers and Cohen, Gas Turbine Theory, chapter 2 (from memory).
"""

from __future__ import annotations

import numpy as np

from engine.gas import Gas
from engine.parts.efficiency import Efficiency
from engine.parts.stream import Array, Stream


def compress(gas: Gas, stream: Stream, pressure_ratio: Array, efficiency: Efficiency) -> Stream:
    """The stream after compression by ``pressure_ratio``."""
    gas_constant = gas.gas_constant(0.0, stream.section)
    entropy_in = gas.entropy(stream.total_temperature, 0.0, stream.section)
    ideal_rise = gas_constant * np.log(pressure_ratio)
    if efficiency.kind == "polytropic":
        entropy_out = entropy_in + ideal_rise / efficiency.value
        guess = stream.total_temperature * pressure_ratio ** (0.285 / efficiency.value)
        temperature = gas.temperature_from_entropy(entropy_out, 0.0, stream.section, guess=guess)
        enthalpy = gas.enthalpy(temperature, 0.0, stream.section)
    else:
        guess = stream.total_temperature * pressure_ratio**0.285
        ideal = gas.temperature_from_entropy(
            entropy_in + ideal_rise, 0.0, stream.section, guess=guess
        )
        ideal_enthalpy = gas.enthalpy(ideal, 0.0, stream.section)
        enthalpy = stream.enthalpy + (ideal_enthalpy - stream.enthalpy) / efficiency.value
        temperature = gas.temperature_from_enthalpy(enthalpy, 0.0, stream.section, guess=ideal)
    pressure = stream.total_pressure * pressure_ratio
    return Stream(
        temperature, pressure, stream.mass_flow, stream.fuel_air_ratio, enthalpy, stream.section
    )


def compress_by_work(
    gas: Gas, stream: Stream, enthalpy_rise: Array, efficiency: Efficiency
) -> Stream:
    """The stream after a given rise of enthalpy [J/kg]; its pressure ratio follows."""
    enthalpy = stream.enthalpy + enthalpy_rise
    cp = gas.heat_capacity(stream.total_temperature, 0.0, stream.section)
    guess = stream.total_temperature + enthalpy_rise / cp
    temperature = gas.temperature_from_enthalpy(enthalpy, 0.0, stream.section, guess=guess)
    entropy_in = gas.entropy(stream.total_temperature, 0.0, stream.section)
    if efficiency.kind == "polytropic":
        reached = gas.entropy(temperature, 0.0, stream.section) - entropy_in
        ideal_rise = efficiency.value * reached
    else:
        ideal = gas.temperature_from_enthalpy(
            stream.enthalpy + efficiency.value * enthalpy_rise, 0.0, stream.section, guess=guess
        )
        ideal_rise = gas.entropy(ideal, 0.0, stream.section) - entropy_in
    pressure_ratio = np.exp(ideal_rise / gas.gas_constant(0.0, stream.section))
    return Stream(
        temperature,
        stream.total_pressure * pressure_ratio,
        stream.mass_flow,
        stream.fuel_air_ratio,
        enthalpy,
        stream.section,
    )
