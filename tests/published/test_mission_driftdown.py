"""Driftdowns flown through input files, against quadrature and closed forms.

A twin with a parabolic polar loses an engine; the other's thrust goes with a power of density and
its fuel flow with thrust. Quasi-steady descent, lift being weight times the cosine of the path:
``sin(gamma) (1 + V/g dV/dh) = (T - D) / W``, of which nothing here is the program's own.
"""

from __future__ import annotations

from collections.abc import Callable
from math import atanh, exp, log, sqrt
from pathlib import Path

import numpy as np
import pytest
from mission_files import Content, aircraft_content, engine_content, fly_files, mission_content
from mission_files import segment as log_of
from numpy.typing import NDArray
from scipy.integrate import solve_ivp

from mission.results import SegmentLog

Array = NDArray[np.float64]
Speed = Callable[[float], float]  # true airspeed [m/s] by height [m]
QUASI_STEADY = (
    "F. J. Hale, Introduction to Aircraft Performance, Selection and Design: quasi-steady descent "
    "of a jet on a parabolic polar, integrated here by SciPy's DOP853; grade from memory"
)
EXACT = (
    "The same equation in closed form where Mach number is held in the isothermal layer, thrust "
    "goes with density and lift is weight: pressure is a hyperbolic tangent of time; own arithmetic"
)
LINEAR = (
    "D. P. Raymer, Aircraft Design: A Conceptual Approach, ch. 17, with L. M. Nicolai and G. E. "
    "Carichner, Fundamentals of Aircraft and Airship Design, vol. I: vertical speed linear in "
    "altitude, time (1/a) ln(Vv2/Vv1); read at second hand"
)
G, GAS, KNOT = 9.80665, 287.05287, 1852.0 / 3600.0
LAPSE, TROPOPAUSE, COLD = 0.0065, 11000.0, 216.65  # ISO 2533:1975
SEA_LEVEL_SOUND = sqrt(1.4 * GAS * 288.15)
SOUND = sqrt(1.4 * GAS * COLD)
SCALE_HEIGHT = GAS * COLD / G
CD0, K, AREA, MASS = 0.0175, 0.042, 62.0, 22000.0
CONSUMPTION = 0.6 / 3600.0 / G  # kg/(N s)


def temperature(height: float) -> float:
    return max(288.15 - LAPSE * height, COLD)


def pressure(height: float) -> float:
    low = min(height, TROPOPAUSE)
    base = 101325.0 * (1.0 - LAPSE * low / 288.15) ** (G / (GAS * LAPSE))
    return base * exp(-(height - low) / SCALE_HEIGHT)


def at_mach(mach: float) -> Speed:
    return lambda height: mach * sqrt(1.4 * GAS * temperature(height))


def at_airspeed(knots: float) -> Speed:
    """At a calibrated airspeed."""
    impact = (1.0 + 0.2 * (knots * KNOT / SEA_LEVEL_SOUND) ** 2) ** 3.5 - 1.0

    def speed(height: float) -> float:
        ratio = 1.0 + impact * 101325.0 / pressure(height)
        mach = sqrt(5.0 * (ratio ** (2.0 / 7.0) - 1.0))
        return mach * sqrt(1.4 * GAS * temperature(height))

    return speed


def driftdown(
    folder: Path,
    given: Content,
    *,
    thrust: float,
    exponent: float,
    start: float,
    consumption: str = "0.6 1/h",
) -> SegmentLog:
    """From cruise at Mach 0.72: an engine fails, and the other leads down."""
    cruise = {"kind": "cruise", "distance": "1 km", "mach": 0.72, "pressure_altitude": f"{start} m"}
    flight = fly_files(
        folder,
        mission=mission_content(
            [cruise, {"kind": "engine failure"}, {"kind": "driftdown", **given}],
            payload="1 t",
            fuel={"as_needed": None, "load": "6 t"},
        ),
        aircraft=aircraft_content(masses={"operating_empty": f"{MASS - 7000.0} kg"}),
        engine=engine_content(
            specific_fuel_consumption=consumption,
            static_thrust=f"{thrust!r} N",
            density_exponent=exponent,
        ),
    )
    assert flight.failure is None
    return log_of(flight, "driftdown")


def sink(
    height: float, mass: float, speed: Speed, thrust: float, exponent: float
) -> tuple[float, float, float]:
    """Sine of the path, negative downwards, true airspeed [m/s], thrust [N]."""
    density = pressure(height) / (GAS * temperature(height))
    true = speed(height)
    factor = 1.0 + true / G * (speed(height + 0.5) - speed(height - 0.5))
    force = thrust * (density / 1.225) ** exponent
    dynamic = 0.5 * density * true**2 * AREA
    weight = mass * G
    # K (W cos)^2 / (q S): a quadratic in the sine.
    induced = K * weight**2 / dynamic
    excess = force - CD0 * dynamic - induced
    root = sqrt((weight * factor) ** 2 - 4.0 * induced * excess)
    return 2.0 * excess / (weight * factor + root), true, force


# --- quadrature -------------------------------------------------------------------------------


