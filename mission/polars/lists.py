"""Lists of numbers in a file that belong together: what is refused about them, in plain words."""

from __future__ import annotations

from collections.abc import Sequence
from itertools import pairwise
from typing import Annotated

from pydantic import BeforeValidator, Field

Mach = Annotated[float, Field(ge=0.0, le=5.0)]


def _as_list(written: object) -> object:
    if not isinstance(written, list):
        raise ValueError(f"= {written!r}; a list belongs here, [0.1, 0.2] say")
    return written


IsList = BeforeValidator(_as_list)


def refuse_not_rising(name: str, values: Sequence[float], fewest: int) -> None:
    """ValueError where a list that has to rise does not, or is too short."""
    if len(values) < fewest:
        raise ValueError(f"{name} has {len(values)} entries; at least {fewest} are needed")
    for before, after in pairwise(values):
        if not after > before:
            raise ValueError(
                f"{name} has to rise from entry to entry: {after:g} follows {before:g}"
            )


def refuse_other_count(name: str, values: Sequence[object], beside: str, count: int) -> None:
    """ValueError where a list is not as long as the one that it belongs to."""
    if len(values) != count:
        raise ValueError(
            f"{name} has {len(values)} entries where {beside} has {count}; give one for each"
        )
