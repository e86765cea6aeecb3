"""Many flights of one mission at once: each with a payload and a time on station of its own.

All members march as one batch where their plans are alike. Where levels, paths or steps follow
mass, members are grouped by the plan that suits them: a choice is made for masses 3 % apart and
shared by those in between.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, field, fields, is_dataclass, replace
from math import exp, log
from typing import Any

import numpy as np
from numpy.typing import NDArray

from mission.free import solve_free
from mission.fuel_plan import closure
from mission.march.joints import find_joints
from mission.march.span import Span
from mission.march.sweep import Integrals, Marched
from mission.march.world import World
from mission.mission_file import Mission
from mission.plan import FlightPlan, lay_out
from mission.segments.choices import MASS_THAT_MATTERS, Choices
from mission.solving import Root

Array = NDArray[np.float64]
_NODES = 5
_BUCKET = 0.03  # of mass: one choice for members that differ by less
_SAME_END = 75.0  # m: a cruise-climb's end, shared by members that differ by less
_MOST_ROUNDS = 5
_NEAR = 1e-6  # of mass: below it a choice is an exact root, above it one that hardly matters


@dataclass
class SharedChoices(Choices):
    """Choices shared by members of nearly one mass."""

    shared: dict[tuple[int, str, float], Any] = field(default_factory=dict)

    def at(
        self,
        row: int,
        subject: str,
        mass: float,
        choose: Callable[[float], Any],
        *,
        end: int = 0,
        matters: float = MASS_THAT_MATTERS,
    ) -> Any:
        """The choice for the middle of the mass's bucket; for the mass itself where it decides."""
        is_shared = matters == MASS_THAT_MATTERS or matters < _NEAR
        middle = exp(_BUCKET * round(log(mass) / _BUCKET)) if is_shared else mass
        key = (row, subject, middle)
        if key not in self.shared:
            self.shared[key] = choose(middle)
        return self.shared[key]


@dataclass(frozen=True)
class Group:
    """Members of one plan, solved: indices among all, the plan, the march and the root."""

    members: NDArray[np.int64]
    plan: FlightPlan
    marched: Marched
    root: Root

    def member(self, place: int) -> tuple[FlightPlan, Marched]:
        """Plan and march of one of its members alone."""
        added = float(self.plan.parts.added[place])
        rows = tuple(replace(row, empty_mass=row.empty_mass + added) for row in self.plan.rows)
        plan = replace(
            self.plan,
            rows=rows,
            first_empty_mass=self.plan.first_empty_mass + added,
            parts=replace(self.plan.parts, added=np.zeros(1)),
        )
        return plan, _alone(self.marched, place)


@dataclass(frozen=True)
class Wanted:
    """What members differ in.

    ``added`` (members,) is payload on top of the mission's [kg]; ``station`` the name of a loiter
    and (members,) the time of each there [s], if that differs.
    """

    added: Array
    station: tuple[str, Array] | None = None


def solve_members(
    mission: Mission, world: World, wanted: Wanted, earlier: Sequence[Group] = ()
) -> list[Group]:
    """Every member at the free value that its fuel is enough for, by groups.

    ``earlier`` groups of nearly the same members are where to begin.
    """
    choices = SharedChoices()
    everybody = np.arange(wanted.added.size)
    groups = [
        _solved(mission, world, wanted, choices, _Known(everybody, {}, {}), None)
    ] if not earlier else [
        _again(world, mission, wanted, group) for group in earlier
    ]
    has_choices = bool(choices.shared) or bool(earlier and len(earlier) > 1)
    for _ in range(_MOST_ROUNDS):
        if not has_choices and not _ends(groups[0].marched, 0):
            break
        asked = _regrouped(mission, world, choices, groups)
        keys = {_key(group.plan): group for group in groups}
        new = []
        for key, known in asked.items():
            same = keys.get(key)
            if same is not None and np.array_equal(same.members, known.members):
                new.append(same)
            else:
                new.append(_solved(mission, world, wanted, choices, known, groups))
        is_settled = all(group in groups for group in new)
        groups = new
        if is_settled:
            break
    return groups
