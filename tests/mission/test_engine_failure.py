"""An engine fails, and the way down to the level that the others hold."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import numpy as np
import pytest
from mission_files import (
    BYPASS_5,
    Content,
    aircraft_content,
    engine_content,
    fly_files,
    mission_content,
    segment,
)
from scipy.integrate import quad
from scipy.optimize import brentq

from engine import load_engine
from engine.atmosphere import flight_condition
from engine.errors import InputRefused
from engine.quantities import FOOT, KNOT, STANDARD_GRAVITY
from mission.airspeeds import calibrated_airspeed
from mission.errors import CannotBeFlown
from mission.results import Flight, Steps

AREA, ZERO_LIFT, INDUCED = 62.0, 0.0175, 0.042  # of the test twin
SWEPT = 1e-9
FOOT_A_MINUTE = FOOT / 60.0
FIVE_TONNES: Content = {"as_needed": None, "load": "5 t"}
CRUISE: Content = {
    "kind": "cruise",
    "pressure_altitude": "FL350",
    "mach": 0.7,
    "distance": "50 nmi",
}
FAILS: Content = {"kind": "engine failure"}
DRIFTS: Content = {"kind": "driftdown", "mach": 0.5}
# Hardly any fuel is burnt, so that mass is what it was and time is a plain integral.
LASTING = engine_content(static_thrust="20 kN", specific_fuel_consumption="1e-7 1/h")


def flown(folder: Path, *segments: Content, engine: Any = LASTING, **given: Any) -> Flight:
    aircraft = given.pop("aircraft", aircraft_content())
    refinement = given.pop("refinement", 1)
    mission = mission_content(list(segments), **({"fuel": FIVE_TONNES} | given))
    return fly_files(
        folder, mission=mission, engine=engine, aircraft=aircraft, refinement=refinement
    )


def drag(mach: Any, altitude: Any, lift: Any) -> Any:
    """Drag of the clean twin [N]."""
    force = 0.7 * flight_condition(altitude).static_pressure * mach**2 * AREA
    return force * (ZERO_LIFT + INDUCED * (lift / force) ** 2)


def geometric_rate(steps: Steps) -> Any:
    return steps.true_airspeed * np.sin(steps.flight_path_angle)


def test_a_dead_engine_drags_and_the_other_gives_the_thrust(tmp_path: Path) -> None:
    """Level flight on one of two cycle engines."""
    low = CRUISE | {"pressure_altitude": "FL150", "mach": 0.45, "rating": "maximum_continuous"}
    flight = flown(tmp_path, low, FAILS, low | {"name": "on one"}, engine=BYPASS_5)
    assert flight.failure is None
    steps = segment(flight, "on one").steps
    air = flight_condition(15000.0 * FOOT, 0.45)
    engine = load_engine(BYPASS_5)
    unlit = -float(engine.windmilling(air).net_thrust)
    assert unlit > 200.0
    clean = drag(0.45, 15000.0 * FOOT, steps.weight)
    assert steps.drag == pytest.approx(clean + unlit, rel=1e-8)
    assert steps.thrust == pytest.approx(steps.drag, rel=1e-8)
    one = engine.at(air, rating="maximum_continuous")
    assert steps.rating_thrust == pytest.approx(float(one.net_thrust), rel=1e-8)
    state = engine.at(air, rating="maximum_continuous", net_thrust=float(steps.drag[0]))
    assert steps.fuel_flow[0] == pytest.approx(float(state.fuel_flow), rel=1e-7)


def test_a_failure_takes_no_time_and_no_fuel(tmp_path: Path) -> None:
    flight = flown(tmp_path, CRUISE, FAILS, DRIFTS)
    log = segment(flight, "engine failure")
    assert (log.time, log.fuel, log.ground_distance) == (0.0, 0.0, 0.0)
    assert log.mass_end == log.mass_start == segment(flight, "cruise").mass_end


@pytest.mark.parametrize(("count", "out"), [(3, 1), (4, 2), (4, 3)])
def test_so_many_engines_are_left(tmp_path: Path, count: int, out: int) -> None:
    plane = aircraft_content(engine_count=count)
    engine = engine_content(static_thrust="60 kN")
    after = CRUISE | {"name": "after"}
    flight = flown(tmp_path, CRUISE, FAILS | {"engines": out}, after, engine=engine, aircraft=plane)
    before, left = (segment(flight, name).steps.rating_thrust[0] for name in ("cruise", "after"))
    assert left == pytest.approx(before * (count - out) / count, rel=SWEPT)


def test_failures_add_up(tmp_path: Path) -> None:
    plane, engine = aircraft_content(engine_count=4), engine_content(static_thrust="60 kN")
    second = FAILS | {"name": "another"}
    after = CRUISE | {"name": "after"}
    flight = flown(tmp_path, CRUISE, FAILS, second, after, engine=engine, aircraft=plane)
    before, left = (segment(flight, name).steps.rating_thrust[0] for name in ("cruise", "after"))
    assert left == pytest.approx(0.5 * before, rel=SWEPT)


# --- driftdown --------------------------------------------------------------------------------


def sine(altitude: float, mass: float) -> float:
    """Sine of the path angle at Mach 0.5 on one lasting engine, lift being ``W cos(gamma)``."""
    air = flight_condition(altitude, 0.5)
    weight = mass * STANDARD_GRAVITY
    thrust = 20e3 * (float(air.density) / 1.225) ** 0.8
    # Mach number held: true airspeed falls with the speed of sound where it gets colder.
    kinetic = float(air.true_airspeed) ** 2 / (2.0 * float(air.static_temperature))
    factor = 1.0 + kinetic / STANDARD_GRAVITY * float(air.lapse_rate)

    def excess(sine: float) -> float:
        resistance = float(drag(0.5, altitude, weight * np.sqrt(1.0 - sine**2)))
        return thrust - resistance - weight * sine * factor

    return float(brentq(excess, -0.3, 0.3, xtol=1e-15))


@pytest.mark.parametrize("rate", [100.0, 300.0])
def test_a_driftdown_takes_the_time_of_the_quasi_steady_integral(
    tmp_path: Path, rate: float
) -> None:
    drifts = DRIFTS | {"until_rate_of_descent": f"{rate} ft/min"}
    flight = flown(tmp_path, CRUISE | {"mach": 0.5}, FAILS, drifts)
    log = segment(flight, "driftdown")
    steps, mass = log.steps, log.mass_start

    def sink(altitude: float) -> float:
        return -float(flight_condition(altitude, 0.5).true_airspeed) * sine(altitude, mass)

    end = float(steps.pressure_altitude[-1])
    assert sink(end) == pytest.approx(rate * FOOT_A_MINUTE, rel=1e-4)
    assert -geometric_rate(steps)[-1] == pytest.approx(rate * FOOT_A_MINUTE, rel=1e-4)
    start = 35000.0 * FOOT
    time, _ = quad(lambda h: 1.0 / sink(h), end, start, epsrel=1e-10)
    assert log.time == pytest.approx(time, rel=1e-5)

    def forward(altitude: float) -> float:
        angle = sine(altitude, mass)
        return float(np.sqrt(1.0 - angle**2) / -angle)

    away, _ = quad(forward, end, start, epsrel=1e-10)
    assert log.ground_distance == pytest.approx(away, rel=1e-5)


@pytest.mark.parametrize("engine", ["constant", "cycle"])
def test_a_driftdown_ends_at_the_rate_asked_for(tmp_path: Path, engine: str) -> None:
    power = engine_content(static_thrust="22 kN") if engine == "constant" else BYPASS_5
    mach = 0.5 if engine == "constant" else 0.6
    drifts = DRIFTS | {"mach": mach, "until_rate_of_descent": "200 ft/min"}
    flight = flown(tmp_path, CRUISE, FAILS, drifts, engine=power, payload="3.5 t", day="ISA+10")
    assert flight.failure is None
    steps = segment(flight, "driftdown").steps
    rates = geometric_rate(steps)
    assert rates[-1] == pytest.approx(-200.0 * FOOT_A_MINUTE, rel=1e-4)
    assert np.all(rates[:-1] < -200.0 * FOOT_A_MINUTE)
    assert steps.pressure_altitude[-1] < 35000.0 * FOOT - 100.0


def test_windmilling_brings_it_down_further(tmp_path: Path) -> None:
    """Its drag is in every step of the way down."""
    high = CRUISE | {"pressure_altitude": "FL390"}
    flight = flown(tmp_path, high, FAILS, DRIFTS | {"mach": 0.6}, engine=BYPASS_5)
    steps = segment(flight, "driftdown").steps
    air = flight_condition(steps.pressure_altitude, 0.6)
    engine = load_engine(BYPASS_5)
    unlit = -engine.windmilling(air).net_thrust
    assert np.all(unlit > 100.0)
    assert steps.drag == pytest.approx(
        drag(0.6, steps.pressure_altitude, steps.lift) + unlit, rel=1e-6
    )
    assert steps.thrust == pytest.approx(
        engine.at(air, rating="maximum_continuous").net_thrust, rel=1e-6
    )
    clean = (steps.thrust - steps.drag + unlit) * steps.true_airspeed / steps.weight
    assert clean[-1] > -100.0 * FOOT_A_MINUTE  # without it this level would be held longer


def test_left_alone_it_drifts_at_the_airspeed_of_least_drag(tmp_path: Path) -> None:
    flight = flown(tmp_path, CRUISE, FAILS, {"kind": "driftdown"})
    steps = segment(flight, "driftdown").steps
    airspeed = calibrated_airspeed(steps.mach, steps.static_pressure)
    assert airspeed == pytest.approx(float(airspeed[0]), rel=1e-9)
    # Least drag at CL = sqrt(CD0/K); looked for among 400 Mach numbers, and drag is flat there.
    force = steps.weight[0] / np.sqrt(ZERO_LIFT / INDUCED)
    mach = np.sqrt(force / (0.7 * steps.static_pressure[0] * AREA))
    assert steps.mach[0] == pytest.approx(mach, abs=2e-3)


def test_the_slower_the_end_the_lower(tmp_path: Path) -> None:
    ends = [
        segment(
            flown(tmp_path, CRUISE, FAILS, DRIFTS | {"until_rate_of_descent": rate}), "driftdown"
        ).steps.pressure_altitude[-1]
        for rate in ("100 ft/min", "200 ft/min", "400 ft/min")
    ]
    assert ends == sorted(ends)
    assert ends[1] - ends[0] > 100.0


def test_it_flies_on_below_the_level_of_the_driftdown(tmp_path: Path) -> None:
    """Lower and at a speed that one engine sustains, then down and landed."""
    engine = engine_content(static_thrust="19 kN")
    lower = {"kind": "descent", "name": "lower", "to": "FL180", "mach": 0.5}
    home = {"kind": "cruise", "name": "home", "distance": "rest", "speed": "maximum range",
            "rating": "maximum_continuous"}  # fmt: skip
    down = {"kind": "descent", "calibrated_airspeed": "230 kt"}
    land = {"kind": "approach", "time": "3 min"}
    flight = flown(
        tmp_path, CRUISE, FAILS, DRIFTS, lower, home, down, land, engine=engine, distance="500 nmi",
        fuel={"as_needed": True}, headwind="20 kt",
    )  # fmt: skip
    assert flight.failure is None
    assert flight.totals.ground_distance == pytest.approx(500.0 * 1852.0, abs=1.0)
    rows = [log for log in flight.segments if log.purpose == "mission"]
    for log in rows:
        slack = 1e-12 * log.mass_start
        assert abs(log.mass_start - log.mass_end - log.fuel) <= slack, log.name
    steps = segment(flight, "home").steps
    assert steps.thrust == pytest.approx(steps.drag, rel=SWEPT)
    density = float(flight_condition(18000.0 * FOOT).density)
    assert steps.rating_thrust == pytest.approx(19e3 * (density / 1.225) ** 0.8, rel=SWEPT)


@pytest.mark.parametrize("engine", ["constant", "cycle"])
def test_the_integration_error_of_a_driftdown_is_honest(tmp_path: Path, engine: str) -> None:
    power = engine_content(static_thrust="20 kN") if engine == "constant" else BYPASS_5
    drifts = DRIFTS | {"mach": 0.5 if engine == "constant" else 0.6}
    few, many = (
        flown(tmp_path, CRUISE, FAILS, drifts, engine=power, refinement=n).totals
        for n in (1, 4 if engine == "constant" else 2)
    )
    moved = abs(few.block_fuel - many.block_fuel)
    assert moved <= few.integration_error + 1e-10 * few.takeoff_mass
    assert few.integration_error < 1e-4 * few.block_fuel


def test_a_strong_engine_needs_no_driftdown(tmp_path: Path) -> None:
    strong = engine_content(static_thrust="55 kN")
    with pytest.raises(InputRefused, match=r"engines hold 35,000 ft.*leave the driftdown out"):
        flown(tmp_path, CRUISE, FAILS, DRIFTS, engine=strong)


def test_a_weak_engine_holds_no_level(tmp_path: Path) -> None:
    weak = engine_content(static_thrust="9 kN")
    low = CRUISE | {"pressure_altitude": "FL100", "mach": 0.4}
    with pytest.raises(CannotBeFlown, match="hold no level: down to -984 ft") as refusal:
        flown(tmp_path, low, FAILS, DRIFTS | {"mach": 0.4}, engine=weak)
    assert refusal.value.key == 'segment 3 "driftdown"'


@pytest.mark.parametrize(
    ("segments", "match"),
    [
        ([CRUISE, FAILS | {"engines": 2}], "2 of 2 engines would be dead; one at least"),
        ([CRUISE, FAILS, FAILS], "2 of 2 engines would be dead"),
        ([CRUISE, FAILS | {"engines": 0}], r"segment 2.*engines.*greater than or equal to 1"),
        ([CRUISE, DRIFTS], "all engines run; put an engine failure before it"),
        (
            [CRUISE, FAILS, DRIFTS | {"calibrated_airspeed": "220 kt"}],
            "give mach or calibrated_airspeed, or neither for least drag",
        ),
        ([CRUISE, FAILS, DRIFTS | {"rating": "cruise"}], r"rating.*'cruise'.*allowed: 'maximum"),
        (
            [CRUISE, FAILS, DRIFTS | {"until_rate_of_descent": "0 ft/min"}],
            r"until_rate_of_descent.*greater than 0",
        ),
        ([FAILS, DRIFTS], "a driftdown starts the mission in the air"),
    ],
)
def test_refusals(tmp_path: Path, segments: list[Content], match: str) -> None:
    with pytest.raises(InputRefused, match=match) as refusal:
        flown(tmp_path, *segments)
    assert refusal.value.where.endswith("mission.toml")
    assert refusal.value.key.startswith("segment ")


def test_a_given_airspeed_is_held(tmp_path: Path) -> None:
    given = {"kind": "driftdown", "calibrated_airspeed": "205 kt"}
    steps = segment(flown(tmp_path, CRUISE, FAILS, given), "driftdown").steps
    airspeed = calibrated_airspeed(steps.mach, steps.static_pressure)
    assert airspeed == pytest.approx(205.0 * KNOT, rel=1e-9)
