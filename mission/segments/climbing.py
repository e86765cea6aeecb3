"""How fast the aircraft climbs or sinks along a schedule, asked before anything is flown."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from engine.atmosphere import FlightCondition
from engine.quantities import FOOT
from mission.errors import CannotBeFlown
from mission.forces import path_angle_sine
from mission.march.asking import join
from mission.march.span import Span
from mission.march.throttled import acceleration_factor, on_schedule
from mission.march.world import World
from mission.segments.here import Here
from mission.segments.schedule import lay_schedule

if TYPE_CHECKING:
    from mission.segments.climb import Climb

Array = NDArray[np.float64]
_POINTS, _ROUNDS = 17, 4  # 13 km then end at 0.2 m, and the rest on a straight line
_SAME_MASS = 1e-7  # relative: nearer, the end is not looked for again
_TIMES = (16.0, 8.0, 4.0, 2.0)  # the last rate: where another span begins


def rates_of_climb(world: World, spans: Sequence[Span], altitudes: Array, mass: float) -> Array:
    """Geometric rate of climb [m/s] at pressure altitudes [m] along spans at one rating.

    Each altitude is flown on the schedule of the span that holds it; descending rates are
    negative. One engine call.
    """
    flights, factors = [], []
    owners = _owners(spans, altitudes)
    for i in np.unique(owners):
        span = spans[i]
        flight = on_schedule(span, world, span.air.condition(altitudes[owners == i]))
        flights.append(flight)
        factors.append(acceleration_factor(span, flight))
    flight, span = join(flights), spans[0]
    state = world.engine.at(flight, rating=span.rating)
    thrust = world.running(span) * state.net_thrust - _dead_drag(world, span, flight)
    configured = span.configuration
    sine = path_angle_sine(
        world.aircraft, flight, np.array(mass), thrust, np.concatenate(factors),
        drag_factor=configured.drag_factor, drag_area=configured.drag_area,
    )  # fmt: skip
    found = np.empty_like(altitudes)
    order = np.argsort(owners, kind="stable")
    found[order] = flight.true_airspeed * sine
    return found


def _owners(spans: Sequence[Span], altitudes: Array) -> NDArray[np.int64]:
    """Index of the span that holds each altitude; the upper one at a joint."""
    floors = np.array([min(span.start_altitude, span.end_altitude) for span in spans])
    rising = np.argsort(floors)
    place = np.searchsorted(floors[rising], altitudes, side="right") - 1
    return rising[np.maximum(place, 0)]


def _dead_drag(world: World, span: Span, flight: FlightCondition) -> Array:
    count = span.configuration.engines_out
    if count == 0 or not world.engine.is_known_unlit:
        return np.zeros(1)
    return -count * world.engine.windmilling(flight).net_thrust


@dataclass(frozen=True)
class SlowEnd:
    """Pressure altitude [m] where a climb or descent has slowed down, and where to cut before it.

    Time is the integral of one over a rate that fades: over pieces in each of which it falls by a
    few times few nodes are enough.
    """

    pressure_altitude: float
    cuts: tuple[float, ...] = ()


def slow_end(
    world: World, spans: Sequence[Span], start: float, last: float, mass: float, rate: float
) -> SlowEnd | None:
    """Where a climb, or a descent, from ``start`` to ``last`` [m] has slowed down to ``rate``.

    The first place where the rate [m/s], positive the way it goes, passes below; ``last`` where it
    never does; None where it is below at ``start`` already.
    """
    way = np.sign(last - start)
    cuts: tuple[float, ...] | None = None
    near, far = start, last
    for _ in range(_ROUNDS):
        altitudes = np.linspace(near, far, _POINTS)
        excess = way * rates_of_climb(world, spans, altitudes, mass) - rate
        is_below = excess < 0.0
        if is_below[0]:
            return None
        after = int(np.argmax(is_below)) if np.any(is_below) else _POINTS - 1
        if cuts is None:
            cuts = _cuts(altitudes[: after + 1], excess[: after + 1] + rate, rate)
        if not np.any(is_below):
            return SlowEnd(last, cuts)
        near, far = float(altitudes[after - 1]), float(altitudes[after])
    share = float(excess[after - 1] / (excess[after - 1] - excess[after]))
    return SlowEnd(near + share * (far - near), cuts or ())


def _cuts(altitudes: Array, rates: Array, least: float) -> tuple[float, ...]:
    """Altitudes [m] from which a fading rate never again is so many times its last, or more.

    Its last is that at the last altitude, or the ``least`` that it fades to before.
    """
    found = []
    for times in _TIMES:
        excess = rates - times * max(float(rates[-1]), least)
        fast = np.flatnonzero(excess >= 0.0)
        if fast.size:
            at = int(fast[-1])
            share = excess[at] / (excess[at] - excess[at + 1])
            found.append(float(altitudes[at] + share * (altitudes[at + 1] - altitudes[at])))
    return tuple(found)


def slow_climb(segment: Climb, here: Here, start: float, highest: float) -> SlowEnd:
    """Where no more than the rate of climb asked for is left, at most at ``highest`` [m]."""
    floor = segment.until_rate_of_climb
    assert floor is not None
    spans, _ = lay_schedule(here, start, highest, segment.rules(), segment.rating)
    whole = [span for span in spans if span.march == "altitude"]

    def choose(mass: float) -> SlowEnd | None:
        return slow_end(here.world, whole, start, highest, mass, floor)

    end = here.choices.at(
        here.row, "end of climb", here.mass_at(here.row, -1), choose, end=-1, matters=_SAME_MASS
    )
    if end is None and here.row in here.masses:
        raise CannotBeFlown(
            f"the rate of climb is below until_rate_of_climb = {floor:.2f} m/s at "
            f"{start / FOOT:,.0f} ft already, where the climb begins; carry less"
        )
    return SlowEnd(highest) if end is None else end
