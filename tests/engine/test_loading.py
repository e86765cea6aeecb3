"""From an engine file to an engine, or to a refusal that says what to change."""

from __future__ import annotations

import pickle
import re
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from engine_files import TURBOFAN, Content, changed, load, turbofan_content, turbojet_content
from engine_kinds import KINDS

from engine.atmosphere import flight_condition
from engine.errors import CycleCannotRun, InputRefused
from engine.interface import RATINGS
from engine.options.constant_consumption import ConstantConsumptionEngine
from engine.options.loading import engine_from_content, load_engine

_IDLE_SPEED = "idle.flight.corrected_high_pressure_speed"


@pytest.mark.parametrize(
    ("key", "value", "place", "said"),
    [
        ("kind", "ramjet", "", "'ramjet'; allowed: 'turbojet', 'two-spool"),
        ("kind", None, "", "'kind' is missing"),
        ("zebra", 1, "zebra", "unknown key. Allowed here: bypass_nozzle, combustor"),
        ("design_point.by_pass_ratio", 5.0, "design_point.by_pass_ratio", "mean bypass_ratio?"),
        ("design_point.mach", None, "design_point.mach", "is missing"),
        ("design_point.mach", float("nan"), "design_point.mach", "it should be a finite number"),
        ("design_point.net_thrust", 16000, "design_point.net_thrust", 'for example "45 kN"'),
        ("design_point.net_thrust", "16 kg", "design_point.net_thrust", "'kg' is not a unit"),
        ("design_point.net_thrust", "0 kN", "design_point.net_thrust", "greater than 0"),
        ("design_point.airflow", "90 kg/s", "design_point", "give either net_thrust or airflow"),
        ("design_point.net_thrust", None, "design_point", "give either net_thrust or airflow"),
        (
            "design_point.pressure_altitude",
            "200000 ft",
            "design_point.pressure_altitude",
            "it should be less than or equal to 30000 m",
        ),
        ("design_point.day", "ISA-300", "design_point", "temperature deviation = -300 K"),
        ("design_point.day", "warm", "design_point.day", 'write for example "ISA" or "ISA+15"'),
        ("efficiencies.fan", {}, "efficiencies.fan", "give either polytropic or isentropic"),
        (
            "efficiencies.fan",
            {"polytropic": 0.9, "isentropic": 0.9},
            "efficiencies.fan",
            "give either polytropic or isentropic",
        ),
        ("efficiencies.fan.polytropic", 91.0, "efficiencies.fan.polytropic", "= 91.0; it should"),
        ("cooling.vane_fraction", 0.6, "cooling", "take 67% of the core's air"),
        ("core_nozzle.kind", "plug", "core_nozzle.kind", "= 'plug'; allowed: 'convergent'"),
        ("ratings.cruise", {}, "ratings.cruise", "a rating needs at least one limit"),
        ("idle.flight", {}, "idle.flight", "idle needs at least one floor"),
        (
            "ratings.cruise",
            None,
            "ratings.cruise",
            'it is a table with turbine_entry_temperature = "1400 K", say',
        ),
        ("idle.flight", None, "idle.flight", "corrected_high_pressure_speed = 0.6, say"),
        ("efficiencies", None, "efficiencies", "at least fan, high_pressure_compressor, high_p"),
        ("idle.flight.corrected_high_pressure_speed", 1.1, _IDLE_SPEED, "less than or equal to 1"),
        ("idle.flight.corrected_high_pressure_speed", 0.05, _IDLE_SPEED, "than or equal to 0.1"),
        ("ratings.climb.low_pressure_speed", 0.2, "ratings.climb.low_pressure_speed", "to 0.3"),
        ("ratings.climb.low_pressure_speed", 15.0, "ratings.climb.low_pressure_speed", "to 1.5"),
        ("scale", {"factor": 0.01}, "scale.factor", "greater than or equal to 0.02"),
        ("scale", {"factor": 21.0}, "scale.factor", "less than or equal to 20"),
        (
            "ratings.maximum_afterburning",
            {"turbine_entry_temperature": "1640 K"},
            "ratings",
            "maximum_afterburning needs an afterburner_temperature",
        ),
        ("design_point.net_thrust", "-2 kN", "design_point.net_thrust", "greater than 0 N"),
        ("pod.length", "2.1 kg", "pod.length", 'write for example "2.1 m"'),
        (
            "fuel",
            {"name": "mine", "density": "0.8 kg/L"},
            "fuel",
            "it lacks hydrogen_carbon_ratio (or carbon_atoms and hydrogen_atoms) and lower_heating",
        ),
        ("inlet", "good", "inlet", "= 'good'; a table belongs here"),
    ],
)
def test_what_cannot_be_read_is_named(key: str, value: Any, place: str, said: str) -> None:
    with pytest.raises(InputRefused, match=re.escape(said)) as caught:
        engine_from_content(turbofan_content({key: value}), "some.toml")

    assert caught.value.where == "some.toml"
    assert caught.value.key == place


