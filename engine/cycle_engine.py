"""An engine computed from its cycle, behind the one interface."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace
from itertools import pairwise

import numpy as np
from numpy.typing import ArrayLike, NDArray

from engine.atmosphere import FlightCondition, broadcast_condition
from engine.cycles.flowpath import LIMIT_NAMES, Arrangement, Flowpath, Sizing
from engine.errors import InputRefused
from engine.gas import RealGas
from engine.interface import Engine, EngineState, Evidence, Outcome
from engine.matching import Demand, Solution, Throttle, evaluate_at, solve
from engine.parts.stream import Stream

Array = NDArray[np.float64]
_SLACK = 1e-9


@dataclass(frozen=True)
class CycleEngine(Engine):
    """A sized arrangement with its ratings.

    ``ceilings`` and ``floors`` hold, by rating or idle name, one bound for each of LIMIT_NAMES,
    infinite (zero) where there is none.
    """

    arrangement: Arrangement
    sizing: Sizing
    ceilings: Mapping[str, Array]
    floors: Mapping[str, Array]
    combustion_efficiency: float

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
        ratings = np.broadcast_to(rating, flight.shape).ravel()
        throttle = np.zeros(ratings.size, dtype=np.int64)
        bounds = np.zeros((len(LIMIT_NAMES), ratings.size))
        for name in np.unique(ratings):
            here = np.flatnonzero(ratings == name)
            throttle[here], limits = self._bounds(str(name))
            bounds[:, here] = limits[:, None]
        asked = _Asked(_flat(flight), thrust.ravel(), throttle, bounds)
        solution = self._solve(asked, _start(start))
        state = self._finish(asked, solution)
        floors = self._bounds(idle)[1][:, None]
        met = _is_answer(state, asked, floors)
        outcome = np.where(met, Outcome.MET, Outcome.NOT_CONVERGED)
        suspects = np.flatnonzero(~met & asked.is_thrust)
        if suspects.size:
            there, verdict = self._at_the_edge(asked.at(suspects), idle)
            solution, outcome[suspects] = solution.replaced(suspects, there), verdict
            state = self._finish(asked, solution)
        return state.to_engine_state(self, flight, outcome)

    def _at_the_edge(self, asked: _Asked, idle: str) -> tuple[Solution, NDArray[np.int64]]:
        """What there is for thrusts not met within the limits, and what became of each demand.

        Beyond the rating it is the rating, below idle it is idle; between the two the thrust is
        asked for once more from the nearer one, and what still has no answer is said to have none.
        """
        throttle, floors = self._bounds(idle)
        at_top = asked.without_thrust()
        at_bottom = _Asked.at_one_rating(asked.flat, throttle, floors)
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
            inside = asked.at(index)
            again = self._solve(inside, start[:, index])
            met = _is_answer(self._finish(inside, again), inside, floors[:, None])
            solution = solution.replaced(index, again)
            outcome[index[met]] = Outcome.MET
        return solution, outcome

    def _solve(self, asked: _Asked, start: Array | None) -> Solution:
        """Match what is asked.

        At a rating the limit that governs may change from one iterate to the next and keep a
        member going round for ever: such a member is tried with each limit alone, and at idle
        from low power.
        """
        solution = solve(self.arrangement, self.sizing, asked.flat, asked.demand, start)
        for row in range(len(LIMIT_NAMES)):
            bounded = np.isfinite(asked.bounds[row]) & (asked.bounds[row] > 0.0)
            lost = np.flatnonzero(bounded & ~solution.is_converged & ~asked.is_thrust)
            if lost.size == 0:
                continue
            there = asked.at(lost)
            near = np.where(there.is_ceiling, np.nan, self._low_power(there.flat))
            trial = solve(
                self.arrangement, self.sizing, there.flat, there.with_one_limit(row).demand, near
            )
            shares = self._finish(there, trial).limit_shares
            low, high = shares >= 1.0 - _SLACK, shares <= 1.0 + _SLACK
            holds = np.where(there.is_ceiling, high.all(axis=0), low.all(axis=0))
            found = np.flatnonzero(trial.is_converged & holds)
            solution = solution.replaced(lost[found], trial.at(found))
        return solution

    def _low_power(self, flat: FlightCondition) -> Array:
        """Unknowns of an engine throttled back step by step, as far as that goes."""
        pressure_ratio = flat.static_pressure / self.sizing.reference_pressure
        unknowns = np.full((len(self.sizing.unknowns), flat.mach.size), np.nan)
        for share in (0.5, 0.2, 0.1, 0.05, 0.02):
            thrust = share * self.sizing.reference_thrust * pressure_ratio
            ceiling = _Asked.at_one_rating(
                flat, Throttle.CEILING, np.full(len(LIMIT_NAMES), np.inf)
            )
            demand = replace(ceiling, thrust=thrust).demand
            step = solve(self.arrangement, self.sizing, flat, demand, unknowns)
            unknowns = np.where(step.is_converged, step.unknowns, unknowns)
        return unknowns

    def windmilling(self, flight: FlightCondition) -> EngineState:
        """Unlit state: no fuel, no bleed, no shaft power taken; negative thrust is its drag."""
        arrangement = self.arrangement
        core = replace(arrangement.core, customer_bleed_fraction=0.0, shaft_power=0.0)
        unlit = replace(self, arrangement=replace(arrangement, core=core))
        flat = _flat(flight)
        start = _windmilling_start(arrangement, self.sizing, flat.mach)
        solution = solve(unlit.arrangement, self.sizing, flat, None, start)
        none = np.full(len(LIMIT_NAMES), np.inf)
        asked = _Asked.at_one_rating(flat, Throttle.CEILING, none)
        state = unlit._finish(asked, solution, is_lit=False)
        return state.to_engine_state(unlit, flight, np.full(flat.mach.size, Outcome.MET))

    def _bounds(self, rating: str) -> tuple[Throttle, Array]:
        """Whether a name is a ceiling or a floor, and its bounds."""
        if rating in self.ceilings:
            return Throttle.CEILING, self.ceilings[rating]
        if rating in self.floors:
            return Throttle.FLOOR, self.floors[rating]
        known = ", ".join([*self.ceilings, *self.floors])
        raise InputRefused(f"'{rating}' is no rating of {self.name}; it has {known}")

    def _finish(self, asked: _Asked, solution: Solution, *, is_lit: bool = True) -> _Finished:
        """Evaluate the engine at its solution and look whether the answer may be believed."""
        ahead, path = evaluate_at(
            self.arrangement, self.sizing, asked.flat, solution.unknowns, is_lit=is_lit
        )
        with np.errstate(all="ignore"):
            shares = path.limits / asked.bounds
            net_thrust = path.net_thrust(asked.flat)
            physical = _is_physical(self.arrangement, path, is_lit=is_lit)
        binding = np.where(asked.is_ceiling, np.argmax(shares, axis=0), np.argmin(shares, axis=0))
        is_bounded = np.any(np.isfinite(asked.bounds) & (asked.bounds > 0.0), axis=0)
        binding = np.where(is_bounded, binding, -1)
        return _Finished(asked.flat, ahead, path, solution, net_thrust, shares, binding, physical)


@dataclass(frozen=True)
class _Asked:
    """A call as flat arrays: net thrust [N], NaN where a rating or idle is asked for itself.

    ``throttle`` (N,) and ``bounds`` (8, N) are those of the rating.
    """

    flat: FlightCondition
    thrust: Array
    throttle: NDArray[np.int64]
    bounds: Array

    @property
    def is_thrust(self) -> NDArray[np.bool_]:
        """Where a thrust is asked for."""
        return ~np.isnan(self.thrust)

    @property
    def demand(self) -> Demand:
        """The same in the words of matching."""
        throttle = np.where(self.is_thrust, Throttle.THRUST, self.throttle)
        return Demand(throttle, np.where(self.is_thrust, self.thrust, 0.0), self.bounds)

    def at(self, index: NDArray[np.int64]) -> _Asked:
        """The members picked by an index array."""
        return _Asked(
            self.flat.at(index), self.thrust[index], self.throttle[index], self.bounds[:, index]
        )

    @property
    def is_ceiling(self) -> NDArray[np.bool_]:
        """Where the rating is a ceiling, not an idle."""
        return np.asarray(self.throttle == Throttle.CEILING)

    def without_thrust(self) -> _Asked:
        """The ratings themselves."""
        return replace(self, thrust=np.full_like(self.thrust, np.nan))

    def with_one_limit(self, row: int) -> _Asked:
        """The same with all limits but one lifted."""
        alone = np.where(self.is_ceiling, np.full_like(self.bounds, np.inf), 0.0)
        alone[row] = self.bounds[row]
        return replace(self, bounds=alone)

    @classmethod
    def at_one_rating(cls, flat: FlightCondition, throttle: Throttle, bounds: Array) -> _Asked:
        """The same rating or idle everywhere."""
        count = flat.mach.size
        return cls(
            flat,
            np.full(count, np.nan),
            np.full(count, throttle),
            np.repeat(bounds[:, None], count, axis=1),
        )


@dataclass(frozen=True)
class _Finished:
    """A solved and evaluated call, before it is shaped for the caller."""

    flat: FlightCondition
    ahead: Stream
    path: Flowpath
    solution: Solution
    net_thrust: Array
    limit_shares: Array
    binding_limit: NDArray[np.int64]
    is_physical: NDArray[np.bool_]

    @property
    def is_believed(self) -> NDArray[np.bool_]:
        """Whether there is an answer that may be believed."""
        return self.solution.is_converged & self.is_physical

    def to_engine_state(
        self, engine: CycleEngine, flight: FlightCondition, outcome: NDArray[np.int64]
    ) -> EngineState:
        """The state in the caller's shape; unbelievable members carry zero thrust and a flag."""
        solution = self.solution
        outcome = np.where(solution.is_converged & ~self.is_physical, Outcome.UNPHYSICAL, outcome)
        outcome = np.where(solution.is_converged, outcome, Outcome.NOT_CONVERGED)
        believed = self.is_believed & (outcome != Outcome.NOT_CONVERGED)
        unknowns = np.where(solution.is_converged, solution.unknowns, np.nan)
        shape = flight.shape
        choking = np.stack([jet.choking for _, jet in self.path.jets.values()])
        return EngineState(
            flight=flight,
            net_thrust=np.where(believed, self.net_thrust, 0.0).reshape(shape),
            fuel_flow=np.where(believed, self.path.fuel_flow, 0.0).reshape(shape),
            outcome=outcome.reshape(shape),
            binding_limit=self.binding_limit.reshape(shape),
            limit_names=LIMIT_NAMES,
            limit_shares=self.limit_shares.reshape(len(LIMIT_NAMES), *shape),
            choking=choking.reshape(len(choking), *shape),
            unknowns=unknowns.reshape(len(unknowns), *shape),
            residual=solution.residual.reshape(shape),
            iterations=solution.iterations.reshape(shape),
            evidence=Evidence(
                engine.arrangement.gas,
                engine.arrangement.fuel.lower_heating_value,
                engine.combustion_efficiency,
                self.flat,
                self.ahead,
                self.path,
            ),
        )


