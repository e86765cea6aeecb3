"""Descents on a given path, and climbs that end where a rate of climb is left."""

from __future__ import annotations

from itertools import pairwise
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from mission_files import (
    BYPASS_5,
    CONSTANT_ENGINE,
    Content,
    engine_content,
    fly_files,
    mission_content,
    segment,
)
from numpy.polynomial.chebyshev import Chebyshev

from engine.atmosphere import flight_condition
from engine.errors import InputRefused
from engine.quantities import FOOT, STANDARD_GRAVITY
from mission.errors import CannotBeFlown
from mission.results import Flight, Steps

ENGINES = {"constant": CONSTANT_ENGINE, "cycle": BYPASS_5}
FIVE_TONNES: Content = {"as_needed": None, "load": "5 t"}
CRUISE: Content = {
    "kind": "cruise",
    "pressure_altitude": "FL350",
    "mach": 0.7,
    "distance": "20 nmi",
}
DOWN: Content = {"kind": "descent", "mach": 0.7, "calibrated_airspeed": "260 kt"}
UP: Content = {"kind": "climb", "to": "FL500", "calibrated_airspeed": "280 kt", "mach": 0.7}
FOOT_A_MINUTE = FOOT / 60.0
DEGREE = np.pi / 180.0


def flown(folder: Path, *segments: Content, engine: Any = CONSTANT_ENGINE, **given: Any) -> Flight:
    mission = mission_content(list(segments), **({"fuel": FIVE_TONNES} | given))
    refinement = mission.pop("refinement", 1)
    return fly_files(folder, mission=mission, engine=engine, refinement=refinement)


def pieces(steps: Steps) -> list[slice]:
    """Spans of a segment: a joint stands twice."""
    joints = np.flatnonzero(np.diff(steps.elapsed_time) < 1e-9) + 1
    ends = [0, *joints.tolist(), len(steps.mass)]
    return [slice(a, b) for a, b in pairwise(ends)]


def slopes(steps: Steps, piece: slice, values: np.ndarray) -> np.ndarray:
    """Derivative with time of values along a span: that of the polynomial through its nodes."""
    time = steps.elapsed_time[piece]
    through = Chebyshev.fit(time, values[piece], len(time) - 1)
    return np.asarray(through.deriv()(time))


def geometric_rate(steps: Steps) -> np.ndarray:
    return np.asarray(steps.true_airspeed * np.sin(steps.flight_path_angle))


@pytest.mark.parametrize("engine", ENGINES)
@pytest.mark.parametrize("day", ["ISA", "ISA+20"])
def test_a_given_angle_is_flown_and_thrust_holds_it(tmp_path: Path, engine: str, day: str) -> None:
    """``(T - D)/W = sin(gamma) + dV/dt / g`` with the acceleration of the schedule."""
    down = DOWN | {"path_angle": "2.5 deg"}
    log = segment(flown(tmp_path, CRUISE, down, engine=ENGINES[engine], day=day), "descent")
    steps = log.steps
    assert steps.flight_path_angle == pytest.approx(-2.5 * DEGREE, rel=1e-9)
    assert log.steps.pressure_altitude[-1] == pytest.approx(1500.0 * FOOT, abs=1e-4)
    for piece in pieces(steps):
        acceleration = slopes(steps, piece, steps.true_airspeed)
        excess = (steps.thrust - steps.drag)[piece] / steps.weight[piece]
        wanted = np.sin(steps.flight_path_angle[piece]) + acceleration / STANDARD_GRAVITY
        # The polynomial through nine nodes tells a slope to some six digits.
        assert excess == pytest.approx(wanted, abs=2e-6)
    assert np.all(steps.thrust > 0.0)
    lift = steps.weight * np.cos(2.5 * DEGREE)
    assert steps.lift == pytest.approx(lift, rel=1e-9)


@pytest.mark.parametrize("engine", ENGINES)
def test_a_given_rate_takes_the_height_over_it(tmp_path: Path, engine: str) -> None:
    down = DOWN | {"rate_of_descent": "1500 ft/min"}
    log = segment(flown(tmp_path, CRUISE, down, engine=ENGINES[engine]), "descent")
    assert geometric_rate(log.steps) == pytest.approx(-1500.0 * FOOT_A_MINUTE, rel=1e-9)
    # On a standard day pressure altitude is height: 33,500 ft in 22 min 20 s.
    assert log.time == pytest.approx((35000.0 - 1500.0) / 1500.0 * 60.0, rel=1e-8)


