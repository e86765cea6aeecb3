"""At a bound, the other parameters are those of a fit with the bound one held there."""

from __future__ import annotations

import numpy as np
import pytest
from engine_files import TURBOFAN, changed
from test_fitting import ROWS, SIZE, points_of, scaled_fuel

from engine.options.fitting import Fit, fit

BURNT = "combustor.efficiency"


def value(fitted: Fit, key: str) -> float:
    return next(each.value for each in fitted.parameters if each.parameter.key == key)


@pytest.mark.parametrize(("factor", "bound"), [(0.97, 1.0), (1.15, 0.90)])
def test_what_is_free_beside_a_bound_is_fitted_with_it_held(factor: float, bound: float) -> None:
    """Highest and lowest; beyond them the fit would find better, and 16 kN for the size."""
    points = scaled_fuel(points_of(TURBOFAN, ROWS), factor)

    both = fit(TURBOFAN, "test.toml", points, (BURNT, SIZE))
    alone = fit(changed(TURBOFAN, {BURNT: bound}), "test.toml", points, (SIZE,))

    assert value(both, BURNT) == bound
    assert value(both, SIZE) == pytest.approx(value(alone, SIZE), rel=5e-4)
    assert abs(value(alone, SIZE) / 16000.0 - 1.0) > 5e-3


def test_the_rms_is_that_of_the_data() -> None:
    """All fuel flows off by one share, thrusts met: each is half of the data, or nearly."""
    points = points_of(TURBOFAN, ROWS)
    fitted = fit(TURBOFAN, "test.toml", scaled_fuel(points, 1.0 / 1.02), (SIZE,))

    # Six fuel flows by 0.02; of thrusts the four at ratings are data, two are asked for.
    assert points.data_count == 10
    assert fitted.rms_error(fitted.before) == pytest.approx(0.02 * np.sqrt(6 / 10), rel=1e-6)
