"""One point of the flight envelope as a person reads it: level flight first, then all the rest."""

from __future__ import annotations

from collections.abc import Iterable
from math import acos, degrees, isfinite

import numpy as np
from numpy.typing import NDArray
from rich.console import Group, RenderableType
from rich.table import Table
from rich.text import Text

from mission.aerodynamics import LEFT_OUT
from mission.outputs.failure import shortfall
from mission.outputs.page import Column, caution, note, pairs, ruled_table, section, words
from mission.outputs.segment_rows import altitude_text, consumption_text, consumption_unit
from mission.outputs.units import ABSENT, METRIC, Scale, Unit, Units, number, signed
from mission.outputs.wording import TIMES, day_in_words, in_plain_words
from mission.questions.faults import faults
from mission.questions.point import IDLE, Point
from mission.results import Failure

Array = NDArray[np.float64]
_CLIMB = "climb"
_PASCAL = Unit("kPa", 1000.0)
_HELD = (
    "Excess power is specific, that of level flight. Rates of climb are geometric, in still air; a "
    "Mach number or a calibrated airspeed held changes the true airspeed, which takes thrust or "
    "gives it. The path is that at true airspeed held."
)


def point_screen(point: Point, *, units: Units = METRIC) -> Group:
    """Everything at one point."""
    parts: list[RenderableType] = [
        Text(point.aircraft.name, "bold"),
        Text(_where(point, units)),
        Text(),
        *_answer(point, units),
        section("Air and speed", pairs(_air(point, units))),
        section("Lift and drag", _drag(point, units), note(_lift(point))),
        section("Thrust and fuel by rating", _thrust(point, units)),
        section(f"Climb by rating, {units.vertical_speed.name}", _climb(point, units), note(_HELD)),
        section("Level turn that thrust sustains", _turn(point, units)),
        section("Room to the limits", _limits(point, units)),
    ]
    return Group(*parts, caution())


def fault_sentences(point: Point, units: Units) -> list[str]:
    """Why there is no level flight, a sentence each."""
    return [
        shortfall(Failure("", 0, f.what, f.value, f.bound, f.unit, f.advice), units)
        for f in faults(point)
    ]


def _where(point: Point, units: Units) -> str:
    flight = point.flight
    level = altitude_text(units, float(flight.pressure_altitude))
    altitude = f"FL{level}" if units is METRIC else f"{level} {units.altitude.name}"
    mass = Scale.of(units.gross_mass(point.mass), [point.mass], 5).full(point.mass)
    day = day_in_words(float(flight.temperature_deviation))
    engines = f"{point.aircraft.engine_count} {TIMES} {point.engine.name}"
    return f"{engines}, at {altitude}, Mach {float(flight.mach):.3f}, {mass}, {day}"


def _answer(point: Point, units: Units) -> Iterable[RenderableType]:
    """What level flight takes, or why there is none, and the doubt beside it."""
    reasons = fault_sentences(point, units)
    if isfinite(point.fuel_flow):
        yield pairs([("level flight", _level(point, units))], strong=True)
    if reasons:
        title = "beyond a limit" if isfinite(point.fuel_flow) else "not possible"
        yield pairs([(f"{title}:", reason) for reason in reasons], strong=True)
        yield pairs([("what to try", "; ".join(dict.fromkeys(f.advice for f in faults(point))))])
    doubts = [LEFT_OUT, *(text for text in [point.engine.doubts.get(point.rating)] if text)]
    yield pairs([("doubt", "; ".join(doubts))])


def _level(point: Point, units: Units) -> str:
    flow, ranges = units.fuel_flow, units.specific_air_range
    fuel = Scale.of(flow, [point.fuel_flow]).full(point.fuel_flow)
    reach = Scale.of(ranges, [point.specific_air_range]).full(point.specific_air_range)
    drag = Scale.of(units.force, [point.drag]).full(point.drag)
    sfc = consumption_text(units, point.specific_fuel_consumption)
    rating = in_plain_words(point.rating)
    share = _share_of(point, point.rating)
    return (
        f"{fuel}, {reach} of specific air range; thrust {drag}, {share} of {rating} rating, at "
        f"{sfc} {units.specific_fuel_consumption.name}"
    )


def _share_of(point: Point, rating: str) -> str:
    at = point.at_ratings
    given = float(at.thrust[at.names.index(rating)])
    return f"{number(100.0 * point.drag / given, 0)} %" if given > 0.0 else ABSENT


def _air(point: Point, units: Units) -> list[tuple[str, str]]:
    flight, speed = point.flight, units.speed
    airspeeds = (
        ("true", float(flight.true_airspeed)),
        ("calibrated", point.calibrated_airspeed),
        ("equivalent", point.equivalent_airspeed),
    )
    height = Unit("m", 1.0) if units is METRIC else units.altitude
    return [
        ("airspeed", ", ".join(f"{name} {_full(speed, v)}" for name, v in airspeeds)),
        ("temperature", f"static {number(float(flight.static_temperature), 1)} K, total "
         f"{number(point.total_temperature, 1)} K"),
        ("pressure", f"static {_full(_PASCAL, float(flight.static_pressure))}, dynamic "
         f"{_full(_PASCAL, point.dynamic_pressure)}"),
        ("energy height", f"{_full(height, point.energy_height, 5)}: the same energy, all of it "
         "height"),
    ]  # fmt: skip


def _full(unit: Unit, value: float, significant: int = 4) -> str:
    return Scale.of(unit, [value], significant).full(value)