def test_a_warm_day_is_a_longer_way_down(tmp_path: Path) -> None:
    """Height between pressure altitudes goes as temperature, in the isothermal layer exactly."""
    high = CRUISE | {"pressure_altitude": "FL450"}
    down = DOWN | {"rate_of_descent": "1000 ft/min", "to": "FL370"}
    warm, standard = (
        segment(flown(tmp_path, high, down, day=day), "descent").time for day in ("ISA+20", "ISA")
    )
    assert standard == pytest.approx(480.0, rel=1e-8)
    assert warm / standard == pytest.approx((216.65 + 20.0) / 216.65, rel=1e-8)


def test_a_steady_angle_covers_height_over_its_tangent(tmp_path: Path) -> None:
    down = DOWN | {"path_angle": "2.5 deg"}
    flight = flown(tmp_path, CRUISE, down, headwind="30 kt")
    log = segment(flight, "descent")
    away = (35000.0 - 1500.0) * FOOT / np.tan(2.5 * DEGREE)
    assert log.air_distance == pytest.approx(away, rel=1e-8)
    wind = 30.0 * 1852.0 / 3600.0 * log.time
    assert log.ground_distance == pytest.approx(away - wind, rel=1e-8)


def test_a_steeper_way_burns_less_and_an_idle_one_least(tmp_path: Path) -> None:
    shallow, steep = (
        segment(flown(tmp_path, CRUISE, DOWN | {"path_angle": angle}, engine=BYPASS_5), "descent")
        for angle in ("1.5 deg", "2.5 deg")
    )
    idle = segment(flown(tmp_path, CRUISE, DOWN, engine=BYPASS_5), "descent")
    assert shallow.fuel > steep.fuel > idle.fuel
    assert np.all(steep.steps.rating_thrust > steep.steps.thrust)


@pytest.mark.parametrize("engine", ENGINES)
@pytest.mark.parametrize("path", [{"path_angle": "2.5 deg"}, {"rate_of_descent": "1200 ft/min"}])
def test_the_integration_error_of_a_given_descent_is_honest(
    tmp_path: Path, engine: str, path: Content
) -> None:
    few, many = (
        flown(tmp_path, CRUISE, DOWN | path, engine=ENGINES[engine], refinement=n).totals
        for n in (1, 4)
    )
    moved = abs(few.block_fuel - many.block_fuel)
    assert moved <= few.integration_error + 1e-10 * few.takeoff_mass


@pytest.mark.parametrize(
    ("change", "match"),
    [
        (
            {"path_angle": "3 deg", "rate_of_descent": "1000 ft/min"},
            "give path_angle or rate_of_descent, or neither for flight idle",
        ),
        ({"path_angle": "-3 deg"}, r"segment 2.*path_angle.*greater than 0"),
        ({"path_angle": "40 deg"}, r"segment 2.*path_angle.*less than 0.5"),
        ({"path_angle": 3}, r"segment 2.*path_angle.*3 has no unit"),
        ({"rate_of_descent": "0 ft/min"}, r"segment 2.*rate_of_descent.*greater than 0"),
        ({"to": "FL360"}, r"to = 36,000 ft is not below 35,000 ft"),
    ],
)
def test_refusals(tmp_path: Path, change: Content, match: str) -> None:
    with pytest.raises(InputRefused, match=match) as refusal:
        flown(tmp_path, CRUISE, DOWN | change)
    assert refusal.value.where.endswith("mission.toml")


# --- climbs until a rate ----------------------------------------------------------------------


@pytest.mark.parametrize("fuel", [FIVE_TONNES, {"as_needed": True}], ids=["load", "as needed"])
@pytest.mark.parametrize(
    ("engine", "day", "rate"),
    [
        (engine_content(static_thrust="23 kN"), "ISA", 300.0),
        (engine_content(static_thrust="22 kN"), "ISA+20", 100.0),
        (BYPASS_5, "ISA", 100.0),
    ],
    ids=["constant", "warm", "cycle"],
)
def test_a_climb_ends_at_the_rate_asked_for(
    tmp_path: Path, engine: Any, day: str, rate: float, fuel: Content
) -> None:
    up = UP | {"until_rate_of_climb": f"{rate} ft/min"}
    flight = flown(tmp_path, up, engine=engine, day=day, fuel=fuel, payload="3 t")
    assert flight.failure is None
    steps = segment(flight, "climb").steps
    assert 25000.0 * FOOT < steps.pressure_altitude[-1] < 50000.0 * FOOT - 1.0
    rates = geometric_rate(steps)
    assert rates[-1] == pytest.approx(rate * FOOT_A_MINUTE, rel=1e-4)
    assert np.all(rates[:-1] > rate * FOOT_A_MINUTE)


