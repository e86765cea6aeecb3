"""Factors fitted to one known flight: recovered, judged, bounded, and by few flights."""

from __future__ import annotations

import tomllib
from collections.abc import Callable
from dataclasses import replace
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from mission_files import (
    OUT_AND_DOWN,
    PROFILES,
    Content,
    aircraft_content,
    engine_content,
    load_all,
    mission_content,
    segment,
)

from engine import load_engine
from engine.errors import InputRefused
from engine.interface import Engine
from mission.aircraft import Aircraft, load_aircraft
from mission.errors import CannotBeFlown
from mission.flight import fly
from mission.mission_file import Mission, mission_from_content
from mission.questions import fit_flight as question
from mission.questions.factor_search import MOST_FLIGHTS
from mission.questions.fit_flight import FlightFit, fit_flight
from mission.questions.told_factors import FACTORS, doubts
from mission.results import Flight

EXACT = 1e-4  # of a factor that is recovered
Case = tuple[Mission, Aircraft, Engine]
# Thrust that leaves a climb of some minutes; at idle this engine takes nothing.
ENGINE = engine_content(static_thrust="38 kN")
TRIP = mission_content(OUT_AND_DOWN, distance="700 nmi")


@pytest.fixture
def case(tmp_path: Path) -> Case:
    """The test twin on a plain trip, fuel as needed."""
    return load_all(tmp_path, aircraft_content(), ENGINE, TRIP)


@pytest.fixture
def count(monkeypatch: pytest.MonkeyPatch) -> list[Flight]:
    """Every flight that a fit flies."""
    flown: list[Flight] = []

    def counted(*words: Any) -> Flight:
        flown.append(fly(*words))
        return flown[-1]

    monkeypatch.setattr(question, "fly", counted)
    return flown


def flown_with(case: Case, drag: float, flow: float) -> Flight:
    mission, aircraft, engine = case
    flight = fly(mission, replace(aircraft, drag_factor=drag, fuel_flow_factor=flow), engine)
    assert flight.failure is None
    return flight


def with_known(case: Case, known: Content, **changes: Any) -> Case:
    """The same case with knowns in its mission's file."""
    mission, aircraft, engine = case
    content = TRIP | changes | {"known": known}
    return mission_from_content(content, mission.where), aircraft, engine


def of_climb(flight: Flight, *what: str, by: float = 1.0) -> Content:
    """Fuel, time or both of the climb of a flight, as a known."""
    log = segment(flight, "climb")
    texts = {"fuel": f"{by * log.fuel} kg", "time": f"{by * log.time} s"}
    return {"name": "climb", **{key: texts[key] for key in what}}


def block(flight: Flight, by: float = 1.0) -> str:
    return f"{by * flight.totals.block_fuel} kg"


def values(found: FlightFit) -> dict[str, float]:
    return {factor.key: factor.value for factor in found.factors}


def free(found: FlightFit) -> list[str]:
    return [factor.key for factor in found.factors if factor.is_free]


def test_factors_of_a_built_in_mission_are_recovered(count: list[Flight]) -> None:
    whole = tomllib.loads((PROFILES / "valley_feeder.toml").read_text("utf-8"))
    aircraft = load_aircraft(PROFILES / f"{whole['aircraft']}.toml")
    engine = load_engine(PROFILES / f"{whole['engine']}.toml")
    flight = flown_with((mission_from_content(whole, "k"), aircraft, engine), 1.07, 0.96)
    known = {"block_fuel": block(flight), "segment": [of_climb(flight, "time")]}
    found = fit_flight(mission_from_content(whole | {"known": known}, "k"), aircraft, engine)
    assert list(values(found).values()) == pytest.approx((1.07, 0.96), abs=EXACT)
    assert (found.flown, found.has_settled, found.held_because) == (True, True, "")
    assert len(count) == found.flights <= MOST_FLIGHTS
    assert [each.value.error for each in found.knowns] == pytest.approx([0.0, 0.0], abs=1e-5)
    assert found.knowns[0].before != pytest.approx(found.knowns[0].value.known, rel=1e-3)


