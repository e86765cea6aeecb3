"""What a matched engine state costs, in states of a general gas library asked one by one.

Run by name: ``pytest tests/benchmarks --override-ini addopts= -s``; a busy machine slows both
sides alike.
"""

from __future__ import annotations

import time
from collections.abc import Callable

import cantera
import numpy as np
from plain_gas import JOINT, SPECIES, moles

from engine.atmosphere import FlightCondition, flight_condition
from engine.cycle_engine import CycleEngine
from engine.fuels import KEROSENE
from engine.gas import RealGas
from engine.interface import Outcome
from engine.options.fit_points import DEMAND, FitPoints
from engine.options.fitting import fit
from engine.options.loading import engine_from_content, load_engine
from mission.library import find

MEMBERS = 10000
ALLOWED, ALLOWED_WARM = 60.0, 30.0  # states of the gas library for a matched engine state
ALLOWED_FIT = 40.0  # matched states asked one by one
WORK = 2e5  # [J/kg] what a part of an engine adds or takes


def shortest(rounds: int, *calls: Callable[[], object]) -> list[float]:
    """Shortest time [s] of each call, asked in turns: what it costs without the machine's noise."""
    best = [float("inf")] * len(calls)
    for _ in range(rounds):
        for place, call in enumerate(calls):
            begin = time.perf_counter()
            call()
            best[place] = min(best[place], time.perf_counter() - begin)
    return best


def library_gas() -> cantera.Solution:
    atoms = {"N2": "{N: 2}", "O2": "{O: 2}", "Ar": "{Ar: 1}", "CO2": "{C: 1, O: 2}"}
    atoms["H2O"] = "{H: 2, O: 1}"
    species = "".join(
        f"- name: {name}\n  composition: {atoms[name]}\n  thermo:\n    model: NASA9\n"
        f"    temperature-ranges: [200.0, {JOINT}, 6000.0]\n"
        f"    data:\n    - {low}\n    - {high}\n"
        for name, (_, low, high) in SPECIES.items()
    )
    phase = "phases:\n- name: gas\n  thermo: ideal-gas\n  elements: [N, O, Ar, C, H]\n"
    gas = cantera.Solution(yaml=f"{phase}  species: [{', '.join(SPECIES)}]\nspecies:\n{species}")
    gas.TPX = 300.0, 1e5, moles(0.02, 23.0 / 12.0)
    return gas


def ask_library(gas: cantera.Solution, temperatures: np.ndarray) -> None:
    """Enthalpy and entropy of each temperature, and the temperature after a part's work."""
    for temperature in temperatures:
        gas.TP = temperature, 1e5
        enthalpy = gas.enthalpy_mass
        _ = gas.entropy_mass
        gas.HP = enthalpy + WORK, 1e5
        _ = gas.T


def conditions(count: int) -> tuple[FlightCondition, np.random.Generator]:
    """Mixed flight conditions of an envelope."""
    generator = np.random.default_rng(1)
    flight = flight_condition(
        generator.uniform(0.0, 12500.0, count), generator.uniform(0.2, 0.85, count)
    )
    return flight, generator


def test_a_matched_state_costs_less_than_sixty_library_states(turbofan: CycleEngine) -> None:
    flight, generator = conditions(MEMBERS)
    most = turbofan.at_rating(flight, "climb").net_thrust
    least = turbofan.at_rating(flight, "flight_idle").net_thrust
    wanted = least + generator.uniform(0.1, 0.95, MEMBERS) * (most - least)
    near = turbofan.at_thrust(flight, 0.98 * wanted).unknowns
    gas, temperatures = library_gas(), generator.uniform(250.0, 1800.0, 2000)

    cold, warm, library = shortest(
        7,
        lambda: turbofan.at_thrust(flight, wanted),
        lambda: turbofan.at_thrust(flight, wanted, start=near),
        lambda: ask_library(gas, temperatures),
    )
    cold, warm, library = cold / MEMBERS, warm / MEMBERS, library / temperatures.size

    state = turbofan.at_thrust(flight, wanted)
    assert np.all(state.outcome == Outcome.MET)
    print(
        f"\nmatched turbofan state, one of {MEMBERS}: cold {cold * 1e6:.1f} microseconds, "
        f"{cold / library:.1f} library states (allowed {ALLOWED:g}); warm, from 2 % less thrust, "
        f"{warm * 1e6:.1f}, {warm / library:.1f} (allowed {ALLOWED_WARM:g}); library state: "
        f"{library * 1e6:.2f}; iterations {float(np.mean(state.iterations)):.1f}"
    )
    assert cold <= ALLOWED * library
    assert warm <= ALLOWED_WARM * library


def test_gas_properties_cost_a_third_of_the_librarys() -> None:
    """Enthalpy, entropy and temperature from enthalpy, of 20,000 states."""
    generator, gas = np.random.default_rng(2), RealGas(KEROSENE)
    temperatures, ratios = generator.uniform(250.0, 1900.0, 20000), np.full(20000, 0.02)

    def ask() -> None:
        enthalpy = gas.enthalpy(temperatures, ratios)
        gas.entropy(temperatures, ratios)
        gas.temperature_from_enthalpy(enthalpy + WORK, ratios)

    library = library_gas()
    own, theirs = shortest(7, ask, lambda: ask_library(library, temperatures[:2000]))
    own, theirs = own / temperatures.size, theirs / 2000
    print(
        f"\ngas state, one of 20,000: {own * 1e6:.3f} microseconds; library state: "
        f"{theirs * 1e6:.2f}; {theirs / own:.1f} times cheaper, at least 3 wanted"
    )
    assert theirs >= 3.0 * own


def test_a_fit_from_four_numbers_costs_less_than_forty_states() -> None:
    """A brochure written out, and fitted to a cruise point too, in states asked one by one."""
    brochure = {
        "kind": "brochure",
        "name": "four numbers",
        "static_thrust": "120 kN",
        "static_specific_fuel_consumption": "9.6 mg/N/s",
        "bypass_ratio": 5.1,
        "overall_pressure_ratio": 30.0,
    }
    at = [np.array([value]) for value in (10668.0, 0.8, 0.0)]
    cruise = (np.array([DEMAND]), np.array([20e3]), np.array([0.34]))
    points = FitPoints("points.csv", np.array([2]), *at, *cruise)
    engine = load_engine(find("bypass_5", "engine"))
    flight = flight_condition(10668.0, 0.78)
    single, written, fitted = shortest(
        7,
        lambda: engine.at_thrust(flight, 8000.0),
        lambda: engine_from_content(brochure, "brochure.toml"),
        lambda: fit(brochure, "brochure.toml", points),
    )
    print(
        f"\nengine from four numbers: {written * 1e3:.1f} ms, {written / single:.1f} matched "
        f"states of {single * 1e3:.2f} ms; fitted to a cruise point too {fitted * 1e3:.1f} ms, "
        f"{fitted / single:.1f}, allowed {ALLOWED_FIT:g}"
    )
    assert fitted <= ALLOWED_FIT * single
