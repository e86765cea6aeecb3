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
    """What a span asks of one engine: a rating, or a net thrust [N] below a rating's ceiling."""

    flight: FlightCondition
    rating: str
    net_thrust: Array | None = None


@dataclass(frozen=True)
class Answer:
    """Net thrust [N], fuel flow [kg/s] and outcome of one engine, in the request's shape."""

    net_thrust: Array
    fuel_flow: Array
    outcome: NDArray[np.int64]


def ask(
    engine: Engine, requests: dict[int, Request], starts: dict[str, EngineState]
) -> dict[int, Answer]:
    """Answers by the keys of the requests; ``starts`` keeps the last state of each joint call."""
    answers: dict[int, Answer] = {}
    groups: dict[str, list[int]] = {}
    for key, request in requests.items():
        kind = "thrust below " if request.net_thrust is not None else ""
        groups.setdefault(kind + request.rating, []).append(key)
    for name, keys in groups.items():
        members = [requests[key] for key in keys]
        flight = join([request.flight for request in members])
        start = starts.get(name)
        if start is not None and start.net_thrust.shape != flight.shape:
            start = None
        if members[0].net_thrust is None:
            state = engine.at_rating(flight, members[0].rating, start=start)
        else:
            thrust = np.concatenate([np.ravel(request.net_thrust) for request in members])
            state = engine.at_thrust(flight, thrust, rating=members[0].rating, start=start)
        starts[name] = state
        answers |= _split(state, keys, [request.flight.shape for request in members])
    return answers


def join(flights: list[FlightCondition]) -> FlightCondition:
    """Flight conditions one after another, as one dimension."""
    return FlightCondition(
        *(
            np.concatenate([np.ravel(getattr(flight, field.name)) for flight in flights])
            for field in fields(FlightCondition)
        )
    )


def _split(
    state: EngineState, keys: list[int], shapes: list[tuple[int, ...]]
) -> dict[int, Answer]:
    ends = np.cumsum([int(np.prod(shape)) for shape in shapes])[:-1]
    parts = zip(
        keys,
        shapes,
        np.split(state.net_thrust, ends),
        np.split(state.fuel_flow, ends),
        np.split(state.outcome, ends),
        strict=True,
    )
    return {
        key: Answer(thrust.reshape(shape), fuel.reshape(shape), outcome.reshape(shape))
        for key, shape, thrust, fuel, outcome in parts
    }
