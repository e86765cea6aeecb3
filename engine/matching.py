"""Matching: the unknowns at which all flows of the engine agree and the throttle is met.

All points of a call are solved together by a damped Newton iteration in the logarithms of the
unknowns; the finite-difference Jacobian is one more array axis, and is kept for the last steps. A
converged member is frozen, so that its answer does not depend on its neighbours; one that does not
converge is left where it is and said to be so.
"""

from __future__ import annotations

from dataclasses import dataclass
from enum import IntEnum

import numpy as np
from numpy.typing import NDArray

from engine.atmosphere import FlightCondition
from engine.cycles.flowpath import LIMIT_NAMES, Arrangement, Flowpath, shares_of
from engine.cycles.installed import run
from engine.cycles.situation import OffTakes, Situation, Sizing
from engine.parts.inlet import take_in
from engine.parts.stream import Stream

Array = NDArray[np.float64]
# Of the residual before the last step, which is taken all the same and, with derivatives kept from
# a residual of 3e-3 at most, leaves a hundredth of it.
TOLERANCE = 1e-9
# Round-off of the pressure drops on which a windmilling flow hangs, a thousandth of the pressure.
WINDMILLING_TOLERANCE = 1e-7
_LARGEST_STEP = 0.25
_DIFFERENCE = 1e-6
# Residual below which derivatives are kept: each step with them still gains two digits or more.
_NEAR = 3e-3
_FEW = 256  # members for which a call costs more than its numbers
_MOST_ITERATIONS = 40


class Throttle(IntEnum):
    """What closes the engine's equations at a point."""

    THRUST = 0
    CEILING = 1
    FLOOR = 2


@dataclass(frozen=True)
class Demand:
    """What is asked at each of N points.

    Attributes
    ----------
    throttle : (N,) values of :class:`Throttle`
    net_thrust : (N,) [N] used where a thrust is asked for
    bounds : (L, N) over LIMIT_NAMES: ceilings (inf: none) or floors (0: none)
    """

    throttle: NDArray[np.int64]
    net_thrust: Array
    bounds: Array

    def at(self, index: NDArray[np.int64]) -> Demand:
        """The points picked by an index array."""
        return Demand(self.throttle[index], self.net_thrust[index], self.bounds[:, index])


@dataclass(frozen=True)
class Solution:
    """Answer of :func:`solve`: unknowns (n, N), residual (N,), converged (N,), iterations (N,).

    The residual is that before the last step; flows are squared in it.
    """

    unknowns: Array
    residual: Array
    is_converged: NDArray[np.bool_]
    iterations: NDArray[np.int64]

    def at(self, index: NDArray[np.int64]) -> Solution:
        """The members picked by an index array."""
        return Solution(
            self.unknowns[:, index],
            self.residual[index],
            self.is_converged[index],
            self.iterations[index],
        )

    def replaced(self, index: NDArray[np.int64], other: Solution) -> Solution:
        """This solution with the members of ``other`` in the places of ``index``."""
        unknowns, residual = self.unknowns.copy(), self.residual.copy()
        is_converged, iterations = self.is_converged.copy(), self.iterations.copy()
        unknowns[:, index], residual[index] = other.unknowns, other.residual
        is_converged[index] = other.is_converged
        iterations[index] += other.iterations
        return Solution(unknowns, residual, is_converged, iterations)


