"""A gas stream at one station: the only thing that engine parts hand to one another."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from engine.gas import Gas, Section

Array = NDArray[np.float64]


@dataclass(frozen=True)
class Stream:
    """Total state and flow at a station, arrays of broadcastable shape.

    Attributes
    ----------
    total_temperature : [K]
    total_pressure : [Pa]
    mass_flow : [kg/s]
    fuel_air_ratio : fuel burnt per dry air in the stream, kg/kg
    enthalpy : total, sensible [J/kg]
    section : which properties a sectional gas model takes
    """

    total_temperature: Array
    total_pressure: Array
    mass_flow: Array
    fuel_air_ratio: Array
    enthalpy: Array
    section: Section = "cold"

    @property
    def fuel_flow(self) -> Array:
        """Fuel burnt in the stream so far [kg/s]."""
        return self.mass_flow * self.fuel_air_ratio / (1.0 + self.fuel_air_ratio)

    @property
    def duct_flow(self) -> Array:
        """``W sqrt(T) / p``, on whose square the share of pressure lost in a duct goes."""
        return self.mass_flow * np.sqrt(self.total_temperature) / self.total_pressure

    def at(self, index: NDArray[np.int64]) -> Stream:
        """The members picked by an index array."""
        return Stream(
            self.total_temperature[index],
            self.total_pressure[index],
            self.mass_flow[index],
            self.fuel_air_ratio[index],
            self.enthalpy[index],
            self.section,
        )

    def with_flow(self, mass_flow: Array) -> Stream:
        """The same state with another mass flow [kg/s]: a bleed or a split."""
        return Stream(
            self.total_temperature,
            self.total_pressure,
            mass_flow,
            self.fuel_air_ratio,
            self.enthalpy,
            self.section,
        )

    def with_pressure_loss(self, loss_fraction: float | Array) -> Stream:
        """The stream after a duct that loses this fraction of total pressure."""
        return Stream(
            self.total_temperature,
            self.total_pressure * (1.0 - loss_fraction),
            self.mass_flow,
            self.fuel_air_ratio,
            self.enthalpy,
            self.section,
        )


def signed_root(value: Array) -> Array:
    """Square root that keeps the sign, so that the square of a flow continues through zero."""
    return np.copysign(np.sqrt(np.abs(value)), value)


def mix_in(gas: Gas, stream: Stream, added: Stream) -> Stream:
    """``stream`` after ``added`` (cooling air) has joined it at its total pressure.

    Enthalpy and mass are conserved; the momentum of the added air is taken as lost in its own
    pressure drop, so that the pressure of the main stream stays (common practice, no source).
    """
    mass_flow = stream.mass_flow + added.mass_flow
    fuel = stream.fuel_flow + added.fuel_flow
    fuel_air_ratio = fuel / (mass_flow - fuel)
    enthalpy = (stream.mass_flow * stream.enthalpy + added.mass_flow * added.enthalpy) / mass_flow
    guess = (
        stream.mass_flow * stream.total_temperature + added.mass_flow * added.total_temperature
    ) / mass_flow
    temperature = gas.temperature_from_enthalpy(
        enthalpy, fuel_air_ratio, stream.section, guess=guess
    )
    return Stream(
        temperature, stream.total_pressure, mass_flow, fuel_air_ratio, enthalpy, stream.section
    )
