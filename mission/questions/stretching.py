"""What a flight comes to that is nearly solved, without flying it once more.

A little fuel left goes to what stretches. And flights that share a plan end a cruise-climb at
altitudes of their own, while the descent that follows is laid from one altitude for all of them:
what each would fly of it more or less from its own end is added here, by the rates at its top. For
250 m, the most there is, that is right to some decimetres of distance.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from mission.free import fuel_per_free, stretches
from mission.march.nodes import positions
from mission.march.sweep import Marched
from mission.march.tracks import Track
from mission.plan import FlightPlan

Array = NDArray[np.float64]


@dataclass(frozen=True)
class Shift:
    """What is to be added to flights, arrays (members,).

    ``free`` is of what they are solved for, ``ground`` of all ground distance [m], ``time`` [s].
    """

    free: Array
    ground: Array
    time: Array


@dataclass(frozen=True)
class _Slice:
    """The piece of a descent that is flown besides: of which leg, distance [m], time [s], fuel."""

    leg: int
    ground: Array
    time: Array
    fuel: Array


def shift_of(plan: FlightPlan, marched: Marched, left: Array) -> Shift:
    """What flights come to once each has burnt the fuel ``left`` to it [kg] (members,), and
    descends from where its own cruise-climb ends.

    The fuel of the descent's piece is taken from, and its distance given to, the cruises that
    stretch.
    """
    none = np.zeros_like(marched.stop_mass)
    saved, ground, time = left, none, none
    for piece in _slices(plan, marched):
        rest = _rest_of(marched, piece.leg)
        saved, time = saved - piece.fuel, time + piece.time
        if rest is None:
            ground = ground + piece.ground
        else:
            speed, fuel = _pace(rest)
            saved = saved + fuel * piece.ground
            time = time - piece.ground / speed
    free = saved / fuel_per_free(plan, marched, -1)
    for track in marched.tracks:
        if track.nodes is None or not stretches(plan, track.span):
            continue
        if track.span.march == "time":
            time = time + free
        else:
            ground, time = ground + free, time + free / _pace(track)[0]
    return Shift(free, ground, time)


def _rest_of(marched: Marched, leg: int) -> Track | None:
    """The cruise that takes the rest of a leg, if it has one."""
    own = (track for track in marched.tracks if track.span.leg == leg)
    return next((track for track in own if track.span.takes_rest), None)


def _pace(cruise: Track) -> tuple[Array, Array]:
    """Ground speed [m/s] and fuel per ground distance [kg/m] at the end of a cruise."""
    assert cruise.nodes is not None
    speed = cruise.nodes.rate[-1]
    return speed, cruise.nodes.propulsion.fuel_flow[-1] / speed


def _slices(plan: FlightPlan, marched: Marched) -> Iterator[_Slice]:
    """One for each cruise-climb of the mission that a climb or a descent follows."""
    tracks = marched.tracks[: len(plan.parts.mission)]
    for place, track in enumerate(tracks):
        if not track.span.holds_lift_coefficient or track.nodes is None:
            continue
        after = next((t for t in tracks[place + 1 :] if t.is_sloped), None)
        if after is not None:
            altitude = track.nodes.flight.pressure_altitude
            rise = (altitude[-1] - altitude[-2]) / (track.mass[-1] - track.mass[-2])
            yield _slice(altitude[-1], rise * stretches(plan, track.span), after)


def _slice(end: Array, rise: Array, after: Track) -> _Slice:
    """Of the way from pressure altitudes [m] (members,) to where a march by altitude begins.

    The fuel of it a cruise that stretches does not burn: its end moves with mass by ``rise``
    [m/kg].
    """
    span, nodes = after.span, after.nodes
    assert nodes is not None
    height = span.start_altitude - span.end_altitude
    share = (end - span.start_altitude) / height  # of the march, more than is flown
    share = share / (1.0 - rise / height * nodes.propulsion.fuel_flow[0] * nodes.time_rate[0])

    def besides(per_march: Array) -> Array:
        first, second = per_march[0], per_march[1]
        slope = (second - first) / positions(len(per_march))[1]
        more: Array = share * (first - 0.5 * share * slope)
        return more

    flight = nodes.flight
    speed = flight.true_airspeed * np.cos(nodes.path_angle)
    speed = (speed + span.air.tailwind_at(flight.pressure_altitude)) * span.gains_distance
    return _Slice(
        leg=span.leg,
        ground=besides(speed * nodes.time_rate),
        time=besides(nodes.time_rate),
        fuel=besides(nodes.propulsion.fuel_flow * nodes.time_rate),
    )
