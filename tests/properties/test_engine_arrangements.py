"""Twenty states of every kind of engine, re-checked from their station tables in plain Python.

As ``test_engine_stations.py`` does for the turbofan and the turbojet: what enters and leaves each
part, what each shaft gives and takes, and the capacities that a built engine keeps from state to
state. Efficiencies are held at those of the design point, so that they can be read off the tables.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache
from math import pi, sqrt
from typing import Any

import numpy as np
import pytest
from engine_files import Content, changed, load
from engine_kinds import KINDS
from plain_engine import (
    EXACT,
    LOWER_HEATING_VALUE,
    Place,
    Table,
    check_joining,
    close,
    combustion_efficiency,
    expand,
    in_area,
    polytropic_compression,
    polytropic_expansion,
    spread,
    tables,
    turbine_capacity,
    with_enthalpy,
)
from plain_gas import bisect

from engine.atmosphere import flight_condition
from engine.cycle_engine import CycleEngine
from engine.interface import EngineState, Outcome

STATES = 20
CHECKED = [kind for kind in KINDS if kind not in ("turbofan", "turbojet")]
REHEATED = ("reheated", "mixed reheated")
MIXED = ("mixed", "part mixed", "mixed reheated")
# The thrust's exit velocity is softened near a nozzle pressure ratio of one; idling jets are there.
SOFT = 2e-6


@dataclass(frozen=True)
class Case:
    """A kind with its file's content, its engine, and its states as plain tables."""

    content: Content
    engine: CycleEngine
    state: EngineState
    tables: list[Table]

    def given(self, key: str) -> Any:
        """A dotted key of the file; 0 where it says nothing."""
        table: Any = self.content
        for name in key.split("."):
            table = table.get(name, 0.0) if isinstance(table, dict) else 0.0
        return table

    def loss(self, key: str) -> float:
        """What a dotted key of a loss leaves."""
        return 1.0 - float(self.given(key))

    @property
    def speeds(self) -> np.ndarray:
        return self.state.flight.true_airspeed

    @property
    def ambient(self) -> np.ndarray:
        return self.state.flight.static_pressure


@cache
def case(kind: str) -> Case:
    """States between idle and the highest rating anywhere; reheated ones partly and fully lit."""
    content = changed(KINDS[kind], {"efficiencies.away_from_design": "constant"})
    engine, generator = load(content), np.random.default_rng(11)
    altitude, mach = (9000.0, 0.65) if kind == "turboprop" else (12500.0, 0.9)
    flight = flight_condition(
        generator.uniform(0.0, altitude, STATES),
        generator.uniform(0.05, 1.5 if kind in REHEATED else mach, STATES),
        generator.uniform(-15.0, 25.0, STATES),
    )
    top = engine.ratings[-1] if kind in REHEATED else "take_off"
    most = engine.at_rating(flight, top).net_thrust
    least = engine.at_rating(flight, "flight_idle").net_thrust
    share = generator.uniform(0.05, 0.98, STATES)
    state = engine.at_thrust(flight, least + share * (most - least), rating=top)
    assert np.all(state.outcome == Outcome.MET)
    return Case(content, engine, state, tables(state))


def shaft_power(found: Case) -> float:
    """[W] taken off by the customer."""
    return 1e3 * float(found.given("off_takes.shaft_power").removesuffix(" kW"))


def core_entry(table: Table) -> Place:
    return table.get("25", table["2"])


def tapped(found: Case, table: Table, part: str) -> float:
    """Enthalpy [J/kg] of cooling air taken at a share of the compressor's rise."""
    rise = float(found.given(f"cooling.{part}_rise") or 1.0)
    delivery, entry = table["3"].enthalpy, core_entry(table).enthalpy
    return delivery - (1.0 - rise) * (delivery - entry)


def cooling(found: Case, table: Table, part: str) -> float:
    """Flow [kg/s] of cooling air."""
    return float(found.given(f"cooling.{part}_fraction")) * table["3"].flow