def test_the_time_of_a_climb_to_a_low_rate_is_resolved(tmp_path: Path) -> None:
    """Time grows without end as the rate fades: the steps get closer towards the end."""
    up = UP | {"until_rate_of_climb": "30 ft/min"}
    weak = engine_content(static_thrust="28 kN")
    few, many = (flown(tmp_path, up, engine=weak, refinement=n) for n in (1, 4))
    assert few.failure is None
    assert segment(few, "climb").time == pytest.approx(segment(many, "climb").time, rel=1e-5)
    moved = abs(few.totals.block_fuel - many.totals.block_fuel)
    assert moved <= few.totals.integration_error


def test_a_climb_goes_no_higher_than_it_may(tmp_path: Path) -> None:
    up = UP | {"until_rate_of_climb": "100 ft/min", "to": "FL330"}
    steps = segment(flown(tmp_path, up), "climb").steps
    assert steps.pressure_altitude[-1] == pytest.approx(33000.0 * FOOT, abs=1e-4)
    assert geometric_rate(steps)[-1] > 200.0 * FOOT_A_MINUTE


def test_what_follows_begins_where_the_climb_ends(tmp_path: Path) -> None:
    up = UP | {"until_rate_of_climb": "300 ft/min"}
    weak = engine_content(static_thrust="23 kN")
    away = {"kind": "cruise", "distance": "400 nmi"}
    flight = flown(tmp_path, up, away, DOWN, engine=weak, fuel={"as_needed": True})
    top = segment(flight, "climb").steps.pressure_altitude[-1]
    assert segment(flight, "cruise").steps.pressure_altitude == pytest.approx(top, abs=1e-3)
    rate = geometric_rate(segment(flight, "climb").steps)[-1]
    assert rate == pytest.approx(300.0 * FOOT_A_MINUTE, rel=1e-4)


def test_a_climb_that_begins_too_slow_says_so(tmp_path: Path) -> None:
    up = UP | {"until_rate_of_climb": "9000 ft/min"}
    with pytest.raises(CannotBeFlown, match=r"below until_rate_of_climb = 45\.72 m/s at 0 ft"):
        flown(tmp_path, up, engine=BYPASS_5)


def test_the_lighter_the_higher(tmp_path: Path) -> None:
    weak = engine_content(static_thrust="30 kN")
    up = UP | {"until_rate_of_climb": "300 ft/min"}
    tops = [
        segment(flown(tmp_path, up, engine=weak, payload=payload), "climb")
        .steps.pressure_altitude[-1]
        for payload in ("1 t", "4 t")
    ]  # fmt: skip
    assert tops[0] > tops[1] + 300.0


@pytest.mark.parametrize(
    ("change", "match"),
    [
        ({"until_rate_of_climb": "0 ft/min"}, r"until_rate_of_climb.*greater than 0"),
        ({"until_rate_of_climb": "300 ft"}, r"until_rate_of_climb.*'ft' is not a unit of speed"),
        ({"path": "best rate", "to_mach": 0.7}, "path finds the speeds: leave out"),
        ({"to_mach": 0.7}, "path and to_mach, the Mach number at its end, go together"),
    ],
)
def test_climb_refusals(tmp_path: Path, change: Content, match: str) -> None:
    with pytest.raises(InputRefused, match=match):
        flown(tmp_path, UP | change)


def test_temperature_of_a_table_enters_the_acceleration(tmp_path: Path) -> None:
    """Against the true airspeed of neighbouring altitudes: the lapse rate is the table's."""
    table = {"pressure_altitude": ["0 ft", "FL200", "FL400"], "day": ["ISA+20", "ISA-10", "ISA+5"]}
    steps = segment(flown(tmp_path, UP | {"to": "FL360"}, air=table), "climb").steps
    for piece in pieces(steps):
        acceleration = slopes(steps, piece, steps.true_airspeed)
        excess = (steps.thrust - steps.drag)[piece] / steps.weight[piece]
        wanted = np.sin(steps.flight_path_angle[piece]) + acceleration / STANDARD_GRAVITY
        assert excess == pytest.approx(wanted, rel=1e-4)
    kinks = [round(float(steps.pressure_altitude[p][0]) / FOOT) for p in pieces(steps)]
    assert 20000 in kinks
    days = np.interp(steps.pressure_altitude / FOOT, [0.0, 20000.0, 40000.0], [20.0, -10.0, 5.0])
    sound = flight_condition(steps.pressure_altitude, 0.0, days).speed_of_sound
    assert steps.true_airspeed == pytest.approx(steps.mach * sound, rel=1e-7)
