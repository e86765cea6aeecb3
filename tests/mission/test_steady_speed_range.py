"""At which Mach numbers level flight is possible, and what stands at the ends, by name."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from mission_files import aircraft_content, engine_content, load_all, mission_content

from engine.cycle_engine import CycleEngine
from engine.interface import Coverage
from engine.options.constant_consumption import ConstantConsumptionEngine
from mission.aerodynamics import BuffetOnset
from mission.air import Air
from mission.aircraft import Aircraft
from mission.airspeeds import calibrated_airspeed
from mission.steady.best_levels import best_altitude, climb_level, highest_level
from mission.steady.best_speeds import (
    best_endurance_mach,
    least_cost_mach,
    long_range_mach,
    maximum_level_mach,
    maximum_range_mach,
    range_about,
)
from mission.steady.climbing import best_climb_mach
from mission.steady.level_flight import LevelFlight, Limit, Subject
from mission.steady.speed_range import SpeedRange, speed_range

CRUISE = [{"kind": "cruise", "distance": "9 km", "mach": 0.5, "pressure_altitude": "5 km"}]


class TabledEngine(ConstantConsumptionEngine):
    """The plain engine, known only from Mach 0.45 to 0.6 and from 2 to 9 km, on a standard day."""

    @property
    def coverage(self) -> Coverage:
        return Coverage((2000.0, 9000.0), (0.45, 0.6), 0.0)


class WeakIdle(ConstantConsumptionEngine):
    """A plain engine whose idle gives more than drag."""

    def _thrust(self, flight: Any, rating: str) -> Any:
        if rating.endswith("idle"):
            return np.full(flight.shape, 12e3)
        return super()._thrust(flight, rating)


@pytest.fixture
def plane(tmp_path: Path) -> tuple[Aircraft, ConstantConsumptionEngine]:
    """The test twin with two engines of 55 kN."""
    _, aircraft, engine = load_all(
        tmp_path, aircraft_content(), engine_content(), mission_content(CRUISE)
    )
    assert isinstance(engine, ConstantConsumptionEngine)
    return aircraft, engine


def found(
    plane: tuple[Aircraft, ConstantConsumptionEngine],
    altitude: float,
    mass: float = 20e3,
    *,
    wind: float = 0.0,
    **changes: Any,
) -> SpeedRange:
    aircraft, engine = plane
    return speed_range(
        LevelFlight.of(replace(aircraft, **changes), engine, altitude, mass, 0.0, wind)
    )


def kind(plane: tuple[Aircraft, Any], engine: type, **more: Any) -> tuple[Aircraft, Any]:
    """The same with another kind of engine."""
    old = plane[1]
    new = engine(
        old.name, old.specific_fuel_consumption, old.static_thrust, old.density_exponent, **more
    )
    return plane[0], new


def test_ends_are_named(plane: tuple[Aircraft, Any]) -> None:
    low = found(plane, 1000.0)
    assert (low.ends.slow_limit, low.ends.fast_limit) == (Limit.LIFT, Limit.OPERATING_AIRSPEED)
    limit = plane[0].maximum_operating_calibrated_airspeed
    pressure = low.flight.air.static_pressure
    assert calibrated_airspeed(low.ends.fast, pressure) == pytest.approx(limit, rel=1e-9)
    high = found(plane, 11000.0)
    assert (high.ends.fast, high.ends.fast_limit) == (0.82, Limit.OPERATING_MACH)
    lift = high.flight.weight / (0.7 * high.flight.air.static_pressure * high.ends.slow**2 * 62.0)
    assert lift == pytest.approx(1.5 / 1.44, rel=1e-9)


def test_thrust_ends_a_range_on_both_sides(plane: tuple[Aircraft, Any]) -> None:
    aircraft, engine = plane
    weak = replace(engine, static_thrust={"cruise": 12.9e3})
    both = found((aircraft, weak), 9500.0)
    assert (both.ends.slow_limit, both.ends.fast_limit) == (Limit.THRUST, Limit.THRUST)
    fastest = maximum_level_mach(both)
    assert fastest.thrust_margin == pytest.approx(0.0, abs=2e-6)
    assert fastest.limit == Limit.THRUST
    furthest = maximum_range_mach(both)
    assert furthest.mach == pytest.approx(float(both.ends.fast), rel=1e-9)
    assert furthest.limit == Limit.THRUST
    assert long_range_mach(both, furthest).limit == Limit.THRUST


def test_a_range_narrower_than_the_grid_is_found(plane: tuple[Aircraft, Any]) -> None:
    aircraft, engine = plane
    weak = (aircraft, replace(engine, static_thrust={"cruise": 12.9e3}))
    subject = Subject(*weak, Air())
    top = float(highest_level(subject, np.array([20e3])).pressure_altitude[0])
    just_below, just_above = (found(weak, top + by) for by in (-1.0, 1.0))
    assert just_below.is_open
    assert just_below.ends.fast - just_below.ends.slow < 0.02
    assert not just_above.is_open
    assert just_above.lack == Limit.THRUST
    assert -1e-3 < just_above.thrust_margin < 0.0


def test_what_is_short_of_thrust_is_flagged_with_by_how_much(plane: tuple[Aircraft, Any]) -> None:
    aircraft, engine = plane
    none = found((aircraft, replace(engine, static_thrust={"cruise": 10e3})), 9500.0)
    for speed in (
        maximum_range_mach(none), long_range_mach(none), best_endurance_mach(none),
        maximum_level_mach(none), least_cost_mach(none, 0.5),
    ):  # fmt: skip
        assert not speed.is_flyable
        assert speed.limit == Limit.THRUST
        assert np.isnan(speed.mach)
        # Least drag is W / (L/D)max = 2 W sqrt(CD0 K).
        most = 2.0 * 10e3 * (float(none.flight.air.density) / 1.225) ** 0.8
        least = 2.0 * 20e3 * 9.80665 * np.sqrt(0.0175 * 0.042)
        assert speed.thrust_margin == pytest.approx(most / least - 1.0, abs=1e-4)
    assert range_about(none) == 0.0


@pytest.mark.parametrize(
    ("changes", "altitude", "fast", "limit"),
    [
        ({"maximum_dynamic_pressure": 8e3}, 9000.0, None, Limit.DYNAMIC_PRESSURE),
        ({"buffet_onset": BuffetOnset((0.3, 0.7), (1.4, 1.2))}, 9000.0, 0.7, Limit.BUFFET_TABLE),
        (
            {"buffet_onset": BuffetOnset((0.3, 0.6, 0.85), (1.4, 1.2, 0.0))},
            9000.0, None, Limit.BUFFET,
        ),
    ],
)  # fmt: skip
def test_other_limits_at_the_fast_end(
    plane: tuple[Aircraft, Any],
    changes: dict[str, Any],
    altitude: float,
    fast: float | None,
    limit: Limit,
) -> None:
    there = found(plane, altitude, **changes)
    assert there.ends.fast_limit == limit
    mach = float(there.ends.fast)
    force = 0.7 * float(there.flight.air.static_pressure) * mach**2
    if limit == Limit.DYNAMIC_PRESSURE:
        assert force == pytest.approx(8e3, rel=1e-9)
    elif limit == Limit.BUFFET:
        lift = float(there.flight.weight) / force / 62.0
        assert 1.3 * lift == pytest.approx(1.2 * (0.85 - mach) / 0.25, rel=1e-4)
    else:
        assert mach == fast


def test_buffet_at_any_speed_leaves_none(plane: tuple[Aircraft, Any]) -> None:
    there = found(plane, 11000.0, buffet_onset=BuffetOnset((0.3, 0.9), (0.3, 0.2)))
    assert not there.is_open
    assert there.lack == Limit.BUFFET
    assert there.thrust_margin > 0.0


def test_above_the_ceiling_nothing_is_asked(plane: tuple[Aircraft, Any]) -> None:
    there = found(plane, 11000.0, maximum_pressure_altitude=10000.0)
    assert there.lack == Limit.CEILING
    assert np.isnan(there.thrust_margin)
    subject = Subject(replace(plane[0], maximum_pressure_altitude=10000.0), plane[1], Air())
    best = best_altitude(subject, np.array([20e3]))
    assert best.pressure_altitude == 10000.0
    assert best.highest.limit == Limit.CEILING


def test_a_headwind_is_outrun(plane: tuple[Aircraft, Any]) -> None:
    there = found(plane, 3000.0, 12e3, wind=-90.0)
    assert there.ends.slow_limit == Limit.GROUND_SPEED
    assert there.flight.ground_speed(there.ends.slow) == pytest.approx(1.0)


def test_a_polar_in_a_table_is_not_left(tmp_path: Path) -> None:
    row = [0.0175 + 0.042 * lift**2 for lift in (0.1, 0.3, 0.5, 0.7)]
    polar = {
        "machs": [0.4, 0.72],
        "lift_coefficients": [0.1, 0.3, 0.5, 0.7],
        "drag_coefficients": [row] * 2,
    }
    aircraft, engine = load_all(
        tmp_path,
        aircraft_content(drag_polar=None) | {"drag_polar": polar},
        engine_content(),
        mission_content(CRUISE),
    )[1:]
    there = speed_range(LevelFlight.of(aircraft, engine, 9000.0, 24e3))
    assert (there.ends.slow_limit, there.ends.fast_limit) == (Limit.POLAR, Limit.POLAR)
    assert there.ends.fast == 0.72
    lift = there.flight.weight / (0.7 * there.flight.air.static_pressure * there.ends.slow**2 * 62)
    assert lift == pytest.approx(0.7, rel=1e-9)


def test_an_engine_in_a_table_is_not_asked_outside(plane: tuple[Aircraft, Any]) -> None:
    tabled = kind(plane, TabledEngine)
    inside = found(tabled, 5000.0)
    assert (inside.ends.slow, inside.ends.fast) == (0.45, 0.6)
    assert (inside.ends.slow_limit, inside.ends.fast_limit) == (Limit.TABLE, Limit.TABLE)
    outside = found(tabled, 9500.0)
    assert outside.lack == Limit.TABLE
    assert np.isnan(outside.thrust_margin)
    subject = Subject(*tabled, Air())
    best = best_altitude(subject, np.array([20e3]))
    assert best.pressure_altitude == pytest.approx(9000.0, abs=0.1)
    assert climb_level(subject, np.array([20e3]), 0.5).limit == Limit.TABLE


def test_too_much_idle_thrust_is_no_level_flight(plane: tuple[Aircraft, Any]) -> None:
    there = found(kind(plane, WeakIdle), 9000.0)
    speed = maximum_range_mach(there)
    assert not speed.is_flyable
    assert speed.limit == Limit.IDLE


def test_no_speed_between_stall_and_the_greatest(plane: tuple[Aircraft, Any]) -> None:
    there = found(plane, 19000.0, 26e3)
    assert there.lack == Limit.LIFT
    assert np.isnan(there.thrust_margin)
    assert not best_climb_mach(there.flight).is_known


def test_an_engine_without_a_state_is_told(
    turbofan: CycleEngine, plane: tuple[Aircraft, Any]
) -> None:
    """Where a call fails there is no NaN without its reason."""

    class Lost(CycleEngine):
        def at(self, *args: Any, **more: Any) -> Any:
            state = super().at(*args, **more)
            return replace(state, outcome=np.full_like(state.outcome, 3))

    lost = Lost(**{name: getattr(turbofan, name) for name in turbofan.__dataclass_fields__})
    there = found((plane[0], lost), 9000.0)
    assert there.lack == Limit.ENGINE
    assert np.isnan(there.thrust_margin)
    assert maximum_range_mach(there).limit == Limit.ENGINE
    climb = best_climb_mach(there.flight)
    assert (bool(climb.is_known), int(climb.limit)) == (False, Limit.ENGINE)


def test_members_do_not_depend_on_each_other(
    turbofan: CycleEngine, plane: tuple[Aircraft, Any]
) -> None:
    altitude, mass = np.array([[8e3], [11e3]]), np.array([18e3, 24e3])
    together = maximum_range_mach(
        speed_range(LevelFlight.of(plane[0], turbofan, altitude, mass, 5.0))
    )
    alone = maximum_range_mach(speed_range(LevelFlight.of(plane[0], turbofan, 11e3, 24e3, 5.0)))
    assert together.mach[1, 1] == pytest.approx(float(alone.mach), rel=1e-7)
    assert together.fuel_flow[1, 1] == pytest.approx(float(alone.fuel_flow), rel=1e-9)


def test_a_parabola_through_the_curve_is_near_the_best(
    turbofan: CycleEngine, plane: tuple[Aircraft, Any]
) -> None:
    speeds = speed_range(
        LevelFlight.of(plane[0], turbofan, np.array([[5e3], [11e3]]), np.array([17e3, 25e3]))
    )
    best = maximum_range_mach(speeds).specific_air_range
    assert range_about(speeds) == pytest.approx(best, rel=1e-3)
