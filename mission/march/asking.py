"""One engine call for many spans: requests are joined, answered together, and split again."""

from __future__ import annotations

from dataclasses import dataclass, fields

import numpy as np
from numpy.typing import NDArray

from engine.atmosphere import FlightCondition
from engine.interface import Engine, EngineState

Array = NDArray[np.float64]


@dataclass(frozen=True)
class Request:
    """What a span asks of one engine: a rating, or a net thrust [N] below a rating's ceiling.

    ``start`` holds the engine's unknowns of an answer near by, shape (n, ...), if there is one.
    """

    flight: FlightCondition
    rating: str
    net_thrust: Array | None = None
    start: Array | None = None


@dataclass(frozen=True)
class Answer:
    """Net thrust [N], fuel flow [kg/s] and outcome of one engine, in the request's shape.

    ``held_by`` names the limit that holds the thrust, empty where a thrust was asked for.
    ``unknowns`` (n, ...) are the engine's own, where the next call may start.
    """

    net_thrust: Array
    fuel_flow: Array
    outcome: NDArray[np.int64]
    held_by: NDArray[np.str_]
    unknowns: Array


def ask(engine: Engine, requests: dict[int, Request]) -> dict[int, Answer]:
    """Answers by the keys of the requests."""
    if not requests:
        return {}
    members = list(requests.values())
    flight = join([request.flight for request in members])
    sizes = [request.flight.mach.size for request in members]
    thrust = np.concatenate(
        [
            np.full(size, np.nan) if request.net_thrust is None else np.ravel(request.net_thrust)
            for request, size in zip(members, sizes, strict=True)
        ]
    )
    ratings = np.repeat([request.rating for request in members], sizes)
    state = engine.at(flight, rating=ratings, net_thrust=thrust, start=_start(members))
    held_by = np.where(np.isnan(thrust), state.binding_limit_names, "")
    shapes = [request.flight.shape for request in members]
    return _split(state, held_by, list(requests), shapes)


def _start(members: list[Request]) -> Array | None:
    """Starting points side by side, NaN for a request without one."""
    known = [len(request.start) for request in members if request.start is not None]
    if not known:
        return None
    parts = []
    for request in members:
        shape = (known[0], *request.flight.shape)
        start = np.nan if request.start is None else request.start
        parts.append(np.broadcast_to(start, shape).reshape(known[0], request.flight.mach.size))
    return np.concatenate(parts, axis=1)


def join(flights: list[FlightCondition]) -> FlightCondition:
    """Flight conditions one after another, as one dimension."""
    return FlightCondition(
        *(
            np.concatenate([np.ravel(getattr(flight, field.name)) for flight in flights])
            for field in fields(FlightCondition)
        )
    )


def _split(
    state: EngineState,
    held_by: NDArray[np.str_],
    keys: list[int],
    shapes: list[tuple[int, ...]],
) -> dict[int, Answer]:
    ends = np.cumsum([int(np.prod(shape)) for shape in shapes])[:-1]
    parts = zip(
        keys,
        shapes,
        np.split(state.net_thrust, ends),
        np.split(state.fuel_flow, ends),
        np.split(state.outcome, ends),
        np.split(held_by, ends),
        np.split(state.unknowns, ends, axis=1),
        strict=True,
    )
    return {
        key: Answer(
            thrust.reshape(shape),
            fuel.reshape(shape),
            outcome.reshape(shape),
            held.reshape(shape),
            unknowns.reshape(-1, *shape) if unknowns.size else np.empty((0, *shape)),
        )
        for key, shape, thrust, fuel, outcome, held, unknowns in parts
    }
