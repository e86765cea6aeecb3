"""The screens of missions with legs, loads that change, turns, failures, and something free."""

from __future__ import annotations

import json
from dataclasses import replace
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from mission_files import (
    AIRCRAFT,
    CONSTANT_ENGINE,
    Content,
    aircraft_content,
    engine_content,
    final_reserve,
    load_all,
    mission_content,
)

from mission.commands.shared import setting
from mission.flight import fly
from mission.outputs.failure import failure_headline
from mission.outputs.flight_log import flight_log
from mission.outputs.held_by import holders
from mission.outputs.page import as_text
from mission.outputs.partial import flown_segments
from mission.outputs.records import flight_record
from mission.outputs.units import METRIC, TRADE
from mission.results import Failure, Flight

FIVE_TONNES: Content = {"as_needed": None, "load": "5 t"}
CARRIER = aircraft_content(
    stores={"marker": {"mass": "150 kg", "drag_area": "0.05 m**2", "most": 4}}
)
SPEEDS: Content = {"calibrated_airspeed": "280 kt", "mach": 0.7}
UP: Content = {"kind": "climb", "to": "FL300", **SPEEDS}
REST: Content = {"kind": "cruise", "distance": "rest"}
DOWN: Content = {"kind": "descent", **SPEEDS}
LAND: Content = {"kind": "approach", "time": "4 min"}
BACK: list[Content] = [REST | {"name": "back", "starts_leg": "home"}, DOWN, LAND]
LEGS: list[Content] = [
    {"name": "out to sea", "distance": "radius", "headwind": "20 kt"},
    {"name": "home", "distance": "radius", "day": "ISA+8"},
]
AIR: Content = {
    "pressure_altitude": ["0 ft", "FL390"],
    "day": ["ISA+10", "ISA"],
    "headwind": ["5 kt", "50 kt"],
}
LOW: Content = {"kind": "cruise", "distance": "60 nmi", "mach": 0.5, "pressure_altitude": "FL350"}

MISSIONS: dict[str, tuple[list[Content], Content]] = {
    "turns and loads": (
        [
            {"kind": "taxi", "time": "5 min"},
            {"kind": "take-off"},
            UP,
            REST,
            {"kind": "turn", "name": "look around", "turns": 2.0,
             "load_factor": 1.4},
            {"kind": "turn", "name": "combat", "time": "2 min"},
            {"kind": "release", "payload": "400 kg", "stores": {"marker": 2}},
            {"kind": "refuelling", "transfer": "1.5 t", "time": "8 min"},
            *BACK,
            {"kind": "turnaround", "payload_off": "1 t", "payload_on": "0.5 t", "fuel_on": "1 t"},
        ],
        {"leg": LEGS, "radius": "350 nmi", "stores": {"marker": 3}, "fuel": FIVE_TONNES},
    ),
    "steps": (
        [UP, REST | {"step_height": "2000 ft", "speed": "long range"}, DOWN, LAND],
        {"distance": "1500 nmi", "air": AIR},
    ),
    "failure": (
        [
            LOW,
            {"kind": "engine failure"},
            {"kind": "driftdown", "mach": 0.5},
            {"kind": "descent", "name": "lower", "to": "FL100", "mach": 0.5,
             "rate_of_descent": "500 ft/min"},
            {"kind": "loiter", "until_fuel": "2 t", "rating": "maximum_continuous"},
        ],
        {"fuel": FIVE_TONNES, "engine": engine_content(static_thrust="20 kN")},
    ),
    "free": ([UP, REST, *BACK], {"leg": LEGS, "radius": "free", "fuel": FIVE_TONNES}),
    "free time": (
        [UP, {"kind": "loiter", "time": "free", "mach": 0.6}],
        {"fuel": FIVE_TONNES, "reserves": {"item": [final_reserve("30 min")]}},
    ),
    "no answer": (
        [UP, REST, *BACK],
        {"leg": LEGS, "radius": "free", "fuel": {"as_needed": None, "load": "200 kg"}},
    ),
    "too tight": (
        [UP, {"kind": "turn", "turns": 1.0, "load_factor": 2.4, "mach": 0.5}],
        {"fuel": FIVE_TONNES},
    ),
    "path": (
        [{"kind": "climb", "to": "FL300", "path": "least fuel", "to_mach": 0.74},
         {"kind": "cruise", "time": "20 min"}],
        {},
    ),
    "until": (
        [UP | {"to": "FL480", "until_rate_of_climb": "300 ft/min"},
         {"kind": "cruise", "until_fuel": "1 t", "speed": "least cost", "cost_index": "4 kg/min"}],
        {"fuel": FIVE_TONNES, "engine": engine_content(static_thrust="30 kN")},
    ),
}  # fmt: skip


