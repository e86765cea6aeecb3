"""The rows of a log that were flown: all of them, or those up to the step that failed."""

from __future__ import annotations

from dataclasses import fields, replace

import numpy as np
from numpy.typing import NDArray

from mission.results import Failure, Flight, SegmentLog, Steps

Array = NDArray[np.float64]


def fails_on_the_way(flight: Flight) -> bool:
    """Whether a flight ends before its log does.

    A mass or a fuel that fails where the mission begins or stops leaves the whole log to show.
    """
    failure = flight.failure
    if failure is None:
        return False
    mission = [log.name for log in flight.segments if log.purpose == "mission"]
    return failure.unit != "kg" or failure.segment not in (mission[0], mission[-1])


def flown_segments(flight: Flight) -> tuple[SegmentLog, ...]:
    """The segments of a flight, the one that failed cut off at the step where it did."""
    if not fails_on_the_way(flight) or flight.failure is None:
        return flight.segments
    names = [log.name for log in flight.segments]
    at = failing_row(flight.failure, names)
    return (*flight.segments[:at], _cut(flight.segments[at], flight.failure.step))


def failing_row(failure: Failure, names: list[str]) -> int:
    """Index of the row that a failure names."""
    return names.index(failure.segment)


def _cut(log: SegmentLog, step: int) -> SegmentLog:
    """A row up to and including one of its steps."""
    last = len(log.steps.mass) - 1
    if step >= last or log.time == 0.0:  # what is booked has no way to be cut
        return log
    pieces = {f.name: getattr(log.steps, f.name)[: step + 1] for f in fields(Steps)}
    steps = Steps(**pieces)
    flown = _share_of_distance(log.steps, step)
    mass, received = float(steps.mass[-1]), log.mass_received * _share_of_time(log.steps, step)
    return replace(
        log,
        fuel=log.mass_start - mass + received,
        mass_received=received,
        time=float(steps.elapsed_time[-1] - steps.elapsed_time[0]),
        ground_distance=flown * log.ground_distance,
        air_distance=flown * log.air_distance,
        mass_end=mass,
        fuel_left=log.fuel_left + mass - log.mass_end,
        steps=steps,
    )


def _share_of_time(steps: Steps, step: int) -> float:
    """Share of a row's time behind one of its steps."""
    elapsed = steps.elapsed_time - steps.elapsed_time[0]
    return float(elapsed[step] / elapsed[-1]) if elapsed[-1] > 0.0 else 0.0


def _share_of_distance(steps: Steps, step: int) -> float:
    """Share of a row's distance behind one of its steps, by the trapezium rule."""
    speed = steps.true_airspeed * np.cos(steps.flight_path_angle)
    pieces = 0.5 * (speed[1:] + speed[:-1]) * np.diff(steps.elapsed_time)
    whole = float(pieces.sum())
    return float(pieces[:step].sum()) / whole if whole > 0.0 else 0.0
