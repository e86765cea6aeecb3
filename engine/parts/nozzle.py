"""Nozzles: gross thrust of a stream let out to ambient pressure, and the throat it needs.

The critical state is where the stream moves at its own speed of sound. Below it a throat stands
at ambient pressure. In the velocity that makes the thrust the enthalpy drop is softened (a smooth
positive part, of width 1e-4 R T) so that thrust continues smoothly where the nozzle pressure ratio
falls below one; the effect on thrust is below 1e-6 above a nozzle pressure ratio of 1.05. The
throat area takes the drop as it is, with its sign.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

import numpy as np

from engine.gas import Gas
from engine.parts.stream import Array, Stream, signed_root

_SOFTNESS = 1e-4


@dataclass(frozen=True)
class Nozzle:
    """What a nozzle is; the throat area is found by sizing the engine.

    Attributes
    ----------
    kind : convergent; convergent-divergent (expands to ambient pressure); or given exit pressure
    isentropic_efficiency : kinetic energy over its ideal at the same pressures
    gross_thrust_coefficient : gross thrust over that of the nozzle without it
    pressure_loss_fraction : of total pressure, in the duct ahead of the throat
    exit_pressure_ratio : exit static pressure over ambient, for the given kind
    """

    kind: Literal["convergent", "convergent-divergent", "given exit pressure"] = "convergent"
    isentropic_efficiency: float = 1.0
    gross_thrust_coefficient: float = 1.0
    pressure_loss_fraction: float = 0.0
    exit_pressure_ratio: float = 1.0


@dataclass(frozen=True)
class Jet:
    """A nozzle at work.

    Attributes
    ----------
    gross_thrust : [N]
    throat_area : [m2] that the stream needs; negative where it would have to flow backwards
    throat_static_temperature, throat_static_pressure, throat_velocity : [K], [Pa], [m/s]
    exit_static_temperature, exit_static_pressure, exit_velocity : [K], [Pa], [m/s]
    exit_area : [m2]
    choking : total-to-ambient pressure ratio over the critical one, less one; choked above 0
    """

    gross_thrust: Array
    throat_area: Array
    throat_static_temperature: Array
    throat_static_pressure: Array
    throat_velocity: Array
    exit_static_temperature: Array
    exit_static_pressure: Array
    exit_velocity: Array
    exit_area: Array
    choking: Array


def _expand(
    gas: Gas, stream: Stream, static_pressure: Array, efficiency: float, guess: Array
) -> tuple[Array, Array]:
    """Drop of enthalpy [J/kg] down to a static pressure, and the temperature [K] there."""
    f, section = stream.fuel_air_ratio, stream.section
    gas_constant = gas.gas_constant(f, section)
    entropy = gas.entropy(stream.total_temperature, f, section)
    ideal = gas.temperature_from_entropy(
        entropy + gas_constant * np.log(static_pressure / stream.total_pressure),
        f,
        section,
        guess=guess,
    )
    drop = efficiency * (stream.enthalpy - gas.enthalpy(ideal, f, section))
    if efficiency == 1.0:
        return drop, ideal
    temperature = gas.temperature_from_enthalpy(stream.enthalpy - drop, f, section, guess=ideal)
    return drop, temperature


def _velocity(gas: Gas, stream: Stream, drop: Array) -> Array:
    """Velocity [m/s] after a drop of enthalpy [J/kg], softened where the drop nears zero."""
    gas_constant = gas.gas_constant(stream.fuel_air_ratio, stream.section)
    width = _SOFTNESS * gas_constant * stream.total_temperature
    return np.sqrt(drop + np.sqrt(drop**2 + width**2))


def _critical_pressure(gas: Gas, stream: Stream, efficiency: float) -> tuple[Array, Array]:
    """Static temperature [K] and pressure [Pa] where the stream reaches its speed of sound."""
    f, section = stream.fuel_air_ratio, stream.section
    critical = gas.critical_temperature(stream.total_temperature, f, section)
    ideal = critical
    if efficiency != 1.0:
        drop = (stream.enthalpy - gas.enthalpy(critical, f, section)) / efficiency
        ideal = gas.temperature_from_enthalpy(stream.enthalpy - drop, f, section, guess=critical)
    change = gas.entropy(ideal, f, section) - gas.entropy(stream.total_temperature, f, section)
    return critical, stream.total_pressure * np.exp(change / gas.gas_constant(f, section))


def discharge(gas: Gas, nozzle: Nozzle, stream: Stream, ambient_pressure: Array) -> Jet:
    """The jet of a stream at nozzle entry (duct loss taken already) into ambient pressure."""
    critical, critical_pressure = _critical_pressure(gas, stream, nozzle.isentropic_efficiency)
    choking = critical_pressure / ambient_pressure - 1.0
    throat_pressure = np.maximum(critical_pressure, ambient_pressure)
    efficiency = nozzle.isentropic_efficiency
    drop, temperature = _expand(gas, stream, throat_pressure, efficiency, critical)
    gas_constant = gas.gas_constant(stream.fuel_air_ratio, stream.section)
    density = throat_pressure / (gas_constant * temperature)
    area = stream.mass_flow / (density * signed_root(2.0 * drop))
    velocity = _velocity(gas, stream, drop)
    exit_pressure, exit_velocity, exit_temperature = throat_pressure, velocity, temperature
    exit_area = stream.mass_flow / (density * velocity)
    if nozzle.kind != "convergent":
        ratio = nozzle.exit_pressure_ratio if nozzle.kind == "given exit pressure" else 1.0
        exit_pressure = np.broadcast_to(ratio * ambient_pressure, area.shape)
        drop, exit_temperature = _expand(gas, stream, exit_pressure, efficiency, 0.9 * temperature)
        exit_velocity = _velocity(gas, stream, drop)
        density = exit_pressure / (gas_constant * exit_temperature)
        exit_area = stream.mass_flow / (density * exit_velocity)
    thrust = stream.mass_flow * exit_velocity + (exit_pressure - ambient_pressure) * exit_area
    return Jet(
        gross_thrust=nozzle.gross_thrust_coefficient * thrust,
        throat_area=area,
        throat_static_temperature=temperature,
        throat_static_pressure=throat_pressure,
        throat_velocity=velocity,
        exit_static_temperature=exit_temperature,
        exit_static_pressure=exit_pressure,
        exit_velocity=exit_velocity,
        exit_area=exit_area,
        choking=choking,
    )