def flown(folder: Path, name: str) -> tuple[Flight, Any]:
    """A flight and the setting that its screen begins with."""
    segments, changes = MISSIONS[name]
    engine = changes.get("engine", CONSTANT_ENGINE)
    given = {key: value for key, value in changes.items() if key != "engine"}
    plane = CARRIER if "stores" in given else AIRCRAFT
    mission, aircraft, power = load_all(folder, plane, engine, mission_content(segments, **given))
    return fly(mission, aircraft, power), setting(mission, aircraft)


def screen(folder: Path, name: str, width: int = 100, **options: Any) -> str:
    flight, found = flown(folder, name)
    return as_text(flight_log(flight, found, width=width, **options), width)


@pytest.mark.parametrize("width", [80, 100])
@pytest.mark.parametrize("name", MISSIONS)
def test_every_screen_fits_and_says_no_nan(tmp_path: Path, name: str, width: int) -> None:
    flight, found = flown(tmp_path, name)
    for units in (METRIC, TRADE):
        text = as_text(flight_log(flight, found, units=units, width=width, with_steps=True), width)
        assert max(len(line) for line in text.splitlines()) <= width
        for word in ("nan", "inf ", "None", "…", "\x1b"):
            assert word not in text, word
    json.dumps(flight_record(flight), allow_nan=False)


@pytest.mark.parametrize("name", MISSIONS)
def test_they_end_as_they_should(tmp_path: Path, name: str) -> None:
    flight, _ = flown(tmp_path, name)
    assert (flight.failure is None) == (name not in ("no answer", "too tight"))


def lines_under(text: str, title: str) -> list[str]:
    """Lines of a section, its title left out."""
    lines = text.splitlines()
    first = lines.index(title) + 1
    last = next((i for i in range(first, len(lines)) if not lines[i]), len(lines))
    return lines[first:last]


def test_the_head_says_what_hangs_below_and_that_the_air_changes(tmp_path: Path) -> None:
    by_leg = screen(tmp_path, "turns and loads").splitlines()[1]
    assert by_leg.endswith("payload 2,500 kg, 3 × marker, day and wind by leg")  # noqa: RUF001
    by_altitude = screen(tmp_path, "steps").splitlines()[1]
    assert by_altitude.endswith("payload 2,500 kg, day and wind by altitude")
    assert screen(tmp_path, "until").splitlines()[1].endswith("payload 2,500 kg, ISA, still air")


def test_what_leaves_and_comes_is_shown_with_the_mass_around_it(tmp_path: Path) -> None:
    text = screen(tmp_path, "turns and loads")
    flight, _ = flown(tmp_path, "turns and loads")
    rows = lines_under(text, "What leaves and comes aboard")[3:]
    assert [row.split()[0] for row in rows] == ["release", "refuelling", "turnaround"]
    for row, log in zip(
        rows, [x for x in flight.segments if x.mass_released or x.mass_received], strict=True
    ):
        released, received, before, after = row.split()[1:]
        assert released == f"{abs(log.mass_released):,.0f}"
        assert received == f"{log.mass_received:,.0f}"
        assert before == f"{log.mass_start / 1e3:.3f}"
        assert after == f"{log.mass_end / 1e3:.3f}"


