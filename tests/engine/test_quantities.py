"""Quantities as strings with a unit, and what is said when they are not."""

from __future__ import annotations

from math import pi

import pytest

from engine.quantities import (
    FOOT,
    KINDS,
    STANDARD_GRAVITY,
    parse_day,
    parse_quantity,
    si_unit_of,
)


@pytest.mark.parametrize(
    ("text", "kind", "value"),
    [
        ("35000 ft", "altitude", 35000 * 0.3048),
        ("FL350", "altitude", 35000 * 0.3048),
        ("fl 350", "altitude", 35000 * 0.3048),
        ("11 km", "altitude", 11000.0),
        ("-500 ft", "altitude", -152.4),
        ("1200 nmi", "distance", 1200 * 1852.0),
        ("2.1 m", "length", 2.1),
        ("12.5 t", "mass", 12500.0),
        ("1000 lb", "mass", 453.59237),
        ("450 kt", "speed", 450 * 1852.0 / 3600.0),
        ("45 kN", "force", 45000.0),
        ("10000 lbf", "force", 44482.216152605),
        ("30 min", "time", 1800.0),
        ("1.5 h", "time", 5400.0),
        ("30 bar", "pressure", 3e6),
        ("1500 K", "absolute temperature", 1500.0),
        ("2700 R", "absolute temperature", 1500.0),
        ("43.03 MJ/kg", "specific energy", 43.03e6),
        ("0.8 kg/L", "density", 800.0),
        ("120kg/s", "mass flow", 120.0),
        ("61 m**2", "area", 61.0),
        ("11000 L", "volume", 11.0),
        ("14 m**3", "volume", 14.0),
        ("16 mg/N/s", "specific fuel consumption", 16e-6),
        ("0.6 lb/h/lbf", "specific fuel consumption", 0.6 * 0.45359237 / 3600 / 4.4482216152605),
        ("0.6 1/h", "specific fuel consumption", 0.6 / 3600 / STANDARD_GRAVITY),
        ("35 deg", "angle", 35.0 * pi / 180.0),
        ("0.5 rad", "angle", 0.5),
        ("1e3 m", "length", 1000.0),
        (".5 km", "length", 500.0),
    ],
)
def test_text_with_a_unit_becomes_si(text: str, kind: str, value: float) -> None:
    # Products of exact factors: round-off.
    assert parse_quantity(text, kind) == pytest.approx(value, rel=1e-14)


@pytest.mark.parametrize("number", [35000, 35000.0, True, None, ["35000 ft"]])
def test_a_bare_number_is_refused_with_an_example(number: object) -> None:
    with pytest.raises(ValueError, match=r'has no unit: a altitude|has no unit.*"35000 ft"'):
        parse_quantity(number, "altitude")


@pytest.mark.parametrize("kind", KINDS)
def test_every_kind_shows_an_example_that_it_reads(kind: str) -> None:
    unit, example = KINDS[kind]

    assert parse_quantity(example, kind) > 0.0
    assert parse_quantity(f"1 {unit}", kind) == 1.0


@pytest.mark.parametrize(
    ("text", "kind", "said"),
    [
        ("35000 kg", "altitude", "'kg' is not a unit of altitude.*35000 ft"),
        ("35000 feet", "altitude", "'feet' is not a unit known here.*35000 ft"),
        ("FL3500", "altitude", "is not a number with a unit|is not a unit known here"),
        ("FL350", "length", "is not a number with a unit"),
        ("1500 C", "absolute temperature", "'C' is not a unit known here.*1500 K"),
        ("25 m/m", "angle", "'m/m' is not a unit of angle.*25 deg"),
        ("35000", "altitude", "'35000' is not a number with a unit"),
        ("", "mass", "'' is not a number with a unit"),
        ("ft", "altitude", "'ft' is not a number with a unit"),
        ("1 2 ft", "altitude", "is not a number with a unit"),
        ("nan ft", "altitude", "is not a number with a unit"),
        ("inf m", "length", "is not a number with a unit"),
        ("1 m; import os", "length", "is not a unit known here"),
        ("1 __import__", "length", "is not a unit known here|is not a number with a unit"),
    ],
)
def test_other_text_is_refused_and_named(text: str, kind: str, said: str) -> None:
    with pytest.raises(ValueError, match=said):
        parse_quantity(text, kind)


@pytest.mark.parametrize(
    ("text", "deviation"),
    [("ISA", 0.0), ("ISA+15", 15.0), ("ISA-10", -10.0), ("isa + 7.5 K", 7.5), ("ISA +20 C", 20.0)],
)
def test_days(text: str, deviation: float) -> None:
    assert parse_day(text) == deviation


@pytest.mark.parametrize("text", ["hot", "15", 15, "ISA15", "ISA++5", None])
def test_what_is_no_day_is_refused_with_an_example(text: object) -> None:
    with pytest.raises(ValueError, match=r"is not a day.*ISA\+15"):
        parse_day(text)


def test_flight_level_is_hundreds_of_feet() -> None:
    assert parse_quantity("FL90", "altitude") == 9000.0 * FOOT


@pytest.mark.parametrize("kind", KINDS)
def test_the_si_unit_of_a_quantity_is_that_of_its_kind(kind: str) -> None:
    unit, example = KINDS[kind]
    assert si_unit_of(example) == unit


def test_other_text_has_no_si_unit() -> None:
    assert si_unit_of("ISA+10") == si_unit_of("7 zebras") == ""
    assert si_unit_of("FL350") == "m"
