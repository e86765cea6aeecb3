"""Where the fuel's energy goes: every term from the stations, none by difference.

fuel flow x (lower heating value + V0^2/2) = F V0 + sum of jets' m (V_j - V0)^2 / 2
+ [sum of jets' m h(T_j) - m0 h(T0)] + bleed + shaft power + mechanical loss + unburnt fuel
+ propeller loss + installation drag x V0,
with V_j = gross thrust / m and T_j from total enthalpy less V_j^2/2; jets relative to still air.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from engine.atmosphere import FlightCondition
from engine.cycles.flowpath import Flowpath
from engine.gas import Gas

Array = NDArray[np.float64]


@dataclass(frozen=True)
class EnergyAccount:
    """Powers [W] of one engine and the efficiencies they make.

    ``jet_kinetic`` and ``jet_heat`` are by nozzle-exit station; the heat of the air taken in is
    an entry of its own (``intake_heat``, negative as it is brought in). ``residual`` is what the
    account fails to close by, relative to the fuel's power (to the jets' where unlit).
    """

    fuel: Array
    thrust: Array
    jet_kinetic: Mapping[str, Array]
    jet_heat: Mapping[str, Array]
    intake_heat: Array
    bleed: Array
    shaft: Array
    mechanical_loss: Array
    unburnt_fuel: Array
    propeller_loss: Array
    installation: Array
    thermal_efficiency: Array
    propulsive_efficiency: Array
    overall_efficiency: Array
    residual: Array


def energy_account(
    gas: Gas,
    path: Flowpath,
    flight: FlightCondition,
    lower_heating_value: float,
) -> EnergyAccount:
    """Energy account of an engine at work; see the module for the definition."""
    speed = flight.true_airspeed
    kinetic_in = 0.5 * speed**2
    fuel = path.fuel_flow * (lower_heating_value + kinetic_in)
    thrust = path.net_thrust(flight) * speed
    jet_kinetic, jet_heat = {}, {}
    jet_energy = np.zeros_like(fuel)
    for name, (stream, jet) in path.jets.items():
        velocity = jet.gross_thrust / stream.mass_flow
        enthalpy = stream.enthalpy - 0.5 * velocity**2
        temperature = gas.temperature_from_enthalpy(
            enthalpy, stream.fuel_air_ratio, stream.section, guess=jet.exit_static_temperature
        )
        jet_kinetic[name] = 0.5 * stream.mass_flow * (velocity - speed) ** 2
        jet_heat[name] = stream.mass_flow * gas.enthalpy(
            temperature, stream.fuel_air_ratio, stream.section
        )
        jet_energy = jet_energy + 0.5 * stream.mass_flow * velocity**2
    airflow = path.stations["2"].mass_flow
    intake_heat = -airflow * gas.enthalpy(flight.static_temperature, 0.0, "cold")
    bleed = path.bleed.mass_flow * (path.bleed.enthalpy + kinetic_in)
    installation = path.installation_drag * speed + np.zeros_like(fuel)
    propeller_loss, propeller_power = np.zeros_like(fuel), np.zeros_like(fuel)
    if path.propeller is not None:
        propeller_loss = path.propeller.induced_loss + path.propeller.profile_loss
        propeller_power = path.propeller.shaft_power
    out = thrust + intake_heat + bleed + path.shaft_power + path.mechanical_loss
    out = out + path.unburnt_fuel + propeller_loss + installation
    out = out + sum(jet_kinetic.values()) + sum(jet_heat.values())
    gained = jet_energy - airflow * kinetic_in + propeller_power
    chemical = path.fuel_flow * lower_heating_value
    return EnergyAccount(
        fuel=fuel,
        thrust=thrust,
        jet_kinetic=jet_kinetic,
        jet_heat=jet_heat,
        intake_heat=intake_heat,
        bleed=bleed,
        shaft=path.shaft_power,
        mechanical_loss=path.mechanical_loss,
        unburnt_fuel=path.unburnt_fuel,
        propeller_loss=propeller_loss,
        installation=installation,
        thermal_efficiency=_ratio(gained, chemical),
        propulsive_efficiency=_ratio(thrust, gained),
        overall_efficiency=_ratio(thrust, chemical),
        residual=(fuel - out) / np.where(fuel > 0.0, fuel, np.maximum(jet_energy, 1.0)),
    )


def _ratio(part: Array, whole: Array) -> Array:
    """Part over whole, zero where the whole is not positive."""
    positive = whole > 0.0
    return np.where(positive, part / np.where(positive, whole, 1.0), 0.0)
