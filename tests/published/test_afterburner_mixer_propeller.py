"""Afterburner, mixer, propeller and power turbine alone, against worked examples and closed forms.

Digits beyond the print are the examples' own algebra; where an example starts from a value that an
earlier part of it gives, that value is taken over. Tolerance: the seven digits of those columns.
"""

from __future__ import annotations

from math import pi, sqrt

import numpy as np
import pytest

from engine.gas import Section, SectionalGas
from engine.parts.afterburner import Afterburner, reheat
from engine.parts.efficiency import Efficiency
from engine.parts.mixer import at_mach, at_static_pressure, mix
from engine.parts.propeller import (
    Propeller,
    drive,
    efficiency_fall,
    feathered_drag,
    profile_factor,
)
from engine.parts.stream import Stream
from engine.parts.turbine import expand_by_pressure

WITHIN = 1e-6


def gas(**sections: tuple[float, float]) -> SectionalGas:
    """Heat capacity [J/(kg K)] and ratio of heat capacities by section."""
    return SectionalGas(
        {name: cp for name, (cp, _) in sections.items()},
        {name: gamma for name, (_, gamma) in sections.items()},
    )


def stream(
    model: SectionalGas,
    section: Section,
    temperature: float,
    pressure: float,
    mass_flow: float,
    fuel_air_ratio: float = 0.0,
) -> Stream:
    total = np.array(temperature)
    return Stream(
        total,
        np.array(pressure),
        np.array(mass_flow),
        np.array(fuel_air_ratio),
        model.enthalpy(total, 0.0, section),
        section,
    )


@pytest.mark.source(
    "S. Farokhi, Aircraft Propulsion, 1st ed., Wiley, Example 4.11, p. 176, from station 5; "
    "grade read, digits beyond the print own"
)
@pytest.mark.parametrize("dry_loss", [0.0, 0.02])
def test_afterburner_of_a_turbojet(dry_loss: float) -> None:
    model = gas(hot=(1156.0, 1.33), reheated=(1243.0, 1.3))
    f, entry_temperature, exit_temperature = 0.02350548, 1163.855, 2025.77
    afterburner = Afterburner(0.98, 42.0e6, dry_loss, 0.07, exit_temperature / entry_temperature)
    entry = stream(model, "hot", entry_temperature, 172469.7, 1.0 + f, f)

    out = reheat(model, afterburner, entry.with_pressure_loss(dry_loss), np.array(exit_temperature))

    assert float(out.fuel_air_ratio) - f == pytest.approx(0.03105895, rel=WITHIN)
    assert float(out.mass_flow) == pytest.approx(1.0 + f + 0.03105895, rel=WITHIN)
    assert float(out.total_pressure) == pytest.approx(160396.8, rel=WITHIN)  # printed 160.4 kPa
    assert float(out.total_temperature) == exit_temperature
    assert out.section == "reheated"


MIXED_TURBOFAN = pytest.mark.source(
    "S. Farokhi, Aircraft Propulsion, 1st ed., Wiley, Example 4.15, p. 199, stations 5 to 7; "
    "grade read, digits beyond the print own. His mixed heat capacity is that of the mass "
    "fractions; momentum balance and mass of afterburner fuel own"
)
CORE_FUEL_AIR_RATIO, BYPASS_RATIO = 0.0237406, 0.5706831


def mixed_turbofan() -> tuple[SectionalGas, Stream, Stream]:
    """Core and bypass stream at mixer entry for 1 kg/s of core air."""
    hot, cold = 1.0 + CORE_FUEL_AIR_RATIO, BYPASS_RATIO
    mixed_cp = (hot * 1152.0 + cold * 1004.0) / (hot + cold)
    mixed_cv = (hot * 1152.0 / 1.33 + cold * 1004.0 / 1.4) / (hot + cold)
    model = gas(
        cold=(1004.0, 1.4),
        hot=(1152.0, 1.33),
        mixed=(mixed_cp, mixed_cp / mixed_cv),
        reheated=(1241.0, 1.3),
    )
    core = stream(model, "hot", 1101.269, 132460.1, hot, CORE_FUEL_AIR_RATIO)
    return model, core, stream(model, "cold", 492.1195, 132460.1, cold)


@MIXED_TURBOFAN
def test_mixer_of_a_turbofan() -> None:
    model, core, bypass = mixed_turbofan()

    core_entry = at_mach(model, core, np.array(0.5))
    bypass_entry = at_static_pressure(model, bypass, core_entry.static_pressure)
    mixed = mix(model, core_entry, bypass_entry)

    assert float(bypass_entry.mach) == pytest.approx(0.4880919, rel=WITHIN)
    assert float(mixed.stream.total_temperature) == pytest.approx(902.0913, rel=WITHIN)
    assert float(mixed.mach) == pytest.approx(0.5218367, rel=WITHIN)
    assert float(mixed.stream.total_pressure) == pytest.approx(131231.4, rel=WITHIN)
    assert mixed.stream.section == "mixed"


