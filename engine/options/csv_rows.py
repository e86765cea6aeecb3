"""Points of an engine as text: the lines of a CSV file, and the numbers in them."""

from __future__ import annotations

import math
from collections.abc import Iterator, Mapping, Sequence
from pathlib import Path

from engine.reading import read_text

HIGHEST_MACH, HIGHEST_SHARE = 5.0, 2.0  # of a point; a share of thrust, with reheat
_LARGEST_FILE = 20_000_000  # bytes; forty times what `longlegs envelope` writes


def read_csv(path: Path, *, remedy: str = "") -> str:
    """Text of a file of points; ``remedy`` is what to do where there is none.

    Raises :class:`InputRefused` naming the file and what is wrong.
    """
    return read_text(path, "a file of points", _LARGEST_FILE, remedy=remedy)


def rows_of(text: str) -> Iterator[tuple[int, list[str]]]:
    """Cells by line number; comments and blank lines left out."""
    for number, line in enumerate(text.splitlines(), start=1):
        if line.strip() and not line.lstrip().startswith("#"):
            yield number, [cell.strip() for cell in line.split(",")]


def by_column(header: Sequence[str], cells: list[str]) -> dict[str, str]:
    """Cells by the names of their columns; ValueError where there are more or fewer."""
    if len(cells) != len(header):
        raise ValueError(f"{len(cells)} values stand where the header names {len(header)}")
    return dict(zip(header, cells, strict=True))


def value_of(given: Mapping[str, str], name: str, low: float, high: float) -> float:
    """The number of a column, finite and within bounds; ValueError where it is none."""
    text = given[name]
    try:
        value = float(text)
    except ValueError:
        raise ValueError(f"{name} = '{text}' is no number; write it bare, 1234.5 say") from None
    if not math.isfinite(value):
        raise ValueError(f"{name} = {text} is no finite number")
    if not low <= value <= high:
        raise ValueError(f"{name} = {value:g} is outside {low:g} to {high:g}")
    return value