def test_turns_are_told_by_load_factor_rate_and_radius(tmp_path: Path) -> None:
    text = screen(tmp_path, "turns and loads", 80)
    rows = lines_under(text, "Turns")
    row = next(line for line in rows if "1.40, 1.40" in line)
    # 9.80665 sqrt(1.4^2 - 1) / 212.22 m/s = 2.594 deg/s; 212.22 m/s over it: 4.69 km; two circles.
    assert row.split()[-7:-4] == ["2.59", "4.69", "720"]
    assert row.endswith("as given")
    assert all(len(line) <= 80 for line in rows)
    assert row.lstrip().startswith("look around  ")  # names are not broken to bits


def test_legs_are_added_up(tmp_path: Path) -> None:
    rows = lines_under(screen(tmp_path, "turns and loads"), "Legs")
    out, home = rows[-2].split(), rows[-1].split()
    assert out[:3] == ["out", "to", "sea"]
    assert out[-2] == home[-2] == f"{350.0 * 1.852:,.0f}"


def test_what_was_free_stands_first(tmp_path: Path) -> None:
    flight, _ = flown(tmp_path, "free")
    assert flight.solution is not None
    value = f"{flight.solution.value / 1e3:,.0f} km"
    line = screen(tmp_path, "free").splitlines()[3]
    flights = f"({flight.solution.flights} flights)"
    assert line == f"solved      radius {value}, as far as the fuel goes {flights}"


def test_without_an_answer_the_head_says_so(tmp_path: Path) -> None:
    text = screen(tmp_path, "no answer")
    assert "no answer  radius is free, and fuel is short however little it is" in text
    flight, _ = flown(tmp_path, "no answer")
    solved = flight_record(flight)["solved"]
    assert (solved["free"], solved["has_answer"]) == ("radius", False)
    assert "no answer" not in screen(tmp_path, "free")


def test_a_failure_names_what_fails(tmp_path: Path) -> None:
    flight, _ = flown(tmp_path, "too tight")
    assert flight.failure is not None
    headline = failure_headline(flight.failure, METRIC)
    assert headline.startswith(("lift coefficient", "thrust at maximum continuous rating"))
    assert headline.endswith('in "turn" at step 0')


def test_what_takes_no_time_has_no_mach_number(tmp_path: Path) -> None:
    text = screen(tmp_path, "turns and loads")
    row = next(
        line for line in lines_under(text, "Segments") if line.lstrip().startswith("release")
    )
    assert " 0.000" not in row
    assert "300     –" in row  # noqa: RUF001


def test_many_changes_of_limit_are_told_without_their_places(tmp_path: Path) -> None:
    flight, _ = flown(tmp_path, "steps")
    climb = flight.segments[0]
    count = len(climb.steps.mass)
    names = np.array(["one", "other"])[(np.arange(count) * 6 // count) % 2]
    told = dict(holders([replace(climb, steps=replace(climb.steps, held_by=names))]))
    assert told == {climb.name: "in turn one, other"}
    names = np.array(["one", "other"])[(np.arange(count) * 3 // count) % 2]
    told = dict(holders([replace(climb, steps=replace(climb.steps, held_by=names))]))
    assert told[climb.name].count("then") == 2
    assert "to FL" in told[climb.name]


def test_one_limit_in_many_pieces_is_told_once(tmp_path: Path) -> None:
    """Step climbs are all at climb rating, and in between thrust follows from drag."""
    flight, _ = flown(tmp_path, "steps")
    assert dict(holders(flight.segments))["cruise"] == "static thrust"


def test_what_is_booked_is_not_cut_at_a_step(tmp_path: Path) -> None:
    flight, _ = flown(tmp_path, "turns and loads")
    failure = Failure("turnaround", 1, "any", 1.0, 2.0, "m", "")
    last = flown_segments(replace(flight, failure=failure))[-1]
    assert (last.fuel, last.mass_released) == (0.0, pytest.approx(1000.0))
