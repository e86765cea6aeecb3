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

from engine.atmosphere import flight_condition
from engine.cycle_engine import CycleEngine
from engine.interface import Outcome

MEMBERS = 4096
ALLOWED = 60.0  # states of the gas library for each matched engine state
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


def test_a_matched_state_costs_less_than_sixty_library_states(turbofan: CycleEngine) -> None:
    generator = np.random.default_rng(1)
    flight = flight_condition(
        generator.uniform(0.0, 12500.0, MEMBERS), generator.uniform(0.2, 0.85, MEMBERS)
    )
    most = turbofan.at_rating(flight, "climb").net_thrust
    least = turbofan.at_rating(flight, "flight_idle").net_thrust
    wanted = least + generator.uniform(0.1, 0.95, MEMBERS) * (most - least)
    gas, temperatures = library_gas(), generator.uniform(250.0, 1800.0, 2000)

    engine_time, library_time = shortest(
        9, lambda: turbofan.at_thrust(flight, wanted), lambda: ask_library(gas, temperatures)
    )
    engine_time, library_time = engine_time / MEMBERS, library_time / temperatures.size

    state = turbofan.at_thrust(flight, wanted)
    assert np.all(state.outcome == Outcome.MET)
    print(
        f"\nmatched turbofan state, cold, one of {MEMBERS}: {engine_time * 1e6:.1f} microseconds; "
        f"library state: {library_time * 1e6:.2f} microseconds; "
        f"ratio {engine_time / library_time:.1f}, allowed {ALLOWED:g}; "
        f"iterations {float(np.mean(state.iterations)):.1f}"
    )
    assert engine_time <= ALLOWED * library_time
