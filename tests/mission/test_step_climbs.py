"""Levels that a cruise chooses: the best one of all, and steps up as the aircraft gets lighter."""

from __future__ import annotations

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
from engine.quantities import FOOT
from mission.errors import CannotBeFlown
from mission.results import Flight, Steps
from mission.steady.best_speeds import long_range_mach, maximum_range_mach
from mission.steady.climbing import rate_of_climb
from mission.steady.level_flight import LevelFlight
from mission.steady.speed_range import speed_range

# A wing whose best levels are about FL300 and pass by as it gets lighter.
SMALL_WING: Content = aircraft_content(wing_area="30 m**2")
ENGINES = {"constant": CONSTANT_ENGINE, "cycle": BYPASS_5}
UP: Content = {"kind": "climb", "to": "FL290", "calibrated_airspeed": "280 kt", "mach": 0.7}
DOWN: Content = {"kind": "descent", "calibrated_airspeed": "280 kt", "mach": 0.7}
LEAST_CLIMB = 300.0 * FOOT / 60.0
LEVELS = [1000.0 * level for level in range(29, 47, 2)]  # ft


def flown(
    folder: Path,
    *segments: Content,
    engine: Any = CONSTANT_ENGINE,
    aircraft: Content = SMALL_WING,
    refinement: int = 1,
    **given: Any,
) -> Flight:
    """A way of 1,900 nautical miles."""
    mission = mission_content(list(segments), **({"distance": "1900 nmi"} | given))
    return fly_files(
        folder, mission=mission, engine=engine, aircraft=aircraft, refinement=refinement
    )


def stepping(**given: Any) -> list[Content]:
    """Climb, a cruise with steps of 2,000 ft up to FL450, descent."""
    levels = [f"{level:g} ft" for level in LEVELS[1:]]
    cruise = {"kind": "cruise", "distance": "rest", "step_levels": levels, **given}
    cruise = {key: value for key, value in cruise.items() if value is not None}
    return [UP, cruise, DOWN]


def levels_flown(steps: Steps) -> list[float]:
    """Levels [ft] held, in their order."""
    level = steps.pressure_altitude / FOOT
    held = level[steps.flight_path_angle == 0.0]
    return [float(value) for value in dict.fromkeys(np.round(held))]


def steps_up(steps: Steps) -> list[tuple[float, float]]:
    """Mass [kg] at which each step climb begins, and what was burnt at the level before it."""
    climbs = steps.flight_path_angle > 0.0
    first = np.flatnonzero(climbs[1:] & ~climbs[:-1]) + 1
    last = np.flatnonzero(climbs[:-1] & ~climbs[1:])
    begins = [0, *last]
    masses = [float(steps.mass[at]) for at in first]
    return [(m, float(steps.mass[b]) - m) for m, b in zip(masses, begins, strict=False)]


def excesses(folder: Path, engine: Any, masses: Any, mach: float | None) -> np.ndarray:
    """What the next level gains at masses [kg] of shape (levels below, n), or what climb is left.

    The lesser of gain in specific air range and rate of climb over what has to be left, less one.
    """
    _, aircraft, power = load_all(
        folder, SMALL_WING, engine, mission_content([{"kind": "take-off"}])
    )
    mass = np.stack([masses, masses])
    below = np.array(LEVELS)[: len(masses), None] * FOOT
    altitude = np.stack([below, below + 2000.0 * FOOT]) * np.ones(mass.shape)
    flight = LevelFlight.of(aircraft, power, altitude, mass)
    if mach is None:
        found = long_range_mach(speed_range(flight))
    else:
        every, none = np.ones(mass.shape, dtype=bool), np.zeros(mass.shape, dtype=np.int64)
        given = np.full(mass.shape, mach)
        found = flight.speed_at(given, every, none, given, np.empty((0, *mass.shape)))
    now, then = found.specific_air_range
    climbing = LevelFlight.of(aircraft, power, altitude[1], mass[1], rating="climb")
    asked = found.mach[1][None]
    rate = rate_of_climb(climbing, climbing.at_rating(asked, np.isfinite(asked)))[0]
    return np.minimum(then / now, rate / LEAST_CLIMB) - 1.0


@pytest.mark.parametrize("engine", ENGINES)
@pytest.mark.parametrize("mach", [0.7, None])
def test_steps_occur_where_the_next_level_becomes_better(
    tmp_path: Path, engine: str, mach: float | None
) -> None:
    speed = {"mach": mach} if mach else {"speed": "long range"}
    cruise = {"distance": None, "until_fuel": "500 kg", **speed}
    flight = flown(
        tmp_path, *stepping(**cruise), engine=ENGINES[engine], distance=None, payload="0.5 t",
        fuel={"as_needed": None, "load": "8.5 t"},
    )  # fmt: skip
    steps = segment(flight, "cruise").steps
    found, held = steps_up(steps), levels_flown(steps)
    assert held == LEVELS[: len(held)]
    assert len(held) == len(found) + 1

    masses = np.array([mass for mass, _ in found])[:, None] * np.array([1.01, 1.0, 0.99])
    before, at, after = excesses(tmp_path, ENGINES[engine], masses, mach).T
    assert np.all(after > 0.0)
    waited_for = np.array([burnt > 1.0 for _, burnt in found])  # or better at once
    assert np.count_nonzero(waited_for) >= 2
    # Found on straight lines between masses some 300 kg apart.
    assert at[waited_for] == pytest.approx(0.0, abs=1e-4)
    assert np.all(before[waited_for] < 0.0)


