"""A distance, radius or time that is free: the most that the fuel is enough for."""

from __future__ import annotations

from math import log, sqrt
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from mission_files import (
    BYPASS_5,
    CONSTANT_ENGINE,
    CONTINGENCY,
    OUT_AND_DOWN,
    Content,
    aircraft_content,
    final_reserve,
    fly_files,
    mission_content,
    segment,
)

from engine.atmosphere import flight_condition
from engine.errors import InputRefused
from engine.quantities import FOOT, STANDARD_GRAVITY
from mission.results import Flight
from mission.solving import MOST_FLIGHTS, TOLERANCE, Root, Search, largest_with_margin

MARGIN = 1e-6  # of the fuel loaded
ZERO_LIFT, INDUCED = 0.0175, 0.042  # of the test twin
PER_SECOND = 0.6 / 3600.0  # fuel weight over thrust, of the constant-consumption engine
FIVE_TONNES: Content = {"as_needed": None, "load": "5 t"}
RESERVES: Content = {"item": [CONTINGENCY, final_reserve("30 min")]}
CRUISE: Content = {"kind": "cruise", "pressure_altitude": "FL390", "mach": 0.74}
HOLD: Content = {"kind": "loiter", "pressure_altitude": "FL200"}


def flown(folder: Path, *segments: Content, engine: Any = CONSTANT_ENGINE, **given: Any) -> Flight:
    files = {name: given.pop(name) for name in ("aircraft", "refinement") if name in given}
    mission = mission_content(list(segments), **({"fuel": FIVE_TONNES} | given))
    return fly_files(folder, mission=mission, engine=engine, **files)


def solved(flight: Flight) -> float:
    """What was found, of a flight whose fuel is enough to the kilogram."""
    assert flight.failure is None
    assert flight.solution is not None
    assert flight.solution.has_answer
    assert abs(flight.totals.fuel_margin) <= MARGIN * flight.totals.loaded_fuel
    return flight.solution.value


# --- closed forms -----------------------------------------------------------------------------


def test_a_free_cruise_climb_flies_the_range_of_the_breguet_equation(tmp_path: Path) -> None:
    """Lift-to-drag ratio and speed stay in the isothermal layer: ``V L/D / c ln(m0/m1)``."""
    cruise = CRUISE | {"distance": "free", "holds": "mach and lift coefficient"}
    flight = flown(tmp_path, cruise, fuel={"as_needed": None, "load": "3 t"})
    air = flight_condition(39000.0 * FOOT, 0.74)
    force = 0.5 * float(air.density) * float(air.true_airspeed) ** 2 * 62.0
    coefficient = 21000.0 * STANDARD_GRAVITY / force
    ratio = coefficient / (ZERO_LIFT + INDUCED * coefficient**2)
    away = float(air.true_airspeed) * ratio / PER_SECOND * log(21000.0 / 18000.0)
    assert solved(flight) == pytest.approx(away, rel=2e-6)
    assert flight.solution is not None
    assert (flight.solution.name, flight.solution.unit) == ('distance of "cruise"', "m")
    assert segment(flight, "cruise").ground_distance == pytest.approx(solved(flight), rel=1e-12)


def test_a_free_loiter_lasts_the_endurance_of_the_closed_form(tmp_path: Path) -> None:
    """At the speed of least drag: ``(L/D) / c ln(m0/m1)`` at any level."""
    flight = flown(tmp_path, HOLD | {"time": "free"})
    best = 1.0 / (2.0 * sqrt(ZERO_LIFT * INDUCED))
    assert solved(flight) == pytest.approx(best / PER_SECOND * log(23000.0 / 18000.0), rel=2e-6)
    assert flight.solution is not None
    assert (flight.solution.name, flight.solution.unit) == ('time of "loiter"', "s")


def test_reserves_are_kept_out_of_what_is_free(tmp_path: Path) -> None:
    """Half an hour of least drag 1,500 ft up, from the mass at the stop, is left aboard."""
    with_reserve = flown(
        tmp_path, HOLD | {"time": "free"}, reserves={"item": [final_reserve("30 min")]}
    )
    best = 1.0 / (2.0 * sqrt(ZERO_LIFT * INDUCED))
    whole = best / PER_SECOND * log(23000.0 / 18000.0)
    # Fuel goes as weight at the least drag of any level, and the reserve ends with dry tanks.
    assert solved(with_reserve) == pytest.approx(whole - 1800.0, rel=1e-5)
    assert with_reserve.totals.fuel_left == pytest.approx(
        with_reserve.totals.reserve_fuel, abs=MARGIN * 5000.0
    )


# --- what is free, against the same given -----------------------------------------------------

