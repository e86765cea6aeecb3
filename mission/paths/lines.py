"""Families of lines along which the best speed is looked for: of one energy, or of one altitude."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from engine.atmosphere import FlightCondition
from mission.paths.corridor import Corridor, Edges

Array = NDArray[np.float64]


@dataclass(frozen=True)
class Lines:
    """One line for each value of a variable; along a line the true airspeed [m/s] varies.

    Attributes
    ----------
    edges : ends of lines (N,)
    flight : flight condition on lines at true airspeeds, of one shape
    kink : the kink of the air nearest to a point on each line, pressure altitude [m] and true
        airspeed there; NaN where there is none
    layer : of the air, between kinks, counted from the lowest
    """

    edges: Callable[[Array], Edges]
    flight: Callable[[Array, Array], FlightCondition]
    kink: Callable[[Array, Array], tuple[Array, Array]]
    layer: Callable[[Array], NDArray[np.int64]]


def energy_lines(corridor: Corridor) -> Lines:
    """Lines of constant energy height [m]: the faster the lower."""

    def kink(energy: Array, speed: Array) -> tuple[Array, Array]:
        if corridor.kinks.size == 0:
            return np.full(energy.size, np.nan), np.full(energy.size, np.nan)
        away = np.abs(corridor.altitude_at(energy, speed)[:, None] - corridor.kinks)
        altitude = corridor.kinks[np.argmin(away, axis=1)]
        return altitude, corridor.airspeed_at(energy, altitude)

    return Lines(
        edges=corridor.energy_edges,
        flight=lambda energy, speed: corridor.flight(corridor.altitude_at(energy, speed), speed),
        kink=kink,
        layer=corridor.layer,
    )


def altitude_lines(corridor: Corridor) -> Lines:
    """Lines of constant pressure altitude [m]; the air has no kink along them."""
    return Lines(
        edges=corridor.altitude_edges,
        flight=corridor.flight,
        kink=lambda altitude, speed: (np.full_like(altitude, np.nan), np.full_like(speed, np.nan)),
        layer=corridor.layer,
    )
