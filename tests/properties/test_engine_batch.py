"""A batch equals its members alone, whatever company they keep."""

from __future__ import annotations

import numpy as np
import pytest
from engine_kinds import KINDS, engine_of

from engine.atmosphere import FlightCondition, flight_condition
from engine.cycle_engine import CycleEngine
from engine.interface import EngineState, Outcome, is_unanswered

# A step is taken after matching has come below 1e-9: what is left is near round-off.
SAME = 1e-10
GENERATOR = np.random.default_rng(20)
ALTITUDES = GENERATOR.uniform(0.0, 12500.0, 24)
MACHS = GENERATOR.uniform(0.0, 0.9, 24)
SHARES = GENERATOR.uniform(0.05, 0.95, 24)


@pytest.fixture(params=["turbofan", "turbojet"])
def engine(request: pytest.FixtureRequest) -> CycleEngine:
    found: CycleEngine = request.getfixturevalue(request.param)
    return found


def batch() -> FlightCondition:
    return flight_condition(ALTITUDES, MACHS)


def thrusts(engine: CycleEngine) -> np.ndarray:
    """Demands between idle and rating, and in two places far from either."""
    most = engine.at_rating(batch(), "take_off").net_thrust
    least = engine.at_rating(batch(), "flight_idle").net_thrust
    wanted = least + SHARES * (most - least)
    wanted[5], wanted[11] = 2.0 * most[5], -0.5 * most[11]
    return wanted


def assert_same(together: EngineState, alone: list[EngineState]) -> None:
    """Thrust, fuel and unknowns of the batch's members are those of each alone."""
    scale = np.max(np.abs(together.net_thrust))
    found = np.array([float(state.net_thrust[0]) for state in alone])
    assert together.net_thrust == pytest.approx(found, rel=SAME, abs=SAME * scale)
    found = np.array([float(state.fuel_flow[0]) for state in alone])
    assert together.fuel_flow == pytest.approx(found, rel=SAME)
    found = np.concatenate([state.unknowns for state in alone], axis=1)
    assert together.unknowns == pytest.approx(found, rel=0.0, abs=SAME, nan_ok=True)
    assert together.outcome.tolist() == [int(state.outcome[0]) for state in alone]


def test_required_thrusts(engine: CycleEngine) -> None:
    wanted = thrusts(engine)
    together = engine.at_thrust(batch(), wanted, rating="take_off")
    members = [np.array([i]) for i in range(wanted.size)]

    alone = [engine.at_thrust(batch().at(i), wanted[i], rating="take_off") for i in members]

    assert_same(together, alone)
    assert together.outcome[5] == Outcome.BEYOND_RATING
    assert together.outcome[11] == Outcome.AT_IDLE


@pytest.mark.parametrize("rating", ["climb", "flight_idle"])
def test_ratings(engine: CycleEngine, rating: str) -> None:
    together = engine.at_rating(batch(), rating)

    alone = [engine.at_rating(batch().at(np.array([i])), rating) for i in range(24)]

    assert_same(together, alone)


def test_mixed_ratings_and_thrusts_in_one_call(engine: CycleEngine) -> None:
    ratings = np.array(["take_off", "climb", "flight_idle", "cruise"] * 6)
    wanted = np.where(ratings == "cruise", 0.5 * thrusts(engine), np.nan)

    together = engine.at(batch(), rating=ratings, net_thrust=wanted)

    alone = [
        engine.at(batch().at(np.array([i])), rating=str(ratings[i]), net_thrust=wanted[[i]])
        for i in range(24)
    ]
    assert_same(together, alone)


@pytest.mark.filterwarnings("error")
def test_members_that_cannot_converge_change_nobody(engine: CycleEngine) -> None:
    wanted = thrusts(engine)
    clean = engine.at_thrust(batch(), wanted, rating="take_off")
    spoilt = FlightCondition(
        *(np.concatenate([getattr(batch(), name), getattr(batch(), name)[:3]])
          for name in FlightCondition.__dataclass_fields__)
    )  # fmt: skip
    # No air at all, no warmth at all, and a number that is none.
    spoilt.static_pressure[-3] = 1e-30
    spoilt.static_temperature[-2] = 1e-3
    spoilt.mach[-1] = np.nan

    mixed = engine.at_thrust(spoilt, np.append(wanted, [1e9, 1e9, 1e9]), rating="take_off")

    kept = slice(0, 24)
    assert mixed.outcome[kept].tolist() == clean.outcome.tolist()
    assert mixed.net_thrust[kept] == pytest.approx(clean.net_thrust, rel=SAME, abs=1e-6)
    assert mixed.fuel_flow[kept] == pytest.approx(clean.fuel_flow, rel=SAME)
    lost = is_unanswered(mixed.outcome)
    assert lost[-3:].all()
    assert mixed.unanswered_count == 3
    assert mixed.net_thrust[-3:].tolist() == [0.0, 0.0, 0.0]


def test_a_warm_start_gives_the_same_answer(engine: CycleEngine) -> None:
    wanted = thrusts(engine)
    cold = engine.at_thrust(batch(), wanted, rating="take_off")

    warm = engine.at_thrust(batch(), wanted, rating="take_off", start=cold.unknowns)

    assert warm.net_thrust == pytest.approx(cold.net_thrust, rel=SAME, abs=1e-6)
    assert warm.fuel_flow == pytest.approx(cold.fuel_flow, rel=SAME)
    inside = cold.outcome == Outcome.MET
    assert int(np.max(warm.iterations[inside])) <= 1


def test_any_shape_goes_in_and_comes_out(engine: CycleEngine) -> None:
    flight = flight_condition(np.array([0.0, 9000.0])[:, None], np.array([0.3, 0.5, 0.7]))

    state = engine.at_rating(flight, "cruise")
    scalar = engine.at_rating(flight_condition(9000.0, 0.5), "cruise")

    assert state.net_thrust.shape == state.stations["4"].total_pressure.shape == (2, 3)
    assert state.unknowns.shape[1:] == (2, 3)
    assert scalar.net_thrust.shape == ()
    assert float(scalar.net_thrust) == pytest.approx(float(state.net_thrust[1, 1]), rel=SAME)


NEW_KINDS = [kind for kind in KINDS if kind not in ("turbofan", "turbojet")]


@pytest.mark.parametrize("kind", NEW_KINDS)
def test_every_kind_answers_alone_as_in_company(kind: str) -> None:
    """Ratings, idle and thrusts of each kind in one call; reheated ones partly lit."""
    engine, flight = engine_of(kind), batch().at(np.arange(10))
    if kind == "turboprop":
        flight = flight_condition(0.7 * ALTITUDES[:10], 0.7 * MACHS[:10])
    top = engine.ratings[-1] if "reheated" in kind else "take_off"
    most = engine.at_rating(flight, top).net_thrust
    least = engine.at_rating(flight, "flight_idle").net_thrust
    wanted = least + np.linspace(0.05, 1.1, 10) * (most - least)
    wanted[[2, 5]] = np.nan, -0.5 * most[5]
    ratings = np.array([top] * 8 + ["climb", "flight_idle"])
    wanted[9] = np.nan

    together = engine.at(flight, rating=ratings, net_thrust=wanted)

    members = [np.array([i]) for i in range(10)]
    alone = [
        engine.at(flight.at(i), rating=str(ratings[i][0]), net_thrust=wanted[i]) for i in members
    ]
    assert_same(together, alone)
    assert together.outcome[[2, 5, 9]].tolist() == [Outcome.MET, Outcome.AT_IDLE, Outcome.MET]
