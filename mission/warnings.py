"""What the reader should know though the mission flies: states flagged and work left out."""

from __future__ import annotations

from itertools import pairwise

import numpy as np

from engine.interface import Outcome
from engine.quantities import FOOT, STANDARD_GRAVITY
from mission.air import STILL_AIR
from mission.march.rules import hold_bounds
from mission.march.sweep import Marched
from mission.march.tracks import Track
from mission.march.world import World
from mission.plan import FlightPlan

_NEGLIGIBLE_RISE = 1.0  # m
_AT_BOUND = 1e-9  # Mach number
_AIRBORNE = ("climb", "acceleration", "cruise", "loiter", "descent", "turn", "driftdown")


def warnings_of(world: World, plan: FlightPlan, marched: Marched) -> tuple[str, ...]:
    """Sentences, each naming its segment."""
    found: list[str] = []
    last = [row for row in plan.rows if row.purpose == "mission"][-1]
    if last.kind in _AIRBORNE:
        found.append(
            f"{last.name}: the mission ends in the air; put a descent and an approach at its end"
        )
    found += [*_of_air(plan, marched), *_of_exchanges(plan, marched)]
    used = {track.span.rating for track in marched.tracks if track.nodes is not None}
    found += [text for rating, text in world.engine.doubts.items() if rating in used]
    for track in marched.tracks:
        nodes, name = track.nodes, plan.rows[track.span.segment].name
        if nodes is None:
            continue
        idle = nodes.propulsion.outcome[:, 0] == Outcome.AT_IDLE
        if track.is_level and np.any(idle):
            excess = float(np.max(nodes.propulsion.thrust[:, 0] - nodes.drag[:, 0]))
            found.append(
                f"{name}: idle gives up to {excess / 1e3:.2f} kN more thrust than drag; fuel is "
                "counted at idle"
            )
        found += _of_speed(world, track, name)
        if track.span.holds_lift_coefficient:
            altitude = nodes.flight.pressure_altitude[:, 0]
            rise = float(altitude[-1] - altitude[0])
            if rise > _NEGLIGIBLE_RISE:
                work = float(np.mean(nodes.mass[:, 0])) * STANDARD_GRAVITY * rise
                thrust_work = nodes.propulsion.fuel_flow[:, 0] / (
                    nodes.propulsion.thrust[:, 0] * nodes.flight.true_airspeed[:, 0]
                )
                found.append(
                    f"{name}: flown as level while it rises {rise / FOOT:,.0f} ft; the lift to "
                    f"there would cost about {work * float(np.mean(thrust_work)):,.0f} kg more"
                )
    return tuple(found)


def _of_air(plan: FlightPlan, marched: Marched) -> list[str]:
    """Tables of temperature and wind that a flight leaves."""
    found = []
    for leg in dict.fromkeys(track.span.leg for track in marched.tracks):
        tracks = [t for t in marched.tracks if t.span.leg == leg and t.nodes is not None]
        air = tracks[0].span.air if tracks else STILL_AIR
        if not air.is_table:
            continue
        low, high = air.pressure_altitude[0], air.pressure_altitude[-1]
        flown = [t.nodes.flight.pressure_altitude for t in tracks if t.nodes is not None]
        least, most = min(float(a.min()) for a in flown), max(float(a.max()) for a in flown)
        name = plan.rows[tracks[0].span.segment].leg
        where = f"air of leg {name}" if name else "air"
        if most > high + 1.0:
            found.append(f"{where}: flown up to {most / FOOT:,.0f} ft, above its table's "
                         f"{high / FOOT:,.0f} ft, whose values are held")  # fmt: skip
        if least < low - 1.0:
            found.append(f"{where}: flown down to {least / FOOT:,.0f} ft, below its table's "
                         f"{low / FOOT:,.0f} ft, whose values are held")  # fmt: skip
    return found


def _of_speed(world: World, track: Track, name: str) -> list[str]:
    """A best speed that is held by what the aircraft may fly; engines whose drag is not known."""
    found = []
    nodes = track.nodes
    assert nodes is not None
    if track.is_level and track.span.end_speed.is_sought:
        mach = nodes.flight.mach[:, :1]
        slow, fast = hold_bounds(world.aircraft, nodes.flight, nodes.mass)
        what = track.span.end_speed.kind.replace("_", " ")
        if np.any(mach >= fast[:, :1] - _AT_BOUND):
            found.append(f"{name}: the speed of {what} lies above the greatest that the aircraft "
                         "may fly, which is flown")  # fmt: skip
        if np.any(mach <= slow[:, :1] + _AT_BOUND):
            found.append(f"{name}: the speed of {what} lies below 1.2 times the stall speed, "
                         "which is flown")  # fmt: skip
    if track.span.configuration.engines_out and not world.engine.is_known_unlit:
        found.append(f"{name}: the drag of the dead engine is left out; nothing is known of "
                     f"{world.engine.name} unlit")  # fmt: skip
    return found


def _of_exchanges(plan: FlightPlan, marched: Marched) -> list[str]:
    """Where a path trades height for speed, or speed for height, at one energy."""
    found = []
    for before, after in pairwise(marched.tracks):
        if before.span.march != "energy" or before.nodes is None or after.nodes is None:
            continue
        here, there = before.nodes.flight.at(-1), after.nodes.flight.at(0)
        rise = float(there.pressure_altitude[0] - here.pressure_altitude[0])
        if abs(rise) < _NEGLIGIBLE_RISE:
            continue
        found.append(
            f"{plan.rows[before.span.segment].name}: a {'zoom' if rise > 0.0 else 'dive'} at one "
            f"energy height, {here.pressure_altitude[0] / FOOT:,.0f} ft and Mach "
            f"{here.mach[0]:.3f} to {there.pressure_altitude[0] / FOOT:,.0f} ft and Mach "
            f"{there.mach[0]:.3f}, is taken to need no time and no fuel"
        )
    return found
