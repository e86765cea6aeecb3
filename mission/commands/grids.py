"""The grid that an envelope is asked for on: as listed, or as far as the engine goes."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from engine.atmosphere import FlightCondition, flight_condition
from engine.envelope import ALTITUDE_STEP, HIGHEST_ALTITUDE, HIGHEST_MACH, MACH_STEP, grid
from engine.errors import InputRefused, OutOfRange
from engine.interface import Engine
from engine.quantities import day_text, parse_day, parse_quantity
from mission.commands.shared import read
from mission.outputs.envelope_screen import screen_altitudes, screen_machs

Array = NDArray[np.float64]


@dataclass(frozen=True)
class Reach:
    """Day [K off standard], and pressure altitudes [m] and Mach numbers of screen and table."""

    day: float
    screen: tuple[Array, Array]
    table: tuple[Array, Array]

    @classmethod
    def of(
        cls,
        engine: Engine,
        day: str | None,
        to_altitude: str | None,
        to_mach: float | None,
        altitudes: str | None,
        machs: str | None,
    ) -> Reach:
        """From the options as they are written; a table is asked from where it begins."""
        low, high, slow, fast = 0.0, HIGHEST_ALTITUDE, 0.0, HIGHEST_MACH
        if engine.coverage is not None:
            (low, high), (slow, fast) = engine.coverage.pressure_altitude, engine.coverage.mach
        if to_altitude is not None:
            high = read("--to-altitude", parse_quantity, to_altitude, "altitude")
        fast = fast if to_mach is None else to_mach
        _refuse_backwards("--to-altitude", low, high, "m")
        _refuse_backwards("--to-mach", slow, fast, "")
        heights, speeds = _heights(altitudes), _speeds(machs)
        chosen_day = day_of(engine, day)
        # Refused by the values written, not by a grid's.
        condition_at(high, fast, chosen_day, altitude="--to-altitude", speed="--to-mach")
        condition_at(
            0.0 if heights is None else heights[:, None],
            0.0 if speeds is None else speeds,
            chosen_day,
            altitude="--altitudes",
            speed="--machs",
        )
        return cls(
            day=chosen_day,
            screen=(
                screen_altitudes(low, high) if heights is None else heights,
                screen_machs(slow, fast) if speeds is None else speeds,
            ),
            table=(
                grid(low, high, ALTITUDE_STEP) if heights is None else heights,
                grid(slow, fast, MACH_STEP) if speeds is None else speeds,
            ),
        )


def condition_at(
    height: ArrayLike,
    mach: ArrayLike,
    day: float,
    *,
    altitude: str = "--altitude",
    speed: str = "--mach",
) -> FlightCondition:
    """A flight condition from the options so named; a refusal names the one that is wrong."""
    checks: dict[str, tuple[ArrayLike, ArrayLike, float]] = {
        altitude: (height, 0.0, 0.0),
        speed: (0.0, mach, 0.0),
        "--day": (0.0, 0.0, day),
    }
    for option, there in checks.items():
        try:
            flight_condition(*there)
        except OutOfRange as refusal:
            raise InputRefused(str(refusal), key=option) from None
    return flight_condition(height, mach, day)


def day_of(engine: Engine, day: str | None) -> float:
    """The day asked for, or a table's own, or ISA; another than a table's is refused."""
    own = 0.0 if engine.coverage is None else engine.coverage.temperature_deviation
    chosen = own if day is None else read("--day", parse_day, day)
    _refuse_other_day(engine, chosen)
    return chosen


def _refuse_other_day(engine: Engine, day: float) -> None:
    table = engine.coverage
    if table is not None and not table.is_day(day):
        raise InputRefused(
            f'= "{day_text(day)}", and the table of {engine.name} is of '
            f"{day_text(table.temperature_deviation)} alone",
            key="--day",
        )


def _refuse_backwards(option: str, low: float, high: float, unit: str) -> None:
    if not high > low:
        said = f"{high:g} {unit}".strip()
        raise InputRefused(f"= {said} is not above {low:g}, where the grid begins", key=option)


def _heights(listed: str | None) -> Array | None:
    if listed is None:
        return None
    parts = listed.split(",")
    return np.unique([read("--altitudes", parse_quantity, part, "altitude") for part in parts])


def _speeds(listed: str | None) -> Array | None:
    if listed is None:
        return None
    try:
        return np.unique([float(part) for part in listed.split(",")])
    except ValueError:
        raise InputRefused(
            f'"{listed}" is no list of Mach numbers; write "0, 0.4, 0.8", say', key="--machs"
        ) from None
