"""Fly a mission: lay it out, march it, close its fuel, refine it, and look at every limit."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from engine.interface import Engine
from mission.aircraft import Aircraft, usable_fuel
from mission.breguet import cross_checks
from mission.coverage import refuse_missing_ratings, refuse_other_day
from mission.field.of_flight import field_of, runway_margin
from mission.free import closed_again, solution_of, solve_free
from mission.fuel_plan import add_up, closure, tank_warnings
from mission.limits import first_failure
from mission.logbook import segment_logs, totals
from mission.march.joints import Ends, Joints, find_joints
from mission.march.span import Span
from mission.march.sweep import Marched, march
from mission.march.world import World
from mission.margins import margins, unmet
from mission.mission_file import Mission, MissionFile
from mission.plan import FlightPlan, lay_out
from mission.reserves.carriage import reserve_items
from mission.results import Failure, Flight, SegmentLog
from mission.segments.choices import Choices
from mission.solving import Root
from mission.warnings import warnings_of

Array = NDArray[np.float64]
COARSE, FINE = 5, 9  # nodes a span; the difference of the two is the integration error
_COARSE_SETTLED = 1e-8  # the fine march goes on from there
_ROUGHLY_SETTLED = 5e-7  # of mass, which is enough to choose a level, a path or a speed by
_MOST_PLANS = 10
# Steps are doubled, at most so often, until fuel moves by less than this share of itself.
_PRECISE, _MOST_REFINEMENTS = 1e-4, 3
_SAME_ALTITUDE = 0.01  # m, between the end of a cruise-climb and what follows


@dataclass(frozen=True)
class _Solved:
    """A plan with its coarse and its fine march."""

    plan: FlightPlan
    coarse: Marched
    fine: Marched
    root: Root | None = None

    @property
    def free(self) -> Array | None:
        """What the flight was solved for, shape (1,)."""
        return None if self.root is None else self.root.value


def fly(mission: Mission, aircraft: Aircraft, engine: Engine, *, refinement: int = 1) -> Flight:
    """Fly a mission with an aircraft and an engine.

    ``refinement`` multiplies the steps of every span, which are doubled further where fuel still
    moves by more than 1e-4; the flight reports its own integration error, the change of block
    fuel from half the steps to these. Raises
    :class:`engine.errors.InputRefused` for a mission that cannot be laid out; a mission that
    cannot be flown comes back with ``failure`` set and the log up to there.
    """
    refuse_other_day(mission, engine)
    written = mission.written
    world = World(aircraft, engine)
    solved = _solve(mission, world, refinement)
    has_no_mass = not solved.fine.is_settled and not solved.fine.is_lost
    if written.fuel.as_needed and has_no_mass:
        most = aircraft.maximum_take_off_mass - solved.plan.first_empty_mass
        load = max(min(usable_fuel(aircraft, engine.fuel), most), 1.0)
        written = written.model_copy(
            update={"fuel": written.fuel.model_copy(update={"load": load, "as_needed": False})}
        )
        solved = _solve(mission.model_copy(update={"written": written}), world, refinement)
    return _flight(mission, written, world, solved)


def _solve(mission: Mission, world: World, refinement: int) -> _Solved:
    """Plan and march, again while the masses found change what was planned."""
    ends: dict[int, float] = {}
    masses: dict[int, tuple[float, float]] = {}
    choices = Choices()
    written = mission.written
    few, many = (refinement * (n - 1) + 1 for n in (COARSE, FINE))
    coarse: Marched | None = None
    root: Root | None = None
    is_rough = True  # until what was chosen for masses holds
    for _ in range(_MOST_PLANS):
        whole = lay_out(mission, world, masses, ends, choices)
        refuse_missing_ratings(mission, whole, world.engine)
        is_rough &= choices.has_any or whole.has_cruise_climb
        joints = find_joints(world, [*whole.parts.mission, *whole.parts.reserve])
        plan = _with_spans(whole, joints.cut())
        near = coarse if _has_same_spans(coarse, plan) else None
        guess = _first_guess(whole, written) if coarse is None else coarse.stop_mass
        settled = _ROUGHLY_SETTLED if is_rough else _COARSE_SETTLED
        coarse, root = _march_coarse(world, plan, written, few, guess, near, root, settled)
        closer = joints.cut(_flown(joints, coarse))
        if coarse.is_settled and not is_rough and len(closer) != len(coarse.tracks):
            plan = _with_spans(whole, closer)
            guess = coarse.stop_mass
            coarse, root = _march_coarse(world, plan, written, few, guess, None, root, settled)
        found = _cruise_climb_ends(coarse)
        moved = max((abs(found[row] - ends.get(row, 0.0)) for row in found), default=0.0)
        ends, masses = found, coarse.row_masses
        choices.fit(masses)
        is_at_rest = moved < _SAME_ALTITUDE and choices.is_at_rest
        if not coarse.is_settled or (is_at_rest and not is_rough):
            break
        is_rough &= not is_at_rest
    assert coarse is not None
    close = closure(plan, written)
    free = None if root is None else root.value
    fine = coarse
    if coarse.is_settled:
        fine = march(world, plan.parts, many, coarse.stop_mass, close, coarse, free=free)
    for _ in range(_MOST_REFINEMENTS):
        if not fine.is_settled or _change_of_fuel(coarse, fine) < _PRECISE:
            break
        coarse, many = fine, 2 * many - 1
        fine = march(world, plan.parts, many, coarse.stop_mass, close, coarse, free=free)
    if root is not None and fine.is_settled:
        fine, root = closed_again(world, plan, written, close, fine, root)
    return _Solved(plan, coarse, fine, root)


def _first_guess(plan: FlightPlan, written: MissionFile) -> Array:
    """Mass [kg] at the stop before anything is known."""
    empty = plan.stop_empty_mass
    return np.array([empty + 0.1 * (written.fuel.load or empty)])


def _march_coarse(
    world: World,
    plan: FlightPlan,
    written: MissionFile,
    count: int,
    stop: Array,
    near: Marched | None,
    root: Root | None,
    settled: float,
) -> tuple[Marched, Root | None]:
    """The plan with few nodes, solved for what is free in it, if anything is."""
    close = closure(plan, written)
    if not written.free:
        return march(world, plan.parts, count, stop, close, near, settled), None
    return solve_free(world, plan, written, count, stop, close, near, root)


def _change_of_fuel(coarse: Marched, fine: Marched) -> float:
    """Change of all fuel between two marches, relative."""
    burnt = [sum(float(f[-1, 0]) for f in marched.integrals.fuel) for marched in (coarse, fine)]
    return abs(burnt[1] - burnt[0]) / max(burnt[1], 1.0)


def _has_same_spans(marched: Marched | None, plan: FlightPlan) -> bool:
    """Whether an earlier march of a plan with other altitudes can start this one."""
    spans = [*plan.parts.mission, *plan.parts.reserve]
    return marched is not None and [(s.segment, s.march) for s in spans] == [
        (track.span.segment, track.span.march) for track in marched.tracks
    ]


def _with_spans(plan: FlightPlan, spans: tuple[Span, ...]) -> FlightPlan:
    parts = replace(
        plan.parts,
        mission=tuple(span for span in spans if not span.is_reserve),
        reserve=tuple(span for span in spans if span.is_reserve),
    )
    return replace(plan, parts=parts)


def _flown(joints: Joints, marched: Marched) -> dict[int, Ends]:
    """Ends of the changes of speed as they came out, where masses are known."""
    first = np.array([float(track.mach[0, 0]) for track in marched.tracks])
    last = np.array([float(track.mach[-1, 0]) for track in marched.tracks])
    return joints.ends_of(first, last)


def _cruise_climb_ends(marched: Marched) -> dict[int, float]:
    """Pressure altitude [m] at the end of each cruise-climb, by row."""
    return {
        track.span.segment: float(track.nodes.flight.pressure_altitude[-1, 0])
        for track in marched.tracks
        if track.span.holds_lift_coefficient and track.nodes is not None
    }


def _flight(mission: Mission, written: MissionFile, world: World, solved: _Solved) -> Flight:
    plan, fine = solved.plan, solved.fine
    sums = add_up(plan, written, fine.integrals)
    coarse_sums = add_up(plan, written, solved.coarse.integrals)
    logs = segment_logs(world, plan, fine)
    error = abs(sums.mission_fuel - coarse_sums.mission_fuel)
    total = totals(plan, fine, sums, error)
    closes = mission.written.fuel == written.fuel
    failure = first_failure(world, plan, fine, written, total, logs, closes=closes)
    flown = failure is None
    shown = _to_show(plan, logs, failure)
    field = field_of(world, plan, written, logs) if flown else None
    found = (*margins(world, plan, shown, total), *runway_margin(field))
    return Flight(
        mission=written.name,
        aircraft=world.aircraft.name,
        engine=world.engine.name,
        day=written.day,
        totals=total,
        segments=shown,
        reserves=reserve_items(
            world, plan, written, solved.coarse, sums, free=solved.free, with_cost=flown
        ),
        cross_check=cross_checks(plan, logs, total) if flown else (),
        margins=found,
        assumed=(
            *(f"mission: {line}" for line in mission.assumed),
            *(f"aircraft: {line}" for line in world.aircraft.assumed),
            *(f"engine: {line}" for line in world.engine.assumed),
        ),
        warnings=(
            *warnings_of(world, plan, fine),
            *unmet(found if flown else ()),
            *tank_warnings(world.aircraft, world.engine.fuel, total.loaded_fuel),
            *_of_an_attempt(failure, mission),
        ),
        failure=failure,
        fuel=world.engine.fuel,
        solution=solution_of(written, solved.root),
        reserve_rule=written.reserves.rule_in_force,
        fuel_flow_margin=sums.fuel_flow_margin,
        field=field,
    )


def _to_show(
    plan: FlightPlan, logs: tuple[SegmentLog, ...], failure: Failure | None
) -> tuple[SegmentLog, ...]:
    """The logs without those flown aside, unless it is there that the flight fails."""
    return tuple(
        log
        for row, log in zip(plan.rows, logs, strict=True)
        if row.purpose != "aside" or (failure is not None and failure.segment == log.name)
    )


def _of_an_attempt(failure: Failure | None, mission: Mission) -> tuple[str, ...]:
    """What to think of the masses of a flight that could not be flown."""
    if failure is None or not mission.written.fuel.as_needed:
        return ()
    return ("fuel as needed: the masses are those of the attempt to close the fuel",)
