"""Speeds that a cruise seeks in flight, against those asked for at the same masses and level."""

from __future__ import annotations

from math import sqrt
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from mission_files import (
    AIRCRAFT,
    BYPASS_5,
    CONSTANT_ENGINE,
    Content,
    aircraft_content,
    engine_content,
    fly_files,
    load_all,
    mission_content,
    segment,
)

from engine.errors import InputRefused
from engine.quantities import FOOT, KNOT, STANDARD_GRAVITY
from mission.airspeeds import calibrated_airspeed
from mission.results import Flight, Steps
from mission.steady.best_speeds import (
    least_cost_mach,
    long_range_mach,
    maximum_level_mach,
    maximum_range_mach,
)
from mission.steady.level_flight import LevelFlight, LevelSpeed
from mission.steady.speed_range import SpeedRange, speed_range

ENGINES = {"constant": CONSTANT_ENGINE, "cycle": BYPASS_5}
FIVE_TONNES: Content = {"as_needed": None, "load": "5 t"}
LEVEL = 31000.0 * FOOT


def flown(folder: Path, *, engine: Any = CONSTANT_ENGINE, **given: Any) -> Flight:
    """A cruise of 600 nautical miles at FL310 with 5 t of fuel, and a speed sought."""
    changes = {name: given.pop(name) for name in ("day", "headwind", "aircraft") if name in given}
    plane = changes.pop("aircraft", AIRCRAFT)
    cruise = {"kind": "cruise", "distance": "600 nmi", "pressure_altitude": "FL310", **given}
    cruise = {key: value for key, value in cruise.items() if value is not None}
    mission = mission_content([cruise], fuel=FIVE_TONNES, **changes)
    return fly_files(folder, mission=mission, engine=engine, aircraft=plane)


def speeds_at(
    folder: Path, steps: Steps, engine: Any, *, day: float = 0.0, tailwind: float = 0.0
) -> SpeedRange:
    """All Mach numbers of level flight at the masses of some steps."""
    _, aircraft, power = load_all(folder, AIRCRAFT, engine, mission_content([{"kind": "take-off"}]))
    masses = steps.mass
    return speed_range(LevelFlight.of(aircraft, power, LEVEL, masses, day, tailwind))


def at_machs(speeds: SpeedRange, mach: Any) -> LevelSpeed:
    """Level flight at given Mach numbers, asked in the same way."""
    shape = np.shape(mach)
    none = np.zeros(shape, dtype=np.int64)
    return speeds.flight.speed_at(
        np.asarray(mach), np.ones(shape, dtype=bool), none, np.zeros(shape), np.empty((0, *shape))
    )


@pytest.mark.parametrize("engine", ENGINES)
def test_maximum_range_beats_its_neighbours(tmp_path: Path, engine: str) -> None:
    power = ENGINES[engine]
    steps = segment(flown(tmp_path, speed="maximum range", engine=power), "cruise").steps
    speeds = speeds_at(tmp_path, steps, power)
    best = maximum_range_mach(speeds)
    # Range is flat at its best: a Mach number 1e-4 off costs a millionth.
    assert steps.mach == pytest.approx(best.mach, abs=2e-4)
    flown_range = at_machs(speeds, steps.mach).specific_air_range
    assert flown_range == pytest.approx(best.specific_air_range, rel=1e-7)
    for beside in (-0.01, 0.01):
        assert np.all(at_machs(speeds, steps.mach + beside).specific_air_range < flown_range)


def test_maximum_range_of_a_parabolic_polar(tmp_path: Path) -> None:
    """At one level and constant consumption at a third of the drag that goes with lift."""
    steps = segment(flown(tmp_path, speed="maximum range"), "cruise").steps
    coefficient = sqrt(0.0175 / (3.0 * 0.042))
    dynamic = steps.weight / (62.0 * coefficient)
    assert 0.7 * steps.static_pressure * steps.mach**2 == pytest.approx(dynamic, rel=1e-4)


@pytest.mark.parametrize("engine", ENGINES)
def test_long_range_is_99_percent_of_the_best_on_the_fast_side(tmp_path: Path, engine: str) -> None:
    power = ENGINES[engine]
    steps = segment(flown(tmp_path, speed="long range", engine=power), "cruise").steps
    speeds = speeds_at(tmp_path, steps, power)
    best, wanted = maximum_range_mach(speeds), long_range_mach(speeds)
    share = at_machs(speeds, steps.mach).specific_air_range / best.specific_air_range
    assert share == pytest.approx(0.99, abs=1e-6)
    assert np.all(steps.mach > best.mach)
    # Range falls by a hundredth over 0.05: a millionth of it is five millionths of Mach.
    assert steps.mach == pytest.approx(wanted.mach, abs=1e-5)