@pytest.mark.parametrize("truth", [(1.07, 0.96), (0.8, 1.25), (1.3, 0.75)])
@pytest.mark.parametrize("what", [("time",), ("fuel",), ("fuel", "time")])
def test_a_fuel_and_a_climb_tell_both(
    case: Case, count: list[Flight], truth: tuple[float, float], what: tuple[str, ...]
) -> None:
    flight = flown_with(case, *truth)
    known = {"block_fuel": block(flight), "segment": [of_climb(flight, *what)]}
    found = fit_flight(*with_known(case, known))
    assert list(values(found).values()) == pytest.approx(truth, abs=EXACT)
    assert found.flights == len(count) <= MOST_FLIGHTS
    assert found.has_settled
    at_truth = doubts(np.array([known.slopes for known in found.knowns]), FACTORS)
    assert [factor.doubt for factor in found.factors] == pytest.approx(at_truth)


def test_one_fuel_tells_the_fuel_flow_factor(case: Case) -> None:
    flight = flown_with(case, 1.0, 1.2)
    found = fit_flight(*with_known(case, {"block_fuel": block(flight)}))
    assert free(found) == ["fuel_flow_factor"]
    assert values(found)["fuel_flow_factor"] == pytest.approx(1.2, abs=EXACT)
    assert values(found)["drag_factor"] == 1.0
    assert found.held_because.startswith("one known tells one factor")


def test_one_fuel_may_tell_the_drag_factor_where_that_is_asked_for(case: Case) -> None:
    flight = flown_with(case, 1.15, 1.0)
    found = fit_flight(*with_known(case, {"block_fuel": block(flight)}), ["drag_factor"])
    assert free(found) == ["drag_factor"]
    assert values(found)["drag_factor"] == pytest.approx(1.15, abs=EXACT)
    assert found.held_because == ""


def test_times_tell_drag_alone(case: Case) -> None:
    flight = flown_with(case, 1.15, 1.0)
    found = fit_flight(*with_known(case, {"segment": [of_climb(flight, "time")]}))
    assert free(found) == ["drag_factor"]
    assert values(found)["drag_factor"] == pytest.approx(1.15, abs=EXACT)
    assert found.held_because.startswith("times depend on the fuel flow through the mass alone")


def test_the_file_is_where_a_fit_starts_and_what_is_held(case: Case) -> None:
    mission, aircraft, engine = case
    flight = flown_with(case, 1.1, 1.2)
    mission, *_ = with_known(case, {"block_fuel": block(flight)})
    found = fit_flight(mission, replace(aircraft, drag_factor=1.1, fuel_flow_factor=1.19), engine)
    assert values(found)["drag_factor"] == 1.1
    assert values(found)["fuel_flow_factor"] == pytest.approx(1.2, abs=EXACT)
    assert [factor.start for factor in found.factors] == pytest.approx([1.1, 1.19])


def test_fuels_of_the_same_kind_tell_one_factor(case: Case) -> None:
    far = {"distance": "1800 nmi"}
    flight = flown_with(with_known(case, {"block_fuel": "1 t"}, **far), 1.05, 1.05)
    fuel = f"{segment(flight, 'cruise').fuel} kg"
    known = {"block_fuel": block(flight), "segment": [{"name": "cruise", "fuel": fuel}]}
    found = fit_flight(*with_known(case, known, **far))
    assert free(found) == ["fuel_flow_factor"]
    assert "tell the two factors apart" in found.held_because
    with pytest.raises(InputRefused, match=r"tell the two factors apart.*time of a climb together"):
        fit_flight(*with_known(case, known, **far), list(FACTORS))


def test_contradictions_are_met_as_nearly_as_may_be(case: Case, count: list[Flight]) -> None:
    """Three knowns that no two factors give: no factors near by do better."""
    flight = flown_with(case, 1.07, 0.96)
    known = {"block_fuel": block(flight, 1.05),
             "segment": [of_climb(flight, "fuel", "time", by=0.98)]}  # fmt: skip
    fabricated = with_known(case, known | {"trip_fuel": block(flight, 1.03)})
    found = fit_flight(*fabricated)
    assert found.has_settled
    assert found.flights == len(count) <= MOST_FLIGHTS

    def misfit(drag: float, flow: float) -> float:
        from mission.known import known_against_flown

        table = fabricated[0].written.known
        assert table is not None
        plane = replace(fabricated[1], drag_factor=drag, fuel_flow_factor=flow)
        against = known_against_flown(table, fly(fabricated[0], plane, fabricated[2]))
        return float(np.linalg.norm([np.log(v.flown / v.known) for v in against]))

    drag, flow = values(found).values()
    least = misfit(drag, flow)
    assert least == pytest.approx(
        np.linalg.norm([np.log1p(each.value.error) for each in found.knowns]), rel=1e-6
    )
    assert least > 0.01
    for other in ((1.003, 1.0), (0.997, 1.0), (1.0, 1.003), (1.0, 0.997), (1.002, 0.998)):
        assert misfit(drag * other[0], flow * other[1]) > least


