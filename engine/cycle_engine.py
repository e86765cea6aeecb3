"""An engine computed from its cycle, behind the one interface."""

from __future__ import annotations

from dataclasses import dataclass, field, replace
from functools import cached_property

import numpy as np
from numpy.typing import ArrayLike, NDArray

from engine.atmosphere import FlightCondition, broadcast_condition, flight_condition
from engine.cycles.flowpath import LIMIT_NAMES, Arrangement, Flowpath
from engine.cycles.reheating import Reheat, light
from engine.cycles.situation import NOTHING_TAKEN, Situation, Sizing
from engine.errors import CycleCannotRun
from engine.finished import SLACK, Finished, is_physical
from engine.gas import DISSOCIATION_FELT_ABOVE, RealGas
from engine.installation.pod import GivenPod, Pod
from engine.interface import OPTIONAL_RATINGS, Engine, EngineState, Outcome, is_unanswered
from engine.matching import Solution, Throttle, evaluate_at, solve
from engine.parts.stream import Stream
from engine.pods import pod_of
from engine.ratings import FLAT, Asked, Ratings, ask_rating, join, pick, reheat_bounds

Array = NDArray[np.float64]
_UNBOUNDED = np.full(len(LIMIT_NAMES), np.inf)


@dataclass(frozen=True)
class CycleEngine(Engine):
    """A sized arrangement with its ratings and idles by name, and what is known of its pod."""

    arrangement: Arrangement
    sizing: Sizing
    bounds: Ratings
    given_pod: GivenPod = field(default_factory=GivenPod)
    greatest_mach: float = 0.85

    @property
    def doubts(self) -> dict[str, str]:
        """Ratings so hot that dissociation, which the gas model leaves out, is felt."""
        if not isinstance(self.arrangement.gas, RealGas):
            return {}
        return {
            name: f"dissociation, left out, lowers a temperature by more than 1 % above "
            f"{DISSOCIATION_FELT_ABOVE:.0f} K, and {name} allows {rating.hottest:.0f} K"
            for name, rating in self.bounds.items()
            if rating.hottest > DISSOCIATION_FELT_ABOVE
        }

    @cached_property
    def pod(self) -> Pod:
        """Size, mass and skin drag, estimated where not given.

        Raises
        ------
        CycleCannotRun
            where there is no greatest rating at rest from which to estimate them.
        """
        greatest = OPTIONAL_RATINGS[0] if OPTIONAL_RATINGS[0] in self.ratings else "take_off"
        at_rest = self.at_rating(flight_condition(0.0, 0.0), greatest)
        if is_unanswered(at_rest.outcome).any():
            raise CycleCannotRun(
                f"{self.name} has no state at {greatest} at rest, from which its size is reckoned"
            )
        return pod_of(self.arrangement, self.sizing, at_rest, self.given_pod, self.greatest_mach)

    @property
    def ratings(self) -> tuple[str, ...]:
        """Names of the ratings it has, from take-off down."""
        return tuple(n for n, r in self.bounds.items() if r.throttle == Throttle.CEILING)

    def at(
        self,
        flight: FlightCondition,
        *,
        rating: str | NDArray[np.str_],
        net_thrust: ArrayLike | None = None,
        idle: str = "flight_idle",
        start: Array | None = None,
    ) -> EngineState:
        """State at ratings and required thrusts; see :class:`engine.interface.Engine`."""
        wanted = np.nan if net_thrust is None else net_thrust
        flight, thrust = _broadcast(flight, wanted, np.shape(rating))
        names = np.broadcast_to(rating, flight.shape).ravel()
        near = _start(start)
        asked = self._asked(_flat(flight), names, thrust.ravel(), near)
        solution = self._solve(asked, near)
        state = self._finish(asked, solution)
        met = state.is_answer(self._idle(idle, asked.flat).bounds)
        outcome = np.where(met, Outcome.MET, Outcome.NOT_CONVERGED)
        suspects = np.flatnonzero(~met & asked.is_thrust)
        if suspects.size:
            there, verdict = self._at_the_edge(asked.at(suspects), idle)
            solution, outcome[suspects] = solution.replaced(suspects, there), verdict
            state = self._finish(asked, solution)
        state, outcome = self._with_reheat(state, names, outcome)
        return state.to_engine_state(self.arrangement, flight, outcome)

    def _asked(
        self, flat: FlightCondition, names: NDArray[np.str_], thrust: Array, near: Array | None
    ) -> Asked:
        """The call in numbers: bounds and off-takes of the rating that each member names."""
        parts = {}
        for name in np.unique(names):
            here = np.flatnonzero(names == name)
            rating = pick(self.bounds, str(name), self.name)
            part = ask_rating(rating, flat.at(here))
            if rating.flat_to is not None:
                there = None if near is None else near[:, here]
                part.bounds[FLAT] = self._flat_thrust(str(name), rating.flat_to, part.flat, there)
            parts[str(name)] = part
        return join(parts, names, flat, thrust)

    def _idle(self, idle: str, flat: FlightCondition) -> Asked:
        return ask_rating(pick(self.bounds, idle, self.name), flat)

    def _flat_thrust(
        self, name: str, warm: float, flat: FlightCondition, near: Array | None
    ) -> Array:
        """Thrust [N] of the warm day on colder ones; no bound on warmer ones."""
        bound = np.full(flat.mach.size, np.inf)
        cold = np.flatnonzero(flat.temperature_deviation < warm)
        if cold.size:
            there = flat.at(cold)
            warm_flight = flight_condition(there.pressure_altitude, there.mach, warm)
            start = None if near is None else near[:, cold]
            state = self.at(warm_flight, rating=name, start=start)
            bound[cold] = np.where(is_unanswered(state.outcome), np.nan, state.net_thrust)
        return bound

    def _at_the_edge(self, asked: Asked, idle: str) -> tuple[Solution, NDArray[np.int64]]:
        """What there is for thrusts not met within the limits, and what became of each demand.

        Beyond the rating it is the rating, below idle it is idle; between the two the thrust is
        asked for once more from the nearer one, and what still has no answer is said to have none.
        """
        at_top, at_bottom = asked.without_thrust(), self._idle(idle, asked.flat)
        at_bottom = at_bottom.with_off_takes(asked.taken)
        most, least = self._solve(at_top, None), self._solve(at_bottom, None)
        top, bottom = self._finish(at_top, most), self._finish(at_bottom, least)
        upper, lower = top.net_thrust, bottom.net_thrust
        outcome = np.full(asked.thrust.size, Outcome.NOT_CONVERGED)
        outcome[bottom.is_believed & (asked.thrust < lower)] = Outcome.AT_IDLE
        outcome[top.is_believed & (asked.thrust > upper)] = Outcome.BEYOND_RATING
        index = np.flatnonzero(outcome == Outcome.AT_IDLE)
        solution = most.replaced(index, least.at(index))
        index = np.flatnonzero(outcome == Outcome.NOT_CONVERGED)
        if index.size:
            is_upper = top.is_believed & (asked.thrust > 0.5 * (upper + lower))
            start = np.where(is_upper | ~bottom.is_believed, most.unknowns, least.unknowns)
            inside, floors = asked.at(index), at_bottom.bounds[:, index]
            again = self._match(inside, start[:, index])
            met = self._finish(inside, again).is_answer(floors)
            lost = np.flatnonzero(~met & top.is_believed[index])
            if lost.size:
                # Close to idle thrust hardly moves with speed: it is come upon from above.
                above = (upper[index] - inside.thrust)[lost]
                thrusts = inside.thrust[lost] + np.outer(0.5 ** np.arange(1, 9), above)
                there = inside.at(lost)
                near = self._throttled_back(there, thrusts, most.unknowns[:, index[lost]])
                again = again.replaced(lost, self._match(there, near))
                met = self._finish(inside, again).is_answer(floors)
            solution = solution.replaced(index, again)
            outcome[index[met]] = Outcome.MET
        return solution, outcome

    def _with_reheat(
        self, state: Finished, names: NDArray[np.str_], outcome: NDArray[np.int64]
    ) -> tuple[Finished, NDArray[np.int64]]:
        """The afterburner lit where its rating has one and the dry engine does not suffice."""
        lit_names = [name for name, rating in self.bounds.items() if rating.is_reheated]
        asked = state.asked
        short = np.where(asked.is_thrust, outcome == Outcome.BEYOND_RATING, asked.is_ceiling)
        lit = np.flatnonzero(np.isin(names, lit_names) & short & state.is_believed)
        if lit.size == 0:
            return state, outcome
        bounds = asked.bounds.copy()
        bounds[:, lit] = reheat_bounds(self.bounds, names[lit], bounds[:, lit])
        asked = asked.with_bounds(bounds)
        _, situation, path = self._evaluate(asked.at(lit), state.solution.at(lit))
        temperature = light(self.arrangement, situation, path, bounds[:, lit], asked.thrust[lit])
        reheat = Reheat.of(asked.flat.mach.size, lit, temperature)
        state = self._finish(asked, state.solution, reheat)
        suffices = state.net_thrust >= asked.thrust - SLACK * np.abs(asked.thrust)
        outcome = outcome.copy()
        outcome[lit] = np.where(suffices | ~asked.is_thrust, Outcome.MET, Outcome.BEYOND_RATING)[
            lit
        ]
        return state, outcome

    def _solve(self, asked: Asked, start: Array | None) -> Solution:
        """Match what is asked.

        At a rating the limit that governs may change from one iterate to the next and keep a
        member going round for ever: such a member is tried with each limit alone, and at idle
        from low power.
        """
        solution = self._match(asked, start)
        adrift = np.flatnonzero(~solution.is_converged & ~asked.is_thrust)
        if adrift.size == 0:
            return solution
        near = np.full_like(solution.unknowns, np.nan)
        at_idle = adrift[~asked.is_ceiling[adrift]]
        if at_idle.size:
            near[:, at_idle] = self._low_power(asked.at(at_idle))
        for row in range(len(LIMIT_NAMES)):
            bounded = np.isfinite(asked.bounds[row]) & (asked.bounds[row] > 0.0)
            lost = np.flatnonzero(bounded & ~solution.is_converged & ~asked.is_thrust)
            if lost.size == 0:
                continue
            there = asked.at(lost)
            trial = self._match(there.with_one_limit(row), near[:, lost])
            shares = self._finish(there, trial).limit_shares
            low, high = shares >= 1.0 - SLACK, shares <= 1.0 + SLACK
            holds = np.where(there.is_ceiling, high.all(axis=0), low.all(axis=0))
            found = np.flatnonzero(trial.is_converged & holds)
            solution = solution.replaced(lost[found], trial.at(found))
        return solution

    def _match(self, asked: Asked, start: Array | None) -> Solution:
        return solve(self.arrangement, self.sizing, asked.flat, asked.taken, asked.demand, start)

    def _low_power(self, asked: Asked) -> Array:
        """Unknowns close to idle, for a cold engine."""
        pressure_ratio = asked.flat.static_pressure / self.sizing.reference_pressure
        shares = np.array([0.5, 0.2, 0.1, 0.05, 0.02])
        thrusts = np.outer(shares, self.sizing.reference_thrust * pressure_ratio)
        cold = np.full((len(self.sizing.unknowns), asked.thrust.size), np.nan)
        return self._throttled_back(asked, thrusts, cold)

    def _throttled_back(self, asked: Asked, thrusts: Array, unknowns: Array) -> Array:
        """Unknowns of an engine throttled back step by step, as far as that goes.

        ``thrusts`` (k, N) [N] are the steps, ``unknowns`` (n, N) where they begin.
        """
        for thrust in thrusts:
            step = self._match(asked.with_thrust(thrust), unknowns)
            unknowns = np.where(step.is_converged, step.unknowns, unknowns)
        return unknowns

    def windmilling(self, flight: FlightCondition) -> EngineState:
        """Unlit state: no fuel, no bleed, no shaft power taken; negative thrust is its drag.

        The little air that it passes loses next to nothing in the inlet's duct; a fixed loss would
        leave a slow one no pressure to turn by.
        """
        inlet = replace(self.arrangement.inlet, total_pressure_recovery=1.0)
        arrangement = replace(self.arrangement, inlet=inlet)
        return replace(self, arrangement=arrangement)._windmilling(flight)

    def _windmilling(self, flight: FlightCondition) -> EngineState:
        flat = _flat(flight)
        count = flat.mach.size
        taken = NOTHING_TAKEN.spread(count)
        start = _windmilling_start(self.arrangement, self.sizing, flat.mach)
        solution = solve(self.arrangement, self.sizing, flat, taken, None, start)
        asked = Asked(
            flat,
            np.full(count, np.nan),
            np.full(count, Throttle.CEILING),
            np.repeat(_UNBOUNDED[:, None], count, axis=1),
            taken,
            np.zeros(count),
        )
        state = self._finish(asked, solution, is_lit=False)
        met = np.full(count, Outcome.MET)
        return state.to_engine_state(self.arrangement, flight, met)

    def _evaluate(
        self, asked: Asked, solution: Solution, *, is_lit: bool = True
    ) -> tuple[Stream, Situation, Flowpath]:
        return evaluate_at(
            self.arrangement,
            self.sizing,
            asked.flat,
            asked.taken,
            solution.unknowns,
            is_lit=is_lit,
        )

    def _finish(
        self,
        asked: Asked,
        solution: Solution,
        reheat: Reheat | None = None,
        *,
        is_lit: bool = True,
    ) -> Finished:
        """Evaluate the engine at its solution and look whether the answer may be believed."""
        ahead, situation, path = self._evaluate(asked, solution, is_lit=is_lit)
        with np.errstate(all="ignore"):
            if reheat is not None:
                path = reheat.applied(self.arrangement, path, situation)
            net_thrust = path.net_thrust(asked.flat)
            limits = path.limit_values(asked.flat)
            physical = is_physical(self.arrangement.gas, path, is_lit=is_lit)
        burns = np.zeros(asked.thrust.size, dtype=bool) if reheat is None else reheat.is_lit
        return Finished(asked, ahead, path, solution, burns, net_thrust, limits, physical)