def solve(
    arrangement: Arrangement,
    sizing: Sizing,
    flight: FlightCondition,
    taken: OffTakes,
    demand: Demand | None,
    start: Array | None = None,
) -> Solution:
    """Match the engine at N flight conditions (1-d arrays); unlit where ``demand`` is None.

    ``taken`` (N,) is what the aircraft takes off it. ``start`` (n, N) are unknowns of an earlier
    solution near by; without it the design point is where the iteration starts. Never raises for a
    member that has no answer.
    """
    count = flight.mach.size
    cold = np.repeat(sizing.unknowns[:, None], count, axis=1)
    unknowns = cold if start is None else np.where(np.isfinite(start), start, cold)
    residual = np.full(count, np.inf)
    iterations = np.zeros(count, dtype=np.int64)
    with np.errstate(all="ignore"):
        _, face = take_in(arrangement.gas, arrangement.inlet, flight)
    situation = Situation(face, flight, taken, sizing, is_lit=demand is not None)
    problem = _Problem(arrangement, sizing, situation, demand)
    tolerance = WINDMILLING_TOLERANCE if demand is None else TOLERANCE
    free, above_one = problem.free_rows, problem.rows_above_one
    coordinates = unknowns.copy()
    coordinates[above_one] = np.log(np.expm1(unknowns[above_one]))
    slopes = np.empty((len(free), len(free), count))
    is_stale = np.ones(count, dtype=bool)
    open_members = np.arange(count)
    for _ in range(_MOST_ITERATIONS):
        before = residual[open_members]
        values = _residuals_now(problem, coordinates, slopes, is_stale, open_members)
        worst = np.max(np.abs(values), axis=0)
        worst = np.where(np.isnan(worst), np.inf, worst)
        residual[open_members] = worst
        is_stale[open_members] = ~((worst < _NEAR) & (worst < 0.1 * before))
        # The step that is known anyway takes a member that has just converged to round-off.
        step = _newton_step(slopes[:, :, open_members], values)
        coordinates[np.ix_(free, open_members)] += step
        open_members = open_members[~(worst < tolerance) & np.isfinite(worst)]
        if open_members.size == 0:
            break
        iterations[open_members] += 1
    return Solution(problem.unknowns(coordinates), residual, residual < tolerance, iterations)


@dataclass(frozen=True)
class _Problem:
    """What is matched at N points."""

    arrangement: Arrangement
    sizing: Sizing
    situation: Situation
    demand: Demand | None

    def at(self, index: NDArray[np.int64]) -> _Problem:
        """The points picked by an index array."""
        return _Problem(
            self.arrangement,
            self.sizing,
            self.situation.at(index),
            None if self.demand is None else self.demand.at(index),
        )

    @property
    def free_rows(self) -> NDArray[np.int64]:
        """Unknowns that are solved for: an unlit engine has no temperature to choose."""
        names = self.arrangement.unknown_names
        is_lit = self.demand is not None
        return np.array([i for i, name in enumerate(names) if is_lit or "temperature" not in name])

    @property
    def rows_above_one(self) -> NDArray[np.int64]:
        """Unknowns solved for by the logarithm of what they are above one.

        Windmilling pressure ratios come as near to one as Mach number squared to zero.
        """
        names = self.arrangement.unknown_names
        is_lit = self.demand is not None
        rows = [i for i, name in enumerate(names) if not is_lit and "pressure_ratio" in name]
        return np.array(rows, dtype=np.int64)

    def unknowns(self, coordinates: Array) -> Array:
        """Logarithms of the unknowns from what the iteration moves."""
        rows = self.rows_above_one
        if rows.size == 0:
            return coordinates
        unknowns = coordinates.copy()
        unknowns[rows] = np.log1p(np.exp(coordinates[rows]))
        return unknowns


def evaluate_at(
    arrangement: Arrangement,
    sizing: Sizing,
    flight: FlightCondition,
    taken: OffTakes,
    unknowns: Array,
    *,
    is_lit: bool = True,
) -> tuple[Stream, Situation, Flowpath]:
    """Free stream (for 1 kg/s), situation, and the whole engine at given unknowns."""
    with np.errstate(all="ignore"):
        ahead, face = take_in(arrangement.gas, arrangement.inlet, flight)
        situation = Situation(face, flight, taken, sizing, is_lit=is_lit)
        return ahead, situation, run(arrangement, unknowns, situation)


