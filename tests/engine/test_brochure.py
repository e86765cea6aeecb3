"""An engine from four numbers: what is asked of it is met, flown, or refused in plain words."""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest
from engine_files import changed, one_rating

from engine.atmosphere import flight_condition
from engine.cycle_engine import CycleEngine
from engine.errors import InputRefused
from engine.interface import IDLES, RATINGS, EngineState, Outcome
from engine.options import brochure
from engine.options.brochure import cycle_content
from engine.options.loading import engine_from_content

GROUND = flight_condition(0.0, 0.0)
# Thrust [N], specific fuel consumption [kg/(N s)], bypass and overall pressure ratio.
NUMBERS: dict[str, tuple[float, float, float, float]] = {
    "turbojet": (12e3, 28e-6, 0.0, 7.0),
    "two-spool turbojet": (60e3, 23e-6, 0.0, 14.0),
    "bypass 0.3": (40e3, 20e-6, 0.3, 20.0),
    "bypass 1": (70e3, 17e-6, 1.0, 17.0),
    "bypass 5": (120e3, 9.5e-6, 5.0, 28.0),
    "bypass 12": (150e3, 6.9e-6, 12.0, 42.0),
}


def written(name: str, **changes: Any) -> dict[str, Any]:
    """The file of an engine."""
    thrust, consumption, bypass_ratio, overall = NUMBERS[name]
    return {
        "kind": "brochure",
        "name": name,
        "static_thrust": f"{thrust} N",
        "static_specific_fuel_consumption": f"{consumption} kg/s/N",
        "bypass_ratio": bypass_ratio,
        "overall_pressure_ratio": overall,
    } | changes


def load(name: str, **changes: Any) -> CycleEngine:
    engine = engine_from_content(written(name, **changes), "four.toml")
    assert isinstance(engine, CycleEngine)
    return engine


def content(name: str, **changes: float) -> dict[str, Any]:
    thrust, consumption, bypass_ratio, overall = NUMBERS[name]
    numbers = {
        "static_thrust": thrust,
        "static_specific_fuel_consumption": consumption,
        "bypass_ratio": bypass_ratio,
        "overall_pressure_ratio": overall,
    }
    return cycle_content(name=name, **(numbers | changes))


def at_design(name: str) -> EngineState:
    """The engine at its static thrust, no rating in the way."""
    free = changed(content(name), one_rating(turbine_entry_temperature="2400 K"))
    engine = engine_from_content(free, "free.toml")
    return engine.at_thrust(GROUND, NUMBERS[name][0], rating="take_off")


@pytest.mark.parametrize("name", NUMBERS)
def test_the_four_numbers_are_met(name: str) -> None:
    thrust, consumption, bypass_ratio, overall = NUMBERS[name]
    state = at_design(name)

    assert load(name).sizing.reference_thrust == pytest.approx(thrust, rel=1e-9)
    assert float(state.specific_fuel_consumption) == pytest.approx(consumption, rel=1e-4)
    assert float(state.bypass_ratio) == pytest.approx(bypass_ratio, rel=1e-9)
    assert float(state.overall_pressure_ratio) == pytest.approx(overall, rel=1e-5)


@pytest.mark.parametrize("name", ["bypass 1", "bypass 5", "bypass 12"])
def test_the_bypass_jet_has_its_share_of_velocity(name: str) -> None:
    state = at_design(name)
    assert state.evidence is not None
    core, bypass = (
        float((jet.gross_thrust / stream.mass_flow).item())
        for stream, jet in state.evidence.path.jets.values()
    )
    assert bypass / core == pytest.approx(brochure.VELOCITY_RATIO, rel=1e-4)


@pytest.mark.parametrize("name", NUMBERS)
def test_it_runs_in_all_its_envelope(name: str) -> None:
    engine = load(name)
    flight = flight_condition([[0.0], [5000.0], [11000.0]], [0.2, 0.5, 0.8])
    for rating in (*RATINGS, *IDLES[:1]):
        state = engine.at_rating(flight, rating)
        assert np.all(state.outcome == Outcome.MET), rating
    assert np.all(engine.windmilling(flight).outcome == Outcome.MET)


@pytest.mark.parametrize("name", NUMBERS)
def test_ratings_and_idles_stand_in_order(name: str) -> None:
    engine, thrust = load(name), NUMBERS[name][0]
    shares = [
        float(engine.at_rating(GROUND, rating).net_thrust) / thrust
        for rating in (*RATINGS, "flight_idle", "ground_idle")
    ]
    assert shares == sorted(shares, reverse=True)
    assert shares[0] == pytest.approx(1.0, abs=0.01)
    assert 0.025 < shares[-1] < 0.075