def _drag(point: Point, units: Units) -> Table:
    """Drag by cause, and lift beside it."""
    scale = Scale.of(units.force, [point.drag])
    whole = point.drag_coefficient
    heads = ("coefficient", f"force\n{scale.unit.name}", "share\n%")
    table = ruled_table([words("drag", is_wrapped=False), *map(Column, heads)])
    for name, part in point.drag_parts.items():
        force = point.drag * part / whole
        share = number(100.0 * part / whole, 1)
        table.add_row(in_plain_words(name), number(part, 5), scale.bare(force), share)
    table.add_section()
    table.add_row("all of it", number(whole, 5), scale.bare(point.drag), "100.0")
    return table


def _lift(point: Point) -> str:
    ratio = point.weight / point.drag
    return (
        f"Lift coefficient {number(point.lift_coefficient, 4)}, lift-to-drag ratio "
        f"{number(ratio, 2)}."
    )


def _thrust(point: Point, units: Units) -> Table:
    at = point.at_ratings
    force, flow = (
        Scale.of(unit, values.tolist())
        for unit, values in ((units.force, at.thrust), (units.fuel_flow, at.fuel_flow))
    )
    heads = (f"thrust\n{force.unit.name}", f"over\ndrag\n{force.unit.name}", "over\ndrag\n%",
             f"fuel flow\n{flow.unit.name}", f"sfc\n{consumption_unit(units)}")  # fmt: skip
    rating = words("rating", is_wrapped=False)
    table = ruled_table([rating, *map(Column, heads), words("held by")])
    for i, name in enumerate(at.names):
        sfc = float(at.specific_fuel_consumption[i])
        margin = float(at.margin[i])
        held = in_plain_words(str(at.held_by[i])) if at.is_answered[i] else "no engine state"
        table.add_row(
            in_plain_words(name),
            force.bare(float(at.thrust[i])),
            signed(force.bare(margin)),
            signed(number(100.0 * margin / point.drag, 1)),
            flow.bare(float(at.fuel_flow[i])),
            consumption_text(units, sfc) if isfinite(sfc) else ABSENT,
            held,
        )
    return table


def _climb(point: Point, units: Units) -> Table:
    at, unit = point.at_ratings, units.vertical_speed
    rates = (at.excess_power, at.climb, at.climb_at_mach, at.climb_at_airspeed)
    scale = Scale.of(unit, [float(v) for values in rates for v in values], 3)
    heads = ("excess\npower", "climb, true\nspeed held", "climb, Mach\nheld",
             "climb, calibrated\nspeed held", "path\ndeg")  # fmt: skip
    table = ruled_table([words("rating", is_wrapped=False), *map(Column, heads)])
    for i, name in enumerate(at.names):
        cells = [scale.bare(float(values[i])) for values in rates]
        angle = degrees(float(at.path_angle[i]))
        table.add_row(in_plain_words(name), *cells, number(angle, 2))
    return table


def _turn(point: Point, units: Units) -> Table:
    at = point.at_ratings
    length = Unit("km", 1000.0) if units is METRIC else units.distance
    radius = Scale.of(length, [r for r in at.turn_radius.tolist() if isfinite(r)], 3)
    table = ruled_table(
        [words("rating", is_wrapped=False), Column("load\nfactor"), Column("bank\ndeg"),
         Column("rate\ndeg/s"), Column(f"radius\n{length.name}"), words("bounded by")]
    )  # fmt: skip
    for i, name in enumerate(at.names):
        if name == IDLE:
            continue
        factor = float(at.load_factor[i])
        keeps = isfinite(factor)
        table.add_row(
            in_plain_words(name),
            number(factor, 2),
            number(degrees(acos(1.0 / factor)) if keeps else np.nan, 1),
            number(degrees(float(at.turn_rate[i])), 2),
            radius.bare(float(at.turn_radius[i])),
            str(at.load_limit[i]) if keeps else "no level flight",
        )
    return table


def _limits(point: Point, units: Units) -> Table:
    """Value against bound, and the room that is left as a share of the bound."""
    aircraft, speed = point.aircraft, units.speed
    table = ruled_table(
        [words("limit", is_wrapped=False), Column("value"), Column("bound"),
         words("unit", is_wrapped=False), Column("room\n%")]
    )  # fmt: skip
    one = Unit("", 1.0)
    height = Unit("m", 1.0) if units is METRIC else units.altitude
    rows = [
        ("greatest operating Mach number", float(point.flight.mach),
         aircraft.maximum_operating_mach, one),
        ("greatest operating airspeed, calibrated", point.calibrated_airspeed,
         aircraft.maximum_operating_calibrated_airspeed, speed),
        ("greatest dynamic pressure", point.dynamic_pressure, aircraft.maximum_dynamic_pressure,
         _PASCAL),
        ("greatest pressure altitude", float(point.flight.pressure_altitude),
         aircraft.maximum_pressure_altitude, height),
        ("greatest lift coefficient", point.lift_coefficient,
         aircraft.maximum_lift_coefficient, one),
        ("stall speed at one g, calibrated", point.calibrated_airspeed, point.stall_airspeed,
         speed),
    ]  # fmt: skip
    for name, value, bound, unit in rows:
        if not isfinite(bound):
            continue
        scale = Scale.of(unit, [value, bound], 3 if unit is one else 4)
        over = value - bound if name.startswith("stall") else bound - value
        room = number(100.0 * over / bound, 1)
        table.add_row(name, scale.bare(value), scale.bare(bound), unit.name, room)
    for name, factor in point.load_factors.items():
        room = number(100.0 * (factor - 1.0) / factor, 1)
        table.add_row(f"load factor of {name}", "1.00", number(factor, 2), "g", room)
    return table