def _residuals_now(
    problem: _Problem,
    coordinates: Array,
    slopes: Array,
    is_stale: NDArray[np.bool_],
    members: NDArray[np.int64],
) -> Array:
    """Residuals (m, M) of the M open members; derivatives that are stale are written anew.

    A few members are evaluated together, with derivatives where any needs them.
    """
    stale = is_stale[members]
    if members.size < _FEW and stale.any():
        stale = np.ones_like(stale)
    values = np.empty((len(slopes), members.size))
    for part, is_new in ((np.flatnonzero(stale), True), (np.flatnonzero(~stale), False)):
        if part.size == 0:
            continue
        index = members[part]
        asked = problem.at(index)
        if is_new:
            values[:, part], slopes[:, :, index] = _residuals_and_jacobian(
                asked, coordinates[:, index]
            )
        else:
            values[:, part] = _residuals(asked, coordinates[:, None, index])[:, 0]
    return values


def _residuals_and_jacobian(problem: _Problem, coordinates: Array) -> tuple[Array, Array]:
    """Residuals (m, N) and their derivatives (m, m, N) by one stacked evaluation."""
    free = problem.free_rows
    trials = np.repeat(coordinates[:, None, :], len(free) + 1, axis=1)
    trials[free, 1 + np.arange(len(free)), :] += _DIFFERENCE
    stacked = _residuals(problem, trials)
    with np.errstate(all="ignore"):
        return stacked[:, 0], (stacked[:, 1:] - stacked[:, :1]) / _DIFFERENCE


def _residuals(problem: _Problem, trials: Array) -> Array:
    """Residuals (m, k, N) of k trials (n, k, N)."""
    sizing, situation = problem.sizing, problem.situation
    with np.errstate(all="ignore"):
        path = run(problem.arrangement, problem.unknowns(trials), situation)
        # Flow squared is linear in a small pressure drop, so it, not flow, is what is matched.
        flows = [sizing.areas[name] / area for name, area in path.areas.items()]
        rows = [0.5 * (flow * np.abs(flow) - 1.0) for flow in flows]
        if problem.demand is not None:
            rows.append(_throttle_residual(path, situation, sizing, problem.demand))
        return np.stack(np.broadcast_arrays(*rows))


def _throttle_residual(
    path: Flowpath, situation: Situation, sizing: Sizing, demand: Demand
) -> Array:
    """How far the throttle is from what is asked, relative to design values."""
    throttle, flight = demand.throttle, situation.flight
    scale = sizing.reference_thrust * situation.face.total_pressure / sizing.reference_pressure
    thrust = (path.net_thrust(flight) - demand.net_thrust) / scale
    if np.all(throttle == Throttle.THRUST):
        return thrust
    bounds = demand.bounds
    used = np.flatnonzero(np.any((bounds > 0.0) & np.isfinite(bounds), axis=1))
    used = used if used.size else np.array([0])
    values = path.limit_values(flight, [LIMIT_NAMES[row] for row in used])
    shares = shares_of(values, bounds[used, None, :])
    # The limit that governs at the point itself, for its differences too: a derivative taken
    # half from one limit and half from another leads nowhere.
    first = shares[:, 0]
    governs = np.where(throttle == Throttle.CEILING, first.argmax(axis=0), first.argmin(axis=0))
    bounded = np.take_along_axis(shares, governs[None, None, :], axis=0)[0] - 1.0
    return np.where(throttle == Throttle.THRUST, thrust, bounded)


def _newton_step(jacobian: Array, values: Array) -> Array:
    """Damped Newton steps (m, N); a member with a singular Jacobian takes no step."""
    matrices = np.moveaxis(jacobian, -1, 0)
    right = -values.T[:, :, None]
    usable = np.all(np.isfinite(matrices), axis=(1, 2))
    idle = np.eye(matrices.shape[1])
    matrices = np.where(usable[:, None, None], matrices, idle)
    try:
        step = np.linalg.solve(matrices, right)[:, :, 0]
    except np.linalg.LinAlgError:
        usable &= np.linalg.cond(matrices) < 1e15
        matrices = np.where(usable[:, None, None], matrices, idle)
        step = np.linalg.solve(matrices, right)[:, :, 0]
    longest = np.max(np.abs(step), axis=1, keepdims=True)
    with np.errstate(all="ignore"):
        damped = step * np.minimum(1.0, _LARGEST_STEP / longest)
    return np.where(usable[:, None] & np.isfinite(damped), damped, 0.0).T
