"""Collocation nodes: integration and interpolation exact for the polynomials they carry."""

from __future__ import annotations

import numpy as np
import pytest

from mission.march.nodes import integration_matrix, interpolation_matrix, positions

COUNTS = [3, 5, 9, 17, 33]


@pytest.mark.parametrize("count", COUNTS)
def test_nodes_ascend_from_one_end_to_the_other(count: int) -> None:
    nodes = positions(count)
    assert nodes[0] == 0.0
    assert nodes[-1] == 1.0
    assert np.all(np.diff(nodes) > 0.0)
    assert nodes + nodes[::-1] == pytest.approx(1.0, abs=1e-15)


@pytest.mark.parametrize("count", COUNTS)
def test_integrals_of_polynomials_are_exact(count: int) -> None:
    nodes, matrix = positions(count), integration_matrix(count)
    for power in range(count):
        integral = nodes ** (power + 1) / (power + 1)
        assert matrix @ nodes**power == pytest.approx(integral, abs=2e-15), power


@pytest.mark.parametrize("count", [5, 9])
def test_one_degree_more_is_not_exact(count: int) -> None:
    """The test above can fail: an even power beyond the nodes' is missed."""
    nodes = positions(count)
    power = count + 1
    missed = (integration_matrix(count) @ nodes**power)[-1] - 1.0 / (power + 1)
    assert abs(missed) > 1e-9


def test_integrals_start_at_nothing() -> None:
    assert np.all(integration_matrix(9)[0] == pytest.approx(0.0, abs=1e-17))


def test_smooth_functions_converge_faster_than_any_power() -> None:
    errors = []
    for count in (3, 5, 9):
        integral = integration_matrix(count) @ np.exp(positions(count))
        errors.append(abs(integral[-1] - (np.e - 1.0)))
    assert errors[1] < 1e-3 * errors[0]
    assert errors[2] < 1e-6 * errors[1]


@pytest.mark.parametrize(("few", "many"), [(5, 9), (9, 17), (9, 5), (17, 33)])
def test_interpolation_is_exact_up_to_the_fewer_nodes(few: int, many: int) -> None:
    matrix = interpolation_matrix(few, many)
    for power in range(min(few, many)):
        found = matrix @ positions(few) ** power
        assert found == pytest.approx(positions(many) ** power, abs=1e-13), power


def test_members_are_integrated_side_by_side() -> None:
    nodes = positions(9)
    pair = np.stack([nodes, nodes**2], axis=1)
    assert (integration_matrix(9) @ pair)[-1] == pytest.approx([0.5, 1.0 / 3.0], abs=1e-15)
