"""March by energy height: a climb along a path of altitude and speed over energy height.

``dE/dt = (T - D) V / W``, energy height ``E`` geometric; the path says how height and speed share
it, ``dh/dE = 1 - (V/g) dV/dE``, which is also what sets the path angle. Source: E. S. Rutowski, J.
Aeronaut. Sci. 21(3), 1954 (from memory); lift is weight times the cosine of the path angle here.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from engine.atmosphere import FlightCondition
from engine.quantities import STANDARD_GRAVITY
from mission.march.level import airframe_drag
from mission.march.nodes import differentiation_matrix, positions
from mission.march.span import Nodes, Propulsion, Span
from mission.march.world import World

Array = NDArray[np.float64]
_STEEPEST_SINE = 0.9  # what an iterate may visit; the flight's limit is below it


def energy_flight(span: Span, count: int) -> FlightCondition:
    """Flight condition at the nodes of a march by energy height, shape (count, 1)."""
    assert span.path is not None
    rise = span.end_energy - span.start_energy
    altitude, mach = span.path.at(span.start_energy + positions(count)[:, None] * rise)
    return span.air.condition(altitude, mach)


def energy_nodes(
    span: Span,
    world: World,
    flight: FlightCondition,
    mass: Array,
    propulsion: Propulsion,
    dead_drag: Array,
    sine: Array,
) -> tuple[Nodes, Array]:
    """Nodes at the sine of the path angle of the last sweep, and the next one."""
    weight = mass * STANDARD_GRAVITY
    lift = weight * np.sqrt(1.0 - sine**2)
    resistance = dead_drag + airframe_drag(span, world, flight, lift)
    speed = flight.true_airspeed
    excess = (propulsion.thrust - resistance) * speed / weight
    rise = span.end_energy - span.start_energy
    speed_slope = differentiation_matrix(len(mass)) @ speed / rise
    height_share = 1.0 - speed / STANDARD_GRAVITY * speed_slope
    next_sine = np.clip(height_share * excess / speed, -_STEEPEST_SINE, _STEEPEST_SINE)
    nodes = Nodes(
        flight=flight,
        mass=mass,
        time_rate=rise / np.maximum(excess, span.least_rate),
        propulsion=propulsion,
        drag=resistance,
        lift=lift,
        path_angle=np.arcsin(sine),
        rate=excess,
    )
    return nodes, next_sine