@MIXED_TURBOFAN
def test_afterburner_behind_a_mixer() -> None:
    model, core, bypass = mixed_turbofan()
    core_entry = at_mach(model, core, np.array(0.5))
    bypass_entry = at_static_pressure(model, bypass, core_entry.static_pressure)
    mixed = mix(model, core_entry, bypass_entry).stream.with_pressure_loss(0.02)
    afterburner = Afterburner(0.98, 42.0e6, 0.0, 0.08, 2000.0 / float(mixed.total_temperature))

    out = reheat(model, afterburner, mixed, np.array(2000.0))

    assert float(out.total_pressure) == pytest.approx(118318.3, rel=WITHIN)  # printed 118.32 kPa
    added = float(out.fuel_flow - mixed.fuel_flow)
    assert added == pytest.approx(0.06144608, rel=WITHIN)  # per kilogram of core air


@pytest.mark.source(
    "S. Farokhi, Aircraft Propulsion, 1st ed., Wiley, Example 4.17, p. 211, propeller; grade read, "
    "digits beyond the print own. He leaves the diameter open: it may not matter"
)
@pytest.mark.parametrize("diameter", [2.0, 4.0])
def test_propeller_at_its_stated_efficiency(diameter: float) -> None:
    power, speed, mach = np.array(4465546.0), np.array(211.8177), np.array(0.7)
    density = np.array(16000.0 / (1004.0 * 0.4 / 1.4 * 228.0))
    disc_area = 0.25 * pi * diameter**2
    factor = float(profile_factor(disc_area, 0.85, power, speed, density, mach))

    at_work = drive(Propeller(diameter, factor, 0.1), power, speed, density, mach)

    assert float(at_work.thrust) == pytest.approx(17919.72, rel=WITHIN)  # printed 17.9 kN


@pytest.mark.source(
    "S. Farokhi, Aircraft Propulsion, 1st ed., Wiley, Example 4.17, p. 211, low-pressure turbine "
    "by its polytropic efficiency; grade read, digits beyond the print own"
)
def test_power_turbine_by_pressure_ratio() -> None:
    model = gas(hot=(1152.0, 1.33))
    f = 0.02819611
    entry = stream(model, "hot", 1197.973, 151065.1, 10.0 * (1.0 + f), f)
    efficiency = Efficiency(0.853325, "polytropic")

    out = expand_by_pressure(model, entry, np.array(24528.37 / 151065.1), efficiency)

    assert float(out.total_temperature) == pytest.approx(815.2474, rel=WITHIN)
    power = float(entry.mass_flow * (entry.enthalpy - out.enthalpy))
    assert power == pytest.approx(4533319.0, rel=WITHIN)


@pytest.mark.source(
    "Rankine's and Froude's momentum theory of a disc at rest, T = (2 rho A)^(1/3) P^(2/3), as in "
    "H. Glauert, Airplane Propellers; grade from memory"
)
def test_static_thrust_of_an_ideal_disc() -> None:
    power = np.array([1.0, 1e3, 2.5e6])
    propeller = Propeller(diameter=3.4, profile_factor=1.0, solidity=0.1)

    at_rest = drive(propeller, power, np.array(0.0), np.array(1.225), np.array(0.0))

    wanted = (2.0 * 1.225 * pi * 1.7**2) ** (1 / 3) * power ** (2 / 3)
    assert at_rest.thrust == pytest.approx(wanted, rel=1e-13)


@pytest.mark.source(
    "Froude's efficiency of an ideal disc, 2 / (1 + sqrt(1 + T / (q A))), as in B. W. McCormick, "
    "Aerodynamics, Aeronautics and Flight Mechanics, propellers; grade from memory"
)
def test_efficiency_of_an_ideal_disc() -> None:
    power, speed = np.array([1e4, 3e5, 5e6]), np.array(120.0)
    propeller = Propeller(diameter=3.4, profile_factor=1.0, solidity=0.1)

    thrust = drive(propeller, power, speed, np.array(0.9), np.array(0.35)).thrust

    loading = thrust / (0.5 * 0.9 * speed**2 * propeller.disc_area)
    assert thrust * speed / power == pytest.approx(2.0 / (1.0 + np.sqrt(1.0 + loading)), rel=1e-13)


@pytest.mark.source(
    "J. D. Mattingly, W. H. Heiser and D. T. Pratt, Aircraft Engine Design, 2nd ed., AIAA, "
    "propeller efficiency against Mach number, 1 - (M - 0.7)/3; grade from memory"
)
@pytest.mark.parametrize(("mach", "fall"), [(0.0, 1.0), (0.7, 1.0), (0.76, 0.98), (0.85, 0.95)])
def test_fall_of_propeller_efficiency(mach: float, fall: float) -> None:
    assert float(efficiency_fall(np.array(mach))) == pytest.approx(fall, rel=1e-14)


@pytest.mark.source(
    "D. P. Raymer, Aircraft Design: A Conceptual Approach, AIAA, drag of a feathered propeller, "
    "D/q = 0.1 times solidity times disc area; grade from memory"
)
def test_drag_of_a_feathered_propeller() -> None:
    propeller = Propeller(diameter=sqrt(40.0 / pi), profile_factor=0.9, solidity=0.15)

    drag = float(feathered_drag(propeller, np.array(100.0), np.array(1.0)))

    assert drag == pytest.approx(0.1 * 0.15 * 10.0 * 5000.0, rel=1e-14)
