"""Every reserve rule on a built-in mission: mass is kept and all fuel accounted for."""

from __future__ import annotations

from itertools import pairwise
from typing import Any

import pytest
from mission_files import PROFILES

from engine import load_engine
from engine.quantities import NAUTICAL_MILE
from engine.reading import read_toml
from mission.aircraft import load_aircraft
from mission.flight import fly
from mission.mission_file import mission_from_content
from mission.reserves.items import Alternate, Hold, NoDescentCredit, alternate_of
from mission.reserves.registry import RULES
from mission.results import Flight

CASES = [*((name, True) for name in RULES), ("14 CFR 121.645(b)", False), ("ICAO Annex 6", False)]


def reserves(name: str, *, is_alternate_required: bool) -> dict[str, Any]:
    _, alternate = alternate_of(RULES[name].items)
    if alternate is None:
        return {"rule": name}
    if not is_alternate_required:
        return {"rule": name, "alternate_required": False}
    way: dict[str, Any] = dict(read_toml(PROFILES / "coast_watch.toml")["reserves"]["alternate"])
    if alternate.distance is not None:
        del way["distance"]
    return {"rule": name, "alternate": way}


@pytest.fixture(scope="module", params=CASES, ids=lambda case: f"{case[0]}, {case[1]}")
def flown(request: pytest.FixtureRequest) -> Flight:
    name, is_required = request.param
    content = read_toml(PROFILES / "coast_watch.toml")
    content["reserves"] = reserves(name, is_alternate_required=is_required)
    flight = fly(
        mission_from_content(content, "coast_watch.toml"),
        load_aircraft(PROFILES / "coast_watch_twin.toml"),
        load_engine(PROFILES / "bypass_5.toml"),
    )
    assert flight.failure is None
    assert flight.reserve_rule.name == name
    return flight


def test_mass_is_kept(flown: Flight) -> None:
    slack = 1e-12 * flown.totals.takeoff_mass
    for log in flown.segments:
        assert abs(log.mass_start - log.mass_end - log.fuel) <= slack, log.name
    for before, after in pairwise(flown.segments):
        assert abs(before.mass_end - after.mass_start) <= slack, after.name


def test_all_fuel_is_accounted_for(flown: Flight) -> None:
    total = flown.totals
    kept = {line.item: line.fuel for line in flown.reserves}
    assert total.reserve_fuel == pytest.approx(sum(kept.values()), rel=1e-12, abs=1e-9)
    assert total.fuel_left == pytest.approx(total.reserve_fuel, rel=1e-9, abs=1e-6)
    assert total.loaded_fuel == pytest.approx(total.block_fuel + total.fuel_left, rel=1e-12)
    # After the reserve flight just what is priced and carried is left.
    items = flown.reserve_rule.items
    carried = [
        kept[item.name]
        for item in items
        if item.name in kept and not isinstance(item, Hold | Alternate)
    ]
    assert flown.segments[-1].fuel_left == pytest.approx(sum(carried), rel=1e-9, abs=1e-6)


def test_each_reserve_costs_less_than_itself(flown: Flight) -> None:
    for line in flown.reserves:
        assert 0.0 < line.carriage_cost < line.fuel, line.item


def test_distances_are_covered(flown: Flight) -> None:
    assert flown.totals.ground_distance == pytest.approx(640.0 * NAUTICAL_MILE, rel=1e-9)
    _, alternate = alternate_of(flown.reserve_rule.items)
    if alternate is not None:
        assert alternate.distance is not None
        way = sum(log.ground_distance for log in flown.segments if log.purpose == "reserve")
        assert way == pytest.approx(alternate.distance, rel=1e-9)
    is_credited = not any(isinstance(i, NoDescentCredit) for i in flown.reserve_rule.items)
    for log in flown.segments:
        if log.kind == "descent":
            assert (log.ground_distance > 0.0) == is_credited