@pytest.mark.parametrize("engine", ENGINES)
def test_steps_cost_less_than_staying(tmp_path: Path, engine: str) -> None:
    far: Content = {"engine": ENGINES[engine], "distance": "3000 nmi", "payload": "1 t"}
    stay = {"kind": "cruise", "distance": "rest"}
    staying = flown(tmp_path, UP, stay, DOWN, **far)
    stepped = flown(tmp_path, *stepping(), **far)
    assert len(levels_flown(segment(stepped, "cruise").steps)) > 2
    assert stepped.totals.block_fuel < 0.998 * staying.totals.block_fuel


def test_a_height_of_steps_is_the_same_as_levels_that_far_apart(tmp_path: Path) -> None:
    by_levels = flown(tmp_path, *stepping())
    cruise = {"kind": "cruise", "distance": "rest", "step_height": "2000 ft"}
    by_height = flown(tmp_path, UP, cruise, DOWN)
    held = levels_flown(segment(by_height, "cruise").steps)
    assert held[: len(LEVELS)] == LEVELS[: len(held)]
    if len(held) <= len(LEVELS):
        assert by_height.totals.block_fuel == pytest.approx(by_levels.totals.block_fuel, rel=1e-9)


def test_steps_of_a_short_way_are_not_taken(tmp_path: Path) -> None:
    """Where the cruise ends before the next level is better nothing changes."""
    short = {"distance": "350 nmi", "payload": "3.5 t", "reserves": {"item": []}}
    heavy = {"fuel": {"as_needed": None, "load": "8 t"}, **short}
    plain = flown(tmp_path, UP, {"kind": "cruise", "distance": "rest"}, DOWN, **heavy)
    stepped = flown(tmp_path, *stepping(), **heavy)
    assert levels_flown(segment(stepped, "cruise").steps) == [29000.0]
    assert stepped.totals.block_fuel == pytest.approx(plain.totals.block_fuel, rel=1e-9)


def test_steps_go_no_higher_than_the_ceiling_of_the_aircraft(tmp_path: Path) -> None:
    low = aircraft_content(wing_area="30 m**2", limits={"maximum_pressure_altitude": "32000 ft"})
    flight = flown(tmp_path, *stepping(), aircraft=low)
    assert flight.failure is None
    assert max(levels_flown(segment(flight, "cruise").steps)) == 31000.0


def test_forces_and_distance_hold_along_the_steps(tmp_path: Path) -> None:
    flight = flown(tmp_path, *stepping(speed="long range"), headwind="20 kt")
    log = segment(flight, "cruise")
    steps = log.steps
    level = (steps.flight_path_angle == 0.0) & (steps.held_by == "")
    assert steps.thrust[level] == pytest.approx(steps.drag[level], rel=1e-9)
    assert flight.totals.ground_distance == pytest.approx(1900.0 * 1852.0, abs=1.0)
    assert log.mass_start - log.mass_end == pytest.approx(log.fuel, rel=1e-9)


@pytest.mark.parametrize("kind", ["mach", "long range"])
def test_the_integration_error_of_steps_is_honest(tmp_path: Path, kind: str) -> None:
    speed = {"mach": 0.7} if kind == "mach" else {"speed": kind}
    few, many = (flown(tmp_path, *stepping(**speed), refinement=n) for n in (1, 4))
    assert [mass for mass, _ in steps_up(segment(few, "cruise").steps)] == pytest.approx(
        [mass for mass, _ in steps_up(segment(many, "cruise").steps)], rel=1e-9
    )
    moved = abs(few.totals.block_fuel - many.totals.block_fuel)
    assert moved <= few.totals.integration_error + 1e-10 * few.totals.takeoff_mass
    assert few.totals.integration_error < 1e-4 * few.totals.block_fuel


# --- the best level ---------------------------------------------------------------------------