@pytest.mark.source(QUASI_STEADY)
@pytest.mark.parametrize(
    ("given", "speed", "thrust", "exponent"),
    [
        ({"mach": 0.55}, at_mach(0.55), 28000.0, 1.0),
        ({"calibrated_airspeed": "205 kt"}, at_airspeed(205.0), 28000.0, 1.0),
        ({"calibrated_airspeed": "205 kt"}, at_airspeed(205.0), 23000.0, 0.7),
    ],
    ids=["Mach number", "calibrated airspeed", "thrust with another power"],
)
def test_driftdown_through_the_tropopause(
    tmp_path: Path, given: Content, speed: Speed, thrust: float, exponent: float
) -> None:
    found = driftdown(tmp_path, given, thrust=thrust, exponent=exponent, start=12500.0)
    top, bottom = found.steps.pressure_altitude[[0, -1]].tolist()
    assert bottom < 10000.0 < TROPOPAUSE < top

    def rates(height: float, state: Array) -> list[float]:
        sine, true, force = sink(height, state[2], speed, thrust, exponent)
        over_ground = sqrt(1.0 - sine**2) / sine
        return [1.0 / (true * sine), over_ground, -force * CONSUMPTION / (true * sine)]

    state = np.array([0.0, 0.0, found.mass_start])
    for high, low in ((top, TROPOPAUSE), (TROPOPAUSE, bottom)):
        way = solve_ivp(rates, (high, low), state, method="DOP853", rtol=1e-11, atol=1e-9)
        state = way.y[:, -1]
    time, distance, mass = state.tolist()
    # Nine nodes a span are worth 2e-6 here, and pressure is known to 3e-6 of itself.
    assert found.time == pytest.approx(time, rel=5e-6)
    assert found.ground_distance == pytest.approx(distance, rel=5e-6)
    assert found.fuel == pytest.approx(found.mass_start - mass, rel=5e-6)
    # It ends within 0.2 m of where the descent has slowed down to 100 ft/min.
    sine, true, _ = sink(bottom, mass, speed, thrust, exponent)
    assert -true * sine == pytest.approx(0.508, rel=5e-4)


# --- closed forms: Mach 0.6 in the isothermal layer, at one mass --------------------------------

LEVEL_HELD = 22000.0  # Pa
FORCE = 0.7 * 0.6**2 * AREA  # N of dynamic pressure on the wing per Pa of static pressure
INDUCED = K * (MASS * G) ** 2 / FORCE  # N Pa: induced drag times pressure, lift being weight
# Thrust less zero-lift drag over pressure, so that thrust is drag at the level; from it thrust.
SPARE = INDUCED / LEVEL_HELD**2
THRUST = (SPARE + FORCE * CD0) * GAS * COLD * 1.225
TRUE = 0.6 * SOUND


def without_burning(folder: Path, start: float, until: float) -> SegmentLog:
    found = driftdown(
        folder,
        {"mach": 0.6, "until_rate_of_descent": f"{until} m/s"},
        thrust=THRUST,
        exponent=1.0,
        start=start,
        consumption="0.000001 1/h",
    )
    assert found.mass_end == pytest.approx(MASS, rel=1e-6)
    assert found.steps.pressure_altitude.min() > TROPOPAUSE
    return found


@pytest.mark.source(EXACT)
@pytest.mark.parametrize("start", [12500.0, 14000.0])
def test_pressure_is_a_hyperbolic_tangent_of_time(tmp_path: Path, start: float) -> None:
    """``dp/dt = V (induced / W - spare p^2 / W) / H``, H the scale height."""
    found = without_burning(tmp_path, start, 0.508)
    top, bottom = (pressure(height) for height in found.steps.pressure_altitude[[0, -1]])

    def time(induced: float) -> float:
        held = sqrt(induced / SPARE)
        rate = TRUE * SPARE * held / (MASS * G * SCALE_HEIGHT)
        return (atanh(bottom / held) - atanh(top / held)) / rate

    # Lift is a little less than weight: never less than at the steepest, where the descent begins.
    least_lift = float(np.cos(found.steps.flight_path_angle).min())
    assert time(INDUCED) < found.time < time(INDUCED * least_lift**2)
    assert found.time == pytest.approx(time(INDUCED), rel=1e-3)


@pytest.mark.source(LINEAR)
def test_near_its_level_vertical_speed_is_linear_in_altitude(tmp_path: Path) -> None:
    """The time is ``(1/a) ln(v2/v1)``, a being the slope of vertical speed over altitude."""
    level = 11000.0 + SCALE_HEIGHT * log(pressure(11000.0) / LEVEL_HELD)
    found = without_burning(tmp_path, level + 300.0, 0.1)
    steps = found.steps
    first, last = (steps.true_airspeed * np.sin(steps.flight_path_angle))[[0, -1]].tolist()
    top, bottom = steps.pressure_altitude[[0, -1]].tolist()
    slope = (last - first) / (bottom - top)
    # Vertical speed goes with the hyperbolic sine of height over scale height, at most 0.047 here:
    # linear to 4e-4.
    assert found.time == pytest.approx(log(last / first) / slope, rel=4e-4)