def test_a_file_without_a_kind_is_told_the_kinds_and_where_examples_are() -> None:
    said = "'two-spool turbojet', 'turbofan', .*; the engines of `longlegs list` are examples"
    with pytest.raises(InputRefused, match=said):
        engine_from_content(turbofan_content({"kind": None}), "some.toml")


@pytest.mark.parametrize(
    ("name", "what"), [("coast_watch", "a mission"), ("coast_watch_twin", "an aircraft")]
)
def test_the_file_of_another_subject_is_recognised(name: str, what: str) -> None:
    with pytest.raises(InputRefused, match=f"is the file of {what}, and one of an engine is want"):
        load_engine(Path(__file__).parents[2] / "profiles" / f"{name}.toml")


@pytest.mark.parametrize("kind", ["turbojet", "turboprop"])
@pytest.mark.parametrize("key", ["low_pressure_speed", "corrected_low_pressure_speed"])
def test_one_spool_has_no_low_pressure_speed(kind: str, key: str) -> None:
    content = changed(KINDS[kind], {f"ratings.climb.{key}": 1.0})
    with pytest.raises(InputRefused, match=f"climb.{key}: .*use corrected_high_pressure_speed"):
        engine_from_content(content, "some.toml")


@pytest.mark.parametrize(
    ("changes", "said"),
    [
        (
            {"design_point.turbine_entry_temperature": "650 K"},
            "turbine_entry_temperature = 650 K is not above compressor delivery, 70",
        ),
        (
            {"design_point.bypass_ratio": 25.0},
            "the core nozzle cannot flow: .*the turbines cannot drive the compressors",
        ),
        (
            {"design_point.high_pressure_compressor_pressure_ratio": 100.0},
            "the turbines cannot drive the compressors",
        ),
        (
            {"off_takes.shaft_power": "50 MW"},
            "the turbines cannot drive the compressors",
        ),
        (
            {
                "design_point.fan_pressure_ratio": 1.01,
                "design_point.mach": 0.0,
                "design_point.pressure_altitude": "0 m",
            },
            "the bypass nozzle cannot flow: .*the fan does not raise the pressure enough",
        ),
    ],
)
def test_a_cycle_that_cannot_run_says_why(changes: Content, said: str) -> None:
    with pytest.raises(CycleCannotRun, match=said) as caught:
        engine_from_content(turbofan_content(changes), "some.toml")

    assert caught.value.where == "some.toml"
    assert caught.value.key == "design_point"


def test_a_turbojet_that_gives_no_thrust_is_refused() -> None:
    # Hardly hotter than delivery, and fast: the jet is slower than the flight.
    changes = {
        "design_point.mach": 2.8,
        "design_point.pressure_altitude": "40000 ft",
        "design_point.compressor_pressure_ratio": 30.0,
        "design_point.turbine_entry_temperature": "1700 K",
        "design_point.airflow": None,
        "design_point.net_thrust": "10 kN",
    }

    with pytest.raises(CycleCannotRun, match="gives no thrust at its design point"):
        engine_from_content(turbojet_content(changes), "some.toml")


def test_a_refusal_of_a_file_names_the_file(tmp_path: Path) -> None:
    path = tmp_path / "engine.toml"
    path.write_text('kind = "turbofan"\nname = "x"\n', encoding="utf-8")

    with pytest.raises(InputRefused, match=r"engine\.toml: ratings: is missing"):
        load_engine(path)


