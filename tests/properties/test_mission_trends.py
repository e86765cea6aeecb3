"""What must grow with what, and what must not change at all."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from mission_files import (
    BYPASS_5,
    Content,
    aircraft_content,
    engine_content,
    final_reserve,
    merged,
    mission_content,
)
from mission_strategies import FEW, HOLDS, SOME, flown, missions, of_mission

from mission.results import Flight

SAME = 1e-9  # relative: two ways to one flight, each closed to 1e-11 of mass
SCHEDULE = {"calibrated_airspeed": "280 kt", "mach": 0.72}
PLAIN: list[Content] = [
    {"kind": "climb", "to": "FL350", **SCHEDULE},
    {"kind": "cruise", "distance": "rest"},
    {"kind": "descent", **SCHEDULE},
]


def assert_same(one: Flight, other: Flight, scale: float = 1.0) -> None:
    """Every fuel and mass in proportion, every time and distance alike."""
    assert len(one.segments) == len(other.segments)
    for first, second in zip(one.segments, other.segments, strict=True):
        size = one.totals.block_fuel
        assert second.fuel == pytest.approx(first.fuel * scale, rel=SAME, abs=SAME * size * scale)
        assert second.mass_end == pytest.approx(first.mass_end * scale, rel=SAME)
        assert second.time == pytest.approx(first.time, rel=1e-7, abs=1e-5)
        assert second.ground_distance == pytest.approx(first.ground_distance, rel=1e-7, abs=1e-2)


@given(mission=missions(), more=st.integers(20, 200))
@FEW
def test_farther_needs_more_fuel(mission: Content, more: int) -> None:
    nautical_miles = int(mission["distance"].removesuffix(" nmi")) + more
    near, far = flown(mission), flown(mission | {"distance": f"{nautical_miles} nmi"})
    assert near.flown
    assert far.totals.block_fuel > near.totals.block_fuel
    assert far.totals.loaded_fuel > near.totals.loaded_fuel


@given(mission=missions(), more=st.integers(50, 1000))
@FEW
def test_heavier_needs_more_fuel(mission: Content, more: int) -> None:
    payload = int(mission["payload"].removesuffix(" kg")) + more
    light, heavy = flown(mission), flown(mission | {"payload": f"{payload} kg"})
    assert light.flown
    assert heavy.totals.block_fuel > light.totals.block_fuel
    assert heavy.totals.loaded_fuel > light.totals.loaded_fuel


@given(mission=missions())
@FEW
def test_fuel_as_needed_leaves_just_the_reserves(mission: Content) -> None:
    total = flown(mission).totals
    assert abs(total.fuel_margin) <= 1e-6 * total.loaded_fuel


@given(mission=missions(holds=HOLDS[:2]))
@FEW
def test_the_same_load_given_flies_the_same_flight(mission: Content) -> None:
    needed = flown(mission)
    load = needed.totals.loaded_fuel
    given_load = flown(mission | {"fuel": {"load": f"{load!r} kg"}})
    assert given_load.failure is None
    assert_same(needed, given_load)


@given(mission=missions(holds=HOLDS[2:]))
@FEW
def test_the_same_load_given_flies_the_same_cruise_climb(mission: Content) -> None:
    """What follows a cruise-climb begins within a centimetre of its end, and no nearer.

    A centimetre of climb is some 1e-4 kg of fuel in two tonnes.
    """
    needed = flown(mission)
    load = needed.totals.loaded_fuel
    given_load = flown(mission | {"fuel": {"load": f"{load!r} kg"}})
    assert given_load.failure is None
    assert given_load.totals.block_fuel == pytest.approx(needed.totals.block_fuel, rel=2e-7)


@given(mission=missions(), scale=st.sampled_from([0.5, 1.3, 2.0]))
@FEW
def test_an_aircraft_twice_the_size_burns_twice_as_much(mission: Content, scale: float) -> None:
    """Masses, wing and thrust in proportion leave every speed, angle and time as it was."""

    def sized(factor: float) -> Flight:
        masses = {
            "operating_empty": 15500.0,
            "maximum_zero_fuel": 19500.0,
            "maximum_ramp": 27200.0,
            "maximum_take_off": 27000.0,
            "maximum_landing": 24000.0,
        }
        payload = float(mission["payload"].removesuffix(" kg"))
        changed = mission | {"payload": f"{payload * factor} kg"}
        changed["segment"] = [
            merged(entry, {"fuel": f"{40.0 * factor} kg"}) if "fuel" in entry else entry
            for entry in mission["segment"]
        ]
        return flown(
            changed,
            aircraft=aircraft_content(
                masses={name: f"{value * factor} kg" for name, value in masses.items()},
                fuel_tanks={"capacity": f"{9.0 * factor} t"},
                wing_area=f"{62.0 * factor} m**2",
            ),
            engine=engine_content(static_thrust=f"{55.0 * factor} kN"),
        )

    assert_same(sized(1.0), sized(scale), scale)


@given(mission=missions())
@FEW
def test_four_engines_of_half_the_thrust_are_two(mission: Content) -> None:
    four = flown(
        mission,
        aircraft=aircraft_content(engine_count=4),
        engine=engine_content(static_thrust="27.5 kN"),
    )
    assert_same(flown(mission), four)


@given(factor=st.floats(0.8, 1.25), kilometres=st.integers(500, 5000))
@SOME
def test_fuel_answers_to_consumption_as_the_breguet_equation_says(
    factor: float, kilometres: int
) -> None:
    """With landing mass held, fuel is m1 (exp(y) - 1) with y in proportion to consumption."""
    cruise = {
        "kind": "cruise",
        "holds": "mach and lift coefficient",
        "mach": 0.74,
        "lift_coefficient": 0.5,
        "distance": f"{kilometres} km",
    }
    mission = mission_content([cruise])
    landing = 18000.0
    one = flown(mission).totals.block_fuel
    other = flown(mission, aircraft=aircraft_content(fuel_flow_factor=factor)).totals.block_fuel
    y = np.log1p(one / landing)
    assert other == pytest.approx(landing * np.expm1(factor * y), rel=1e-8)


@given(wind=st.integers(5, 80))
@SOME
def test_a_headwind_lengthens_the_air_distance_and_a_tailwind_shortens_it(wind: int) -> None:
    def at(knots: int) -> Flight:
        return flown(mission_content(PLAIN, distance="1000 nmi", headwind=f"{knots} kt"))

    against, still, along = at(wind), at(0), at(-wind)
    assert along.totals.air_distance < still.totals.air_distance < against.totals.air_distance
    assert along.totals.block_fuel < still.totals.block_fuel < against.totals.block_fuel
    for log in against.segments:
        blown = wind * 1852.0 / 3600.0 * log.time
        assert log.air_distance - log.ground_distance == pytest.approx(blown, rel=1e-9)


@pytest.mark.parametrize("change", ["distance", "payload"])
def test_more_needs_more_with_a_cycle_engine(change: str) -> None:
    mission = mission_content(PLAIN, distance="600 nmi", payload="1500 kg")
    more = mission | {"distance": "640 nmi"} if change == "distance" else mission
    more = mission | {"payload": "1700 kg"} if change == "payload" else more
    less_fuel, more_fuel = (flown(m, engine=BYPASS_5).totals for m in (mission, more))
    assert more_fuel.block_fuel > less_fuel.block_fuel
    assert abs(more_fuel.fuel_margin) <= 1e-6 * more_fuel.loaded_fuel


def test_the_same_load_given_flies_the_same_flight_with_a_cycle_engine() -> None:
    mission = mission_content(
        PLAIN, distance="700 nmi", reserves={"item": [final_reserve("30 min")]}
    )
    needed = flown(mission, engine=BYPASS_5)
    load = needed.totals.loaded_fuel
    again = flown(mission | {"fuel": {"load": f"{load!r} kg"}}, engine=BYPASS_5)
    assert_same(needed, again)
    assert [log.name for log in of_mission(again)] == ["climb", "cruise", "descent"]
