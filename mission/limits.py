"""Limits watched at every step: the first hard one that is passed, and the least margins."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray

from engine.atmosphere import flight_condition
from engine.interface import Outcome
from mission.aircraft import Aircraft
from mission.airspeeds import calibrated_airspeed
from mission.march.sweep import Marched
from mission.march.throttled import SLOWEST_ACCELERATION, SLOWEST_CLIMB
from mission.march.tracks import Track
from mission.march.world import World
from mission.mission_file import MissionFile
from mission.plan import FlightPlan
from mission.results import Failure, Margin, SegmentLog, Totals

Array = NDArray[np.float64]
_SLACK = 1e-6
# Where a limit is passed, its name, value, bound, unit, and what to try.
_Check = tuple[NDArray[np.bool_], str, Array, float | Array, str, str]
# Name of a march's rate, unit, least, and what to try, by kind of segment.
_RATES = {
    "climb": ("rate of climb", "m/s", SLOWEST_CLIMB, "end it lower, change its speeds, carry less"),
    "descent": ("rate of descent", "m/s", SLOWEST_CLIMB, "change its speeds"),
    "acceleration": ("acceleration", "m/s2", SLOWEST_ACCELERATION,
                     "lower the speed to reach, or carry less"),
}  # fmt: skip


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
    what, unit, least, advice = _RATES.get(log.kind, _RATES["acceleration"])
    coefficient, most_lift = _lift_coefficients(aircraft, steps), lift_limit(aircraft, log.kind)
    airborne = steps.lift > 0.0
    mach = np.where(airborne, steps.mach, 0.0)
    pressure = flight_condition(steps.pressure_altitude).static_pressure
    airspeed = np.where(airborne, calibrated_airspeed(steps.mach, pressure), 0.0)
    most_mach = aircraft.maximum_operating_mach
    most_airspeed = aircraft.maximum_operating_calibrated_airspeed
    checks: list[_Check] = [
        (lost, "answers of the engine at this altitude, speed and thrust", 0.0 * mach, 1.0, "",
         "look at the engine there with `longlegs stations`"),
        (outcome == Outcome.BEYOND_RATING, f"thrust at {log.rating} rating against drag",
         steps.thrust, steps.drag, "N",
         "fly lower or slower, carry less, or take a larger engine"),
        (rate < least, what, rate, least, unit, advice),
        (coefficient > most_lift * (1.0 + _SLACK), "lift coefficient", coefficient, most_lift, "",
         "fly faster or lower, or carry less"),
        (mach > most_mach * (1.0 + _SLACK), "Mach number", mach, most_mach, "",
         "lower the segment's mach"),
        (airspeed > most_airspeed * (1.0 + _SLACK), "calibrated airspeed", airspeed,
         most_airspeed, "m/s", "lower calibrated_airspeed or mach"),
    ]  # fmt: skip
    for is_passed, name, value, bound, in_unit, hint in checks:
        if np.any(is_passed):
            step = int(np.argmax(is_passed))
            at = float(np.broadcast_to(bound, value.shape)[step])
            yield Failure(log.name, step, name, float(value[step]), at, in_unit, hint)


def _along(tracks: list[Track]) -> tuple[NDArray[np.int64], Array]:
    """Engine outcome and rate at the steps of a segment, as the log has them."""
    outcomes, rates = [], []
    for track in tracks:
        if track.nodes is None:
            outcomes.append(np.full(2, Outcome.MET))
            rates.append(np.full(2, np.inf))
        else:
            outcomes.append(track.nodes.propulsion.outcome[:, 0])
            rates.append(track.nodes.rate[:, 0])
    return np.concatenate(outcomes), np.concatenate(rates)


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
