"""Limits watched at every step: the first hard one that is passed."""

from __future__ import annotations

from collections.abc import Iterator
from itertools import chain

import numpy as np
from numpy.typing import NDArray

from engine.interface import Outcome, is_unanswered
from engine.quantities import FOOT
from mission.aircraft import Aircraft, governing_tank_limit, usable_fuel
from mission.airspeeds import calibrated_airspeed
from mission.boundaries import passed_boundaries
from mission.coverage import outside
from mission.forces import STEEPEST
from mission.march.level import SLOWEST_GROUND_SPEED
from mission.march.span import SLOWEST_CLIMB
from mission.march.sweep import Marched
from mission.march.throttled import SLOWEST_ACCELERATION
from mission.march.tracks import Track
from mission.march.turning import SLOWEST_TURN
from mission.march.world import World
from mission.mission_file import MissionFile
from mission.plan import FlightPlan, Row
from mission.results import Failure, SegmentLog, Steps, Totals

Array = NDArray[np.float64]
_SLACK = 1e-6
_FLAPS_BELOW = 10000.0 * FOOT  # common practice, no source
# Where a limit is passed, its name, value, bound, unit, and what to try.
_Check = tuple[NDArray[np.bool_], str, Array, float | Array, str, str]


def lift_limits(aircraft: Aircraft, log: SegmentLog) -> Array:
    """Greatest lift coefficient at every step: with flaps where they are moving or down."""
    with_flaps = max(
        aircraft.maximum_lift_coefficient,
        aircraft.take_off_lift_coefficient,
        aircraft.approach_lift_coefficient,
    )
    return np.where(has_flaps(log), with_flaps, aircraft.maximum_lift_coefficient)


def has_flaps(log: SegmentLog) -> NDArray[np.bool_]:
    is_low = log.steps.pressure_altitude < _FLAPS_BELOW
    return (is_low & (log.kind in ("take-off", "acceleration"))) | (log.kind == "approach")


def lift_coefficients(aircraft: Aircraft, steps: Steps) -> Array:
    """Lift coefficient at every step of a log; zero on the ground."""
    force = 0.7 * steps.static_pressure * steps.mach**2 * aircraft.wing_area
    return np.where(force > 0.0, steps.lift / np.where(force > 0.0, force, 1.0), 0.0)


def first_failure(
    world: World,
    plan: FlightPlan,
    marched: Marched,
    written: MissionFile,
    total: Totals,
    logs: tuple[SegmentLog, ...],
    *,
    closes: bool,
) -> Failure | None:
    """The first hard limit passed: of loading, on the way in the order flown, then of the rest.

    What fuel as needed comes to depends on the whole way, so that its limits are looked at last.
    """
    masses = list(_passed_masses(world, plan, written, total, logs))
    known_first = masses if written.fuel.load and closes else masses[:0]
    on_the_way = (
        failure
        for number, log in enumerate(logs)
        for failure in sorted(
            chain(
                _dry(world, _least_empty(plan, number), total, log),
                _overfull(world, plan.rows[number], log),
                _passed_speeds(world, log),
                _passed_on_the_way(
                    world, [t for t in marched.tracks if t.span.segment == number], log
                ),
            ),
            key=lambda failure: failure.step,
        )
    )
    in_order = chain(
        _passed_payload(world, plan, logs),
        (
            failure
            for log in logs
            if log.kind != "acceleration"
            for failure in _passed_speeds(world, log)
        ),
        known_first,
        on_the_way,
        _passed_distance(world, marched, plan),
        masses,
        _passed_reserves(world, total, logs, closes=closes),
    )
    return next(in_order, None)


def _passed_payload(
    world: World, plan: FlightPlan, logs: tuple[SegmentLog, ...]
) -> Iterator[Failure]:
    """Zero-fuel mass at its greatest, unusable fuel included, which no flight changes."""
    empty = max(plan.first_empty_mass, *(row.empty_mass for row in plan.rows))
    most = world.aircraft.maximum_zero_fuel_mass
    if empty > most * (1.0 + 1e-9):
        yield Failure(logs[0].name, 0, "zero-fuel mass", empty, most, "kg", "carry less payload")


