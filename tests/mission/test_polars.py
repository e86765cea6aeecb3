"""Polars of every kind as functions: values, shapes, edges, parts and the best lift."""

from __future__ import annotations

import pickle
from math import inf, radians, sqrt

import numpy as np
import pytest
from numpy.typing import ArrayLike
from scipy.interpolate import PchipInterpolator

from mission.aerodynamics import (
    best_lift_coefficient,
    drag_breakdown,
    drag_coefficient,
    least_drag_lift_coefficient,
    polar_coverage,
    wave_drag_coefficient,
)
from mission.polars.drag_table import DragTable
from mission.polars.interface import Polar
from mission.polars.over_mach import ParabolaOverMach
from mission.polars.parabola import DragRise, Parabola, korn_drag_rise

PLAIN = Parabola(0.0175, 0.042, 0.0, None)
RISING = Parabola(0.0175, 0.042, 0.08, DragRise(0.80, 0.5, 0.1))
SWEPT = Parabola(0.0175, 0.042, 0.0, korn_drag_rise(0.95, radians(25.0), 0.11))
MACHS = (0.2, 0.6, 0.85, 1.05, 1.5, 2.0)
ZERO_LIFT = (0.017, 0.017, 0.018, 0.043, 0.038, 0.036)
FACTORS = (0.117, 0.117, 0.120, 0.128, 0.252, 0.367)
LEAST = (0.03, 0.03, 0.03, 0.01, 0.0, 0.0)
OVER_MACH = ParabolaOverMach(MACHS, ZERO_LIFT, FACTORS, LEAST)
OVER_MACH_LINEAR = ParabolaOverMach(MACHS, ZERO_LIFT, FACTORS, LEAST, "linear")
LIFTS = tuple(round(0.1 * i, 1) for i in range(-2, 11))


def drags_of(polar: Polar, lifts: ArrayLike, machs: ArrayLike) -> tuple[tuple[float, ...], ...]:
    rows = drag_coefficient(polar, np.asarray(lifts), np.asarray(machs)[:, None])
    return tuple(tuple(map(float, row)) for row in rows)


TABLE = DragTable(MACHS, LIFTS, drags_of(OVER_MACH, LIFTS, MACHS))
TABLE_LINEAR = DragTable(MACHS, LIFTS, TABLE.drag_coefficients, "linear")
POLARS = {
    "plain": PLAIN,
    "rising": RISING,
    "swept": SWEPT,
    "over Mach": OVER_MACH,
    "over Mach, linear": OVER_MACH_LINEAR,
    "table": TABLE,
    "table, linear": TABLE_LINEAR,
}
TABLES = [TABLE, TABLE_LINEAR]
EVERY = pytest.mark.parametrize("polar", POLARS.values(), ids=POLARS)


@EVERY
@pytest.mark.parametrize(
    ("lift", "mach"),
    [((), ()), ((3,), ()), ((), (4,)), ((3, 1), (4,)), ((2, 1, 3), (5, 1)), ((0,), ())],
)
def test_shapes_broadcast_and_every_element_stands_alone(
    polar: Polar, lift: tuple[int, ...], mach: tuple[int, ...]
) -> None:
    random = np.random.default_rng(7)
    lifts, machs = random.uniform(-0.4, 1.3, lift), random.uniform(0.0, 2.3, mach)
    answer = drag_coefficient(polar, lifts, machs)
    parts = drag_breakdown(polar, lifts, machs)
    best = best_lift_coefficient(polar, machs)

    assert answer.shape == np.broadcast_shapes(lift, mach)
    assert parts.zero_lift.shape == parts.induced.shape == parts.wave.shape == answer.shape
    assert wave_drag_coefficient(polar, lifts, machs).shape == answer.shape
    assert best.shape == least_drag_lift_coefficient(polar, machs).shape == mach
    for place in np.ndindex(answer.shape):
        each = [np.broadcast_to(a, answer.shape)[place] for a in (lifts, machs)]
        # The same operations in the same order, a fourth power perhaps by another instruction.
        assert drag_coefficient(polar, *map(float, each)) == pytest.approx(answer[place], rel=1e-14)
    for place in np.ndindex(mach):
        alone = best_lift_coefficient(polar, float(machs[place]))
        assert alone == pytest.approx(best[place], rel=1e-9)


@EVERY
def test_not_a_number_stays_one_and_alone(polar: Polar) -> None:
    answer = drag_coefficient(polar, [0.3, np.nan, 0.3], [0.7, 0.7, 0.7])
    assert np.isnan(answer).tolist() == [False, True, False]
    assert answer[0] == drag_coefficient(polar, 0.3, 0.7)


@EVERY
def test_the_parts_are_the_whole_to_the_last_bit(polar: Polar) -> None:
    lift, mach = np.linspace(-0.3, 1.2, 61), np.linspace(0.1, 2.1, 41)[:, None]
    parts = drag_breakdown(polar, lift, mach)
    assert np.array_equal(parts.total, drag_coefficient(polar, lift, mach))
    assert np.array_equal(
        parts.zero_lift + parts.induced + parts.wave, drag_coefficient(polar, lift, mach)
    )
    # Round-off of the subtraction that the induced part of a table is.
    assert np.min(parts.induced) > -1e-15
    assert np.min(parts.wave) >= 0.0


