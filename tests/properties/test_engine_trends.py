"""What every jet engine does: hotter gives more, higher gives less, and limits are told."""

from __future__ import annotations

import numpy as np
import pytest
from engine_files import load, one_rating, turbofan_content, turbojet_content
from hypothesis import given
from hypothesis import strategies as st

from engine.atmosphere import flight_condition
from engine.cycle_engine import CycleEngine
from engine.interface import Outcome

ALTITUDE, MACH = st.floats(0.0, 12500.0), st.floats(0.0, 0.9)


@pytest.fixture(params=["turbofan", "turbojet"], scope="module")
def engine(request: pytest.FixtureRequest) -> CycleEngine:
    found: CycleEngine = request.getfixturevalue(request.param)
    return found


@pytest.fixture(params=[turbofan_content, turbojet_content], scope="module")
def by_temperature(request: pytest.FixtureRequest) -> dict[float, CycleEngine]:
    """The same engine with take-off ratings of turbine entry temperature [K] alone."""
    temperatures = np.linspace(1000.0, 1450.0, 4)
    return {
        float(t): load(request.param(one_rating(turbine_entry_temperature=f"{t} K")))
        for t in temperatures
    }


@given(altitude=ALTITUDE, mach=MACH)
def test_hotter_turbine_gives_more_thrust(
    by_temperature: dict[float, CycleEngine], altitude: float, mach: float
) -> None:
    flight = flight_condition(altitude, mach)
    states = [engine.at_rating(flight, "take_off") for engine in by_temperature.values()]

    assert [int(state.outcome) for state in states] == [Outcome.MET] * len(states)
    assert np.all(np.diff([float(state.net_thrust) for state in states]) > 0.0)
    for temperature, state in zip(by_temperature, states, strict=True):
        assert float(state.turbine_entry_temperature) == pytest.approx(temperature, rel=1e-9)


@given(mach=MACH)
def test_higher_means_less_thrust(engine: CycleEngine, mach: float) -> None:
    flight = flight_condition(np.linspace(0.0, 12500.0, 26), mach)

    state = engine.at_rating(flight, "take_off")

    assert np.all(state.outcome == Outcome.MET)
    assert np.all(np.diff(state.net_thrust) < 0.0)


@given(altitude=ALTITUDE, mach=MACH, share=st.floats(0.02, 0.98))
def test_a_thrust_within_the_limits_is_met(
    engine: CycleEngine, altitude: float, mach: float, share: float
) -> None:
    flight = flight_condition(altitude, mach)
    most = float(engine.at_rating(flight, "take_off").net_thrust)
    least = float(engine.at_rating(flight, "flight_idle").net_thrust)
    wanted = least + share * (most - least)

    state = engine.at_thrust(flight, wanted, rating="take_off")

    assert int(state.outcome) == Outcome.MET
    assert float(state.net_thrust) == pytest.approx(wanted, rel=1e-9, abs=1e-9 * most)
    assert np.all(state.limit_shares <= 1.0)


@given(altitude=ALTITUDE, mach=MACH, excess=st.floats(1.001, 3.0))
def test_beyond_the_rating_is_said_with_the_thrust_there_is(
    engine: CycleEngine, altitude: float, mach: float, excess: float
) -> None:
    flight = flight_condition(altitude, mach)
    there = engine.at_rating(flight, "climb")

    state = engine.at_thrust(flight, excess * float(there.net_thrust), rating="climb")

    assert int(state.outcome) == Outcome.BEYOND_RATING
    assert float(state.net_thrust) == pytest.approx(float(there.net_thrust), rel=1e-10)
    assert float(state.fuel_flow) == pytest.approx(float(there.fuel_flow), rel=1e-10)
    assert float(np.max(state.limit_shares)) == pytest.approx(1.0, rel=1e-9)
    assert state.binding_limit_names == there.binding_limit_names


@given(altitude=ALTITUDE, mach=MACH, lack=st.floats(0.001, 1.0))
def test_below_idle_is_said_with_idle_thrust(
    engine: CycleEngine, altitude: float, mach: float, lack: float
) -> None:
    flight = flight_condition(altitude, mach)
    there = engine.at_rating(flight, "flight_idle")
    most = float(engine.at_rating(flight, "climb").net_thrust)

    state = engine.at_thrust(flight, float(there.net_thrust) - lack * most, rating="climb")

    assert int(state.outcome) == Outcome.AT_IDLE
    assert float(state.net_thrust) == pytest.approx(
        float(there.net_thrust), rel=1e-10, abs=1e-10 * most
    )
    assert float(state.fuel_flow) == pytest.approx(float(there.fuel_flow), rel=1e-10)


@given(altitude=ALTITUDE, mach=MACH)
def test_idle_holds_every_floor_and_touches_one(
    engine: CycleEngine, altitude: float, mach: float
) -> None:
    state = engine.at_rating(flight_condition(altitude, mach), "flight_idle")

    assert int(state.outcome) == Outcome.MET
    assert float(np.min(state.limit_shares)) == pytest.approx(1.0, rel=1e-9)


@given(altitude=ALTITUDE, mach=MACH)
def test_more_thrust_burns_more_fuel(engine: CycleEngine, altitude: float, mach: float) -> None:
    flight = flight_condition(altitude, mach)
    most = float(engine.at_rating(flight, "take_off").net_thrust)
    least = float(engine.at_rating(flight, "flight_idle").net_thrust)

    state = engine.at_thrust(flight, np.linspace(least, most, 8) * (1 - 1e-12), rating="take_off")

    assert np.all(np.diff(state.fuel_flow) > 0.0)


def test_windmilling_burns_nothing_and_drags(engine: CycleEngine) -> None:
    flight = flight_condition(
        np.linspace(0.0, 12500.0, 6)[:, None], np.linspace(0.2, 0.9, 15)[None, :]
    )

    state = engine.windmilling(flight)

    assert np.all(state.outcome == Outcome.MET)
    assert np.all(state.fuel_flow == 0.0)
    assert np.all(state.net_thrust < 0.0)
    assert np.all(np.diff(state.net_thrust, axis=1) < 0.0)  # faster drags more
    assert np.all(np.diff(state.net_thrust, axis=0) > 0.0)  # thin air drags less
    # No work without fuel: nothing leaves hotter than it came to rest.
    assert np.all(
        state.stations["5"].total_temperature <= state.stations["2"].total_temperature + 1e-9
    )


def test_windmilling_that_does_not_turn_is_flagged(engine: CycleEngine) -> None:
    state = engine.windmilling(flight_condition([0.0, 9000.0], 0.0))

    assert np.all(state.outcome == Outcome.NOT_CONVERGED)
    assert np.all(state.net_thrust == 0.0)
