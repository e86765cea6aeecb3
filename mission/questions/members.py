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
        is_exact: bool = False,
    ) -> Any:
        """The choice for the middle of the mass's bucket; for the mass itself where it decides."""
        middle = mass if is_exact else exp(_BUCKET * round(log(mass) / _BUCKET))
        key = (row, subject, middle)
        if key not in self.shared:
            self.shared[key] = choose(middle)
        return self.shared[key]


@dataclass(frozen=True)
class Group:
    """Members of one plan, solved: their indices, what tells the plan, the plan, march and root."""

    members: NDArray[np.int64]
    key: Any
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


@dataclass(frozen=True)
class _Known:
    """Members to solve together, and what is known of them: masses and ends of cruise-climbs."""

    members: NDArray[np.int64]
    masses: Mapping[int, tuple[float, float]]
    ends: Mapping[int, float]


def solve_members(mission: Mission, world: World, wanted: Wanted) -> list[Group]:
    """Every member at the free value that its fuel is enough for, by groups."""
    choices = SharedChoices()
    everybody = _Known(np.arange(wanted.added.size), {}, {})
    groups = [_solved(mission, world, wanted, choices, everybody, None)]
    for _ in range(_MOST_ROUNDS):
        if not choices.shared and not _ends(_alone(groups[0].marched, 0)):
            break
        known = {group.key: group for group in groups}
        following = []
        for key, asked in _regrouped(mission, world, choices, groups).items():
            same = known.get(key)
            if same is None or not np.array_equal(same.members, asked.members):
                near = _holding(groups, int(asked.members[0]))
                same = _solved(mission, world, wanted, choices, asked, near)
            following.append(same)
        is_at_rest = all(group in groups for group in following)
        groups = following
        if is_at_rest:
            break
    return groups


def _holding(groups: Sequence[Group], member: int) -> Group:
    """The group that holds a member."""
    return next(group for group in groups if member in group.members)


def _solved(
    mission: Mission,
    world: World,
    wanted: Wanted,
    choices: Choices,
    known: _Known,
    near: Group | None,
) -> Group:
    """Members of one plan, solved in one batch."""
    whole = lay_out(mission, world, known.masses, known.ends, choices)
    plan = _with_station(whole, wanted, known)
    joints = find_joints(world, [*plan.parts.mission, *plan.parts.reserve])
    spans = joints.cut()
    parts = replace(
        plan.parts,
        mission=tuple(span for span in spans if not span.is_reserve),
        reserve=tuple(span for span in spans if span.is_reserve),
        added=wanted.added[known.members],
    )
    plan = replace(plan, parts=parts)
    guess = plan.stop_empty_mass * 1.1 + parts.added
    if near is not None:
        guess = np.full(parts.added.size, float(np.mean(near.marched.stop_mass)))
    marched, root = solve_free(
        world, plan, mission.written, _NODES, guess, closure(plan, mission.written), None, None
    )
    return Group(known.members, _key(whole), plan, marched, root)


def _with_station(plan: FlightPlan, wanted: Wanted, known: _Known) -> FlightPlan:
    """The plan with each member's own time on station."""
    if wanted.station is None:
        return plan
    name, times = wanted.station
    rows = [i for i, row in enumerate(plan.rows) if (row.name, row.kind) == (name, "loiter")]
    mission = tuple(
        replace(span, extent=times[known.members]) if span.segment in rows else span
        for span in plan.parts.mission
    )
    return replace(plan, parts=replace(plan.parts, mission=mission))


def _regrouped(
    mission: Mission, world: World, choices: Choices, groups: Sequence[Group]
) -> dict[Any, _Known]:
    """All members by the plan that suits their masses."""
    found: dict[Any, list[tuple[int, _Known]]] = {}
    for group in groups:
        for place, member in enumerate(group.members):
            alone = _alone(group.marched, place)
            masses = alone.row_masses
            known = _Known(np.array([member]), masses, _ends(alone))
            choices.counts.clear()  # of the member before
            plan = lay_out(mission, world, masses, known.ends, choices)
            found.setdefault(_key(plan), []).append((int(member), known))
    return {
        key: _Known(np.array(sorted(m for m, _ in same)), same[0][1].masses, same[0][1].ends)
        for key, same in found.items()
    }


def _ends(marched: Marched) -> dict[int, float]:
    """Pressure altitude [m] at which each cruise-climb ends, by row, as members share it."""
    return {
        track.span.segment: _SAME_END
        * round(float(track.nodes.flight.pressure_altitude[-1, 0]) / _SAME_END)
        for track in marched.tracks
        if track.span.holds_lift_coefficient and track.nodes is not None
    }


def _key(plan: FlightPlan) -> Any:
    """What tells plans apart: segments, marches, where they begin and end, and paths."""
    return tuple(
        (s.segment, s.march, s.start_altitude, s.end_altitude, s.end_mass, id(s.path))
        for s in (*plan.parts.mission, *plan.parts.reserve)
    )


def _alone(marched: Marched, place: int) -> Marched:
    """One member of a march alone."""

    def own(value: Any) -> Any:
        if isinstance(value, np.ndarray):
            return value[..., place : place + 1] if value.shape[-1:] != (1,) else value
        if is_dataclass(value) and not isinstance(value, Span | type):
            return replace(value, **{f.name: own(getattr(value, f.name)) for f in fields(value)})
        return value

    tracks = [own(track) for track in marched.tracks]
    sums = Integrals(
        *([own(array) for array in getattr(marched.integrals, f.name)] for f in fields(Integrals))
    )
    return replace(marched, tracks=tracks, integrals=sums, stop_mass=own(marched.stop_mass))
