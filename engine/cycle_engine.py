"""An engine computed from its cycle, behind the one interface."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import ArrayLike, NDArray

from engine.atmosphere import FlightCondition, broadcast_condition
from engine.cycles.flowpath import LIMIT_NAMES, Arrangement, Flowpath, Sizing
from engine.errors import InputRefused
from engine.gas import RealGas
from engine.interface import EngineState, Evidence, Outcome
from engine.matching import Demand, Solution, Throttle, evaluate_at, solve
from engine.parts.stream import Stream

Array = NDArray[np.float64]
_SLACK = 1e-9


@dataclass(frozen=True)
class CycleEngine:
    """A sized arrangement with its ratings.

    ``ceilings`` and ``floors`` hold, by rating or idle name, one bound for each of LIMIT_NAMES,
    infinite (zero) where there is none.
    """

    name: str
    arrangement: Arrangement
    sizing: Sizing
    ceilings: Mapping[str, Array]
    floors: Mapping[str, Array]
    combustion_efficiency: float
    assumed: tuple[str, ...] = ()

    def at_thrust(
        self,
        flight: FlightCondition,
        net_thrust: ArrayLike,
        *,
        rating: str = "maximum_continuous",
        idle: str = "flight_idle",
        start: EngineState | None = None,
    ) -> EngineState:
        """State that gives a required net thrust [N]; see :class:`engine.interface.Engine`."""
        flight, wanted = _broadcast(flight, net_thrust)
        flat, thrust = _flat(flight), wanted.ravel()
        count = thrust.size
        ceilings, floors = self._bounds(rating)[1], self._bounds(idle)[1]
        demand = Demand(
            np.full(count, Throttle.THRUST), thrust, np.full((len(LIMIT_NAMES), count), np.inf)
        )
        solution = solve(self.arrangement, self.sizing, flat, demand, _start(start))
        state = self._finish(flat, solution, ceilings, Throttle.CEILING)
        over = np.any(state.limit_shares > 1.0 + _SLACK, axis=0)
        under = np.any(state.path.limits < floors[:, None] * (1.0 - _SLACK), axis=0)
        lost = ~solution.is_converged | ~state.is_physical
        if not np.any(over | under | lost):
            return state.to_engine_state(self, flight, np.full(count, Outcome.MET))
        return self._at_the_edge(
            flight, flat, thrust, rating, idle, solution, over | lost, under | lost
        )

    def _at_the_edge(
        self,
        flight: FlightCondition,
        flat: FlightCondition,
        thrust: Array,
        rating: str,
        idle: str,
        solution: Solution,
        may_be_over: NDArray[np.bool_],
        may_be_under: NDArray[np.bool_],
    ) -> EngineState:
        """Replace what lies beyond the rating or below idle by the state there is."""
        outcome = np.full(thrust.size, Outcome.MET)
        outcome[may_be_over & may_be_under] = Outcome.NOT_CONVERGED
        for name, suspects, verdict in (
            (rating, may_be_over, Outcome.BEYOND_RATING),
            (idle, may_be_under, Outcome.AT_IDLE),
        ):
            index = np.flatnonzero(suspects)
            if index.size == 0:
                continue
            there = self.at_rating(flat.at(index), name)
            known = there.outcome == Outcome.MET
            beyond = verdict == Outcome.BEYOND_RATING
            short = there.net_thrust < thrust[index] if beyond else there.net_thrust > thrust[index]
            taken = index[known & short]
            solution.unknowns[:, taken] = there.unknowns[:, known & short]
            solution.is_converged[taken] = True
            solution.residual[taken] = there.residual[known & short]
            outcome[taken] = verdict
        state = self._finish(flat, solution, self._bounds(rating)[1], Throttle.CEILING)
        return state.to_engine_state(self, flight, outcome)

    def at_rating(
        self, flight: FlightCondition, rating: str, *, start: EngineState | None = None
    ) -> EngineState:
        """State at a rating or idle; see :class:`engine.interface.Engine`."""
        flat = _flat(flight)
        count = flat.mach.size
        throttle, bounds = self._bounds(rating)
        demand = Demand(
            np.full(count, throttle), np.zeros(count), np.repeat(bounds[:, None], count, axis=1)
        )
        solution = solve(self.arrangement, self.sizing, flat, demand, _start(start))
        state = self._finish(flat, solution, bounds, throttle)
        return state.to_engine_state(self, flight, np.full(count, Outcome.MET))

    def windmilling(self, flight: FlightCondition) -> EngineState:
        """Unlit state: no fuel, no bleed, no shaft power taken; negative thrust is its drag."""
        arrangement = self.arrangement
        core = replace(arrangement.core, customer_bleed_fraction=0.0, shaft_power=0.0)
        unlit = replace(self, arrangement=replace(arrangement, core=core))
        flat = _flat(flight)
        start = _windmilling_start(arrangement, self.sizing, flat.mach)
        solution = solve(unlit.arrangement, self.sizing, flat, None, start)
        none = np.full(len(LIMIT_NAMES), np.inf)
        state = unlit._finish(flat, solution, none, Throttle.CEILING, is_lit=False)
        return state.to_engine_state(unlit, flight, np.full(flat.mach.size, Outcome.MET))

    def _bounds(self, rating: str) -> tuple[Throttle, Array]:
        """Whether a name is a ceiling or a floor, and its bounds."""
        if rating in self.ceilings:
            return Throttle.CEILING, self.ceilings[rating]
        if rating in self.floors:
            return Throttle.FLOOR, self.floors[rating]
        known = ", ".join([*self.ceilings, *self.floors])
        raise InputRefused(f"'{rating}' is no rating of {self.name}; it has {known}")

    def _finish(
        self,
        flat: FlightCondition,
        solution: Solution,
        bounds: Array,
        throttle: Throttle,
        *,
        is_lit: bool = True,
    ) -> _Finished:
        """Evaluate the engine at its solution and look whether the answer may be believed."""
        ahead, path = evaluate_at(
            self.arrangement, self.sizing, flat, solution.unknowns, is_lit=is_lit
        )
        with np.errstate(all="ignore"):
            shares = path.limits / bounds[:, None]
        binding = (
            np.argmax(shares, axis=0) if throttle == Throttle.CEILING else np.argmin(shares, axis=0)
        )
        binding = np.where(np.any(np.isfinite(bounds) & (bounds > 0.0)), binding, -1)
        physical = _is_physical(self.arrangement, path, is_lit=is_lit)
        return _Finished(flat, ahead, path, solution, shares, binding, physical)


@dataclass(frozen=True)
class _Finished:
    """A solved and evaluated call, before it is shaped for the caller."""

    flat: FlightCondition
    ahead: Stream
    path: Flowpath
    solution: Solution
    limit_shares: Array
    binding_limit: NDArray[np.int64]
    is_physical: NDArray[np.bool_]

    def to_engine_state(
        self, engine: CycleEngine, flight: FlightCondition, outcome: NDArray[np.int64]
    ) -> EngineState:
        """The state in the caller's shape; unbelievable members carry zero thrust and a flag."""
        solution = self.solution
        outcome = np.where(solution.is_converged & ~self.is_physical, Outcome.UNPHYSICAL, outcome)
        outcome = np.where(solution.is_converged, outcome, Outcome.NOT_CONVERGED)
        believed = (outcome != Outcome.NOT_CONVERGED) & (outcome != Outcome.UNPHYSICAL)
        shape = flight.shape
        choking = np.stack([jet.choking for _, jet in self.path.jets.values()])
        return EngineState(
            flight=flight,
            net_thrust=np.where(believed, self.path.net_thrust(self.flat), 0.0).reshape(shape),
            fuel_flow=np.where(believed, self.path.fuel_flow, 0.0).reshape(shape),
            outcome=outcome.reshape(shape),
            binding_limit=self.binding_limit.reshape(shape),
            limit_names=LIMIT_NAMES,
            limit_shares=self.limit_shares.reshape(-1, *shape),
            choking=choking.reshape(-1, *shape),
            unknowns=np.where(solution.is_converged, solution.unknowns, np.nan).reshape(-1, *shape),
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


def _windmilling_start(arrangement: Arrangement, sizing: Sizing, mach: Array) -> Array:
    """Unknowns on the safe side of any windmilling state: little flow, little compression.

    Pressure ratios go with Mach number squared and flows with Mach number, as in any duct.
    """
    moving = np.maximum(mach, 0.02)
    start = np.repeat(sizing.unknowns[:, None], mach.size, axis=1)
    for row, name in enumerate(arrangement.unknown_names):
        if "pressure_ratio" in name:
            start[row] = np.log1p(0.1 * moving**2)
        elif name == "bypass_ratio":
            start[row] += 1.0
        elif name == "corrected_core_airflow":
            start[row] += np.log(0.2 * moving)
    return start


def _start(state: EngineState | None) -> Array | None:
    return None if state is None else state.unknowns.reshape(len(state.unknowns), -1)


def _broadcast(flight: FlightCondition, thrust: ArrayLike) -> tuple[FlightCondition, Array]:
    """Flight condition and thrust brought to one shape."""
    wanted = np.asarray(thrust, dtype=np.float64)
    shape = np.broadcast_shapes(flight.shape, wanted.shape)
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
    for before, after in zip(order, order[1:], strict=False):
        ratio = stations[after].total_pressure / stations[before].total_pressure
        good &= ratio >= 1.0 - 1e-6
    for stream in stations.values():
        good &= stream.mass_flow > 0.0
        good &= stream.total_temperature >= gas.lowest_temperature
        good &= stream.total_temperature <= gas.highest_temperature
    return good
