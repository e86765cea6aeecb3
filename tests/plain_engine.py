"""A station table in plain Python: what a matched engine must keep, checked without its code.

Nothing of the engine's gas, parts or cycles is imported: properties come from ``plain_gas``.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from math import exp, log, sqrt

import pytest
from plain_gas import PlainGas, bisect

from engine.interface import EngineState, Station

# Plain sums of polynomials on both sides: round-off, and the inverse of the last iteration.
EXACT = 1e-9
LOWER_HEATING_VALUE = 43.0319e6  # [J/kg] the file's default


@dataclass(frozen=True)
class Place:
    """One station of one state as plain numbers, with its gas."""

    total_temperature: float
    total_pressure: float
    flow: float
    fuel_air_ratio: float

    @property
    def gas(self) -> PlainGas:
        return PlainGas(self.fuel_air_ratio)

    @property
    def enthalpy(self) -> float:
        return self.gas.enthalpy(self.total_temperature)

    @property
    def power(self) -> float:
        return self.flow * self.enthalpy

    @property
    def fuel(self) -> float:
        return self.flow * self.fuel_air_ratio / (1.0 + self.fuel_air_ratio)


Table = dict[str, Place]


def plain(stations: Mapping[str, Station], member: int) -> Table:
    """One member of the stations of a state of one dimension."""
    return {
        name: Place(
            float(there.total_temperature[member]),
            float(there.total_pressure[member]),
            float(there.mass_flow[member]),
            float(there.fuel_air_ratio[member]),
        )
        for name, there in stations.items()
    }


def tables(state: EngineState) -> list[Table]:
    """The station tables of all members of a state of one dimension."""
    return [plain(state.stations, member) for member in range(state.net_thrust.size)]


def close(found: float, wanted: float, within: float = EXACT) -> None:
    assert found == pytest.approx(wanted, rel=within)


def polytropic_compression(before: Place, after: Place) -> float:
    gas = before.gas
    rise = gas.entropy(after.total_temperature) - gas.entropy(before.total_temperature)
    return gas.gas_constant * log(after.total_pressure / before.total_pressure) / rise


def polytropic_expansion(before: Place, after: Place) -> float:
    gas = before.gas
    drop = gas.entropy(before.total_temperature) - gas.entropy(after.total_temperature)
    return drop / (gas.gas_constant * log(before.total_pressure / after.total_pressure))


def turbine_capacity(entry: Place, exit_pressure: float, critical: float) -> float:
    """Choked throat [m2] of a turbine; Stodola's ellipse below choking."""
    gas = entry.gas
    gamma = gas.gamma(entry.total_temperature)
    choked = sqrt(gamma) * (2.0 / (gamma + 1.0)) ** ((gamma + 1.0) / (2.0 * (gamma - 1.0)))
    root = sqrt(gas.gas_constant * entry.total_temperature)
    beyond = max(exit_pressure / entry.total_pressure - critical, 0.0) / (1.0 - critical)
    return entry.flow * root / (entry.total_pressure * choked) / sqrt(1.0 - beyond**2)


@dataclass(frozen=True)
class PlainJet:
    """A convergent nozzle by hand: throat area [m2], velocity [m/s], static pressure [Pa]."""

    area: float
    velocity: float
    pressure: float


def expand(entry: Place, ambient: float) -> PlainJet:
    gas, total = entry.gas, entry.total_temperature
    constant, enthalpy, entropy = gas.gas_constant, entry.enthalpy, gas.entropy(total)

    def supersonic(temperature: float) -> float:
        speed_squared = 2.0 * (enthalpy - gas.enthalpy(temperature))
        return gas.gamma(temperature) * constant * temperature - speed_squared

    def pressure_at(temperature: float) -> float:
        return entry.total_pressure * exp((gas.entropy(temperature) - entropy) / constant)

    temperature = bisect(supersonic, 0.5 * total, total)
    if pressure_at(temperature) < ambient:
        temperature = bisect(lambda t: pressure_at(t) - ambient, 0.5 * total, total)
    pressure = pressure_at(temperature)
    velocity = sqrt(2.0 * (enthalpy - gas.enthalpy(temperature)))
    return PlainJet(entry.flow * constant * temperature / (pressure * velocity), velocity, pressure)


def combustion_efficiency(table: Table, bypassing: float) -> float:
    """Heat released over heat of the fuel, ``bypassing`` being the share of air led past it."""
    hot, air = table["4"], table["3"].flow * (1.0 - bypassing)
    close(hot.flow, air * (1.0 + hot.fuel_air_ratio))
    return (hot.power - air * table["3"].enthalpy) / (LOWER_HEATING_VALUE * hot.fuel)


def check_joining(before: Place, after: Place, added: Place, flow: float) -> None:
    """Cooling air of ``flow`` joins: mass, fuel and energy."""
    close(after.flow, before.flow + flow)
    close(after.fuel, before.fuel)
    close(after.power, before.power + flow * added.enthalpy)
    close(after.total_pressure, before.total_pressure)


def duct_flow(place: Place) -> float:
    """``W sqrt(T) / p``."""
    return place.flow * sqrt(place.total_temperature) / place.total_pressure


def with_enthalpy(place: Place, enthalpy: float) -> Place:
    """The same stream at another enthalpy [J/kg]."""
    gas = place.gas
    temperature = bisect(lambda t: gas.enthalpy(t) - enthalpy, 180.0, 3000.0)
    return Place(temperature, place.total_pressure, place.flow, place.fuel_air_ratio)


def spread(values: list[float]) -> float:
    """How far the largest is above the least."""
    return (max(values) - min(values)) / min(values)


@dataclass(frozen=True)
class PlainPassage:
    """A stream in a cross-section: static pressure [Pa], and its momentum with pressure [N]."""

    pressure: float
    impulse: float
    is_choked: bool


def in_area(place: Place, area: float) -> PlainPassage:
    """A subsonic stream in an area [m2], by bisection of its static temperature."""
    gas, total = place.gas, place.total_temperature
    entropy = gas.entropy(total)

    def pressure_at(temperature: float) -> float:
        return place.total_pressure * exp((gas.entropy(temperature) - entropy) / gas.gas_constant)

    def velocity_at(temperature: float) -> float:
        return sqrt(2.0 * max(place.enthalpy - gas.enthalpy(temperature), 0.0))

    def excess(temperature: float) -> float:
        """Flow that is missing: it falls from the sonic temperature up."""
        density = pressure_at(temperature) / (gas.gas_constant * temperature)
        return place.flow - density * velocity_at(temperature) * area

    def supersonic(temperature: float) -> float:
        return (
            gas.gamma(temperature) * gas.gas_constant * temperature - velocity_at(temperature) ** 2
        )

    sonic = bisect(supersonic, 0.5 * total, total)
    temperature = bisect(excess, sonic, total)
    pressure, velocity = pressure_at(temperature), velocity_at(temperature)
    close(pressure / (gas.gas_constant * temperature) * velocity * area, place.flow)
    is_choked = temperature < sonic * (1.0 + 1e-6)
    return PlainPassage(pressure, place.flow * velocity + pressure * area, is_choked)
