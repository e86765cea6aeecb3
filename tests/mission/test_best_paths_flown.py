"""Climbs along best paths, flown: where they end, what they cost, and what they keep."""

from __future__ import annotations

from itertools import pairwise
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from mission_files import (
    CONSTANT_ENGINE,
    Content,
    aircraft_content,
    fly_files,
    mission_content,
    segment,
)

from engine.atmosphere import flight_condition
from engine.errors import InputRefused
from engine.quantities import FOOT, STANDARD_GRAVITY
from mission.errors import CannotBeFlown
from mission.results import Flight

# Fast limits, so that the best speeds of the climb are not all at the greatest airspeed.
FAST = aircraft_content(
    limits={"maximum_operating_mach": 0.95, "maximum_operating_calibrated_airspeed": "480 kt"}
)
PATHS = ("best rate", "least fuel", "least time")
TWO_AND_A_HALF: Content = {"as_needed": None, "load": "4 t"}


def flown(folder: Path, path: str | None, **given: Any) -> Flight:
    """Up to FL340 and Mach 0.78 along a path, or on a schedule that ends there."""
    up: Content = {"kind": "climb", "to": "FL340", "path": path, "to_mach": 0.78}
    if path is None:
        up = {"kind": "climb", "to": "FL340", "calibrated_airspeed": "300 kt", "mach": 0.78}
    up |= given.pop("up", {})
    files = {"aircraft": FAST, "engine": CONSTANT_ENGINE}
    files |= {name: given.pop(name) for name in ("aircraft", "engine") if name in given}
    refinement = given.pop("refinement", 1)
    before, after = given.pop("before", []), given.pop("after", [])
    mission = mission_content([*before, up, *after], **({"fuel": TWO_AND_A_HALF} | given))
    return fly_files(folder, mission=mission, refinement=refinement, **files)


@pytest.fixture(scope="module")
def flights(tmp_path_factory: pytest.TempPathFactory) -> dict[str, Flight]:
    folder = tmp_path_factory.mktemp("paths")
    return {path: flown(folder, path) for path in PATHS}


def energy_height(altitude: Any, speed: Any) -> Any:
    """Height and speed as a height [m], where pressure altitude is height."""
    return altitude + speed**2 / (2.0 * STANDARD_GRAVITY)


@pytest.mark.parametrize("path", PATHS)
def test_it_ends_with_the_energy_of_the_level_and_mach_number_asked_for(
    flights: dict[str, Flight], path: str
) -> None:
    """What is left is height for speed at one energy height, which takes no time here."""
    assert flights[path].failure is None
    steps = segment(flights[path], "climb").steps
    wanted = energy_height(
        34000.0 * FOOT, float(flight_condition(34000.0 * FOOT, 0.78).true_airspeed)
    )
    reached = energy_height(steps.pressure_altitude, steps.true_airspeed)
    assert reached[-1] == pytest.approx(wanted, abs=0.1)
    assert np.all(np.diff(reached) > -1e-6)


def test_each_path_is_best_at_what_it_is_for(flights: dict[str, Flight]) -> None:
    logs = {path: segment(flight, "climb") for path, flight in flights.items()}
    least = min(log.fuel for log in logs.values())
    assert logs["least fuel"].fuel <= least * (1.0 + 1e-4)
    quickest = min(log.time for log in logs.values())
    assert logs["least time"].time <= quickest * (1.0 + 1e-4)
    assert logs["least time"].time < logs["best rate"].time * (1.0 + 1e-4)


@pytest.mark.parametrize("path", PATHS)
def test_energy_gained_is_the_work_of_excess_thrust(flights: dict[str, Flight], path: str) -> None:
    """Height as pressure altitude, which on a standard day it is."""
    steps = segment(flights[path], "climb").steps
    power = (steps.thrust - steps.drag) * steps.true_airspeed / steps.weight
    done = float(np.trapezoid(power, steps.elapsed_time))
    energy = energy_height(steps.pressure_altitude, steps.true_airspeed)
    # Trapezia on nine nodes a span.
    assert done == pytest.approx(float(energy[-1] - energy[0]), rel=5e-3)