def test_slopes_are_what_a_percent_of_a_factor_moves(case: Case) -> None:
    flight = flown_with(case, 1.07, 0.96)
    known = {"block_fuel": block(flight), "segment": [of_climb(flight, "time")]}
    found = fit_flight(*with_known(case, known))
    more = flown_with(case, 1.07 * 1.01, 0.96)
    assert found.knowns[0].slopes[0] == pytest.approx(
        100.0 * (more.totals.block_fuel / flight.totals.block_fuel - 1.0), rel=0.1
    )
    assert found.knowns[1].slopes[0] == pytest.approx(
        100.0 * (segment(more, "climb").time / segment(flight, "climb").time - 1.0), rel=0.1
    )


def test_a_doubt_is_how_far_a_factor_moves(case: Case) -> None:
    """The knowns moved by 1 % one after the other: the root of the sum of squares."""
    flight = flown_with(case, 1.0, 1.0)

    def fitted(by_fuel: float, by_time: float) -> FlightFit:
        climb = of_climb(flight, "time", by=by_time)
        known = {"block_fuel": block(flight, by_fuel), "segment": [climb]}
        return fit_flight(*with_known(case, known))

    at = fitted(1.0, 1.0)
    moved = [
        [100.0 * np.log(b.value / a.value) for a, b in zip(at.factors, other.factors, strict=True)]
        for other in (fitted(1.01, 1.0), fitted(1.0, 1.01))
    ]
    assert [factor.doubt for factor in at.factors] == pytest.approx(
        np.linalg.norm(moved, axis=0), rel=0.05
    )


@pytest.mark.parametrize(
    ("slopes", "keys", "expected"),
    [
        ([[1.0, 1.0], [1.0, 0.0]], FACTORS, [1.0, np.sqrt(2.0)]),
        ([[0.5, 2.0]], ("drag_factor",), [2.0]),
        ([[0.5, 2.0]], ("fuel_flow_factor",), [0.5]),
        ([[1.0, 1.0], [1.0, 1.0]], FACTORS, [np.inf, np.inf]),
        ([[1.0, 1.0]], FACTORS, [np.inf, np.inf]),
        ([[0.0, 1.0]], ("drag_factor",), [np.inf]),
    ],
)
def test_doubts_worked_by_hand(
    slopes: list[list[float]], keys: tuple[str, ...], expected: list[float]
) -> None:
    assert doubts(np.array(slopes), keys) == pytest.approx(expected)


REFUSED: list[tuple[Callable[[Flight], Content], list[str], str]] = [
    (lambda f: {"block_fuel": block(f, 3.0)}, [], r"known: asks for a fuel_flow_factor above 2, "),
    (lambda f: {"block_fuel": block(f, 0.3)}, [],
     r"fuel_flow_factor below 0.5.*off known.block_fuel by \+.*look at the units"),
    (lambda f: {"segment": [of_climb(f, "time", by=0.4)]}, [], "asks for a drag_factor below 0.5"),
    (lambda f: {"block_fuel": block(f)}, list(FACTORS), "known: one known tells one factor, and"),
    (lambda f: {"block_fuel": block(f)}, ["drag"], '--free: "drag" is no factor of an aircraft'),
    (lambda f: {"segment": [{"name": "cruise", "time": "1 h"}]}, ["fuel_flow_factor"],
     r"known: tells too little of fuel_flow_factor: 1 % of it moves no known by more than 0\.0"),
    (lambda f: {"segment": [{"name": "descent", "fuel": "40 kg"}]}, [],
     r'known.segment "descent".fuel: is 0 kg in this mission whatever the factors'),
]  # fmt: skip


@pytest.mark.parametrize(("known", "asked", "match"), REFUSED)
def test_what_is_refused_says_why(
    case: Case,
    count: list[Flight],
    known: Callable[[Flight], Content],
    asked: list[str],
    match: str,
) -> None:
    mission, aircraft, engine = with_known(case, known(flown_with(case, 1.0, 1.0)))
    with pytest.raises(InputRefused, match=match):
        fit_flight(mission, aircraft, engine, asked)
    assert len(count) <= MOST_FLIGHTS


