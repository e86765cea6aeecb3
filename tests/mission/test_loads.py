"""What leaves and comes aboard: stores, releases, refuelling, turnarounds, and mass by the row."""

from __future__ import annotations

from itertools import pairwise
from math import sqrt, tanh
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from mission_files import (
    BYPASS_5,
    CONTINGENCY,
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

AREA, ZERO_LIFT, INDUCED = 62.0, 0.0175, 0.042  # of the test twin
CONSUMPTION = 0.6 / 3600.0 / STANDARD_GRAVITY  # kg/(N s), of the constant-consumption engine
SWEPT = 1e-9  # relative: the sweeps stop when no mass moves by 1e-11 of itself
ROUND_OFF = 1e-12  # of take-off mass

CARRIER = aircraft_content(
    stores={
        "marker": {"mass": "150 kg", "drag_area": "0.05 m**2", "most": 4},
        "tank": {
            "mass": "100 kg",
            "drag_coefficient": 0.0004,
            "fuel_capacity": "800 kg",
            "most": 2,
        },
    }
)
FIVE_TONNES: Content = {"as_needed": None, "load": "5 t"}
UP: Content = {"kind": "climb", "to": "FL300", "calibrated_airspeed": "280 kt", "mach": 0.7}
OUT: Content = {"kind": "cruise", "name": "out", "distance": "100 nmi"}
BACK: Content = OUT | {"name": "back"}
DOWN: Content = {"kind": "descent", "calibrated_airspeed": "280 kt", "mach": 0.7}
TANKER: Content = {
    "kind": "refuelling",
    "transfer": "2 t",
    "time": "10 min",
    "pressure_altitude": "FL250",
    "mach": 0.6,
}
FLIGHT: list[Content] = [
    {"kind": "taxi", "time": "5 min"},
    {"kind": "take-off"},
    UP,
    OUT,
    DOWN,
    {"kind": "approach", "time": "4 min"},
]
AGAIN: list[Content] = [part | {"name": f"second {part['kind']}"} for part in FLIGHT]


def flown(folder: Path, *segments: Content, **given: Any) -> Flight:
    """The segments with 5 t of fuel, from an aircraft that carries stores."""
    files = {"aircraft": CARRIER}
    files |= {name: given.pop(name) for name in ("aircraft", "engine") if name in given}
    mission = mission_content(list(segments), **({"fuel": FIVE_TONNES} | given))
    return fly_files(folder, mission=mission, **files)


def assert_mass_is_kept(flight: Flight) -> None:
    """Every row and the whole flight: mass lost is fuel and what is released, less what comes."""
    slack = ROUND_OFF * flight.totals.takeoff_mass
    rows = [log for log in flight.segments if log.purpose == "mission"]
    for log in rows:
        gone = log.fuel + log.mass_released - log.mass_received
        assert abs(log.mass_start - log.mass_end - gone) <= slack, log.name
    for before, after in pairwise(rows):
        assert abs(before.mass_end - after.mass_start) <= slack, after.name
    gone = sum(log.fuel + log.mass_released - log.mass_received for log in rows)
    assert abs(flight.totals.ramp_mass - rows[-1].mass_end - gone) <= slack
    assert flight.totals.block_fuel == pytest.approx(sum(log.fuel for log in rows), abs=slack)


# --- stores and releases ----------------------------------------------------------------------


def test_stores_weigh_and_drag(tmp_path: Path) -> None:
    cruise = OUT | {"mach": 0.7, "pressure_altitude": "FL300"}
    clean = segment(flown(tmp_path, cruise), "out").steps
    laden = segment(flown(tmp_path, cruise, stores={"marker": 3, "tank": 2}), "out").steps
    assert laden.mass[0] - clean.mass[0] == pytest.approx(3 * 150.0 + 2 * 100.0, rel=1e-9)
    air = flight_condition(30000.0 * FOOT, 0.7)
    pressure = 0.5 * float(air.density) * float(air.true_airspeed) ** 2
    coefficient = laden.weight / (pressure * AREA)
    area = 3 * 0.05 + 2 * 0.0004 * AREA
    drag = pressure * (AREA * (ZERO_LIFT + INDUCED * coefficient**2) + area)
    assert laden.drag == pytest.approx(drag, rel=SWEPT)


def test_what_is_released_is_gone_with_its_drag(tmp_path: Path) -> None:
    release = {"kind": "release", "payload": "400 kg", "stores": {"marker": 2}}
    flight = flown(tmp_path, UP, OUT, release, BACK, stores={"marker": 3})
    assert_mass_is_kept(flight)
    log = segment(flight, "release")
    assert (log.time, log.fuel, log.ground_distance, log.air_distance) == (0.0, 0.0, 0.0, 0.0)
    assert log.mass_released == pytest.approx(400.0 + 2 * 150.0, rel=1e-12)
    assert log.mass_received == 0.0
    before, after = segment(flight, "out").steps, segment(flight, "back").steps
    assert before.mass[-1] - after.mass[0] == pytest.approx(700.0, abs=1e-6)
    air = flight_condition(30000.0 * FOOT, 0.7)
    pressure = 0.5 * float(air.density) * float(air.true_airspeed) ** 2
    lift = np.array([before.weight[-1], after.weight[0]]) / (pressure * AREA)
    drag = pressure * (AREA * (ZERO_LIFT + INDUCED * lift**2) + 0.05 * np.array([3, 1]))
    assert [before.drag[-1], after.drag[0]] == pytest.approx(drag, rel=SWEPT)


def test_a_release_leaves_the_fuel_aboard(tmp_path: Path) -> None:
    flight = flown(tmp_path, UP, OUT, {"kind": "release", "payload": "1 t"}, BACK)
    left = [log.fuel_left for log in flight.segments]
    assert left[2] == pytest.approx(left[1], abs=1e-6)
    total = flight.totals
    assert total.fuel_left == pytest.approx(5000.0 - total.block_fuel, abs=1e-6)


@pytest.mark.parametrize(
    ("release", "stores", "match"),
    [
        ({"stores": {"marker": 4}}, {"marker": 3}, r"stores: 4 marker leave.*aboard are 3 marker"),
        ({"stores": {"tank": 1}}, {}, r"stores: 1 tank leave, and aboard are none"),
        ({"payload": "3 t"}, {}, "payload: 3,000 kg leave, and 2,500 kg are aboard"),
        ({}, {}, r'give payload = "500 kg", or stores'),
        ({"payload": "0 kg"}, {}, r"segment 2.*payload.*greater than 0"),
    ],
)
def test_what_is_not_aboard_is_not_released(
    tmp_path: Path, release: Content, stores: Content, match: str
) -> None:
    with pytest.raises(InputRefused, match=match) as refusal:
        flown(tmp_path, UP, {"kind": "release"} | release, stores=stores)
    assert refusal.value.where.endswith("mission.toml")
    assert refusal.value.key.startswith("segment 2")


@pytest.mark.parametrize(
    ("stores", "match"),
    [
        ({"anvil": 1}, "stores.anvil: is not known to test twin; its file has: marker, tank"),
        ({"marker": 5}, "stores.marker: = 5; test twin carries at most 4"),
        ({"marker": 0}, r"stores.marker.*greater than or equal to 1"),
    ],
)
def test_stores_that_the_aircraft_does_not_carry(
    tmp_path: Path, stores: Content, match: str
) -> None:
    with pytest.raises(InputRefused, match=match):
        flown(tmp_path, UP, stores=stores)


def test_an_aircraft_without_stores_says_so(tmp_path: Path) -> None:
    with pytest.raises(InputRefused, match="its file has: none"):
        flown(tmp_path, UP, stores={"marker": 1}, aircraft=aircraft_content())


def test_stores_hold_fuel_to_start_with(tmp_path: Path) -> None:
    """Tanks of 9 t are a limit, and two stores of 800 kg lift it; empty mass rises by 200 kg."""
    heavy = {"maximum_take_off": "30 t", "maximum_ramp": "30 t", "maximum_landing": "30 t"}
    plane = CARRIER | {"masses": CARRIER["masses"] | heavy}
    fuel = {"as_needed": None, "load": "10.5 t"}
    without = flown(tmp_path, UP, aircraft=plane, fuel=fuel)
    assert without.failure is not None
    assert without.failure.what.startswith("usable fuel to load")
    assert without.failure.bound == pytest.approx(9000.0)
    with_tanks = flown(tmp_path, UP, aircraft=plane, fuel=fuel, stores={"tank": 2})
    assert with_tanks.failure is None
    assert with_tanks.totals.ramp_mass == pytest.approx(18000.0 + 200.0 + 10500.0)


# --- refuelling -------------------------------------------------------------------------------


def test_fuel_comes_aboard_at_a_constant_rate(tmp_path: Path) -> None:
    """``dm/dt = p - q m^2``: what comes less what drag burns has a closed form."""
    flight = flown(tmp_path, TANKER)
    assert_mass_is_kept(flight)
    log = segment(flight, "refuelling")
    air = flight_condition(25000.0 * FOOT, 0.6)
    force = 0.5 * float(air.density) * float(air.true_airspeed) ** 2 * AREA
    p = 2000.0 / 600.0 - CONSUMPTION * force * ZERO_LIFT
    q = CONSUMPTION * INDUCED * STANDARD_GRAVITY**2 / force
    steady, start = sqrt(p / q), 23000.0
    way = tanh(steady * q * 600.0)
    end = steady * (start + steady * way) / (steady + start * way)
    assert log.mass_end == pytest.approx(end, rel=SWEPT)
    assert log.mass_received == pytest.approx(2000.0, rel=1e-12)
    assert log.time == pytest.approx(600.0, rel=1e-12)
    assert log.ground_distance == pytest.approx(float(air.true_airspeed) * 600.0, rel=1e-9)
    assert log.steps.thrust == pytest.approx(log.steps.drag, rel=SWEPT)


def test_fuel_as_needed_is_less_by_what_a_tanker_gives(tmp_path: Path) -> None:
    away = {"kind": "cruise", "distance": "900 nmi"}
    reserves = {"item": [CONTINGENCY, final_reserve("30 min")]}
    flight = flown(tmp_path, TANKER, away, fuel={"as_needed": True}, reserves=reserves)
    assert_mass_is_kept(flight)
    total = flight.totals
    assert total.fuel_margin == pytest.approx(0.0, abs=1e-6)
    assert total.loaded_fuel == pytest.approx(
        total.block_fuel + total.reserve_fuel - 2000.0, rel=1e-9
    )


@pytest.mark.parametrize(
    ("change", "match"),
    [
        ({"mach": None}, "give mach: the segment before does not end at a given speed"),
        ({"calibrated_airspeed": "250 kt"}, "give mach or calibrated_airspeed, not both"),
        ({"transfer": "0 t"}, r"transfer.*greater than 0"),
        ({"time": None}, r"time.*is missing"),
        ({"pressure_altitude": None}, "a refuelling starts the mission in the air"),
    ],
)
def test_refuelling_refusals(tmp_path: Path, change: Content, match: str) -> None:
    tanker = {key: value for key, value in (TANKER | change).items() if value is not None}
    with pytest.raises(InputRefused, match=match) as refusal:
        flown(tmp_path, tanker)
    assert refusal.value.key.startswith("segment 1")


# --- turnarounds ------------------------------------------------------------------------------

TURNAROUND: Content = {
    "kind": "turnaround",
    "payload_off": "1 t",
    "payload_on": "1.5 t",
    "fuel_on": "1 t",
}


@pytest.mark.parametrize("engine", ["constant", "cycle"])
def test_a_turnaround_exchanges_loads_on_the_ground(tmp_path: Path, engine: str) -> None:
    power = {} if engine == "constant" else {"engine": BYPASS_5}
    flight = flown(tmp_path, *FLIGHT, TURNAROUND, *AGAIN, stores={"marker": 1}, **power)
    assert flight.failure is None
    assert_mass_is_kept(flight)
    log = segment(flight, "turnaround")
    assert (log.time, log.fuel) == (0.0, 0.0)
    assert log.mass_released == pytest.approx(1000.0, rel=1e-12)
    assert log.mass_received == pytest.approx(2500.0, rel=1e-12)
    landed = segment(flight, "approach and landing")
    assert log.fuel_left == pytest.approx(landed.fuel_left + 1000.0, abs=1e-6)
    # What is left is what was loaded and taken on, less what was burnt.
    total = flight.totals
    assert total.fuel_left == pytest.approx(5000.0 + 1000.0 - total.block_fuel, abs=1e-6)
    assert total.landing_mass == pytest.approx(
        18000.0 + 150.0 - 1000.0 + 1500.0 + total.fuel_left, abs=1e-6
    )


def test_the_mass_is_never_below_that_of_a_dry_aircraft_in_a_turnaround(tmp_path: Path) -> None:
    """All payload but a little leaves and comes again while there is hardly any fuel aboard."""
    swap = {"kind": "turnaround", "payload_off": "2.5 t", "payload_on": "2 t"}
    flight = flown(tmp_path, *FLIGHT, swap, fuel={"as_needed": None, "load": "700 kg"})
    log = segment(flight, "turnaround")
    assert 0.0 < log.fuel_left < 300.0
    assert flight.failure is None
    assert np.min(log.steps.mass) >= 15500.0 + 2000.0


@pytest.mark.parametrize(
    ("segments", "match"),
    [
        ([UP, TURNAROUND], "the aircraft is in the air; put an approach before this turnaround"),
        ([TURNAROUND, *FLIGHT], "nothing was flown yet: load the aircraft for its first flight"),
        ([*FLIGHT, TURNAROUND | {"payload_off": "5 t"}], "payload: 5,000 kg leave, and 2,500 kg"),
        ([*FLIGHT, UP], "the aircraft stands on the ground; put a take-off before it"),
        ([FLIGHT[0], {"kind": "release", "payload": "1 t"}], "stands on the ground"),
    ],
)
def test_turnaround_refusals(tmp_path: Path, segments: list[Content], match: str) -> None:
    with pytest.raises(InputRefused, match=match) as refusal:
        flown(tmp_path, *segments)
    assert refusal.value.key.startswith("segment ")


# --- fuel loaded up to a take-off mass --------------------------------------------------------


@pytest.mark.parametrize("engine", ["constant", "cycle"])
@pytest.mark.parametrize("mass", [21000.0, 24500.0])
def test_fuel_is_loaded_up_to_a_take_off_mass(tmp_path: Path, engine: str, mass: float) -> None:
    power = {} if engine == "constant" else {"engine": BYPASS_5}
    fuel = {"as_needed": None, "to_take_off_mass": f"{mass:g} kg"}
    flight = flown(tmp_path, *FLIGHT, fuel=fuel, stores={"tank": 1}, **power)
    assert_mass_is_kept(flight)
    total = flight.totals
    assert total.takeoff_mass == pytest.approx(mass, rel=1e-12)
    taxi = segment(flight, "taxi").fuel
    assert total.ramp_mass == pytest.approx(mass + taxi, rel=1e-12)
    assert total.loaded_fuel == pytest.approx(mass + taxi - 18100.0, rel=1e-9)


def test_a_take_off_mass_is_met_whatever_happens_after_it(tmp_path: Path) -> None:
    fuel = {"as_needed": None, "to_take_off_mass": "23 t"}
    release = {"kind": "release", "payload": "1 t"}
    tanker = {"kind": "refuelling", "transfer": "1 t", "time": "5 min", "mach": 0.6}
    flight = flown(tmp_path, *FLIGHT[:4], release, tanker, BACK | {"mach": 0.7}, fuel=fuel)
    assert flight.totals.takeoff_mass == pytest.approx(23000.0, rel=1e-12)
    assert_mass_is_kept(flight)


def test_up_to_the_limit_is_the_greatest_take_off_mass(tmp_path: Path) -> None:
    """Where tanks and ramp mass let it; 9 t of tanks do not here, with less payload."""
    limit = {"as_needed": None, "to_take_off_mass": "limit"}
    long_way = [*FLIGHT[:3], OUT | {"distance": "2000 nmi"}]
    full = flown(tmp_path, *long_way, fuel=limit, payload="3 t")
    assert full.totals.takeoff_mass == pytest.approx(27000.0, rel=1e-12)
    by_tanks = flown(tmp_path, *long_way, fuel=limit, payload="1 t")
    assert by_tanks.totals.loaded_fuel == pytest.approx(9000.0, rel=1e-12)


@pytest.mark.parametrize(
    ("fuel", "match"),
    [
        (
            {"load": "5 t", "to_take_off_mass": "25 t", "as_needed": None},
            "load, to_take_off_mass and as_needed contradict",
        ),
        ({"load": "5 t"}, "load, to_take_off_mass and as_needed contradict"),
        ({"as_needed": None}, 'give load = "9.5 t", say, or to_take_off_mass'),
        ({"as_needed": None, "to_take_off_mass": "0 t"}, "'0 t' is not a mass above zero"),
        ({"as_needed": None, "to_take_off_mass": "most"}, r"fuel.to_take_off_mass.*'most'"),
    ],
)
def test_fuel_refusals(tmp_path: Path, fuel: Content, match: str) -> None:
    with pytest.raises(InputRefused, match=match):
        fly_files(tmp_path, mission=mission_content([UP], fuel=fuel))
