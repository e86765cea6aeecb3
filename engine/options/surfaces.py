"""A table of points as surfaces over altitude and Mach number, read at any point between.

Between the points everything is a monotone cubic, so that nothing lies outside its neighbours.
What is interpolated is smooth: thrust over ambient pressure, and fuel flow over ambient pressure
and the root of ambient temperature. For an engine in dynamic similarity these depend on Mach
number and one measure of power alone, at any altitude (dimensional analysis; N. Cumpsty, Jet
Propulsion, on dynamic scaling, from memory); what is left for the table is where the limits put
that measure, the properties of real gas, and what the aircraft takes off the engine. Part power
is held as what each share adds, which monotone cubics keep above zero: thrust rises everywhere.

The standard atmosphere has a kink at the tropopause. A table with that altitude among its own is
read from each side of it.
"""

from __future__ import annotations

from dataclasses import dataclass
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray

from engine.atmosphere import FlightCondition, flight_condition
from engine.options.monotone import hermite, interpolate, slopes
from engine.options.points_file import Points

Array = NDArray[np.float64]
TROPOPAUSE = 11000.0  # m, ISO 2533:1975
_WINDOW = 4  # Mach numbers that a cubic between two of them depends on


@dataclass(frozen=True)
class Reading:
    """A table read at N points.

    Attributes
    ----------
    words : thrust [N] and fuel flow [kg/s] at each rating or idle by name, (N,)
    part_power, reheat : thrust and fuel flow along the shares, (N, shares); part power begins
        with flight idle and ends where reheat begins, which has one column where there is none
    """

    words: dict[str, tuple[Array, Array]]
    part_power: tuple[Array, Array]
    reheat: tuple[Array, Array]


@dataclass(frozen=True)
class Surfaces:
    """Reduced values of a table, thrust in the first half of the rows and fuel flow in the second.

    In each half stand flight idle, the shares (of thrust, what each adds), and the words.

    Attributes
    ----------
    points : the table
    values : at both ends of each altitude cell, each (rows, A - 1, M)
    slopes : with altitude there, at the tropopause each cell's own
    """

    points: Points
    values: tuple[Array, Array]
    slopes: tuple[Array, Array]

    @classmethod
    def of(cls, points: Points, temperature_deviation: float) -> Surfaces:
        """The surfaces of a table of one day [K off the standard one]."""
        altitude, part = points.pressure_altitude, points.shares
        air = flight_condition(altitude, 0.0, temperature_deviation)
        order = (*part, *points.words)
        thrust = np.stack([points.net_thrust[level] for level in order])
        fuel = np.stack([points.fuel_flow[level] for level in order])
        thrust[1 : len(part)] = np.diff(thrust[: len(part)], axis=0)
        pressure, flow = (unit[:, None] for unit in _units(air))
        rows = np.concatenate([thrust / pressure, fuel / flow])
        return cls(points, (rows[:, :-1], rows[:, 1:]), _cell_slopes(altitude, rows))

    def read(self, flight: FlightCondition) -> Reading:
        """The table at N flight conditions; beyond its edge, at the edge."""
        points = self.points
        altitude = np.clip(flight.pressure_altitude, *points.pressure_altitude[[0, -1]])
        rows = self._over(altitude, np.clip(flight.mach, *points.mach[[0, -1]]))
        pressure, flow = _units(flight)
        half, count, lit = len(rows) // 2, len(points.shares), points.dry_count
        thrust, fuel = rows[:half] * pressure, rows[half:] * flow
        thrust[:count] = np.cumsum(thrust[:count], axis=0)
        return Reading(
            words={
                word: (thrust[count + i], fuel[count + i]) for i, word in enumerate(points.words)
            },
            part_power=(thrust[:lit].T, fuel[:lit].T),
            reheat=(thrust[lit - 1 : count].T, fuel[lit - 1 : count].T),
        )

    def _over(self, altitude: Array, mach: Array) -> Array:
        """All rows at N points of the table, (rows, N)."""
        altitudes, machs = self.points.pressure_altitude, self.points.mach
        cell = _cell(altitudes, altitude)[:, None]
        width = min(_WINDOW, machs.size)
        first = np.clip(_cell(machs, mach) - 1, 0, machs.size - width)
        near = first[:, None] + np.arange(width)
        step = altitudes[cell + 1] - altitudes[cell]
        along = hermite(
            (altitude[:, None] - altitudes[cell]) / step,
            step,
            (self.values[0][:, cell, near], self.values[1][:, cell, near]),
            (self.slopes[0][:, cell, near], self.slopes[1][:, cell, near]),
        )
        return interpolate(machs[near], along, mach)


def _units(air: FlightCondition) -> tuple[Array, Array]:
    """What thrust and fuel flow are divided by."""
    return air.static_pressure, air.static_pressure * np.sqrt(air.static_temperature)


def _cell(points: Array, at: Array) -> NDArray[np.intp]:
    """The interval that each value lies in."""
    return np.clip(np.searchsorted(points, at, side="right") - 1, 0, points.size - 2)


def _cell_slopes(altitude: Array, rows: Array) -> tuple[Array, Array]:
    """Slopes at both ends of each altitude cell, from its own side of the tropopause."""
    inner = [i for i in range(1, altitude.size - 1) if altitude[i] == TROPOPAUSE]
    low, high = [], []
    for start, end in pairwise([0, *inner, altitude.size - 1]):
        piece = slice(start, end + 1)
        found = np.moveaxis(slopes(altitude[piece], np.moveaxis(rows[:, piece], 1, -1)), -1, 1)
        low.append(found[:, :-1])
        high.append(found[:, 1:])
    return np.concatenate(low, axis=1), np.concatenate(high, axis=1)
