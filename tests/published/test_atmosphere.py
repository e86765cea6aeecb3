"""Standard atmosphere against its table."""

from __future__ import annotations

import numpy as np
import pytest

from engine.atmosphere import flight_condition
from engine.quantities import FOOT

# By geopotential altitude, which is pressure altitude in the standard atmosphere.
TABLE = [
    # unit, altitude, T [K], p [Pa], rho [kg/m3], a [m/s]
    ("m", "0", "288.150", "101325.00", "1.225000", "340.294"),
    ("m", "5000", "255.650", "54019.89", "0.736116", "320.529"),
    ("m", "11000", "216.650", "22632.04", "0.363918", "295.069"),
    ("m", "15000", "216.650", "12044.55", "0.193673", "295.069"),
    ("m", "20000", "216.650", "5474.88", "0.088035", "295.069"),
    ("ft", "0", "288.150", "101325.00", "1.225000", "340.294"),
    ("ft", "1500", "285.178", "95951.79", "1.172127", "338.535"),
    ("ft", "5000", "278.244", "84307.26", "1.055546", "334.394"),
    ("ft", "10000", "268.338", "69681.64", "0.904637", "328.387"),
    ("ft", "15000", "258.432", "57181.94", "0.770816", "322.269"),
    ("ft", "20000", "248.526", "46563.24", "0.652694", "316.032"),
    ("ft", "25000", "238.620", "37600.89", "0.548946", "309.669"),
    ("ft", "30000", "228.714", "30089.56", "0.458312", "303.174"),
    ("ft", "31000", "226.733", "28744.65", "0.441653", "301.858"),
    ("ft", "33000", "222.770", "26200.74", "0.409727", "299.208"),
    ("ft", "35000", "218.808", "23842.27", "0.379597", "296.535"),
    ("ft", "36000", "216.827", "22729.28", "0.365183", "295.190"),
    ("ft", "36089.24", "216.650", "22632.04", "0.363918", "295.069"),
    ("ft", "37000", "216.650", "21662.71", "0.348331", "295.069"),
    ("ft", "39000", "216.650", "19677.29", "0.316406", "295.069"),
    ("ft", "40000", "216.650", "18753.90", "0.301558", "295.069"),
    ("ft", "41000", "216.650", "17873.84", "0.287407", "295.069"),
    ("ft", "43000", "216.650", "16235.68", "0.261066", "295.069"),
    ("ft", "45000", "216.650", "14747.66", "0.237139", "295.069"),
    ("ft", "50000", "216.650", "11597.24", "0.186481", "295.069"),
    ("ft", "51000", "216.650", "11053.02", "0.177730", "295.069"),
]
# The atmosphere library rounds the pressures at the bases of its layers: a step of 2e-6.
LAYER_STEP = 2e-6


def half_a_digit(printed: str) -> float:
    """Half of the last printed digit."""
    return 0.5 * 10.0 ** -len(printed.partition(".")[2])


@pytest.mark.source(
    "ISO 2533:1975, Standard Atmosphere, tables by geopotential altitude (ICAO Doc 7488 the same); "
    "grade from memory, the last digits own, from the standard's equations"
)
@pytest.mark.parametrize(("unit", "altitude", "t", "p", "rho", "a"), TABLE)
def test_standard_atmosphere_is_the_table(
    unit: str, altitude: str, t: str, p: str, rho: str, a: str
) -> None:
    air = flight_condition(float(altitude) * {"m": 1.0, "ft": FOOT}[unit])

    assert float(air.static_temperature) == pytest.approx(float(t), rel=0, abs=half_a_digit(t))
    assert float(air.speed_of_sound) == pytest.approx(float(a), rel=0, abs=half_a_digit(a))
    for value, printed in ((air.static_pressure, p), (air.density, rho)):
        allowed = half_a_digit(printed) + LAYER_STEP * float(printed)
        assert float(value) == pytest.approx(float(printed), rel=0, abs=allowed)


@pytest.mark.source(
    "ISO 2533:1975, Standard Atmosphere, layers: -6.5 K/km to 11 km, 0 to 20 km, +1 K/km to 32 km; "
    "grade from memory"
)
def test_lapse_rate_by_layer() -> None:
    air = flight_condition(np.array([-1000.0, 0.0, 10999.0, 11001.0, 19999.0, 20001.0]))

    assert air.lapse_rate.tolist() == [-0.0065, -0.0065, -0.0065, 0.0, 0.0, 0.001]
