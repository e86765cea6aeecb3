"""JSON records: the shape that programs rely on, no number that is none, and safe writing."""

from __future__ import annotations

import json
from collections.abc import Iterator
from dataclasses import replace
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from small_flight import failed_flight, overloaded_flight, small_flight

from engine import InputRefused, flight_condition
from engine.cycle_engine import CycleEngine
from mission.comparison import Comparison
from mission.outputs.files import check_target, json_text, write_text
from mission.outputs.records import comparison_record, flight_record, stations_record

TOTALS = {
    "block_fuel_kg", "carbon_dioxide_kg", "trip_fuel_kg", "reserve_fuel_kg", "loaded_fuel_kg",
    "fuel_left_kg", "fuel_margin_kg", "block_time_s", "trip_time_s", "ground_distance_m",
    "air_distance_m", "ramp_mass_kg", "takeoff_mass_kg", "landing_mass_kg", "integration_error",
}  # fmt: skip
SEGMENT = {
    "name", "kind", "purpose", "fuel_kg", "time_s", "ground_distance_m", "mass_start_kg",
    "mass_end_kg", "mass_released_kg", "mass_received_kg", "steps", "held_by", "leg",
}  # fmt: skip
STEPS = {
    "elapsed_time_s", "pressure_altitude_m", "mach", "mass_kg", "lift_n", "weight_n", "drag_n",
    "thrust_n", "fuel_flow_kg_per_s", "flight_path_angle_rad",
}  # fmt: skip
FLIGHT = {
    "format", "version", "mission", "aircraft", "engine", "fuel", "day", "flown", "totals",
    "solved", "segments", "reserves", "reserve_rule", "cross_check", "margins", "field", "assumed",
    "warnings", "failure",
}  # fmt: skip
# Cruise at flight level 350 and Mach 0.78 of the engine that all engine tests share.
CRUISE = flight_condition(35000.0 * 0.3048, 0.78)


def round_trip(record: dict[str, Any]) -> dict[str, Any]:
    """A record through its text; a constant such as NaN in it fails."""

    def refuse(constant: str) -> None:
        raise AssertionError(f"{constant} is no number")

    read: dict[str, Any] = json.loads(json_text(record), parse_constant=refuse)
    return read


def nulls(value: Any, path: str = "") -> Iterator[str]:
    """Where a record holds a null."""
    if value is None:
        yield path
    items = value.items() if isinstance(value, dict) else ()
    for key, inner in [*items, *(enumerate(value) if isinstance(value, list) else ())]:
        yield from nulls(inner, f"{path}.{key}".lstrip("."))


def test_a_flight_has_the_agreed_shape() -> None:
    record = round_trip(flight_record(small_flight()))
    assert set(record) == FLIGHT
    assert (record["format"], record["version"], record["flown"]) == ("longlegs-flight", 1, True)
    assert set(record["totals"]) == TOTALS
    assert all(set(segment) == SEGMENT for segment in record["segments"])
    assert all(set(segment["steps"]) == STEPS for segment in record["segments"])
    assert [segment["purpose"] for segment in record["segments"]] == [
        "mission",
        "mission",
        "reserve",
    ]
    assert record["reserves"][0] == {
        "item": "contingency",
        "fuel_kg": 280.0,
        "carriage_cost_kg": 4.0,
    }
    assert record["margins"][1] == {
        "name": "landing mass", "value": 9440.0, "bound": 9500.0, "unit": "kg", "where": "",
        "is_met": True,
    }  # fmt: skip
    assert record["day"] == "ISA+10"
    assert list(nulls(record)) == ["failure"]


def test_causes_add_up_to_the_difference() -> None:
    for check in flight_record(small_flight())["cross_check"]:
        difference = check["integrated_fuel_kg"] - check["breguet_fuel_kg"]
        assert sum(check["causes"].values()) == pytest.approx(difference, abs=1e-12)
        assert all(key.endswith("_kg") for key in check["causes"])


def test_a_failed_flight_ends_where_it_failed() -> None:
    record = round_trip(flight_record(failed_flight()))
    assert record["flown"] is False
    assert [segment["name"] for segment in record["segments"]] == ["taxi", "long cruise"]
    cut = record["segments"][-1]
    assert (cut["fuel_kg"], cut["time_s"], cut["ground_distance_m"]) == (250.0, 500.0, 100e3)
    assert cut["steps"]["mass_kg"] == [9940.0, 9690.0]
    assert record["failure"] == {
        "segment": "long cruise", "step": 1, "what": "thrust at cruise rating against drag",
        "value": 20000.0, "bound": 25000.0, "unit": "N", "advice": "fly lower",
    }  # fmt: skip
    assert list(nulls(record)) == []


