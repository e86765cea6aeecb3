"""Cross-check by the Breguet range equation, and what makes the integral differ from it.

``fuel = m (1 - exp(-R g c / (V L/D)))`` with the values of a cruise at half its fuel. Source:
J. D. Anderson, Aircraft Performance and Design, section 5.13 (jet range), in exponential form.
"""

from __future__ import annotations

import numpy as np

from engine.quantities import STANDARD_GRAVITY
from mission.fuel_plan import trip_rows
from mission.plan import FlightPlan
from mission.results import CrossCheck, SegmentLog, Totals

_CAUSES = {
    "take-off": "climb and acceleration",
    "climb": "climb and acceleration",
    "acceleration": "climb and acceleration",
    "descent": "descent",
    "loiter": "loiter",
    "cruise": "change along the cruise",
    "approach": "approach and landing",
    "allowance": "allowances",
    "taxi": "taxi",
    "turn": "turns",
    "driftdown": "descent",
    "refuelling": "refuelling",
    "release": "what leaves and comes aboard",
    "turnaround": "what leaves and comes aboard",
    "engine failure": "what leaves and comes aboard",
}


def burn_rate(log: SegmentLog) -> float:
    """Fuel per mass and air distance [1/m] of a cruise at half its fuel."""
    steps = log.steps
    half = log.mass_start - 0.5 * log.fuel
    order = np.argsort(steps.mass)

    def at_half(values: np.ndarray) -> float:
        return float(np.interp(half, steps.mass[order], values[order]))

    consumption = at_half(steps.fuel_flow) / at_half(steps.thrust)
    lift_to_drag = at_half(steps.lift) / at_half(steps.drag)
    return STANDARD_GRAVITY * consumption / (at_half(steps.true_airspeed) * lift_to_drag)


def cross_checks(
    plan: FlightPlan, logs: tuple[SegmentLog, ...], total: Totals
) -> tuple[CrossCheck, ...]:
    """A check a cruise, then the whole trip with the longest cruise's values."""
    cruises = [log for log in logs if log.kind == "cruise" and log.fuel > 0.0]
    checks = []
    for log in cruises:
        fuel = log.mass_start * -np.expm1(-burn_rate(log) * log.air_distance)
        causes = {"change along the cruise": log.fuel - fuel}
        checks.append(CrossCheck(log.name, log.fuel, float(fuel), causes))
    flown = [log for log in cruises if log.purpose == "mission"]
    if flown:
        longest = max(flown, key=lambda log: log.air_distance)
        checks.append(_whole_trip(plan, logs, burn_rate(longest), total))
    return tuple(checks)


def _whole_trip(
    plan: FlightPlan, logs: tuple[SegmentLog, ...], rate: float, total: Totals
) -> CrossCheck:
    """Trip fuel against one Breguet flight over its air distance.

    Each segment's share of that flight is taken along the Breguet masses, so that the causes add
    up to the difference exactly. Taxi lies outside the trip and wind inside the air distance:
    both are entries of zero, said so rather than left out.
    """
    causes = dict.fromkeys(
        ["climb and acceleration", "change along the cruise", "descent", "loiter", "taxi", "wind"],
        0.0,
    )
    mass = total.takeoff_mass
    breguet = 0.0
    for index in trip_rows(plan):
        log = logs[index]
        fuel = mass * -np.expm1(-rate * log.air_distance)
        cause = _CAUSES[log.kind]
        causes[cause] = causes.get(cause, 0.0) + log.fuel - fuel
        mass += log.mass_received - log.mass_released - fuel
        breguet += fuel
    return CrossCheck("whole trip", total.trip_fuel, float(breguet), causes)
