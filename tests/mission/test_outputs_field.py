"""The part of a log on take-off and go-around, and its record, from numbers made up by hand."""

from __future__ import annotations

import json
from dataclasses import replace
from typing import Any

import pytest
from small_flight import SETTING, small_flight

from mission.field.result import ClimbCheck, FieldPerformance
from mission.outputs.field_record import field_record
from mission.outputs.field_section import field_sections
from mission.outputs.flight_log import flight_log
from mission.outputs.page import as_text
from mission.outputs.records import flight_record
from mission.outputs.units import METRIC, TRADE, Units
from tests.terminal import Longlegs

FIELD = FieldPerformance(
    take_off="take-off",
    take_off_mass=9900.0,
    pressure_altitude=304.8,
    temperature_deviation=10.0,
    v2=60.0,
    balanced_length=1219.2,
    all_engine_length=1150.0,
    runway=1524.0,
    climbs=(
        ClimbCheck("gear extended", "25.121(a)", 1, 9900.0, 60.0, -0.004, 0.0, False),
        ClimbCheck("second segment", "25.121(b)", 1, 9900.0, 60.0, 0.031, 0.024, True),
        ClimbCheck("landing climb", "25.119", 2, 9500.0, 55.0, 0.1234, 0.032, True),
    ),
    remarks=("something was left out",),
)

METRIC_TEXT = """\

Take-off and go-around
  field length  1,219 m of 1,524 m runway, enough: the balanced length governs (all engines with 15
                % added 1,150 m)
  V2            60.0 m/s calibrated, 1.2 times stall speed, at 9,900 kg off a runway at 305 m,
                ISA+10
  climb           14 CFR     engines   mass  speed  gradient  required
                             running     kg    m/s         %         %
  ─────────────────────────────────────────────────────────────────────────────
  gear extended   25.121(a)        1  9,900   60.0      -0.4   above 0  NOT MET
  second segment  25.121(b)        1  9,900   60.0       3.1       2.4  met
  landing climb   25.119           2  9,500   55.0      12.3       3.2  met
  -  something was left out
"""


def text_of(field: FieldPerformance | None, units: Units = METRIC, width: int = 100) -> str:
    return "".join(as_text(part, width) for part in field_sections(field, units, width))


def test_the_section_as_it_stands() -> None:
    assert text_of(FIELD).startswith(METRIC_TEXT)


def test_trade_units_reach_every_number() -> None:
    text = " ".join(text_of(FIELD, TRADE).split())
    # 1,219.2 m = 4,000 ft, 1,524 m = 5,000 ft, 1,150 m = 3,773 ft; 9,900 kg = 21,826 lb;
    # 60 m/s = 117 kt.
    assert "4,000 ft of 5,000 ft runway, enough" in text
    assert "3,773 ft" in text
    assert "117 kt calibrated" in text
    assert "21,826 lb off a runway at 1,000 ft" in text


@pytest.mark.parametrize(
    ("change", "said"),
    [
        ({"runway": None}, "1,219 m: the balanced length governs"),
        ({"runway": 1200.0}, "1,219 m of 1,200 m runway, NOT ENOUGH: the balanced"),
        (
            {"all_engine_length": 1300.0},
            "1,300 m of 1,524 m runway, enough: all engines with 15 % added govern (balanced "
            "1,219 m)",
        ),
        (
            {"balanced_length": None},
            "1,150 m of 1,524 m runway, enough: all engines with 15 % added V2",
        ),
        ({"balanced_length": None, "all_engine_length": None}, "field length none can be told"),
    ],
)
def test_what_is_said_of_the_length(change: dict[str, Any], said: str) -> None:
    assert said in " ".join(text_of(replace(FIELD, **change)).split())


@pytest.mark.parametrize("width", [80, 100])
@pytest.mark.parametrize("units", [METRIC, TRADE])
def test_nothing_is_wider_than_the_screen(units: Units, width: int) -> None:
    flight = replace(small_flight(), field=FIELD)
    text = as_text(flight_log(flight, SETTING, units=units, width=width), width)
    assert max(len(line) for line in text.splitlines()) <= width
    assert text.index("\nMargins\n") < text.index("\nTake-off and go-around\n")


def test_a_flight_without_take_off_has_no_such_part() -> None:
    assert field_sections(None, METRIC, 100) == []
    assert flight_record(small_flight())["field"] == {}


def test_the_record_has_its_units() -> None:
    record = flight_record(replace(small_flight(), field=FIELD))["field"]
    assert record == json.loads(json.dumps(record, allow_nan=False))
    climb = record["climbs"].pop(0)
    assert climb == {
        "name": "gear extended", "rule": "14 CFR 25.121(a)", "engines_running": 1,
        "mass_kg": 9900.0, "calibrated_airspeed_m_per_s": 60.0, "gradient": -0.004,
        "required_gradient": 0.0, "is_met": False,
    }  # fmt: skip
    assert [climb["name"] for climb in record.pop("climbs")] == ["second segment", "landing climb"]
    assert record == {
        "take_off": "take-off", "take_off_mass_kg": 9900.0, "pressure_altitude_m": 304.8,
        "temperature_deviation_k": 10.0, "v2_calibrated_airspeed_m_per_s": 60.0,
        "field_length_m": 1219.2, "balanced_field_length_m": 1219.2,
        "all_engine_field_length_m": 1150.0, "runway_m": 1524.0, "governed_by": "balanced",
        "remarks": ["something was left out"],
    }  # fmt: skip


def test_a_length_that_is_not_has_no_key() -> None:
    record = field_record(replace(FIELD, balanced_length=None, runway=None))
    assert "balanced_field_length_m" not in record
    assert "runway_m" not in record
    assert (record["field_length_m"], record["governed_by"]) == (1150.0, "all engines")


def test_the_demo_tells_its_runway(longlegs: Longlegs) -> None:
    run = longlegs("fly", "--json", "flight.json")
    assert run.status == 0
    assert "Take-off and go-around" in run.out
    with open("flight.json", encoding="utf-8") as file:
        record = json.load(file)
    field = record["field"]
    # A twin of its loading and thrust: between the shortest and the longest of its class.
    assert 1000.0 < field["field_length_m"] < 1700.0
    assert all(climb["is_met"] for climb in field["climbs"])
    margin = next(m for m in record["margins"] if m["name"] == "take-off field length")
    assert margin["value"] == pytest.approx(field["field_length_m"])
    assert margin["bound"] == field["runway_m"] == 1800.0
