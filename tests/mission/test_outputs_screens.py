"""The comparison, the stations and the list as text."""

from __future__ import annotations

from dataclasses import replace

import pytest
from small_flight import SETTING, failed_flight, small_flight

from engine import flight_condition
from engine.cycle_engine import CycleEngine
from mission.comparison import Comparison
from mission.outputs.comparison_screen import comparison_screen, verdict
from mission.outputs.margins import least_margin, room
from mission.outputs.page import as_text
from mission.outputs.stations_screen import (
    Question,
    flag_in_words,
    is_short_of_thrust,
    stations_screen,
)
from mission.outputs.units import TRADE
from mission.outputs.wording import CAUTION, NOT_CHARGED
from mission.results import Flight, Margin

CRUISE = flight_condition(35000.0 * 0.3048, 0.78)


def burning(block_fuel: float) -> Flight:
    """The flight made up by hand with another block fuel."""
    return replace(small_flight(), totals=replace(small_flight().totals, block_fuel=block_fuel))


def compared(flights: dict[str, Flight], width: int = 100, **options: object) -> str:
    """The comparison as text."""
    comparison = Comparison("hop", "plane", flights)
    screen = comparison_screen(comparison, SETTING, width=width, **options)  # type: ignore[arg-type]
    return as_text(screen, width)


# 25 mg/(N s) all along the only cruise; 60 of 9,500 kg of landing mass left.
RANKED = """\
Options by block fuel
  engine  block fuel    more   more  time  cruise sfc  take-off  least margin
                  kg      kg      %   min    mg/(N s)   mass kg
  ----------------------------------------------------------------------------------
  small        560.0     0.0    0.0  26.7       25.00   9,940.0  landing mass: 0.6 %
  large        700.0  +140.0  +25.0  26.7       25.00   9,940.0  landing mass: 0.6 %
  Integration errors are at most 0.25 kg.
"""


def test_winner_stands_first_and_the_lost_last() -> None:
    text = compared({"small": burning(560.0), "large": burning(700.0), "lost": failed_flight()})
    # 140 of 700 kg.
    sentence = "small burns least, 560.0 kg of block fuel: 140.0 kg (20.0 %) less than large."
    assert text.splitlines()[3] == sentence
    assert RANKED in text.replace("─", "-")
    lost = text.split("Options that cannot fly it")[1]
    assert "lost  thrust at cruise rating against drag: 20.00 kN is below 25.00 kN" in lost
    assert " ".join(text.split()).endswith(f"{NOT_CHARGED} {CAUTION}")


@pytest.mark.parametrize("width", [80, 100])
def test_comparison_fits_its_screen(width: int) -> None:
    flights = {"small": burning(560.0), "large": burning(700.0), "lost": failed_flight()}
    text = compared(flights, width, units=TRADE)
    assert max(len(line) for line in text.splitlines()) <= width
    assert text.count("landing mass: 0.6 %") == 2
    assert "1,235" in text  # 560 kg in lb


def test_given_fuel_compares_what_is_left() -> None:
    setting = replace(SETTING, is_fuel_as_needed=False)
    screen = comparison_screen(Comparison("hop", "plane", {"it": small_flight()}), setting)
    text = as_text(screen, 100)
    assert "fuel left" in text
    assert "take-off" not in text


@pytest.mark.parametrize(
    ("flights", "expected"),
    [
        ({"a": failed_flight()}, "None of the options can fly it."),
        ({"a": small_flight()}, "a burns 560.0 kg of block fuel, the only option asked for."),
        ({"a": small_flight(), "b": failed_flight()},
         "a burns 560.0 kg of block fuel, the only one to fly it."),
    ],
)  # fmt: skip
def test_verdicts_without_a_second(flights: dict[str, Flight], expected: str) -> None:
    assert verdict(Comparison("hop", "plane", flights)) == expected


