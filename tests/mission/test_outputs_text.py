"""Units, plain words and the grouping of what was assumed."""

from __future__ import annotations

from math import inf, nan

import pytest

from engine.quantities import parse_quantity
from mission.outputs.assumptions import assumed_by_file
from mission.outputs.page import as_text, fold, pairs
from mission.outputs.units import (
    ABSENT,
    METRIC,
    TRADE,
    Scale,
    decimals_for,
    flight_level,
    number,
    signed,
)
from mission.outputs.wording import day_in_words, hours_and_minutes, plain_characters


@pytest.mark.parametrize(
    ("value", "decimals", "expected"),
    [
        (1234.56, 1, "1,234.6"),
        (-0.04, 1, "0.0"),
        (-0.06, 1, "-0.1"),
        (0.0, 0, "0"),
        (nan, 2, ABSENT),
        (inf, 2, ABSENT),
    ],
)
def test_numbers(value: float, decimals: int, expected: str) -> None:
    assert number(value, decimals) == expected


@pytest.mark.parametrize(
    ("values", "expected"),
    [([5595.5], 0), ([559.5], 1), ([55.9, 1.0], 2), ([0.0123], 5), ([0.0], 0), ([nan, 3.0], 3)],
)
def test_decimals_give_the_greatest_value_four_digits(values: list[float], expected: int) -> None:
    assert decimals_for(values, 4) == expected


@pytest.mark.parametrize(
    ("text", "expected"), [("1.0", "+1.0"), ("-1.0", "-1.0"), ("0.00", "0.00")]
)
def test_signs(text: str, expected: str) -> None:
    assert signed(text) == expected


@pytest.mark.parametrize(
    ("unit", "written", "kind"),
    [
        (TRADE.mass, "1 lb", "mass"),
        (TRADE.distance, "1 nmi", "length"),
        (TRADE.altitude, "1 ft", "length"),
        (TRADE.speed, "1 kt", "speed"),
        (TRADE.vertical_speed, "1 ft/min", "speed"),
        (TRADE.force, "1 lbf", "force"),
        (TRADE.fuel_flow, "1 lb/h", "mass flow"),
        (TRADE.specific_fuel_consumption, "1 1/h", "specific fuel consumption"),
        (METRIC.large_mass, "1 t", "mass"),
        (METRIC.force, "1 kN", "force"),
        (METRIC.fuel_flow, "1 kg/h", "mass flow"),
        (METRIC.specific_fuel_consumption, "1 mg/N/s", "specific fuel consumption"),
        (METRIC.altitude, "100 ft", "length"),
    ],
)
def test_units_going_out_are_the_units_coming_in(unit: object, written: str, kind: str) -> None:
    """Round trip: the size of a unit shown is what the reader of input files makes of it."""
    assert unit.size == pytest.approx(parse_quantity(written, kind), rel=1e-12)  # type: ignore[attr-defined]


def test_scale_shows_value_and_unit() -> None:
    scale = Scale.of(METRIC.force, [45390.0])
    assert scale.full(45390.0) == "45.39 kN"
    assert scale.bare(1000.0) == "1.00"


@pytest.mark.parametrize(("feet", "expected"), [(0, "000"), (1500, "015"), (37000, "370")])
def test_flight_levels(feet: float, expected: str) -> None:
    assert flight_level(feet * 0.3048) == expected


@pytest.mark.parametrize(
    ("time", "expected"),
    [(59.0, "1 min"), (3600.0, "1 h 00 min"), (3599.0, "1 h 00 min"), (18138.0, "5 h 02 min")],
)
def test_hours_and_minutes(time: float, expected: str) -> None:
    assert hours_and_minutes(time) == expected


@pytest.mark.parametrize(
    ("deviation", "expected"), [(0.0, "ISA"), (10.0, "ISA+10"), (-7.5, "ISA-7.5")]
)
def test_days(deviation: float, expected: str) -> None:
    assert day_in_words(deviation) == expected


def test_a_terminal_without_the_characters_gets_plainer_ones() -> None:
    assert plain_characters("─ █▏ \u2013 2 \u00d7 é", "ascii") == "- #' - 2 x ?"
    assert plain_characters("─ █▏ é", "utf-8") == "─ █▏ é"


def test_folded_names_hang() -> None:
    assert fold("bridge to approach and landing", 20) == "bridge to approach\n  and landing"


def test_pairs_wrap_beside_their_label() -> None:
    text = as_text(pairs([("label", "one two three four")]), 16)
    assert text.splitlines() == ["label  one two", "       three", "       four"]


def test_assumed_values_are_grouped_by_file_and_owner() -> None:
    assumed = [
        "mission: headwind = 0.0",
        "mission: note = nothing",
        "mission: departure.elevation = 0.0",
        "mission: destination.elevation = 0.0",
        "mission: segment 4 out: rating = cruise",
        "mission: segment 4 out: drag_factor = 1.0",
        "mission: segment 8 home: rating = cruise",
        "mission: segment 8 home: drag_factor = 1.0",
        "engine: fuel.name = kerosene",
        "engine: fuel.lower_heating_value = 43031900.0",
        "engine: design_point.day = 0.0",
        "engine: inlet.has_standard_ram_recovery = False",
        "engine: core_nozzle.kind = convergent",
        "engine: bypass_nozzle.kind = convergent",
    ]
    assert assumed_by_file(assumed) == [
        (
            "mission",
            "headwind 0; departure and destination: elevation 0; segments 4, 8: rating cruise, "
            "drag factor 1",
        ),
        (
            "engine",
            "fuel: name kerosene, lower heating value 43.03 MJ/kg; design point: day ISA; inlet: "
            "has standard ram recovery no; core nozzle and bypass nozzle: kind convergent",
        ),
    ]


def test_an_assumption_in_other_words_is_not_lost() -> None:
    assumed = ["aircraft: limits.take_off_lift_coefficient = 1.5 (as clean)", "aircraft: guessed"]
    assert assumed_by_file(assumed) == [
        ("aircraft", "limits: take off lift coefficient 1.5 (as clean); guessed")
    ]