@pytest.mark.parametrize("kind", CHECKED)
def test_flows_and_heat(kind: str) -> None:
    found = case(kind)
    parts = ("vane", "rotor", "downstream")
    bleed = float(found.given("off_takes.customer_bleed_fraction"))
    for member, table in enumerate(found.tables):
        bypassing = bleed + sum(cooling(found, table, part) for part in parts) / table["3"].flow
        close(combustion_efficiency(table, bypassing), found.given("combustor.efficiency"))
        close(table["4"].total_pressure, 0.95 * table["3"].total_pressure)
        close(table["3"].flow, core_entry(table).flow)
        if "13" in table:
            close(table["2"].flow, table["13"].flow + table["21"].flow)
        check_joining(table["4"], table["41"], table["3"], cooling(found, table, "vane"))
        last = table["41"].flow + cooling(found, table, "rotor")
        close(table["5"].flow, last + cooling(found, table, "downstream"))
        close(table["5"].fuel, table["4"].fuel)
        out = table["9"].flow + (table["19"].flow if "19" in table else 0.0)
        fuel = float(found.state.fuel_flow[member])
        close(out, table["2"].flow + fuel - bleed * table["3"].flow)
        close(table["9"].fuel, fuel)


@pytest.mark.parametrize("kind", CHECKED)
def test_high_pressure_spool(kind: str) -> None:
    found = case(kind)
    efficiencies = found.content["efficiencies"]
    for table in found.tables:
        entry, delivery = core_entry(table), table["3"]
        part = efficiencies.get("high_pressure_compressor") or efficiencies["compressor"]
        close(polytropic_compression(entry, delivery), part["polytropic"])
        taken = delivery.power - entry.power + shaft_power(found)
        for part in ("rotor", "downstream"):
            unspent = delivery.enthalpy - tapped(found, table, part)
            taken -= cooling(found, table, part) * unspent
        behind = table.get("44")
        if behind is None:  # cooling air has joined already
            given = table["41"].power - table["5"].power
            for part in ("rotor", "downstream"):
                given += cooling(found, table, part) * tapped(found, table, part)
        else:
            given = table["41"].power - behind.power
            turbine = efficiencies.get("high_pressure_turbine") or efficiencies["turbine"]
            close(polytropic_expansion(table["41"], behind), turbine["polytropic"])
            joined = cooling(found, table, "rotor")
            close(table["45"].power, behind.power + joined * tapped(found, table, "rotor"))
        close(given * 0.99, taken)


def last_turbine(found: Case, table: Table) -> Place:
    """Exit of the low-pressure or power turbine before cooling air joins it."""
    air = cooling(found, table, "downstream") * tapped(found, table, "downstream")
    bare = (table["5"].power - air) / table["45"].flow
    exit_ = with_enthalpy(table["45"], bare)
    return Place(
        exit_.total_temperature, table["5"].total_pressure, exit_.flow, exit_.fuel_air_ratio
    )


@pytest.mark.parametrize(
    "kind", [kind for kind in CHECKED if kind not in ("reheated", "turboprop")]
)
def test_low_pressure_spool(kind: str) -> None:
    found = case(kind)
    efficiencies = found.content["efficiencies"]
    ratios = []
    for table in found.tables:
        leaves = last_turbine(found, table)
        turbine = efficiencies["low_pressure_turbine"]["polytropic"]
        close(polytropic_expansion(table["45"], leaves), turbine, 1e-8)
        given = (table["45"].power - leaves.power) * 0.99
        front = table.get("21", table.get("25"))
        fan = (front.power if front else 0.0) - table["2"].power
        fan += table["13"].power if "13" in table else 0.0
        booster = table["25"].power - front.power if front else 0.0
        close(given, fan / float(found.given("efficiencies.gearbox") or 1.0) + booster)
        first = efficiencies.get("fan") or efficiencies["low_pressure_compressor"]
        outer = table.get("13", table["25"])
        close(polytropic_compression(table["2"], outer), first["polytropic"], 1e-8)
        rise = outer.enthalpy - table["2"].enthalpy
        ratios.append((table["25"].enthalpy - table["2"].enthalpy) / rise)

    # Hub and booster turn with the fan; round-off of 300 kJ/kg over what an idling fan adds.
    assert spread(ratios) < 1e-8


