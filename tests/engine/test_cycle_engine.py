"""The cycle engine behind its interface: names, shapes, limits, and what an unlit engine does."""

from __future__ import annotations

import numpy as np
import pytest
from engine_files import load, turbofan_content, turbojet_content

from engine.atmosphere import flight_condition
from engine.cycle_engine import CycleEngine
from engine.cycles.sizing import scaled
from engine.errors import InputRefused
from engine.interface import IDLES, RATINGS, Outcome

CRUISE = flight_condition(10668.0, 0.78)


def test_an_unknown_rating_is_refused_with_those_there_are(turbofan: CycleEngine) -> None:
    with pytest.raises(InputRefused, match="'max' is no rating of test turbofan; it has take_off"):
        turbofan.at_rating(CRUISE, "max")
    with pytest.raises(InputRefused, match="'low' is no rating"):
        turbofan.at_thrust(CRUISE, 1e4, idle="low")


def test_ratings_may_differ_from_point_to_point(turbofan: CycleEngine) -> None:
    names = np.array([*RATINGS, *IDLES])

    together = turbofan.at(CRUISE, rating=names)

    alone = [float(turbofan.at_rating(CRUISE, str(name)).net_thrust) for name in names]
    assert together.net_thrust == pytest.approx(alone, rel=1e-10)
    assert together.net_thrust[2] > together.net_thrust[3] > together.net_thrust[4]


def test_a_thrust_above_idle_is_beyond_it_where_idle_is_the_rating(turbofan: CycleEngine) -> None:
    idle = turbofan.at_rating(CRUISE, "flight_idle")

    state = turbofan.at_thrust(CRUISE, 5000.0, rating="flight_idle")

    assert int(state.outcome) == Outcome.BEYOND_RATING
    assert float(state.net_thrust) == pytest.approx(float(idle.net_thrust), rel=1e-10)


def test_the_limit_that_binds_is_named(turbofan: CycleEngine) -> None:
    hot = turbofan.at_rating(flight_condition(0.0, 0.3, 30.0), "take_off")
    cold = turbofan.at_rating(flight_condition(11000.0, 0.5), "take_off")

    assert hot.binding_limit_names == "turbine_entry_temperature"
    assert cold.binding_limit_names == "corrected_low_pressure_speed"
    assert float(hot.turbine_entry_temperature) == pytest.approx(1640.0, rel=1e-9)
    assert float(cold.turbine_entry_temperature) < 1640.0


def test_no_number_as_thrust_asks_for_the_rating(turbofan: CycleEngine) -> None:
    state = turbofan.at(CRUISE, rating="climb", net_thrust=[np.nan, 8000.0])

    assert state.net_thrust == pytest.approx(
        [float(turbofan.at_rating(CRUISE, "climb").net_thrust), 8000.0], rel=1e-9
    )


def test_an_empty_call_has_an_empty_answer(turbofan: CycleEngine) -> None:
    nowhere = flight_condition([0.0, 1.0]).at(np.zeros(0, dtype=int))

    state = turbofan.at_thrust(nowhere, np.zeros(0))

    assert state.net_thrust.shape == state.outcome.shape == (0,)


def test_stations_stand_in_flow_order(turbofan: CycleEngine, turbojet: CycleEngine) -> None:
    fan, jet = (engine.at_rating(CRUISE, "cruise").stations for engine in (turbofan, turbojet))

    assert list(fan) == [
        "0", "2", "21", "25", "3", "4", "41", "44", "45", "5", "7", "8", "9",
        "13", "17", "18", "19",
    ]  # fmt: skip
    assert list(jet) == ["0", "2", "3", "4", "41", "5", "7", "8", "9"]
    assert all(float(there.mass_flow) > 0.0 for there in (*fan.values(), *jet.values()))


def test_consumption_is_no_number_where_there_is_no_thrust(turbofan: CycleEngine) -> None:
    state = turbofan.at_rating(flight_condition(0.0, [0.0, 0.9]), "flight_idle")

    assert state.net_thrust[1] < 0.0 < state.net_thrust[0]
    assert np.isnan(state.specific_fuel_consumption).tolist() == [False, True]


