"""Where a driftdown leads: its speed, and the level at which it has slowed down.

Quasi-steady: at each altitude thrust of the running engines less drag sets the path angle. The
level that they hold is approached ever more slowly, so that the driftdown ends at a rate.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np

from engine.errors import InputRefused
from engine.quantities import FOOT, STANDARD_GRAVITY
from mission.airspeeds import calibrated_airspeed
from mission.errors import CannotBeFlown
from mission.forces import drag
from mission.march.rules import hold_bounds
from mission.march.span import Span, SpeedRule
from mission.segments.climbing import SlowEnd, slow_end
from mission.segments.here import Here
from mission.segments.schedule import lay_schedule, zones

if TYPE_CHECKING:
    from mission.segments.failure import Driftdown

_LOWEST = -300.0  # m: where the search for the level ends
_MACHS = 400  # looked at for the speed of least drag
_FIRST_GUESS = 0.9  # of where it begins, before any mass is known
_SAME_MASS = 1e-7  # relative: nearer, the level is not looked for again


def driftdown_speed(segment: Driftdown, here: Here) -> SpeedRule:
    """The speed given, or the calibrated airspeed of least drag at the mass it begins with."""
    if segment.mach is not None:
        return SpeedRule("mach", segment.mach)
    if segment.calibrated_airspeed is not None:
        return SpeedRule("calibrated", segment.calibrated_airspeed)
    altitude = here.altitude_or(None, "a driftdown")
    before = here.row - 1  # the failure, which burns nothing
    found = here.choices.at(
        before,
        "driftdown speed",
        here.mass_at(before, -1),
        lambda mass: _least_drag_airspeed(here, altitude, mass),
        end=-1,
    )
    return SpeedRule("calibrated", found)


def _least_drag_airspeed(here: Here, altitude: float, mass: float) -> float:
    """Calibrated airspeed [m/s] of least drag at an altitude [m] and mass [kg]."""
    air = here.air.condition(altitude)
    slow, fast = hold_bounds(here.aircraft, air, np.array([mass]))
    flight = air.with_mach(np.linspace(slow[0], fast[0], _MACHS))
    configured = here.configuration
    force = drag(
        here.aircraft,
        flight,
        mass * STANDARD_GRAVITY,
        configured.drag_factor,
        configured.drag_area,
    )
    best = flight.mach[int(np.argmin(force))]
    return float(calibrated_airspeed(best, air.static_pressure))


def lay_driftdown(segment: Driftdown, here: Here) -> tuple[list[Span], Here]:
    """Spans down to where the descent has slowed to the rate asked for."""
    start = here.altitude_or(None, "a driftdown")
    if here.configuration.engines_out == 0:
        raise InputRefused("all engines run; put an engine failure before it")
    speed = driftdown_speed(segment, here)
    is_mach = speed.kind == "mach"
    rules = zones(None if is_mach else speed.value, speed.value if is_mach else None, limited=False)
    whole, _ = lay_schedule(here, start, _LOWEST, rules, segment.rating)
    slow = segment.until_rate_of_descent
    # Pressure altitude passes slower than height on a warm day: a hair below the rate is no end.
    floor: dict[str, Any] = {"least_rate": 0.5 * slow}

    def choose(mass: float) -> SlowEnd | None:
        return slow_end(here.world, whole, start, _LOWEST, mass, slow)

    end = here.choices.at(
        here.row, "driftdown level", here.mass_at(here.row, -1), choose, end=-1, matters=_SAME_MASS
    )
    if here.row not in here.masses:  # a guessed mass says nothing, and what follows has to be laid
        return lay_schedule(here, start, _FIRST_GUESS * start, rules, segment.rating, **floor)
    if end is None or end.pressure_altitude >= start - 1.0:
        raise InputRefused(
            f"the running engines hold {start / FOOT:,.0f} ft, or sink more slowly than "
            f"{slow:.2f} m/s there; leave the driftdown out"
        )
    if end.pressure_altitude == _LOWEST:
        raise CannotBeFlown(
            f"the running engines hold no level: down to {_LOWEST / FOOT:,.0f} ft the aircraft "
            f"sinks faster than {slow:.2f} m/s; carry less, or take a larger engine"
        )
    return lay_schedule(
        here, start, end.pressure_altitude, rules, segment.rating, cuts=end.cuts, **floor
    )
