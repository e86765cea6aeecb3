"""Drag coefficient as a table over Mach number and lift coefficient.

Read along Mach number first, in every column of lift coefficient, then along lift coefficient, by
monotone cubics both times: no answer lies outside the four points around it, and the least drag
at a Mach number is that of a column. The price is at the bottom of the polar, where a monotone
cubic through points ``h`` apart in lift coefficient is off by up to ``K h^2 / 4`` where the least
drag lies half way between two of them, and by a third of that where it is given.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.lib.stride_tricks import sliding_window_view

from engine.options.monotone import hermite
from mission.polars.interface import Array, Polar, PolarCoverage
from mission.polars.piecewise import Curves, Interpolation, along, curves_through

_SAMPLES = 129
_GOLDEN = 0.5 * (5.0**0.5 - 1.0)
_NARROWINGS = 40  # by 0.618 each: a sample's width comes down to 1e-8 of itself


@dataclass(frozen=True)
class DragTable(Polar):
    """A row of ``drag_coefficients`` for each of ``machs``, a column for each lift coefficient."""

    machs: tuple[float, ...]
    lift_coefficients: tuple[float, ...]
    drag_coefficients: tuple[tuple[float, ...], ...]
    interpolation: Interpolation = "monotone cubic"

    @property
    def coverage(self) -> PolarCoverage:
        """The table's edges."""
        lifts = self.lift_coefficients
        return PolarCoverage((self.machs[0], self.machs[-1]), (lifts[0], lifts[-1]))

    @property
    def kink_machs(self) -> tuple[float, ...]:
        """The rows of the table, its ends left out."""
        return self.machs[1:-1]

    @cached_property
    def _reader(self) -> _Reader:
        return _Reader.of(self)

    def total(self, lift_coefficient: Array, mach: Array) -> Array:
        """Drag coefficient; beyond the table that of its edge."""
        return self._reader.read(lift_coefficient, mach)

    def terms(self, lift_coefficient: Array, mach: Array) -> tuple[Array, Array, Array]:
        """Zero-lift drag is the least at the Mach number, the rest goes with lift."""
        total = self.total(lift_coefficient, mach)
        induced = total - np.min(self._reader.columns(mach), axis=-1)
        # Taken back from the sum, which the two then make up to the last bit.
        return total - induced, induced, np.zeros(())

    def lift_of_least_drag(self, mach: Array) -> Array:
        """That of the column of least drag."""
        column = np.argmin(self._reader.columns(mach), axis=-1)
        return np.asarray(self._reader.lifts[column])

    def best_lift_coefficient(self, mach: Array) -> Array:
        """The best of samples at positive lift, then narrowed by golden sections.

        The end of the table where lift over drag rises up to it.
        """
        low, high = max(self.lift_coefficients[0], 0.0), self.lift_coefficients[-1]
        samples = np.linspace(low, high, _SAMPLES)
        ratio = samples / self.total(samples, mach[..., None])
        best = samples[np.argmax(ratio, axis=-1)]
        spacing = samples[1] - samples[0]
        left = np.maximum(best - spacing, low)
        right = np.minimum(best + spacing, high)
        for _ in range(_NARROWINGS):
            inner = right - _GOLDEN * (right - left), left + _GOLDEN * (right - left)
            below, above = (lift / self.total(lift, mach) for lift in inner)
            is_left = below > above
            left, right = np.where(is_left, left, inner[0]), np.where(is_left, inner[1], right)
        return np.asarray(0.5 * (left + right))


@dataclass(frozen=True)
class _Reader:
    """A table made ready to be read, with a ghost column beyond each end of lift.

    A cubic between two lift coefficients needs the columns on both sides too: each pair comes with
    its window of four.

    Attributes
    ----------
    lifts : (L,), without ghosts
    along_mach : curves of all columns, (M - 1, 4, L + 2)
    windows : their coefficients by cell, contiguous, (M - 1, L - 1, 4, 4)
    steps : between the columns of a window, (L - 1, 3)
    is_linear : straight lines in place of cubics
    """

    lifts: Array
    along_mach: Curves
    windows: Array
    steps: Array
    is_linear: bool

    @classmethod
    def of(cls, table: DragTable) -> _Reader:
        lifts, drags = np.array(table.lift_coefficients), np.array(table.drag_coefficients)
        with_ghosts = np.concatenate(
            [_beyond(lifts[:3], drags[:, :3]), drags, _beyond(lifts[:-4:-1], drags[:, :-4:-1])],
            axis=1,
        )
        curves = curves_through(np.array(table.machs), with_ghosts, table.interpolation)
        windows = np.moveaxis(sliding_window_view(curves.coefficients, 4, axis=-1), 1, 2)
        step = np.diff(lifts)
        steps = sliding_window_view(np.concatenate([step[:1], step, step[-1:]]), 3)
        is_linear = table.interpolation == "linear"
        return cls(lifts, curves, np.ascontiguousarray(windows), steps, is_linear)

    def columns(self, mach: Array) -> Array:
        """The table's columns at Mach numbers of any shape: that shape, then the columns'."""
        return self.along_mach.read(mach)[..., 1:-1]

    def read(self, lift: Array, mach: Array) -> Array:
        held = np.minimum(np.maximum(lift, self.lifts[0]), self.lifts[-1])
        column = np.searchsorted(self.lifts[1:-1], held, side="right")
        cell, beyond = self.along_mach.cell(mach)
        drag = along(self.windows[cell, column], beyond[..., None])
        steps = self.steps[column]
        step = steps[..., 1]
        way = (held - self.lifts[column]) / step
        ends = drag[..., 1], drag[..., 2]
        if self.is_linear:
            return np.asarray(ends[0] + way * (ends[1] - ends[0]))
        slope = _slopes(np.diff(drag) / steps, steps)
        return np.asarray(hermite(way, step, ends, (slope[..., 0], slope[..., 1])))


def _beyond(lifts: Array, drags: Array) -> Array:
    """A column as far before the first as the next is behind it, on the parabola through three."""
    a, b, c = lifts
    at = 2.0 * a - b
    weights = (
        (at - b) * (at - c) / ((a - b) * (a - c)),
        (at - a) * (at - c) / ((b - a) * (b - c)),
        (at - a) * (at - b) / ((c - a) * (c - b)),
    )
    return np.asarray(drags @ np.array(weights)[:, None])


def _slopes(secant: Array, step: Array) -> Array:
    """Slopes (..., 2) between three secants, zero where two of them differ in sign.

    Their weighted harmonic mean, see :func:`engine.options.monotone.slopes`.
    """
    before, after = secant[..., :-1], secant[..., 1:]
    w_before = step[..., :-1] + 2.0 * step[..., 1:]
    w_after = 2.0 * step[..., :-1] + step[..., 1:]
    product = before * after
    mean = (w_before + w_after) * product
    by = w_before * after + w_after * before
    return np.divide(mean, by, out=np.zeros_like(mean), where=product > 0.0)
