"""Every hard limit: named with its segment, its value and its bound, the log finite up to there."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import numpy as np
import pytest
from mission_files import (
    OUT_AND_DOWN,
    TO_ALTERNATE,
    Content,
    aircraft_content,
    engine_content,
    final_reserve,
    fly_files,
    mission_content,
    segment,
)

from engine.errors import InputRefused
from engine.quantities import FOOT, KNOT, NAUTICAL_MILE
from mission.results import Failure, Flight

UP: Content = {"kind": "climb", "to": "FL350", "calibrated_airspeed": "280 kt", "mach": 0.74}
OUT: Content = {"kind": "cruise", "name": "out", "distance": "300 nmi"}
DOWN: Content = {"kind": "descent", "calibrated_airspeed": "280 kt", "mach": 0.74}


def assert_finite(flight: Flight) -> None:
    for log in flight.segments:
        for name, values in vars(log.steps).items():
            numbers = values if name != "held_by" else np.zeros(0)
            assert np.all(np.isfinite(numbers)), f"{log.name}: {name}"
    for name, value in vars(flight.totals).items():
        assert np.isfinite(value), name


def failure_of(
    folder: Path,
    segments: list[Content],
    aircraft: Content | None = None,
    engine: Content | None = None,
    **changes: Any,
) -> tuple[Failure, Flight]:
    """The failure of a mission that cannot be flown, its log looked over."""
    flight = fly_files(
        folder, mission=mission_content(segments, **changes), aircraft=aircraft, engine=engine
    )
    assert flight.failure is not None
    assert not flight.flown
    assert_finite(flight)
    assert flight.failure.segment in [log.name for log in flight.segments]
    log = segment(flight, flight.failure.segment)
    assert 0 <= flight.failure.step < len(log.steps.mass)
    assert flight.failure.advice
    return flight.failure, flight


def test_a_mission_within_all_limits_has_no_failure(tmp_path: Path) -> None:
    flight = fly_files(tmp_path, mission=mission_content([UP, OUT, DOWN]))
    assert flight.failure is None
    assert flight.flown
    assert all(margin.is_met for margin in flight.margins)


def test_thrust_short_of_drag(tmp_path: Path) -> None:
    fast = OUT | {"mach": 0.80, "pressure_altitude": "FL250"}
    failure, flight = failure_of(tmp_path, [fast], engine=engine_content(static_thrust="18 kN"))
    assert failure.segment == "out"
    assert "thrust" in failure.what
    assert failure.unit == "N"
    assert 0.0 < failure.value < failure.bound
    steps = segment(flight, "out").steps
    assert failure.value == pytest.approx(steps.thrust[failure.step])
    assert failure.bound == pytest.approx(steps.drag[failure.step])
    # What there is, is what the engine gives: 18 kN twice, times a power of the density ratio.
    air_density = 1.225 * (1.0 - 0.0065 * 25000.0 * FOOT / 288.15) ** 4.2559
    assert failure.value == pytest.approx(36000.0 * (air_density / 1.225) ** 0.8, rel=1e-4)


def test_an_altitude_that_cannot_be_reached(tmp_path: Path) -> None:
    failure, flight = failure_of(
        tmp_path, [UP | {"to": "FL500"}, OUT, DOWN], engine=engine_content(static_thrust="20 kN")
    )
    assert failure.segment == "climb"
    assert failure.what == "rate of climb"
    assert failure.unit == "m/s"
    assert failure.value < failure.bound
    assert failure.bound == pytest.approx(100.0 * FOOT / 60.0)
    before = segment(flight, "climb").steps
    rates = before.true_airspeed * np.sin(before.flight_path_angle)
    assert np.all(rates[: failure.step] >= failure.bound)


def test_a_speed_that_cannot_be_reached(tmp_path: Path) -> None:
    start = {"kind": "cruise", "distance": "50 nmi", "pressure_altitude": "FL250", "mach": 0.5}
    dash = {"kind": "acceleration", "name": "dash", "to_mach": 0.82}
    failure, _ = failure_of(tmp_path, [start, dash], engine=engine_content(static_thrust="18 kN"))
    assert failure.segment == "dash"
    assert failure.what == "acceleration"
    assert failure.unit == "m/s2"
    assert failure.value < failure.bound


def test_lift_coefficient_above_its_maximum(tmp_path: Path) -> None:
    slow = OUT | {"mach": 0.33, "pressure_altitude": "FL350"}
    failure, flight = failure_of(tmp_path, [slow], engine=engine_content(static_thrust="150 kN"))
    assert failure.segment == "out"
    assert failure.what == "lift coefficient"
    assert failure.bound == 1.5
    steps = segment(flight, "out").steps
    force = 0.7 * 23842.3 * 0.33**2 * 62.0  # pressure at 35,000 ft: ISO 2533:1975
    assert failure.value == pytest.approx(steps.lift[failure.step] / force, rel=1e-5)


def test_flaps_help_low_down_only(tmp_path: Path) -> None:
    """A change of speed may use the flaps near the ground, not at FL350."""

    def slowing(altitude: str, to_mach: float) -> Flight:
        start = {"kind": "cruise", "distance": "9 nmi", "pressure_altitude": altitude, "mach": 0.5}
        slow = {"kind": "acceleration", "name": "slow", "to_mach": to_mach}
        return fly_files(tmp_path, mission=mission_content([start, slow]))

    low, high = slowing("3000 ft", 0.175), slowing("FL250", 0.265)
    assert low.failure is None
    assert high.failure is not None
    assert high.failure.what == "lift coefficient"
    assert high.failure.bound == 1.5


def test_mach_number_above_its_limit(tmp_path: Path) -> None:
    failure, _ = failure_of(tmp_path, [UP, OUT | {"mach": 0.85}])
    assert failure.what == "Mach number"
    assert failure.segment == "out"
    assert failure.bound == 0.82
    assert failure.value > 0.82


def test_calibrated_airspeed_above_its_limit(tmp_path: Path) -> None:
    failure, _ = failure_of(tmp_path, [UP | {"calibrated_airspeed": "350 kt"}, OUT])
    assert failure.what == "calibrated airspeed"
    assert failure.segment == "climb"
    assert failure.value / KNOT == pytest.approx(350.0, rel=1e-6)
    assert failure.bound / KNOT == pytest.approx(340.0, rel=1e-9)


def test_a_path_steeper_than_the_equations_hold(tmp_path: Path) -> None:
    """An engine of twice the weight would go straight up: that is said, not clipped in silence."""
    failure, _ = failure_of(
        tmp_path,
        [UP | {"calibrated_airspeed": "250 kt", "rating": "take_off"}],
        engine=engine_content(static_thrust="200 kN"),
    )
    assert "path angle" in failure.what
    assert failure.segment == "climb"


@pytest.mark.parametrize("fuel", [{"as_needed": True}, {"as_needed": None, "load": "2 t"}])
def test_a_distance_shorter_than_climb_and_descent(tmp_path: Path, fuel: Content) -> None:
    failure, flight = failure_of(tmp_path, OUT_AND_DOWN, distance="60 nmi", fuel=fuel)
    assert failure.segment == "cruise"
    assert "distance" in failure.what
    assert failure.unit == "m"
    flown = segment(flight, "climb").ground_distance + segment(flight, "descent").ground_distance
    # Either the way flown against the distance, or the rest against nothing: the same shortfall.
    missing = abs(failure.value - failure.bound)
    assert missing == pytest.approx(flown - 60.0 * NAUTICAL_MILE, rel=1e-9)


def test_an_alternate_nearer_than_climb_and_descent(tmp_path: Path) -> None:
    alternate = {
        "distance": "30 nmi",
        "pressure_altitude": "FL250",
        "mach": 0.6,
        "calibrated_airspeed": "280 kt",
    }
    failure, _ = failure_of(
        tmp_path,
        OUT_AND_DOWN,
        distance="800 nmi",
        reserves={"item": [TO_ALTERNATE], "alternate": alternate},
    )
    assert failure.segment == "alternate cruise"
    assert "distance" in failure.what


def test_tanks_too_small(tmp_path: Path) -> None:
    failure, flight = failure_of(
        tmp_path,
        OUT_AND_DOWN,
        aircraft=aircraft_content(fuel_tanks={"capacity": "2 t", "unusable": "50 kg"}),
        distance="1500 nmi",
    )
    assert "fuel" in failure.what
    assert failure.unit == "kg"
    assert failure.bound == pytest.approx(1950.0)
    assert failure.value == pytest.approx(flight.totals.loaded_fuel)
    assert failure.value > failure.bound


@pytest.mark.parametrize(
    ("limit", "mass", "what"),
    [
        ("maximum_zero_fuel", "17.5 t", "zero-fuel mass"),
        ("maximum_ramp", "19.2 t", "ramp mass"),
        ("maximum_landing", "17.9 t", "landing mass"),
    ],
)
def test_mass_limits(tmp_path: Path, limit: str, mass: str, what: str) -> None:
    masses = {limit: mass}
    if limit == "maximum_ramp":
        masses["maximum_take_off"] = mass
        masses["maximum_zero_fuel"] = mass
        masses["maximum_landing"] = mass
    failure, flight = failure_of(
        tmp_path, OUT_AND_DOWN, aircraft=aircraft_content(masses=masses), distance="1500 nmi"
    )
    assert failure.what == what
    assert failure.unit == "kg"
    assert failure.bound == pytest.approx(float(mass.removesuffix(" t")) * 1e3)
    assert failure.value > failure.bound
    total = flight.totals
    values = {
        "zero-fuel mass": 18000.0,
        "ramp mass": total.ramp_mass,
        "landing mass": total.landing_mass,
    }
    assert failure.value == pytest.approx(values[what])


def test_take_off_mass_after_taxi(tmp_path: Path) -> None:
    """Ramp mass may be above the take-off limit by the fuel of the taxi."""
    taxi = {"kind": "allowance", "name": "taxi", "fuel": "300 kg"}

    def flight(limit: str) -> Flight:
        masses = {"maximum_take_off": limit, "maximum_ramp": "27.2 t", "maximum_zero_fuel": "18 t"}
        masses["maximum_landing"] = "22 t"
        return fly_files(
            tmp_path,
            mission=mission_content(
                [{"kind": "taxi", "time": "5 min"}, taxi, {"kind": "take-off"}, UP, OUT, DOWN],
                fuel={"as_needed": None, "load": "5 t"},
            ),
            aircraft=aircraft_content(masses=masses),
        )

    assert flight("22.8 t").failure is None
    failure = flight("22.6 t").failure
    assert failure is not None
    assert failure.what == "take-off mass"
    assert failure.value == pytest.approx(22700.0, rel=1e-9)


def test_unusable_fuel_is_part_of_zero_fuel_mass(tmp_path: Path) -> None:
    """The zero-fuel mass is the mass without usable fuel."""

    def flight(limit: str) -> Flight:
        return fly_files(
            tmp_path,
            mission=mission_content([UP, OUT, DOWN]),
            aircraft=aircraft_content(
                masses={"maximum_zero_fuel": limit}, fuel_tanks={"unusable": "100 kg"}
            ),
        )

    assert flight("18.11 t").failure is None
    failure = flight("18.09 t").failure
    assert failure is not None
    assert failure.value == pytest.approx(18100.0)


@pytest.mark.parametrize("miles", [3000, 20000])
def test_fuel_runs_out(tmp_path: Path, miles: int) -> None:
    failure, flight = failure_of(
        tmp_path,
        OUT_AND_DOWN,
        distance=f"{miles} nmi",
        fuel={"as_needed": None, "load": "2 t"},
    )
    assert failure.segment == "cruise"
    assert "fuel" in failure.what
    assert failure.unit == "kg"
    assert failure.value < failure.bound
    # The load is the one given, whatever the distance.
    assert flight.totals.loaded_fuel == pytest.approx(2000.0, rel=1e-6)


def test_reserves_not_covered(tmp_path: Path) -> None:
    failure, flight = failure_of(
        tmp_path,
        OUT_AND_DOWN,
        distance="800 nmi",
        fuel={"as_needed": None, "load": "1.7 t"},
        reserves={"item": [final_reserve("45 min")]},
    )
    assert "reserves" in failure.what
    assert failure.value == pytest.approx(flight.totals.fuel_left)
    assert failure.bound == pytest.approx(flight.totals.reserve_fuel)
    assert 0.0 < failure.value < failure.bound


@pytest.mark.parametrize("miles", [6000, 20000, 50000])
def test_a_distance_beyond_all_reason_is_refused_in_order(tmp_path: Path, miles: int) -> None:
    """However far, the answer is a failure and not a number that means nothing."""
    failure, _ = failure_of(tmp_path, OUT_AND_DOWN, distance=f"{miles} nmi")
    assert failure.value != failure.bound


def test_a_speed_written_above_its_limit_is_told_before_what_fails_on_the_way(
    tmp_path: Path,
) -> None:
    slow = {"kind": "cruise", "name": "slow", "distance": "50 nmi", "mach": 0.33}
    fast = {"kind": "cruise", "name": "fast", "distance": "50 nmi"}
    start = OUT | {"mach": 0.6, "pressure_altitude": "FL350"}
    strong = engine_content(static_thrust="150 kN")
    first, _ = failure_of(tmp_path, [start, slow, fast | {"mach": 0.85}], engine=strong)
    assert (first.segment, first.what) == ("fast", "Mach number")
    first, _ = failure_of(tmp_path, [start, slow, fast | {"mach": 0.80}], engine=strong)
    assert first.segment in ("bridge to slow", "slow")
    assert first.what == "lift coefficient"


def test_a_descent_with_a_slow_change_of_speed_can_be_flown(tmp_path: Path) -> None:
    """Deceleration is not a rate of descent: a clean aircraft slows by less than 0.5 m/s2."""
    clean = aircraft_content(
        drag_polar={"zero_lift_drag_coefficient": 0.012, "induced_drag_factor": 0.03}
    )
    flight = fly_files(
        tmp_path,
        mission=mission_content([UP, OUT, DOWN | {"limited_below_10000_ft": True}]),
        aircraft=clean,
    )
    assert flight.failure is None


def test_a_headwind_faster_than_the_aircraft(tmp_path: Path) -> None:
    """A distance that is never covered is no flight of negative fuel and time."""
    slow = OUT | {"mach": 0.25, "pressure_altitude": "5000 ft"}
    failure, flight = failure_of(tmp_path, [slow], headwind="190 kt")
    assert failure.segment == "out"
    assert failure.what == "ground speed"
    assert failure.value < failure.bound
    assert flight.totals.block_fuel > 0.0
    assert flight.totals.block_time > 0.0


def test_an_altitude_outside_the_atmosphere_is_refused(tmp_path: Path) -> None:
    with pytest.raises(InputRefused, match=r"mission\.toml: segment 1.*to.*35000 m"):
        fly_files(tmp_path, mission=mission_content([UP | {"to": "35000 m"}]))
