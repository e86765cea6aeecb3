"""The one interface behind which every engine stands, whatever its kind."""

from __future__ import annotations

from abc import ABC, abstractmethod
from collections.abc import Mapping
from dataclasses import dataclass, field, replace
from enum import IntEnum
from functools import cached_property
from typing import TYPE_CHECKING, Any, TypeVar

import numpy as np
from numpy.typing import ArrayLike, NDArray

from engine.atmosphere import FlightCondition
from engine.cycles.flowpath import Flowpath
from engine.energy import EnergyAccount, energy_account
from engine.fuels import KEROSENE, Fuel
from engine.gas import Gas
from engine.installation.pod import Pod
from engine.parts.stream import Stream

if TYPE_CHECKING:
    from _typeshed import DataclassInstance

Array = NDArray[np.float64]
RATINGS = ("take_off", "maximum_continuous", "climb", "cruise")
OPTIONAL_RATINGS = ("maximum_afterburning",)
IDLES = ("flight_idle", "ground_idle")
_HAIR = 1e-6  # m, K and Mach number: round-off of what a mission asks for at the edge of a table
_NO_THRUST = 1e-3  # N: a thrust below it is what matching leaves of none
_Record = TypeVar("_Record", bound="DataclassInstance")


class Outcome(IntEnum):
    """What became of a demand; anything but MET is told to the user, never hidden."""

    MET = 0
    AT_IDLE = 1
    BEYOND_RATING = 2
    NOT_CONVERGED = 3
    UNPHYSICAL = 4
    OUTSIDE_TABLE = 5


def is_unanswered(outcome: NDArray[np.int64]) -> NDArray[np.bool_]:
    """Where an engine found no state, or none that can be believed."""
    return np.isin(outcome, (Outcome.NOT_CONVERGED, Outcome.UNPHYSICAL, Outcome.OUTSIDE_TABLE))


@dataclass(frozen=True)
class Coverage:
    """Where alone an engine that is a table can be asked.

    Attributes
    ----------
    pressure_altitude : least and greatest [m]
    mach : least and greatest
    temperature_deviation : of its day from the standard atmosphere [K]
    """

    pressure_altitude: tuple[float, float]
    mach: tuple[float, float]
    temperature_deviation: float

    def holds(self, flight: FlightCondition) -> NDArray[np.bool_]:
        """Where a condition lies inside, but for round-off."""
        return ~(
            self.is_beyond(flight.pressure_altitude, self.pressure_altitude)
            | self.is_beyond(flight.mach, self.mach)
        ) & self.is_day(flight.temperature_deviation)

    @staticmethod
    def is_beyond(value: Array, ends: tuple[float, float]) -> NDArray[np.bool_]:
        """Whether a value lies outside a range by more than round-off."""
        return (value < ends[0] - _HAIR) | (value > ends[1] + _HAIR)

    def is_day(self, temperature_deviation: ArrayLike) -> NDArray[np.bool_]:
        """Whether a day is the table's."""
        return np.abs(np.asarray(temperature_deviation) - self.temperature_deviation) <= _HAIR


@dataclass(frozen=True)
class Station:
    """State at one station: total, and static where known; arrays, SI."""

    total_temperature: Array
    total_pressure: Array
    mass_flow: Array
    fuel_air_ratio: Array
    static_temperature: Array | None = None
    static_pressure: Array | None = None
    velocity: Array | None = None


