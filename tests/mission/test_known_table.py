"""What is known of a mission: read from its file, set against a flight, refused where it cannot."""

from __future__ import annotations

from pathlib import Path

import pytest
from mission_files import OUT_AND_DOWN, Content, fly_files, mission_content, segment, write

from engine.errors import InputRefused
from mission.known import known_against_flown
from mission.mission_file import Mission, load_mission
from mission.outputs.known_words import against_flown
from mission.outputs.units import TRADE

TWO_CRUISES = [*OUT_AND_DOWN[:1], {"kind": "cruise", "distance": "90 nmi"}, *OUT_AND_DOWN[1:]]
CLIMB = {"name": "climb", "time": "20 min"}


def content(known: Content, segments: list[Content] | None = None) -> Content:
    return mission_content(segments or OUT_AND_DOWN, distance="700 nmi", known=known)


def loaded(folder: Path, known: Content, segments: list[Content] | None = None) -> Mission:
    return load_mission(write(folder, "mission", content(known, segments)))


def test_knowns_come_in_si_and_are_no_assumptions(tmp_path: Path) -> None:
    known = {"block_fuel": "2.1 t", "segment": [{"name": "climb", "fuel": "800 lb", **CLIMB}]}
    mission = loaded(tmp_path, known)
    table = mission.written.known
    assert table is not None
    assert (table.block_fuel, table.trip_fuel) == (2100.0, None)
    assert table.segment[0].time == 1200.0
    assert table.segment[0].fuel == pytest.approx(362.873896)
    assert not any("known" in line for line in mission.assumed)


@pytest.mark.parametrize(
    ("known", "match"),
    [
        ({}, r"known: is empty; give block_fuel = "),
        ({"blok_fuel": "2 t"}, r"known\.blok_fuel: unknown key; did you mean block_fuel\?"),
        ({"block_fuel": 2100}, r"known\.block_fuel: 2100 has no unit"),
        ({"block_fuel": "0 kg"}, r"known\.block_fuel.*'0 kg'"),
        ({"trip_fuel": "20 min"}, "known.trip_fuel: 'min' is not a unit of mass"),
        ({"segment": [{"name": "climb"}]}, r'known.segment 1 "climb": give fuel = "670 kg"'),
        ({"segment": [{"time": "20 min"}]}, r"known.segment 1: name: is missing"),
        ({"segment": [{"name": "clim", "time": "9 min"}]},
         r'known: "clim" is the name of no segment; there are climb, cruise, descent'),
        ({"segment": [CLIMB, CLIMB]}, r'known: two \[\[known.segment\]\] are named "climb"'),
    ],
)  # fmt: skip
def test_what_cannot_be_known_is_refused(tmp_path: Path, known: Content, match: str) -> None:
    with pytest.raises(InputRefused, match=match):
        loaded(tmp_path, known)


def test_a_name_that_two_segments_bear_is_refused(tmp_path: Path) -> None:
    known = {"segment": [{"name": "cruise", "fuel": "1 t"}]}
    with pytest.raises(InputRefused, match='"cruise" is the name of 2 segments; give the one'):
        loaded(tmp_path, known, TWO_CRUISES)
    loaded(tmp_path, {"segment": [CLIMB]}, TWO_CRUISES)


def test_a_wrong_segment_is_told_before_what_is_known_of_it(tmp_path: Path) -> None:
    with pytest.raises(InputRefused, match=r"toml: segment 1:.*35000 has no unit"):
        loaded(tmp_path, {"segment": [CLIMB]}, [{"kind": "climb", "to": 35000}])


def test_knowns_change_nothing_that_is_flown(tmp_path: Path) -> None:
    segments = [{"name": "descent", "time": "9 min"}, {"name": "climb", "fuel": "400 kg"}]
    known = {"trip_fuel": "2 t", "block_fuel": "2.2 t", "segment": segments}
    plain = fly_files(tmp_path, mission=content(known) | {"known": {"block_fuel": "1 t"}})
    flight = fly_files(tmp_path, mission=content(known))
    assert flight.totals == plain.totals
    table = loaded(tmp_path, known).written.known
    assert table is not None
    values = known_against_flown(table, flight)
    assert [(v.key, v.unit, v.known) for v in values] == [
        ("known.block_fuel", "kg", 2200.0),
        ("known.trip_fuel", "kg", 2000.0),
        ('known.segment "descent".time', "s", 540.0),
        ('known.segment "climb".fuel', "kg", 400.0),
    ]
    climb, descent = segment(flight, "climb"), segment(flight, "descent")
    total = flight.totals
    assert [v.flown for v in values] == [
        total.block_fuel, total.trip_fuel, descent.time, climb.fuel]  # fmt: skip
    assert values[0].error == pytest.approx(total.block_fuel / 2200.0 - 1.0)
    text = against_flown(values, TRADE)
    assert text.startswith(f"block fuel 4,850 lb, flown {total.block_fuel / 0.45359237:,.0f} (")
    assert f"time of descent 9.00 min, flown {descent.time / 60.0:.2f} (" in text