@pytest.mark.parametrize(
    ("value", "bound", "is_met", "expected"),
    [(1.5, 1.0, True, 0.5), (0.9, 1.0, False, -0.1), (90.0, 100.0, True, 0.1),
     (110.0, 100.0, False, -0.1), (0.0, 0.0, True, 0.0), (-2.0, 0.0, False, -2.0)],
)  # fmt: skip
def test_room_is_a_share_of_the_bound(
    value: float, bound: float, is_met: bool, expected: float
) -> None:
    assert room(Margin("it", value, bound, "", "", is_met)) == pytest.approx(expected, abs=1e-12)


def test_no_margins_no_least_one() -> None:
    assert least_margin(()) is None


def stations(engine: CycleEngine, width: int, **asked: object) -> str:
    """The stations at cruise as text."""
    rating = str(asked.get("rating", "cruise"))
    thrust = asked.get("thrust")
    state = engine.at(CRUISE, rating=rating, net_thrust=thrust)  # type: ignore[arg-type]
    question = Question(engine.name, rating, thrust)  # type: ignore[arg-type]
    return as_text(stations_screen(state, question, width=width), width)


@pytest.mark.parametrize("width", [80, 100])
def test_stations_group_the_streams_in_words(turbofan: CycleEngine, width: int) -> None:
    text = stations(turbofan, width)
    places = [text.index(title) for title in (
        "net thrust", "cold stream:", "engine face", "hot stream:", "combustor exit", "bypass:",
        "Limits", "Where the fuel's power goes", "Preliminary estimates")]  # fmt: skip
    assert places == sorted(places)
    assert max(len(line) for line in text.splitlines()) <= width
    assert "…" not in text


def test_stations_show_the_engine_state(turbofan: CycleEngine) -> None:
    state = turbofan.at_rating(CRUISE, "cruise")
    text = stations(turbofan, 100)
    row = next(line for line in text.splitlines() if "compressor delivery" in line)
    total = state.stations["3"]
    assert row.split()[3] == f"{float(total.total_temperature):,.1f}"
    assert row.split()[4] == f"{float(total.total_pressure) / 1e3:,.2f}"
    share = 100.0 * float(state.energy.thrust / state.energy.fuel)  # type: ignore[union-attr]
    row = next(line for line in text.splitlines() if "thrust power" in line)
    assert row.split()[-1] == f"{share:.2f}"


def test_the_binding_limit_is_named_with_its_neighbours(turbofan: CycleEngine) -> None:
    name = str(turbofan.at_rating(CRUISE, "cruise").binding_limit_names).replace("_", " ")
    text = stations(turbofan, 100)
    assert f"held by {name}" in text
    assert f"{name} (binds)" in text
    below = stations(
        turbofan, 100, thrust=0.5 * float(turbofan.at_rating(CRUISE, "cruise").net_thrust)
    )
    assert "no limit binds; " in below
    assert "(binds)" not in below


def test_a_thrust_beyond_the_rating_says_what_there_is(turbofan: CycleEngine) -> None:
    there = float(turbofan.at_rating(CRUISE, "climb").net_thrust)
    state = turbofan.at(CRUISE, rating="climb", net_thrust=2.0 * there)
    flag = flag_in_words(state, Question("it", "climb", 2.0 * there))
    assert flag.startswith("Beyond the rating: ")
    assert f"climb gives {there / 1e3:.2f} kN" in flag
    assert "(50.0 %)" in flag
    assert is_short_of_thrust(state)


def test_a_thrust_below_idle_says_so_and_is_no_failure(turbofan: CycleEngine) -> None:
    state = turbofan.at(CRUISE, rating="climb", net_thrust=-50e3)
    flag = flag_in_words(state, Question("it", "climb", -50e3))
    assert flag.startswith("Below idle: -50.00 kN is asked for and flight idle gives ")
    assert not is_short_of_thrust(state)


def test_a_windmilling_engine_has_no_consumption_nor_efficiency(turbofan: CycleEngine) -> None:
    screen = stations_screen(turbofan.windmilling(CRUISE), Question("it", "windmilling"))
    text = as_text(screen, 100)
    assert "as there is no positive thrust" in text
    assert "thermal" not in text
    assert "Limits" not in text
