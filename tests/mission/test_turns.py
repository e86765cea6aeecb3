"""Level turns: load factor given or sustained, by circles or by time, and what bounds them."""

from __future__ import annotations

from math import atan, pi, sqrt, tan
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

from engine import load_engine
from engine.atmosphere import flight_condition
from engine.errors import InputRefused
from engine.quantities import FOOT, STANDARD_GRAVITY
from mission.results import Flight

AREA, ZERO_LIFT, INDUCED = 62.0, 0.0175, 0.042  # of the test twin
CONSUMPTION = 0.6 / 3600.0 / STANDARD_GRAVITY  # kg/(N s), of the constant-consumption engine
WEAKER: Content = engine_content(static_thrust="35 kN")
SWEPT = 1e-9  # relative: the sweeps stop when no mass moves by 1e-11 of itself
TURN: Content = {"kind": "turn", "pressure_altitude": "FL200", "mach": 0.6}
HIGH: Content = {"kind": "turn", "pressure_altitude": "FL400", "mach": 0.7}
FIVE_TONNES: Content = {"as_needed": None, "load": "5 t"}


def flown(folder: Path, *segments: Content, **given: Any) -> Flight:
    """The segments with 5 t of fuel."""
    files = {name: given.pop(name) for name in ("aircraft", "engine") if name in given}
    mission = mission_content(list(segments), fuel=FIVE_TONNES, **given)
    return fly_files(folder, mission=mission, **files)


def force_and_speed(level: float, mach: float) -> tuple[float, float]:
    """Dynamic pressure times wing area [N], and true airspeed [m/s]."""
    air = flight_condition(level * 100.0 * FOOT, mach)
    speed = float(air.true_airspeed)
    return 0.5 * float(air.density) * speed**2 * AREA, speed


def high_thrust() -> float:
    """Both weaker engines at FL400 [N]."""
    density = float(flight_condition(40000.0 * FOOT).density)
    return 2.0 * 35e3 * (density / 1.225) ** 0.8


@pytest.mark.parametrize(("circles", "load_factor"), [(1.0, 1.05), (3.0, 1.5), (0.25, 2.4)])
def test_a_given_load_factor(tmp_path: Path, circles: float, load_factor: float) -> None:
    """Drag is ``a + b m^2``, so that mass falls as a tangent of time."""
    log = segment(flown(tmp_path, TURN | {"turns": circles, "load_factor": load_factor}), "turn")
    steps = log.steps
    force, speed = force_and_speed(200, 0.6)
    rate = STANDARD_GRAVITY * sqrt(load_factor**2 - 1.0) / speed
    assert log.time == pytest.approx(2.0 * pi * circles / rate, rel=SWEPT)
    assert steps.lift == pytest.approx(load_factor * steps.weight, rel=SWEPT)
    coefficient = steps.lift / force
    assert steps.drag == pytest.approx(force * (ZERO_LIFT + INDUCED * coefficient**2), rel=SWEPT)
    assert steps.thrust == pytest.approx(steps.drag, rel=SWEPT)
    a = force * ZERO_LIFT
    b = INDUCED * (load_factor * STANDARD_GRAVITY) ** 2 / force
    angle = atan(23000.0 * sqrt(b / a)) - CONSUMPTION * sqrt(a * b) * log.time
    assert log.mass_end == pytest.approx(sqrt(a / b) * tan(angle), rel=SWEPT)
    assert log.ground_distance == 0.0
    assert log.air_distance == pytest.approx(speed * log.time, rel=SWEPT)


def test_a_turn_by_time_takes_its_time(tmp_path: Path) -> None:
    log = segment(flown(tmp_path, TURN | {"time": "150 s", "load_factor": 1.3}), "turn")
    assert log.time == pytest.approx(150.0, rel=1e-12)


def test_at_one_g_the_drag_is_that_of_level_flight(tmp_path: Path) -> None:
    log = segment(flown(tmp_path, TURN | {"time": "1 min", "load_factor": 1.5}), "turn")
    force, _ = force_and_speed(200, 0.6)
    coefficient = log.steps.weight / force
    level = force * (ZERO_LIFT + INDUCED * coefficient**2)
    assert log.steps.level_drag == pytest.approx(level, rel=SWEPT)


