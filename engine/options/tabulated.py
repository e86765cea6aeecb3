"""An engine known by a table of thrust and fuel flow, behind the one interface.

Inside the table it is read by monotone cubics (:mod:`engine.options.surfaces`); outside there is
no answer. Which limit governs is not in a table, nor are stations.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from pathlib import Path

import numpy as np
from numpy.typing import ArrayLike, NDArray

from engine.atmosphere import FlightCondition, broadcast_condition
from engine.envelope import LOWEST, WINDMILLING
from engine.errors import InputRefused
from engine.interface import IDLES, Coverage, Engine, EngineState, Outcome
from engine.options.input_model import TabulatedFile
from engine.options.monotone import interpolate
from engine.options.points_file import Points, read_points
from engine.options.surfaces import Reading, Surfaces

Array = NDArray[np.float64]
Outcomes = NDArray[np.int64]
Pair = tuple[Array, Array]  # thrust [N] and fuel flow [kg/s]
_SLACK = 1e-9
_LIMIT = "thrust_in_the_table"


@dataclass(frozen=True)
class TabulatedEngine(Engine):
    """Points over pressure altitude, Mach number and level, on one day [K off standard]."""

    points: Points
    temperature_deviation: float

    @property
    def ratings(self) -> tuple[str, ...]:
        """The ratings in the table."""
        return self.points.ratings

    @property
    def idles(self) -> tuple[str, ...]:
        """The idles in the table."""
        return tuple(word for word in self.points.words if word in IDLES)

    @property
    def coverage(self) -> Coverage:
        """Ranges of the table, and its day."""
        altitude, mach = self.points.pressure_altitude, self.points.mach
        return Coverage(
            pressure_altitude=(float(altitude[0]), float(altitude[-1])),
            mach=(float(mach[0]), float(mach[-1])),
            temperature_deviation=self.temperature_deviation,
        )

    def at(
        self,
        flight: FlightCondition,
        *,
        rating: str | NDArray[np.str_],
        net_thrust: ArrayLike | None = None,
        idle: str = LOWEST,
        start: Array | None = None,
    ) -> EngineState:
        """State at ratings and required thrusts; outside the table OUTSIDE_TABLE and no thrust."""
        wanted = np.asarray(np.nan if net_thrust is None else net_thrust, dtype=np.float64)
        shape = np.broadcast_shapes(flight.shape, wanted.shape, np.shape(rating))
        flight = flight.with_mach(np.broadcast_to(flight.mach, shape))
        names = np.broadcast_to(rating, shape).ravel()
        self._refuse_unknown([*(str(name) for name in np.unique(names)), idle])
        reading = self._read(flight)
        most = _picked(reading, names)
        demand = np.broadcast_to(wanted, shape).ravel()
        (thrust, fuel), outcome = _demanded(reading, demand, reading.words[idle], most)
        positive = most[0] > 0.0
        share = np.where(positive, thrust / np.where(positive, most[0], 1.0), 1.0)
        return self._state(flight, thrust, fuel, outcome, share)

    @property
    def is_known_unlit(self) -> bool:
        """Whether the table has rows of the engine unlit."""
        return WINDMILLING in self.points.words

    def windmilling(self, flight: FlightCondition) -> EngineState:
        """Unlit: no fuel, and drag as the table has it; refused where it has no such rows."""
        if not self.is_known_unlit:
            raise InputRefused(
                f"the table of {self.name} has no rows rated {WINDMILLING}; add them, a row for "
                "each altitude and Mach number, with fuel flow 0"
            )
        flight = broadcast_condition(flight)
        none = np.zeros(flight.mach.size)
        thrust = self._read(flight).words[WINDMILLING][0]
        met = np.full(none.shape, Outcome.MET, dtype=np.int64)
        return self._state(flight, thrust, none, met, none)

    def _refuse_unknown(self, names: list[str]) -> None:
        known = (*self.ratings, *self.idles)
        for name in names:
            if name not in known:
                listed = ", ".join(known)
                raise InputRefused(f"'{name}' is no rating of {self.name}; its table has {listed}")

    @cached_property
    def _surfaces(self) -> Surfaces:
        return Surfaces.of(self.points, self.temperature_deviation)

    def _read(self, flight: FlightCondition) -> Reading:
        names = flight.__dataclass_fields__
        return self._surfaces.read(
            FlightCondition(*(getattr(flight, name).ravel() for name in names))
        )

    def _state(
        self, flight: FlightCondition, thrust: Array, fuel: Array, outcome: Outcomes, share: Array
    ) -> EngineState:
        """The state in the caller's shape, members outside the table flagged, without thrust."""
        shape = flight.shape
        is_inside = self.coverage.holds(flight)
        none = np.zeros(shape, dtype=np.int64)
        return EngineState(
            flight=flight,
            net_thrust=np.where(is_inside, thrust.reshape(shape), 0.0),
            fuel_flow=np.where(is_inside, fuel.reshape(shape), 0.0),
            outcome=np.where(is_inside, outcome.reshape(shape), Outcome.OUTSIDE_TABLE),
            binding_limit=none,
            limit_names=(_LIMIT,),
            limit_shares=np.where(is_inside, share.reshape(shape), np.nan)[None],
            dry_limit=none,
            kinks=np.empty((0, *shape)),
            unknowns=np.empty((0, *shape)),
            residual=np.zeros(shape),
            iterations=none,
        )