def test_idle_burns_where_windmilling_does_not(turbofan: CycleEngine) -> None:
    flight = flight_condition(6000.0, 0.6)
    idle, unlit = turbofan.at_rating(flight, "flight_idle"), turbofan.windmilling(flight)

    assert float(idle.fuel_flow) > 0.0
    assert float(unlit.fuel_flow) == 0.0
    assert float(unlit.net_thrust) < float(idle.net_thrust)
    assert float(unlit.energy.shaft) == float(unlit.energy.bleed) == 0.0


@pytest.mark.parametrize(
    "changes",
    [
        {"design_point.bypass_ratio": 0.5, "design_point.fan_pressure_ratio": 3.0},
        {"design_point.bypass_ratio": 10.0, "design_point.fan_pressure_ratio": 1.45},
        {"design_point.booster_pressure_ratio": 1.0},
        {
            "design_point.pressure_altitude": "0 m",
            "design_point.mach": 0.0,
            "design_point.fan_pressure_ratio": 1.6,
            "design_point.turbine_entry_temperature": "1640 K",
            # A quarter of the size of the others, so a quarter of what is taken off them.
            "off_takes.shaft_power": "15 kW",
        },
    ],
    ids=["bypass 0.5", "bypass 10", "no booster", "sized on the ground"],
)
def test_other_turbofans_idle_climb_and_windmill(changes: dict[str, object]) -> None:
    engine = load(turbofan_content(changes))
    flight = flight_condition([[0.0], [6000.0], [12500.0]], [0.2, 0.45, 0.7, 0.9])

    for rating in ("take_off", "flight_idle"):
        assert np.all(engine.at_rating(flight, rating).outcome == Outcome.MET), rating
    unlit = engine.windmilling(flight)
    assert np.all(unlit.outcome == Outcome.MET)
    assert np.all(unlit.net_thrust < 0.0)


@pytest.mark.parametrize("rating", [*RATINGS, *IDLES])
def test_turbojet_runs_in_all_its_envelope(turbojet: CycleEngine, rating: str) -> None:
    flight = flight_condition(np.linspace(0.0, 12500.0, 6)[:, None], np.linspace(0.0, 0.9, 10))

    assert np.all(turbojet.at_rating(flight, rating).outcome == Outcome.MET)


def test_idle_below_self_sustaining_is_said_to_be_unphysical() -> None:
    engine = load(turbojet_content({"idle.ground.corrected_high_pressure_speed": 0.1}))

    state = engine.at_rating(flight_condition(0.0, 0.0), "ground_idle")

    assert int(state.outcome) in (Outcome.UNPHYSICAL, Outcome.NOT_CONVERGED)
    assert float(state.net_thrust) == float(state.fuel_flow) == 0.0


def test_colder_than_the_gas_may_be_believed_is_said(turbofan: CycleEngine) -> None:
    state = turbofan.at_rating(flight_condition([11000.0, 11000.0], 0.0, [0.0, -60.0]), "cruise")

    assert state.outcome.tolist() == [Outcome.MET, Outcome.UNPHYSICAL]


def test_scaling_the_sizing_scales_the_engine(turbofan: CycleEngine) -> None:
    twice = scaled(turbofan.sizing, 2.0)

    assert twice.design_airflow == 2.0 * turbofan.sizing.design_airflow
    assert twice.areas["core_nozzle"] == 2.0 * turbofan.sizing.areas["core_nozzle"]
    assert twice.flows["combustor"] == 2.0 * turbofan.sizing.flows["combustor"]
    assert twice.loadings == turbofan.sizing.loadings


def test_the_protocol_face_is_whole(turbofan: CycleEngine) -> None:
    assert turbofan.name == "test turbofan"
    assert turbofan.at_rating(CRUISE, "climb").iterations >= 0
    assert isinstance(turbofan.assumed, tuple)
