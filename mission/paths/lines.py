"""Families of lines along which the best speed is looked for: of one energy, or of one altitude."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from engine.atmosphere import FlightCondition
from mission.paths.corridor import ATMOSPHERE_KINKS, Corridor, Edges

Array = NDArray[np.float64]


@dataclass(frozen=True)
class Lines:
    """One line for each value of a variable; along a line the true airspeed [m/s] varies.

    Attributes
    ----------
    edges : ends of lines (N,)
    flight : flight condition on lines at true airspeeds, of one shape
    kinks : true airspeeds at which the air has its kinks along lines, (N, k); NaN for one outside
    """

    edges: Callable[[Array], Edges]
    flight: Callable[[Array, Array], FlightCondition]
    kinks: Callable[[Array], Array]


def energy_lines(corridor: Corridor) -> Lines:
    """Lines of constant energy height [m]: the faster the lower."""
    low, high = corridor.pressure_altitude[[0, -1]]
    kinks = np.array([kink if low < kink < high else np.nan for kink in ATMOSPHERE_KINKS])
    return Lines(
        edges=corridor.energy_edges,
        flight=lambda energy, speed: corridor.flight(corridor.altitude_at(energy, speed), speed),
        kinks=lambda energy: corridor.airspeed_at(energy[:, None], kinks),
    )


def altitude_lines(corridor: Corridor) -> Lines:
    """Lines of constant pressure altitude [m]."""
    return Lines(
        edges=corridor.altitude_edges,
        flight=corridor.flight,
        kinks=lambda altitude: np.full((altitude.size, len(ATMOSPHERE_KINKS)), np.nan),
    )