def test_a_mission_without_knowns_is_refused(case: Case) -> None:
    with pytest.raises(InputRefused, match=r'known: is missing; it is a table.*block_fuel = "4'):
        fit_flight(*case)


def test_a_start_out_of_bounds_is_refused(case: Case) -> None:
    mission, aircraft, engine = with_known(case, {"block_fuel": "2 t"})
    with pytest.raises(InputRefused, match=r"fuel_flow_factor: = 2\.5 in the aircraft file"):
        fit_flight(mission, replace(aircraft, fuel_flow_factor=2.5), engine)


def test_a_mission_that_cannot_be_flown_at_all(case: Case, count: list[Flight]) -> None:
    mission, aircraft, engine = with_known(case, {"block_fuel": "2 t"}, distance="90 nmi")
    found = fit_flight(mission, replace(aircraft, drag_factor=1.9), engine)
    assert (found.flown, found.has_settled, found.knowns, free(found)) == (False, False, (), [])
    assert found.blocked is not None
    assert found.blocked.factors == pytest.approx((1.9, 1.0))
    assert found.blocked.flight.failure is not None
    assert found.flights == len(count) == 1


def test_knowns_that_lead_to_where_nothing_flies(case: Case, count: list[Flight]) -> None:
    """A climb ten times as long: the drag that would take leaves no climb at all."""
    case = (*case[:2], replace(case[2], density_exponent=1.3))
    flight = flown_with(case, 1.0, 1.0)
    known = {"segment": [of_climb(flight, "time", by=10.0)]}
    found = fit_flight(*with_known(case, known))
    assert not found.flown
    assert found.blocked is not None
    assert found.blocked.flight.failure is not None
    assert found.blocked.factors[0] > values(found)["drag_factor"] > 1.0
    assert found.flights == len(count) <= MOST_FLIGHTS
    assert found.knowns[0].value.flown > found.knowns[0].before


@pytest.mark.parametrize(("most", "flights"), [(0.9, 1), (1.1, MOST_FLIGHTS)])
def test_a_mission_without_a_flight_says_with_which_factors(
    case: Case, monkeypatch: pytest.MonkeyPatch, most: float, flights: int
) -> None:
    """Where a flight is refused, at the start or on the way, the refusal is handed on."""
    tried: list[float] = []

    def refusing(mission: Mission, aircraft: Aircraft, engine: Engine) -> Flight:
        tried.append(aircraft.drag_factor)
        if aircraft.drag_factor > most:
            raise CannotBeFlown("no level has a climb left")
        return fly(mission, aircraft, engine)

    flight = flown_with(case, 1.3, 1.0)
    known = {"block_fuel": block(flight), "segment": [of_climb(flight, "time")]}
    monkeypatch.setattr(question, "fly", refusing)
    with pytest.raises(CannotBeFlown, match="no level has a climb left") as refused:
        fit_flight(*with_known(case, known))
    assert len(tried) <= flights
    (note,) = refused.value.__notes__
    assert float(note.split()[3]) == pytest.approx(tried[-1], rel=1e-3)
    assert tried[-1] > most


def test_a_load_too_small_before_the_fit_is_no_hindrance(tmp_path: Path) -> None:
    """The tanks run dry with the file's factors, and do not with those that the flight had."""
    content = TRIP | {"fuel": {"load": "1.2 t"}}
    case = load_all(tmp_path, aircraft_content(), ENGINE, content)
    before = fly(*case)
    assert before.failure is not None
    assert before.failure.unit == "kg"
    flight = flown_with(case, 1.0, 0.7)
    known = {"block_fuel": block(flight)}
    found = fit_flight(*with_known(case, known, fuel={"load": "1.2 t"}))
    assert found.flown
    assert values(found)["fuel_flow_factor"] == pytest.approx(0.7, abs=EXACT)


def test_factors_with_which_a_mass_fails_are_told_with_the_reason(tmp_path: Path) -> None:
    content = TRIP | {"fuel": {"load": "1.2 t"}}
    case = load_all(tmp_path, aircraft_content(), ENGINE, content)
    found = fit_flight(*with_known(case, {"block_fuel": "1.3 t"}, fuel={"load": "1.2 t"}))
    assert found.blocked is None
    assert found.has_settled
    assert not found.flown
    assert found.flight.failure is not None
    assert "usable fuel left" in found.flight.failure.what
    assert found.knowns[0].value.error == pytest.approx(0.0, abs=1e-5)
