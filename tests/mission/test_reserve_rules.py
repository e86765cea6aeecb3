"""Reserve rules as written: chosen by name or made of items, what is missing refused."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path
from typing import Any

import pytest
from mission_files import (
    ALTERNATE,
    CONTINGENCY,
    OUT_AND_DOWN,
    TO_ALTERNATE,
    Content,
    final_reserve,
    fly_files,
    mission_content,
    write,
)
from small_flight import SETTING, small_flight

from engine.errors import InputRefused
from engine.quantities import NAUTICAL_MILE
from mission.mission_file import load_mission
from mission.outputs.flight_log import flight_log
from mission.outputs.list_screen import list_screen
from mission.outputs.page import as_text
from mission.outputs.records import flight_record
from mission.reserves.items import Alternate
from mission.reserves.registry import GOVERNS, RULES
from mission.reserves.tables import ReservesTable

WAY = {key: value for key, value in ALTERNATE.items() if key != "distance"}
MARGIN: Content = {"kind": "fuel-flow margin", "share": 0.05}


def reserves(folder: Path, table: Content) -> ReservesTable:
    content = mission_content(OUT_AND_DOWN, distance="800 nmi", reserves=table)
    return load_mission(write(folder, "mission", content)).written.reserves


@pytest.mark.parametrize(
    ("table", "match"),
    [
        ({"rule": "ICAO Annex 5"}, r'"ICAO Annex 5" is no rule known here; did you mean "ICAO A'),
        ({"rule": "a guess"}, 'Rules: "none", "14 CFR 121.639"'),
        ({"rule": "none", "item": [CONTINGENCY]}, "give either rule or items, not both"),
        ({"rule": "none", "title": "mine"}, "title goes with items of your own"),
        (
            {"rule": "14 CFR 121.639"},
            r'"14 CFR 121.639" flies to an alternate: add \[reserves.alternate\] with distance, '
            "pressure_altitude, mach and calibrated_airspeed, or alternate_required = false",
        ),
        ({"rule": "business IFR"}, "distance is the rule's, 200 nmi$"),
        ({"rule": "business IFR", "alternate_required": False}, "always flies to an alternate"),
        ({"rule": "business IFR", "alternate": ALTERNATE}, "has its own distance, 200 nmi: leave"),
        ({"rule": "ICAO Annex 6", "alternate": WAY}, 'needs alternate.distance = "150 nmi", say'),
        (
            {"rule": "ICAO Annex 6", "alternate": ALTERNATE, "alternate_required": False},
            "contradict each other",
        ),
        ({"rule": "classic military", "alternate": ALTERNATE}, "flies to no alternate: leave out"),
        ({"alternate": ALTERNATE}, 'the rule "none" flies to no alternate'),
        ({"rule": "none", "alternate_required": False}, "flies to no alternate"),
        ({"item": [TO_ALTERNATE]}, 'the rule "own rule" flies to an alternate'),
        ({"item": [CONTINGENCY, CONTINGENCY]}, 'two items are named "contingency"'),
        ({"item": [MARGIN, MARGIN | {"name": "more"}]}, 'two items of kind "fuel-flow margin"'),
        (
            {
                "item": [
                    {"kind": "share of initial fuel", "share": 0.6},
                    {"kind": "share of initial fuel", "share": 0.4, "name": "more"},
                ]
            },
            "shares of initial fuel add up to 1",
        ),
        (
            {
                "item": [
                    final_reserve("5 min"),
                    final_reserve("4 min") | {"name": "b"},
                    TO_ALTERNATE,
                ],
                "alternate": ALTERNATE,
            },
            "two holds stand before the alternate",
        ),
        ({"item": [{"share": 0.05}]}, "'kind' is missing; allowed: 'share of trip fuel', "),
        ({"item": [{"kind": "holding"}]}, "'kind' = 'holding'; allowed: .*did you mean hold"),
        ({"item": [{"kind": "hold", "time": "9 min", "above": "aerodrome"}]}, "height: is missing"),
        ({"item": [CONTINGENCY | {"share": 5}]}, "share: = 5; it should be less than 1"),
        ({"item": [CONTINGENCY | {"time": "5 min"}]}, "time: unknown key"),
        ({"item": [final_reserve("30 min") | {"above": "land"}]}, "allowed: 'aerodrome' or 'sea l"),
    ],
)  # fmt: skip
def test_refusals_say_what_to_do(tmp_path: Path, table: Content, match: str) -> None:
    with pytest.raises(InputRefused, match=match) as refusal:
        reserves(tmp_path, table)
    assert refusal.value.where.endswith("mission.toml")
    assert refusal.value.key.startswith("reserves")


def test_without_a_word_there_are_no_reserves(tmp_path: Path) -> None:
    assert reserves(tmp_path, {}).rule_in_force == RULES["none"]


def test_a_rule_takes_its_alternate_from_the_mission(tmp_path: Path) -> None:
    table = reserves(tmp_path, {"rule": "14 CFR 91.167", "alternate": ALTERNATE})
    (alternate, _) = table.rule_in_force.items
    assert alternate == Alternate(180.0 * NAUTICAL_MILE)


# The registry's items in the words of a mission file.
OWN: dict[str, list[Content]] = {
    "14 CFR 121.639": [TO_ALTERNATE, {"kind": "time at cruise consumption", "time": "45 min"}],
    "14 CFR 121.645(b)": [
        {"kind": "share of trip time", "share": 0.1}, TO_ALTERNATE, final_reserve("30 min"),
    ],
    "ICAO Annex 6": [
        CONTINGENCY | {"least_hold_time": "5 min"}, TO_ALTERNATE, final_reserve("30 min"),
    ],
    "EASA, 20 min": [
        {"kind": "time at trip consumption", "time": "20 min", "least_hold_time": "5 min"},
        TO_ALTERNATE,
        final_reserve("30 min"),
    ],
    "classic military": [
        {"kind": "hold", "time": "20 min", "height": "0 ft", "above": "sea level"},
        {"kind": "share of initial fuel", "share": 0.05},
        MARGIN,
        {"kind": "no distance credit for descent"},
    ],
}  # fmt: skip


@pytest.mark.parametrize("name", OWN)
def test_an_own_rule_of_the_same_items_is_the_same(tmp_path: Path, name: str) -> None:
    has_way = TO_ALTERNATE in OWN[name]
    way = {"alternate": ALTERNATE} if has_way else {}
    tables: list[Content] = [{"rule": name, **way}, {"item": OWN[name], "title": "mine", **way}]
    ours, theirs = (reserves(tmp_path, table).rule_in_force for table in tables)
    assert ours.items == theirs.items
    assert (theirs.name, theirs.citation) == ("mine", "")
    if name in ("ICAO Annex 6", "classic military"):
        one, other = (
            fly_files(
                tmp_path, mission=mission_content(OUT_AND_DOWN, distance="800 nmi", reserves=table)
            )
            for table in tables
        )
        assert one.totals == other.totals
        assert one.reserves == other.reserves


# --- Shown --------------------------------------------------------------------------------------


def shown(**changes: Any) -> str:
    """The reserves of a flight in the log, as one line of words."""
    text = as_text(flight_log(replace(small_flight(), **changes), SETTING, width=100), 100)
    return " ".join(text.split("\nReserves\n")[1].split("\nTotals\n")[0].split())


def test_the_log_cites_the_rule() -> None:
    rule = RULES["ICAO Annex 6"]
    text = shown(reserve_rule=rule)
    assert text.startswith(f"ICAO Annex 6: {rule.title}")
    assert f"{rule.citation}. {GOVERNS}" in text
    assert "all reserves 640.0" in text
    assert "holds on a standard day; here they are flown on the mission's" in text
    assert "standard day" not in shown(reserve_rule=RULES["14 CFR 121.639"])


def test_a_fuel_flow_margin_has_a_line_below_what_is_kept() -> None:
    text = shown(reserve_rule=RULES["classic military"], fuel_flow_margin=26.7)
    line = "fuel-flow margin 26.7 5 % on every fuel flow, burnt inside block fuel"
    assert f"all reserves 640.0 {line}" in text
    assert "No distance credit for descent:" in text


def test_no_rule_and_an_own_one() -> None:
    assert shown(reserve_rule=RULES["none"]) == "none asked for"
    own = replace(RULES["14 CFR 91.151, day"], name="mine", title="", citation="")
    text = shown(reserve_rule=own)
    assert text.startswith("mine reserve fuel")
    assert GOVERNS not in text


def test_a_record_tells_rule_citation_and_items(tmp_path: Path) -> None:
    mission = mission_content(
        OUT_AND_DOWN, distance="800 nmi", reserves={"rule": "ICAO Annex 6", "alternate": ALTERNATE}
    )
    record = flight_record(fly_files(tmp_path, mission=mission))["reserve_rule"]
    assert record["rule"] == "ICAO Annex 6"
    assert record["citation"] == RULES["ICAO Annex 6"].citation
    assert record["fuel_flow_margin_kg"] == 0.0
    assert record["items"] == [
        {
            "kind": "share of trip fuel", "share": 0.05, "least_hold_time_s": 300.0,
            "name": "contingency",
        },
        {"kind": "alternate", "distance_m": 180.0 * NAUTICAL_MILE, "name": "alternate"},
        {
            "kind": "hold", "time_s": 1800.0, "height_m": pytest.approx(457.2),
            "above": "aerodrome", "name": "final reserve",
        },
    ]  # fmt: skip


def test_a_hold_at_sea_level_has_a_height(tmp_path: Path) -> None:
    mission = mission_content(
        OUT_AND_DOWN, distance="800 nmi", reserves={"rule": "classic military"}
    )
    record = flight_record(fly_files(tmp_path, mission=mission))["reserve_rule"]
    assert record["items"][0]["height_m"] == 0.0
    assert record["fuel_flow_margin_kg"] > 0.0


def test_the_list_names_every_rule() -> None:
    text = " ".join(as_text(list_screen([]), 80).split())
    for rule in RULES.values():
        assert f"{rule.name} {rule.title}" in text
