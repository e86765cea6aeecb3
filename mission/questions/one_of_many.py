"""A batch of flights seen one by one, or all as one; which of them fail, and why."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import fields, is_dataclass, replace
from typing import Any

import numpy as np
from numpy.typing import NDArray

from engine.interface import is_unanswered
from mission.limits import first_failure
from mission.logbook import segment_logs
from mission.march.span import Nodes, Span
from mission.march.sweep import Integrals, Marched
from mission.march.tracks import Track
from mission.march.world import World
from mission.mission_file import MissionFile
from mission.plan import FlightPlan
from mission.results import Failure, Totals

Array = NDArray[np.float64]
_LOADS = ("refuelling", "release", "turnaround")  # after which tanks may be more than full


def alone(plan: FlightPlan, marched: Marched, place: int) -> tuple[FlightPlan, Marched]:
    """Plan and march of one member alone."""

    def own(value: Any) -> Any:
        if isinstance(value, np.ndarray):
            return value[..., place : place + 1] if value.shape[-1:] != (1,) else value
        if is_dataclass(value) and not isinstance(value, Span | type):
            return replace(value, **{f.name: own(getattr(value, f.name)) for f in fields(value)})
        return value

    tracks = [own(track) for track in marched.tracks]
    flown = replace(
        marched,
        tracks=tracks,
        integrals=_integrals(marched, own),
        stop_mass=own(marched.stop_mass),
    )
    distances = {
        leg: float(np.broadcast_to(distance, marched.stop_mass.shape)[place])
        for leg, distance in plan.parts.distances.items()
    }
    parts = replace(plan.parts, distances=distances, added=np.zeros(1))
    added = float(plan.parts.added[place])
    rows = tuple(replace(row, empty_mass=row.empty_mass + added) for row in plan.rows)
    heavier = plan.first_empty_mass + added
    return replace(plan, rows=rows, first_empty_mass=heavier, parts=parts), flown


def failures(
    world: World,
    plan: FlightPlan,
    marched: Marched,
    written: MissionFile,
    totals: Sequence[Totals],
) -> list[Failure | None]:
    """The first hard limit that each member passes, None for one that can be flown.

    All are looked at as one flight; one by one only where that passes a limit somewhere.
    """
    members = range(len(totals))
    if not _is_any_doubtful(world, plan, marched, written, totals):
        return [None for _ in members]
    found = []
    for place in members:
        own_plan, own = alone(plan, marched, place)
        logs = segment_logs(world, own_plan, own, in_full=False)
        total = totals[place]
        found.append(first_failure(world, own_plan, own, written, total, logs, closes=True))
    return found


def unlike(marched: Marched) -> list[NDArray[np.int64]]:
    """Members that can share a march, by their places in it.

    Those that the engine had no answer for hold up the others; and a change of speed is flown by
    all on a rating, or by all at idle.
    """
    tells = [~np.isfinite(marched.stop_mass)]
    for track in marched.tracks:
        if track.nodes is not None:
            tells.append(np.any(is_unanswered(track.nodes.propulsion.outcome), axis=0))
        if track.span.march == "speed":
            tells.append(track.mach[-1] < track.mach[0])
    _, kinds = np.unique(np.array(tells), axis=1, return_inverse=True)
    kinds = kinds.reshape(-1)
    return [np.flatnonzero(kinds == kind) for kind in range(kinds.max() + 1)]


def _is_any_doubtful(
    world: World,
    plan: FlightPlan,
    marched: Marched,
    written: MissionFile,
    totals: Sequence[Totals],
) -> bool:
    """Whether a flight that is everywhere where a member is, as heavy as each, passes a limit."""
    added = plan.parts.added
    if any(row.kind in _LOADS for row in plan.rows) or not marched.is_settled:
        return True
    heaviest = max(plan.first_empty_mass, *(row.empty_mass for row in plan.rows)) + added.max()
    if heaviest > world.aircraft.maximum_zero_fuel_mass * (1.0 + 1e-9):
        return True
    most = {f.name: max(getattr(total, f.name) for total in totals) for f in fields(Totals)}
    worst = Totals(**most | {"fuel_margin": min(total.fuel_margin for total in totals)})
    whole = _as_one(marched, added)
    nearest = {leg: float(np.min(distance)) for leg, distance in plan.parts.distances.items()}
    plan = replace(plan, parts=replace(plan.parts, distances=nearest))
    logs = segment_logs(world, plan, whole, in_full=False)
    return first_failure(world, plan, whole, written, worst, logs, closes=True) is not None


def _as_one(marched: Marched, added: Array) -> Marched:
    """All members one below another, masses without what each carries more; the longest ways."""
    return replace(
        marched,
        tracks=[_below_another(track, added) for track in marched.tracks],
        integrals=_integrals(marched, lambda sums: sums.max(axis=1, keepdims=True)),
    )


def _below_another(track: Track, added: Array) -> Track:
    shape = track.mass.shape

    def column(value: Any) -> Any:
        if isinstance(value, np.ndarray):
            return np.broadcast_to(value, shape).reshape(-1, 1)
        if is_dataclass(value) and not isinstance(value, type):
            return replace(value, **{f.name: column(getattr(value, f.name)) for f in fields(value)})
        return value

    nodes: Nodes | None = column(track.nodes)
    mass = column(track.mass - added)
    return replace(
        track,
        mass=mass,
        nodes=nodes,
        dead_drag=column(track.dead_drag),
        dead_mach=column(track.dead_mach),
    )


def _integrals(marched: Marched, of: Any) -> Integrals:
    """The sums along every span, each made into others."""
    return Integrals(
        *([of(sums) for sums in getattr(marched.integrals, f.name)] for f in fields(Integrals))
    )