def _passed_on_the_way(world: World, tracks: list[Track], log: SegmentLog) -> Iterator[Failure]:
    """Limits passed at the steps of one segment, each at its first step."""
    aircraft, steps = world.aircraft, log.steps
    outcome, rates = _along(tracks)
    slowest = max((track.span.least_rate for track in tracks), default=SLOWEST_CLIMB)
    vertical, acceleration, over_ground = rates["altitude"], rates["speed"], rates["distance"]
    energy, turning = rates["energy"], rates["turn"]
    steepness = np.degrees(np.abs(steps.flight_path_angle))
    coefficient, most_lift = lift_coefficients(aircraft, steps), lift_limits(aircraft, log)
    checks: list[_Check] = [
        *outside(world.engine.coverage, steps, outcome),
        (is_unanswered(outcome), "engine states found at this altitude, speed and thrust",
         np.zeros_like(steps.mach), 1.0, "", "look at it there with `longlegs stations`"),
        (over_ground < SLOWEST_GROUND_SPEED, "ground speed", over_ground, SLOWEST_GROUND_SPEED,
         "m/s", "fly faster, or with less headwind"),
        (outcome == Outcome.BEYOND_RATING, f"thrust at {log.rating} rating against drag",
         steps.thrust, steps.drag, "N",
         "fly lower or slower, carry less, or take a larger engine"),
        (vertical < slowest, f"rate of {log.kind}", vertical, slowest, "m/s",
         "end it lower, change its speeds, or carry less"),
        (energy < slowest, "specific excess power along the path", energy, slowest, "m/s",
         "end it lower or slower, or carry less"),
        (turning < SLOWEST_TURN, "turn rate", turning, SLOWEST_TURN, "rad/s",
         "turn at a higher rating, lower or faster, or carry less"),
        (steepness > STEEPEST, "path angle", steepness, STEEPEST, "deg",
         "the engine is too strong for these equations: climb at a lower rating"),
        (acceleration < SLOWEST_ACCELERATION, "acceleration", acceleration, SLOWEST_ACCELERATION,
         "m/s2", "lower the speed to reach, or carry less"),
        (coefficient > most_lift * (1.0 + _SLACK), "lift coefficient", coefficient, most_lift, "",
         "fly faster or lower, or carry less"),
        *passed_boundaries(aircraft, steps, coefficient, ~has_flaps(log)),
    ]  # fmt: skip
    return _first_steps(log, checks)


def _passed_speeds(world: World, log: SegmentLog) -> Iterator[Failure]:
    """Limits of Mach number and airspeed, which mostly stand in the mission as it is written."""
    aircraft, steps = world.aircraft, log.steps
    airborne = steps.lift > 0.0
    mach = np.where(airborne, steps.mach, 0.0)
    airspeed = np.where(airborne, calibrated_airspeed(steps.mach, steps.static_pressure), 0.0)
    most_mach = aircraft.maximum_operating_mach
    most_airspeed = aircraft.maximum_operating_calibrated_airspeed
    checks: list[_Check] = [
        (mach > most_mach * (1.0 + _SLACK), "Mach number", mach, most_mach, "",
         "lower the segment's mach"),
        (airspeed > most_airspeed * (1.0 + _SLACK), "calibrated airspeed", airspeed,
         most_airspeed, "m/s", "lower calibrated_airspeed or mach"),
    ]  # fmt: skip
    return _first_steps(log, checks)


def _first_steps(log: SegmentLog, checks: list[_Check]) -> Iterator[Failure]:
    """A failure for every check that is passed somewhere, at its first step."""
    for is_passed, name, value, bound, in_unit, hint in checks:
        if np.any(is_passed):
            step = int(np.argmax(is_passed))
            at = float(np.broadcast_to(bound, value.shape)[step])
            yield Failure(log.name, step, name, float(value[step]), at, in_unit, hint)


_RATES = ("altitude", "energy", "speed", "distance", "turn")


def _along(tracks: list[Track]) -> tuple[NDArray[np.int64], dict[str, Array]]:
    """Outcome of the engine at the steps of a segment, and the rates of its marches by kind.

    A rate is positive the way its march goes, infinite where the march has none.
    """
    outcomes: list[NDArray[np.int64]] = []
    rates: dict[str, list[Array]] = {march: [] for march in _RATES}
    for track in tracks:
        if track.nodes is None:
            outcome, rate = np.full(2, Outcome.MET), np.full(2, np.inf)
        else:
            outcome, rate = track.nodes.propulsion.outcome[:, 0], track.nodes.rate[:, 0]
        outcomes.append(outcome)
        march = "speed" if track.span.march == "roll" else track.span.march
        for name, parts in rates.items():
            parts.append(rate if name == march else np.full(rate.shape, np.inf))
    return np.concatenate(outcomes), {name: np.concatenate(r) for name, r in rates.items()}


