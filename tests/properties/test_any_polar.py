"""Any polar table: nothing outside its neighbours, parts that add up, elements that stand alone."""

from __future__ import annotations

from math import radians

import numpy as np
from hypothesis import given, settings
from hypothesis import strategies as st

from mission.aerodynamics import best_lift_coefficient, drag_breakdown, drag_coefficient
from mission.polars.drag_table import DragTable
from mission.polars.over_mach import ParabolaOverMach
from mission.polars.parabola import Parabola, korn_drag_rise
from mission.polars.piecewise import Interpolation

MANY = settings(max_examples=60, deadline=None)
interpolations = st.sampled_from(["monotone cubic", "linear"])


def rising(fewest: int, low: float, high: float) -> st.SearchStrategy[tuple[float, ...]]:
    """Numbers a twentieth apart at least."""
    steps = st.lists(
        st.integers(round(20 * low), round(20 * high)), min_size=fewest, max_size=9, unique=True
    )
    return steps.map(lambda chosen: tuple(each / 20.0 for each in sorted(chosen)))


def numbers(count: int, low: float, high: float) -> st.SearchStrategy[tuple[float, ...]]:
    return st.lists(st.floats(low, high), min_size=count, max_size=count).map(tuple)


@st.composite
def tables(draw: st.DrawFn) -> DragTable:
    machs, lifts = draw(rising(2, 0.0, 2.0)), draw(rising(3, -0.5, 1.5))
    rows = tuple(draw(numbers(len(lifts), 0.005, 0.4)) for _ in machs)
    return DragTable(machs, lifts, rows, draw(interpolations))


@st.composite
def over_mach(draw: st.DrawFn) -> ParabolaOverMach:
    machs = draw(rising(2, 0.0, 2.0))
    kind: Interpolation = draw(interpolations)
    columns = [draw(numbers(len(machs), *ends)) for ends in ((0.005, 0.1), (0.03, 0.6), (0.0, 0.1))]
    return ParabolaOverMach(machs, *columns, kind)


def neighbours(points: tuple[float, ...], at: np.ndarray) -> np.ndarray:
    """First of the two points around each value."""
    return np.clip(np.searchsorted(points, at, side="right") - 1, 0, len(points) - 2)


@MANY
@given(tables(), st.integers(0, 10**6))
def test_a_table_stays_within_the_four_points_around(table: DragTable, seed: int) -> None:
    random = np.random.default_rng(seed)
    mach = random.uniform(table.machs[0], table.machs[-1], 200)
    lift = random.uniform(table.lift_coefficients[0], table.lift_coefficients[-1], 200)
    row, column = neighbours(table.machs, mach), neighbours(table.lift_coefficients, lift)
    drags = np.array(table.drag_coefficients)
    corners = np.stack([drags[row + i, column + j] for i in (0, 1) for j in (0, 1)])
    drag = drag_coefficient(table, lift, mach)
    assert np.all(drag >= corners.min(axis=0) * (1.0 - 1e-12))
    assert np.all(drag <= corners.max(axis=0) * (1.0 + 1e-12))
    parts = drag_breakdown(table, lift, mach)
    assert np.array_equal(parts.zero_lift + parts.induced + parts.wave, drag)
    assert np.all(parts.induced >= -1e-15)


@MANY
@given(over_mach(), st.integers(0, 10**6))
def test_coefficients_over_mach_stay_within_the_two_around(
    polar: ParabolaOverMach, seed: int
) -> None:
    mach = np.random.default_rng(seed).uniform(polar.machs[0], polar.machs[-1], 200)
    first = neighbours(polar.machs, mach)
    given_drag = np.array(polar.zero_lift_drag_coefficient)
    ends = np.stack([given_drag[first], given_drag[first + 1]])
    zero_lift = drag_breakdown(polar, 0.3, mach).zero_lift
    assert np.all(zero_lift >= ends.min(axis=0) * (1.0 - 1e-12))
    assert np.all(zero_lift <= ends.max(axis=0) * (1.0 + 1e-12))
    best = best_lift_coefficient(polar, mach)
    ratio = best / drag_coefficient(polar, best, mach)
    for other in (0.95 * best, 1.05 * best):
        assert np.all(ratio > other / drag_coefficient(polar, other, mach))


@MANY
@given(
    st.floats(0.8, 1.0), st.floats(0.0, 40.0), st.floats(0.06, 0.16), st.floats(0.02, 0.06),
    st.floats(0.0, 0.15), st.floats(0.3, 1.2),
)  # fmt: skip
def test_the_best_lift_in_any_drag_rise(
    kappa: float, sweep: float, thickness: float, factor: float, least: float, mach: float
) -> None:
    polar = Parabola(0.018, factor, least, korn_drag_rise(kappa, radians(sweep), thickness))
    best = best_lift_coefficient(polar, mach)
    ratio = best / drag_coefficient(polar, best, mach)
    assert best > 0.0
    for other in (0.98 * best, 1.02 * best):
        assert ratio > other / drag_coefficient(polar, other, mach)


@MANY
@given(tables() | over_mach(), st.integers(0, 10**6))
def test_no_element_looks_aside(polar: DragTable | ParabolaOverMach, seed: int) -> None:
    random = np.random.default_rng(seed)
    lift, mach = random.uniform(-0.7, 1.7, 30), random.uniform(0.0, 2.2, 30)
    together = drag_coefficient(polar, lift, mach)
    some = random.permutation(30)[:7]
    assert np.array_equal(drag_coefficient(polar, lift[some], mach[some]), together[some])
