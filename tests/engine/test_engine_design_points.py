"""The design point of every kind, read back from its stations: what the file says is what it does.

Away from it only ratios and areas are held; an error in what they are held at shows here alone.
"""

from __future__ import annotations

from math import exp, log, sqrt
from typing import Any

import numpy as np
import pytest
from engine_files import Content
from engine_kinds import KINDS, MIXED, engine_of
from plain_engine import EXACT, Place, Table, tables
from plain_gas import bisect

from engine.atmosphere import FlightCondition, flight_condition
from engine.interface import EngineState, Outcome

MECHANICAL, GEARS = 0.99, 0.985  # where the file says nothing
MIXED_KINDS = [kind for kind in KINDS if "mixed" in kind]


def point_of(kind: str) -> tuple[Content, FlightCondition]:
    """The table of the design point and where it is, of one member."""
    point = KINDS[kind]["design_point"]
    value, unit = point["pressure_altitude"].split()
    altitude = float(value) * {"m": 1.0, "ft": 0.3048}[unit]
    return point, flight_condition(np.array([altitude]), np.array([point["mach"]]))


def at_design(kind: str) -> EngineState:
    """Matched at the design thrust: its sizing is not evaluated, it is found again."""
    engine = engine_of(kind)
    state = engine.at_thrust(point_of(kind)[1], engine.sizing.reference_thrust, rating="take_off")
    assert np.all(state.outcome == Outcome.MET)
    return state


def ratio(table: Table, before: str, after: str) -> float:
    return table[after].total_pressure / table[before].total_pressure


@pytest.mark.parametrize("kind", KINDS)
def test_what_the_file_says_is_found_again(kind: str) -> None:
    point, _ = point_of(kind)
    state = at_design(kind)
    (table,) = tables(state)

    def check(found: float, key: str, default: Any = None) -> None:
        assert found == pytest.approx(point.get(key, default), rel=1e-8), key

    assert state.unknowns[:, 0] == pytest.approx(engine_of(kind).sizing.unknowns, abs=1e-8)
    hot = float(point["turbine_entry_temperature"].removesuffix(" K"))
    assert table["4"].total_temperature == pytest.approx(hot, rel=1e-8)
    if "compressor_pressure_ratio" in point:
        check(ratio(table, "2", "3"), "compressor_pressure_ratio")
        return
    check(ratio(table, "25", "3"), "high_pressure_compressor_pressure_ratio")
    if "bypass_ratio" not in point:
        check(ratio(table, "2", "25"), "low_pressure_compressor_pressure_ratio")
        return
    check(table["13"].flow / table["25"].flow, "bypass_ratio")
    check(ratio(table, "2", "13"), "fan_pressure_ratio")
    check(ratio(table, "2", "21"), "fan_hub_pressure_ratio", point["fan_pressure_ratio"])
    check(ratio(table, "21", "25"), "booster_pressure_ratio", 1.0)


def static_temperature(place: Place, pressure: float) -> float:
    """Where the stream has come down to a static pressure [Pa] without loss [K]."""
    gas, total = place.gas, place.total_temperature
    wanted = gas.entropy(total) + gas.gas_constant * log(pressure / place.total_pressure)
    return bisect(lambda t: gas.entropy(t) - wanted, 0.2 * total, total)


def static_pressure(place: Place, mach: float) -> float:
    """[Pa] at a Mach number."""
    gas, total = place.gas, place.total_temperature

    def excess(temperature: float) -> float:
        speed = mach**2 * gas.gamma(temperature) * gas.gas_constant * temperature
        return gas.enthalpy(temperature) + 0.5 * speed - place.enthalpy

    there = bisect(excess, 0.5 * total, total)
    change = gas.entropy(there) - gas.entropy(total)
    return place.total_pressure * exp(change / gas.gas_constant)


def area(place: Place, pressure: float) -> float:
    """[m2] that the stream needs at a static pressure [Pa]."""
    gas, static = place.gas, static_temperature(place, pressure)
    velocity = sqrt(2.0 * (place.enthalpy - gas.enthalpy(static)))
    return place.flow * gas.gas_constant * static / (pressure * velocity)


@pytest.mark.parametrize("kind", MIXED_KINDS)
def test_both_areas_of_a_mixer_are_those_of_its_core_mach_number(kind: str) -> None:
    (table,) = tables(at_design(kind))
    core, bypass = table["6"], table["16"]
    sizing = engine_of(kind).sizing
    pressure = static_pressure(core, MIXED["mixer"].get("core_mach", 0.45))

    assert sizing.areas["mixer_core"] == pytest.approx(area(core, pressure), rel=1e-8)
    assert sizing.areas["mixer_bypass"] == pytest.approx(area(bypass, pressure), rel=1e-8)
    share = sizing.loadings["mixer_static_share"]
    assert share == pytest.approx(pressure / bypass.total_pressure, rel=1e-8)


def test_the_power_turbine_takes_its_share_and_the_gears_theirs() -> None:
    state = at_design("turboprop")
    (table,) = tables(state)
    entry, leaves = table["45"], table["5"]  # no cooling air joins behind
    ambient = float(state.flight.static_pressure[0])
    gas = entry.gas

    def fall(pressure: float) -> float:
        """Drop of enthalpy [J/kg] without loss."""
        return entry.enthalpy - gas.enthalpy(static_temperature(entry, pressure))

    assert entry.flow == pytest.approx(leaves.flow, rel=EXACT)
    assert fall(leaves.total_pressure) == pytest.approx(0.9 * fall(ambient), rel=1e-8)
    assert state.evidence is not None
    work = state.evidence.path.propeller
    assert work is not None
    efficiencies = KINDS["turboprop"]["efficiencies"]
    left = efficiencies.get("mechanical", MECHANICAL) * efficiencies.get("gearbox", GEARS)
    assert float(work.shaft_power[0]) == pytest.approx(
        left * (entry.power - leaves.power), rel=1e-8
    )
