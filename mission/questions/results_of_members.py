"""What became of each of many flights: its totals, why it fails, and how sure its reach is."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from mission.errors import CannotBeFlown
from mission.free import fuel_margins, fuel_per_free
from mission.fuel_plan import add_up, closure
from mission.logbook import totals
from mission.march.sweep import march
from mission.march.world import World
from mission.mission_file import Mission, MissionFile
from mission.questions.members import NODES, Group, Solved
from mission.questions.one_of_many import failures
from mission.questions.rising import Shift, shift_of
from mission.results import Failure, Totals

Array = NDArray[np.float64]
_CLOSED = 1e-6  # of the fuel aboard, to which a margin counts as nothing


@dataclass(frozen=True)
class Result:
    """One member as it was flown.

    Attributes
    ----------
    totals : of the flight
    free : what it was solved for: distance or radius [m], time [s]
    failure : the first hard limit passed
    least : the least that can be flown of that
    has_answer : False where fuel is short however little is flown
    is_closed : whether all fuel but the reserves is spent
    flights : whole flights that it took
    """

    totals: Totals
    free: float
    least: float
    failure: Failure | None
    has_answer: bool
    is_closed: bool
    flights: int


def results_of(mission: Mission, world: World, solved: Solved) -> list[Result | CannotBeFlown]:
    """Every member in order; the refusal of one that could not be laid out."""
    found: dict[int, Result | CannotBeFlown] = dict(solved.refused)
    for group in solved.groups:
        found |= _of_group(mission.written, world, group)
    return [found[member] for member in sorted(found)]


def _of_group(written: MissionFile, world: World, group: Group) -> dict[int, Result]:
    plan, marched, root = group.plan, group.marched, group.root
    shift = shift_of(plan, marched)
    places = range(group.members.size)
    sums = [
        _shifted(
            totals(plan, marched, add_up(plan, written, marched.integrals, i), 0.0, i), shift, i
        )
        for i in places
    ]
    why = failures(world, plan, marched, written, sums)
    return {
        int(group.members[i]): Result(
            totals=sums[i],
            free=float(root.value[i] + shift.free[i]),
            least=float(root.search.least[i]),
            failure=why[i],
            has_answer=bool(root.has_answer[i]),
            is_closed=bool(abs(root.margin[i]) <= _CLOSED * root.search.aboard[i]),
            flights=int(group.flights[i]),
        )
        for i in places
    }


def _shifted(total: Totals, shift: Shift, place: int) -> Totals:
    ground, time = float(shift.ground[place]), float(shift.time[place])
    return replace(
        total,
        ground_distance=total.ground_distance + ground,
        air_distance=total.air_distance + ground,
        block_time=total.block_time + time,
        trip_time=total.trip_time + time,
    )


def greatest_error(mission: Mission, world: World, solved: Solved, chosen: Sequence[int]) -> float:
    """Greatest change [m, s] of what chosen members are solved for, with twice the steps a span."""
    errors = [
        _errors(mission.written, world, group)[np.isin(group.members, chosen)]
        for group in solved.groups
        if group.marched.is_settled and np.isin(group.members, chosen).any()
    ]
    return float(np.max(np.concatenate(errors))) if errors else 0.0


def _errors(written: MissionFile, world: World, group: Group) -> Array:
    plan, coarse = group.plan, group.marched
    fine = march(
        world, plan.parts, 2 * NODES - 1, coarse.stop_mass, closure(plan, written), coarse,
        free=group.root.value,
    )  # fmt: skip
    change = fuel_margins(plan, written, fine) - fuel_margins(plan, written, coarse)
    return np.abs(change / fuel_per_free(plan, fine, -1))
