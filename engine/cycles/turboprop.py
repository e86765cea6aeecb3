"""Turboprop: a gas generator, a free power turbine, a gearbox and a propeller; the jet helps.

Unknowns: compressor pressure ratio, turbine entry temperature over engine-face temperature, the
share of the ideal drop of enthalpy down to ambient pressure that the power turbine takes, corrected
airflow. Held from the design point: flow capacity of both turbines and the nozzle throat. The
propeller's governor holds its speed and so the power turbine's. With the engine out the power
turbine stands still and only throttles the air; the blades are feathered.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from engine.cycles.core import Core, behind_last_turbine, run_core
from engine.cycles.exhaust import let_out
from engine.cycles.flowpath import Flowpath, PropellerWork, core_limits, corrected_flow_factor
from engine.cycles.situation import Situation
from engine.fuels import Fuel
from engine.gas import Gas
from engine.installation.drag import Installation
from engine.parts import propeller as blades
from engine.parts.efficiency import Efficiency
from engine.parts.inlet import Inlet
from engine.parts.nozzle import Nozzle
from engine.parts.stream import Array, Stream
from engine.parts.turbine import corrected_flow_area, expand_by_pressure, flow_share

_TOO_FAST = f"it flies {{:.3g}} above Mach {blades.HIGHEST_MACH}, beyond any propeller known here"


@dataclass(frozen=True)
class PowerTrain:
    """Power turbine, gearbox and propeller.

    Attributes
    ----------
    turbine_efficiency : of the power turbine
    mechanical_efficiency, gearbox_efficiency : between it and the propeller
    propeller_diameter : [m]
    propeller_solidity : area of all blades over that of the disc
    propeller_efficiency : thrust power over shaft power at the design point, which then must move
    profile_factor : in its place, share of shaft power that reaches the air
    """

    turbine_efficiency: Efficiency
    propeller_diameter: float
    propeller_solidity: float
    mechanical_efficiency: float = 1.0
    gearbox_efficiency: float = 1.0
    propeller_efficiency: float | None = None
    profile_factor: float | None = None


@dataclass(frozen=True)
class Turboprop:
    """A turboprop and its design point."""

    gas: Gas
    fuel: Fuel
    inlet: Inlet
    core: Core
    train: PowerTrain
    exhaust_nozzle: Nozzle
    pressure_ratio: float
    turbine_entry_temperature: float
    power_turbine_share: float
    afterburner: None = None
    installation: Installation | None = None
    unknown_names: tuple[str, ...] = (
        "compressor_pressure_ratio",
        "turbine_entry_temperature_ratio",
        "power_turbine_share",
        "corrected_core_airflow",
    )

    def design_unknowns(self, face: Stream) -> Array:
        return np.log(
            [
                self.pressure_ratio,
                self.turbine_entry_temperature / float(face.total_temperature),
                self.power_turbine_share,
                1.0 / float(corrected_flow_factor(face)),
            ]
        )

    def evaluate(self, unknowns: Array, situation: Situation) -> Flowpath:
        gas, face = self.gas, situation.face
        pressure_ratio, temperature_ratio, share, airflow = np.exp(unknowns)
        entry = face.with_flow(airflow * corrected_flow_factor(face))
        hot = temperature_ratio * face.total_temperature
        flow = run_core(gas, self.core, entry, pressure_ratio, hot, situation)
        power_entry = flow.turbine_exit
        fall = _pressure_fall(gas, power_entry, share, situation.flight.static_pressure)
        power_exit, loading = self._expand(power_entry, fall, situation)
        power = power_entry.mass_flow * (power_entry.enthalpy - power_exit.enthalpy)
        last = behind_last_turbine(gas, self.core, power_exit, flow)
        exhaust = let_out(gas, self.exhaust_nozzle, None, last, situation)
        shaft_power = self.train.mechanical_efficiency * self.train.gearbox_efficiency * power
        work, profile = self._propel(shaft_power, situation)
        rises = {"high_pressure": (flow.rise, entry.total_temperature)}
        limits = core_limits(flow.combustor_exit, flow.delivery, rises, situation.sizing)
        return Flowpath(
            stations={
                "2": entry,
                "3": flow.delivery,
                "4": flow.combustor_exit,
                "41": flow.rotor_entry,
                "44": flow.rotor_exit,
                "45": power_entry,
                "5": last,
                "7": exhaust.nozzle_entry,
            },
            jets={"9": (exhaust.nozzle_entry, exhaust.jet)},
            areas={
                "high_pressure_turbine": flow.turbine_area,
                "power_turbine": corrected_flow_area(gas, power_entry) / flow_share(fall, 0.0),
                "core_nozzle": exhaust.jet.throat_area,
            },
            flows={**flow.flows, **exhaust.flows},
            loadings={**flow.loadings, "power_turbine": loading, "propeller_profile": profile},
            limits={**limits, "propeller_shaft_power": shaft_power},
            shaft_power=situation.taken.shaft_power + np.zeros_like(flow.rise),
            bleed=flow.bleed,
            mechanical_loss=flow.mechanical_loss + power - shaft_power,
            unburnt_fuel=flow.unburnt_fuel,
            fuel_flow=flow.fuel_flow,
            spool_rises=rises,
            propeller=work,
            misfits={_TOO_FAST: situation.flight.mach - blades.HIGHEST_MACH},
        )

    def _expand(self, entry: Stream, fall: Array, situation: Situation) -> tuple[Stream, Array]:
        """The power turbine's exit at a ratio of total pressures, and its loading [kg/J]."""
        if not situation.is_lit:
            still = entry.with_pressure_loss(1.0 - fall)
            return still, np.ones_like(entry.mass_flow)
        ideal = expand_by_pressure(self.gas, entry, fall, Efficiency(1.0, "isentropic"))
        loading = 1.0 / (entry.enthalpy - ideal.enthalpy)
        efficiency = self.train.turbine_efficiency.of_turbine(
            situation.loading_ratio("power_turbine", loading)
        )
        return expand_by_pressure(self.gas, entry, fall, efficiency), loading

    def _propel(self, shaft_power: Array, situation: Situation) -> tuple[PropellerWork, Array]:
        """What the propeller makes of its shaft, and its profile factor."""
        train, flight = self.train, situation.flight
        speed, density, mach = flight.true_airspeed, flight.density, flight.mach
        disc = 0.25 * np.pi * train.propeller_diameter**2
        if situation.sizing is not None:
            profile = np.asarray(situation.sizing.loadings["propeller_profile"])
        elif train.profile_factor is not None:
            profile = np.asarray(train.profile_factor)
        else:
            assert train.propeller_efficiency is not None
            profile = blades.profile_factor(
                disc, train.propeller_efficiency, shaft_power, speed, density, mach
            )
        propeller = blades.Propeller(train.propeller_diameter, profile, train.propeller_solidity)
        if not situation.is_lit:
            drag = blades.feathered_drag(propeller, speed, density) + np.zeros_like(shaft_power)
            none = np.zeros_like(shaft_power)
            return PropellerWork(-drag, none, none, drag * speed), profile
        work = blades.drive(propeller, shaft_power, speed, density, mach)
        return (
            PropellerWork(work.thrust, shaft_power, work.induced_loss, work.profile_loss),
            profile,
        )


def _pressure_fall(gas: Gas, entry: Stream, share: Array, ambient_pressure: Array) -> Array:
    """Exit over entry total pressure where a share of the ideal drop to ambient is taken."""
    f, section = entry.fuel_air_ratio, entry.section
    gas_constant = gas.gas_constant(f, section)
    entropy = gas.entropy(entry.total_temperature, f, section)
    full = gas.temperature_from_entropy(
        entropy + gas_constant * np.log(ambient_pressure / entry.total_pressure),
        f,
        section,
        guess=entry.total_temperature * (ambient_pressure / entry.total_pressure) ** 0.24,
    )
    ideal = entry.enthalpy - share * (entry.enthalpy - gas.enthalpy(full, f, section))
    temperature = gas.temperature_from_enthalpy(
        ideal, f, section, guess=entry.total_temperature * (1.0 - share) + full * share
    )
    return np.exp((gas.entropy(temperature, f, section) - entropy) / gas_constant)