def _passed_masses(
    world: World,
    plan: FlightPlan,
    written: MissionFile,
    total: Totals,
    logs: tuple[SegmentLog, ...],
) -> Iterator[Failure]:
    """Limits of tanks and mass, those that loading meets before those that landing meets."""
    aircraft = world.aircraft
    first, last = logs[0].name, _last_of_mission(logs).name
    lighter = "carry less payload or fly less far"
    less = "load less fuel" if written.fuel.load else "shorten the mission or the reserves"
    most = usable_fuel(aircraft, world.engine.fuel) + plan.first_tank_capacity
    for segment, what, value, bound, advice in (
        (first, f"usable fuel to load, {tanks(world)}", total.loaded_fuel, most, less),
        (first, "ramp mass", total.ramp_mass, aircraft.maximum_ramp_mass, lighter),
        (first, "take-off mass", total.takeoff_mass, aircraft.maximum_take_off_mass, lighter),
        (last, "landing mass", total.landing_mass, aircraft.maximum_landing_mass,
         "load less fuel or carry less payload"),
    ):  # fmt: skip
        if value > bound * (1.0 + 1e-9):
            yield Failure(segment, 0, what, value, bound, "kg", advice)


def tanks(world: World) -> str:
    """What bounds the fuel in the tanks."""
    return f"by tank {governing_tank_limit(world.aircraft, world.engine.fuel)}"


def _last_of_mission(logs: tuple[SegmentLog, ...]) -> SegmentLog:
    return [log for log in logs if log.purpose == "mission"][-1]


_RESERVES = "usable fuel left at the stop against the reserves to keep"


def _least_empty(plan: FlightPlan, number: int) -> float:
    """Mass [kg] without usable fuel at the lighter end of a row."""
    before = plan.rows[number - 1].empty_mass if number else plan.first_empty_mass
    return min(before, plan.rows[number].empty_mass)


def _dry(world: World, empty: float, total: Totals, log: SegmentLog) -> Iterator[Failure]:
    """The step of the mission at which the tanks run dry."""
    is_dry = log.steps.mass < empty - 1e-6 * max(total.loaded_fuel, 1.0)
    if log.purpose == "mission" and np.any(is_dry):
        yield Failure(
            log.name,
            int(np.argmax(is_dry)),
            f"{_RESERVES}, the tanks running dry here",
            total.fuel_left,
            total.reserve_fuel,
            "kg",
            _more_fuel(world, total),
        )


def _overfull(world: World, row: Row, log: SegmentLog) -> Iterator[Failure]:
    """More fuel aboard than the tanks hold, once some came aboard or a tank was let go."""
    if row.kind not in ("refuelling", "release", "turnaround"):
        return
    most = usable_fuel(world.aircraft, world.engine.fuel) + row.tank_capacity
    if log.fuel_left > most * (1.0 + 1e-9):
        yield Failure(
            log.name, len(log.steps.mass) - 1, "fuel aboard against what the tanks hold then",
            log.fuel_left, most, "kg", "take on less, or let tanks go when they are empty",
        )  # fmt: skip


def _more_fuel(world: World, total: Totals) -> str:
    most = usable_fuel(world.aircraft, world.engine.fuel)
    is_full = total.loaded_fuel > 0.999 * most
    return "fly less far or carry less" if is_full else "load more fuel, fly less far"


def _passed_reserves(
    world: World, total: Totals, logs: tuple[SegmentLog, ...], *, closes: bool
) -> Iterator[Failure]:
    """Fuel left at the stop below the reserves."""
    if closes and total.fuel_margin >= -1e-6 * max(total.loaded_fuel, 1.0):
        return
    unclosed = "" if closes else " (no take-off mass closes: this flies all the fuel it can load)"
    yield Failure(
        segment=_last_of_mission(logs).name,
        step=0,
        what=_RESERVES + unclosed,
        value=total.fuel_left,
        bound=total.reserve_fuel,
        unit="kg",
        advice=_more_fuel(world, total),
    )


def _passed_distance(world: World, marched: Marched, plan: FlightPlan) -> Iterator[Failure]:
    """A distance shorter than what is flown besides the cruise that takes the rest of it."""
    for leg, distance in plan.parts.distances.items():
        total = float(np.max(distance))
        tracks = zip(marched.tracks, marched.integrals.ground, strict=True)
        chosen = [(t.span, g) for t, g in tracks if t.span.leg == leg]
        flown = sum(float(g[-1, 0]) for span, g in chosen if not span.takes_rest)
        cruise = [span for span, _ in chosen if span.takes_rest]
        if cruise and flown > total * (1.0 + 1e-9):
            name = plan.rows[cruise[0].segment].name
            yield Failure(name, 0, "distance flown without it against the distance to cover",
                          flown, total, "m", "fly lower, or lengthen the distance")  # fmt: skip