LEGS: list[Content] = [
    {"name": "out", "distance": "radius", "headwind": "20 kt"},
    {"name": "home", "distance": "radius", "headwind": "-10 kt"},
]
THERE: list[Content] = [OUT_AND_DOWN[0], {"kind": "cruise", "distance": "rest"}, OUT_AND_DOWN[2]]
BACK: list[Content] = [
    THERE[0] | {"name": "up again", "starts_leg": "home"},
    THERE[1] | {"name": "back"},
    THERE[2] | {"name": "down again"},
]
FREE: dict[str, tuple[list[Content], Content]] = {
    "distance": (THERE, {"distance": "free"}),
    "radius": ([*THERE, *BACK], {"leg": LEGS, "radius": "free"}),
    "leg": (
        [*THERE, *BACK],
        {"leg": [LEGS[0] | {"distance": "free"}, LEGS[1] | {"distance": "300 nmi"}]},
    ),
    "cruise": ([THERE[0], THERE[1] | {"distance": "free"}, THERE[2]], {}),
    "loiter": (
        [THERE[0], HOLD | {"pressure_altitude": "FL350", "time": "free"}, THERE[2]],
        {},
    ),
    "take-off mass": (THERE, {"distance": "free", "fuel": {"as_needed": None,
                                                          "to_take_off_mass": "24 t"}}),
    "steps": (
        [THERE[0] | {"to": "FL290"}, THERE[1] | {"step_height": "2000 ft"}, THERE[2]],
        {"distance": "free", "aircraft": aircraft_content(wing_area="32 m**2")},
    ),
    "tanker": (
        [
            *THERE[:2],
            {"kind": "refuelling", "transfer": "1 t", "time": "5 min", "mach": 0.6},
            *BACK[1:],
        ],
        {"leg": [LEGS[0] | {"distance": "300 nmi"}, LEGS[1] | {"distance": "free"}]},
    ),
}  # fmt: skip
FREE["tanker"][0][2] |= {"starts_leg": "home"}


def given_back(free: str, value: float) -> tuple[list[Content], Content]:
    """The same mission with the value found in place of what was free, and fuel as needed."""
    segments, changes = FREE[free]
    metres, seconds = f"{value!r} m", f"{value!r} s"

    def filled(part: Content) -> Content:
        unit = {"distance": metres, "time": seconds, "radius": metres}
        return {key: unit[key] if text == "free" else text for key, text in part.items()}

    mission = filled(changes) | {"fuel": {"as_needed": True}}
    if "leg" in changes:
        mission["leg"] = [filled(leg) for leg in changes["leg"]]
    return [filled(part) for part in segments], mission


@pytest.mark.parametrize("free", FREE)
def test_the_same_given_needs_the_same_fuel(tmp_path: Path, free: str) -> None:
    segments, changes = FREE[free]
    flight = flown(tmp_path, *segments, reserves=RESERVES, **changes)
    value = solved(flight)
    assert flight.solution is not None
    assert flight.solution.flights <= MOST_FLIGHTS
    again, mission = given_back(free, value)
    given = flown(tmp_path, *again, reserves=RESERVES, **mission)
    assert given.failure is None
    assert given.totals.loaded_fuel == pytest.approx(flight.totals.loaded_fuel, rel=2e-6)
    assert given.totals.block_fuel == pytest.approx(flight.totals.block_fuel, rel=2e-6)


def test_a_little_more_is_too_much(tmp_path: Path) -> None:
    flight = flown(tmp_path, *THERE, distance="free", reserves=RESERVES)
    value = solved(flight)
    shorter, longer = (
        flown(tmp_path, *THERE, distance=f"{share * value} m", reserves=RESERVES)
        for share in (0.999, 1.001)
    )
    assert shorter.failure is None
    assert longer.failure is not None
    assert longer.failure.what == "usable fuel left at the stop against the reserves to keep"


def test_the_tanks_do_not_run_dry_before_the_tanker(tmp_path: Path) -> None:
    """Fuel that comes aboard on the way back is of no use on the way out."""
    tanker = {"kind": "refuelling", "transfer": "4 t", "time": "5 min", "mach": 0.6,
              "starts_leg": "home"}  # fmt: skip
    flight = flown(
        tmp_path, *THERE[:2], tanker, *BACK[1:], leg=LEGS, radius="free",
        fuel={"as_needed": None, "load": "3 t"},
    )  # fmt: skip
    assert flight.solution is not None
    assert flight.solution.has_answer
    left = [log.fuel_left for log in flight.segments]
    assert left[1] == pytest.approx(0.0, abs=0.1)  # where the tanker is met
    assert flight.totals.fuel_left > 100.0


@pytest.mark.parametrize("load", ["300 kg", "700 kg"])
@pytest.mark.parametrize("engine", ["constant", "cycle"])
def test_without_an_answer_it_says_so(tmp_path: Path, load: str, engine: str) -> None:
    power = CONSTANT_ENGINE if engine == "constant" else BYPASS_5
    way = [THERE[0], {"kind": "cruise", "distance": "150 nmi"}, HOLD | {"time": "free"}]
    way[2] = way[2] | {"pressure_altitude": "FL350"}
    flight = flown(
        tmp_path, *way, engine=power, fuel={"as_needed": None, "load": load}, reserves=RESERVES
    )
    assert flight.solution is not None
    assert not flight.solution.has_answer
    assert flight.solution.value == 0.0
    assert flight.failure is not None
    assert flight.failure.what.startswith("usable fuel left at the stop against the reserves")
    assert flight.failure.value < flight.failure.bound


