"""Time and fuel of a climb by energy height: plain sums, all points of it in one engine call.

For tests alone; the flight integrates its own climbs. Lift is weight, as the paths have it.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from mission.forces import drag
from mission.paths.climber import Climber
from mission.paths.path import EnergyPath

Array = NDArray[np.float64]
GRAVITY = 9.80665
_NODES, _WEIGHTS = np.polynomial.legendre.leggauss(4)
_SWEEPS = 12  # mass moves by a share of fuel over mass each, so that these are plenty


def cells(ends: Array) -> tuple[Array, Array]:
    """Gauss points between neighbouring values, in order, and the step that each stands for."""
    step = np.diff(ends)[:, None]
    return (ends[:-1, None] + 0.5 * (_NODES + 1.0) * step).ravel(), (0.5 * _WEIGHTS * step).ravel()


def summed(
    climber: Climber, altitude: Array, mach: Array, step: Array, *, burns: bool
) -> tuple[float, float]:
    """Time [s] and fuel [kg] over steps of energy height [m], at one mass or with fuel burning."""
    flight = climber.air(altitude, mach)
    state = climber.engine.at_rating(flight, climber.rating)
    thrust = climber.engine_count * state.net_thrust
    flow = climber.engine_count * climber.aircraft.fuel_flow_factor * state.fuel_flow
    mass = np.full(step.size, climber.mass)
    for _ in range(_SWEEPS):
        weight = GRAVITY * mass
        resistance = drag(climber.aircraft, flight, weight, drag_area=climber.extra_drag_area)
        time = step * weight / ((thrust - resistance) * flight.true_airspeed)
        if burns:
            burnt = time * flow
            mass = climber.mass - np.cumsum(burnt) + 0.5 * burnt
    return float(time.sum()), float((time * flow).sum())


def of_path(climber: Climber, path: EnergyPath, *, burns: bool = False) -> tuple[float, float]:
    """Time [s] and fuel [kg] of a path's pieces, in cells between their points."""
    parts = []
    for piece in path.pieces:
        energy, step = cells(piece.energy_height)
        parts.append((*piece.at(energy), step))
    altitude, mach, step = (np.concatenate(part) for part in zip(*parts, strict=True))
    return summed(climber, altitude, mach, step, burns=burns)
