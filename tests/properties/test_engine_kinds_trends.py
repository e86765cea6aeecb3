"""What every kind of engine does: more thrust takes more fuel, a hotter day gives less of it."""

from __future__ import annotations

import numpy as np
import pytest
from engine_files import Content, changed, load, one_rating
from engine_kinds import KINDS, MIXED, REHEATED, engine_of, envelope_of

from engine.atmosphere import FlightCondition, flight_condition
from engine.cycle_engine import CycleEngine
from engine.interface import Outcome

REHEATED_KINDS = [kind for kind in KINDS if "reheated" in kind]
TEMPERATURE = dict.fromkeys(("turbojet", "reheated", "two-spool", "turboprop"), "1250 K")


def top_of(engine: CycleEngine) -> str:
    names = engine.ratings
    return "maximum_afterburning" if "maximum_afterburning" in names else "take_off"


def column(flight: FlightCondition) -> FlightCondition:
    """The same conditions, one to a row."""
    return FlightCondition(
        *(getattr(flight, name)[:, None] for name in FlightCondition.__dataclass_fields__)
    )


def low_speed_idle(kind: str) -> CycleEngine:
    """The engine of a kind with an idle that is not slower than least fuel flow."""
    return load(changed(KINDS[kind], {"idle.flight": {"corrected_high_pressure_speed": 0.75}}))


@pytest.mark.parametrize("kind", KINDS)
def test_more_thrust_burns_more_fuel(kind: str) -> None:
    engine, flight = low_speed_idle(kind), envelope_of(kind, 5)
    flight = flight.at(np.flatnonzero(flight.mach > 0.3 * flight.pressure_altitude / 13000.0))
    top = top_of(engine)
    most, least = (
        engine.at_rating(flight, name).net_thrust[:, None] for name in (top, "flight_idle")
    )
    shares = np.append(np.linspace(0.0, 1.0, 21)[:-1], 1.0 - 1e-9)

    state = engine.at_thrust(column(flight), least + shares * (most - least), rating=top)

    assert np.all(state.outcome == Outcome.MET)
    assert np.all(np.diff(state.fuel_flow, axis=1) > 0.0)


@pytest.mark.parametrize("kind", REHEATED_KINDS)
def test_reheat_begins_where_dry_running_ends(kind: str) -> None:
    engine, flight = engine_of(kind), envelope_of(kind, 4)
    # The dry thrust of the reheated rating's own gas generator.
    rating = engine.bounds["maximum_afterburning"]
    dry_table = changed(
        KINDS[kind],
        {
            "ratings.take_off": {
                key: value
                for key, value in KINDS[kind]["ratings"]["maximum_afterburning"].items()
                if not key.startswith("afterburner")
            }
        },
    )
    dry = load(dry_table).at_rating(flight, "take_off")
    steps = 1.0 + np.array([-1e-2, -1e-4, -1e-6, 1e-6, 1e-4, 1e-2])

    state = engine.at_thrust(
        column(flight), steps * dry.net_thrust[:, None], rating="maximum_afterburning"
    )

    assert rating.is_reheated
    assert np.all(state.outcome == Outcome.MET)
    fuel = state.fuel_flow
    assert np.all(np.diff(fuel, axis=1) > 0.0)
    assert fuel[:, 2] == pytest.approx(dry.fuel_flow, rel=1e-4)
    assert fuel[:, 3] == pytest.approx(dry.fuel_flow, rel=1e-4)
    # Ahead of the afterburner nothing moves.
    lit = state.stations
    for name in ("2", "3", "4", "5"):
        pressure = lit[name].total_pressure[:, 3:]
        assert pressure == pytest.approx(np.repeat(pressure[:, :1], 3, axis=1), rel=1e-9)


@pytest.mark.parametrize("kind", REHEATED_KINDS)
def test_hotter_reheat_gives_more_thrust_for_more_fuel_each(kind: str) -> None:
    flight = envelope_of(kind, 4)
    key = "ratings.maximum_afterburning.afterburner_temperature"
    states = [
        load(changed(KINDS[kind], {key: f"{hot} K"})).at_rating(flight, "maximum_afterburning")
        for hot in (1300, 1600, 1900)
    ]

    thrust = np.array([state.net_thrust for state in states])
    consumption = np.array([state.specific_fuel_consumption for state in states])
    assert np.all(np.diff(thrust, axis=0) > 0.0)
    assert np.all(np.diff(consumption, axis=0) > 0.0)


@pytest.mark.parametrize("ratio", [0.03, 0.05])
def test_reheat_keeps_its_bound_of_fuel(ratio: float) -> None:
    changes = {
        "ratings.maximum_afterburning.afterburner_temperature": "2300 K",
        "ratings.maximum_afterburning.afterburner_fuel_air_ratio": ratio,
    }
    state = load(changed(REHEATED, changes)).at_rating(
        envelope_of("reheated", 4), "maximum_afterburning"
    )

    assert np.all(state.outcome == Outcome.MET)
    assert set(state.binding_limit_names) == {"afterburner_fuel_air_ratio"}
    found = state.stations["9"].fuel_air_ratio
    assert found == pytest.approx(np.full(found.shape, ratio), rel=1e-9)


