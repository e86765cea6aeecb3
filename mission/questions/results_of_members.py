"""What became of each of many flights: its totals, why it fails, and how sure its reach is."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from mission.errors import CannotBeFlown
from mission.free import fuel_margins, fuel_per_free
from mission.fuel_plan import add_up, closure
from mission.logbook import totals
from mission.march.sweep import Marched, march
from mission.march.world import World
from mission.mission_file import Mission, MissionFile
from mission.questions.members import NODES, Group, Solved
from mission.questions.one_of_many import failures
from mission.questions.stretching import Shift, shift_of
from mission.results import Failure, Totals

Array = NDArray[np.float64]
_CLOSED = 1e-4  # of the fuel aboard: a margin that is less is made up for without a flight more


@dataclass(frozen=True)
class Result:
    """One member as it was flown.

    Attributes
    ----------
    totals : of the flight
    free : what it was solved for: distance or radius [m], time [s]
    least : the least that can be flown of that
    error : what that has moved by with twice the steps
    failure : the first hard limit passed
    has_answer : False where fuel is short however little is flown
    is_closed : whether all fuel but the reserves is spent
    flights : whole flights that it took
    """

    totals: Totals
    free: float
    least: float
    error: float
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
    """Members of a group with twice the steps; what fuel that leaves or lacks stretches them."""
    plan, root = group.plan, group.root
    is_closed = root.has_answer & (np.abs(root.margin) <= _CLOSED * root.search.aboard)
    fine, left = _finer(written, world, group, is_closed)
    error = np.abs(left) / fuel_per_free(plan, fine, -1)
    shift = shift_of(plan, fine, left)
    places = range(group.members.size)
    sums = [
        _shifted(
            totals(plan, fine, add_up(plan, written, fine.integrals, i), 0.0, i),
            shift,
            float(left[i]),
            i,
        )
        for i in places
    ]
    why = failures(world, plan, fine, written, sums)
    return {
        int(group.members[i]): Result(
            totals=sums[i],
            free=float(root.value[i] + shift.free[i]),
            least=float(root.search.least[i]),
            error=float(error[i]),
            failure=why[i],
            has_answer=bool(root.has_answer[i]),
            is_closed=bool(is_closed[i]),
            flights=int(group.flights[i]) + 1,
        )
        for i in places
    }


def _finer(
    written: MissionFile, world: World, group: Group, is_closed: NDArray[np.bool_]
) -> tuple[Marched, Array]:
    """The flights with twice the steps, and the fuel margin [kg] that closed ones are left with."""
    plan, coarse = group.plan, group.marched
    if not coarse.is_settled:
        return coarse, np.zeros_like(coarse.stop_mass)
    fine = march(
        world, plan.parts, 2 * NODES - 1, coarse.stop_mass, closure(plan, written), coarse,
        free=group.root.value,
    )  # fmt: skip
    return fine, np.where(is_closed, fuel_margins(plan, written, fine), 0.0)


def _shifted(total: Totals, shift: Shift, left: float, place: int) -> Totals:
    """Totals once the fuel that was left [kg] is burnt too."""
    ground, time = float(shift.ground[place]), float(shift.time[place])
    return replace(
        total,
        block_fuel=total.block_fuel + left,
        trip_fuel=total.trip_fuel + left,
        fuel_left=total.fuel_left - left,
        fuel_margin=total.fuel_margin - left,
        ground_distance=total.ground_distance + ground,
        air_distance=total.air_distance + ground,
        block_time=total.block_time + time,
        trip_time=total.trip_time + time,
        landing_mass=total.landing_mass - left,
    )
