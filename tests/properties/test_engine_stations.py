"""Converged states re-checked from their station tables alone, in plain Python.

Nothing of the engine's gas, parts or cycles is imported: properties come from ``plain_gas``, and
what is checked are the balances that a matched engine must keep and the capacities that a built
engine cannot change. Station 3 is compressor delivery before bleed and cooling are taken.
"""

from __future__ import annotations

from dataclasses import replace
from math import exp

import numpy as np
import pytest
from engine_files import TURBOFAN, TURBOJET, load, turbofan_content, turbojet_content
from plain_engine import (
    EXACT,
    LOWER_HEATING_VALUE,
    Table,
    check_joining,
    close,
    combustion_efficiency,
    duct_flow,
    expand,
    polytropic_compression,
    polytropic_expansion,
    spread,
    tables,
    turbine_capacity,
    with_enthalpy,
)
from plain_gas import PlainGas

from engine.atmosphere import flight_condition
from engine.cycle_engine import CycleEngine
from engine.interface import EngineState, Outcome
from engine.parts.efficiency import COMPRESSOR_FALL, TURBINE_DESIGN_SPEED

STATES = 20
CONSTANT = {"efficiencies.away_from_design": "constant"}


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
def fan_state() -> EngineState:
    return states_of(load(turbofan_content(CONSTANT)))


@pytest.fixture(scope="module")
def jet_state() -> EngineState:
    return states_of(load(turbojet_content(CONSTANT)))


@pytest.fixture(scope="module")
def falling_state(turbofan: CycleEngine) -> EngineState:
    """The same turbofan with efficiencies that fall off; its last member is its design point."""
    found = states_of(turbofan)
    flight = flight_condition(
        np.append(found.flight.pressure_altitude, 10668.0),
        np.append(found.flight.mach, 0.78),
        np.append(found.flight.temperature_deviation, 0.0),
    )
    return turbofan.at_thrust(flight, np.append(found.net_thrust, 16e3), rating="take_off")


def check_combustor(table: Table, content: dict[str, dict[str, float]], bypassing: float) -> None:
    """Flow past and through the combustor, its heat and its pressure."""
    close(combustion_efficiency(table, bypassing), content["combustor"]["efficiency"])
    loss = content["combustor"]["pressure_loss_fraction"]
    close(table["4"].total_pressure, table["3"].total_pressure * (1.0 - loss))


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


def law_of_compressor(flow_ratio: float) -> float:
    """Efficiency over that of the design point."""
    return 1.0 / (1.0 + COMPRESSOR_FALL * (1.0 - flow_ratio) ** 2)


def law_of_turbine(speed_ratio: float) -> float:
    """The same of a turbine, by blade speed over the root of specific work."""
    best = TURBINE_DESIGN_SPEED
    return (1.0 + (1.0 - best) ** 2) / (1.0 + (1.0 - best * speed_ratio) ** 2)


def low_turbine_work(table: Table) -> float:
    """[J/kg] before cooling air joins behind the last turbine."""
    joined = TURBOFAN["cooling"]["downstream_fraction"] * table["25"].flow * table["3"].enthalpy
    return (table["45"].power + joined - table["5"].power) / table["45"].flow


def test_compressors_fall_off_with_corrected_flow(falling_state: EngineState) -> None:
    found, design = tables(falling_state), tables(falling_state)[-1]
    given = TURBOFAN["efficiencies"]

    for table in found:
        for part, before, after in (
            ("fan", "2", "21"),
            ("booster", "21", "25"),
            ("high_pressure_compressor", "25", "3"),
        ):
            ratio = duct_flow(table[before]) / duct_flow(design[before])
            wanted = given[part]["polytropic"] * law_of_compressor(ratio)
            # Idling fans raise enthalpy by a few kJ/kg: round-off of 300 kJ/kg over that.
            close(polytropic_compression(table[before], table[after]), wanted, 1e-8)


def test_turbines_fall_off_with_loading(falling_state: EngineState) -> None:
    found, given = tables(falling_state), TURBOFAN["efficiencies"]

    def loadings(table: Table) -> dict[str, float]:
        """Square of blade speed, which goes with the spool's work, over specific work."""
        high = table["3"].enthalpy - table["25"].enthalpy
        low = table["21"].enthalpy - table["2"].enthalpy
        return {
            "high": high / (table["41"].enthalpy - table["44"].enthalpy),
            "low": low / low_turbine_work(table),
        }

    design = loadings(found[-1])
    for table in found:
        ratio = {name: value / design[name] for name, value in loadings(table).items()}
        high = given["high_pressure_turbine"]["polytropic"] * law_of_turbine(ratio["high"] ** 0.5)
        close(polytropic_expansion(table["41"], table["44"]), high, 1e-8)
        leaves = with_enthalpy(table["45"], table["45"].enthalpy - low_turbine_work(table))
        leaves = replace(leaves, total_pressure=table["5"].total_pressure)
        low = given["low_pressure_turbine"]["polytropic"] * law_of_turbine(ratio["low"] ** 0.5)
        close(polytropic_expansion(table["45"], leaves), low, 1e-8)


def test_what_falls_off_is_in_the_account(falling_state: EngineState) -> None:
    """Unburnt fuel and the drag of the shafts, from the stations alone."""
    account, design = falling_state.energy, TURBOFAN["combustor"]["efficiency"]
    assert account is not None
    bypassing = sum(TURBOFAN["cooling"].values()) + 0.01

    burnt = []
    for member, table in enumerate(tables(falling_state)):
        burnt.append(combustion_efficiency(table, bypassing))
        heat = LOWER_HEATING_VALUE * table["4"].fuel
        close(float(account.unburnt_fuel[member]), (1.0 - burnt[-1]) * heat, 1e-7)
        given = table["41"].power - table["44"].power + low_turbine_work(table) * table["45"].flow
        taken = (
            table["3"].power - table["25"].power
            + table["21"].power + table["13"].power - table["2"].power
            + table["25"].power - table["21"].power
            + 60e3
        )  # fmt: skip
        close(float(account.mechanical_loss[member]), given - taken, 1e-6)

    assert burnt[-1] == pytest.approx(design, rel=EXACT)
    assert min(burnt) < design
    assert max(burnt) < design + 1e-3