def test_the_parts_of_a_parabola_are_its_terms() -> None:
    parts = drag_breakdown(RISING, 0.6, 0.78)
    critical = 0.80 - 0.1 * (0.6 - 0.5) - (0.1 / 80.0) ** (1.0 / 3.0)
    assert parts.zero_lift == pytest.approx(0.0175, rel=1e-15)
    assert parts.induced == pytest.approx(0.042 * 0.52**2, rel=1e-14)
    assert parts.wave == pytest.approx(20.0 * (0.78 - critical) ** 4, rel=1e-12)
    assert wave_drag_coefficient(RISING, 0.6, 0.78) == parts.wave
    assert wave_drag_coefficient(RISING, 0.6, 0.60) == 0.0


@pytest.mark.parametrize("polar", [OVER_MACH, OVER_MACH_LINEAR])
def test_tables_over_mach_hold_what_is_given(polar: ParabolaOverMach) -> None:
    lift = np.array([[0.0], [0.4], [0.9]])
    expected = np.array(ZERO_LIFT) + np.array(FACTORS) * (lift - np.array(LEAST)) ** 2
    assert drag_coefficient(polar, lift, MACHS) == pytest.approx(expected, rel=1e-14)
    parts = drag_breakdown(polar, lift, MACHS)
    assert parts.zero_lift == pytest.approx(np.broadcast_to(ZERO_LIFT, (3, 6)), rel=1e-14)
    assert np.all(parts.wave == 0.0)


@pytest.mark.parametrize("polar", TABLES)
def test_a_table_holds_what_is_given(polar: DragTable) -> None:
    machs, lifts = np.array(MACHS)[:, None], np.array(LIFTS)
    assert drag_coefficient(polar, lifts, machs) == pytest.approx(
        np.array(polar.drag_coefficients), rel=1e-14
    )
    least = np.min(polar.drag_coefficients, axis=1)
    assert drag_breakdown(polar, 0.7, MACHS).zero_lift == pytest.approx(least, rel=1e-14)


def test_between_mach_numbers_lies_the_monotone_cubic_of_another_library() -> None:
    at = np.linspace(MACHS[0], MACHS[-1], 301)
    curves = [PchipInterpolator(MACHS, column)(at) for column in (ZERO_LIFT, FACTORS, LEAST)]
    zero_lift, factor, least = curves
    for lift in (0.0, 0.35, 0.8):
        expected = zero_lift + factor * (lift - least) ** 2
        assert drag_coefficient(OVER_MACH, lift, at) == pytest.approx(expected, rel=1e-13)


def test_between_columns_lies_the_monotone_cubic_of_another_library() -> None:
    """Inside; in the two end cells the slope at the end is this program's own."""
    at = np.linspace(LIFTS[1], LIFTS[-2], 201)
    for row, mach in enumerate(MACHS):
        expected = PchipInterpolator(LIFTS, TABLE.drag_coefficients[row])(at)
        assert drag_coefficient(TABLE, at, mach) == pytest.approx(expected, rel=1e-13)


@pytest.mark.parametrize("lifts", [(0.2, 0.3, 0.5, 0.6, 0.9), (0.2, 0.5, 0.9)])
def test_the_end_cells_know_the_parabola_that_their_points_lie_on(lifts: tuple[float, ...]) -> None:
    """As if the table went on for one more column at each end, as far as the next one is."""
    longer = (2.0 * lifts[0] - lifts[1], *lifts, 2.0 * lifts[-1] - lifts[-2])
    table = DragTable((0.0, 1.0), lifts, drags_of(PLAIN, lifts, [0.0, 1.0]))
    at = np.linspace(lifts[0], lifts[-1], 141)
    expected = PchipInterpolator(longer, drag_coefficient(PLAIN, longer, 0.5))(at)
    assert drag_coefficient(table, at, 0.5) == pytest.approx(expected, rel=1e-13)


def test_straight_lines_where_they_are_asked_for() -> None:
    at = np.linspace(MACHS[0], MACHS[-1], 301)
    expected = (
        np.interp(at, MACHS, ZERO_LIFT)
        + np.interp(at, MACHS, FACTORS) * (0.5 - np.interp(at, MACHS, LEAST)) ** 2
    )
    assert drag_coefficient(OVER_MACH_LINEAR, 0.5, at) == pytest.approx(expected, rel=1e-13)
    middle = drag_coefficient(TABLE_LINEAR, 0.45, 0.725)
    corners = [TABLE.drag_coefficients[i][j] for i in (1, 2) for j in (6, 7)]
    assert middle == pytest.approx(np.mean(corners), rel=1e-13)


