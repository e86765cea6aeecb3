"""What every segment of a mission file may say."""

from __future__ import annotations

from typing import Annotated, Literal

from pydantic import BeforeValidator

from engine.atmosphere import HIGHEST_PRESSURE_ALTITUDE, LOWEST_PRESSURE_ALTITUDE
from engine.quantities import parse_quantity
from engine.reading import Table

RatingName = Literal["take_off", "maximum_continuous", "climb", "cruise", "maximum_afterburning"]


class Segment(Table):
    """A segment by name; ``starts_leg`` names the leg that begins with it."""

    name: str
    starts_leg: str = ""


def _level(text: object) -> object:
    if text == "best":
        return text
    altitude = parse_quantity(text, "altitude")
    if not LOWEST_PRESSURE_ALTITUDE <= altitude <= HIGHEST_PRESSURE_ALTITUDE:
        raise ValueError(
            f"'{text}' is outside {LOWEST_PRESSURE_ALTITUDE:g} to {HIGHEST_PRESSURE_ALTITUDE:g} m; "
            'write for example "FL350", or "best" for the best cruise level'
        )
    return altitude


Level = Annotated[float | Literal["best"], BeforeValidator(_level)]