def test_a_leg_too_short_for_its_climb_and_descent_is_no_answer(tmp_path: Path) -> None:
    flight = flown(tmp_path, *THERE, distance="free", fuel={"as_needed": None, "load": "200 kg"})
    assert flight.solution is not None
    assert not flight.solution.has_answer
    least = sum(log.ground_distance for log in flight.segments if log.kind in ("climb", "descent"))
    assert flight.solution.value == pytest.approx(least, rel=1e-5)  # found with half the steps


@pytest.mark.parametrize(
    ("segments", "changes", "match"),
    [
        (
            [THERE[0], THERE[1] | {"distance": "free"}, HOLD | {"time": "free"}],
            {},
            r'only one thing can be free, and these are: distance of "cruise", time of "loiter"',
        ),
        (
            [THERE[0], THERE[1] | {"distance": "free"}, THERE[2]],
            {"distance": "free"},
            r'only one thing can be free, and these are: distance, distance of "cruise"',
        ),
        (THERE, {"distance": "free", "fuel": {"as_needed": True, "load": None}},
         r"distance is free: give fuel\.load or fuel\.to_take_off_mass, which it is solved for"),
        (
            [*THERE, *BACK],
            {"leg": [LEGS[0] | {"distance": "free"}, LEGS[1]], "radius": "free"},
            r'only one thing can be free, and these are: radius, distance of leg "out"',
        ),
        (OUT_AND_DOWN[:1], {"distance": "free"},
         r'no cruise has distance = "rest" to meet it'),
        ([HOLD | {"time": "some"}], {}, r"segment 1.*time.*'some'"),
    ],
)  # fmt: skip
def test_refusals(tmp_path: Path, segments: list[Content], changes: Content, match: str) -> None:
    with pytest.raises(InputRefused, match=match) as refusal:
        flown(tmp_path, *segments, **changes)
    assert refusal.value.where.endswith("mission.toml")


# --- the root itself --------------------------------------------------------------------------


def found(margin: Any, least: Any, guess: Any) -> Root:
    low, near = np.asarray(least, dtype=float), np.asarray(guess, dtype=float)
    search = Search(low, np.asarray(margin(low)), near, np.ones_like(low))
    return largest_with_margin(margin, search, 1e-6)


@given(
    roots=st.lists(st.floats(0.01, 1e4), min_size=1, max_size=4),
    bends=st.floats(-0.6, 0.6),
    off=st.floats(0.02, 30.0),
)
@settings(max_examples=60)
def test_any_falling_margin_is_closed(roots: list[float], bends: float, off: float) -> None:
    """Straight, bent up or bent down, from a guess too small or too large."""
    root = np.array(roots)

    def margin(value: np.ndarray) -> np.ndarray:
        x = value / root
        return 1000.0 * (1.0 - x) * (1.0 + bends * np.tanh(x))

    answer = found(margin, np.zeros_like(root), off * root)
    assert answer.flights <= MOST_FLIGHTS
    assert np.all(answer.has_answer)
    assert answer.value == pytest.approx(root, rel=1e-7)
    assert np.all(np.abs(answer.margin) <= 1e-5)


def test_a_member_without_an_answer_stands_at_its_least_value() -> None:
    offset = np.array([5.0, -3.0, 0.0])
    answer = found(lambda value: offset - (value - 1.0), np.ones(3), np.full(3, 2.0))
    assert answer.has_answer.tolist() == [True, False, True]
    assert answer.value == pytest.approx([6.0, 1.0, 1.0])
    assert answer.margin == pytest.approx([0.0, -3.0, 0.0], abs=1e-6)


def test_where_there_is_no_flight_the_root_is_before_it() -> None:
    def margin(value: np.ndarray) -> np.ndarray:
        return np.where(value > 9.0, -np.inf, 10.0 - value**1.1)

    answer = found(margin, np.zeros(1), np.full(1, 50.0))
    assert answer.has_answer.all()
    assert answer.value == pytest.approx([10.0 ** (1.0 / 1.1)], rel=1e-6)


def test_what_never_gets_too_much_is_left_with_its_margin() -> None:
    answer = found(lambda value: 5.0 + 0.0 * value, np.zeros(1), np.ones(1))
    assert answer.flights == MOST_FLIGHTS
    assert answer.margin == pytest.approx([5.0])


def test_the_least_value_is_not_flown_again() -> None:
    asked: list[float] = []

    def margin(value: np.ndarray) -> np.ndarray:
        asked.append(float(value[0]))
        return 100.0 - value

    answer = found(margin, np.zeros(1), np.full(1, 99.0))
    assert asked.count(0.0) == 1
    assert answer.flights == len(asked) - 1
    assert answer.flights <= 3
    assert TOLERANCE == 1e-7