@pytest.mark.parametrize("engine", ENGINES)
@pytest.mark.parametrize(("index", "wind"), [("4 kg/min", 0.0), ("3 kg/min", 40.0)])
def test_least_cost_against_the_same_asked(
    tmp_path: Path, engine: str, index: str, wind: float
) -> None:
    power = ENGINES[engine]
    flight = flown(
        tmp_path, speed="least cost", cost_index=index, headwind=f"{wind} kt", engine=power
    )
    steps = segment(flight, "cruise").steps
    speeds = speeds_at(tmp_path, steps, power, tailwind=-wind * KNOT)
    cost_index = float(index.split(maxsplit=1)[0]) / 60.0
    best = least_cost_mach(speeds, cost_index)
    assert np.all(best.mach < 0.8199)

    def cost(at: LevelSpeed) -> Any:
        over_ground = at.specific_ground_range * at.fuel_flow
        return (at.fuel_flow + cost_index) / over_ground

    assert cost(at_machs(speeds, steps.mach)) == pytest.approx(cost(best), rel=1e-7)
    assert steps.mach == pytest.approx(best.mach, abs=2e-4)


@pytest.mark.parametrize("engine", ENGINES)
def test_without_a_cost_of_time_and_wind_least_cost_is_maximum_range(
    tmp_path: Path, engine: str
) -> None:
    power = ENGINES[engine]
    free = flown(tmp_path, speed="least cost", cost_index="0 kg/min", engine=power)
    best = flown(tmp_path, speed="maximum range", engine=power)
    assert free.totals.block_fuel == pytest.approx(best.totals.block_fuel, rel=1e-9)
    assert segment(free, "cruise").steps.mach == pytest.approx(
        segment(best, "cruise").steps.mach, abs=1e-6
    )


@pytest.mark.parametrize(("slow", "fast"), [("0 kg/min", "2 kg/min"), ("2 kg/min", "5 kg/min")])
def test_the_more_time_costs_the_faster(tmp_path: Path, slow: str, fast: str) -> None:
    machs = [
        segment(flown(tmp_path, speed="least cost", cost_index=index), "cruise").steps.mach
        for index in (slow, fast)
    ]
    assert np.all(machs[1] > machs[0] + 1e-3)


def test_a_headwind_is_flown_faster_and_a_tailwind_slower_at_least_cost(tmp_path: Path) -> None:
    into, still, before = (
        segment(
            flown(tmp_path, speed="least cost", cost_index="1 kg/min", headwind=wind), "cruise"
        ).steps.mach[0]
        for wind in ("60 kt", "0 kt", "-60 kt")
    )
    assert into > still + 5e-3
    assert before < still - 5e-3


@pytest.mark.parametrize(
    ("engine", "day"),
    [(engine_content(static_thrust="22 kN"), 0.0), (BYPASS_5, 30.0)],
    ids=["constant", "cycle"],
)
def test_greatest_level_speed_has_thrust_equal_to_drag(
    tmp_path: Path, engine: Any, day: float
) -> None:
    limits = {"maximum_operating_mach": 0.9, "maximum_operating_calibrated_airspeed": "380 kt"}
    plane = aircraft_content(limits=limits, drag_factor=1.15)
    flight = flown(
        tmp_path, speed="greatest level", engine=engine, aircraft=plane, day=f"ISA+{day}"
    )
    assert flight.failure is None
    steps = segment(flight, "cruise").steps
    assert np.all(steps.mach < 0.899)
    assert steps.rating_thrust == pytest.approx(steps.drag, rel=2e-5)
    assert np.all(steps.rating_thrust >= steps.drag)
    _, aircraft, power = load_all(tmp_path, plane, engine, mission_content([{"kind": "take-off"}]))
    asked = speed_range(LevelFlight.of(aircraft, power, LEVEL, steps.mass, day))
    # A share of thrust of 1e-5 that is kept in hand is some 1e-5 of Mach number here.
    assert steps.mach == pytest.approx(maximum_level_mach(asked).mach, abs=5e-5)
    assert np.all(np.diff(steps.mach) > 0.0)  # lighter and lighter


@pytest.mark.parametrize(
    ("limits", "level"), [({}, "FL310"), ({"maximum_operating_mach": 0.9}, "FL250")]
)
def test_greatest_level_speed_stands_at_the_operating_limits(
    tmp_path: Path, limits: Content, level: str
) -> None:
    plane = aircraft_content(limits=limits)
    flight = flown(tmp_path, speed="greatest level", aircraft=plane, pressure_altitude=level)
    assert flight.failure is None
    steps = segment(flight, "cruise").steps
    assert np.all(steps.rating_thrust > 1.05 * steps.drag)
    if limits:
        airspeed = calibrated_airspeed(steps.mach, steps.static_pressure)
        assert airspeed == pytest.approx(340.0 * KNOT, rel=1e-9)
    else:
        assert steps.mach == pytest.approx(0.82, rel=1e-12)


