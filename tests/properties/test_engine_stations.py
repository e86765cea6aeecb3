"""Converged states re-checked from their station tables alone, in plain Python.

Nothing of the engine's gas, parts or cycles is imported: properties come from ``plain_gas``, and
what is checked are the balances that a matched engine must keep and the capacities that a built
engine cannot change. Station 3 is compressor delivery before bleed and cooling are taken.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import exp, log, sqrt

import numpy as np
import pytest
from engine_files import TURBOFAN, TURBOJET
from plain_gas import PlainGas, bisect

from engine.atmosphere import flight_condition
from engine.cycle_engine import CycleEngine
from engine.interface import EngineState, Outcome, Station

STATES = 20
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


def plain(stations: dict[str, Station], member: int) -> Table:
    return {
        name: Place(
            float(there.total_temperature[member]),
            float(there.total_pressure[member]),
            float(there.mass_flow[member]),
            float(there.fuel_air_ratio[member]),
        )
        for name, there in stations.items()
    }


def states_of(engine: CycleEngine) -> EngineState:
    """Mixed throttles between idle and take-off anywhere in the envelope."""
    generator = np.random.default_rng(7)
    flight = flight_condition(
        generator.uniform(0.0, 12500.0, STATES),
        generator.uniform(0.0, 0.9, STATES),
        generator.uniform(-15.0, 25.0, STATES),
    )
    most = engine.at_rating(flight, "take_off").net_thrust
    least = engine.at_rating(flight, "flight_idle").net_thrust
    share = generator.uniform(0.05, 0.98, STATES)
    state = engine.at_thrust(flight, least + share * (most - least), rating="take_off")
    assert np.all(state.outcome == Outcome.MET)
    return state


@pytest.fixture(scope="module")
def fan_state(turbofan: CycleEngine) -> EngineState:
    return states_of(turbofan)


@pytest.fixture(scope="module")
def jet_state(turbojet: CycleEngine) -> EngineState:
    return states_of(turbojet)


def tables(state: EngineState) -> list[Table]:
    return [plain(dict(state.stations), member) for member in range(STATES)]


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


def check_combustor(table: Table, content: dict[str, dict[str, float]], bypassing: float) -> None:
    """Flow past and through the combustor, its heat and its pressure."""
    delivery, hot = table["3"], table["4"]
    air = delivery.flow * (1.0 - bypassing)
    close(hot.flow, air * (1.0 + hot.fuel_air_ratio))
    heat = content["combustor"]["efficiency"] * LOWER_HEATING_VALUE * hot.fuel
    close(air * delivery.enthalpy + heat, hot.power)
    loss = content["combustor"]["pressure_loss_fraction"]
    close(hot.total_pressure, delivery.total_pressure * (1.0 - loss))


def check_joining(before: Place, after: Place, added: Place, flow: float) -> None:
    """Cooling air of ``flow`` joins: mass, fuel and energy."""
    close(after.flow, before.flow + flow)
    close(after.fuel, before.fuel)
    close(after.power, before.power + flow * added.enthalpy)
    close(after.total_pressure, before.total_pressure)


@pytest.mark.parametrize("member", range(STATES))
def test_turbofan_flows(fan_state: EngineState, member: int) -> None:
    table, cooling = tables(fan_state)[member], TURBOFAN["cooling"]
    core = table["25"].flow
    bleed = TURBOFAN["off_takes"]["customer_bleed_fraction"]

    close(table["2"].flow, table["21"].flow + table["13"].flow)
    close(table["21"].flow, core)
    close(table["3"].flow, core)
    check_combustor(table, TURBOFAN, sum(cooling.values()) + bleed)
    check_joining(table["4"], table["41"], table["3"], cooling["vane_fraction"] * core)
    close(table["44"].flow, table["41"].flow)
    check_joining(table["44"], table["45"], table["3"], cooling["rotor_fraction"] * core)
    close(table["5"].flow, table["45"].flow + cooling["downstream_fraction"] * core)
    close(table["5"].fuel, table["4"].fuel)
    close(table["4"].fuel, float(fan_state.fuel_flow[member]))
    for before, after in (("5", "7"), ("7", "8"), ("8", "9"), ("13", "17"), ("17", "19")):
        close(table[after].flow, table[before].flow)


@pytest.mark.parametrize("member", range(STATES))
def test_turbofan_shafts(fan_state: EngineState, member: int) -> None:
    table = tables(fan_state)[member]
    mechanical = TURBOFAN["efficiencies"]["mechanical"]
    shaft = 60e3  # [W] TURBOFAN["off_takes"]["shaft_power"]

    high_compressor = table["3"].power - table["25"].power
    high_turbine = table["41"].power - table["44"].power
    close(high_turbine * mechanical, high_compressor + shaft)

    fan = table["21"].power + table["13"].power - table["2"].power
    booster = table["25"].power - table["21"].power
    joined = TURBOFAN["cooling"]["downstream_fraction"] * table["25"].flow * table["3"].enthalpy
    low_turbine = table["45"].power + joined - table["5"].power
    close(low_turbine * mechanical, fan + booster)


@pytest.mark.parametrize("member", range(STATES))
def test_turbofan_efficiencies_and_losses(fan_state: EngineState, member: int) -> None:
    table, given = tables(fan_state)[member], TURBOFAN["efficiencies"]

    close(polytropic_compression(table["2"], table["21"]), given["fan"]["polytropic"])
    close(polytropic_compression(table["21"], table["25"]), given["booster"]["polytropic"])
    compressor = given["high_pressure_compressor"]["polytropic"]
    close(polytropic_compression(table["25"], table["3"]), compressor)
    turbine = given["high_pressure_turbine"]["polytropic"]
    close(polytropic_expansion(table["41"], table["44"]), turbine)
    close(table["2"].total_pressure, 0.99 * table["0"].total_pressure)
    close(table["7"].total_pressure, 0.99 * table["5"].total_pressure)
    close(table["17"].total_pressure, 0.985 * table["13"].total_pressure)


@pytest.mark.parametrize("member", range(STATES))
def test_free_stream(fan_state: EngineState, member: int) -> None:
    table, flight, gas = tables(fan_state)[member], fan_state.flight, PlainGas(0.0)
    static, speed = float(flight.static_temperature[member]), float(flight.true_airspeed[member])
    ahead = table["0"]

    close(ahead.enthalpy - gas.enthalpy(static), 0.5 * speed**2)
    rise = gas.entropy(ahead.total_temperature) - gas.entropy(static)
    close(
        ahead.total_pressure,
        float(flight.static_pressure[member]) * exp(rise / gas.gas_constant),
    )
    close(table["2"].total_temperature, ahead.total_temperature)


def thrust_by_hand(state: EngineState, member: int, nozzles: dict[str, float]) -> float:
    """Net thrust [N] from the station table: nozzle entry and its gross thrust coefficient."""
    table, ambient = tables(state)[member], float(state.flight.static_pressure[member])
    thrust = -table["2"].flow * float(state.flight.true_airspeed[member])
    for entry, coefficient in nozzles.items():
        jet = expand(table[entry], ambient)
        pressure_force = (jet.pressure - ambient) * jet.area
        thrust += coefficient * (table[entry].flow * jet.velocity + pressure_force)
    return thrust


@pytest.mark.parametrize("member", range(STATES))
def test_turbofan_thrust(fan_state: EngineState, member: int) -> None:
    found = float(fan_state.net_thrust[member])
    ram = float(fan_state.stations["2"].mass_flow[member] * fan_state.flight.true_airspeed[member])

    # The exit velocity is softened near a nozzle pressure ratio of one: below 1e-6 of a jet's
    # thrust above a ratio of 1.05, and idling jets here are close to that.
    by_hand = thrust_by_hand(fan_state, member, {"7": 0.99, "17": 0.99})
    assert by_hand == pytest.approx(found, rel=0, abs=1e-6 * (found + ram))


@pytest.mark.parametrize("member", range(STATES))
def test_turbojet_thrust_shaft_and_combustor(jet_state: EngineState, member: int) -> None:
    table, cooling = tables(jet_state)[member], TURBOJET["cooling"]
    core = table["2"].flow

    check_combustor(table, TURBOJET, sum(cooling.values()) + 0.01)
    check_joining(table["4"], table["41"], table["3"], cooling["vane_fraction"] * core)
    joined = cooling["rotor_fraction"] * core * table["3"].enthalpy
    turbine = table["41"].power + joined - table["5"].power
    close(turbine * 0.99, table["3"].power - table["2"].power + 50e3)
    close(polytropic_compression(table["2"], table["3"]), 0.88)
    found = float(jet_state.net_thrust[member])
    ram = core * float(jet_state.flight.true_airspeed[member])
    by_hand = thrust_by_hand(jet_state, member, {"7": 0.98})
    assert by_hand == pytest.approx(found, rel=0, abs=1e-6 * (found + ram))


def spread(values: list[float]) -> float:
    return (max(values) - min(values)) / min(values)


def test_turbofan_keeps_its_flow_areas(fan_state: EngineState) -> None:
    pressures = fan_state.flight.static_pressure
    capacities: dict[str, list[float]] = {}
    for table, ambient in zip(tables(fan_state), pressures, strict=True):
        found = {
            "high-pressure turbine": turbine_capacity(table["41"], table["44"].total_pressure, 0.5),
            "low-pressure turbine": turbine_capacity(table["45"], table["5"].total_pressure, 0.0),
            "core nozzle": expand(table["7"], float(ambient)).area,
            "bypass nozzle": expand(table["17"], float(ambient)).area,
        }
        for name, value in found.items():
            capacities.setdefault(name, []).append(value)

    # A step is taken after matching has come below 1e-9.
    assert {name: spread(values) < EXACT for name, values in capacities.items()} == dict.fromkeys(
        capacities, True
    )


def test_booster_turns_with_the_fan(fan_state: EngineState) -> None:
    ratios = [
        (table["25"].enthalpy - table["21"].enthalpy) / (table["21"].enthalpy - table["2"].enthalpy)
        for table in tables(fan_state)
    ]

    # Idling fans raise enthalpy by a few kJ/kg: round-off of 300 kJ/kg over that.
    assert spread(ratios) < 1e-8


def test_turbojet_keeps_its_flow_areas(jet_state: EngineState) -> None:
    pressures = jet_state.flight.static_pressure
    turbine, nozzle = [], []
    for table, ambient in zip(tables(jet_state), pressures, strict=True):
        turbine.append(turbine_capacity(table["41"], table["5"].total_pressure, 0.5))
        nozzle.append(expand(table["7"], float(ambient)).area)

    assert spread(turbine) < EXACT
    assert spread(nozzle) < EXACT


def test_states_are_of_many_kinds(fan_state: EngineState) -> None:
    """Choked and unchoked nozzles and turbines among them, or the checks above say little."""
    bypass_choked = fan_state.kinks[1] > 0.0
    ratio = fan_state.stations["44"].total_pressure / fan_state.stations["41"].total_pressure

    assert bypass_choked.any()
    assert (~bypass_choked).any()
    assert (fan_state.kinks[0] < 0.0).any()
    assert float(np.ptp(ratio)) > 0.01