def test_take_off_thrust_is_flat_to_a_warm_day() -> None:
    engine = load("bypass 5")
    cold, warm, hot = (
        float(engine.at_rating(flight_condition(0.0, 0.0, day), "take_off").net_thrust)
        for day in (-15.0, 15.0, 30.0)
    )
    assert cold == pytest.approx(warm, rel=1e-6)
    assert hot < 0.97 * warm


def test_what_the_rule_put_in_is_told() -> None:
    engine = load("bypass 5")
    told = dict(line.split(" = ", 1) for line in engine.assumed)
    hot = float(at_design("bypass 5").turbine_entry_temperature)

    assert float(told["design_point.turbine_entry_temperature"]) == pytest.approx(hot, abs=0.1)
    assert float(told["design_point.fan_pressure_ratio"]) > 1.3
    assert told["efficiencies.mechanical"] == "0.99"
    assert "design_point.bypass_ratio" not in told
    assert told["fuel.name"] == "kerosene"


def test_a_thirstier_engine_is_hotter_and_less_efficient() -> None:
    frugal, thirsty = (
        content("bypass 5", static_specific_fuel_consumption=c) for c in (9e-6, 11e-6)
    )
    temperatures = [
        float(c["design_point"]["turbine_entry_temperature"].removesuffix(" K"))
        for c in (frugal, thirsty)
    ]
    qualities = [c["efficiencies"]["fan"]["polytropic"] for c in (frugal, thirsty)]
    assert temperatures[0] < temperatures[1]
    assert qualities[0] > qualities[1]


def test_the_content_is_an_ordinary_engine_file() -> None:
    """And gives the same engine as the four numbers."""
    whole = engine_from_content(content("bypass 5"), "whole.toml")
    point = {"flight": flight_condition(10000.0, 0.75), "rating": "cruise"}
    assert float(whole.at(**point).fuel_flow) == pytest.approx(
        float(load("bypass 5").at(**point).fuel_flow), rel=1e-9
    )


def test_another_fuel_is_burnt() -> None:
    engine = load("bypass 5", fuel="hydrogen", static_specific_fuel_consumption="3.4e-6 kg/s/N")
    assert engine.fuel.name == "hydrogen"
    state = engine.at_thrust(GROUND, 119e3, rating="take_off")
    assert float(state.specific_fuel_consumption) == pytest.approx(3.4e-6, rel=2e-2)


@pytest.mark.parametrize(
    ("name", "consumption", "words"),
    [
        ("bypass 5", "4 mg/N/s", "raise it, or raise bypass_ratio or overall_pressure_ratio"),
        ("bypass 5", "25 mg/N/s", "lower it, or lower bypass_ratio or overall_pressure_ratio"),
        ("turbojet", "12 mg/N/s", "raise it, or raise overall_pressure_ratio"),
    ],
)
def test_a_consumption_that_no_engine_has_is_refused(
    name: str, consumption: str, words: str
) -> None:
    with pytest.raises(InputRefused) as refusal:
        load(name, static_specific_fuel_consumption=consumption)
    assert refusal.value.key == "static_specific_fuel_consumption"
    assert refusal.value.where == "four.toml"
    assert f"= {consumption}".removesuffix(" mg/N/s") in refusal.value.what
    assert words in refusal.value.what


def test_the_direction_that_a_refusal_names_helps() -> None:
    """A consumption too low for one bypass ratio is met by a greater one."""
    with pytest.raises(InputRefused):
        content("bypass 1", static_specific_fuel_consumption=9e-6)
    assert content("bypass 5", static_specific_fuel_consumption=9e-6)


@pytest.mark.parametrize(
    ("key", "value"),
    [
        ("bypass_ratio", -1.0),
        ("bypass_ratio", 40.0),
        ("overall_pressure_ratio", 1.0),
        ("static_thrust", "0 N"),
        ("static_thrust", 120.0),
        ("turbine_entry_temperature", "1500 K"),
    ],
)
def test_numbers_out_of_range_and_unknown_keys_are_refused(key: str, value: object) -> None:
    with pytest.raises(InputRefused) as refusal:
        load("bypass 5", **{key: value})
    assert refusal.value.key == key


def test_it_costs_few_evaluations(monkeypatch: pytest.MonkeyPatch) -> None:
    """Of the design point alone; a matched state from cold takes some 60 of them."""
    calls = []
    run = brochure._Bench._run

    def counted(bench: Any, engine: Any) -> Any:
        calls.append(engine)
        return run(bench, engine)

    monkeypatch.setattr(brochure._Bench, "_run", counted)
    content("bypass 5")
    assert len(calls) < 120
