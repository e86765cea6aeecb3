"""Fitting an engine file to points: what is found again, what is refused, what is told of it."""

from __future__ import annotations

import re
from dataclasses import replace

import numpy as np
import pytest
from engine_files import TURBOFAN, Content, changed, load, turbofan_content, turbojet_content
from engine_kinds import KINDS

from engine.atmosphere import flight_condition
from engine.errors import CycleCannotRun, InputRefused
from engine.interface import Outcome
from engine.options.fit_judgement import gaps, judge
from engine.options.fit_parameters import Parameter, choose, free_parameters, put
from engine.options.fit_points import DEMAND, FitPoints
from engine.options.fit_trials import Answers, Bench
from engine.options.fitting import LEVERS, MOST_LEVERS, cycle_content, fit
from engine.options.input_model import CycleEngineFile, EngineFile
from engine.reading import check

SIZE = "design_point.net_thrust"
CORE = "efficiencies.high_pressure_compressor"
HOT = "design_point.turbine_entry_temperature"
Row = tuple[float, float, str, float]
ROWS: list[Row] = [
    (0.0, 0.0, "take_off", np.nan),
    (6000.0, 0.6, "climb", np.nan),
    (10668.0, 0.78, "cruise", np.nan),
    (10668.0, 0.78, DEMAND, 11000.0),
    (10668.0, 0.78, DEMAND, 8000.0),
    (0.0, 0.0, "ground_idle", np.nan),
]


def points_of(content: Content, rows: list[Row], day: float = 0.0) -> FitPoints:
    """What an engine gives, as the points of a file; thrusts are asked for under cruise."""
    altitude, mach, names, thrust = (np.array(column) for column in zip(*rows, strict=True))
    state = load(content).at(
        flight_condition(altitude, mach, day),
        rating=np.where(names == DEMAND, "maximum_continuous", names),
        net_thrust=thrust,
    )
    assert np.all(state.outcome == Outcome.MET)
    lines = np.arange(2, 2 + len(rows))
    days = np.full(len(rows), day)
    return FitPoints(
        "points.csv", lines, altitude, mach, days, names, state.net_thrust, state.fuel_flow
    )


def scaled_fuel(points: FitPoints, factor: float | np.ndarray) -> FitPoints:
    return FitPoints(**{**vars(points), "fuel_flow": points.fuel_flow * factor})


def known(content: Content) -> dict[str, Parameter]:
    written = check({"engine": content}, EngineFile, "test.toml").engine
    assert isinstance(written, CycleEngineFile)
    return free_parameters(written, content)  # type: ignore[arg-type]


def found(content: Content, points: FitPoints, *keys: str) -> dict[str, float]:
    fitted = fit(content, "test.toml", points, keys)
    assert fitted.has_settled
    return {each.parameter.key: each.value for each in fitted.parameters}


def test_what_made_the_points_is_found_again() -> None:
    start = turbofan_content({CORE: {"polytropic": 0.87}, SIZE: "14.5 kN", HOT: "1430 K"})
    fitted = fit(start, "test.toml", points_of(TURBOFAN, ROWS), (SIZE, CORE, HOT))
    values = [each.value for each in fitted.parameters]
    assert values == pytest.approx([16000.0, 0.895, 1480.0], rel=1e-6)
    assert fitted.rms_error(fitted.before) > 0.03
    assert fitted.rms_error(fitted.after) < 1e-7
    assert fitted.failed == 0
    assert all(not each.judgement.gap for each in fitted.parameters)


@pytest.mark.parametrize("kind", ["turbojet", "two-spool", "mixed reheated", "turboprop"])
def test_every_kind_of_cycle_can_be_fitted(kind: str) -> None:
    content = KINDS[kind]
    size = "design_point.net_thrust" if kind == "mixed reheated" else "design_point.airflow"
    parameter = known(content)[size]
    core = next(key for key in LEVERS if "compressor" in key and key in known(content))
    rows = [(0.0, 0.0, "take_off", np.nan), (5000.0, 0.5, "cruise", np.nan)]
    if kind == "mixed reheated":
        rows.append((0.0, 0.3, "maximum_afterburning", np.nan))
    start = changed(content, {size: parameter.written(1.1 * parameter.start)})
    efficiency = known(start)[core]
    start = put(start, {efficiency.place: efficiency.start - 0.02})
    values = found(start, points_of(content, rows), size, core)
    assert values == pytest.approx({size: parameter.start, core: efficiency.start}, rel=1e-6)