@dataclass(frozen=True)
class Evidence:
    """The evaluated cycle behind a state, as flat arrays."""

    gas: Gas
    lower_heating_value: float
    flight: FlightCondition
    ahead: Stream
    path: Flowpath

    def stations(self, shape: tuple[int, ...]) -> dict[str, Station]:
        """All stations in flow order, core first, then bypass; arrays of ``shape``."""
        flight, path = self.flight, self.path
        free = self.ahead.with_flow(path.stations["2"].mass_flow)
        table = {
            "0": _station(
                free, flight.static_temperature, flight.static_pressure, flight.true_airspeed
            )
        }
        table |= {
            name: _station(stream, *path.statics.get(name, ()))
            for name, stream in path.stations.items()
        }
        for exit_name, (stream, jet) in path.jets.items():
            throat_name = exit_name[:-1] + "8"
            table[throat_name] = _station(
                stream,
                jet.throat_static_temperature,
                jet.throat_static_pressure,
                jet.throat_velocity,
            )
            table[exit_name] = _station(
                stream, jet.exit_static_temperature, jet.exit_static_pressure, jet.exit_velocity
            )
        ordered = sorted(table, key=lambda name: (name[0] == "1", float(f"{name[0]}.{name[1:]}0")))
        return {name: _reshaped(table[name], shape) for name in ordered}

    def account(self, shape: tuple[int, ...]) -> EnergyAccount:
        """The energy account; arrays of ``shape``."""
        with np.errstate(all="ignore"):  # members without an answer
            account = energy_account(
                self.gas,
                self.path,
                self.flight,
                self.lower_heating_value,
            )
        return _reshaped(account, shape)


def _station(stream: Stream, *static: Array) -> Station:
    return Station(
        stream.total_temperature,
        stream.total_pressure,
        stream.mass_flow,
        stream.fuel_air_ratio,
        *static,
    )


def _reshaped(record: _Record, shape: tuple[int, ...]) -> _Record:
    """A dataclass of arrays, or of dictionaries of arrays, brought to a shape."""
    changed: dict[str, Any] = {}
    for name, value in vars(record).items():
        if isinstance(value, dict):
            changed[name] = {key: array.reshape(shape) for key, array in value.items()}
        elif value is not None:
            changed[name] = value.reshape(shape)
    return replace(record, **changed)


@dataclass(frozen=True)
class EngineState:
    """One engine at work; every array has the shape of the flight condition.

    Attributes
    ----------
    flight : the flight condition asked for
    net_thrust : [N]; where the outcome is BEYOND_RATING or AT_IDLE, the thrust that there is
    fuel_flow : [kg/s]
    outcome : values of :class:`Outcome`
    binding_limit : index into ``limit_names`` of the limit that governs, or stands nearest
    limit_shares : value over bound of each limit, shape (len(limit_names), ...)
    dry_limit : the same as ``binding_limit`` with the afterburner's own limits left out
    kinks : quantities at whose change of sign thrust has a kink, shape (k, ...): the choking of
        each nozzle, above 0 where choked, then total temperature against a theta break
    unknowns : what a nearby call may start from, shape (n, ...)
    residual, iterations : of the matching
    evidence : what stations and energy account are made from, when they are asked for
    """

    flight: FlightCondition
    net_thrust: Array
    fuel_flow: Array
    outcome: NDArray[np.int64]
    binding_limit: NDArray[np.int64]
    limit_names: tuple[str, ...]
    limit_shares: Array
    dry_limit: NDArray[np.int64]
    kinks: Array
    unknowns: Array
    residual: Array
    iterations: NDArray[np.int64]
    evidence: Evidence | None = field(default=None, repr=False)

    @cached_property
    def stations(self) -> Mapping[str, Station]:
        """Stations by SAE AS755 number; empty where the engine has none."""
        return {} if self.evidence is None else self.evidence.stations(self.flight.shape)

    @cached_property
    def energy(self) -> EnergyAccount | None:
        """The energy account, or None where the engine has no stations."""
        return None if self.evidence is None else self.evidence.account(self.flight.shape)

    @property
    def unanswered_count(self) -> int:
        """How many members found no state that can be believed."""
        return int(np.count_nonzero(is_unanswered(self.outcome)))

    @property
    def specific_fuel_consumption(self) -> Array:
        """Fuel flow per net thrust [kg/(N s)]; NaN where there is no positive thrust."""
        positive = self.net_thrust > _NO_THRUST
        return np.where(positive, self.fuel_flow / np.where(positive, self.net_thrust, 1.0), np.nan)

    @property
    def bypass_ratio(self) -> Array:
        """Bypass over core airflow; 0 without a bypass."""
        if "13" not in self.stations:
            return np.zeros_like(self.net_thrust)
        return self.stations["13"].mass_flow / self.stations["21"].mass_flow

    @property
    def overall_pressure_ratio(self) -> Array:
        """Compressor delivery over engine-face total pressure; 1 without stations."""
        if not self.stations:
            return np.ones_like(self.net_thrust)
        return self.stations["3"].total_pressure / self.stations["2"].total_pressure

    @property
    def turbine_entry_temperature(self) -> Array:
        """Total temperature at station 4 [K]; 0 without stations."""
        if not self.stations:
            return np.zeros_like(self.net_thrust)
        return self.stations["4"].total_temperature

    @property
    def binding_limit_names(self) -> NDArray[np.str_]:
        """Names in place of the indices of ``binding_limit``; "none" for -1."""
        return np.array([*self.limit_names, "none"])[self.binding_limit]


