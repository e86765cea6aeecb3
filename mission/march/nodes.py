"""Collocation nodes of a span and the matrices that integrate and interpolate over them.

Chebyshev-Lobatto nodes on [0, 1], both ends included. A function known at the nodes is the
polynomial through them; its integral from the start to each node is a matrix product. Source:
L. N. Trefethen, Approximation Theory and Approximation Practice, chapters 2, 5 and 19.
"""

from __future__ import annotations

from functools import lru_cache

import numpy as np
from numpy.polynomial import chebyshev
from numpy.typing import NDArray

Array = NDArray[np.float64]


@lru_cache(maxsize=16)
def positions(count: int) -> Array:
    """Node positions on [0, 1], ascending, shape (count,)."""
    return 0.5 - 0.5 * np.cos(np.pi * np.arange(count) / (count - 1))


@lru_cache(maxsize=16)
def integration_matrix(count: int) -> Array:
    """Matrix (count, count) from values at the nodes to integrals from 0 to each node."""
    x = 2.0 * positions(count) - 1.0
    to_series = np.linalg.inv(chebyshev.chebvander(x, count - 1))
    integrals = [chebyshev.chebint(series, lbnd=-1.0) for series in np.eye(count)]
    at_nodes = np.array([chebyshev.chebval(x, series) for series in integrals]).T
    matrix: Array = 0.5 * at_nodes @ to_series
    return matrix


@lru_cache(maxsize=16)
def interpolation_matrix(from_count: int, to_count: int) -> Array:
    """Matrix (to, from) from values at one set of nodes to values at another."""
    from_x, to_x = (2.0 * positions(n) - 1.0 for n in (from_count, to_count))
    to_series = np.linalg.inv(chebyshev.chebvander(from_x, from_count - 1))
    matrix: Array = chebyshev.chebvander(to_x, from_count - 1) @ to_series
    return matrix


@lru_cache(maxsize=16)
def differentiation_matrix(count: int) -> Array:
    """Matrix (count, count) from values at the nodes to slopes there."""
    x = 2.0 * positions(count) - 1.0
    to_series = np.linalg.inv(chebyshev.chebvander(x, count - 1))
    slopes = [chebyshev.chebder(series) for series in np.eye(count)]
    at_nodes = np.array([chebyshev.chebval(x, series) for series in slopes]).T
    matrix: Array = 2.0 * at_nodes @ to_series
    return matrix