def test_thrust_sustains_a_load_factor(tmp_path: Path) -> None:
    """Engines at their rating burn evenly; the load factor goes as one over mass."""
    log = segment(flown(tmp_path, HIGH | {"turns": 2.0}, engine=WEAKER), "turn")
    steps = log.steps
    force, speed = force_and_speed(400, 0.7)
    thrust = high_thrust()
    lift = force * sqrt((thrust / force - ZERO_LIFT) / INDUCED)
    assert 1.1 * steps.weight[0] < lift < 2.5 * steps.weight[-1]
    assert steps.thrust == pytest.approx(thrust, rel=SWEPT)
    assert steps.drag == pytest.approx(thrust, rel=SWEPT)
    assert steps.lift == pytest.approx(lift, rel=SWEPT)
    flow = CONSUMPTION * thrust
    assert log.fuel == pytest.approx(flow * log.time, rel=SWEPT)

    def rate(time: float) -> float:
        load_factor = lift / (STANDARD_GRAVITY * (23000.0 - flow * time))
        return STANDARD_GRAVITY * sqrt(load_factor**2 - 1.0) / speed

    turned, _ = quad(rate, 0.0, log.time, epsrel=1e-12)
    assert turned == pytest.approx(2.0 * 2.0 * pi, rel=1e-8)


def test_lift_bounds_a_sustained_load_factor(tmp_path: Path) -> None:
    """Slow and low there is thrust to spare, and the wing stalls first."""
    log = segment(flown(tmp_path, TURN | {"mach": 0.3, "turns": 1.0}), "turn")
    force, _ = force_and_speed(200, 0.3)
    assert log.steps.lift == pytest.approx(1.5 * force, rel=SWEPT)
    assert np.all(log.steps.drag < log.steps.thrust)


def test_structure_bounds_a_sustained_load_factor(tmp_path: Path) -> None:
    plane = aircraft_content(limits={"maximum_load_factor": 2.0})
    log = segment(flown(tmp_path, TURN | {"turns": 1.0}, aircraft=plane), "turn")
    assert log.steps.lift == pytest.approx(2.0 * log.steps.weight, rel=SWEPT)
    assert np.all(log.steps.drag < log.steps.thrust)


def test_stores_make_a_sustained_turn_wider(tmp_path: Path) -> None:
    plane = aircraft_content(stores={"pod": {"mass": "1 kg", "drag_area": "0.4 m**2", "most": 2}})
    turn = HIGH | {"turns": 1.0}
    flight = flown(tmp_path, turn, aircraft=plane, engine=WEAKER, stores={"pod": 2})
    log = segment(flight, "turn")
    force, _ = force_and_speed(400, 0.7)
    clean = high_thrust() - 2 * 0.4 * force / AREA
    lift = force * sqrt((clean / force - ZERO_LIFT) / INDUCED)
    assert log.steps.lift == pytest.approx(lift, rel=SWEPT)


def test_a_cycle_engine_sustains_what_its_thrust_is_drag_for(tmp_path: Path) -> None:
    turn = TURN | {"pressure_altitude": "FL330", "turns": 1.0, "rating": "climb"}
    log = segment(flown(tmp_path, turn, engine=BYPASS_5), "turn")
    steps = log.steps
    state = load_engine(BYPASS_5).at(flight_condition(33000.0 * FOOT, 0.6), rating="climb")
    # The engine settles each of its answers to 1e-10 of itself.
    assert steps.thrust == pytest.approx(2.0 * float(state.net_thrust), rel=1e-8)
    force, speed = force_and_speed(330, 0.6)
    lift = force * np.sqrt((steps.thrust / force - ZERO_LIFT) / INDUCED)
    assert steps.lift == pytest.approx(lift, rel=1e-8)
    assert np.all(lift > 1.05 * steps.weight)
    flow = 2.0 * float(state.fuel_flow)
    assert log.fuel == pytest.approx(flow * log.time, rel=1e-8)

    def rate(time: float) -> float:
        load_factor = float(lift[0]) / (STANDARD_GRAVITY * (23000.0 - flow * time))
        return STANDARD_GRAVITY * sqrt(load_factor**2 - 1.0) / speed

    assert quad(rate, 0.0, log.time)[0] == pytest.approx(2.0 * pi, rel=1e-7)


