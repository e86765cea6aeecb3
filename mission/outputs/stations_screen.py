"""One engine at one flight condition: thrust, stations, limits, and where its energy goes."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from rich.console import Group, RenderableType
from rich.table import Table
from rich.text import Text

from engine.energy import EnergyAccount
from engine.finished import why_unphysical
from engine.installation.pod import Pod
from engine.interface import Coverage, EngineState, Outcome, Station
from mission.outputs.page import (
    WIDEST,
    Column,
    caution,
    fold,
    note,
    pairs,
    ruled_table,
    section,
    words,
)
from mission.outputs.records import BINDS, limit_shares
from mission.outputs.units import ABSENT, METRIC, Scale, flight_level, number
from mission.outputs.wording import day_in_words, in_plain_words

Array = NDArray[np.float64]
# Where each station of SAE AS755 is, in words, by the stream it belongs to.
_COLD = {
    "0": "free stream",
    "2": "engine face",
    "21": "fan exit, core side",
    "25": "high-pressure compressor entry",
    "3": "compressor delivery",
}
_HOT = {
    "4": "combustor exit, turbine entry",
    "41": "turbine rotor entry",
    "44": "high-pressure turbine exit",
    "45": "low-pressure or power turbine entry",
    "5": "last turbine's exit",
    "6": "core side of the mixer",
    "64": "mixer exit",
    "7": "core nozzle entry",
    "8": "core nozzle throat",
    "9": "core nozzle exit",
}
_BYPASS = {
    "13": "fan exit, bypass side",
    "16": "bypass side of the mixer",
    "17": "bypass nozzle entry",
    "18": "bypass nozzle throat",
    "19": "bypass nozzle exit",
}
_STREAMS = {"cold stream": _COLD, "hot stream": _HOT, "bypass": _BYPASS}
_JETS = {"9": "core jet", "19": "bypass jet"}
_FORCE, _CONSUMPTION = METRIC.force, METRIC.specific_fuel_consumption


@dataclass(frozen=True)
class Question:
    """What was asked of an engine: a rating by name, or a net thrust [N] below it.

    ``coverage`` is where alone it can be asked, if it is a table; ``doubt`` what to keep in mind of
    its answers, empty where there is nothing.
    """

    engine: str
    rating: str
    thrust: float | None = None
    coverage: Coverage | None = None
    doubt: str = ""

    @property
    def in_words(self) -> str:
        """The question, for a heading."""
        name = in_plain_words(self.rating)
        if self.thrust is None:
            return (
                name if self.rating.endswith("idle") or name == "windmilling" else f"{name} rating"
            )
        return f"{_kilonewtons(self.thrust)} asked for under {name} rating"


def stations_screen(
    state: EngineState, question: Question, pod: Pod | None = None, *, width: int = 100
) -> Group:
    """Everything known of the engine at this point, the answer first."""
    flight = state.flight
    level = flight_level(float(flight.pressure_altitude))
    parts: list[RenderableType] = [
        Text(question.engine, "bold"),
        Text(
            f"one engine at FL{level}, Mach {float(flight.mach):.3f}, "
            f"{day_in_words(float(flight.temperature_deviation))}"
            f"{', the day of its table' * (question.coverage is not None)}, {question.in_words}"
        ),
        Text(),
    ]
    remark = flag_in_words(state, question)
    if remark:
        parts += [Text(remark, "bold"), Text()]
    if question.doubt:
        parts += [Text(f"Doubt: {question.doubt}."), Text()]
    if state.unanswered_count:
        return Group(*parts[:-1], caution())
    parts.append(pairs(_answer(state), strong=True))
    if state.stations:
        parts.append(section("Stations after SAE AS755", _stations(state, is_wide=width >= WIDEST)))
    else:
        parts.append(section("Stations", note("this kind of engine has none")))
    if limit_shares(state):
        parts.append(section("Limits", _limits(state)))
    if state.energy is not None:
        parts.append(section("Where the fuel's power goes", *_energy(state.energy)))
    if pod is not None:
        parts.append(section("Size of the engine in its nacelle", *_pod(pod)))
    return Group(*parts, caution())


def is_short_of_thrust(state: EngineState) -> bool:
    """Whether the engine cannot do what was asked."""
    return int(state.outcome) in (
        Outcome.BEYOND_RATING,
        Outcome.NOT_CONVERGED,
        Outcome.UNPHYSICAL,
        Outcome.OUTSIDE_TABLE,
    )


def flag_in_words(state: EngineState, question: Question) -> str:
    """What is wrong with the demand, empty where it is met."""
    outcome, there = Outcome(int(state.outcome)), float(state.net_thrust)
    name = in_plain_words(question.rating)
    if outcome == Outcome.BEYOND_RATING and question.thrust is not None:
        short = question.thrust - there
        return (
            f"Beyond the rating: {_kilonewtons(question.thrust)} is asked for and {name} gives "
            f"{_kilonewtons(there)}, {_kilonewtons(short)} less "
            f"({number(100.0 * short / question.thrust, 1)} %). Shown is what there is."
        )
    if outcome == Outcome.AT_IDLE and question.thrust is not None:
        return (
            f"Below idle: {_kilonewtons(question.thrust)} is asked for and flight idle gives "
            f"{_kilonewtons(there)}. Shown is flight idle."
        )
    if outcome in (Outcome.NOT_CONVERGED, Outcome.UNPHYSICAL):
        why = "finds no balance" if outcome == Outcome.NOT_CONVERGED else "has no physical state"
        cause = f": {found}" if (found := str(why_unphysical(state))) else ""
        return f"No answer: the engine {why} at this altitude, speed and demand{cause}."
    if outcome == Outcome.OUTSIDE_TABLE and question.coverage is not None:
        return f"No answer outside the engine's table: {_outside(state, question.coverage)}."
    return ""


def _outside(state: EngineState, table: Coverage) -> str:
    """By what the flight condition lies outside a table, with value and range."""
    flight, (low, high), (slow, fast) = state.flight, table.pressure_altitude, table.mach
    altitude, mach = float(flight.pressure_altitude), float(flight.mach)
    day = float(flight.temperature_deviation)
    found = []
    if table.is_beyond(flight.pressure_altitude, table.pressure_altitude):
        found.append(f"pressure altitude is {altitude:g} m and it holds {low:g} to {high:g} m")
    if table.is_beyond(flight.mach, table.mach):
        found.append(f"Mach number is {mach:g} and it holds {slow:g} to {fast:g}")
    if not table.is_day(flight.temperature_deviation):
        theirs = day_in_words(table.temperature_deviation)
        found.append(f"the day is {day_in_words(day)} and it is of {theirs}")
    return "; ".join(found)


def _kilonewtons(force: float) -> str:
    return Scale.of(_FORCE, [force]).full(force)


def _answer(state: EngineState) -> list[tuple[str, str]]:
    thrust, flow = float(state.net_thrust), float(state.fuel_flow)
    consumption = float(state.specific_fuel_consumption)
    if np.isfinite(consumption):
        sfc = f"{number(consumption / _CONSUMPTION.size, 2)} {_CONSUMPTION.name}"
    else:
        sfc = f"{ABSENT} as there is no positive thrust"
    rows = [
        ("net thrust", f"{_kilonewtons(thrust)}{_binding(state)}"),
        ("fuel flow", f"{flow:.4f} kg/s ({number(flow * 3600.0, 1)} kg/h)"),
        ("specific fuel consumption", sfc),
    ]
    if state.stations:
        if "13" in state.stations:
            rows.append(("bypass ratio", number(float(state.bypass_ratio), 2)))
        rows += _propeller(state)
        rows += [
            ("overall pressure ratio", number(float(state.overall_pressure_ratio), 2)),
            ("turbine entry temperature",
             f"{number(float(state.turbine_entry_temperature), 0)} K"),
        ]  # fmt: skip
    if state.energy is not None and flow > 0.0 and thrust > 0.0:
        thermal, propulsive, overall = (
            number(100.0 * float(part), 1)
            for part in (
                state.energy.thermal_efficiency,
                state.energy.propulsive_efficiency,
                state.energy.overall_efficiency,
            )
        )
        rows.append(
            ("efficiencies", f"thermal {thermal} %, propulsive {propulsive} %, overall {overall} %")
        )
    return rows


def _propeller(state: EngineState) -> list[tuple[str, str]]:
    """What a propeller takes and gives, if the engine has one."""
    work = None if state.evidence is None else state.evidence.path.propeller
    if work is None:
        return []
    power, thrust = float(work.shaft_power.item()), float(work.thrust.item())
    useful = thrust * float(state.flight.true_airspeed)
    share = f", efficiency {number(100.0 * useful / power, 1)} %" if power > 0.0 < useful else ""
    told = f"{number(power / 1e3, 0)} kW, of it {_kilonewtons(thrust)} of thrust{share}"
    return [("propeller shaft power", told)]


def _binding(state: EngineState) -> str:
    """Which limit holds the thrust, or which stands nearest."""
    name = str(state.binding_limit_names)
    shares = limit_shares(state)
    if name not in shares or int(state.outcome) == Outcome.AT_IDLE:
        return ""
    share = shares[name]
    if abs(share - 1.0) < BINDS:
        return f", held by {in_plain_words(name)}"
    return f", no limit binds; {in_plain_words(name)} is nearest, at {number(100.0 * share, 1)} %"


def _stations(state: EngineState, *, is_wide: bool) -> Table:
    """A row a station, by stream in flow order; a narrow screen leaves velocity out."""
    shown = [c for c in _CELLS if is_wide or c.header != _VELOCITY]
    table = ruled_table(
        [
            words("station", is_wrapped=False),
            words("where"),
            *(Column(c.header) for c in shown),
        ],
        gap=1,
    )
    for stream, places in _STREAMS.items():
        rows = [(n, station) for n, station in state.stations.items() if n in places]
        if rows:
            table.add_row("", f"{stream}:")
        for n, station in rows:
            place = places[n] if is_wide else fold(places[n], _NARROW_NAME)
            table.add_row(n, place, *(c.text(station) for c in shown))
    known = {n for places in _STREAMS.values() for n in places}
    for n, station in state.stations.items():
        if n not in known:
            table.add_row(n, "", *(c.text(station) for c in shown))
    return table


@dataclass(frozen=True)
class _Cell:
    """A quantity of a station: its header, name, unit size and decimals."""

    header: str
    name: str
    size: float
    decimals: int

    def text(self, station: Station) -> str:
        """The cell, absent where the station does not have the quantity."""
        value: Array | None = getattr(station, self.name)
        if value is None:
            return ABSENT
        is_plain_zero = self.name == "fuel_air_ratio" and float(value) == 0.0
        return number(float(value) / self.size, 0 if is_plain_zero else self.decimals)


_VELOCITY = "velocity\nm/s"
_NARROW_NAME = 25  # characters for a place at 80 columns
_CELLS = (
    _Cell("total\nK", "total_temperature", 1.0, 1),
    _Cell("total\nkPa", "total_pressure", 1000.0, 2),
    _Cell("static\nK", "static_temperature", 1.0, 1),
    _Cell("static\nkPa", "static_pressure", 1000.0, 2),
    _Cell("flow\nkg/s", "mass_flow", 1.0, 3),
    _Cell("fuel-air\nratio", "fuel_air_ratio", 1.0, 5),
    _Cell(_VELOCITY, "velocity", 1.0, 1),
)


def _limits(state: EngineState) -> Table:
    """Value over bound of every limit; at idle the bounds are floors."""
    table = ruled_table([words("limit"), Column("of its bound\n%")])
    shares = limit_shares(state)
    binding = str(state.binding_limit_names)
    for name, share in sorted(shares.items(), key=lambda item: abs(item[1] - 1.0)):
        holds = name == binding and abs(share - 1.0) < BINDS
        label = in_plain_words(name) + (" (binds)" if holds else "")
        table.add_row(label, number(100.0 * share, 1))
    return table


def _energy(account: EnergyAccount) -> list[RenderableType]:
    """Terms in kW and as shares of the fuel's power, which stands first."""
    fuel = float(account.fuel)
    heat = float(sum(account.jet_heat.values()) + account.intake_heat)
    terms = [
        ("fuel: heating value and the speed it is carried at", fuel),
        ("thrust power, net thrust times flight speed", float(account.thrust)),
        *((f"kinetic energy left in the {_JETS.get(name, f'jet at {name}')}", float(power))
          for name, power in account.jet_kinetic.items()),
        ("heat of the jets above that of the air taken in", heat),
        ("customer bleed", float(account.bleed)),
        ("shaft power taken off", float(account.shaft)),
        ("mechanical and gearbox loss", float(account.mechanical_loss)),
        ("unburnt fuel", float(account.unburnt_fuel)),
    ]  # fmt: skip
    for name, power in (
        ("propeller: blade drag and what the slipstream keeps", float(account.propeller_loss)),
        ("spillage and afterbody drag", float(account.installation)),
    ):
        if power != 0.0:
            terms.append((name, power))
    table = ruled_table([words("term"), Column("kW"), Column("of fuel\n%")])
    for name, power in terms:
        share = number(100.0 * power / fuel, 2) if fuel > 0.0 else ABSENT
        table.add_row(name, number(power / 1000.0, 1), share)
    closes = abs(float(account.residual))
    return [table, note(f"The terms below the first add up to it within {closes:.0e} of it.")]


_POD_ROWS = (
    ("fan_diameter", "fan or compressor face, diameter", "m", 3),
    ("length", "nacelle, length", "m", 2),
    ("maximum_diameter", "nacelle, greatest diameter", "m", 2),
    ("dry_mass", "mass, dry and bare", "kg", 0),
    ("installed_mass", "mass, installed", "kg", 0),
    ("wetted_area", "nacelle, wetted area", "m2", 2),
    ("drag_area", "skin friction drag over dynamic pressure", "m2", 4),
)


def _pod(pod: Pod) -> list[RenderableType]:
    """What hangs under the wing, each with where it came from."""
    table = ruled_table([words("quantity"), Column("value"), words("unit"), words("from")])
    for key, name, unit, decimals in _POD_ROWS:
        table.add_row(name, number(getattr(pod, key), decimals), unit, pod.origins[key])
    return [table, *(note(f"Doubt: {doubt}.") for doubt in pod.doubts)]
