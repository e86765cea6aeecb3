"""A climb path: smooth pieces over energy height, and exchanges of speed for height between."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import Literal

import numpy as np
from numpy.typing import ArrayLike, NDArray

from engine.errors import OutOfRange
from engine.options.monotone import hermite, slopes
from mission.paths.corridor import Corridor

Array = NDArray[np.float64]
_HAIR = 1e-6  # m of energy height: round-off at the ends of a piece
FREE, FAST, SLOW, LEVEL = "free", "fast", "slow", "level"


@dataclass(frozen=True)
class State:
    """A pressure altitude [m] and a Mach number."""

    pressure_altitude: float
    mach: float


@dataclass(frozen=True)
class Piece:
    """A smooth run of a path, over rising energy height; arrays of n points.

    Attributes
    ----------
    energy_height : [m], geometric
    pressure_altitude : [m]
    mach
    true_airspeed : [m/s]
    held : FREE between the bounds; FAST or SLOW along one; LEVEL at one altitude
    held_by : the name of the bound, or what is special at that altitude; empty where free
    """

    energy_height: Array
    pressure_altitude: Array
    mach: Array
    true_airspeed: Array
    held: str
    held_by: str
    corridor: Corridor = field(repr=False)

    @property
    def start(self) -> State:
        """Where it begins."""
        return State(float(self.pressure_altitude[0]), float(self.mach[0]))

    @property
    def end(self) -> State:
        """Where it ends."""
        return State(float(self.pressure_altitude[-1]), float(self.mach[-1]))

    def at(self, energy_height: ArrayLike) -> tuple[Array, Array]:
        """Pressure altitude [m] and Mach number at energy heights [m] of the piece, any shape.

        Along a bound, or at one altitude, exactly on it. Else true airspeed is a monotone cubic of
        energy height, within the bounds, and altitude is what the energy leaves.

        Raises
        ------
        OutOfRange
            before the start or beyond the end of the piece.
        """
        energy = np.asarray(energy_height, dtype=np.float64)
        first, last = self.energy_height[[0, -1]]
        outside = (energy < first - _HAIR) | (energy > last + _HAIR)
        if np.any(outside):
            value = float(energy[outside][0]) if energy.ndim else float(energy)
            raise OutOfRange(f"energy height = {value:g} m is outside {first:g} to {last:g} m")
        altitude, airspeed = self._flown(np.clip(energy, first, last))
        return altitude, self.corridor.flight(altitude, airspeed).mach

    def cut(self, first: float, last: float) -> Piece:
        """The part of it between two energy heights [m] that it holds."""
        inner = (self.energy_height > first) & (self.energy_height < last)
        energy = np.array([first, *self.energy_height[inner], last])
        _, airspeed = self._flown(energy)
        level = float(self.pressure_altitude[0])
        return piece_of(self.corridor, energy, airspeed, self.held, self.held_by, level)

    def _flown(self, energy: Array) -> tuple[Array, Array]:
        """Pressure altitude [m] and true airspeed [m/s]."""
        if self.held == FREE:
            airspeed = pchip(self.energy_height, self.true_airspeed, energy)
            altitude = self.corridor.altitude_at(energy, airspeed)
            ends = self.corridor.lowest(energy), self.corridor.highest(energy)
            altitude = np.clip(altitude, *ends)
        else:
            altitude = held_altitude(self.corridor, self.held, self.pressure_altitude[0], energy)
        return altitude, self.corridor.airspeed_at(energy, altitude)


@dataclass(frozen=True)
class Exchange:
    """Height for speed, or speed for height, at one energy height [m], taken to need no time."""

    energy_height: float
    start: State
    end: State

    @property
    def kind(self) -> Literal["zoom", "dive"]:
        """Whether it goes up or down."""
        is_up = self.end.pressure_altitude > self.start.pressure_altitude
        return "zoom" if is_up else "dive"


@dataclass(frozen=True)
class Fall:
    """Energy that a path by altitude gives away: more speed lost than height gained.

    ``energy_height`` [m] before and after it.
    """

    energy_height: tuple[float, float]
    start: State
    end: State


@dataclass(frozen=True)
class Stop:
    """Why a path ends before its end.

    Attributes
    ----------
    what : the quantity, or the name of the bound, that ends it
    energy_height : where [m]
    state : the best that there is there
    value, bound, unit : of the quantity there, and what it falls short of
    """

    what: str
    energy_height: float
    state: State
    value: float
    bound: float
    unit: str


@dataclass(frozen=True)
class EnergyPath:
    """A path from a start to an end state, or as far as it goes.

    Attributes
    ----------
    legs : in the order flown. Pieces follow each other at one energy height, an exchange or a fall
        standing between them where altitude and Mach number change
    stop : why it ends early; None where it reaches the end
    interpolation_cost : what interpolating between its points costs of the integral made least, a
        share, measured with points up to four times as far apart
    unanswered : how many states the search asked for that the engine does not have; none of them
        is on the path
    """

    legs: tuple[Piece | Exchange | Fall, ...]
    stop: Stop | None
    interpolation_cost: float
    unanswered: int

    @property
    def pieces(self) -> tuple[Piece, ...]:
        """The smooth pieces alone."""
        return tuple(leg for leg in self.legs if isinstance(leg, Piece))

    @property
    def exchanges(self) -> tuple[Exchange, ...]:
        """The exchanges alone, the first and last of them with the start and end state."""
        return tuple(leg for leg in self.legs if isinstance(leg, Exchange))

    @property
    def falls(self) -> tuple[Fall, ...]:
        """Where energy height does not rise along the path; it is one of energy without any."""
        return tuple(leg for leg in self.legs if isinstance(leg, Fall))


def piece_of(
    corridor: Corridor,
    energy: Array,
    airspeed: Array,
    held: str = FREE,
    held_by: str = "",
    level: float = np.nan,
) -> Piece:
    """A piece through energy heights [m] and true airspeeds [m/s], or held as the piece says."""
    if held == FREE:
        altitude = corridor.altitude_at(energy, airspeed)
    else:
        altitude = held_altitude(corridor, held, level, energy)
        airspeed = corridor.airspeed_at(energy, altitude)
    mach = corridor.flight(altitude, airspeed).mach
    return Piece(energy, altitude, mach, airspeed, held, held_by, corridor)


def pchip(x: Array, y: Array, at: Array) -> Array:
    """Monotone cubics through points (n,), read between them; any shape."""
    cell = np.clip(np.searchsorted(x, at, side="right") - 1, 0, x.size - 2)
    slope, step = slopes(x, y), x[cell + 1] - x[cell]
    return hermite(
        (at - x[cell]) / step, step, (y[cell], y[cell + 1]), (slope[cell], slope[cell + 1])
    )


def held_altitude(corridor: Corridor, held: str, level: float, energy: Array) -> Array:
    """Pressure altitude [m] along a bound, or at the level [m] that is held."""
    if held == FAST:
        return corridor.lowest(energy)
    if held == SLOW:
        return corridor.highest(energy)
    return np.full(np.shape(energy), level)
