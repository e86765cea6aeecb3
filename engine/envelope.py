"""Thrust and fuel flow of an engine over a grid of altitude, Mach number and level of power."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import ArrayLike, NDArray

from engine.atmosphere import FlightCondition, broadcast_condition, flight_condition
from engine.errors import InputRefused
from engine.interface import OPTIONAL_RATINGS, Engine, Outcome, is_unanswered

Array = NDArray[np.float64]
Level = str | float
LOWEST = "flight_idle"  # the level that a share of zero would name
COLUMNS = ("pressure_altitude_m", "mach", "rating", "net_thrust_n", "fuel_flow_kg_per_s")
REHEATED = OPTIONAL_RATINGS[0]
WINDMILLING = "windmilling"  # the level of an unlit engine, which is neither a rating nor an idle
# What a share is, in lines of a comment.
SHARE = (
    "a rating that is a number is a share of the thrust span at its point:",
    "  net thrust = flight idle + share x (highest rating without reheat - flight idle);",
    "  asked for under the lowest rating that gives it, with what is taken off the engine there;",
    "  from 1 to 2 it is that rating + (share - 1) x (maximum afterburning - that rating)",
)
# Steps of a grid that gives the fuel of a mission back within 0.01 %, where 0.1 % is asked for.
ALTITUDE_STEP, MACH_STEP = 500.0, 0.05  # m; the tropopause at 11 km is a point of it
HIGHEST_ALTITUDE, HIGHEST_MACH = 13716.0, 0.9  # m, FL450; where a grid ends if nothing is said
SHARES = (0.02, 0.05, 0.1, 0.15, 0.2, 0.3, 0.4, 0.5, 0.6, 0.7, 0.8, 0.9, 1.0)
REHEATED_SHARES = (1.1, 1.25, 1.5, 1.75, 2.0)


@dataclass(frozen=True)
class Envelope:
    """What an engine gives over a grid.

    Attributes
    ----------
    engine : its name
    temperature_deviation : of the day [K]
    pressure_altitude : (A,) [m]
    mach : (M,)
    levels : ratings and idles by name, and shares of thrust (:data:`SHARE`) as numbers
    net_thrust, fuel_flow : (levels, A, M) [N], [kg/s]; zero where there is no answer
    outcome : (levels, A, M), values of :class:`engine.interface.Outcome`
    binding_limit : (levels, A, M), the name of the limit that governs
    """

    engine: str
    temperature_deviation: float
    pressure_altitude: Array
    mach: Array
    levels: tuple[Level, ...]
    net_thrust: Array
    fuel_flow: Array
    outcome: NDArray[np.int64]
    binding_limit: NDArray[np.str_]

    @property
    def is_answered(self) -> NDArray[np.bool_]:
        """Where the engine has an answer, (levels, A, M)."""
        return ~is_unanswered(self.outcome)

    def without(self, level: Level) -> Envelope:
        """The same with a level left out."""
        kept = [i for i, name in enumerate(self.levels) if name != level]
        return replace(
            self,
            levels=tuple(self.levels[i] for i in kept),
            net_thrust=self.net_thrust[kept],
            fuel_flow=self.fuel_flow[kept],
            outcome=self.outcome[kept],
            binding_limit=self.binding_limit[kept],
        )


def grid(low: float, high: float, step: float) -> Array:
    """From ``low`` to ``high``, both included, at multiples of a step."""
    inside = np.arange(np.floor(low / step) + 1.0, np.ceil(high / step)) * step
    return np.unique(np.round([low, *inside, high], 9))


def default_levels(engine: Engine) -> tuple[Level, ...]:
    """Every rating and idle of an engine, windmilling, and the shares that a table needs."""
    reheated = REHEATED_SHARES if REHEATED in engine.ratings else ()
    unlit = (WINDMILLING,) if engine.is_known_unlit else ()
    return (*engine.ratings, *engine.idles, *unlit, *SHARES, *reheated)


def envelope(
    engine: Engine,
    pressure_altitude: ArrayLike,
    mach: ArrayLike,
    temperature_deviation: float = 0.0,
    *,
    levels: Sequence[Level],
) -> Envelope:
    """Ask an engine over a grid.

    Parameters
    ----------
    pressure_altitude, mach : (A,) [m] and (M,), rising
    temperature_deviation : of the day [K]
    levels : names of ratings and idles, :data:`WINDMILLING`, and shares of thrust
        (:data:`SHARE`) above 0 and up to 1, with reheat to 2

    Raises
    ------
    InputRefused
        for a rating that the engine does not have, or a share outside its range.
    OutOfRange
        outside the atmosphere.

    Notes
    -----
    Ratings and idles are one engine call, shares, which need their thrusts, a second, windmilling
    a third. At rest no air turns an unlit engine: there, by definition, it gives exactly no thrust
    and burns nothing.
    """
    altitudes, machs = (np.atleast_1d(np.asarray(x, float)) for x in (pressure_altitude, mach))
    shares = [level for level in levels if not isinstance(level, str)]
    _refuse_shares(engine, shares)
    air = flight_condition(altitudes[:, None], machs[None, :], temperature_deviation)
    named = [level for level in levels if isinstance(level, str) and level != WINDMILLING]
    asked = list(dict.fromkeys([*named, *((*engine.ratings, LOWEST) if shares else ())]))
    rows: dict[Level, _Level] = {}
    if asked:
        found = _ask(engine, air, np.array(asked)[:, None, None], None)
        rows |= {name: _Level(*(part[i] for part in found)) for i, name in enumerate(asked)}
    if WINDMILLING in levels:
        rows[WINDMILLING] = _unlit(engine, air)
    if shares:
        rows |= _at_shares(engine, air, shares, rows)
    chosen = [rows[level] for level in levels]
    return Envelope(
        engine=engine.name,
        temperature_deviation=temperature_deviation,
        pressure_altitude=altitudes,
        mach=machs,
        levels=tuple(levels),
        net_thrust=np.stack([level.net_thrust for level in chosen]),
        fuel_flow=np.stack([level.fuel_flow for level in chosen]),
        outcome=np.stack([level.outcome for level in chosen]),
        binding_limit=np.stack([level.binding_limit for level in chosen]),
    )


def _refuse_shares(engine: Engine, shares: Sequence[float]) -> None:
    most = 2.0 if REHEATED in engine.ratings else 1.0
    if wrong := [share for share in shares if not 0.0 < share <= most]:
        raise InputRefused(
            f"a share of the thrust of {engine.name} is above 0 and at most {most:g}, "
            f"not {wrong[0]:g}"
        )


@dataclass(frozen=True)
class _Level:
    """One level, or several, over the grid."""

    net_thrust: Array
    fuel_flow: Array
    outcome: NDArray[np.int64]
    binding_limit: NDArray[np.str_]


def _ask(
    engine: Engine, air: FlightCondition, ratings: NDArray[np.str_], thrust: Array | None
) -> tuple[Array, Array, NDArray[np.int64], NDArray[np.str_]]:
    """Thrust, fuel flow, outcome and limit of everything asked for in one call."""
    shape = np.broadcast_shapes(ratings.shape, air.shape)
    flight = air.with_mach(np.broadcast_to(air.mach, shape))
    state = engine.at(flight, rating=np.broadcast_to(ratings, shape), net_thrust=thrust)
    return state.net_thrust, state.fuel_flow, state.outcome, state.binding_limit_names


def _unlit(engine: Engine, air: FlightCondition) -> _Level:
    """The engine unlit, which is asked for only where air turns it."""
    flight = broadcast_condition(air)
    moves = flight.mach > 0.0
    thrust, fuel = np.zeros(flight.shape), np.zeros(flight.shape)
    outcome = np.full(flight.shape, Outcome.MET, dtype=np.int64)
    if moves.any():
        state = engine.windmilling(flight.at(moves))
        thrust[moves], fuel[moves] = state.net_thrust, state.fuel_flow
        outcome[moves] = state.outcome
    return _Level(thrust, fuel, outcome, np.full(flight.shape, "none"))


def _at_shares(
    engine: Engine, air: FlightCondition, shares: Sequence[float], rows: Mapping[Level, _Level]
) -> dict[Level, _Level]:
    """Levels between flight idle and the highest rating at each point, and from there up.

    A thrust is asked for under the lowest rating that gives it: what the aircraft takes off an
    engine goes with its rating, and part power is what cruise is flown at. Of equal ones it is
    the one named last, ratings being named from take-off down.
    """
    dry = [name for name in reversed(engine.ratings) if name != REHEATED]
    tops = np.stack([rows[name].net_thrust for name in dry])
    idle, most = rows[LOWEST].net_thrust, tops.max(axis=0)
    highest = rows[REHEATED].net_thrust if REHEATED in engine.ratings else most
    share = np.array(shares)[:, None, None]
    thrust = idle + np.minimum(share, 1.0) * (most - idle)
    thrust += np.maximum(share - 1.0, 0.0) * (highest - most)
    enough = np.where(tops >= thrust[:, None] * (1.0 - 1e-12), tops, np.inf)
    ceiling = np.where(share > 1.0, REHEATED, np.array(dry)[np.argmin(enough, axis=1)])
    found = _ask(engine, air, ceiling, thrust)
    ends = [rows[name].outcome for name in (LOWEST, *engine.ratings)]
    lost = is_unanswered(np.stack(ends)).any(axis=0)  # a span without an end has no shares
    outcome = np.where(lost, Outcome.NOT_CONVERGED, found[2])
    return {
        level: _Level(found[0][i], found[1][i], outcome[i], found[3][i])
        for i, level in enumerate(shares)
    }
