"""Why an aircraft cannot fly level at a point of its envelope."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np

from engine.interface import Outcome, is_unanswered
from mission.aerodynamics import buffet_lift_coefficient, buffet_mach_bounds, polar_coverage
from mission.questions.point import Point

_SLACK = 1e-6  # of a limit, as in the log of a flight


@dataclass(frozen=True)
class Fault:
    """A limit that is passed: value against bound, in an SI unit, and what to try."""

    what: str
    value: float
    bound: float
    unit: str
    advice: str


def faults(point: Point) -> tuple[Fault, ...]:
    """What stands against level flight, the aircraft's own limits first."""
    return (*_passed_limits(point), *_outside_polar(point), *_engine_faults(point))


def _passed_limits(point: Point) -> Iterator[Fault]:
    """Limits of the aircraft that the point lies beyond."""
    aircraft = point.aircraft
    slower, lighter = "fly slower or higher", "fly faster or lower, or carry less"
    manoeuvre = aircraft.buffet_load_factor * point.lift_coefficient
    limits = (
        ("lift coefficient", point.lift_coefficient, aircraft.maximum_lift_coefficient, "",
         lighter),
        (f"lift coefficient of {aircraft.buffet_load_factor:g} g against buffet onset", manoeuvre,
         float(buffet_lift_coefficient(aircraft, point.flight.mach)), "",
         "fly lower or at another speed, or carry less"),
        ("Mach number", float(point.flight.mach), aircraft.maximum_operating_mach, "",
         "fly slower"),
        ("calibrated airspeed", point.calibrated_airspeed,
         aircraft.maximum_operating_calibrated_airspeed, "m/s", slower),
        ("dynamic pressure", point.dynamic_pressure, aircraft.maximum_dynamic_pressure, "Pa",
         slower),
        ("pressure altitude", float(point.flight.pressure_altitude),
         aircraft.maximum_pressure_altitude, "m", "fly lower"),
    )  # fmt: skip
    for what, value, bound, unit, advice in limits:
        if value > bound * (1.0 + _SLACK):
            yield Fault(what, value, bound, unit, advice)


def _outside_polar(point: Point) -> Iterator[Fault]:
    """Where the point lies beyond the table of the polar, or of buffet onset."""
    aircraft, mach = point.aircraft, float(point.flight.mach)
    table, buffet = polar_coverage(aircraft.polar), buffet_mach_bounds(aircraft)
    places = []
    if table is not None:
        places += [
            ("Mach number in the drag polar's table", mach, table.mach),
            ("lift coefficient in the drag polar's table", point.lift_coefficient,
             table.lift_coefficient),
        ]  # fmt: skip
    if buffet is not None:
        places.append(("Mach number in the table of buffet onset", mach, buffet))
    for what, value, (low, high) in places:
        if not low - _SLACK <= value <= high + _SLACK:
            bound = high if value > high else low
            advice = f"stay within {low:g} to {high:g}, or give a table that goes further"
            yield Fault(what, value, bound, "", advice)


def _engine_faults(point: Point) -> Iterator[Fault]:
    """Why the engine does not give thrust equal to drag."""
    thrust = (point.level_thrust, point.drag, "N")
    if point.outcome == Outcome.OUTSIDE_TABLE:
        yield from _outside(point)
    elif is_unanswered(np.asarray(point.outcome)):
        advice = "look at the engine alone with `longlegs stations`"
        yield Fault("engine states found here", 0.0, 1.0, "", advice)
    elif point.outcome == Outcome.BEYOND_RATING:
        advice = "fly lower or slower, carry less, or take a larger engine"
        yield Fault(f"thrust at {point.rating} rating against drag", *thrust, advice)
    elif point.outcome == Outcome.AT_IDLE:
        advice = "fly faster or carry more: the engines cannot be throttled back so far"
        yield Fault("thrust at flight idle against drag", *thrust, advice)


def _outside(point: Point) -> Iterator[Fault]:
    """Where the point lies outside the table of an engine."""
    table, flight = point.engine.coverage, point.flight
    if table is None:
        return
    advice = "stay inside the engine's table, or give it one that reaches further"
    for what, at, ends, unit in (
        ("pressure altitude", flight.pressure_altitude, table.pressure_altitude, "m"),
        ("Mach number", flight.mach, table.mach, ""),
    ):
        value = float(at)
        if bool(table.is_beyond(at, ends)):
            bound = ends[1] if value > ends[1] else ends[0]
            yield Fault(f"{what} in the engine's table", value, bound, unit, advice)
