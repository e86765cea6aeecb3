"""Every reserve rule of the registry against the quantities of its text, as transcribed here.

Times in minutes, heights in feet, distances in nautical miles, as the texts have them.
"""

from __future__ import annotations

from typing import Any

import pytest

from engine.quantities import FOOT, NAUTICAL_MILE
from mission.reserves.items import Item
from mission.reserves.registry import RULES

_UNITS = {"time": 60.0, "least_hold_time": 60.0, "height": FOOT, "distance": NAUTICAL_MILE}
ANNEX_6 = "ICAO Annex 6 Part I, 11th ed., 4.3.6.3; from memory"
OTAR = "Overseas Territories Aviation Requirements, Part 121, contingency fuel; read"
EU_OPS = "EU-OPS, Appendix 1 to OPS 1.255, 1.5 and 1.6(b); read"
AMC6 = "EASA, AMC6 CAT.OP.MPA.181 to Regulation (EU) 965/2012; read"
NBAA = "NBAA IFR reserves in the association's glossary, quoted on a pilots' forum; read"
MILITARY = "USAF practice after MIL-C-5011, four elements; from memory"
FINAL_30 = {"kind": "hold", "time": 30.0, "height": 1500.0, "above": "aerodrome"}
TO_ALTERNATE = {"kind": "alternate"}


def quantities(item: Item) -> dict[str, Any]:
    """What an item asks for, in the units of the texts, without how this program names it."""
    return {"kind": item.kind} | {
        key: round(value / _UNITS[key], 9) if key in _UNITS else value
        for key, value in vars(item).items()
        if key != "name" and value is not None and value is not False
    }


def sourced(name: str, items: list[dict[str, Any]], *sources: str) -> Any:
    return pytest.param(name, items, marks=[pytest.mark.source(s) for s in sources], id=name)


@pytest.mark.parametrize(
    ("name", "items"),
    [
        sourced(
            "14 CFR 121.639",
            [TO_ALTERNATE, {"kind": "time at cruise consumption", "time": 45.0}],
            "14 CFR 121.639 (a) to (c), fuel supply: domestic operations; read",
        ),
        sourced(
            "14 CFR 121.645(b)",
            [{"kind": "share of trip time", "share": 0.10}, TO_ALTERNATE, FINAL_30],
            "14 CFR 121.645(b)(1) to (4), flag and supplemental, turbine engines; read",
        ),
        sourced(
            "14 CFR 121.645(c)",
            [{"kind": "time at cruise consumption", "time": 120.0}],
            "14 CFR 121.645(c), released without an alternate; read",
        ),
        sourced(
            "14 CFR 91.151, day",
            [{"kind": "time at cruise consumption", "time": 30.0}],
            "14 CFR 91.151(a)(1), visual flight rules by day; read",
        ),
        sourced(
            "14 CFR 91.151, night",
            [{"kind": "time at cruise consumption", "time": 45.0}],
            "14 CFR 91.151(a)(2), visual flight rules by night; read",
        ),
        sourced(
            "14 CFR 91.167",
            [TO_ALTERNATE, {"kind": "time at cruise consumption", "time": 45.0}],
            "14 CFR 91.167(a), instrument flight rules; read",
        ),
        sourced(
            "ICAO Annex 6",
            [
                {"kind": "share of trip fuel", "share": 0.05, "least_hold_time": 5.0},
                TO_ALTERNATE,
                FINAL_30,
            ],
            ANNEX_6,
            OTAR,
            EU_OPS,
        ),
        sourced(
            "ICAO Annex 6, isolated",
            [
                {"kind": "share of trip fuel", "share": 0.05, "least_hold_time": 5.0},
                {"kind": "time at cruise consumption", "time": 120.0},
            ],
            "UK AMC7 CAT.OP.MPA.182, isolated aerodrome, final reserve included; read",
            OTAR,
        ),
        sourced(
            "EASA, 3 %",
            [
                {"kind": "share of trip fuel", "share": 0.03, "least_hold_time": 5.0},
                TO_ALTERNATE,
                FINAL_30,
            ],
            AMC6,
            EU_OPS,
        ),
        sourced(
            "EASA, 20 min",
            [
                {"kind": "time at trip consumption", "time": 20.0, "least_hold_time": 5.0},
                TO_ALTERNATE,
                FINAL_30,
            ],
            AMC6,
            EU_OPS,
        ),
        sourced(
            "business IFR",
            [
                {"kind": "hold", "time": 5.0, "height": 5000.0, "above": "sea level"},
                {"kind": "alternate", "distance": 200.0, "is_always": True},
                {"kind": "hold", "time": 30.0, "height": 5000.0, "above": "sea level"},
            ],
            NBAA,
        ),
        sourced(
            "business IFR, 100 nmi",
            [
                {"kind": "hold", "time": 5.0, "height": 5000.0, "above": "sea level"},
                {"kind": "alternate", "distance": 100.0, "is_always": True},
                {"kind": "hold", "time": 30.0, "height": 5000.0, "above": "sea level"},
            ],
            "NBAA IFR reserves, alternate of light jets; from memory",
        ),
        sourced(
            "classic military",
            [
                {"kind": "hold", "time": 20.0, "height": 0.0, "above": "sea level"},
                {"kind": "share of initial fuel", "share": 0.05},
                {"kind": "fuel-flow margin", "share": 0.05},
                {"kind": "no distance credit for descent"},
            ],
            MILITARY,
        ),
    ],
)
def test_a_rule_has_the_quantities_of_its_text(name: str, items: list[dict[str, Any]]) -> None:
    rule = RULES[name].with_alternate(None)
    assert [quantities(item) for item in rule.items] == items


@pytest.mark.source(EU_OPS)
@pytest.mark.parametrize("name", ["ICAO Annex 6", "EASA, 3 %", "EASA, 20 min"])
def test_without_an_alternate_fifteen_minutes_over_the_destination(name: str) -> None:
    _, *holds = RULES[name].without_alternate().items
    destination = {"kind": "hold", "time": 15.0, "height": 1500.0, "above": "aerodrome"}
    assert [quantities(item) for item in holds] == [
        destination | {"is_only_without_alternate": True},
        FINAL_30,
    ]


@pytest.mark.source("14 CFR 121.639 and 121.645(b)(3), an alternate where it is required; read")
@pytest.mark.parametrize("name", ["14 CFR 121.639", "14 CFR 121.645(b)", "14 CFR 91.167"])
def test_without_an_alternate_the_rest_stands(name: str) -> None:
    rule = RULES[name]
    rest = [item for item in rule.items if item.kind != "alternate"]
    assert list(rule.without_alternate().items) == rest
    assert len(rest) == len(rule.items) - 1


@pytest.mark.source("This list and the registry, each of its entries held against a text; own")
def test_no_rule_goes_unchecked() -> None:
    (mark,) = [
        m for m in test_a_rule_has_the_quantities_of_its_text.pytestmark if m.name == "parametrize"
    ]
    assert {case.id for case in mark.args[1]} == set(RULES) - {"none"}
    assert RULES["none"].items == ()
