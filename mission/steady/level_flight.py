"""Steady level flight of many members at once: a level, a mass, a day and a wind each.

Thrust equals drag, lift equals weight. What is asked of the engine here is asked for all members
and all Mach numbers in one call.
"""

from __future__ import annotations

from dataclasses import dataclass
from enum import IntEnum
from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray

from engine.atmosphere import FlightCondition, flight_condition
from engine.interface import Engine, Outcome
from engine.quantities import STANDARD_GRAVITY
from mission.air import Air
from mission.aircraft import Aircraft
from mission.forces import drag, lift_coefficient

Array = NDArray[np.float64]
Flags = NDArray[np.bool_]
Limits = NDArray[np.int64]
_HAIR = 1e-6  # m
_ROUND_OFF = 1e-6  # share of drag that thrust may lack where it ends to be enough


class Limit(IntEnum):
    """What a Mach number stands at, or for want of what there is none."""

    NONE = 0
    OPERATING_MACH = 1
    OPERATING_AIRSPEED = 2
    LIFT = 3
    THRUST = 4
    IDLE = 5
    ENGINE = 6
    TABLE = 7
    GROUND_SPEED = 8
    ALTITUDE = 9
    CEILING = 10
    DYNAMIC_PRESSURE = 11
    BUFFET = 12
    BUFFET_TABLE = 13
    POLAR = 14


_LACK = {
    Outcome.MET: Limit.NONE,
    Outcome.AT_IDLE: Limit.IDLE,
    Outcome.BEYOND_RATING: Limit.THRUST,
    Outcome.NOT_CONVERGED: Limit.ENGINE,
    Outcome.UNPHYSICAL: Limit.ENGINE,
    Outcome.OUTSIDE_TABLE: Limit.TABLE,
}


@dataclass(frozen=True)
class Answers:
    """All engines together at Mach numbers (k, S).

    Attributes
    ----------
    mach
    drag : of level flight [N]
    thrust : [N]
    fuel_flow : [kg/s]
    lack : why the engine does not give what was asked, :data:`Limit.NONE` where it does
    unknowns : (n, k, S), what a call near by may start from
    """

    mach: Array
    drag: Array
    thrust: Array
    fuel_flow: Array
    lack: Limits
    unknowns: Array

    @property
    def is_met(self) -> Flags:
        """Where the engine gives what was asked."""
        return np.asarray(self.lack == Limit.NONE)


@dataclass(frozen=True)
class LevelSpeed:
    """A Mach number of level flight and what it comes to, arrays of one shape S.

    Where ``is_flyable`` is false ``limit`` says for want of what, ``thrust_margin`` is the
    greatest that there is at any speed (NaN if no engine could be asked), and every other number
    is NaN.

    Attributes
    ----------
    mach, true_airspeed [m/s], lift_coefficient, drag [N], lift_to_drag
    fuel_flow : of all engines [kg/s]
    specific_air_range : true airspeed per fuel flow [m/kg]
    specific_ground_range : ground speed per fuel flow [m/kg]
    thrust_margin : thrust at the rating over drag, less one
    limit : what holds the Mach number, values of :class:`Limit`
    """

    is_flyable: Flags
    mach: Array
    true_airspeed: Array
    lift_coefficient: Array
    drag: Array
    lift_to_drag: Array
    fuel_flow: Array
    specific_air_range: Array
    specific_ground_range: Array
    thrust_margin: Array
    limit: Limits

    def at(self, index: Any) -> LevelSpeed:
        """The members picked by a NumPy index."""
        return LevelSpeed(**{name: value[index] for name, value in vars(self).items()})