def test_a_table_costs_at_the_bottom_of_the_polar_what_its_docstring_says() -> None:
    """Least drag given: a third of K h^2 / 4; half way between two points: all of it."""
    factor, step = 0.05, 0.1
    lifts = np.arange(-4, 11) * step
    at = np.linspace(-0.3, 0.9, 2401)
    for least, bound in ((0.0, 0.3), (0.05, 1.0)):
        polar = ParabolaOverMach((0.0, 1.0), (0.02,) * 2, (factor,) * 2, (least,) * 2)
        table = DragTable((0.0, 1.0), tuple(lifts), drags_of(polar, lifts, [0.0, 1.0]))
        error = np.abs(drag_coefficient(table, at, 0.5) - drag_coefficient(polar, at, 0.5))
        worst = np.max(error) / (factor * step**2 / 4.0)
        assert 0.8 * bound < worst <= bound * (1.0 + 1e-9)
        # In cruise hardly any: the error falls with the inverse of lift, measured 2.8e-4 of drag.
        assert np.max(error[at > 0.4] / drag_coefficient(polar, at[at > 0.4], 0.5)) < 3e-4


@pytest.mark.parametrize("polar", [*TABLES, OVER_MACH, OVER_MACH_LINEAR])
def test_beyond_its_edge_a_table_holds_it(polar: Polar) -> None:
    coverage = polar_coverage(polar)
    assert coverage is not None
    (slow, fast), (low, high) = coverage.mach, coverage.lift_coefficient
    assert (slow, fast) == (0.2, 2.0)
    assert drag_coefficient(polar, 0.4, [0.0, 3.0]).tolist() == (
        drag_coefficient(polar, 0.4, [slow, fast]).tolist()
    )
    if polar in TABLES:
        assert (low, high) == (-0.2, 1.0)
        assert drag_coefficient(polar, [-1.0, 1.8], 0.7).tolist() == (
            drag_coefficient(polar, [low, high], 0.7).tolist()
        )
    else:
        assert (low, high) == (-inf, inf)


@pytest.mark.parametrize("polar", [PLAIN, RISING, SWEPT])
def test_a_law_has_no_edge(polar: Polar) -> None:
    assert polar_coverage(polar) is None


@EVERY
@pytest.mark.parametrize("mach", [0.3, 0.7, 0.76, 0.8, 0.9, 1.0])
def test_the_best_lift_coefficient_has_no_better_beside_it(polar: Polar, mach: float) -> None:
    best = float(best_lift_coefficient(polar, mach))
    ratio = best / drag_coefficient(polar, best, mach)
    lifts = np.linspace(0.001, 1.0, 4000)
    beside = lifts / drag_coefficient(polar, lifts, mach)
    # A grid of 0.00025 in lift coefficient meets a maximum to the square of that.
    assert ratio >= np.max(beside) * (1.0 - 1e-12)
    assert best == pytest.approx(lifts[np.argmax(beside)], abs=5e-4)


@pytest.mark.parametrize("polar", [PLAIN, OVER_MACH, OVER_MACH_LINEAR, TABLE, TABLE_LINEAR])
@pytest.mark.parametrize("mach", [0.3, 0.7, 0.95, 1.2])
def test_drag_rises_from_the_lift_coefficient_of_least_drag(polar: Polar, mach: float) -> None:
    least = least_drag_lift_coefficient(polar, mach)
    drag = drag_coefficient(polar, np.linspace(-0.2, 1.0, 601), mach)
    assert drag_coefficient(polar, least, mach) <= np.min(drag) * (1.0 + 1e-12)
    assert np.all(np.diff(drag_coefficient(polar, np.linspace(least, 1.0, 301), mach)) >= 0.0)


def test_the_best_lift_coefficient_falls_in_the_drag_rise() -> None:
    machs = np.array([0.0, 0.5, 0.6, 0.7, 0.75, 0.8, 0.85])
    best = best_lift_coefficient(RISING, machs)
    alone = sqrt(0.0175 / 0.042 + 0.08**2)
    assert best[:3] == pytest.approx(alone, rel=1e-14)
    assert np.all(np.diff(best[2:]) < 0.0)
    assert best_lift_coefficient(RISING) == best[0]


def test_the_best_of_a_table_that_ends_too_soon_is_its_end() -> None:
    short = DragTable((0.0, 1.0), (0.0, 0.1, 0.2), drags_of(PLAIN, [0.0, 0.1, 0.2], [0.0, 1.0]))
    assert best_lift_coefficient(short, 0.5) == pytest.approx(0.2, abs=1e-9)


def test_the_rise_of_a_swept_wing_by_hand() -> None:
    """sweep 60 deg: cosine 1/2, so that every term is a round number."""
    rise = korn_drag_rise(0.87, radians(60.0), 0.12)
    assert rise.drag_divergence_mach == pytest.approx(0.87 * 2.0 - 0.12 * 4.0, rel=1e-14)
    assert rise.fall_with_lift_coefficient == pytest.approx(0.8, rel=1e-14)
    assert rise.at_lift_coefficient == 0.0


@EVERY
def test_polars_reach_a_worker_and_compare_by_value(polar: Polar) -> None:
    drag_coefficient(polar, 0.5, 0.7)  # with whatever it keeps ready
    again = pickle.loads(pickle.dumps(polar))
    assert again == polar
    assert hash(again) == hash(polar)
    assert drag_coefficient(again, 0.5, 0.7) == drag_coefficient(polar, 0.5, 0.7)