def test_hub_of_the_geared_fan() -> None:
    found = case("geared")
    for table in found.tables:
        close(polytropic_compression(table["2"], table["21"]), 0.9, 1e-8)
        assert table["21"].total_pressure < table["13"].total_pressure


@pytest.mark.parametrize("kind", CHECKED)
def test_capacities_stay(kind: str) -> None:
    """Turbines from all states, nozzle throats from those that are dry."""
    found = case(kind)
    capacities: dict[str, list[float]] = {}
    for table, ambient, reheat in zip(found.tables, found.ambient, lit(found), strict=True):
        behind = table.get("44", table["5"]).total_pressure
        here = {"high": turbine_capacity(table["41"], behind, 0.5)}
        if "45" in table:
            here["low"] = turbine_capacity(table["45"], table["5"].total_pressure, 0.0)
        if not reheat:
            here["core nozzle"] = expand(table["7"], float(ambient)).area
        if "17" in table:
            here["bypass nozzle"] = expand(table["17"], float(ambient)).area
        for name, value in here.items():
            capacities.setdefault(name, []).append(value)

    assert {name: spread(values) < EXACT for name, values in capacities.items()} == dict.fromkeys(
        capacities, True
    )
    assert min(map(len, capacities.values())) > 3


def lit(found: Case) -> list[bool]:
    """Whether the afterburner burns."""
    return [table["7"].fuel > table["5"].fuel * (1.0 + 1e-12) for table in found.tables]


@pytest.mark.parametrize("kind", MIXED)
def test_mixer(kind: str) -> None:
    found = case(kind)
    areas = {name: found.engine.sizing.areas[f"mixer_{name}"] for name in ("core", "bypass")}
    choked = 0
    for table in found.tables:
        core, bypass, mixed = table["6"], table["16"], table["64"]
        close(core.total_pressure, found.loss("mixer.core_pressure_loss_fraction")
              * table["5"].total_pressure)  # fmt: skip
        close(bypass.total_pressure, found.loss("mixer.bypass_pressure_loss_fraction")
              * table["13"].total_pressure)  # fmt: skip
        check_joining(core, Place(mixed.total_temperature, core.total_pressure, mixed.flow,
                                  mixed.fuel_air_ratio), bypass, bypass.flow)  # fmt: skip
        inside, around = in_area(core, areas["core"]), in_area(bypass, areas["bypass"])
        if around.is_choked:  # then it keeps a pressure of its own
            choked += 1
            assert around.pressure > inside.pressure
        else:
            close(inside.pressure, around.pressure)
        friction = found.loss("mixer.pressure_loss_fraction")
        ahead = Place(mixed.total_temperature, mixed.total_pressure / friction, mixed.flow,
                      mixed.fuel_air_ratio)  # fmt: skip
        together = in_area(ahead, sum(areas.values()))
        close(inside.impulse + around.impulse, together.impulse)

    assert choked < STATES / 2


@pytest.mark.parametrize("kind", REHEATED)
def test_afterburner(kind: str) -> None:
    found = case(kind)
    is_lit = lit(found)
    duct = found.loss("nozzle.pressure_loss_fraction")
    dry_left, lit_left = 1.0 - 0.02, 1.0 - 0.06  # the defaults of the file
    thrust = found.engine.sizing.reference_thrust
    design = found.engine.at_thrust(DESIGN[kind], thrust, rating="take_off")
    hottest = float(found.given("afterburner.temperature").removesuffix(" K"))
    before = design.stations["64" if "mixed" in kind else "5"].total_temperature
    reference = hottest / float(before) - 1.0
    for table, burns in zip(found.tables, is_lit, strict=True):
        entry, leaves = table.get("64", table["5"]), table["7"]
        fuel = leaves.fuel - entry.fuel
        close(leaves.flow, entry.flow + fuel)
        close(leaves.power, entry.power + 0.93 * LOWER_HEATING_VALUE * fuel)
        rise = leaves.total_temperature / entry.total_temperature - 1.0
        hot_loss = (1.0 - lit_left / dry_left) * rise / reference if burns else 0.0
        wanted = entry.total_pressure * duct * dry_left * (1.0 - hot_loss)
        close(leaves.total_pressure, wanted, 1e-8)

    assert 3 < sum(is_lit) < STATES - 3
    assert any(table["7"].total_temperature < 0.9 * hottest for table, burns in
               zip(found.tables, is_lit, strict=True) if burns)  # fmt: skip