def test_points_hold_for_their_day() -> None:
    points = points_of(TURBOFAN, ROWS[:3], day=15.0)
    assert found(turbofan_content({SIZE: "15 kN"}), points, SIZE)[SIZE] == pytest.approx(16000.0)
    ours = scaled_fuel(points, 1.0)
    cold = FitPoints(**{**vars(ours), "temperature_deviation": np.zeros(3)})
    assert found(turbofan_content({SIZE: "15 kN"}), cold, SIZE)[SIZE] < 15800.0


def test_keys_that_nobody_named_are_no_more_than_the_data_carry() -> None:
    start = turbofan_content({SIZE: "15 kN"})
    for rows, most in ((ROWS[3:4], 1), (ROWS[:1], 2), (ROWS[:3], 3), (ROWS, 4)):
        points = points_of(TURBOFAN, rows)
        fitted = fit(start, "test.toml", points)
        assert fitted.is_free_by_rule
        assert 1 <= len(fitted.parameters) <= most
        assert most == min(2 + max(points.data_count - 2, 0) // 3, MOST_LEVERS, points.data_count)
        assert {each.parameter.key for each in fitted.parameters} <= set(LEVERS)
        assert fitted.rms_error(fitted.after) < 1e-6


def test_keys_that_no_point_tells_are_refused() -> None:
    points = points_of(TURBOFAN, ROWS[:2])
    with pytest.raises(InputRefused, match=r"ratings\.cruise\.turbine.* moves none of the 4 data"):
        fit(TURBOFAN, "t", points, (SIZE, "ratings.cruise.turbine_entry_temperature"))
    twice = turbofan_content({"off_takes.shaft_power": "0 kW", "scale": {"factor": 1.0}})
    with pytest.raises(InputRefused, match="move none of the 4 data when they go together") as told:
        fit(twice, "t", points, (CORE, SIZE, "scale.factor"))
    assert told.value.what.startswith((f"{SIZE} and scale", f"scale.factor and {SIZE}"))
    assert CORE not in told.value.what
    assert re.search(r"scale\.factor [+-]0\.03", told.value.what)  # against 3 % of the thrust
    assert re.search(r"net_thrust [+-]0\.48 kN", told.value.what)


def test_more_parameters_than_data_are_refused() -> None:
    points = points_of(TURBOFAN, ROWS[3:5])
    with pytest.raises(InputRefused, match=r"3 parameters are free and .* holds 2 data"):
        fit(TURBOFAN, "test.toml", points, (SIZE, CORE, HOT))


@pytest.mark.parametrize(
    ("keys", "said"),
    [
        (("efficiencies.high_presure_compressor",), f"did you mean {CORE}"),
        (("zebra",), f"{SIZE}, "),
        (("name",), "that may be free"),
        ((CORE, f"{CORE}.polytropic"), "asked for twice"),
        (("efficiencies.fan",), "= 0.97 is where the fit would start, outside the 0.7 to 0.95"),
    ],
)
def test_keys_that_cannot_be_free_are_named(keys: tuple[str, ...], said: str) -> None:
    content = turbofan_content({"efficiencies.fan": {"polytropic": 0.97}})
    with pytest.raises(InputRefused, match=re.escape(said)) as caught:
        fit(content, "test.toml", points_of(TURBOFAN, ROWS), keys)
    assert caught.value.key == "--free"


def test_what_has_no_cycle_is_refused() -> None:
    content = {
        "kind": "constant consumption",
        "name": "c",
        "specific_fuel_consumption": "16 mg/N/s",
        "static_thrust": "20 kN",
    }
    with pytest.raises(InputRefused, match="which has no cycle to fit"):
        fit(content, "test.toml", points_of(TURBOFAN, ROWS))


def test_an_engine_that_cannot_start_is_named() -> None:
    points = points_of(TURBOFAN, ROWS[:2])
    with pytest.raises(CycleCannotRun, match="core nozzle cannot flow"):
        fit(turbofan_content({HOT: "900 K"}), "test.toml", points, (SIZE,))
    content = turbofan_content({"ratings.climb": {"turbine_entry_temperature": "400 K"}})
    with pytest.raises(InputRefused, match=r"no answer at 1 of 2 points \(line 3, 6000 m") as told:
        fit(content, "test.toml", points, (SIZE,))
    assert told.value.where == "points.csv"
    named = FitPoints(**{**vars(points), "rating": np.array(["maximum_afterburning"] * 2)})
    with pytest.raises(InputRefused, match="maximum_afterburning, which test turbofan has not"):
        fit(TURBOFAN, "test.toml", named, (SIZE,))


def test_data_of_another_engine_or_unit_are_refused() -> None:
    points = points_of(TURBOFAN, ROWS)
    there = points.fuel_flow[0]
    said = r"net_thrust_n = 441529, and the engine to start from gives 73588\.1 N .*check the units"
    large = replace(points, net_thrust=6.0 * points.net_thrust, fuel_flow=6.0 * points.fuel_flow)
    with pytest.raises(InputRefused, match=said) as caught:
        fit(TURBOFAN, "test.toml", large, (CORE,))
    assert (caught.value.where, caught.value.key) == ("points.csv", "line 2")
    one = np.array([6.0, 1.0, 1.0, 1.0, 1.0, 1.0])
    said = rf"fuel_flow_kg_per_s = {6.0 * there:g}, and the engine to start from gives {there:g}"
    for factor, keys in ((one, (SIZE,)), (one, ()), (1.0 / one, (CORE,))):
        with pytest.raises(InputRefused, match=said if factor is one else "5 times off"):
            fit(TURBOFAN, "test.toml", scaled_fuel(points, factor), keys)


def test_a_larger_engine_of_the_same_consumption_is_let_through_where_size_is_free() -> None:
    content = turbofan_content({"off_takes.shaft_power": "0 kW"})
    start = changed(content, {SIZE: "2.9 kN"})
    assert found(start, points_of(content, ROWS[:3]), SIZE)[SIZE] == pytest.approx(14500.0)


def test_a_parameter_stops_at_its_bound() -> None:
    points = scaled_fuel(points_of(TURBOFAN, ROWS), 0.97)
    fitted = fit(TURBOFAN, "test.toml", points, ("combustor.efficiency", SIZE))
    held, size = fitted.parameters
    assert held.value == 1.0
    assert held.judgement.is_at_bound
    assert held.judgement.uncertainty is None
    assert not size.judgement.is_at_bound
    assert size.judgement.partner == ""


def test_a_trial_that_cannot_run_has_a_large_error_and_is_counted() -> None:
    points = points_of(TURBOFAN, ROWS)
    bench = Bench.of(TURBOFAN, "test.toml", points)
    parameters = choose((HOT,), known(TURBOFAN))
    near, far = (bench.run(parameters, np.array([t / 20.0])) for t in (900.0, 800.0))
    assert not near.is_answered
    assert not far.is_answered
    assert np.min(near.rows) >= 10.0
    assert bench.is_at_edge(far.x + 0.05)
    assert not bench.is_at_edge(bench.base.x)
    assert near.rows.shape == bench.base.rows.shape
    assert (bench.evaluations, len(bench.failed)) == (3, 2)


BYPASS, FAN = "design_point.bypass_ratio", "design_point.fan_pressure_ratio"


def test_a_fit_comes_back_from_where_no_engine_runs() -> None:
    """It is drawn there by a consumption that no such cycle has."""
    points = scaled_fuel(points_of(TURBOFAN, ROWS), 0.7)
    start = turbofan_content({HOT: "1405 K", BYPASS: 4.05, FAN: 2.09})
    fitted = fit(start, "test.toml", points, (HOT, BYPASS, FAN))
    assert fitted.failed > 0
    assert not fitted.is_at_edge
    assert fitted.rms_error(fitted.after) < 0.7 * fitted.rms_error(fitted.before)


def test_an_engine_without_an_answer_is_not_written(monkeypatch: pytest.MonkeyPatch) -> None:
    points = points_of(TURBOFAN, ROWS)

    def cold(bench: Bench, _: object) -> Answers:
        assert bench.base.answers is not None
        outcome = np.array([Outcome.MET] * 4 + [Outcome.UNPHYSICAL, Outcome.NOT_CONVERGED])
        return replace(bench.base.answers, outcome=outcome)

    monkeypatch.setattr(Bench, "cold", cold)
    said = r"ended with has no answer at 2 of 6 .* it has no .* it finds .* nothing is written"
    with pytest.raises(InputRefused, match=said):
        fit(turbofan_content({SIZE: "15 kN"}), "test.toml", points, (SIZE,))


BROCHURE: Content = {
    "kind": "brochure",
    "name": "four numbers",
    "static_thrust": "120 kN",
    "static_specific_fuel_consumption": "9.6 mg/N/s",
    "bypass_ratio": 5.1,
    "overall_pressure_ratio": 30.0,
}


def test_a_brochure_is_written_out_and_its_consumption_is_a_datum() -> None:
    whole = cycle_content(BROCHURE, "b.toml")
    assert whole["kind"] == "turbofan"
    assert cycle_content(whole, "b.toml") is whole
    cruise = (10668.0, 0.8, DEMAND, 20000.0)
    points = scaled_fuel(points_of(whole, [cruise, (0.0, 0.0, DEMAND, 36000.0)]), 0.97)
    fitted = fit(BROCHURE, "b.toml", points)
    assert fitted.points.data_count == 3
    assert fitted.points.place(0) == "the brochure's own point"
    assert fitted.points.fuel_flow[0] == pytest.approx(120e3 * 9.6e-6)
    assert fitted.before.fuel_error == pytest.approx([0.0, 1 / 0.97 - 1, 1 / 0.97 - 1], abs=2e-5)
    assert fitted.parameters[0].parameter.key == CORE
    assert fitted.rms_error(fitted.after) < 0.6 * fitted.rms_error(fitted.before)
    quality = fitted.content["efficiencies"]
    assert quality["high_pressure_compressor"] != quality["fan"] == whole["efficiencies"]["fan"]


def test_a_thrust_that_is_out_of_reach_draws_the_engine_to_it() -> None:
    rows = [*ROWS[:1], (10668.0, 0.78, DEMAND, 17000.0)]
    points = points_of(TURBOFAN, rows)
    fitted = fit(turbofan_content({SIZE: "12 kN"}), "test.toml", points, (SIZE,))
    assert fitted.before.thrust_error[1] < -0.1
    assert fitted.after.thrust_error[1] == 0.0
    assert fitted.parameters[0].value == pytest.approx(16000.0, rel=1e-6)


def test_a_thrust_near_zero_is_compared_with_the_greatest() -> None:
    points = points_of(TURBOFAN, [*ROWS[:1], (9000.0, 0.75, "flight_idle", np.nan)])
    bench = Bench.of(turbofan_content({SIZE: "17 kN"}), "test.toml", points)
    assert bench.base.answers is not None
    wanted = bench.base.answers.net_thrust[1] - points.net_thrust[1]
    share = 0.05 * points.net_thrust[0]
    assert abs(points.net_thrust[1]) < share
    assert bench.base.answers.thrust_error[1] == pytest.approx(wanted / share)


def test_the_uncertainty_is_that_of_a_mean() -> None:
    """Size alone scales every thrust: its value is the mean of what the points ask for."""
    content = turbofan_content({"off_takes.shaft_power": "0 kW"})
    rows = [(height, 0.5, "climb", np.nan) for height in (2000.0, 5000.0, 7000.0, 9000.0)]
    noise = np.array([0.01, -0.02, 0.015, 0.004])
    exact = points_of(content, rows)
    points = FitPoints(
        **{
            **vars(exact),
            "net_thrust": exact.net_thrust * (1.0 + noise),
            "fuel_flow": np.full(4, np.nan),
        }
    )
    (size,) = fit(content, "test.toml", points, (SIZE,)).parameters
    inverse = 1.0 / (1.0 + noise)  # errors are relative to the data
    best = inverse.sum() / (inverse @ inverse)
    left = best * inverse - 1.0
    deviation = np.sqrt(left @ left / 3.0 / (inverse @ inverse))
    assert size.value / 16000.0 == pytest.approx(best, rel=1e-6)
    assert size.judgement.uncertainty is not None
    assert size.judgement.uncertainty / 16000.0 == pytest.approx(deviation, rel=1e-3)


def test_correlations_and_gaps_of_a_known_matrix() -> None:
    parameters = choose((SIZE, CORE, HOT), known(TURBOFAN))
    jacobian = np.array([[1.0, 0.0, 0.0], [0.0, 1.0, 1.0], [0.0, 1.0, 1.0], [0.0, 0.0, 1e-9]])
    ((direction, text),) = gaps(parameters, jacobian)
    assert np.abs(direction) == pytest.approx([0.0, np.sqrt(0.5), np.sqrt(0.5)], abs=1e-6)
    assert text in (f"{CORE} +0.01, {HOT} -20 K", f"{HOT} +20 K, {CORE} -0.01")
    judged = judge(parameters, np.zeros(3, dtype=bool), jacobian, 4e-4, 7)
    assert judged[0].uncertainty == pytest.approx(0.01 * parameters[0].scale)
    assert judged[0].gap == ""
    assert judged[1].gap == judged[2].gap == text
    assert judged[1].uncertainty is None
    jacobian[3, 2] = 1.0
    covariance = np.linalg.inv(jacobian.T @ jacobian)
    judged = judge(parameters, np.zeros(3, dtype=bool), jacobian, 4e-4, 7)
    assert judged[1].partner == HOT
    expected = covariance[1, 2] / np.sqrt(covariance[1, 1] * covariance[2, 2])
    assert judged[1].correlation == pytest.approx(expected)
    assert judged[2].uncertainty == pytest.approx(0.01 * 20.0 * np.sqrt(covariance[2, 2]))
    held = judge(parameters, np.array([False, True, False]), jacobian, 4e-4, 7)
    assert held[1].is_at_bound
    assert held[2].partner == SIZE


def test_data_that_say_nothing_within_the_bounds_leave_a_parameter_open() -> None:
    (core,) = choose((CORE,), known(TURBOFAN))
    (judged,) = judge([core], np.zeros(1, dtype=bool), np.array([[1e-3], [1e-3]]), 0.01, 2)
    assert judged.uncertainty == pytest.approx(0.01 * 0.1 / np.sqrt(2e-6), rel=1e-6)
    assert judged.gap == f"{CORE} +0.01"


def test_quantities_keep_their_units() -> None:
    parameters = known(turbofan_content({HOT: "2664 R"}))
    assert parameters[SIZE].written(16123.45678912) == "16.1234568 kN"
    assert parameters[HOT].written(1480.0) == "2664.0 R"
    assert parameters[CORE].written(0.8912345678912) == 0.891234568
    assert parameters[SIZE].rounded(16123.45678912) == pytest.approx(16123.4568, abs=1e-9)
    assert parameters["cooling.rotor_fraction"].start == 0.05
    isentropic = known(turbojet_content())["efficiencies.turbine"]
    assert isentropic.place == ("efficiencies", "turbine", "isentropic")


@pytest.mark.parametrize("kind", KINDS)
def test_what_may_be_free_starts_inside_its_bounds_and_can_be_written(kind: str) -> None:
    content = KINDS[kind]
    parameters = known(content)
    assert len(parameters) > 20
    for key, parameter in parameters.items():
        assert parameter.low <= parameter.start <= parameter.high, key
        middle = 0.5 * (parameter.start + min(parameter.high, 1.02 * parameter.start))
        again = known(put(content, {parameter.place: parameter.written(middle)}))
        assert again[key].start == pytest.approx(middle, rel=1e-8), key
