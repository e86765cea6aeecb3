"""Drag that goes with the throttle: air turned away at the inlet, and the afterbody's slope."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from engine.atmosphere import FlightCondition
from engine.errors import OutOfRange

Array = NDArray[np.float64]
_HEAT_CAPACITY_RATIO = 1.4  # of the standard atmosphere's speed of sound

# Subsonic drag over dynamic pressure and projected area of the slope; common practice, no source.
AFTERBODY_COEFFICIENT = 0.05


@dataclass(frozen=True)
class Spillage:
    """What the inlet does with the air in its way; arrays of one shape.

    Attributes
    ----------
    drag : [N]; zero up to Mach 1 and where no air is spilled
    spilled_flow : [kg/s] of the capture area's air that the engine does not take, above Mach 1
    air_shortage : [kg/s] that the engine takes beyond what its capture area can pass above
        Mach 1: no such state exists, and a state with a shortage above zero must be told
    """

    drag: Array
    spilled_flow: Array
    air_shortage: Array


@dataclass(frozen=True)
class AfterbodyDrag:
    """Drag of the slope from the greatest section down to the nozzle; arrays of one shape.

    Attributes
    ----------
    drag : [N]; zero where there is no slope
    excess_exit_area : [m2] by which the nozzle's exit is larger than the section it ends: the
        nozzle does not fit its afterbody there, and a value above zero must be told
    """

    drag: Array
    excess_exit_area: Array


@dataclass(frozen=True)
class Installation:
    """What surrounds an engine; each drag is charged where its area is known.

    Attributes
    ----------
    capture_area : [m2] of the inlet, for spillage above Mach 1
    afterbody_area : [m2] greatest cross-section of the body that the nozzle ends
    afterbody_coefficient : drag over dynamic pressure and that area less the nozzle's exit
    """

    capture_area: float | None = None
    afterbody_area: float | None = None
    afterbody_coefficient: float = 0.0

    def scaled(self, factor: float) -> Installation:
        """The same around an engine of ``factor`` times the areas."""
        return Installation(
            None if self.capture_area is None else self.capture_area * factor,
            None if self.afterbody_area is None else self.afterbody_area * factor,
            self.afterbody_coefficient,
        )


def capture_area(flight: FlightCondition, air_flow: ArrayLike) -> Array:
    """Area [m2] of free stream that holds an air flow [kg/s]; the least one for an inlet there.

    Raises
    ------
    OutOfRange
        at rest, where no area is large enough.
    """
    if np.any(flight.mach <= 0.0):
        raise OutOfRange(
            "a capture area at Mach 0 would be infinite; size the inlet at the greatest Mach "
            "number flown"
        )
    return np.asarray(air_flow, dtype=np.float64) / (flight.density * flight.true_airspeed)


def spillage_drag(
    flight: FlightCondition, air_flow: ArrayLike, capture_area: ArrayLike
) -> Spillage:
    """Spillage drag of one engine.

    Parameters
    ----------
    flight : of any shape
    air_flow : [kg/s] that the engine takes, broadcast against it
    capture_area : [m2] of the inlet's lip, or of its streamtube at full flow

    Notes
    -----
    Source: Mattingly, Heiser and Pratt, Aircraft Engine Design, 2nd ed., section 6.2 (from
    memory): over the engine's thrust F the drag is ``(A1/A0 - 1) (M0 - (2/(g+1) + (g-1)/(g+1)
    M0^2)^0.5) / (F/(m0 a0))`` with A1 the capture area, A0 the streamtube taken. The root is
    a*/a0, the speed at which air of this total temperature is sonic, so that this is a balance of
    momentum on the spilled air, ``drag = spilled flow * (V0 - a*)``: it comes off the lip sonic
    and straight back, pressure forces on it left out.

    The whole one-dimensional additive drag, a normal shock ahead and slow diffusion to the lip,
    has the speed behind the shock, a*^2/V0, in place of a*: for little spillage 1 + a*/V0 times
    as much, 2 times at Mach 1, 1.6 at Mach 2. The difference may be read as suction on the lip.
    A supersonic inlet with oblique shocks spills at less cost than either. Up to Mach 1 lip
    suction is taken to cancel additive drag altogether.
    """
    flow, area, mach, density, speed, sound = np.broadcast_arrays(
        np.asarray(air_flow, dtype=np.float64),
        np.asarray(capture_area, dtype=np.float64),
        flight.mach,
        flight.density,
        flight.true_airspeed,
        flight.speed_of_sound,
    )
    g = _HEAT_CAPACITY_RATIO
    is_supersonic = mach > 1.0
    surplus = np.where(is_supersonic, density * speed * area - flow, 0.0)
    sonic_speed = sound * np.sqrt(2.0 / (g + 1.0) + (g - 1.0) / (g + 1.0) * mach**2)
    spilled = np.maximum(surplus, 0.0)
    return Spillage(
        drag=np.where(is_supersonic, spilled * (speed - sonic_speed), 0.0),
        spilled_flow=spilled,
        air_shortage=np.maximum(-surplus, 0.0),
    )


def afterbody_drag(
    dynamic_pressure: ArrayLike,
    afterbody_area: ArrayLike,
    nozzle_exit_area: ArrayLike,
    coefficient: float = AFTERBODY_COEFFICIENT,
) -> AfterbodyDrag:
    """Pressure drag of an afterbody: coefficient * dynamic pressure * (its area - nozzle exit's).

    Parameters
    ----------
    dynamic_pressure : [Pa]
    afterbody_area : [m2], greatest cross-section
    nozzle_exit_area : [m2], of all the engine's nozzles that end it
    coefficient : on the projected area of the slope, subsonic

    Notes
    -----
    The rise near Mach 1 is not in the coefficient. The equivalent skin friction of a podded
    nacelle has the pressure drag of its slope inside it already: for a pod charged by that, only
    what differs from the reference nozzle setting belongs here, and 0 is the honest coefficient
    for a fixed nozzle.
    """
    pressure, slope = np.broadcast_arrays(
        np.asarray(dynamic_pressure, dtype=np.float64),
        np.asarray(afterbody_area, dtype=np.float64)
        - np.asarray(nozzle_exit_area, dtype=np.float64),
    )
    return AfterbodyDrag(
        drag=coefficient * pressure * np.maximum(slope, 0.0),
        excess_exit_area=np.maximum(-slope, 0.0),
    )
