"""Legs with distances and air of their own; temperature and wind by altitude; radius missions."""

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
    fly_files,
    mission_content,
    segment,
)

from engine.errors import InputRefused
from engine.quantities import FOOT, KNOT
from mission.air import Air
from mission.legs import AirTable, air_of
from mission.march.nodes import differentiation_matrix, integration_matrix
from mission.results import Flight, SegmentLog

ENGINES = {"constant": CONSTANT_ENGINE, "cycle": BYPASS_5}
MILE = 1852.0
UP: Content = {"kind": "climb", "to": "FL350", "calibrated_airspeed": "280 kt", "mach": 0.7}
REST: Content = {"kind": "cruise", "distance": "rest"}
DOWN: Content = {"kind": "descent", "calibrated_airspeed": "260 kt", "mach": 0.7}
OUT: list[Content] = [UP, REST, DOWN]
HOME: list[Content] = [
    UP | {"name": "climb home", "starts_leg": "home"},
    REST | {"name": "cruise home"},
    DOWN | {"name": "descent home"},
]
LEVELS, DAYS, WINDS = [0.0, 18000.0, 39000.0], [10.0, -5.0, 8.0], [5.0, 30.0, 65.0]


def table(**given: Any) -> Content:
    """Temperature and wind by altitude."""
    return {
        "pressure_altitude": [f"{level} ft" for level in LEVELS],
        "day": [f"ISA{day:+g}" for day in DAYS],
        "headwind": [f"{wind} kt" for wind in WINDS],
    } | given


INTO, BEFORE = table(), table(headwind=[f"{-wind} kt" for wind in WINDS])


def flown(folder: Path, *segments: Content, engine: Any = CONSTANT_ENGINE, **given: Any) -> Flight:
    refinement = given.pop("refinement", 1)
    mission = mission_content(list(segments), **given)
    return fly_files(folder, mission=mission, engine=engine, refinement=refinement)


def of_leg(flight: Flight, leg: str) -> list[SegmentLog]:
    return [log for log in flight.segments if log.leg == leg and log.purpose == "mission"]


def ground(flight: Flight, leg: str) -> float:
    """Ground distance of a leg [m]."""
    return sum(log.ground_distance for log in of_leg(flight, leg))


def integral(log: SegmentLog, values: Any) -> float:
    """Over time along a log, each span by the polynomial through its own nodes."""
    steps = log.steps
    joints = np.flatnonzero(np.diff(steps.elapsed_time) < 1e-9) + 1
    ends = [0, *joints.tolist(), len(steps.mass)]
    total = 0.0
    for a, b in pairwise(ends):
        time, own = steps.elapsed_time[a:b], np.asarray(values)[a:b]
        rate = differentiation_matrix(b - a) @ time
        total += float(integration_matrix(b - a)[-1] @ (own * rate))
    return total


@pytest.mark.parametrize("engine", ENGINES)
def test_each_leg_covers_its_distance_in_its_own_air(tmp_path: Path, engine: str) -> None:
    legs = [
        {"name": "out", "distance": "620 nmi", "air": INTO},
        {"name": "home", "distance": "480 nmi", "headwind": "-25 kt", "day": "ISA-10"},
    ]
    flight = flown(tmp_path, *OUT, *HOME, leg=legs, engine=ENGINES[engine])
    assert flight.failure is None
    assert ground(flight, "out") == pytest.approx(620.0 * MILE, abs=1.0)
    assert ground(flight, "home") == pytest.approx(480.0 * MILE, abs=1.0)
    assert flight.totals.ground_distance == pytest.approx(1100.0 * MILE, abs=2.0)
    for log in of_leg(flight, "home"):
        wind = 25.0 * KNOT * log.time
        assert log.ground_distance - log.air_distance == pytest.approx(wind, rel=1e-7), log.name
        sound = log.steps.true_airspeed / log.steps.mach
        assert np.max(sound) < 340.3  # a cold day throughout


def test_wind_by_altitude_is_that_of_the_altitude_flown(tmp_path: Path) -> None:
    flight = flown(tmp_path, *OUT, distance="600 nmi", air=INTO)
    cruise = segment(flight, "cruise")
    wind = float(np.interp(35000.0, LEVELS, WINDS)) * KNOT
    lost = cruise.air_distance - cruise.ground_distance
    assert lost == pytest.approx(wind * cruise.time, rel=1e-9)
    for name in ("climb", "descent"):
        log = segment(flight, name)
        winds = np.interp(log.steps.pressure_altitude / FOOT, LEVELS, WINDS) * KNOT
        lost = log.air_distance - log.ground_distance
        # Time as a polynomial through nine nodes: some six digits.
        assert lost == pytest.approx(integral(log, winds), rel=1e-5), name
        joints = np.round(log.steps.pressure_altitude / FOOT)
        assert np.count_nonzero(joints == 18000.0) == 2  # a kink of the table is a joint


