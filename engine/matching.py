"""Matching: the unknowns at which all flows of the engine agree and the throttle is met.

All points of a call are solved together by a damped Newton iteration in the logarithms of the
unknowns; the finite-difference Jacobian is one more array axis. A converged member is frozen, so
that its answer does not depend on its neighbours; one that does not converge is left where it is
and said to be so.
"""

from __future__ import annotations

from dataclasses import dataclass
from enum import IntEnum

import numpy as np
from numpy.typing import NDArray

from engine.atmosphere import FlightCondition
from engine.cycles.flowpath import Arrangement, Flowpath, Sizing
from engine.parts.inlet import take_in
from engine.parts.stream import Stream

Array = NDArray[np.float64]
TOLERANCE = 1e-11
_LARGEST_STEP = 0.25
_DIFFERENCE = 1e-6
_MOST_ITERATIONS = 80


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
    bounds : (8, N) over LIMIT_NAMES: ceilings (inf: none) or floors (0: none)
    """

    throttle: NDArray[np.int64]
    net_thrust: Array
    bounds: Array

    def at(self, index: NDArray[np.int64]) -> Demand:
        """The points picked by an index array."""
        return Demand(self.throttle[index], self.net_thrust[index], self.bounds[:, index])


@dataclass(frozen=True)
class Solution:
    """Answer of :func:`solve`: unknowns (n, N), residual (N,), converged (N,), iterations (N,)."""

    unknowns: Array
    residual: Array
    is_converged: NDArray[np.bool_]
    iterations: NDArray[np.int64]


def solve(
    arrangement: Arrangement,
    sizing: Sizing,
    flight: FlightCondition,
    demand: Demand | None,
    start: Array | None = None,
) -> Solution:
    """Match the engine at N flight conditions (1-d arrays); unlit where ``demand`` is None.

    ``start`` (n, N) are unknowns of an earlier solution near by; without it the design point is
    where the iteration starts. Never raises for a member that has no answer.
    """
    count = flight.mach.size
    size = len(sizing.unknowns)
    cold = np.repeat(sizing.unknowns[:, None], count, axis=1)
    unknowns = cold if start is None else np.where(np.isfinite(start), start, cold)
    residual = np.full(count, np.inf)
    iterations = np.zeros(count, dtype=np.int64)
    _, face = take_in(arrangement.gas, arrangement.inlet, flight)
    open_members = np.arange(count)
    columns = _free_columns(arrangement, demand)
    for _ in range(_MOST_ITERATIONS):
        members_demand = None if demand is None else demand.at(open_members)
        values, jacobian = _residuals_and_jacobian(
            arrangement,
            sizing,
            unknowns[:, open_members],
            _pick(face, open_members),
            flight.at(open_members),
            members_demand,
            columns,
        )
        worst = np.max(np.abs(values), axis=0)
        residual[open_members] = np.where(np.isnan(worst), np.inf, worst)
        remains = ~(residual[open_members] < TOLERANCE) & np.isfinite(values).all(axis=0)
        step = _newton_step(jacobian[:, :, remains], values[:, remains])
        open_members = open_members[remains]
        if open_members.size == 0:
            break
        iterations[open_members] += 1
        unknowns[np.ix_(columns, open_members)] += step
    assert unknowns.shape == (size, count)
    return Solution(unknowns, residual, residual < TOLERANCE, iterations)


def evaluate_at(
    arrangement: Arrangement,
    sizing: Sizing,
    flight: FlightCondition,
    unknowns: Array,
    *,
    is_lit: bool = True,
) -> tuple[Stream, Flowpath]:
    """Free stream (for 1 kg/s) and the whole engine at given unknowns."""
    ahead, face = take_in(arrangement.gas, arrangement.inlet, flight)
    with np.errstate(all="ignore"):
        path = arrangement.evaluate(unknowns, face, flight.static_pressure, sizing, is_lit=is_lit)
    return ahead, path


def _free_columns(arrangement: Arrangement, demand: Demand | None) -> NDArray[np.int64]:
    """Rows of the unknowns that are solved for: an unlit engine has no temperature to choose."""
    names = arrangement.unknown_names
    wanted = [i for i, n in enumerate(names) if demand is not None or "entry_temp" not in n]
    return np.array(wanted)


def _pick(face: Stream, index: NDArray[np.int64]) -> Stream:
    return Stream(
        face.total_temperature[index],
        face.total_pressure[index],
        face.mass_flow[index],
        face.fuel_air_ratio[index],
        face.enthalpy[index],
        face.section,
    )


def _residuals_and_jacobian(
    arrangement: Arrangement,
    sizing: Sizing,
    unknowns: Array,
    face: Stream,
    flight: FlightCondition,
    demand: Demand | None,
    columns: NDArray[np.int64],
) -> tuple[Array, Array]:
    """Residuals (m, N) and their derivatives (m, m, N) by one stacked evaluation."""
    trials = np.repeat(unknowns[:, None, :], len(columns) + 1, axis=1)
    trials[columns, 1 + np.arange(len(columns)), :] += _DIFFERENCE
    with np.errstate(all="ignore"):
        path = arrangement.evaluate(
            trials, face, flight.static_pressure, sizing, is_lit=demand is not None
        )
        rows = [sizing.areas[name] / area - 1.0 for name, area in path.areas.items()]
        if demand is not None:
            rows.append(_throttle_residual(path, sizing, face, flight, demand))
        stacked = np.stack(np.broadcast_arrays(*rows))
        jacobian = (stacked[:, 1:] - stacked[:, :1]) / _DIFFERENCE
    return stacked[:, 0], jacobian


def _throttle_residual(
    path: Flowpath, sizing: Sizing, face: Stream, flight: FlightCondition, demand: Demand
) -> Array:
    """How far the throttle is from what is asked, relative to design values."""
    throttle = demand.throttle
    scale = sizing.reference_thrust * face.total_pressure / sizing.reference_pressure
    thrust = (path.net_thrust(flight) - demand.net_thrust) / scale
    if np.all(throttle == Throttle.THRUST):
        return thrust
    shares = path.limits / demand.bounds[:, None, :]
    bounded = np.where(throttle == Throttle.CEILING, shares.max(axis=0), shares.min(axis=0)) - 1.0
    return np.where(throttle == Throttle.THRUST, thrust, bounded)


def _newton_step(jacobian: Array, values: Array) -> Array:
    """Damped Newton steps (m, N); a member with a singular Jacobian takes no step."""
    matrices = np.moveaxis(jacobian, -1, 0)
    right = -values.T[:, :, None]
    usable = np.isfinite(matrices).all(axis=(1, 2))
    matrices = np.where(usable[:, None, None], matrices, np.eye(matrices.shape[1]))
    try:
        step = np.linalg.solve(matrices, right)[:, :, 0]
    except np.linalg.LinAlgError:
        step = (np.linalg.pinv(matrices) @ right)[:, :, 0]
    longest = np.max(np.abs(step), axis=1, keepdims=True)
    with np.errstate(all="ignore"):
        damped = step * np.minimum(1.0, _LARGEST_STEP / longest)
    return np.where(usable[:, None] & np.isfinite(damped), damped, 0.0).T
