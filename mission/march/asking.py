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
    engine: Engine, requests: dict[int, Request], memory: dict[int, Array]
) -> dict[int, Answer]:
    """Answers by the keys of the requests.

    ``memory`` keeps the engine's unknowns of each key's last answer as the next starting point.
    """
    if not requests:
        return {}
    keys, members = list(requests), list(requests.values())
    flight = join([request.flight for request in members])
    sizes = [int(np.prod(request.flight.shape)) for request in members]
    thrust = np.concatenate(
        [
            np.full(size, np.nan) if request.net_thrust is None else np.ravel(request.net_thrust)
            for request, size in zip(members, sizes, strict=True)
        ]
    )
    ratings = np.repeat([request.rating for request in members], sizes)
    start = _start(memory, keys, sizes)
    state = engine.at(flight, rating=ratings, net_thrust=thrust, start=start)
    ends = np.cumsum(sizes)[:-1]
    memory.update(zip(keys, np.split(state.unknowns, ends, axis=1), strict=True))
    return _split(state, keys, [request.flight.shape for request in members])


def _start(memory: dict[int, Array], keys: list[int], sizes: list[int]) -> Array | None:
    """Remembered unknowns of the keys side by side, NaN for a key without."""
    if not memory:
        return None
    count = len(next(iter(memory.values())))
    parts = [
        memory[key]
        if key in memory and memory[key].shape[1] == size
        else np.full((count, size), np.nan)
        for key, size in zip(keys, sizes, strict=True)
    ]
    return np.concatenate(parts, axis=1)


def join(flights: list[FlightCondition]) -> FlightCondition:
    """Flight conditions one after another, as one dimension."""
    return FlightCondition(
        *(
            np.concatenate([np.ravel(getattr(flight, field.name)) for flight in flights])
            for field in fields(FlightCondition)
        )
    )


def _split(state: EngineState, keys: list[int], shapes: list[tuple[int, ...]]) -> dict[int, Answer]:
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