@pytest.mark.parametrize("engine", ENGINES)
def test_no_whole_level_flies_further_than_the_best(tmp_path: Path, engine: str) -> None:
    power = engine_content(static_thrust="40 kN") if engine == "constant" else BYPASS_5
    cruise = {"kind": "cruise", "distance": "400 nmi", "speed": "maximum range"}
    fuel = {"as_needed": None, "load": "5 t"}
    best = flown(
        tmp_path, cruise | {"pressure_altitude": "best"}, engine=power, fuel=fuel, distance=None
    )
    chosen = float(segment(best, "cruise").steps.pressure_altitude[0] / FOOT)
    assert chosen / 1000.0 == pytest.approx(round(chosen / 1000.0), abs=1e-9)
    _, aircraft, motor = load_all(
        tmp_path, SMALL_WING, power, mission_content([{"kind": "take-off"}])
    )
    levels = np.arange(10000.0, 60000.0, 1000.0) * FOOT
    flight = LevelFlight.of(aircraft, motor, levels, 23000.0)
    found = maximum_range_mach(speed_range(flight))
    climbing = LevelFlight.of(aircraft, motor, levels, 23000.0, rating="climb")
    machs = np.where(found.is_flyable, found.mach, 0.5)
    rate = rate_of_climb(climbing, climbing.at_rating(machs[None], found.is_flyable))[0]
    is_allowed = found.is_flyable & (rate >= LEAST_CLIMB)
    wanted = levels[np.argmax(np.where(is_allowed, found.specific_air_range, 0.0))] / FOOT
    assert chosen == pytest.approx(wanted)
    for beside in (-2000.0, 2000.0):
        if not is_allowed[int(chosen + beside) // 1000 - 10]:
            continue
        other = flown(
            tmp_path, cruise | {"pressure_altitude": f"{chosen + beside:g} ft"}, engine=power,
            fuel=fuel, distance=None,
        )  # fmt: skip
        assert other.totals.block_fuel > best.totals.block_fuel


def test_a_climb_to_the_best_level_is_that_of_the_cruise_after_it(tmp_path: Path) -> None:
    weak = engine_content(static_thrust="40 kN")
    cruise = {"kind": "cruise", "distance": "rest", "speed": "long range"}
    up = UP | {"to": "best"}
    flight = flown(tmp_path, up, cruise, DOWN, engine=weak)
    chosen = float(segment(flight, "cruise").steps.pressure_altitude[0])
    mass = segment(flight, "climb").mass_end
    flat = {"kind": "cruise", "distance": "1 nmi", "speed": "long range"}
    load = {"as_needed": None, "load": f"{mass - 18000.0:.1f} kg"}
    alone = flown(
        tmp_path, flat | {"pressure_altitude": "best"}, engine=weak, fuel=load, distance=None
    )
    assert chosen == pytest.approx(float(segment(alone, "cruise").steps.pressure_altitude[0]))


def test_a_heavier_aircraft_begins_lower(tmp_path: Path) -> None:
    def level(payload: str) -> float:
        up, cruise = UP | {"to": "best"}, {"kind": "cruise", "distance": "rest", "mach": 0.72}
        flight = flown(tmp_path, up, cruise, DOWN, payload=payload)
        return float(segment(flight, "cruise").steps.pressure_altitude[0])

    assert level("4 t") < level("0.5 t")


def test_without_a_level_to_hold_it_says_so(tmp_path: Path) -> None:
    weak = engine_content(static_thrust="11 kN")
    cruise = {"kind": "cruise", "distance": "100 nmi", "mach": 0.7, "pressure_altitude": "best"}
    # The first plan is at a guess, so that this one has masses to judge by.
    with pytest.raises(CannotBeFlown, match="no level has 300 ft/min of climb left") as refusal:
        flown(tmp_path, cruise, engine=weak, distance=None, fuel={"as_needed": None, "load": "8 t"})
    assert refusal.value.key == 'segment 1 "cruise"'


@pytest.mark.parametrize(
    ("segments", "match"),
    [
        ([UP | {"to": "best"}], r'to = "best" is the best level of a cruise, and none follows'),
        (
            [
                {key: value for key, value in UP.items() if key != "mach"} | {"to": "best"},
                {"kind": "cruise", "distance": "rest"},
            ],
            r'to = "best" needs the mach or speed of cruise "cruise"',
        ),
        (
            [{"kind": "cruise", "distance": "rest", "pressure_altitude": "best"}],
            r'pressure_altitude = "best" needs mach or speed',
        ),
        (stepping(step_height="2000 ft")[:2], "give step_levels or step_height, not both"),
        (
            [UP, {"kind": "cruise", "distance": "rest", "step_levels": ["FL350", "FL310"]}],
            "step_levels must rise",
        ),
        (
            [UP, {"kind": "cruise", "distance": "100 nmi", "step_height": "2000 ft"}],
            r'steps go with distance = "rest" or until_fuel',
        ),
        (
            [UP, {"kind": "cruise", "distance": "rest", "step_height": "50 m"}],
            r"step_height.*greater than or equal to 100",
        ),
        ([UP | {"to": "highest"}], r"segment 1.*to.*'highest'"),
    ],
)
def test_refusals(tmp_path: Path, segments: list[Content], match: str) -> None:
    with pytest.raises(InputRefused, match=match) as refusal:
        flown(tmp_path, *segments, aircraft=AIRCRAFT)
    assert refusal.value.where.endswith("mission.toml")