def _windmilling_start(arrangement: Arrangement, sizing: Sizing, mach: Array) -> Array:
    """Unknowns on the safe side of any windmilling state: little flow, little compression.

    Pressure ratios go with Mach number squared and flows with Mach number, as in any duct. A fan,
    driven by what little the core passes, hardly compresses. The factors are guesses, tried on 60
    engines of bypass ratio 0.3 to 14 at Mach 0.2 to 0.9.
    """
    moving = np.maximum(mach, 0.02)
    start = np.repeat(sizing.unknowns[:, None], mach.size, axis=1)
    for row, name in enumerate(arrangement.unknown_names):
        if name == "fan_pressure_ratio":
            start[row] = np.log1p(0.001 * moving**2)
        elif "pressure_ratio" in name:
            start[row] = np.log1p(0.1 * moving**2)
        elif name == "bypass_ratio":
            start[row] += np.log(8.0)
        elif name == "corrected_core_airflow":
            start[row] += np.log(0.03 * moving)
        elif name == "mixer_static_pressure":
            start[row] = np.log((1.0 - 0.1 * moving**2) / sizing.loadings["mixer_static_share"])
    return start


def _start(unknowns: Array | None) -> Array | None:
    return None if unknowns is None else unknowns.reshape(len(unknowns), -1)


def _broadcast(
    flight: FlightCondition, thrust: ArrayLike, rating_shape: tuple[int, ...]
) -> tuple[FlightCondition, Array]:
    """Flight condition and thrust brought to one shape, that of the ratings included."""
    wanted = np.asarray(thrust, dtype=np.float64)
    shape = np.broadcast_shapes(flight.shape, wanted.shape, rating_shape)
    if flight.shape != shape:
        flight = flight.with_mach(np.broadcast_to(flight.mach, shape))
    return flight, np.broadcast_to(wanted, shape)


def _flat(flight: FlightCondition) -> FlightCondition:
    """All arrays of a condition as one dimension."""
    flight = broadcast_condition(flight)
    return FlightCondition(
        *(getattr(flight, name).reshape(-1) for name in flight.__dataclass_fields__)
    )
