"""What surrounds an engine, charged to it: each drag re-added from flight, air and nozzle exit."""

from __future__ import annotations

from functools import cache
from math import sqrt

import numpy as np
import pytest
from engine_files import Content, changed, load
from engine_kinds import KINDS
from plain_engine import Place, Table, expand, tables
from plain_gas import bisect

from engine.atmosphere import FlightCondition, flight_condition
from engine.cycle_engine import CycleEngine
from engine.interface import EngineState, Outcome

CAPTURE, BODY, COEFFICIENT = 0.75, 0.9, 0.06
INSTALLED: Content = {
    "installation.capture_area": f"{CAPTURE} m**2",
    "installation.afterbody_area": f"{BODY} m**2",
    "installation.afterbody_coefficient": COEFFICIENT,
}
SOLIDITY = 0.12  # where the file says nothing
RATINGS = ("maximum_afterburning", "climb", "flight_idle")


def flight() -> FlightCondition:
    return flight_condition(np.full(3, 11000.0), np.array([0.8, 1.3, 1.6]))


@cache
def engines() -> tuple[CycleEngine, CycleEngine]:
    """One clean and one installed engine of one size."""
    clean = load(KINDS["reheated"])
    return clean, load(changed(KINDS["reheated"], INSTALLED))


def states(rating: str) -> tuple[EngineState, EngineState]:
    found = tuple(engine.at_rating(flight(), rating) for engine in engines())
    assert all(np.all(state.outcome == Outcome.MET) for state in found)
    return found[0], found[1]


def exit_area(entry: Place, ambient: float) -> float:
    """[m2] of a convergent-divergent nozzle that lets a stream out at ambient pressure."""
    gas, total = entry.gas, entry.total_temperature
    wanted = gas.entropy(total) + gas.gas_constant * np.log(ambient / entry.total_pressure)
    static = bisect(lambda t: gas.entropy(t) - wanted, 0.2 * total, total)
    velocity = sqrt(2.0 * (entry.enthalpy - gas.enthalpy(static)))
    return entry.flow * gas.gas_constant * static / (ambient * velocity)


def drag(table: Table, member: int) -> float:
    """Spillage by the momentum of the spilled air, and the slope of the afterbody [N]."""
    air = flight()
    density, speed = float(air.density[member]), float(air.true_airspeed[member])
    mach, sound = float(air.mach[member]), float(air.speed_of_sound[member])
    sonic = sound * sqrt((2.0 + 0.4 * mach**2) / 2.4)
    spilled = max(density * speed * CAPTURE - table["2"].flow, 0.0) if mach > 1.0 else 0.0
    slope = BODY - exit_area(table["7"], float(air.static_pressure[member]))
    assert slope > 0.0
    return spilled * (speed - sonic) + COEFFICIENT * 0.5 * density * speed**2 * slope


@pytest.mark.parametrize("rating", RATINGS)
def test_thrust_is_less_by_the_drag(rating: str) -> None:
    clean, installed = states(rating)

    assert installed.fuel_flow == pytest.approx(clean.fuel_flow, rel=1e-9)
    lost = clean.net_thrust - installed.net_thrust
    wanted = [drag(table, member) for member, table in enumerate(tables(installed))]
    assert lost == pytest.approx(wanted, rel=1e-5)  # the exit velocity is softened
    assert installed.energy is not None
    assert np.max(np.abs(installed.energy.residual)) < 1e-9
    assert installed.energy.installation == pytest.approx(
        np.array(wanted) * flight().true_airspeed, rel=1e-5
    )


@pytest.mark.parametrize("kind", [kind for kind in KINDS if "reheated" in kind])
def test_a_lit_nozzle_opens_by_what_the_hotter_stream_needs(kind: str) -> None:
    """Throat and exit of the jet are those of the lit stream; the dry ones are far smaller."""
    engine = load(KINDS[kind])
    air = flight()
    lit = engine.at_rating(air, "maximum_afterburning")
    assert lit.evidence is not None
    _, jet = lit.evidence.path.jets["9"]

    for member, table in enumerate(tables(lit)):
        ambient = float(air.static_pressure[member])
        throat = float(jet.throat_area[member])
        assert throat == pytest.approx(expand(table["7"], ambient).area, rel=1e-8)
        wanted = exit_area(table["7"], ambient)
        assert float(jet.exit_area[member]) == pytest.approx(wanted, rel=1e-5)
        assert throat > 1.2 * engine.sizing.areas["core_nozzle"]


def test_a_feathered_propeller_drags_a_dead_turboprop() -> None:
    """A tenth of solidity, disc and dynamic pressure, beside what the windmilling core drags."""
    engine = load(KINDS["turboprop"])
    air = flight_condition(np.array([0.0, 3000.0, 6000.0]), np.array([0.25, 0.35, 0.5]))
    state = engine.windmilling(air)
    assert np.all(state.outcome == Outcome.MET)
    assert state.evidence is not None
    path = state.evidence.path
    solidity = KINDS["turboprop"]["propeller"].get("solidity", SOLIDITY)
    pressure = 0.5 * air.density * air.true_airspeed**2
    propeller = 0.1 * solidity * 0.25 * np.pi * 3.6**2 * pressure

    (_, jet), entry = path.jets["9"], path.stations["2"]
    core = jet.gross_thrust - entry.mass_flow * air.true_airspeed

    assert state.net_thrust == pytest.approx(core - propeller, rel=1e-9)
    assert state.energy is not None
    assert state.energy.propeller_loss == pytest.approx(propeller * air.true_airspeed, rel=1e-9)
