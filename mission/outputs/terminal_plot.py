"""A curve drawn in a terminal: dots finer than characters, axes with numbers, labels beside points.

No colour is needed to read it; a terminal without these characters shows plainer ones.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
_BLANK = 0x2800  # of the eight-dot patterns
_DOTS = ((0x01, 0x08), (0x02, 0x10), (0x04, 0x20), (0x40, 0x80))  # by row, then column
_ACROSS, _DOWN = 2, 4  # dots a character
_STEPS = 400  # points looked at along each stretch of the curve


@dataclass(frozen=True)
class Axis:
    """One axis: what it shows, how far it goes from zero, and its numbers as text with places."""

    title: str
    end: float
    ticks: tuple[tuple[float, str], ...]


@dataclass(frozen=True)
class Label:
    """A text beside a point of the curve, to its right or to its left."""

    across: float
    up: float
    text: str
    is_right: bool


def plot(
    across: Array,
    up: Array,
    axes: tuple[Axis, Axis],
    labels: Sequence[Label],
    size: tuple[int, int],
) -> list[str]:
    """Lines of text of a curve through points, ``size`` characters wide and high without margins.

    ``axes`` are the one across and the one up; both begin at zero.
    """
    columns, rows = size
    level = axes[1]
    dots = _dots(across / axes[0].end, up / level.end, columns, rows)
    cells = [[chr(_BLANK + value) if value else " " for value in row] for row in dots]
    for label in labels:
        _write(cells, label, axes)
    margin = max(len(text) for _, text in level.ticks)
    marks = {_row(value / level.end, rows): text for value, text in level.ticks}
    lines = [" " * margin + "  " + level.title]
    for row, cell in enumerate(cells):
        lines.append(f"{marks.get(row, ''):>{margin}} \u2502{''.join(cell).rstrip()}")
    lines.append(" " * margin + " \u2514" + "\u2500" * columns)
    lines.append(" " * (margin + 2) + _scale(axes[0], columns))
    return lines


def _dots(across: Array, up: Array, columns: int, rows: int) -> NDArray[np.int64]:
    """Dot patterns (rows, columns) of a line through points given as shares of the axes."""
    along = np.linspace(0.0, len(across) - 1.0, _STEPS * max(len(across) - 1, 1) + 1)
    places = np.arange(len(across))
    x = np.interp(along, places, across) * (columns * _ACROSS - 1)
    y = (1.0 - np.interp(along, places, up)) * (rows * _DOWN - 1)
    column, row = np.rint(x).astype(np.int64), np.rint(y).astype(np.int64)
    weights = np.array(_DOTS)[row % _DOWN, column % _ACROSS]
    patterns = np.zeros((rows, columns), dtype=np.int64)
    np.bitwise_or.at(patterns, (row // _DOWN, column // _ACROSS), weights)
    return patterns


def _row(share: float, rows: int) -> int:
    """Row of characters that a share of the axis up falls into."""
    return round((1.0 - share) * (rows * _DOWN - 1)) // _DOWN


def _write(cells: list[list[str]], label: Label, axes: tuple[Axis, Axis]) -> None:
    """A label beside its point, kept inside the picture."""
    columns = len(cells[0])
    column = round(label.across / axes[0].end * (columns * _ACROSS - 1)) // _ACROSS
    row = _row(label.up / axes[1].end, len(cells))
    text = f" {label.text} "
    start = column + 1 if label.is_right else column - len(text)
    start = min(max(start, 0), max(columns - len(text), 0))
    for place, character in enumerate(text[: columns - start]):
        cells[row][start + place] = character


def _scale(axis: Axis, columns: int) -> str:
    """Numbers under the axis across, each ending where it belongs, and the title after them."""
    line = [" "] * columns
    for value, text in axis.ticks:
        end = min(max(round(value / axis.end * (columns - 1)) + 1, len(text)), columns)
        line[end - len(text) : end] = text
    return "".join(line).rstrip() + f"  {axis.title}"