def test_out_and_back_are_different(tmp_path: Path) -> None:
    legs = [
        {"name": "out", "distance": "500 nmi", "air": INTO},
        {"name": "home", "distance": "500 nmi", "air": BEFORE},
    ]
    flight = flown(tmp_path, *OUT, *HOME, leg=legs)
    out, home = of_leg(flight, "out"), of_leg(flight, "home")
    assert sum(log.time for log in out) > 1.2 * sum(log.time for log in home)
    assert sum(log.fuel for log in out) > 1.2 * sum(log.fuel for log in home)
    assert ground(flight, "out") == pytest.approx(ground(flight, "home"), abs=1.0)


def test_what_a_leg_does_not_say_is_the_missions(tmp_path: Path) -> None:
    legs = [{"name": "out", "distance": "500 nmi"}, {"name": "home", "distance": "500 nmi"}]
    both = [leg | {"day": "ISA+12", "headwind": "15 kt"} for leg in legs]
    shared = flown(tmp_path, *OUT, *HOME, leg=legs, day="ISA+12", headwind="15 kt")
    said = flown(tmp_path, *OUT, *HOME, leg=both)
    assert shared.totals.block_fuel == pytest.approx(said.totals.block_fuel, rel=1e-12)
    by_table = flown(tmp_path, *OUT, *HOME, leg=legs, air=INTO)
    in_each = flown(tmp_path, *OUT, *HOME, leg=[leg | {"air": INTO} for leg in legs])
    assert by_table.totals.block_fuel == pytest.approx(in_each.totals.block_fuel, rel=1e-12)


def test_a_table_of_one_value_is_that_value(tmp_path: Path) -> None:
    even = {
        "pressure_altitude": ["0 ft", "FL200", "FL400"],
        "day": ["ISA+7"] * 3,
        "headwind": ["20 kt"] * 3,
    }
    by_table = flown(tmp_path, *OUT, distance="600 nmi", air=even)
    plain = flown(tmp_path, *OUT, distance="600 nmi", day="ISA+7", headwind="20 kt")
    # The table cuts the climb and descent once more: as much as their integration error.
    assert by_table.totals.block_fuel == pytest.approx(plain.totals.block_fuel, rel=1e-6)


def test_a_table_may_leave_one_of_the_two_to_the_mission(tmp_path: Path) -> None:
    days = {"pressure_altitude": ["0 ft", "FL400"], "day": ["ISA+10", "ISA"]}
    flight = flown(tmp_path, *OUT, distance="600 nmi", air=days, headwind="20 kt")
    log = segment(flight, "cruise")
    assert log.air_distance - log.ground_distance == pytest.approx(20.0 * KNOT * log.time, rel=1e-9)


@pytest.mark.parametrize("engine", ENGINES)
def test_a_radius_is_the_distance_of_both_legs(tmp_path: Path, engine: str) -> None:
    legs = [
        {"name": "out", "distance": "radius", "air": INTO},
        {"name": "home", "distance": "radius", "air": BEFORE},
    ]
    watch = {"kind": "loiter", "time": "20 min"}
    flight = flown(tmp_path, *OUT, watch, *HOME, leg=legs, radius="420 nmi", engine=ENGINES[engine])
    assert flight.failure is None
    for leg in ("out", "home"):
        assert ground(flight, leg) == pytest.approx(420.0 * MILE, abs=1.0)
    assert segment(flight, "loiter").leg == "out"


def test_a_leg_may_be_flown_without_a_distance_of_its_own(tmp_path: Path) -> None:
    legs = [{"name": "out", "distance": "400 nmi"}, {"name": "home"}]
    back = [HOME[0], {"kind": "cruise", "name": "cruise home", "time": "30 min"}, HOME[2]]
    flight = flown(tmp_path, *OUT, *back, leg=legs)
    assert ground(flight, "out") == pytest.approx(400.0 * MILE, abs=1.0)
    assert segment(flight, "cruise home").time == pytest.approx(1800.0)


def test_the_first_leg_may_be_started_too(tmp_path: Path) -> None:
    started = [UP | {"starts_leg": "out"}, *OUT[1:], *HOME]
    legs = [{"name": name, "distance": "400 nmi"} for name in ("out", "home")]
    flight = flown(tmp_path, *started, leg=legs)
    assert ground(flight, "out") == pytest.approx(400.0 * MILE, abs=1.0)


def test_each_leg_ends_at_the_height_of_its_place(tmp_path: Path) -> None:
    legs = [
        {"name": "out", "distance": "300 nmi", "elevation": "3000 ft"},
        {"name": "home", "distance": "300 nmi"},
    ]
    flight = flown(tmp_path, *OUT, *HOME, leg=legs, destination={"elevation": "800 ft"})
    ends = [segment(flight, name).steps.pressure_altitude[-1] / FOOT
            for name in ("descent", "descent home")]  # fmt: skip
    assert ends == pytest.approx([4500.0, 2300.0], abs=0.01)


