"""Steps at which a flight passes what the aircraft file bounds: polar, buffet, pressure, height.

Each check tells where a bound is passed, its name, value, bound, unit, and what to try.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from mission.aerodynamics import buffet_lift_coefficient, buffet_mach_bounds, polar_coverage
from mission.aircraft import Aircraft
from mission.results import Steps

Array = NDArray[np.float64]
Check = tuple[NDArray[np.bool_], str, Array, float | Array, str, str]
_SLACK = 1e-6


def passed_boundaries(
    aircraft: Aircraft, steps: Steps, lift_coefficient: Array, is_clean: NDArray[np.bool_]
) -> list[Check]:
    """Checks at steps of given lift coefficients; buffet where no flap is out, the rest airborne.

    The margin that a manoeuvre is to have to buffet is a soft limit, in :mod:`mission.margins`.
    """
    airborne = steps.lift > 0.0
    lift = np.where(airborne, lift_coefficient, 0.0)
    clean = np.where(is_clean, lift, 0.0)
    onset = buffet_lift_coefficient(aircraft, steps.mach)
    load = np.where(airborne, steps.lift / steps.weight, 0.0)
    pressure = np.where(airborne, 0.7 * steps.static_pressure * steps.mach**2, 0.0)
    most_load, most_pressure = aircraft.maximum_load_factor, aircraft.maximum_dynamic_pressure
    ceiling = aircraft.maximum_pressure_altitude
    height = steps.pressure_altitude
    return [
        *_outside_tables(aircraft, steps, lift, airborne, is_clean),
        (clean > onset * (1.0 + _SLACK), "lift coefficient against buffet onset", clean, onset, "",
         "fly lower or at another speed, or carry less"),
        (load > most_load * (1.0 + _SLACK), "load factor", load, most_load, "",
         "turn or pull up less tightly"),
        (pressure > most_pressure * (1.0 + _SLACK), "dynamic pressure", pressure, most_pressure,
         "Pa", "fly slower or higher"),
        (airborne & (height > ceiling + _SLACK), "pressure altitude", height, ceiling, "m",
         "fly lower"),
    ]  # fmt: skip


def _outside_tables(
    aircraft: Aircraft,
    steps: Steps,
    lift: Array,
    airborne: NDArray[np.bool_],
    is_clean: NDArray[np.bool_],
) -> list[Check]:
    """Steps beyond the edges of the polar and of buffet onset, where they are tables."""
    coverage, buffet = polar_coverage(aircraft.polar), buffet_mach_bounds(aircraft)
    checks: list[Check] = []
    if coverage is not None:
        for name, value, (low, high) in (
            ("Mach number in the drag polar's table", steps.mach, coverage.mach),
            ("lift coefficient in the drag polar's table", lift, coverage.lift_coefficient),
        ):
            checks.append(
                (airborne & ((value < low - _SLACK) | (value > high + _SLACK)), name, value,
                 np.where(value > high, high, low), "",
                 f"stay within {low:g} to {high:g}, or give drag_polar a table that goes further")
            )  # fmt: skip
    if buffet is not None:
        checks.append(
            (airborne & is_clean & (steps.mach > buffet[1] + _SLACK),
             "Mach number in the table of buffet onset", steps.mach, buffet[1], "",
             "fly slower, or give limits.buffet a Mach number further up")
        )  # fmt: skip
    return checks