@dataclass(frozen=True)
class Engine(ABC):
    """What the mission asks of an engine; elementwise over any broadcastable shape.

    A thrust above what the rating gives comes back as BEYOND_RATING with the thrust that there
    is; below idle as AT_IDLE. ``start`` are the ``unknowns`` of an earlier state near by, NaN
    where there is none.

    Attributes
    ----------
    name : what the engine file calls it
    assumed : values that the engine file left unsaid, as ``key = value``
    fuel : what it burns
    """

    name: str
    assumed: tuple[str, ...] = field(default=(), kw_only=True)
    fuel: Fuel = field(default=KEROSENE, kw_only=True)

    @property
    def pod(self) -> Pod | None:
        """Size, mass and skin drag of the engine in its nacelle; None where nothing is known."""
        return None

    @property
    def doubts(self) -> Mapping[str, str]:
        """What to keep in mind of a rating's answers, by rating."""
        return {}

    @property
    def ratings(self) -> tuple[str, ...]:
        """Names of the ratings it has."""
        return RATINGS

    @abstractmethod
    def at(
        self,
        flight: FlightCondition,
        *,
        rating: str | NDArray[np.str_],
        net_thrust: ArrayLike | None = None,
        idle: str = "flight_idle",
        start: Array | None = None,
    ) -> EngineState:
        """State at a rating or idle, or at a required net thrust [N] below a rating.

        ``rating`` is a name of :data:`RATINGS` or :data:`IDLES`, or an array of them; where
        ``net_thrust`` is NaN (or not given) the rating itself is asked for.
        """

    @property
    def idles(self) -> tuple[str, ...]:
        """Names of the idles it has."""
        return IDLES

    @property
    def coverage(self) -> Coverage | None:
        """Where alone the engine can be asked; None where the atmosphere alone is the bound."""
        return None

    @property
    def is_known_unlit(self) -> bool:
        """Whether it can be asked for itself unlit."""
        return True

    @abstractmethod
    def windmilling(self, flight: FlightCondition) -> EngineState:
        """Unlit engine turned by the air: no fuel, negative thrust."""

    def at_thrust(
        self,
        flight: FlightCondition,
        net_thrust: ArrayLike,
        *,
        rating: str = "maximum_continuous",
        idle: str = "flight_idle",
        start: Array | None = None,
    ) -> EngineState:
        """State that gives a required net thrust [N] of one engine below one rating."""
        return self.at(flight, rating=rating, net_thrust=net_thrust, idle=idle, start=start)

    def at_rating(
        self, flight: FlightCondition, rating: str, *, start: Array | None = None
    ) -> EngineState:
        """State at one rating or idle, by name (:data:`RATINGS`, :data:`IDLES`)."""
        return self.at(flight, rating=rating, start=start)
