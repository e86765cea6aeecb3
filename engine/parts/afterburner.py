"""Afterburner: fuel added to a stream that carries burnt fuel already.

What the duct and the flame holders cost in pressure is there lit or not; heating a stream that
moves costs more. That hot loss goes with the rise of temperature over the entry temperature, and is
scaled to the lit loss stated at a reference ratio of temperatures. Source: Saravanamuttoo, Rogers
and Cohen, Gas Turbine Theory, combustion system, pressure losses (from memory).
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from engine.gas import Gas
from engine.parts.stream import Array, Stream


@dataclass(frozen=True)
class Afterburner:
    """What an afterburner is.

    Attributes
    ----------
    efficiency : of its combustion
    lower_heating_value : of the fuel [J/kg]
    dry_pressure_loss_fraction : of total pressure at its entry, unlit
    lit_pressure_loss_fraction : the same, lit to the reference ratio; dry loss included
    reference_temperature_ratio : exit over entry total temperature, above 1
    """

    efficiency: float
    lower_heating_value: float
    dry_pressure_loss_fraction: float
    lit_pressure_loss_fraction: float
    reference_temperature_ratio: float


def reheat(gas: Gas, afterburner: Afterburner, dry: Stream, exit_temperature: Array) -> Stream:
    """The stream behind a lit afterburner, at a total temperature [K].

    ``dry`` is the stream behind the unlit one, its dry loss taken already. The fuel enters at the
    datum temperature of the gas model; its products are taken as burnt. At the entry temperature
    no fuel is needed and no more pressure lost, so that reheat begins where dry running ends; with
    a sectional gas it does not, unless hot and reheated heat capacities are equal, for the stream
    changes its heat capacity on entry, as the textbooks have it. An exit temperature below that
    takes fuel away: only an iteration visits it.
    """
    heat_release = afterburner.efficiency * afterburner.lower_heating_value
    before = dry.fuel_air_ratio
    unburnt = (1.0 + before) * dry.enthalpy - before * heat_release  # per kilogram of dry air
    ratio = gas.fuel_air_ratio_burnt(unburnt, exit_temperature, heat_release, "reheated")
    share = (ratio - before) / (1.0 + before)
    return Stream(
        np.asarray(exit_temperature),
        dry.total_pressure * (1.0 - _hot_loss(afterburner, exit_temperature, dry)),
        dry.mass_flow * (1.0 + share),
        ratio,
        (dry.enthalpy + share * heat_release) / (1.0 + share),
        "reheated",
    )


def _hot_loss(afterburner: Afterburner, exit_temperature: Array, dry: Stream) -> Array:
    """Share of total pressure behind the unlit afterburner that lighting it takes."""
    kept = 1.0 - afterburner.dry_pressure_loss_fraction
    lost = afterburner.lit_pressure_loss_fraction - afterburner.dry_pressure_loss_fraction
    rise = exit_temperature / dry.total_temperature - 1.0
    return lost / kept * rise / (afterburner.reference_temperature_ratio - 1.0)