def load_table(written: TabulatedFile, folder: Path, assumed: tuple[str, ...]) -> TabulatedEngine:
    """The engine of a file whose points stand in a CSV below ``folder``."""
    return TabulatedEngine(
        name=written.name,
        points=read_points(folder / written.points),
        temperature_deviation=written.day,
        fuel=written.fuel.to_fuel(),
        assumed=assumed,
    )


def _picked(reading: Reading, names: NDArray[np.str_]) -> Pair:
    """Thrust and fuel flow at the word that each point names."""
    thrust, fuel = np.zeros(names.size), np.zeros(names.size)
    for name in np.unique(names):
        here = names == name
        for part, of_word in zip((thrust, fuel), reading.words[str(name)], strict=True):
            part[here] = of_word[here]
    return thrust, fuel


def _demanded(reading: Reading, wanted: Array, least: Pair, most: Pair) -> tuple[Pair, Outcomes]:
    """Thrust, fuel flow and outcome of a wanted thrust [N], NaN for the ceiling itself."""
    is_rated = np.isnan(wanted)
    beyond = ~is_rated & (wanted > most[0] + _SLACK * np.abs(most[0]))
    below = ~is_rated & ~beyond & (wanted < least[0])
    outcome = np.select([beyond, below], [Outcome.BEYOND_RATING, Outcome.AT_IDLE], Outcome.MET)
    fuel = _fuel_flow(reading, np.where(is_rated, most[0], wanted), least, most)
    chosen = [is_rated | beyond, below]
    state = tuple(
        np.select(chosen, [most[i], least[i]], met) for i, met in enumerate((wanted, fuel))
    )
    return (state[0], state[1]), np.asarray(outcome, dtype=np.int64)


def _fuel_flow(reading: Reading, thrust: Array, least: Pair, most: Pair) -> Array:
    """Fuel flow [kg/s] at a thrust between two levels, along the shares.

    Where the shares end before the level that bounds a thrust, a straight line leads there.
    """
    dry, lit = reading.part_power, reading.reheat
    fuel = interpolate(*dry, np.clip(thrust, dry[0][:, 0], dry[0][:, -1]))
    if lit[0].shape[1] > 1:
        reheated = interpolate(*lit, np.clip(thrust, lit[0][:, 0], lit[0][:, -1]))
        fuel = np.where(thrust > dry[0][:, -1], reheated, fuel)
    bottom, top = (dry[0][:, 0], dry[1][:, 0]), (lit[0][:, -1], lit[1][:, -1])
    fuel = np.where(thrust > top[0], _between(top, most, thrust), fuel)
    return np.where(thrust < bottom[0], _between(least, bottom, thrust), fuel)


def _between(low: Pair, high: Pair, thrust: Array) -> Array:
    """Fuel flow on the straight line between two points of thrust and fuel flow."""
    span = high[0] - low[0]
    is_open = span > 0.0
    way = np.where(is_open, (thrust - low[0]) / np.where(is_open, span, 1.0), 0.0)
    return low[1] + np.clip(way, 0.0, 1.0) * (high[1] - low[1])
