"""Mixer: two streams side by side in a duct of constant area, made one.

Mass, energy and momentum are conserved from the plane where the streams meet, each in its own area
and at its own static pressure, to where they are one; only friction is left out, and is taken as a
duct loss afterwards. Sources: H. Pearson, "Mixing of exhaust and bypass flow in a by-pass engine",
J. Royal Aeronautical Society, 1962; Farokhi, Aircraft Propulsion, section on the mixed-exhaust
turbofan (the first from memory).

Symbols: T static temperature, V velocity, R gas constant, h enthalpy, cp heat capacity; f fuel-air
ratio.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from engine.gas import Gas
from engine.parts.stream import Array, Stream, signed_root

_MOST_STEPS = 20
_LAST_STEP = 1e-8  # Newton squares an error, so that it then is round-off


@dataclass(frozen=True)
class Passage:
    """A stream where it passes a cross-section.

    Attributes
    ----------
    stream : its total state
    static_temperature, static_pressure, velocity : [K], [Pa], [m/s]
    mach : velocity over the speed of sound there
    area : [m2] that the stream needs; negative, as velocity, where it flows backwards
    """

    stream: Stream
    static_temperature: Array
    static_pressure: Array
    velocity: Array
    mach: Array
    area: Array


def at_static_pressure(gas: Gas, stream: Stream, static_pressure: Array) -> Passage:
    """A stream at a static pressure [Pa]; below the critical one it chokes and keeps that.

    The inverse of its area, squared with its sign, goes through zero smoothly where the static
    pressure passes the total pressure.
    """
    f, section = stream.fuel_air_ratio, stream.section
    critical = gas.critical_temperature(stream.total_temperature, f, section)
    entropy = gas.entropy(stream.total_temperature, f, section)
    gas_constant = gas.gas_constant(f, section)
    change = gas.entropy(critical, f, section) - entropy
    least = stream.total_pressure * np.exp(change / gas_constant)
    pressure = np.maximum(static_pressure, least)
    temperature = gas.temperature_from_entropy(
        entropy + gas_constant * np.log(pressure / stream.total_pressure),
        f,
        section,
        guess=stream.total_temperature * (pressure / stream.total_pressure) ** 0.25,
    )
    return _passage(gas, stream, temperature, pressure)


def at_mach(gas: Gas, stream: Stream, mach: Array) -> Passage:
    """A stream at a Mach number."""
    f, section = stream.fuel_air_ratio, stream.section
    half_square = 0.5 * np.asarray(mach) ** 2 * gas.gas_constant(f, section)
    temperature = stream.total_temperature / (1.0 + 0.2 * np.asarray(mach) ** 2)
    for _ in range(_MOST_STEPS):
        cp = gas.heat_capacity(temperature, f, section)
        gain = cp + half_square * _ratio(gas, stream, cp)
        kinetic = half_square * _ratio(gas, stream, cp) * temperature
        excess = gas.enthalpy(temperature, f, section) + kinetic - stream.enthalpy
        temperature = temperature - excess / gain
        if not (np.abs(excess / (gain * temperature)) > 1e-11).any():
            break
    return _isentropic(gas, stream, temperature)


def mix(gas: Gas, first: Passage, second: Passage) -> Passage:
    """Both streams as one, in the sum of their areas, subsonic and without friction.

    Each area is what the stream really has: the fixed one away from the design point, for the
    area that an iterate needs may be endless.

    ``V + R T / V`` is the impulse per mass flow; with ``h(T) + V^2 / 2`` given too, constant heat
    capacity leaves a quadratic for V, repeated on the tangent of h at the last T. Where the impulse
    is too small for the flow (a Mach number of 1 in the answer), momentum is not conserved: only an
    iteration, or a mixer that cannot run, comes there.
    """
    area = first.area + second.area
    mass_flow = first.stream.mass_flow + second.stream.mass_flow
    fuel = first.stream.fuel_flow + second.stream.fuel_flow
    f = fuel / (mass_flow - fuel)
    enthalpy = (
        first.stream.mass_flow * first.stream.enthalpy
        + second.stream.mass_flow * second.stream.enthalpy
    ) / mass_flow
    impulse = (_impulse(first) + _impulse(second)) / mass_flow
    guess = (
        first.stream.mass_flow * first.stream.total_temperature
        + second.stream.mass_flow * second.stream.total_temperature
    ) / mass_flow
    total_temperature = gas.temperature_from_enthalpy(enthalpy, f, "mixed", guess=guess)
    gas_constant = gas.gas_constant(f, "mixed")
    temperature = total_temperature
    for _ in range(_MOST_STEPS):
        cp = gas.heat_capacity(temperature, f, "mixed")
        stagnation = temperature + (enthalpy - gas.enthalpy(temperature, f, "mixed")) / cp
        bend = 1.0 - 0.5 * gas_constant / cp
        inner = np.maximum(impulse**2 - 4.0 * bend * gas_constant * stagnation, 0.0)
        velocity = 2.0 * gas_constant * stagnation / (impulse + np.sqrt(inner))
        before, temperature = temperature, stagnation - 0.5 * velocity**2 / cp
        if not (np.abs(temperature - before) > _LAST_STEP * temperature).any():
            break
    pressure = mass_flow * gas_constant * temperature / (velocity * area)
    change = gas.entropy(total_temperature, f, "mixed") - gas.entropy(temperature, f, "mixed")
    total_pressure = pressure * np.exp(change / gas_constant)
    mixed = Stream(total_temperature, total_pressure, mass_flow, f, enthalpy, "mixed")
    mach = velocity / _sound(gas, mixed, temperature)
    return Passage(mixed, temperature, pressure, velocity, mach, area)


def _isentropic(gas: Gas, stream: Stream, temperature: Array) -> Passage:
    """A stream at a static temperature [K]."""
    f, section = stream.fuel_air_ratio, stream.section
    change = gas.entropy(temperature, f, section) - gas.entropy(
        stream.total_temperature, f, section
    )
    pressure = stream.total_pressure * np.exp(change / gas.gas_constant(f, section))
    return _passage(gas, stream, temperature, pressure)


def _passage(gas: Gas, stream: Stream, temperature: Array, pressure: Array) -> Passage:
    """A stream at a static temperature [K] and pressure [Pa] that belong together."""
    f, section = stream.fuel_air_ratio, stream.section
    velocity = signed_root(2.0 * (stream.enthalpy - gas.enthalpy(temperature, f, section)))
    density = pressure / (gas.gas_constant(f, section) * temperature)
    mach = velocity / _sound(gas, stream, temperature)
    area = stream.mass_flow / (density * velocity)
    return Passage(stream, temperature, pressure, velocity, mach, area)


def _impulse(passage: Passage) -> Array:
    """Momentum flow and pressure force [N]."""
    return passage.stream.mass_flow * passage.velocity + passage.static_pressure * passage.area


def _sound(gas: Gas, stream: Stream, temperature: Array) -> Array:
    """Speed of sound [m/s] in a stream at a static temperature [K]."""
    f, section = stream.fuel_air_ratio, stream.section
    cp = gas.heat_capacity(temperature, f, section)
    return np.sqrt(_ratio(gas, stream, cp) * gas.gas_constant(f, section) * temperature)


def _ratio(gas: Gas, stream: Stream, cp: Array) -> Array:
    """Ratio of heat capacities of a stream whose heat capacity [J/(kg K)] is given."""
    return cp / (cp - gas.gas_constant(stream.fuel_air_ratio, stream.section))
