"""Flight conditions: shapes, days and what is refused."""

from __future__ import annotations

import numpy as np
import pytest

from engine.atmosphere import flight_condition
from engine.errors import OutOfRange


def test_on_a_warm_day_pressure_stays_and_temperature_shifts() -> None:
    standard, warm = flight_condition(10000.0), flight_condition(10000.0, 0.0, 15.0)

    assert warm.static_pressure == standard.static_pressure
    assert float(warm.static_temperature - standard.static_temperature) == pytest.approx(
        15.0, rel=1e-13
    )
    gas_law = warm.static_pressure / (287.05287 * warm.static_temperature)
    # Gas constant of ISO 2533:1975 to its printed digits.
    assert float(warm.density) == pytest.approx(float(gas_law), rel=1e-8)


def test_speed_of_sound_makes_true_airspeed() -> None:
    flight = flight_condition(0.0, 0.5)

    assert float(flight.true_airspeed) == pytest.approx(0.5 * 340.294, abs=3e-4)


def test_shapes_broadcast() -> None:
    flight = flight_condition([[0.0], [5000.0]], [0.1, 0.2, 0.3], 5.0)

    assert flight.shape == flight.static_pressure.shape == flight.lapse_rate.shape == (2, 3)
    assert flight.with_mach(0.5).mach.tolist() == [[0.5] * 3] * 2
    assert flight.at((1, 2)).mach == 0.3
    assert flight_condition(0.0).shape == ()


def test_an_altitude_is_answered_alone_as_in_a_batch() -> None:
    altitudes = np.linspace(-2000.0, 30000.0, 65)

    together = flight_condition(altitudes)

    alone = [float(flight_condition(altitude).static_pressure) for altitude in altitudes]
    assert together.static_pressure.tolist() == alone


@pytest.mark.parametrize(
    ("arguments", "said"),
    [
        ((-2001.0,), "pressure altitude = -2001 m is outside -2000 to 30000 m"),
        (([0.0, 40000.0],), "pressure altitude = 40000 m is outside"),
        ((float("nan"),), "pressure altitude = nan m is outside"),
        ((0.0, -0.1), "Mach number = -0.1 is outside 0 to 5"),
        ((0.0, float("nan")), "Mach number = nan"),
        ((0.0, 0.0, 150.0), "temperature deviation = 150 K is outside -100 to 100 K"),
        ((0.0, 0.0, float("nan")), "temperature deviation = nan K"),
    ],
)
def test_outside_its_range_it_refuses(arguments: tuple[float, ...], said: str) -> None:
    with pytest.raises(OutOfRange, match=said):
        flight_condition(*arguments)
