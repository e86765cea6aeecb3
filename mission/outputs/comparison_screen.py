"""Engine options on one mission: the winner first, then a row an option."""

from __future__ import annotations

from rich.console import Group, RenderableType
from rich.text import Text

from mission.comparison import Comparison, mean_cruise_consumption
from mission.outputs.failure import failure_headline
from mission.outputs.margins import least_margin, room
from mission.outputs.page import (
    WIDEST,
    Column,
    caution,
    note,
    pairs,
    ruled_table,
    section,
    words,
)
from mission.outputs.segment_rows import consumption_text
from mission.outputs.setting import Setting
from mission.outputs.units import ABSENT, METRIC, Scale, Units, number, signed
from mission.outputs.wording import NOT_CHARGED, day_in_words
from mission.results import Flight


def comparison_screen(
    comparison: Comparison, setting: Setting, *, units: Units = METRIC, width: int = 100
) -> Group:
    """The ranking as a person reads it, the margins below it where the screen is narrow."""
    flights = comparison.flights
    day = day_in_words(next(iter(flights.values())).day)
    flown = {name: flight for name, flight in flights.items() if flight.flown}
    lost = {name: flight for name, flight in flights.items() if not flight.flown}
    parts: list[RenderableType] = [
        Text(comparison.mission, "bold"),
        Text(f"{comparison.aircraft}, {_engines(setting.engine_count)} of each option, {day}"),
        Text(),
        Text(verdict(comparison, units), "bold"),
    ]
    if flown:
        is_wide = width >= WIDEST
        table = _table(flown, setting, units, is_wide=is_wide)
        parts.append(section("Options by block fuel", table, note(_error(flown, units))))
        if len({flight.fuel.name for flight in flown.values()}) > 1:
            rows = [(name, _energy(flight)) for name, flight in flown.items()]
            parts.append(section("Not the same fuel: compare the heat of it", pairs(rows)))
        if not is_wide:
            rows = [(name, _least(flight)) for name, flight in flown.items()]
            parts.append(section("Least margin of each", pairs(rows)))
    if lost:
        reasons = [
            (name, failure_headline(flight.failure, units))
            for name, flight in lost.items()
            if flight.failure is not None
        ]
        parts.append(section("Options that cannot fly it", pairs(reasons)))
    return Group(*parts, Text(), note(NOT_CHARGED), caution())


def _engines(count: int) -> str:
    return "1 engine" if count == 1 else f"{count} engines"


def verdict(comparison: Comparison, units: Units = METRIC) -> str:
    """The winner and by how much, in one sentence."""
    flown = [(name, flight) for name, flight in comparison.flights.items() if flight.flown]
    if not flown:
        return "None of the options can fly it."
    name, best = flown[0]
    fuel = Scale.of(units.mass, [best.totals.block_fuel])
    burns = fuel.full(best.totals.block_fuel)
    if len(flown) == 1:
        only = (
            "the only option asked for"
            if len(comparison.flights) == 1
            else "the only one to fly it"
        )
        return f"{name} burns {burns} of block fuel, {only}."
    second, next_best = flown[1]
    lead = next_best.totals.block_fuel - best.totals.block_fuel
    share = 100.0 * lead / next_best.totals.block_fuel
    return (
        f"{name} burns least, {burns} of block fuel: {fuel.full(lead)} ({number(share, 1)} %) "
        f"less than {second}."
    )


def _energy(flight: Flight) -> str:
    """Lower heating value of the block fuel, and the fuel's name."""
    heat = flight.totals.block_fuel * flight.fuel.lower_heating_value
    return f"{number(heat / 1e9, 1)} GJ of {flight.fuel.name}"


def _error(flown: dict[str, Flight], units: Units) -> str:
    greatest = max(flight.totals.integration_error for flight in flown.values())
    error = max(greatest / units.mass.size, 0.01)
    return f"Integration errors are at most {error:.2g} {units.mass.name}."


def _table(
    flown: dict[str, Flight], setting: Setting, units: Units, *, is_wide: bool
) -> RenderableType:
    fuels = [flight.totals.block_fuel for flight in flown.values()]
    fuel, least = Scale.of(units.mass, fuels), min(fuels)
    heavy = units.gross_mass(max(flight.totals.takeoff_mass for flight in flown.values()))
    mass = Scale.of(heavy, [flight.totals.takeoff_mass for flight in flown.values()], 5)
    as_needed = setting.is_fuel_as_needed
    last = f"take-off\nmass {mass.unit.name}" if as_needed else f"fuel left\n{fuel.unit.name}"
    table = ruled_table(
        [
            words("engine", is_wrapped=False),
            Column(f"block fuel\n{fuel.unit.name}"),
            Column(f"more\n{fuel.unit.name}"),
            Column("more\n%"),
            Column(f"time\n{units.time.name}"),
            Column(f"cruise sfc\n{units.specific_fuel_consumption.name}"),
            Column(last),
            *([words("least margin")] if is_wide else []),
        ]
    )
    for name, flight in flown.items():
        total = flight.totals
        more = total.block_fuel - least
        consumption = mean_cruise_consumption(flight)
        table.add_row(
            name,
            fuel.bare(total.block_fuel),
            signed(fuel.bare(more)),
            signed(number(100.0 * more / least, 1)),
            number(total.block_time / 60.0, 1),
            consumption_text(units, consumption) if consumption else ABSENT,
            mass.bare(total.takeoff_mass) if as_needed else fuel.bare(total.fuel_left),
            *([_least(flight)] if is_wide else []),
        )
    return table


def _least(flight: Flight) -> str:
    """The margin that binds, by name, with its room and where it is."""
    margin = least_margin(flight.margins)
    if margin is None:
        return ABSENT
    where = f" in {margin.where}" if margin.where else ""
    return f"{margin.name}{where}: {number(100.0 * room(margin), 1)} %"