DESIGN = {
    "reheated": flight_condition(0.0, 0.0),
    "mixed reheated": flight_condition(10668.0, 0.78),
}


def convergent(place: Place, ambient: float) -> float:
    """Gross thrust [N]."""
    jet = expand(place, ambient)
    return place.flow * jet.velocity + (jet.pressure - ambient) * jet.area


def expanded(place: Place, ambient: float) -> float:
    """Gross thrust [N] of a stream let out to ambient pressure."""
    gas, total = place.gas, place.total_temperature
    wanted = gas.entropy(total) + gas.gas_constant * np.log(ambient / place.total_pressure)
    static = bisect(lambda t: gas.entropy(t) - wanted, 0.2 * total, total)
    return place.flow * sqrt(2.0 * (place.enthalpy - gas.enthalpy(static)))


def jets(kind: str, found: Case, table: Table, ambient: float) -> float:
    """Gross thrust [N] by hand."""
    names = ("core_nozzle", "bypass_nozzle") if "17" in table else ("nozzle",)
    factors = [float(found.given(f"{name}.gross_thrust_coefficient")) for name in names]
    if kind in REHEATED:
        return factors[0] * expanded(table["7"], ambient)
    if kind == "part mixed":
        left = table["7"].total_pressure / table["64"].total_pressure
        alone = [
            Place(there.total_temperature, there.total_pressure * left, there.flow,
                  there.fuel_air_ratio)
            for there in (table["6"], table["16"])
        ]  # fmt: skip
        unmixed = sum(convergent(there, ambient) for there in alone)
        return factors[0] * (0.8 * convergent(table["7"], ambient) + 0.2 * unmixed)
    entries = [table["7"], table["17"]] if "17" in table else [table["7"]]
    pairs = zip(factors, entries, strict=True)
    return sum(factor * convergent(there, ambient) for factor, there in pairs)


@pytest.mark.parametrize("kind", [kind for kind in CHECKED if kind != "turboprop"])
def test_thrust(kind: str) -> None:
    found = case(kind)
    for member, table in enumerate(found.tables):
        ram = table["2"].flow * float(found.speeds[member])
        by_hand = jets(kind, found, table, float(found.ambient[member])) - ram
        thrust = float(found.state.net_thrust[member])
        assert by_hand == pytest.approx(thrust, rel=0, abs=SOFT * (thrust + ram)), member


def test_power_turbine_and_propeller() -> None:
    """Power turbine, gearbox and momentum theory; the share that reaches the air stays."""
    found = case("turboprop")
    disc = 0.25 * pi * 3.6**2
    reaching = []
    for member, table in enumerate(found.tables):
        leaves = last_turbine(found, table)
        close(polytropic_expansion(table["45"], leaves), 0.88, 1e-8)
        power = 0.99 * 0.985 * (table["45"].power - leaves.power)
        ambient, speed = float(found.ambient[member]), float(found.speeds[member])
        density = float(found.state.flight.density[member])
        jet = jets("turboprop", found, table, ambient) - table["2"].flow * speed
        thrust = float(found.state.net_thrust[member]) - jet
        # T = 2 rho A v (V + v): velocity v that the disc adds.
        added = 0.5 * (sqrt(speed**2 + 2.0 * thrust / (density * disc)) - speed)
        reaching.append(thrust * (speed + added) / power)

    assert spread(reaching) < 1e-5  # the jet's thrust is softened
    design = found.engine.at_rating(flight_condition(6096.0, 0.5), "take_off")
    assert design.evidence is not None
    work = design.evidence.path.propeller
    assert work is not None
    bound = float(design.turbine_entry_temperature)
    assert bound == pytest.approx(1250.0, rel=1e-9)
    speed = float(design.flight.true_airspeed)
    assert float(work.thrust[0]) * speed == pytest.approx(
        0.85 * float(work.shaft_power[0]), rel=EXACT
    )
