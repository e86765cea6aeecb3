"""Field length and climbs of a flight that was flown, at its own masses, elevations and day."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass

import numpy as np

from mission.air import Air
from mission.airspeeds import calibrated_airspeed
from mission.field.cases import (
    GEAR_EXTENDED,
    GO_AROUND_CLIMBS,
    LIFT_OFF,
    RUN,
    SECOND_SEGMENT,
    TAKE_OFF_CLIMBS,
    Case,
    applies,
    is_met,
    parts_without_drag,
    required_gradient,
)
from mission.field.lengths import field_lengths
from mission.field.result import ClimbCheck, FieldPerformance
from mission.field.states import Place, State, gradient, is_in_polar, states
from mission.march.span import Span
from mission.march.world import World
from mission.mission_file import MissionFile
from mission.plan import FlightPlan, legs_of
from mission.results import Margin, SegmentLog

_SLACK = 1e-9
_TAKE_OFF_CASES = (RUN, LIFT_OFF, *TAKE_OFF_CLIMBS)
# Gradient with gear down below which a failure marched takes a longer runway than the handbook's
# formula: 17 % more at 3.6 % of a twin, twice as much near none (tests/published).
_BARELY = 0.04


def field_of(
    world: World, plan: FlightPlan, written: MissionFile, logs: tuple[SegmentLog, ...]
) -> FieldPerformance | None:
    """Field length and climbs at the first take-off, go-around at the last approach.

    None where the mission has no take-off. The climbs after take-off are taken at the mass at
    brake release, those of the go-around at the mass at the end of the approach and the
    elevation that its leg ends at; all with the stores of that time, and all engines but the one
    that the rule has fail.
    """
    ours = [row for row, log in enumerate(logs) if log.purpose == "mission"]
    take_off = next((row for row in ours if logs[row].kind == "take-off"), None)
    if take_off is None:
        return None
    approach = next((row for row in reversed(ours) if logs[row].kind == "approach"), None)
    asked = _asked(world, _at_take_off(plan, logs, take_off), _TAKE_OFF_CASES)
    if approach is not None:
        asked += _asked(world, _at_approach(plan, written, logs, approach), GO_AROUND_CLIMBS)
    missing = {case.rating for case, _ in asked} - {*world.engine.ratings}
    there = [(case, place) for case, place in asked if case.rating not in missing]
    found = {s.case.name: s for s in states(world.aircraft, world.engine, there)}
    balanced, all_engine = _lengths(world, found)
    lift_off = found[LIFT_OFF.name].flight
    before = [logs[row] for row in ours if row < take_off]
    is_at_departure = not any(np.any(log.steps.lift > 0.0) for log in before)
    return FieldPerformance(
        take_off=logs[take_off].name,
        take_off_mass=logs[take_off].mass_start,
        pressure_altitude=float(lift_off.pressure_altitude),
        temperature_deviation=float(lift_off.temperature_deviation),
        v2=_airspeed(found.get(SECOND_SEGMENT.name, found[LIFT_OFF.name])),
        balanced_length=balanced,
        all_engine_length=all_engine,
        runway=written.departure.runway if is_at_departure else None,
        climbs=tuple(_check(world, s) for s in found.values() if s.case.paragraph and _has(s)),
        remarks=(
            *_left_out(world, missing, found, has_approach=approach is not None),
            *_of_lengths(world, found, balanced, all_engine),
        ),
    )


def runway_margin(field: FieldPerformance | None) -> tuple[Margin, ...]:
    """Field length against the runway, where both are known; a limit that ends no flight."""
    if field is None or field.runway is None or field.length is None:
        return ()
    met = field.length <= field.runway * (1.0 + _SLACK)
    return (Margin("take-off field length", field.length, field.runway, "m", field.take_off, met),)


@dataclass(frozen=True)
class _Spot:
    """Mass [kg], pressure altitude of the runway [m], air, and drag area of stores [m2]."""

    mass: float
    elevation: float
    air: Air
    drag_area: float


def _span(plan: FlightPlan, row: int) -> Span:
    return next(span for span in plan.parts.mission if span.segment == row)


def _at_take_off(plan: FlightPlan, logs: tuple[SegmentLog, ...], row: int) -> _Spot:
    span = _span(plan, row)
    return _Spot(logs[row].mass_start, span.start_altitude, span.air, span.configuration.drag_area)


def _at_approach(
    plan: FlightPlan, written: MissionFile, logs: tuple[SegmentLog, ...], row: int
) -> _Spot:
    span = _span(plan, row)
    leg = next(leg for leg in legs_of(written) if leg.number == span.leg)
    area = span.configuration.drag_area
    return _Spot(logs[row].mass_end, leg.destination_elevation, span.air, area)


def _asked(world: World, spot: _Spot, cases: tuple[Case, ...]) -> list[tuple[Case, Place]]:
    """The cases that so many engines can fly, each where it is flown."""
    return [
        (
            case,
            Place(
                spot.mass,
                spot.elevation,
                spot.air.deviation_at(spot.elevation + case.height),
                spot.drag_area,
            ),
        )
        for case in cases
        if applies(case, world.aircraft.engine_count)
    ]


def _left_out(
    world: World, missing: set[str], found: Mapping[str, State], *, has_approach: bool
) -> Iterator[str]:
    """What the aircraft, its engine or the mission do not tell; ``missing`` are ratings."""
    aircraft = world.aircraft
    if not has_approach:
        yield "the mission has no approach: no go-around"
    if aircraft.engine_count == 1:
        yield (
            "14 CFR 25.121, climbs with an engine out, does not apply to a single engine, nor is "
            "there a balanced field length"
        )
    for name in sorted(missing):
        yield f"the engine has no {name.replace('_', ' ')} rating: its climb is left out"
    lost = [state.case.name for state in found.values() if not _has(state)]
    if lost:
        yield f"the engine has no answer for {', '.join(lost)}: left out"
    parts = parts_without_drag(aircraft)
    if parts:
        yield f"the aircraft gives no drag of {', '.join(parts)}: climbs are flattered"
    outside = [
        state.case.name
        for state in found.values()
        if state.case != RUN and not np.all(is_in_polar(aircraft, state))
    ]
    if outside:
        yield f"outside the drag polar's table, with the drag of its edge: {', '.join(outside)}"
    unlit = [state for state in found.values() if state.case.engines_out]
    if unlit and not any(np.any(state.unlit < 0.0) for state in unlit):
        yield "the engine's drag when out is not known: none is counted"


def _of_lengths(
    world: World, found: Mapping[str, State], balanced: float | None, all_engine: float | None
) -> Iterator[str]:
    """What to think of the lengths."""
    if all_engine is None and _has(found[RUN.name]) and _has(found[LIFT_OFF.name]):
        yield "thrust does not overcome the resistance of the run or the drag: no length"
    flat = found.get(GEAR_EXTENDED.name)
    if balanced is not None and flat is not None and gradient(world.aircraft, flat) < _BARELY:
        yield (
            "it hardly climbs with an engine out and the gear down: the balanced length may be too "
            "short by a fifth, and by more the less it climbs"
        )


def _has(state: State) -> bool:
    return bool(np.all(state.is_answered))


def _airspeed(state: State) -> float:
    return float(calibrated_airspeed(state.flight.mach, state.flight.static_pressure))


def _check(world: World, state: State) -> ClimbCheck:
    case, count = state.case, world.aircraft.engine_count
    flown = float(gradient(world.aircraft, state))
    return ClimbCheck(
        name=case.name,
        paragraph=case.paragraph,
        engines_running=count - case.engines_out,
        mass=float(state.mass),
        calibrated_airspeed=_airspeed(state),
        gradient=flown,
        required=required_gradient(case, count),
        is_met=is_met(case, count, flown),
    )


def _lengths(world: World, found: Mapping[str, State]) -> tuple[float | None, float | None]:
    """Balanced and all-engine length [m]; None for both where one that applies is not finite."""
    second = found.get(SECOND_SEGMENT.name)
    lengths = field_lengths(world.aircraft, found[RUN.name], found[LIFT_OFF.name], second)
    if not np.isfinite(lengths.needed):
        return None, None
    balanced = None if lengths.balanced is None else float(lengths.balanced)
    return balanced, float(lengths.all_engine)
