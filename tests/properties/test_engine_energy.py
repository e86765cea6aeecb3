"""The energy account closes wherever an engine runs, each of its terms from the stations."""

from __future__ import annotations

import numpy as np
import pytest
from engine_files import load, turbofan_content, turbojet_content
from hypothesis import given
from hypothesis import strategies as st

from engine.atmosphere import FlightCondition, flight_condition
from engine.cycle_engine import CycleEngine
from engine.interface import EngineState, Outcome

CONTENTS = {"turbofan": turbofan_content, "turbojet": turbojet_content}
CLOSES = 1e-9


@st.composite
def flights(draw: st.DrawFn, members: int = 4) -> FlightCondition:
    """A batch of mixed flight conditions."""

    def values(low: float, high: float) -> np.ndarray:
        return np.array(draw(st.lists(st.floats(low, high), min_size=members, max_size=members)))

    return flight_condition(values(0.0, 12500.0), values(0.0, 0.9), values(-20.0, 30.0))


@st.composite
def engines(draw: st.DrawFn) -> CycleEngine:
    """An engine with any bleed, shaft power, cooling and combustion efficiency."""
    kind = draw(st.sampled_from(sorted(CONTENTS)))
    changes = {
        "off_takes.customer_bleed_fraction": draw(st.floats(0.0, 0.04)),
        "off_takes.shaft_power": f"{draw(st.floats(0.0, 120.0)):.6f} kW",
        "cooling.vane_fraction": draw(st.floats(0.0, 0.08)),
        "cooling.rotor_fraction": draw(st.floats(0.0, 0.06)),
        "cooling.downstream_fraction": draw(st.floats(0.0, 0.02)),
        "combustor.efficiency": draw(st.floats(0.95, 1.0)),
    }
    return load(CONTENTS[kind](changes))


def account_residual(state: EngineState) -> float:
    account = state.energy
    assert account is not None
    found = state.outcome != Outcome.NOT_CONVERGED
    assert found.any()
    return float(np.max(np.abs(account.residual[found])))


@given(engine=engines(), flight=flights(), share=st.floats(0.0, 1.0))
def test_account_closes_at_any_throttle(
    engine: CycleEngine, flight: FlightCondition, share: float
) -> None:
    most = engine.at_rating(flight, "take_off").net_thrust
    least = engine.at_rating(flight, "flight_idle").net_thrust

    state = engine.at_thrust(flight, least + share * (most - least), rating="take_off")

    assert account_residual(state) < CLOSES


@given(engine=engines(), flight=flights())
def test_account_closes_at_idle(engine: CycleEngine, flight: FlightCondition) -> None:
    assert account_residual(engine.at_rating(flight, "ground_idle")) < CLOSES


@pytest.mark.parametrize("name", ["turbofan", "turbojet"])
def test_account_closes_unlit(name: str, request: pytest.FixtureRequest) -> None:
    engine = request.getfixturevalue(name)
    flight = flight_condition(np.linspace(0.0, 12500.0, 6)[:, None], [[0.25, 0.5, 0.8]])

    assert account_residual(engine.windmilling(flight)) < CLOSES


@pytest.mark.parametrize("name", ["turbofan", "turbojet"])
def test_account_is_made_of_its_terms(name: str, request: pytest.FixtureRequest) -> None:
    """The residual says the same as adding the terms up here."""
    engine = request.getfixturevalue(name)
    state = engine.at_rating(flight_condition(8000.0, 0.6), "cruise")
    account = state.energy

    out = (
        account.thrust
        + sum(account.jet_kinetic.values())
        + sum(account.jet_heat.values())
        + account.intake_heat
        + account.bleed
        + account.shaft
        + account.mechanical_loss
        + account.unburnt_fuel
    )
    speed = float(state.flight.true_airspeed)
    chemical = state.fuel_flow * engine.arrangement.fuel.lower_heating_value

    assert float(out) == pytest.approx(float(account.fuel), rel=CLOSES)
    assert float(account.fuel) == pytest.approx(
        float(chemical + state.fuel_flow * speed**2 / 2.0), rel=1e-12
    )
    assert float(account.thrust) == pytest.approx(float(state.net_thrust) * speed, rel=1e-12)
    assert account.overall_efficiency == pytest.approx(
        account.thermal_efficiency * account.propulsive_efficiency, rel=1e-12
    )
    assert float(account.shaft) == {"turbofan": 60e3, "turbojet": 50e3}[name]
    assert float(account.mechanical_loss) > 0.0
    assert float(account.bleed) > 0.0


@pytest.mark.parametrize("name", ["turbofan", "turbojet"])
@pytest.mark.parametrize("rating", ["take_off", "ground_idle"])
def test_a_standing_aircraft_has_no_propulsive_power(
    name: str, rating: str, request: pytest.FixtureRequest
) -> None:
    # Warnings are errors in this test run: a division by the airspeed of zero would fail here.
    state = request.getfixturevalue(name).at_rating(flight_condition(0.0, 0.0), rating)
    account = state.energy

    assert float(state.net_thrust) > 0.0
    assert float(account.thrust) == 0.0
    assert float(account.propulsive_efficiency) == 0.0
    assert float(account.overall_efficiency) == 0.0
    assert 0.0 < float(account.thermal_efficiency) < 0.6
    assert abs(float(account.residual)) < CLOSES