def one_temperature(kind: str, **more: str | float) -> Content:
    """The kind with every rating bounded by turbine entry temperature alone."""
    hot = TEMPERATURE.get(kind, "1500 K")
    changes = one_rating(turbine_entry_temperature=hot, **more)
    if kind in REHEATED_KINDS:
        lit = {"turbine_entry_temperature": hot, "afterburner_temperature": "1900 K", **more}
        changes["ratings.maximum_afterburning"] = lit
    return changed(KINDS[kind], changes)


DAYS = np.array([-20.0, -5.0, 0.0, 10.0, 15.0, 20.0, 35.0])


def on_days(kind: str) -> FlightCondition:
    """A few flight conditions by the days of :data:`DAYS`."""
    flight = envelope_of(kind, 3)
    return flight_condition(flight.pressure_altitude[:, None], flight.mach[:, None], DAYS)


@pytest.mark.parametrize("kind", KINDS)
def test_a_warmer_day_gives_less_thrust(kind: str) -> None:
    engine = load(one_temperature(kind))

    for rating in {"take_off", top_of(engine)}:
        state = engine.at_rating(on_days(kind), rating)
        assert np.all(state.outcome == Outcome.MET)
        assert np.all(np.diff(state.net_thrust, axis=1) < 0.0), rating


@pytest.mark.parametrize("kind", KINDS)
def test_a_flat_rating_is_flat_up_to_its_day(kind: str) -> None:
    engine, bare = load(one_temperature(kind, flat_to="ISA+15")), load(one_temperature(kind))
    flight, top = on_days(kind), top_of(engine)

    state, free = engine.at_rating(flight, top), bare.at_rating(flight, top)

    assert np.all(state.outcome == Outcome.MET)
    cold = DAYS <= 15.0
    corner = np.repeat(free.net_thrust[:, DAYS == 15.0], cold.sum(), axis=1)
    assert state.net_thrust[:, cold] == pytest.approx(corner, rel=1e-9)
    assert state.net_thrust[:, ~cold] == pytest.approx(free.net_thrust[:, ~cold], rel=1e-9)
    assert np.all(np.diff(state.net_thrust[:, DAYS >= 15.0], axis=1) < 0.0)
    assert np.all(state.binding_limit_names[:, DAYS < 15.0] == "flat_rated_thrust")
    # The warmer of two days of equal thrust takes more fuel.
    assert np.all(np.diff(state.fuel_flow[:, cold], axis=1) > 0.0)


@pytest.mark.parametrize("kind", KINDS)
def test_below_the_theta_break_temperature_falls_with_the_air(kind: str) -> None:
    engine = load(one_temperature(kind, throttle_ratio=1.02))
    state = engine.at_rating(on_days(kind), "take_off")

    theta = state.flight.static_temperature * (1.0 + 0.2 * state.flight.mach**2) / 288.15
    hottest = float(TEMPERATURE.get(kind, "1500 K").removesuffix(" K"))
    wanted = hottest * np.minimum(theta / 1.02, 1.0)
    assert np.all(state.outcome == Outcome.MET)
    assert state.turbine_entry_temperature == pytest.approx(wanted, rel=1e-9)
    assert (theta > 1.02).any()
    assert (theta < 1.02).any()


@pytest.mark.parametrize("kind", KINDS)
def test_thrust_falls_with_altitude(kind: str) -> None:
    engine = load(one_temperature(kind))
    highest = 9000.0 if kind == "turboprop" else 12500.0
    flight = flight_condition(np.linspace(0.0, highest, 20), [[0.2], [0.5], [0.65]])

    state = engine.at_rating(flight, top_of(engine))

    assert np.all(state.outcome == Outcome.MET)
    assert np.all(np.diff(state.net_thrust, axis=1) < 0.0)


def test_better_mixing_gives_more_thrust_at_the_design_point() -> None:
    flight = flight_condition(10668.0, 0.78)
    size = {"design_point.net_thrust": None, "design_point.airflow": "36 kg/s"}

    thrust = [
        float(load(changed(MIXED, {**size, "mixer.effectiveness": share})).at_rating(
            flight, "cruise").net_thrust)
        for share in (0.0, 0.5, 1.0)
    ]  # fmt: skip

    assert thrust[1] == pytest.approx(0.5 * (thrust[0] + thrust[2]), rel=1e-6)
    assert thrust[0] < thrust[2]


def test_shaft_power_bounds_a_turboprop_low_and_temperature_high() -> None:
    engine = engine_of("turboprop")

    state = engine.at_rating(flight_condition([0.0, 8000.0], 0.65), "climb")

    assert state.binding_limit_names.tolist() == [
        "propeller_shaft_power",
        "turbine_entry_temperature",
    ]
    assert state.evidence is not None
    power = state.evidence.path.limits["propeller_shaft_power"]
    assert power[0] == pytest.approx(2.2e6, rel=1e-9)
    assert power[1] < 2.2e6