def test_a_mass_that_fails_before_the_start_leaves_all_segments() -> None:
    record = flight_record(overloaded_flight())
    assert record["flown"] is False
    assert len(record["segments"]) == 3


def test_a_value_that_is_no_number_is_never_written() -> None:
    flight = replace(small_flight(), totals=replace(small_flight().totals, block_fuel=np.nan))
    with pytest.raises(ValueError, match="Out of range float values"):
        json_text(flight_record(flight))


def test_a_comparison_ranks_and_keeps_what_was_lost() -> None:
    thirsty = replace(
        small_flight(), totals=replace(small_flight().totals, block_fuel=700.0), engine="other"
    )
    comparison = Comparison(
        "hop", "plane", {"best": small_flight(), "worse": thirsty, "lost": failed_flight()}
    )
    record = round_trip(comparison_record(comparison))
    assert (record["format"], record["best"]) == ("longlegs-comparison", "best")
    assert [option["option"] for option in record["options"]] == ["best", "worse", "lost"]
    assert [option.get("difference_to_best_kg") for option in record["options"]] == [0, 140, None]
    assert record["options"][0]["binding_margin"]["name"] == "landing mass"
    lost = record["options"][2]
    assert set(lost) == {"option", "engine", "flown", "failure"}
    assert lost["failure"]["segment"] == "long cruise"


@pytest.mark.parametrize("rating", ["take_off", "cruise", "flight_idle"])
def test_stations_close_their_energy_account(turbofan: CycleEngine, rating: str) -> None:
    record = round_trip(
        stations_record(turbofan.at_rating(CRUISE, rating), turbofan, rating=rating)
    )
    terms = dict(record["energy"])
    fuel = terms.pop("fuel_w")
    # Round-off of sums whose largest terms are the jets' heat, about half of the fuel's power.
    assert sum(terms.values()) == pytest.approx(fuel, rel=1e-9)
    assert list(record["stations"])[:2] == ["0", "2"]
    assert record["stations"]["4"]["total_temperature_k"] == record["turbine_entry_temperature_k"]
    assert set(record["efficiencies"]) == {"thermal", "propulsive", "overall"}
    assert record["outcome"] == "met"
    assert max(record["limit_shares"].values()) <= 1.0 + 1e-6 or rating == "flight_idle"


def test_without_thrust_there_is_no_consumption(turbofan: CycleEngine) -> None:
    record = round_trip(
        stations_record(turbofan.windmilling(CRUISE), turbofan, rating="windmilling")
    )
    assert record["thrust_n"] < 0.0
    assert list(nulls(record)) == ["specific_fuel_consumption_kg_per_n_s"]
    assert record["binding_limit"] == "none"


def test_writing_replaces_the_old_file_and_leaves_nothing_beside(tmp_path: Path) -> None:
    target = tmp_path / "flight.json"
    target.write_text("old")
    write_text(str(target), "new")
    assert target.read_text() == "new"
    assert list(tmp_path.iterdir()) == [target]


def test_a_write_that_fails_keeps_the_old_file(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    target = tmp_path / "flight.json"
    target.write_text("old")

    def fail(self: Path, other: Path) -> Path:
        raise OSError("disk full")

    monkeypatch.setattr(Path, "replace", fail)
    with pytest.raises(InputRefused, match="disk full"):
        write_text(str(target), "new")
    assert target.read_text() == "old"
    assert list(tmp_path.iterdir()) == [target]


def test_a_link_is_written_through(tmp_path: Path) -> None:
    target, link = tmp_path / "flight.json", tmp_path / "link.json"
    target.write_text("old")
    link.symlink_to(target)
    write_text(str(link), "new")
    assert link.is_symlink()
    assert target.read_text() == "new"


def test_targets_that_cannot_be_written_are_refused(tmp_path: Path) -> None:
    with pytest.raises(InputRefused, match="is a folder; name a file in it"):
        check_target(str(tmp_path))
    with pytest.raises(InputRefused, match=r'--json: there is no folder ".*nowhere" to write "x"'):
        check_target(str(tmp_path / "nowhere" / "x"))