@pytest.mark.parametrize("path", PATHS)
def test_mass_and_lift_are_kept(flights: dict[str, Flight], path: str) -> None:
    log = segment(flights[path], "climb")
    assert log.mass_start - log.mass_end == pytest.approx(log.fuel, rel=1e-10)
    steps = log.steps
    assert np.all(np.diff(steps.elapsed_time) >= -1e-9)
    lift = steps.weight * np.cos(steps.flight_path_angle)
    assert steps.lift == pytest.approx(lift, rel=1e-6)
    assert np.max(steps.mach) <= 0.95 + 1e-9


@pytest.mark.parametrize("path", PATHS)
def test_the_integration_error_is_honest(tmp_path: Path, path: str) -> None:
    few, many = (flown(tmp_path, path, refinement=n).totals for n in (1, 4))
    moved = abs(few.block_fuel - many.block_fuel)
    assert moved <= few.integration_error + 1e-10 * few.takeoff_mass
    assert few.integration_error < 1e-3 * few.block_fuel


def test_a_mission_goes_on_from_a_path(tmp_path: Path) -> None:
    after = [{"kind": "cruise", "distance": "rest"},
             {"kind": "descent", "calibrated_airspeed": "280 kt", "mach": 0.78}]  # fmt: skip
    before = [{"kind": "taxi", "time": "5 min"}, {"kind": "take-off"}]
    flight = flown(
        tmp_path, "least fuel", before=before, after=after, distance="700 nmi",
        fuel={"as_needed": True},
    )  # fmt: skip
    assert flight.failure is None
    assert flight.totals.ground_distance == pytest.approx(700.0 * 1852.0, abs=1.0)
    rows = [log for log in flight.segments if log.purpose == "mission"]
    for before_it, log in pairwise(rows):
        assert before_it.mass_end == pytest.approx(log.mass_start, rel=1e-12)
    on_schedule = flown(
        tmp_path, None, before=before, after=after, distance="700 nmi", fuel={"as_needed": True}
    )
    assert flight.totals.block_fuel < on_schedule.totals.block_fuel


def test_a_path_beyond_the_engine_says_where_it_ends(tmp_path: Path) -> None:
    weak = CONSTANT_ENGINE | {"static_thrust": "14 kN"}
    with pytest.raises(CannotBeFlown, match=r"the path of least time ends at .* ft") as refusal:
        flown(tmp_path, "least time", engine=weak, up={"to": "FL480"})
    assert refusal.value.key == 'segment 1 "climb"'


@pytest.mark.parametrize(
    ("up", "match"),
    [
        ({"path": "least cost"}, r"path.*'least cost'.*allowed: 'best rate'"),
        ({"mach": 0.7}, "path finds the speeds: leave out"),
        ({"calibrated_airspeed": "280 kt"}, "path finds the speeds: leave out"),
        ({"limited_below_10000_ft": True}, "path finds the speeds: leave out"),
        ({"until_rate_of_climb": "300 ft/min"}, "path finds the speeds: leave out"),
        ({"to_mach": 7.0}, r"to_mach.*less than 5"),
    ],
)
def test_refusals(tmp_path: Path, up: Content, match: str) -> None:
    with pytest.raises(InputRefused, match=match) as refusal:
        flown(tmp_path, "least time", up=up)
    assert refusal.value.key.startswith("segment 1")


def test_a_path_needs_the_mach_number_at_its_end(tmp_path: Path) -> None:
    up = {"kind": "climb", "to": "FL340", "path": "least time"}
    with pytest.raises(InputRefused, match="path and to_mach"):
        fly_files(tmp_path, mission=mission_content([up]))
