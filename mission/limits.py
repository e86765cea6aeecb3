"""Limits watched at every step: the first hard one that is passed, and the least margins."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray

from engine.atmosphere import flight_condition
from engine.interface import Outcome
from mission.aircraft import Aircraft
from mission.airspeeds import calibrated_airspeed
from mission.march.sweep import Marched, Track
from mission.march.throttled import SLOWEST_ACCELERATION, SLOWEST_CLIMB
from mission.march.world import World
from mission.mission_file import MissionFile
from mission.plan import FlightPlan
from mission.results import Failure, Margin, SegmentLog, Totals

Array = NDArray[np.float64]
_SLACK = 1e-6


def lift_limit(aircraft: Aircraft, kind: str) -> float:
    """Greatest lift coefficient: with flaps where they are moving or down."""
    if kind in ("take-off", "acceleration", "approach"):
        return max(
            aircraft.maximum_lift_coefficient,
            aircraft.take_off_lift_coefficient,
            aircraft.approach_lift_coefficient,
        )
    return aircraft.maximum_lift_coefficient


def _lift_coefficients(aircraft: Aircraft, steps: object) -> Array:
    """Lift coefficient at every step of a log; zero on the ground."""
    altitude, mach, lift = (getattr(steps, name) for name in ("pressure_altitude", "mach", "lift"))
    pressure = flight_condition(altitude).static_pressure
    force = 0.7 * pressure * mach**2 * aircraft.wing_area
    return np.where(force > 0.0, lift / np.where(force > 0.0, force, 1.0), 0.0)


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
    """The first hard limit passed: on the way, in the order flown, then of mass and fuel."""
    for number, log in enumerate(logs):
        tracks = [t for t in marched.tracks if t.span.segment == number]
        passed = sorted(_passed_on_the_way(world, tracks, log), key=lambda failure: failure.step)
        if passed:
            return passed[0]
    return next(_passed_masses(world, written, total, logs, closes=closes), None)


def _passed_on_the_way(world: World, tracks: list[Track], log: SegmentLog) -> Iterator[Failure]:
    """Limits passed at the steps of one segment, each at its first step."""
    aircraft, steps = world.aircraft, log.steps
    outcome, rate = _along(tracks)
    lost = (outcome == Outcome.NOT_CONVERGED) | (outcome == Outcome.UNPHYSICAL)
    yield from _first(log, lost, "engine matching at this altitude, speed and thrust: answers",
                      0.0 * steps.thrust, 1.0, "", "look at it with `longlegs stations`")  # fmt: skip
    short = outcome == Outcome.BEYOND_RATING
    yield from _first(log, short, f"thrust at {log.rating} rating, all engines, against drag",
                      steps.thrust, steps.drag, "N",
                      "fly lower or slower, carry less, or take a larger engine")  # fmt: skip
    if log.kind in ("climb", "descent"):
        yield from _first(log, rate < SLOWEST_CLIMB, f"rate of {log.kind}", rate, SLOWEST_CLIMB,
                          "m/s", "end it lower, change its speeds, or carry less"
                          if log.kind == "climb" else "change its speeds")  # fmt: skip
    else:
        yield from _first(log, rate < SLOWEST_ACCELERATION, "acceleration", rate,
                          SLOWEST_ACCELERATION, "m/s2",
                          "lower the speed to reach, or carry less")  # fmt: skip
    coefficient, most = _lift_coefficients(aircraft, steps), lift_limit(aircraft, log.kind)
    yield from _first(log, coefficient > most * (1.0 + _SLACK), "lift coefficient", coefficient,
                      most, "", "fly faster or lower, or carry less")  # fmt: skip
    airborne = steps.lift > 0.0
    fastest = aircraft.maximum_operating_mach
    yield from _first(log, airborne & (steps.mach > fastest * (1.0 + _SLACK)), "Mach number",
                      steps.mach, fastest, "", "lower the segment's mach")  # fmt: skip
    pressure = flight_condition(steps.pressure_altitude).static_pressure
    airspeed = calibrated_airspeed(steps.mach, pressure)
    limit = aircraft.maximum_operating_calibrated_airspeed
    yield from _first(log, airborne & (airspeed > limit * (1.0 + _SLACK)), "calibrated airspeed",
                      airspeed, limit, "m/s", "lower calibrated_airspeed or mach")  # fmt: skip


def _along(tracks: list[Track]) -> tuple[NDArray[np.int64], Array]:
    """Engine outcome and rate at the steps of a segment, as the log has them."""
    outcomes, rates = [], []
    for track in tracks:
        if track.nodes is None:
            outcomes.append(np.full(2, Outcome.MET))
            rates.append(np.full(2, np.inf))
        else:
            outcomes.append(track.nodes.outcome[:, 0])
            rates.append(track.nodes.rate[:, 0])
    return np.concatenate(outcomes), np.concatenate(rates)


def _first(
    log: SegmentLog,
    is_passed: NDArray[np.bool_],
    what: str,
    value: Array,
    bound: float | Array,
    unit: str,
    advice: str,
) -> Iterator[Failure]:
    if np.any(is_passed):
        step = int(np.argmax(is_passed))
        at = float(np.broadcast_to(bound, value.shape)[step])
        yield Failure(log.name, step, what, float(value[step]), at, unit, advice)


def _passed_masses(
    world: World,
    written: MissionFile,
    total: Totals,
    logs: tuple[SegmentLog, ...],
    *,
    closes: bool,
) -> Iterator[Failure]:
    """Limits of mass and fuel; those that loading meets stand before those that landing meets."""
    aircraft = world.aircraft
    empty = aircraft.operating_empty_mass + written.payload
    first, last = logs[0].name, [log for log in logs if log.purpose == "mission"][-1].name
    for segment, what, value, bound, advice in (
        (first, "zero-fuel mass", empty, aircraft.maximum_zero_fuel_mass, "carry less payload"),
        (first, "usable fuel to load", total.loaded_fuel, aircraft.usable_fuel,
         "shorten the mission or the reserves"),
        (first, "ramp mass", total.ramp_mass, aircraft.maximum_ramp_mass,
         "carry less payload or fly less far"),
        (first, "take-off mass", total.takeoff_mass, aircraft.maximum_take_off_mass,
         "carry less payload or fly less far"),
        (last, "landing mass", total.landing_mass, aircraft.maximum_landing_mass,
         "load less fuel or carry less payload"),
    ):  # fmt: skip
        if value > bound * (1.0 + 1e-9):
            yield Failure(segment, 0, what, value, bound, "kg", advice)
    for log in logs:
        if log.purpose == "mission" and log.fuel_left < -1e-6:
            yield Failure(log.name, len(log.steps.mass) - 1, "usable fuel aboard", log.fuel_left,
                          0.0, "kg", "load more fuel or fly less far")  # fmt: skip
            return
    if not closes or total.fuel_margin < -1e-6 * max(total.loaded_fuel, 1.0):
        what = "fuel left at the end against the reserves"
        if not closes:
            what += " (no take-off mass closes; the log flies all the fuel that can be loaded)"
        yield Failure(last, 0, what, total.fuel_left, total.reserve_fuel, "kg",
                      "load more fuel, fly less far, or carry less")  # fmt: skip


def margins(world: World, logs: tuple[SegmentLog, ...], total: Totals) -> tuple[Margin, ...]:
    """Least margins of thrust, lift, speed, fuel and mass, and where they occur."""
    aircraft = world.aircraft
    found: list[Margin] = []
    level = [log for log in logs if log.kind in ("cruise", "loiter")]
    ratios = {log.name: float(np.min(log.steps.rating_thrust / log.steps.thrust)) for log in level}
    if ratios:
        where = min(ratios, key=lambda name: ratios[name])
        found.append(
            Margin(
                "thrust over drag at rating, level",
                ratios[where],
                1.0,
                "",
                where,
                ratios[where] >= 1.0 - _SLACK,
            )
        )
    climbs = [log for log in logs if log.kind == "climb" and log.purpose == "mission"]
    rates = {log.name: _rate_at_top(log) for log in climbs}
    if rates:
        where = min(rates, key=lambda name: rates[name])
        found.append(
            Margin("rate of climb at the top", rates[where], SLOWEST_CLIMB, "m/s", where,
                   rates[where] >= SLOWEST_CLIMB)
        )  # fmt: skip
    loads = {}
    for log in logs:
        if np.any(log.steps.lift > 0.0):
            coefficient = _lift_coefficients(aircraft, log.steps)
            loads[log.name] = float(lift_limit(aircraft, log.kind) / np.max(coefficient))
    if loads:
        where = min(loads, key=lambda name: loads[name])
        found.append(
            Margin(
                "load factor at greatest lift", loads[where], 1.0, "", where, loads[where] >= 1.0
            )
        )
    for name, value, bound in (
        ("usable fuel loaded", total.loaded_fuel, aircraft.usable_fuel),
        ("take-off mass", total.takeoff_mass, aircraft.maximum_take_off_mass),
        ("landing mass", total.landing_mass, aircraft.maximum_landing_mass),
    ):
        found.append(Margin(name, value, bound, "kg", "", value <= bound * (1.0 + 1e-9)))
    return tuple(found)


def _rate_at_top(log: SegmentLog) -> float:
    """Geometric rate of climb [m/s] at the end of a climb."""
    steps = log.steps
    return float(steps.true_airspeed[-1] * np.sin(steps.flight_path_angle[-1]))
