"""Efficiency away from the design point against published operating lines, rigs and cycles.

The constants of ``engine.parts.efficiency`` must be the least squares of the data they are said to
come from, with the residuals that are said. The data that the law does not tell are held to what it
misses them by: a finding, so that nobody takes the law for more than it is.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from typing import Any

import numpy as np
import pytest
from numpy.typing import NDArray
from scipy.optimize import least_squares

from engine.parts import efficiency
from engine.parts.efficiency import Efficiency

Array = NDArray[np.float64]
Line = tuple[Array, Array]  # measure over its design value, efficiency

# Corrected flow [kg/s] and efficiency; the last point is the design point of the cycle.
E3_COMPRESSOR: Line = (
    np.array([18.0, 27.0, 32.0, 38.0, 43.0, 46.0, 54.4]) / 54.4,
    np.array([0.76, 0.81, 0.815, 0.83, 0.84, 0.845, 0.860]),
)
FAROKHI: Line = (
    np.array([20.0, 18.1, 16.4, 14.8, 13.4, 12.2]) / 20.0,
    np.array([0.82, 0.84, 0.83, 0.83, 0.83, 0.84]),
)
E3_FAN: Line = (
    np.array([643.6, 634.1, 577.9]) / 643.6,
    np.array([0.879, 0.887, 0.900]),
)
# Pressure ratio, speed over root of temperature [rpm / root degree R], efficiency [%].
E3_RIG = np.array(
    [
        [4.01, 244.8, 88.37], [4.03, 234.1, 87.45], [3.91, 222.3, 86.64], [3.98, 253.1, 88.88],
        [3.49, 244.4, 88.03], [3.48, 235.5, 87.35], [3.49, 223.0, 86.50], [4.43, 245.3, 88.29],
        [4.30, 234.4, 87.36], [3.47, 253.8, 88.72], [4.75, 243.8, 87.56],
    ]
)  # fmt: skip
RIG_DESIGN = (4.0, 244.0, 88.4)
GAMMA = 1.33  # of the rig's gas; from 1.30 to 1.36 the constant stays within 0.001


def loading(ratio: Array, speed: Array, percent: Array) -> Array:
    """Square of blade speed over specific work of a turbine, but for a factor."""
    return np.asarray(speed**2 / (percent * (1.0 - ratio ** (1.0 / GAMMA - 1.0))))


def fan_loading(speed: Array, ratio: Array, quality: Array, bypass_ratio: Array) -> Array:
    """The same of the low-pressure turbine, from the fan that it drives."""
    return np.asarray(speed**2 * quality / ((ratio ** (1 / 3.5) - 1.0) * (1.0 + bypass_ratio)))


def turbine_lines() -> list[Line]:
    rig = loading(*E3_RIG.T) / loading(*map(np.asarray, RIG_DESIGN))
    low = fan_loading(
        np.array([411.5, 399.6, 365.2]),
        np.array([1.65, 1.61, 1.50]),
        E3_FAN[1],
        np.array([6.8, 6.9, 7.3]),
    )
    return [(rig, E3_RIG[:, 2] / 100.0), (low / low[0], np.array([0.917, 0.916, 0.921]))]


def compressor_law(flow: Array) -> Array:
    return np.asarray(Efficiency(1.0, falls_off=True).of_compressor(flow).value)


def turbine_law(load: Array) -> Array:
    return np.asarray(Efficiency(1.0, falls_off=True).of_turbine(load).value)


def residuals(law: Callable[[Array], Array], lines: Sequence[Line]) -> Array:
    """Law less data [points of efficiency], each line with its best level."""
    found = []
    for measure, data in lines:
        share = law(measure)
        found.append(share * (share @ data) / (share @ share) - data)
    return np.asarray(100.0 * np.concatenate(found))


def best(
    constant: str,
    law: Callable[[Array], Array],
    lines: Sequence[Line],
    patch: pytest.MonkeyPatch,
) -> float:
    """The value of a constant with the least squares, near 0.8."""

    def misses(x: Array) -> Any:
        patch.setattr(efficiency, constant, float(x[0]))
        return residuals(law, lines)

    return float(least_squares(misses, [0.8]).x[0])


def sizes(found: Array) -> tuple[float, float]:
    """Root mean square and worst."""
    return float(np.sqrt(np.mean(found**2))), float(np.max(np.abs(found)))


@pytest.mark.source(
    "NASA CR-168211, Energy Efficient Engine, core compressor operating line (from a plot), and "
    "NASA CR-168219, Table XV (design point); grade read"
)
def test_compressor_falls_off_as_measured(monkeypatch: pytest.MonkeyPatch) -> None:
    assert sizes(residuals(compressor_law, [E3_COMPRESSOR])) == pytest.approx(
        (0.53, 0.96), abs=0.01
    )
    found = best("COMPRESSOR_FALL", compressor_law, [E3_COMPRESSOR], monkeypatch)
    assert found == pytest.approx(0.26, abs=0.005)


@pytest.mark.source(
    "NASA CR-168189, Table 5.3.1-II (high-pressure turbine rig); NASA CR-165148 and CR-167955, "
    "Tables I (fan and low-pressure turbine of the earlier cycle); grade read"
)
def test_turbine_falls_off_as_measured(monkeypatch: pytest.MonkeyPatch) -> None:
    lines = turbine_lines()
    assert sizes(residuals(turbine_law, lines)) == pytest.approx((0.48, 0.98), abs=0.01)
    found = best("TURBINE_DESIGN_SPEED", turbine_law, lines, monkeypatch)
    assert found == pytest.approx(0.925, abs=0.002)


@pytest.mark.source("S. Farokhi, Aircraft Propulsion, 1st ed., Example 10.1; grade read")
def test_a_textbook_operating_line_is_flatter(monkeypatch: pytest.MonkeyPatch) -> None:
    """A finding: this line does not fall down to 0.61 of its flow."""
    assert sizes(residuals(compressor_law, [FAROKHI])) == pytest.approx((1.58, 2.75), abs=0.02)
    found = best("COMPRESSOR_FALL", compressor_law, [FAROKHI], monkeypatch)
    assert found == pytest.approx(-0.07, abs=0.01)


@pytest.mark.source("NASA CR-165148, Table I (fan, cycle before re-match); grade read")
def test_a_fan_designed_at_top_of_climb_gains_at_take_off() -> None:
    """A finding: the law, whose best is at the design point, has the other sign."""
    flow, data = E3_FAN
    published = 100.0 * (data[-1] - data[0])
    law = 100.0 * data[0] * (compressor_law(flow)[-1] - 1.0)
    assert published == pytest.approx(2.1)
    assert law == pytest.approx(-0.24, abs=0.01)