@dataclass(frozen=True)
class LevelFlight:
    """What is asked about: members of one shape S.

    Attributes
    ----------
    aircraft, engine
    air : still air at the levels
    mass : [kg]
    tailwind : [m/s]
    rating : the one whose thrust level flight must not pass
    """

    aircraft: Aircraft
    engine: Engine
    air: FlightCondition
    mass: Array
    tailwind: Array
    rating: str

    @classmethod
    def of(
        cls,
        aircraft: Aircraft,
        engine: Engine,
        pressure_altitude: ArrayLike,
        mass: ArrayLike,
        temperature_deviation: ArrayLike = 0.0,
        tailwind: ArrayLike = 0.0,
        *,
        rating: str = "cruise",
    ) -> LevelFlight:
        """From arrays that broadcast: pressure altitude [m], mass [kg], deviation [K], wind [m/s].

        Raises
        ------
        OutOfRange
            for a level or a day outside the atmosphere.
        """
        still = flight_condition(pressure_altitude, 0.0, temperature_deviation)
        shape = np.broadcast_shapes(still.shape, np.shape(mass), np.shape(tailwind))
        return cls(
            aircraft=aircraft,
            engine=engine,
            air=still.with_mach(np.zeros(shape)),
            mass=np.broadcast_to(np.asarray(mass, dtype=float), shape),
            tailwind=np.broadcast_to(np.asarray(tailwind, dtype=float), shape),
            rating=rating,
        )

    @property
    def weight(self) -> Array:
        """Weight [N]."""
        return self.mass * STANDARD_GRAVITY

    @property
    def is_covered(self) -> Flags:
        """Where the engine can be asked: everywhere, but for the level and the day of a table."""
        table = self.engine.coverage
        if table is None:
            return np.ones(self.mass.shape, dtype=bool)
        return table.holds(self.air.with_mach(np.full(self.mass.shape, table.mach[0])))

    @property
    def is_below_ceiling(self) -> Flags:
        """Where the level is not above the aircraft's greatest pressure altitude."""
        most = self.aircraft.maximum_pressure_altitude
        return np.asarray(self.air.pressure_altitude <= most + _HAIR)

    def drag(self, mach: Array) -> Array:
        """Drag [N] at Mach numbers (..., S)."""
        return drag(self.aircraft, self.air.with_mach(mach), self.weight)

    def ground_speed(self, mach: Array) -> Array:
        """Speed over the ground [m/s] at Mach numbers (..., S)."""
        return mach * self.air.speed_of_sound + self.tailwind

    def at_rating(self, mach: Array, where: Flags, start: Array | None = None) -> Answers:
        """What the rating gives at Mach numbers (k, S), for the members of ``where``."""
        return self._ask(mach, np.full(mach.shape, np.nan), where, start)

    def level(self, mach: Array, where: Flags, start: Array | None = None) -> Answers:
        """Thrust equal to drag at Mach numbers (k, S), for the members of ``where``."""
        return self._ask(mach, self.drag(mach), where, start)

    def _ask(self, mach: Array, thrust: Array, where: Flags, start: Array | None) -> Answers:
        """One engine call; NaN for a thrust [N] asks for the rating, what is not asked lacks it."""
        count = self.aircraft.engine_count
        is_covered = np.broadcast_to(self.is_covered, mach.shape)
        where = np.broadcast_to(where, mach.shape) & is_covered
        found, flow = np.zeros(mach.shape), np.zeros(mach.shape)
        lack = np.where(is_covered, Limit.ENGINE, Limit.TABLE)
        unknowns = np.empty((0, *mach.shape))
        if where.any():
            state = self.engine.at(
                self.air.with_mach(mach).at(where),
                rating=self.rating,
                net_thrust=thrust[where] / count,
                start=start[:, where] if start is not None and len(start) else None,
            )
            found[where], flow[where] = state.net_thrust * count, state.fuel_flow * count
            lack[where] = _lack(state.outcome, found[where], thrust[where])
            unknowns = np.full((len(state.unknowns), *mach.shape), np.nan)
            unknowns[:, where] = state.unknowns
        burnt = flow * self.aircraft.fuel_flow_factor
        return Answers(mach, self.drag(mach), found, burnt, lack, unknowns)

    def speed_at(
        self, mach: Array, is_flyable: Flags, limit: Limits, most: Array, start: Array
    ) -> LevelSpeed:
        """What Mach numbers (S) come to, asked from ``start`` (n, S) in one engine call.

        Where ``is_flyable`` is false, ``limit`` says why, and ``most`` is the thrust margin.
        """
        here = np.where(is_flyable, mach, 0.5)
        pair = np.stack([here, here])
        wanted = self.drag(pair)
        wanted[0] = np.nan
        found = self._ask(pair, wanted, is_flyable, np.stack([start, start], axis=1))
        is_met = is_flyable & found.is_met[1] & (found.fuel_flow[1] > 0.0)
        resistance, flow = (
            np.where(is_met, value[1], np.nan) for value in (found.drag, found.fuel_flow)
        )
        flight = self.air.with_mach(np.where(is_met, mach, np.nan))
        speed = flight.true_airspeed
        return LevelSpeed(
            is_flyable=is_met,
            mach=flight.mach,
            true_airspeed=speed,
            lift_coefficient=lift_coefficient(self.aircraft, flight, self.weight),
            drag=resistance,
            lift_to_drag=self.weight / resistance,
            fuel_flow=flow,
            specific_air_range=speed / flow,
            specific_ground_range=self.ground_speed(flight.mach) / flow,
            thrust_margin=np.where(is_met, found.thrust[0] / resistance - 1.0, most),
            limit=np.where(is_flyable & ~is_met, found.lack[1], limit),
        )


@dataclass(frozen=True)
class Subject:
    """Aircraft, engine and the air by altitude that a question about many levels is about."""

    aircraft: Aircraft
    engine: Engine
    air: Air

    def level_flight(self, altitude: Array, mass: Array, rating: str) -> LevelFlight:
        """Level flight at pressure altitudes [m] and masses [kg] that broadcast."""
        return LevelFlight.of(
            self.aircraft,
            self.engine,
            altitude,
            mass,
            self.air.deviation_at(altitude),
            self.air.tailwind_at(altitude),
            rating=rating,
        )


def _lack(outcome: NDArray[np.int64], thrust: Array, wanted: Array) -> Limits:
    """Why the engine does not give what was asked."""
    table = np.zeros(max(_LACK) + 1, dtype=np.int64)
    for code, limit in _LACK.items():
        table[code] = limit
    lack = table[outcome]
    is_enough = (lack == Limit.THRUST) & (thrust >= wanted * (1.0 - _ROUND_OFF))
    return np.where(is_enough, Limit.NONE, lack)
