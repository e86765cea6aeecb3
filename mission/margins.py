"""Least margins of a flight and where they occur; soft ones that are not met are warned of."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Sequence
from math import inf, isfinite

import numpy as np
from numpy.typing import NDArray

from mission.aerodynamics import buffet_lift_coefficient
from mission.aircraft import Aircraft, usable_fuel
from mission.airspeeds import calibrated_airspeed
from mission.limits import has_flaps, lift_coefficients, lift_limits, tanks
from mission.march.span import SLOWEST_CLIMB
from mission.march.world import World
from mission.plan import FlightPlan
from mission.results import Margin, SegmentLog, Totals

Array = NDArray[np.float64]
_SLACK = 1e-6
_Value = Callable[[SegmentLog], float]


def margins(
    world: World, plan: FlightPlan, logs: Sequence[SegmentLog], total: Totals
) -> tuple[Margin, ...]:
    """Margins of thrust and climb, lift and buffet, speed and height, tanks and masses, and fan."""
    return (*_on_the_way(world.aircraft, logs), *_loads(world, plan, total), *_fan(world))


def _on_the_way(aircraft: Aircraft, logs: Sequence[SegmentLog]) -> Iterator[Margin]:
    level = [log for log in logs if log.kind in ("cruise", "loiter", "refuelling")]
    climbs = [log for log in logs if log.kind == "climb" and log.purpose == "mission"]
    turns = [log for log in logs if log.kind == "turn"]
    flown = [log for log in logs if np.any(log.steps.lift > 0.0)]

    def load(log: SegmentLog) -> float:
        coefficient = np.maximum(lift_coefficients(aircraft, log.steps), 1e-9)
        return float(np.min(lift_limits(aircraft, log) / coefficient))

    def to_buffet(log: SegmentLog) -> float:
        clean = ~has_flaps(log)
        onset = buffet_lift_coefficient(aircraft, log.steps.mach)
        coefficient = np.maximum(lift_coefficients(aircraft, log.steps), 1e-9)
        return float(np.min(np.where(clean, onset / coefficient, inf)))

    yield from _least("thrust over drag at rating, level", level, _thrust_ratio, 1.0, "")
    yield from _least("rate of climb at the top", climbs, _rate_at_top, SLOWEST_CLIMB, "m/s")
    yield from _least("load factor to greatest lift", flown, load, 1.0, "")
    if aircraft.buffet_onset is not None:
        steady = [log for log in flown if log.kind not in ("turn", "approach")]
        bound = aircraft.buffet_load_factor
        yield from _least("load factor to buffet onset", steady, to_buffet, bound, "")
    yield from _most(
        "load factor, structural", turns, _load_factor, aircraft.maximum_load_factor, ""
    )
    for name, value, bound, unit in (
        ("Mach number", _mach, aircraft.maximum_operating_mach, ""),
        ("calibrated airspeed", _airspeed, aircraft.maximum_operating_calibrated_airspeed, "m/s"),
        ("dynamic pressure", _dynamic_pressure, aircraft.maximum_dynamic_pressure, "Pa"),
        ("pressure altitude", _altitude, aircraft.maximum_pressure_altitude, "m"),
    ):
        if isfinite(bound):
            yield from _most(name, flown, value, bound, unit)


def _loads(world: World, plan: FlightPlan, total: Totals) -> Iterator[Margin]:
    aircraft = world.aircraft
    most_fuel = usable_fuel(aircraft, world.engine.fuel) + plan.first_tank_capacity
    for name, value, bound in (
        ("zero-fuel mass", total.ramp_mass - total.loaded_fuel, aircraft.maximum_zero_fuel_mass),
        ("ramp mass", total.ramp_mass, aircraft.maximum_ramp_mass),
        (f"fuel loaded, {tanks(world)}", total.loaded_fuel, most_fuel),
        ("take-off mass", total.takeoff_mass, aircraft.maximum_take_off_mass),
        ("landing mass", total.landing_mass, aircraft.maximum_landing_mass),
    ):
        yield Margin(name, value, bound, "kg", "", value <= bound * (1.0 + 1e-9))


def _fan(world: World) -> Iterator[Margin]:
    """Whether the fan fits where the engine hangs, if both are known."""
    clearance, pod = world.aircraft.fan_diameter_clearance, world.engine.pod
    if pod is not None and isfinite(clearance):
        diameter = float(pod.fan_diameter)
        is_met = diameter <= clearance * (1.0 + 1e-9)
        yield Margin("fan diameter", diameter, clearance, "m", "under the wing", is_met)


def unmet(found: Sequence[Margin]) -> tuple[str, ...]:
    """A warning for every margin that is not met, though the mission can be flown."""
    return tuple(
        f"{margin.name}{f' in {margin.where}' if margin.where else ''}: {margin.value:,.4g} "
        f"{margin.unit + ' ' if margin.unit else ''}against {margin.bound:,.4g} is not met"
        for margin in found
        if not margin.is_met
    )


def _least(
    name: str, logs: Sequence[SegmentLog], value: _Value, bound: float, unit: str
) -> Iterator[Margin]:
    """The least of a value over segments, with the segment it is met in."""
    if logs:
        values = [value(log) for log in logs]
        least = min(values)
        where = logs[values.index(least)].name
        yield Margin(name, least, bound, unit, where, least >= bound * (1.0 - _SLACK))


def _most(
    name: str, logs: Sequence[SegmentLog], value: _Value, bound: float, unit: str
) -> Iterator[Margin]:
    """The greatest of a value over segments, with the segment it is met in."""
    if logs:
        values = [value(log) for log in logs]
        most = max(values)
        where = logs[values.index(most)].name
        yield Margin(name, most, bound, unit, where, most <= bound * (1.0 + _SLACK))


def _thrust_ratio(log: SegmentLog) -> float:
    return float(np.min(log.steps.rating_thrust / np.maximum(log.steps.drag, 1e-9)))


def _rate_at_top(log: SegmentLog) -> float:
    """Geometric rate of climb [m/s] at the end of a climb."""
    steps = log.steps
    return float(steps.true_airspeed[-1] * np.sin(steps.flight_path_angle[-1]))


def _load_factor(log: SegmentLog) -> float:
    return float(np.max(log.steps.lift / log.steps.weight))


def _airborne(log: SegmentLog, values: Array) -> float:
    return float(np.max(np.where(log.steps.lift > 0.0, values, 0.0)))


def _mach(log: SegmentLog) -> float:
    return _airborne(log, log.steps.mach)


def _airspeed(log: SegmentLog) -> float:
    return _airborne(log, calibrated_airspeed(log.steps.mach, log.steps.static_pressure))


def _dynamic_pressure(log: SegmentLog) -> float:
    return _airborne(log, 0.7 * log.steps.static_pressure * log.steps.mach**2)


def _altitude(log: SegmentLog) -> float:
    return _airborne(log, log.steps.pressure_altitude)