def test_a_load_factor_that_thrust_does_not_sustain(tmp_path: Path) -> None:
    turn = {**HIGH, "name": "orbit", "turns": 1.0}
    force, _ = force_and_speed(400, 0.7)
    thrust = high_thrust()
    most = force * sqrt((thrust / force - ZERO_LIFT) / INDUCED) / (23000.0 * STANDARD_GRAVITY)
    failed = flown(tmp_path, turn | {"load_factor": 1.05 * most}, engine=WEAKER).failure
    assert failed is not None
    assert failed.segment == "orbit"
    assert failed.step == 0
    assert failed.what == "thrust at maximum_continuous rating against drag"
    assert failed.value == pytest.approx(thrust, rel=SWEPT)
    lift = 1.05 * most * 23000.0 * STANDARD_GRAVITY / force
    assert failed.bound == pytest.approx(force * (ZERO_LIFT + INDUCED * lift**2), rel=1e-6)
    met = flown(tmp_path, turn | {"load_factor": 0.99 * most}, engine=WEAKER)
    assert met.failure is None


@pytest.mark.parametrize(
    ("turn", "what", "value", "bound"),
    [
        ({"load_factor": 3.0, "turns": 1.0}, "load factor", 3.0, 2.5),
        ({"load_factor": 2.0, "turns": 1.0, "mach": 0.3}, "lift coefficient", None, 1.5),
    ],
)
def test_a_load_factor_beyond_structure_or_lift(
    tmp_path: Path, turn: Content, what: str, value: float | None, bound: float
) -> None:
    failed = flown(tmp_path, TURN | turn).failure
    assert failed is not None
    assert (failed.segment, failed.what) == ("turn", what)
    assert failed.bound == pytest.approx(bound)
    lift = 2.0 * 23000.0 * STANDARD_GRAVITY / force_and_speed(200, 0.3)[0]
    assert failed.value == pytest.approx(lift if value is None else value, rel=SWEPT)


def test_without_thrust_for_one_g_there_is_no_turn(tmp_path: Path) -> None:
    weak = engine_content(static_thrust="12 kN")
    failed = flown(tmp_path, HIGH | {"turns": 1.0}, engine=weak).failure
    assert failed is not None
    assert (failed.segment, failed.what, failed.unit) == ("turn", "turn rate", "rad/s")
    assert failed.value < failed.bound


def test_a_turn_keeps_the_speed_it_comes_in_with(tmp_path: Path) -> None:
    cruise = {"kind": "cruise", "distance": "50 nmi", "mach": 0.62, "pressure_altitude": "FL250"}
    flight = flown(tmp_path, cruise, {"kind": "turn", "turns": 1.0, "load_factor": 1.3})
    assert [log.kind for log in flight.segments] == ["cruise", "turn"]
    assert segment(flight, "turn").steps.mach == pytest.approx(0.62)


@pytest.mark.parametrize(
    ("turn", "match"),
    [
        ({"turns": 1.0, "time": "1 min"}, r"segment 1.*give either turns or time"),
        ({}, r"segment 1.*give either turns or time"),
        ({"turns": 1.0, "calibrated_airspeed": "250 kt"}, "give mach or calibrated_airspeed"),
        ({"turns": 1.0, "load_factor": 1.0}, r"segment 1.*load_factor.*greater than 1"),
        ({"turns": 1.0, "load_factor": 20.0}, r"segment 1.*load_factor.*20.*15"),
        ({"turns": 0.0}, r"segment 1.*turns.*greater than 0"),
        ({"turns": 1.0, "mach": None}, r'segment 1 "turn".*give mach'),
        ({"turns": 1.0, "pressure_altitude": None}, "a turn starts the mission in the air"),
        ({"turns": 1.0, "rating": "combat"}, r"rating.*'combat'.*allowed: 'take_off'"),
    ],
)
def test_refusals(tmp_path: Path, turn: Content, match: str) -> None:
    content = {key: value for key, value in (TURN | turn).items() if value is not None}
    with pytest.raises(InputRefused, match=match) as refusal:
        flown(tmp_path, content)
    assert refusal.value.where.endswith("mission.toml")
