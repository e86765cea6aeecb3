"""Many flights of one mission at once: each with a payload or a radius of its own.

All members march as one batch where no choice of the plan depends on mass. Where levels, steps,
paths or the end of a cruise-climb follow mass, members are grouped by the plan that suits theirs: a
few of them tell the masses of the others, and plans are laid again with the masses found.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field, replace
from math import floor

import numpy as np
from numpy.typing import NDArray

from mission.coverage import refuse_missing_ratings
from mission.errors import CannotBeFlown
from mission.free import solve_free
from mission.fuel_plan import closure
from mission.march.joints import find_joints
from mission.march.sweep import Marched
from mission.march.world import World
from mission.mission_file import Mission
from mission.plan import FlightPlan, lay_out
from mission.questions.one_of_many import unlike
from mission.questions.shared_choices import Asked, SharedChoices, Token
from mission.solving import Root, Search

Array = NDArray[np.float64]
Members = NDArray[np.int64]
NODES = 5
SAME_END = 250.0  # m: ends of cruise-climbs that share a plan lie so far above its own at most
_SCOUTS, _MOST_ROUNDS = 5, 3
_ROUGHLY, _CLOSELY = 1e-3, 1e-6  # of the fuel aboard: what scouts are solved to, and members


@dataclass(frozen=True)
class Wanted:
    """What members differ in.

    ``added`` (members,) is payload on top of the mission's [kg]; ``radius`` (members,) the distance
    of its legs with ``distance = "radius"`` [m], if that differs.
    """

    added: Array
    radius: Array | None = None


@dataclass(frozen=True, eq=False)
class Group:
    """Members that share a plan, solved.

    Attributes
    ----------
    members : indices (k,) among all
    token : what tells the plan from others
    plan, marched, root : arrays over these members
    flights : whole flights that each has taken in all (k,)
    """

    members: Members
    token: Token
    plan: FlightPlan
    marched: Marched
    root: Root
    flights: Members


@dataclass(frozen=True)
class Solved:
    """All members: those that could be laid out, by groups, and why the others could not."""

    groups: Sequence[Group]
    refused: Mapping[int, CannotBeFlown]


@dataclass(frozen=True)
class _Laid:
    """A plan, the questions it asked, and what tells it from others, before them and after."""

    plan: FlightPlan
    asked: Sequence[Asked]
    about: Token
    token: Token


@dataclass(frozen=True)
class _Seen:
    """A member as it was flown last: masses by row, ends of cruise-climbs, and its root.

    ``numbers`` are the mass at the stop [kg], the root's value, and its least, margin there and
    fuel aboard; ``flights`` how many whole flights it took.
    """

    masses: Mapping[int, tuple[float, float]]
    ends: Mapping[int, float]
    numbers: Array
    has_answer: bool
    flights: int


@dataclass(frozen=True)
class _Task:
    """What is solved, the choices made so far, and the plans laid."""

    mission: Mission
    world: World
    wanted: Wanted
    choices: SharedChoices = field(default_factory=SharedChoices)
    laid: list[_Laid] = field(default_factory=list)

    def plan(self, masses: Mapping[int, tuple[float, float]], ends: Mapping[int, float]) -> _Laid:
        """The plan for some masses, one laid before if it suits them."""
        shared = {row: SAME_END * floor(end / SAME_END) for row, end in ends.items()}
        about = (bool(masses), *sorted(shared.items()))
        for known in self.laid:
            if known.about == about and self.choices.suit(known.asked, masses):
                return known
        self.choices.begin(about)
        plan = lay_out(self.mission, self.world, masses, shared, self.choices)
        refuse_missing_ratings(self.mission, plan, self.world.engine)
        self.laid.append(_Laid(plan, self.choices.asked, about, self.choices.token))
        return self.laid[-1]


def first_plan(mission: Mission, world: World) -> FlightPlan:
    """The plan of a mission before any mass is known."""
    return lay_out(mission, world, {}, {}, SharedChoices())


def solve_members(
    mission: Mission, world: World, wanted: Wanted, tolerance: float = _CLOSELY
) -> Solved:
    """Every member at the free value that its fuel is enough for, to a share of that aboard.

    Raises :class:`engine.errors.InputRefused` for a mission that cannot be laid out at any mass; a
    member that cannot at its own is ``refused``.
    """
    task = _Task(mission, world, wanted)
    first, count = task.plan({}, {}), wanted.added.size
    if not first.asked and not first.plan.has_cruise_climb:
        return Solved(_solved(task, first, np.arange(count), {}, tolerance), {})
    scouts = np.unique(np.linspace(0, count - 1, _SCOUTS).round().astype(np.int64))
    groups: list[Group] = []
    seen = _between(_seen(_solved(task, first, scouts, {}, _ROUGHLY)), count)
    refused: dict[int, CannotBeFlown] = {}
    for _ in range(_MOST_ROUNDS):
        following: list[Group] = []
        for laid, members in _by_plan(task, seen, refused):
            same = [g for g in groups if g.token == laid.token and set(g.members) <= set(members)]
            if sum(g.members.size for g in same) != members.size:
                same = _solved(task, laid, members, seen, tolerance)
            following += same
        is_at_rest = all(group in groups for group in following)
        groups, seen = following, _seen(following)
        if is_at_rest:
            break
    return Solved(groups, refused)


def _by_plan(
    task: _Task, seen: Mapping[int, _Seen], refused: dict[int, CannotBeFlown]
) -> list[tuple[_Laid, Members]]:
    """Members by the plan that suits their masses; those that none suits go to ``refused``."""
    found: dict[Token, tuple[_Laid, list[int]]] = {}
    for member, known in seen.items():
        try:
            laid = task.plan(known.masses, known.ends)
        except CannotBeFlown as refusal:
            refused[member] = refusal
        else:
            found.setdefault(laid.token, (laid, []))[1].append(member)
    return [(laid, np.array(sorted(members))) for laid, members in found.values()]


def _solved(
    task: _Task,
    laid: _Laid,
    members: Members,
    seen: Mapping[int, _Seen],
    tolerance: float,
) -> list[Group]:
    """Members of one plan solved in one batch, once more apart where they cannot share it."""
    group = _batch(task, laid, members, seen, tolerance)
    parts = unlike(group.marched)
    if len(parts) == 1:
        return [group]
    near = {**seen, **_seen([group])} if group.marched.is_settled else seen
    return [_batch(task, laid, members[part], near, tolerance) for part in parts]


def _batch(
    task: _Task, laid: _Laid, members: Members, seen: Mapping[int, _Seen], tolerance: float
) -> Group:
    """Members of one plan solved in one batch, from where they were seen if they were."""
    plan = _for_members(task, laid.plan, members)
    known = [seen[member] for member in members if member in seen]
    guess, earlier = plan.stop_empty_mass * 1.1 + plan.parts.added, None
    if known:
        guess, value, least, at_least, aboard = np.array([each.numbers for each in known]).T
        has_answer = np.array([each.has_answer for each in known])
        earlier = Root(value, at_least, has_answer, 0, Search(least, at_least, value, aboard))
    written = task.mission.written
    close = closure(plan, written)
    marched, root = solve_free(
        task.world, plan, written, NODES, guess, close, None, earlier, tolerance
    )
    flights = root.flights + np.array([each.flights for each in known] or [0])
    return Group(members, laid.token, plan, marched, root, np.broadcast_to(flights, members.shape))


def _for_members(task: _Task, plan: FlightPlan, members: Members) -> FlightPlan:
    """A plan cut where the engine has kinks, with what members carry and how far they go."""
    spans = find_joints(task.world, [*plan.parts.mission, *plan.parts.reserve]).cut()
    distances: dict[int, float | Array] = dict(plan.parts.distances)
    if task.wanted.radius is not None:
        legs = enumerate(task.mission.written.leg)
        own = task.wanted.radius[members]
        distances |= {number: own for number, leg in legs if leg.distance == "radius"}
    parts = replace(
        plan.parts,
        mission=tuple(span for span in spans if not span.is_reserve),
        reserve=tuple(span for span in spans if span.is_reserve),
        distances=distances,
        added=task.wanted.added[members],
    )
    return replace(plan, parts=parts)


def _seen(groups: Sequence[Group]) -> dict[int, _Seen]:
    """All members as they were flown."""
    return {
        int(member): _of_member(group, place)
        for group in groups
        for place, member in enumerate(group.members)
    }


def _of_member(group: Group, place: int) -> _Seen:
    root, search = group.root, group.root.search
    masses: dict[int, tuple[float, float]] = {}
    ends: dict[int, float] = {}
    for track in group.marched.tracks:
        row = track.span.segment
        start = masses[row][0] if row in masses else float(track.mass[0, place])
        masses[row] = (start, float(track.mass[-1, place]))
        if track.span.holds_lift_coefficient and track.nodes is not None:
            ends[row] = float(track.nodes.flight.pressure_altitude[-1, place])
    numbers = (group.marched.stop_mass, root.value, search.least, search.at_least, search.aboard)
    return _Seen(
        masses,
        ends,
        np.array([array[place] for array in numbers]),
        bool(root.has_answer[place]),
        int(group.flights[place]),
    )


def _between(scouts: Mapping[int, _Seen], count: int) -> dict[int, _Seen]:
    """All members, from a few of one plan on straight lines between them."""
    known = sorted(scouts)
    found: dict[int, _Seen] = {}
    for member in range(count):
        after = min(max(int(np.searchsorted(known, member)), 1), len(known) - 1)
        low, high = known[after - 1], known[after]
        share = (member - low) / (high - low) if high > low else 0.0
        found[member] = _mean(scouts[low], scouts[high], share, scouts.get(member))
    return found


def _mean(low: _Seen, high: _Seen, share: float, own: _Seen | None) -> _Seen:
    """A member at a share of the way from one to another; itself where it was flown."""
    if own is not None:
        return own

    def mean(a: float, b: float) -> float:
        return a + share * (b - a)

    return _Seen(
        masses={
            row: (mean(a[0], high.masses[row][0]), mean(a[1], high.masses[row][1]))
            for row, a in low.masses.items()
        },
        ends={row: mean(end, high.ends[row]) for row, end in low.ends.items()},
        numbers=low.numbers + share * (high.numbers - low.numbers),
        has_answer=low.has_answer and high.has_answer,
        flights=0,
    )
