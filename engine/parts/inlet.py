"""Inlet: free stream brought to the engine face; total enthalpy stays, total pressure is lost."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from engine.atmosphere import FlightCondition
from engine.gas import Gas
from engine.parts.stream import Array, Stream


@dataclass(frozen=True)
class Inlet:
    """How much of the ram pressure reaches the engine face.

    ``total_pressure_recovery`` is the subsonic recovery; above Mach 1 it is multiplied by the
    standard ram recovery where ``has_standard_ram_recovery``. With ``isentropic_efficiency``
    given, it alone sets the pressure, on the rise of enthalpy from free stream.
    """

    total_pressure_recovery: float = 1.0
    has_standard_ram_recovery: bool = False
    isentropic_efficiency: float | None = None


def standard_ram_recovery(mach: Array) -> Array:
    """Total pressure recovery of a supersonic inlet after MIL-E-5008B; 1 up to Mach 1.

    Source: MIL-E-5008B, as given in Mattingly, Heiser and Pratt, Aircraft Engine Design, 2nd ed.
    """
    above = np.maximum(mach - 1.0, 0.0)
    return np.where(mach < 5.0, 1.0 - 0.075 * above**1.35, 800.0 / (mach**4 + 935.0))


def free_stream(gas: Gas, flight: FlightCondition) -> Stream:
    """Station 0: total state of the undisturbed air, for a flow of 1 kg/s."""
    static_temperature = flight.static_temperature
    static_enthalpy = gas.enthalpy(static_temperature, 0.0, "cold")
    enthalpy = static_enthalpy + 0.5 * flight.true_airspeed**2
    total_temperature = gas.temperature_from_enthalpy(
        enthalpy, 0.0, "cold", guess=static_temperature * (1.0 + 0.2 * flight.mach**2)
    )
    rise = gas.entropy(total_temperature, 0.0, "cold") - gas.entropy(
        static_temperature, 0.0, "cold"
    )
    pressure = flight.static_pressure * np.exp(rise / gas.gas_constant(0.0, "cold"))
    one = np.ones_like(pressure)
    return Stream(total_temperature, pressure, one, 0.0 * one, enthalpy)


def take_in(gas: Gas, inlet: Inlet, flight: FlightCondition) -> tuple[Stream, Stream]:
    """Stations 0 and 2 for a flow of 1 kg/s."""
    ahead = free_stream(gas, flight)
    if inlet.isentropic_efficiency is not None:
        static_temperature = flight.static_temperature
        static_enthalpy = gas.enthalpy(static_temperature, 0.0, "cold")
        ideal = static_enthalpy + inlet.isentropic_efficiency * (ahead.enthalpy - static_enthalpy)
        reached = gas.temperature_from_enthalpy(ideal, 0.0, "cold", guess=static_temperature)
        rise = gas.entropy(reached, 0.0, "cold") - gas.entropy(static_temperature, 0.0, "cold")
        pressure = flight.static_pressure * np.exp(rise / gas.gas_constant(0.0, "cold"))
    else:
        recovery = inlet.total_pressure_recovery
        pressure = ahead.total_pressure * recovery
        if inlet.has_standard_ram_recovery:
            pressure = pressure * standard_ram_recovery(flight.mach)
    face = Stream(
        ahead.total_temperature,
        pressure,
        ahead.mass_flow,
        ahead.fuel_air_ratio,
        ahead.enthalpy,
    )
    return ahead, face
