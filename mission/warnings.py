"""What the reader should know though the mission flies: states flagged and work left out."""

from __future__ import annotations

import numpy as np

from engine.interface import Outcome
from engine.quantities import FOOT, STANDARD_GRAVITY
from mission.march.sweep import Marched
from mission.march.world import World
from mission.plan import FlightPlan

_NEGLIGIBLE_RISE = 1.0  # m
_AIRBORNE = ("climb", "acceleration", "cruise", "loiter", "descent")


def warnings_of(world: World, plan: FlightPlan, marched: Marched) -> tuple[str, ...]:
    """Sentences, each naming its segment."""
    found: list[str] = []
    last = [row for row in plan.rows if row.purpose == "mission"][-1]
    if last.kind in _AIRBORNE:
        found.append(
            f"{last.name}: the mission ends in the air; put a descent and an approach at its end"
        )
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