def _is_answer(state: _Finished, asked: _Asked, floors: Array) -> NDArray[np.bool_]:
    """Whether a member may be believed and, where a thrust is asked for, lies within its limits.

    A rating that is an idle bounds thrust from above: one of its floors must not be surpassed.
    """
    limits = state.path.limits
    with np.errstate(invalid="ignore"):
        low = limits <= asked.bounds * (1.0 + _SLACK)
        high = limits >= floors * (1.0 - _SLACK)
    within = np.where(asked.is_ceiling, low.all(axis=0), low.any(axis=0)) & high.all(axis=0)
    return state.is_believed & (within | ~asked.is_thrust)


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


def _is_physical(arrangement: Arrangement, path: Flowpath, *, is_lit: bool) -> NDArray[np.bool_]:
    """Whether a converged answer may be believed; below idle the equations have others too.

    Fuel-air ratio not negative and not above stoichiometric, turbine entry hotter than
    compressor delivery, pressure ratios not below one, flows positive, temperatures inside the
    range of the gas model.
    """
    gas, stations = arrangement.gas, path.stations
    fuel_air_ratio = stations["4"].fuel_air_ratio
    good = np.isfinite(path.gross_thrust) & np.isfinite(path.fuel_flow)
    if is_lit:
        good &= fuel_air_ratio >= 0.0
        good &= stations["4"].total_temperature >= stations["3"].total_temperature
        if isinstance(gas, RealGas):
            good &= fuel_air_ratio <= gas.stoichiometric_fuel_air_ratio
    order = [name for name in ("2", "21", "25", "3") if name in stations]
    for before, after in pairwise(order):
        ratio = stations[after].total_pressure / stations[before].total_pressure
        good &= ratio >= 1.0 - 1e-6
    for stream in stations.values():
        good &= stream.mass_flow > 0.0
        good &= stream.total_temperature >= gas.lowest_temperature
        good &= stream.total_temperature <= gas.highest_temperature
    return good
