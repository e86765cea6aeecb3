"""The terminal log of a flight: the answer, where the fuel went, and how far to trust it."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import replace

from rich.console import Group, RenderableType
from rich.table import Table
from rich.text import Text

from engine.fuels import KEROSENE
from mission.known import known_against_flown
from mission.outputs.assumptions import assumed_by_file
from mission.outputs.failure import failure_headline, failure_statement, limit_scale
from mission.outputs.field_section import field_sections
from mission.outputs.held_by import holders
from mission.outputs.known_words import against_flown
from mission.outputs.margins import least_margin, room
from mission.outputs.page import (
    WIDEST,
    Column,
    apart,
    bullets,
    caution,
    note,
    pairs,
    ruled_table,
    section,
    words,
)
from mission.outputs.partial import fails_on_the_way, flown_segments
from mission.outputs.reserve_section import reserve_section
from mission.outputs.segment_rows import Scales, scales_of, segment_tables
from mission.outputs.setting import Setting
from mission.outputs.step_rows import step_sections
from mission.outputs.units import METRIC, Scale, Units, number, signed
from mission.outputs.way_sections import way_sections
from mission.outputs.wording import TIMES, day_in_words, hours_and_minutes
from mission.results import CrossCheck, Flight

_KEY = (
    "FL flight level, sfc specific fuel consumption, L/D lift-to-drag ratio, SAR specific air "
    "range: at the end of the segment. Thrust is a share of the segment's rating."
)
_LEAST_ERROR = 0.01  # kg; what is below is said to be below
_SMALL_CAUSE = 10.0  # kg; smaller ones are shown with decimals


def flight_log(
    flight: Flight,
    setting: Setting,
    *,
    units: Units = METRIC,
    width: int = 100,
    with_steps: bool = False,
) -> Group:
    """Everything that a person reads about one flight, laid out for a width in characters."""
    scales = scales_of(flight, units)
    shown = flown_segments(flight)
    on_the_way = fails_on_the_way(flight)
    if on_the_way and flight.failure is not None:
        last = shown[-1]
        shown = (*shown[:-1], replace(last, name=f"{last.name}, to step {flight.failure.step}"))
    tables = segment_tables(flight, shown, scales, width, with_total=not on_the_way)
    parts: list[RenderableType] = [
        _heading(flight, setting, units),
        _answer(flight, setting, scales),
        section(_rows_title(flight), *apart(tables), note(_KEY)),
    ]
    if with_steps:
        parts += step_sections(shown, scales, width)
    parts += way_sections(flight, shown, scales)
    if not on_the_way:
        parts += [reserve_section(flight, scales), _totals(flight, scales, width)]
    if flight.cross_check:
        parts.append(_cross_check(flight, scales, width))
    if not on_the_way:
        parts.append(_margins(flight, units, width))
    parts += field_sections(flight.field, units, width)
    if flight.failure is not None:
        parts.append(
            section("Why it cannot be flown", pairs(failure_statement(flight, units, scales)))
        )
    held = list(holders(shown))
    if held:
        parts.append(section("What holds the engine's thrust", pairs(held)))
    parts.append(section("Assumed, as no file states it", pairs(assumed_by_file(flight.assumed))))
    if flight.warnings:
        parts.append(section("Warnings", bullets(flight.warnings)))
    return Group(*parts, caution())


def _heading(flight: Flight, setting: Setting, units: Units) -> Group:
    payload = Scale.of(units.mass, [setting.payload]).full(setting.payload)
    air = f"{day_in_words(flight.day)}, still air"
    if setting.air_changes:
        air = f"day and wind by {setting.air_changes}"
    elif setting.headwind:
        wind = Scale.of(units.speed, [setting.headwind], 2).full(abs(setting.headwind))
        kind = "headwind" if setting.headwind > 0.0 else "tailwind"
        air = f"{day_in_words(flight.day)}, {kind} {wind}"
    engine = f"{setting.engine_count} {TIMES} {flight.engine}"
    stores = "".join(
        f", {count} {TIMES} {name.replace('_', ' ')}" for name, count in setting.stores.items()
    )
    return Group(
        Text(flight.mission, "bold"),
        Text(f"{flight.aircraft}, {engine}, payload {payload}{stores}, {air}"),
    )


def _answer(flight: Flight, setting: Setting, scales: Scales) -> Group:
    """Block fuel, time and whether the fuel is enough, with the doubt beside it."""
    if flight.failure is not None:
        reason = failure_headline(flight.failure, scales.units)
        solved = list(_solved(flight, scales))
        unsolved = solved if flight.solution and not flight.solution.has_answer else []
        return Group(Text(), Text(f"Cannot be flown: {reason}", "bold"), pairs(unsolved))
    total, fuel = flight.totals, scales.fuel
    minutes = number(total.block_time / 60.0, 1)
    way = "as needed" if setting.is_fuel_as_needed else "as given"
    verdict = (
        f"enough, fuel margin {fuel.full(total.fuel_margin)}: {fuel.full(total.loaded_fuel)} "
        f"loaded {way}, {fuel.full(total.fuel_left)} left, "
        f"{fuel.full(total.reserve_fuel)} of it reserves"
    )
    rows = [
        ("block fuel", f"{fuel.full(total.block_fuel)}, give or take {_error(flight, scales)}"),
        ("block time", f"{minutes} min ({hours_and_minutes(total.block_time)})"),
        ("fuel", verdict),
    ]
    rows = [*_solved(flight, scales), *rows]
    beside = [("doubt     ", _doubt(flight))]
    if setting.known is not None:
        met = known_against_flown(setting.known, flight)
        beside.append(("known     ", against_flown(met, scales.units)))
    return Group(Text(), pairs(rows, strong=True), pairs(beside))


def _solved(flight: Flight, scales: Scales) -> Iterable[tuple[str, str]]:
    """What was free in the mission, and the most of it that the fuel is enough for."""
    solution = flight.solution
    if solution is None:
        return
    if not solution.has_answer:
        yield "no answer", f"{solution.name} is free, and fuel is short however little it is"
        return
    if solution.unit == "s":
        found = f"{number(solution.value / 60.0, 1)} min ({hours_and_minutes(solution.value)})"
    else:
        found = scales.distance.full(solution.value)
    yield "solved", f"{solution.name} {found}, as far as the fuel goes ({solution.flights} flights)"


def _error(flight: Flight, scales: Scales) -> str:
    error = flight.totals.integration_error
    unit = scales.fuel.unit
    if error < _LEAST_ERROR * unit.size:
        return f"less than {_LEAST_ERROR:g} {unit.name} of integration"
    return f"{error / unit.size:.2g} {unit.name} of integration"


def _doubt(flight: Flight) -> str:
    """What the hand check says, for the longest cruise and for the whole trip."""
    checks = {check.segment: check for check in flight.cross_check}
    cruises = [log for log in flight.segments if log.kind == "cruise" and log.name in checks]
    said = []
    if cruises:
        longest = max(cruises, key=lambda log: (log.purpose == "mission", log.air_distance))
        said.append(f"{_percent(checks[longest.name])} on {longest.name}")
    if "whole trip" in checks:
        check = checks["whole trip"]
        said.append(f"{_percent(check)} on the whole trip")
        cause = max(check.causes, key=lambda name: abs(check.causes[name]), default="")
        if cause:
            said[-1] += f" (most of it {cause})"
    if not said:
        return "there is no cruise to check by the Breguet equation"
    return f"Breguet equation {', '.join(said)}"


def _percent(check: CrossCheck) -> str:
    return f"{signed(number(check.difference_percent, 2))} %"


def _rows_title(flight: Flight) -> str:
    if flight.failure is None:
        return "Segments"
    if fails_on_the_way(flight):
        return "Segments, as far as it flies"
    return "Segments, as they would be without the limit that fails"


def _totals(flight: Flight, scales: Scales, width: int) -> Group:
    total, fuel, mass, distance = flight.totals, scales.fuel, scales.mass, scales.distance
    blocks = [
        [(name, fuel.full(value)) for name, value in (
            ("block fuel", total.block_fuel), ("trip fuel", total.trip_fuel),
            ("reserves", total.reserve_fuel), ("loaded", total.loaded_fuel),
            ("left at stop", total.fuel_left), ("fuel margin", total.fuel_margin))],
        [(name, mass.full(value)) for name, value in (
            ("ramp mass", total.ramp_mass), ("take-off mass", total.takeoff_mass),
            ("landing mass", total.landing_mass))],
        [("block time", f"{number(total.block_time / 60.0, 1)} min"),
         ("trip time", f"{number(total.trip_time / 60.0, 1)} min"),
         ("ground distance", distance.full(total.ground_distance)),
         ("air distance", distance.full(total.air_distance))],
    ]  # fmt: skip
    table = Table.grid(padding=(0, 2 * _gap(width), 0, 0))
    table.add_row(*(_right_aligned(block, _gap(width)) for block in blocks))
    return section("Totals", table, note(_burnt(flight, fuel)))


def _burnt(flight: Flight, scale: Scale) -> str:
    """The fuel by name, how it is kept, and what carbon dioxide comes of it."""
    fuel = flight.fuel
    kept = f" ({fuel.storage})" if fuel.storage not in ("", KEROSENE.storage) else ""
    return (
        f"Fuel: {fuel.name}{kept}. Carbon dioxide of the block fuel: "
        f"{scale.full(flight.carbon_dioxide)}, {number(fuel.carbon_dioxide_index, 3)} times its "
        "mass."
    )


def _right_aligned(rows: Iterable[tuple[str, str]], gap: int) -> Table:
    table = Table.grid(padding=(0, gap, 0, 0), pad_edge=False)
    table.add_column(no_wrap=True)
    table.add_column(justify="right", no_wrap=True)
    for row in rows:
        table.add_row(*row)
    return table


def _cross_check(flight: Flight, scales: Scales, width: int) -> Group:
    fuel = scales.fuel
    table = ruled_table(
        [
            words("segment"),
            Column(f"flown\n{fuel.unit.name}"),
            Column(f"Breguet\n{fuel.unit.name}"),
            Column("difference\n%"),
            words(f"flown less Breguet, by cause [{fuel.unit.name}]"),
        ],
        gap=_gap(width),
    )
    for check in flight.cross_check:
        table.add_row(
            check.segment,
            fuel.bare(check.integrated_fuel),
            fuel.bare(check.breguet_fuel),
            signed(number(check.difference_percent, 2)),
            _causes(check, fuel.unit.size),
        )
    return section("Cross-check by the Breguet equation", table)


def _causes(check: CrossCheck, size: float) -> str:
    """Causes in the order of their weight, those without any last."""
    ordered = sorted(check.causes.items(), key=lambda item: -abs(item[1]))
    some = [
        f"{name} {signed(number(value / size, 2 if abs(value) < _SMALL_CAUSE else 0))}"
        for name, value in ordered
        if value != 0.0
    ]
    none = [name for name, value in ordered if value == 0.0]
    return ", ".join([*some, *(f"{name} 0" for name in none)])


def _gap(width: int) -> int:
    """Spaces between the columns of a table with words in it."""
    return 2 if width >= WIDEST else 1


def _margins(flight: Flight, units: Units, width: int) -> Group:
    table = ruled_table(
        [
            words("limit"),
            Column("value"),
            Column("bound"),
            words("unit", is_wrapped=False),
            Column("room\n%"),
            words("where it is least"),
        ],
        gap=_gap(width),
    )
    least = least_margin(flight.margins)
    for margin in flight.margins:
        scale = limit_scale(margin.name, margin.unit, [margin.value, margin.bound], units)
        said = ["" if margin.is_met else "NOT MET", margin.where]
        said += ["(least of all)"] if margin is least else []
        table.add_row(
            margin.name,
            scale.bare(margin.value),
            scale.bare(margin.bound),
            scale.unit.name,
            number(100.0 * room(margin), 1 if room(margin) < 1.0 else 0),
            " ".join(part for part in said if part),
        )
    return section("Margins", table)