@pytest.mark.parametrize("engine", ENGINES)
def test_the_integration_error_in_tables_of_air_is_honest(tmp_path: Path, engine: str) -> None:
    few, many = (
        flown(tmp_path, *OUT, distance="500 nmi", air=INTO, engine=ENGINES[engine], refinement=n)
        for n in (1, 4)
    )
    moved = abs(few.totals.block_fuel - many.totals.block_fuel)
    assert moved <= few.totals.integration_error + 1e-10 * few.totals.takeoff_mass
    assert few.totals.integration_error < 1e-4 * few.totals.block_fuel


def test_the_lapse_rate_of_a_table_is_the_slope_of_its_temperature() -> None:
    levels = [level * FOOT for level in LEVELS]
    air = Air(tuple(DAYS), tuple(-wind * KNOT for wind in WINDS), tuple(levels))
    heights = np.array([500.0, 3000.0, 8000.0, 10900.0, 11500.0, 13000.0, 15000.0])
    near = 0.5
    above, below = (air.condition(heights + way).static_temperature for way in (near, -near))
    slope = (above - below) / (2.0 * near)
    assert air.condition(heights).lapse_rate == pytest.approx(slope, abs=1e-9)


def test_beyond_a_table_its_ends_hold() -> None:
    air = Air(tuple(DAYS), tuple(WINDS), (1000.0, 5000.0, 11000.0))
    assert air.deviation_at(np.array([0.0, 12000.0])).tolist() == [10.0, 8.0]
    assert air.tailwind_at(np.array([-500.0, 20000.0])).tolist() == [5.0, 65.0]
    assert air.condition(np.array([500.0, 15000.0])).lapse_rate.tolist() == [-0.0065, 0.0]


def test_one_day_and_wind_are_no_table() -> None:
    assert air_of(5.0, 10.0, None) == Air((5.0,), (-10.0,))
    assert not air_of(5.0, 10.0, None).is_table
    assert air_of(5.0, 10.0, None).kinks == ()
    given = AirTable(pressure_altitude=["0 ft", "FL200"], day=["ISA+3", "ISA"])
    assert air_of(5.0, 10.0, given).tailwind == (-10.0, -10.0)
    assert air_of(5.0, 10.0, given).temperature_deviation == (3.0, 0.0)


LEG: Content = {"name": "out", "distance": "600 nmi"}


@pytest.mark.parametrize(
    ("segments", "given", "match"),
    [
        ([*OUT], {"leg": [LEG, LEG | {"name": "home"}]}, "legs out, home; started: none"),
        ([*OUT, *HOME], {"leg": [LEG]}, "legs out; started: home"),
        ([*OUT, *HOME], {}, "legs none; started: home"),
        ([*OUT, *HOME], {"leg": [LEG, LEG]}, "two legs have one name"),
        (OUT, {"leg": [LEG], "distance": "600 nmi"}, "distance belongs to each leg"),
        (OUT, {"leg": [LEG], "radius": "600 nmi"}, 'a leg with distance = "radius" go together'),
        (OUT, {"radius": "600 nmi"}, 'a leg with distance = "radius" go together'),
        (OUT, {"leg": [LEG | {"distance": "radius"}]}, r'radius = "300 nmi", say'),
        (OUT, {"leg": [LEG | {"distance": "far"}]}, r"leg 1.*distance.*'far'"),
        (OUT, {"leg": [LEG | {"length": "1 km"}]}, r"leg 1.*length: unknown key"),
        (OUT, {}, r'segment 2 "cruise".*needs a distance at the top of the mission or leg'),
        ([UP, REST, REST, DOWN], {"leg": [LEG]}, 'two cruises of leg "out" have distance = "rest"'),
        (
            [UP, REST | {"distance": "100 nmi"}, DOWN],
            {"leg": [LEG]},
            r'= 600 nmi is given of leg "out", but no cruise has distance = "rest"',
        ),
        (OUT, {"leg": [LEG | {"day": "ISA+5", "air": INTO}]}, "day and air.day contradict"),
        (
            OUT,
            {"leg": [LEG | {"headwind": "5 kt", "air": INTO}]},
            "headwind and air.headwind contradict",
        ),
        (
            OUT,
            {"distance": "600 nmi", "air": {"pressure_altitude": ["0 ft", "FL300"]}},
            "give day, headwind, or both",
        ),
        (
            OUT,
            {"distance": "600 nmi", "air": table(day=["ISA", "ISA"])},
            "day has 2 values for 3 pressure altitudes",
        ),
        (
            OUT,
            {"distance": "600 nmi", "air": table(pressure_altitude=["0 ft", "FL300", "FL200"])},
            "pressure_altitude must rise from one to the next",
        ),
        (
            OUT,
            {"distance": "600 nmi", "air": table(headwind=["5 kt", "300 kt", "5 kt"])},
            r"air.headwind.*2.*300 kt|air\.headwind.*less than or equal to 100",
        ),
    ],
)
def test_refusals(tmp_path: Path, segments: list[Content], given: Content, match: str) -> None:
    with pytest.raises(InputRefused, match=match) as refusal:
        flown(tmp_path, *segments, **given)
    assert refusal.value.where.endswith("mission.toml")
