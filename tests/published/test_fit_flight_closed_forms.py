"""Factors that make a cruise come out, against the closed forms solved for them.

A level cruise at constant consumption burns by the product of the two factors alone, so that either
of them makes a known fuel come out.
"""

from __future__ import annotations

from math import atan, exp, log, sqrt
from pathlib import Path
from typing import Any

import pytest
from mission_files import CONSTANT_ENGINE, aircraft_content, load_all, mission_content

from mission.questions.fit_flight import FlightFit, fit_flight
from mission.questions.told_factors import DRAG, FLOW

HALE = (
    "F. J. Hale, Introduction to Aircraft Performance, Selection and Design, and A. Miele, Flight "
    "Mechanics vol. I: cruise of a jet at constant consumption; from memory"
)
pytestmark = pytest.mark.source(HALE)

G = 9.80665
SOUND = sqrt(1.4 * 287.05287 * 216.65)  # m/s, ISO 2533:1975, 11 to 20 km
CONSUMPTION = 0.6 / 3600.0  # 1/s, weight of fuel per thrust
CD0, K, AREA, MACH = 0.0175, 0.042, 62.0, 0.74
MASS, DISTANCE = 25000.0, 2000e3  # kg at the start: 15.5 t empty, 2.5 t payload, 7 t fuel
KNOWN = 2500.0  # kg, as if it had been read from a gauge
BOTH = pytest.mark.parametrize("key", [DRAG, FLOW])


def fitted(folder: Path, key: str, cruise: dict[str, Any]) -> FlightFit:
    """The factor ``key`` of a cruise that is all of its mission."""
    mission = mission_content(
        [{"kind": "cruise", "distance": f"{DISTANCE} m", "mach": MACH, **cruise}],
        fuel={"as_needed": None, "load": "7 t"},
        known={"block_fuel": f"{KNOWN} kg"},
    )
    return fit_flight(*load_all(folder, aircraft_content(), CONSTANT_ENGINE, mission), [key])


def value(found: FlightFit, key: str) -> float:
    (factor,) = (factor for factor in found.factors if factor.is_free)
    assert factor.key == key
    return factor.value


@BOTH
def test_cruise_climb(tmp_path: Path, key: str) -> None:
    """The Breguet equation: factor = (V L/D / (c R)) ln(m0 / m1)."""
    cruise = {"holds": "mach and lift coefficient", "lift_coefficient": 0.55}
    found = fitted(tmp_path, key, cruise)
    lift_to_drag = 0.55 / (CD0 + K * 0.55**2)
    ways = MACH * SOUND * lift_to_drag / (CONSUMPTION * DISTANCE)
    assert value(found, key) == pytest.approx(ways * log(MASS / (MASS - KNOWN)), rel=1e-5)


@BOTH
def test_constant_altitude_and_speed(tmp_path: Path, key: str) -> None:
    """Factor = (2 (L/D)max V / (c R)) (atan x0 - atan x1), x = CL / CL of greatest L/D."""
    found = fitted(tmp_path, key, {"pressure_altitude": "12500 m"})
    pressure = 22632.0 * exp(-G * 1500.0 / (287.05287 * 216.65))
    lift_per_coefficient = 0.7 * pressure * MACH**2 * AREA
    x0, x1 = (mass * G / lift_per_coefficient / sqrt(CD0 / K) for mass in (MASS, MASS - KNOWN))
    best = 0.5 / sqrt(CD0 * K)
    expected = 2.0 * best * MACH * SOUND / (CONSUMPTION * DISTANCE) * (atan(x0) - atan(x1))
    assert value(found, key) == pytest.approx(expected, rel=1e-5)
