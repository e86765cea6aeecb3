"""How fast the aircraft climbs or sinks along a schedule, asked before anything is flown."""

from __future__ import annotations

from collections.abc import Sequence
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


def altitude_of_rate(
    world: World, spans: Sequence[Span], ends: tuple[float, float], mass: float, rate: float
) -> float | None:
    """Pressure altitude [m] where a flight along the spans has slowed to a rate of climb [m/s].

    From the first of ``ends`` [m] to the last: upwards the first place where the rate passes below
    ``rate``; downwards, a negative one, the first where the sink has slowed to it. The last end
    where it never does; None where it has at the first already on the way up, or never on the way
    down.
    """
    first, last = ends
    is_climb = last > first
    for _ in range(_ROUNDS):
        altitudes = np.linspace(first, last, _POINTS)
        excess = rates_of_climb(world, spans, altitudes, mass) - rate
        is_there = excess < 0.0 if is_climb else excess >= 0.0
        if is_there[0]:
            return None if is_climb else first
        if not np.any(is_there):
            return last if is_climb else None
        after = int(np.argmax(is_there))
        first, last = float(altitudes[after - 1]), float(altitudes[after])
    share = float(excess[after - 1] / (excess[after - 1] - excess[after]))
    return first + share * (last - first)


def rate_of_climb_ceiling(segment: Climb, here: Here, start: float, highest: float) -> float:
    """Pressure altitude [m] where no more than the rate asked for is left, at most ``highest``."""
    floor = segment.until_rate_of_climb
    assert floor is not None
    spans, _ = lay_schedule(here, start, highest, segment.rules(), segment.rating)
    whole = [span for span in spans if span.march == "altitude"]

    def choose(mass: float) -> float | None:
        return altitude_of_rate(here.world, whole, (start, highest), mass, floor)

    end = here.choices.at(
        here.row, "end of climb", here.mass_at(here.row, -1), choose, end=-1, matters=_SAME_MASS
    )
    if end is None and here.row in here.masses:
        raise CannotBeFlown(
            f"the rate of climb is below until_rate_of_climb = {floor:.2f} m/s at "
            f"{start / FOOT:,.0f} ft already, where the climb begins; carry less"
        )
    return highest if end is None else end
