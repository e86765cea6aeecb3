"""Roots and least values of many members at once."""

from __future__ import annotations

import numpy as np
import pytest
from numpy.typing import NDArray

from mission.steady.searching import (
    falling_root,
    first_fall,
    least_between,
    least_value,
    spread,
    vertex,
)

Array = NDArray[np.float64]
ROOTS = np.array([0.1, 0.37, 0.999, 0.5])
LOW, HIGH = np.zeros(4), np.ones(4)


@pytest.mark.parametrize(
    "shape",
    [lambda d: -d, lambda d: -np.sinh(5.0 * d), lambda d: np.where(d > 0.0, -9.0 * d, -d)],
    ids=["line", "curved", "kink"],
)
def test_a_root_is_met_to_the_size_of_the_function(shape: object) -> None:
    found = falling_root(lambda x: shape(x - ROOTS), LOW, HIGH)  # type: ignore[operator]
    assert np.abs(shape(found - ROOTS)) == pytest.approx(np.zeros(4), abs=1e-7)  # type: ignore[operator]


def test_the_first_of_several_roots_is_taken_and_either_direction_works() -> None:
    found = falling_root(lambda x: np.cos(6.0 * np.pi * x) + 0.0 * LOW, LOW, HIGH)
    assert found == pytest.approx(np.full(4, 1.0 / 12.0), abs=1e-7)
    back = falling_root(lambda x: x - ROOTS, HIGH, LOW)
    assert back == pytest.approx(ROOTS, abs=1e-7)


def test_where_values_end_the_last_one_known_is_the_answer() -> None:
    def ends(x: Array) -> Array:
        return np.where(x <= ROOTS, 1.0, -np.inf)

    found = falling_root(ends, LOW, HIGH)
    assert (found <= ROOTS).all()
    assert found == pytest.approx(ROOTS, abs=1e-3)


def test_a_function_without_any_value_leaves_the_low_end() -> None:
    found = falling_root(lambda x: np.full(x.shape, -np.inf), LOW, HIGH)
    assert found == pytest.approx(LOW, abs=1e-3)


@pytest.mark.parametrize(
    "shape",
    [lambda d: d**2, lambda d: np.expm1(d) - d, lambda d: np.maximum(-d, 3.0 * d)],
    ids=["parabola", "lopsided", "kink"],
)
def test_a_least_value_is_found(shape: object) -> None:
    places = np.array([0.1, 0.37, 0.5, 0.0])
    found = least_between(lambda x: shape(x - places), LOW, HIGH)  # type: ignore[operator]
    smooth = shape(1e-3) < 1e-4  # type: ignore[operator]
    assert found == pytest.approx(places, abs=1e-5 if smooth else 0.02)


def test_a_least_value_beside_the_end_of_what_is_known() -> None:
    def ends(x: Array) -> Array:
        return np.where(x <= 0.6, (x - 0.57) ** 2, np.inf)

    found = least_between(lambda x: ends(x) + 0.0 * LOW, LOW, HIGH)
    assert found == pytest.approx(np.full(4, 0.57), abs=0.02)


def test_a_least_value_at_an_end_is_that_end() -> None:
    assert (least_between(lambda x: -x + 0.0 * LOW, LOW, HIGH) == HIGH).all()


def test_a_parabola_is_read_beyond_its_best_point_and_beside_a_hole() -> None:
    points = spread(LOW[:2], HIGH[:2], 5)
    values = (points - np.array([0.3, 0.6])) ** 2 + 7.0
    holed = values.copy()
    holed[3:, 1] = np.inf
    best = np.argmin(holed, axis=0)
    assert vertex(points, holed, best) == pytest.approx([0.3, 0.5])
    assert vertex(points, values, np.argmin(values, axis=0)) == pytest.approx([0.3, 0.6])
    assert least_value(values, np.argmin(values, axis=0)) == pytest.approx([7.0, 7.0])


def test_nowhere_convex_leaves_the_best_point() -> None:
    points = spread(LOW[:1], HIGH[:1], 5)
    values = -points
    best = np.argmin(values, axis=0)
    assert vertex(points, values, best) == pytest.approx([1.0])
    assert least_value(values, best) == pytest.approx([-1.0])


def test_the_first_fall_on_the_way_from_a_peak() -> None:
    points = spread(LOW[:2], HIGH[:2], 5)
    values = np.array([[-1.0, 1.0, 1.0, -1.0, 1.0], [1.0, 1.0, 1.0, 1.0, 1.0]]).T
    peak = np.array([0.3, 0.3])
    inside, outside, falls = first_fall(points, values, peak, HIGH[:2], 1.0)
    assert falls.tolist() == [True, False]
    assert inside == pytest.approx([0.5, 1.0])
    assert outside == pytest.approx([0.75, 1.0])
    inside, outside, falls = first_fall(points, values, peak, LOW[:2], -1.0)
    assert falls.tolist() == [True, False]
    assert (inside[0], outside[0]) == pytest.approx((0.25, 0.0))
