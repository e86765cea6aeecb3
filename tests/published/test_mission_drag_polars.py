"""Published polars over Mach number, read from aircraft files."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest
from mission_files import aircraft_content, write

from mission.aerodynamics import best_lift_coefficient, drag_breakdown, drag_coefficient
from mission.aircraft import load_aircraft
from mission.polars.interface import Polar

NICOLAI = (
    "L. M. Nicolai and G. E. Carichner, Fundamentals of Aircraft and Airship Design, vol. I "
    "(2010), Table 3.1, a light fighter at 36,000 ft and 40 lb/ft2; read at second hand"
)
BRYSON = (
    "A. E. Bryson, M. N. Desai and W. C. Hoffman, Energy-state approximation in performance "
    "optimization of supersonic aircraft, J. Aircraft 6(6), 1969, table of aerodynamics; read at "
    "second hand"
)
MACHS = np.array([0.5, 0.6, 0.7, 0.8, 0.9, 1.0])
ZERO_LIFT = [0.0167, 0.0167, 0.0167, 0.0167, 0.018, 0.0243]
FACTORS = [0.17, 0.17, 0.17, 0.17, 0.17, 0.18]
DRAG = np.array([0.056, 0.035, 0.027, 0.023, 0.022, 0.027])
POUND_FORCE_A_SQUARE_FOOT = 4.4482216152605 / 0.3048**2


def polar_of(folder: Path, machs: list[float], zero_lift: list[float], k: list[float]) -> Polar:
    content = aircraft_content(drag_polar=None) | {
        "drag_polar": {
            "machs": machs,
            "zero_lift_drag_coefficient": zero_lift,
            "induced_drag_factor": k,
        }
    }
    return load_aircraft(write(folder, "aircraft", content)).polar


@pytest.mark.source(NICOLAI)
def test_drag_of_a_light_fighter(tmp_path: Path) -> None:
    """As printed but for M 0.6, where the table's own values make 0.0357 and it prints 0.035."""
    polar = polar_of(tmp_path, [float(m) for m in MACHS], ZERO_LIFT, FACTORS)
    pressure = 22730.0  # Pa, 36,000 ft: 474.7 lb/ft2, ISO 2533:1975
    lift = 40.0 * POUND_FORCE_A_SQUARE_FOOT / (0.7 * pressure * MACHS**2)
    drag = drag_coefficient(polar, lift, MACHS)
    is_rounded = MACHS != 0.6
    assert drag[is_rounded] == pytest.approx(DRAG[is_rounded], abs=0.0005)
    assert drag[~is_rounded] == pytest.approx(0.0357, abs=5e-5)


@pytest.mark.source(NICOLAI)
def test_best_ratio_of_a_light_fighter(tmp_path: Path) -> None:
    """Printed 9.3 near M 0.62, and 0.943 of it, 8.87, at 1/sqrt(2) of its lift coefficient."""
    polar = polar_of(tmp_path, [float(m) for m in MACHS], ZERO_LIFT, FACTORS)
    best = best_lift_coefficient(polar, 0.62)
    # Half a digit of 9.3 and the digits of its CD0 and K, of which 0.5 in 167 and in 17 are
    # 0.0015 and 0.015 of a product under a root.
    assert best / drag_coefficient(polar, best, 0.62) == pytest.approx(9.3, abs=0.05 + 0.08)
    slower = best / 2.0**0.5
    assert slower == pytest.approx(0.222, abs=0.0005)
    assert slower / drag_coefficient(polar, slower, 0.62) == pytest.approx(8.87, abs=0.03)


@pytest.mark.source(BRYSON)
def test_an_interceptor_through_the_speed_of_sound(tmp_path: Path) -> None:
    """The table is held where it is given, K being eta over the slope of lift, and not passed."""
    machs = [0.0, 0.4, 0.8, 0.9, 1.0, 1.2, 1.4, 1.6, 1.8]
    zero_lift = [0.013, 0.013, 0.013, 0.014, 0.031, 0.041, 0.039, 0.036, 0.035]
    slope = np.array([3.44, 3.44, 3.44, 3.58, 4.44, 3.44, 3.01, 2.86, 2.44])
    eta = np.array([0.54, 0.54, 0.54, 0.75, 0.79, 0.78, 0.89, 0.93, 0.93])
    polar = polar_of(tmp_path, machs, zero_lift, [float(k) for k in eta / slope])
    angle = np.array([[0.02], [0.10]])  # rad of incidence
    expected = np.array(zero_lift) + eta * slope * angle**2
    assert drag_coefficient(polar, slope * angle, machs) == pytest.approx(expected, rel=1e-12)
    between = drag_breakdown(polar, 0.0, np.linspace(0.0, 1.8, 1801)).zero_lift
    assert between.min() == pytest.approx(0.013, rel=1e-12)
    assert between.max() == pytest.approx(0.041, rel=1e-12)
    assert np.all(between[:801] == pytest.approx(0.013, rel=1e-12))