def test_the_engine_gives_at_its_design_point_what_was_asked() -> None:
    engine = load(turbofan_content())

    state = engine.at_rating(flight_condition(10668.0, 0.78), "cruise")

    assert float(state.net_thrust) == pytest.approx(16000.0, rel=1e-9)
    assert float(state.bypass_ratio) == pytest.approx(5.0, rel=1e-9)
    assert float(state.overall_pressure_ratio) == pytest.approx(1.68 * 1.5 * 11.5, rel=1e-9)
    assert float(state.turbine_entry_temperature) == pytest.approx(1480.0, rel=1e-9)


def test_size_by_airflow() -> None:
    changes = {"design_point.net_thrust": None, "design_point.airflow": "100 kg/s"}
    engine = load(turbofan_content(changes))

    state = engine.at_rating(flight_condition(10668.0, 0.78), "cruise")

    assert float(state.stations["2"].mass_flow) == pytest.approx(100.0, rel=1e-9)


def test_thrust_scales_with_size_but_for_the_shaft_power() -> None:
    small, large = (
        load(turbofan_content({"design_point.net_thrust": thrust, "off_takes.shaft_power": "0 kW"}))
        for thrust in ("8 kN", "32 kN")
    )
    flight = flight_condition([0.0, 6000.0, 11000.0], [0.2, 0.5, 0.8])

    ratio = (
        large.at_rating(flight, "climb").net_thrust / small.at_rating(flight, "climb").net_thrust
    )

    assert ratio == pytest.approx(np.full(3, 4.0), rel=1e-9)


def test_defaults_are_listed_as_assumed() -> None:
    assumed = load(turbofan_content()).assumed

    assert "fuel.lower_heating_value = 43031900.0" in assumed
    assert "core_nozzle.kind = convergent" in assumed
    assert not any(line.startswith("combustor.efficiency") for line in assumed)


def test_an_engine_survives_pickling_and_answers_the_same(tmp_path: Path) -> None:
    engine = load(turbofan_content())
    flight = flight_condition(9000.0, 0.7)

    back = pickle.loads(pickle.dumps(engine))

    found = back.at_rating(flight, "climb")
    assert found.net_thrust == engine.at_rating(flight, "climb").net_thrust


def test_the_content_is_left_as_it_was() -> None:
    before = turbofan_content()

    load(before)

    assert before == TURBOFAN


CONSTANT: Content = {
    "kind": "constant consumption",
    "name": "constant",
    "specific_fuel_consumption": "0.6 1/h",
    "static_thrust": "50 kN",
    "density_exponent": 1.0,
}


def test_constant_consumption() -> None:
    engine = engine_from_content(CONSTANT, "some.toml")
    assert isinstance(engine, ConstantConsumptionEngine)
    flight = flight_condition([0.0, 11000.0], 0.5)

    rated = engine.at_rating(flight, "climb")
    asked = engine.at(flight, rating=np.array(["climb", "flight_idle"]), net_thrust=[1e4, np.nan])
    beyond = engine.at_thrust(flight, 45000.0)

    # Density ratio at 11 km: 0.297076 (ISO 2533:1975).
    assert rated.net_thrust == pytest.approx([50000.0, 50000.0 * 0.297076], rel=4e-6)
    assert rated.fuel_flow == pytest.approx(rated.net_thrust * 0.6 / 3600.0 / 9.80665, rel=1e-12)
    assert asked.net_thrust.tolist() == [1e4, 0.0]
    assert beyond.outcome.tolist() == [0, 2]
    assert beyond.net_thrust[1] == rated.net_thrust[1]
    assert engine.windmilling(flight).fuel_flow.tolist() == [0.0, 0.0]
    assert engine.at_thrust(flight, -1.0).outcome.tolist() == [1, 1]
    assert rated.stations == {}
    assert rated.energy is None
    with pytest.raises(InputRefused, match="'full' is no rating of constant; it has take_off"):
        engine.at_rating(flight, "full")


@pytest.mark.parametrize("rating", RATINGS)
def test_every_rating_stands_at_its_limit(rating: str) -> None:
    state = load(turbofan_content()).at_rating(flight_condition(3000.0, 0.4), rating)

    assert float(np.max(state.limit_shares)) == pytest.approx(1.0, rel=1e-9)
