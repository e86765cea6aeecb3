"""A solved call evaluated: whether its answers may be believed, and the state made of them."""

from __future__ import annotations

from dataclasses import dataclass
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray

from engine.atmosphere import FlightCondition
from engine.cycles.flowpath import LIMIT_NAMES, Arrangement, Flowpath, shares_of
from engine.gas import Gas, RealGas
from engine.interface import EngineState, Evidence, Outcome
from engine.matching import Solution
from engine.parts.stream import Stream
from engine.ratings import LIT_ROWS, REHEAT_ROWS, Asked

Array = NDArray[np.float64]
SLACK = 1e-9


@dataclass(frozen=True)
class Finished:
    """A solved and evaluated call, before it is shaped for the caller.

    ``is_reheated`` (N,) is where the afterburner burns.
    """

    asked: Asked
    ahead: Stream
    path: Flowpath
    solution: Solution
    is_reheated: NDArray[np.bool_]
    net_thrust: Array
    limits: Array
    is_physical: NDArray[np.bool_]

    @property
    def is_believed(self) -> NDArray[np.bool_]:
        """Whether there is an answer that may be believed."""
        return self.solution.is_converged & self.is_physical

    @property
    def limit_shares(self) -> Array:
        """Value over bound of each limit, (L, N)."""
        with np.errstate(all="ignore"):
            return shares_of(self.limits, self.asked.bounds)

    @property
    def binding_limit(self) -> NDArray[np.int64]:
        """Row of the limit that governs or is nearest, -1 where there is none.

        With the afterburner lit the gas generator stands at its dry limit anyway: what governs is
        one of the afterburner's own.
        """
        return self._governing(is_dry=False)

    def _governing(self, *, is_dry: bool) -> NDArray[np.int64]:
        bounds, shares = self.asked.bounds, self.limit_shares
        rows = np.arange(len(LIMIT_NAMES))[:, None]
        counts = (
            ~np.isin(rows, REHEAT_ROWS) if is_dry else ~self.is_reheated | np.isin(rows, LIT_ROWS)
        )
        highest = np.where(counts, shares, -np.inf)
        row = np.where(self.asked.is_ceiling, np.argmax(highest, axis=0), np.argmin(shares, axis=0))
        is_bounded = np.any(np.isfinite(bounds) & (bounds > 0.0), axis=0)
        return np.where(is_bounded, row, -1)

    def is_answer(self, floors: Array) -> NDArray[np.bool_]:
        """Whether a member may be believed and, where a thrust is asked for, is within its limits.

        A rating that is an idle bounds thrust from above: one of its floors must not be surpassed.
        """
        asked = self.asked
        with np.errstate(invalid="ignore"):
            low = self.limits <= asked.bounds * (1.0 + SLACK)
            high = (self.limits >= floors * (1.0 - SLACK)) | (floors <= 0.0)
        low_enough = np.where(
            asked.is_ceiling, low.all(axis=0), (low & (asked.bounds > 0.0)).any(axis=0)
        )
        return self.is_believed & ((low_enough & high.all(axis=0)) | ~asked.is_thrust)

    def to_engine_state(
        self, arrangement: Arrangement, flight: FlightCondition, outcome: NDArray[np.int64]
    ) -> EngineState:
        """The state in the caller's shape; unbelievable members carry zero thrust and a flag."""
        solution = self.solution
        outcome = np.where(solution.is_converged & ~self.is_physical, Outcome.UNPHYSICAL, outcome)
        outcome = np.where(solution.is_converged, outcome, Outcome.NOT_CONVERGED)
        believed = self.is_believed & (outcome != Outcome.NOT_CONVERGED)
        unknowns = np.where(solution.is_converged, solution.unknowns, np.nan)
        shape = flight.shape
        kinks = np.stack(
            [jet.choking for _, jet in self.path.jets.values()] + [self.asked.past_break]
        )
        return EngineState(
            flight=flight,
            net_thrust=np.where(believed, self.net_thrust, 0.0).reshape(shape),
            fuel_flow=np.where(believed, self.path.fuel_flow, 0.0).reshape(shape),
            outcome=outcome.reshape(shape),
            binding_limit=self.binding_limit.reshape(shape),
            limit_names=LIMIT_NAMES,
            limit_shares=self.limit_shares.reshape(len(LIMIT_NAMES), *shape),
            dry_limit=self._governing(is_dry=True).reshape(shape),
            kinks=kinks.reshape(len(kinks), *shape),
            unknowns=unknowns.reshape(len(unknowns), *shape),
            residual=solution.residual.reshape(shape),
            iterations=solution.iterations.reshape(shape),
            evidence=Evidence(
                arrangement.gas,
                arrangement.fuel.lower_heating_value,
                self.asked.flat,
                self.ahead,
                self.path,
            ),
        )


def is_physical(gas: Gas, path: Flowpath, *, is_lit: bool) -> NDArray[np.bool_]:
    """Whether a converged answer may be believed; below idle the equations have others too."""
    good = np.isfinite(path.gross_thrust) & np.isfinite(path.fuel_flow)
    for is_so in _impossible(gas, path, is_lit=is_lit).values():
        good &= ~is_so
    for excess in path.misfits.values():
        good &= excess <= 0.0
    return good


def why_unphysical(state: EngineState) -> NDArray[np.str_]:
    """What is impossible in the states that a computed engine found; empty where nothing is."""
    evidence = state.evidence
    if evidence is None:
        return np.full(state.flight.shape, "")
    path, count = evidence.path, state.outcome.size
    causes = _impossible(evidence.gas, path, is_lit=True)
    found = np.select(list(causes.values()), list(causes), "")
    for sentence, excess in path.misfits.items():
        amounts = np.broadcast_to(excess, count)
        told = np.array([sentence.format(amount) for amount in amounts])
        found = np.where((found == "") & (amounts > 0.0), told, found)
    return np.where(state.outcome == Outcome.UNPHYSICAL, found.reshape(state.flight.shape), "")


def _impossible(gas: Gas, path: Flowpath, *, is_lit: bool) -> dict[str, NDArray[np.bool_]]:
    """What cannot be in an engine, and where it is, (N,); the likeliest cause first."""
    stations, found = path.stations, {}
    if is_lit:
        hot, delivery = stations["4"], stations["3"]
        found["the air alone turns it faster than is asked"] = ~(
            (hot.fuel_air_ratio >= 0.0) & (hot.total_temperature >= delivery.total_temperature)
        )
    if is_lit and isinstance(gas, RealGas):
        richest = gas.stoichiometric_fuel_air_ratio * (1.0 + SLACK)
        found["it would need more fuel than its air can burn"] = ~(
            (hot.fuel_air_ratio <= richest) & (stations["7"].fuel_air_ratio <= richest)
        )
    streams = stations.values()
    found[f"a stream would be hotter than {gas.highest_temperature:.0f} K"] = ~np.all(
        [stream.total_temperature <= gas.highest_temperature for stream in streams], axis=0
    )
    found[f"a stream would be colder than {gas.lowest_temperature:.0f} K"] = ~np.all(
        [stream.total_temperature >= gas.lowest_temperature for stream in streams], axis=0
    )
    order = [stations[name] for name in ("2", "21", "25", "3") if name in stations]
    found["a compressor would lower the pressure"] = ~np.all(
        [b.total_pressure >= (1.0 - 1e-6) * a.total_pressure for a, b in pairwise(order)], axis=0
    )
    found["a stream would flow backwards"] = ~np.all(
        [stream.mass_flow > 0.0 for stream in streams], axis=0
    )
    return found