def test_a_best_speed_keeps_away_from_the_stall(tmp_path: Path) -> None:
    """The best range of this wing without lift is slower than 1.2 times its stall speed."""
    plane = aircraft_content(limits={"maximum_lift_coefficient": 0.5})
    steps = segment(flown(tmp_path, speed="maximum range", aircraft=plane), "cruise").steps
    coefficient = steps.weight / (0.7 * steps.static_pressure * steps.mach**2 * 62.0)
    assert coefficient == pytest.approx(0.5 / 1.2**2, rel=1e-5)


def test_a_cruise_by_time_and_until_fuel(tmp_path: Path) -> None:
    hour = segment(flown(tmp_path, distance=None, time="1 h", mach=0.7, headwind="40 kt"), "cruise")
    assert hour.time == pytest.approx(3600.0, rel=1e-12)
    wind = 3600.0 * 40.0 * KNOT
    assert hour.air_distance - hour.ground_distance == pytest.approx(wind, rel=1e-9)
    flight = flown(tmp_path, distance=None, until_fuel="1234 kg", speed="long range")
    cruise = segment(flight, "cruise")
    assert cruise.fuel_left == pytest.approx(1234.0, abs=1e-6)
    assert flight.totals.fuel_left == pytest.approx(1234.0, abs=1e-6)


def test_cruise_until_fuel_covers_the_distance_of_the_closed_form(tmp_path: Path) -> None:
    """At a held level and Mach number: drag ``a + b m^2``, time an inverse tangent."""
    log = segment(flown(tmp_path, distance=None, until_fuel="2 t", mach=0.72), "cruise")
    consumption = 0.6 / 3600.0 / STANDARD_GRAVITY
    steps = log.steps
    force = float(0.7 * steps.static_pressure[0] * 0.72**2 * 62.0)
    a, b = force * 0.0175, 0.042 * STANDARD_GRAVITY**2 / force
    angles = np.arctan(np.array([23000.0, 20000.0]) * sqrt(b / a))
    time = (angles[0] - angles[1]) / (consumption * sqrt(a * b))
    assert log.time == pytest.approx(time, rel=1e-9)
    assert log.ground_distance == pytest.approx(steps.true_airspeed[0] * time, rel=1e-9)


def test_a_loiter_burns_its_fuel_or_leaves_it(tmp_path: Path) -> None:
    hold = {"kind": "loiter", "pressure_altitude": "FL200"}
    for amount, burnt in (({"fuel": "800 kg"}, 800.0), ({"until_fuel": "1.5 t"}, 3500.0)):
        mission = mission_content([hold | amount], fuel=FIVE_TONNES)
        log = segment(fly_files(tmp_path, mission=mission), "loiter")
        assert log.fuel == pytest.approx(burnt, abs=1e-6)
        # At the least drag of all masses fuel goes as weight: mass falls as an exponential.
        least = 2.0 * sqrt(0.0175 * 0.042) * 0.6 / 3600.0
        time = np.log(23000.0 / (23000.0 - burnt)) / least
        assert log.time == pytest.approx(time, rel=1e-6)


@pytest.mark.parametrize(
    ("cruise", "match"),
    [
        ({"speed": "maximum range", "mach": 0.7}, "give mach or speed, not both"),
        ({"speed": "least cost"}, 'speed = "least cost" and cost_index'),
        ({"speed": "maximum range", "cost_index": "3 kg/min"}, "and cost_index"),
        ({"speed": "least cost", "cost_index": "3"}, r"cost_index.*3.*unit"),
        ({"speed": "economical"}, r"speed.*'economical'.*allowed: 'maximum range'"),
        (
            {"speed": "long range", "holds": "mach and lift coefficient"},
            'speed and steps go with holds = "altitude and mach"',
        ),
        ({"time": "1 h", "mach": 0.7}, r"give one of distance \(\"rest\""),
        ({"until_fuel": "1 t", "mach": 0.7}, r"give one of distance \(\"rest\""),
        ({"distance": None, "until_fuel": "-1 t", "mach": 0.7}, r"until_fuel.*greater than or"),
        ({"distance": "sleep", "mach": 0.7}, r"distance.*'sleep'"),
    ],
)
def test_refusals(tmp_path: Path, cruise: Content, match: str) -> None:
    with pytest.raises(InputRefused, match=match) as refusal:
        flown(tmp_path, **cruise)
    assert refusal.value.where.endswith("mission.toml")
    assert "segment 1" in refusal.value.key


@pytest.mark.parametrize("kind", ["cruise", "loiter"])
def test_fuel_as_needed_leaves_nothing_to_burn_down_to(tmp_path: Path, kind: str) -> None:
    until = {"kind": kind, "until_fuel": "2 t", "mach": 0.6, "pressure_altitude": "FL200"}
    with pytest.raises(InputRefused, match=r"until_fuel contradicts fuel\.as_needed") as refusal:
        fly_files(tmp_path, mission=mission_content([until]))
    assert refusal.value.key == f'segment 1 "{kind}"'
