"""The mission file: what is read, what is assumed and said, and what is refused."""

from __future__ import annotations

from pathlib import Path

import pytest
from mission_files import OUT_AND_DOWN, Content, mission_content, write

from engine.errors import InputRefused
from engine.quantities import KNOT, NAUTICAL_MILE
from mission.mission_file import Mission, load_mission

UP = OUT_AND_DOWN[0]


def loaded(folder: Path, content: Content) -> Mission:
    return load_mission(write(folder, "mission", content))


def test_values_come_in_si(tmp_path: Path) -> None:
    content = mission_content(
        OUT_AND_DOWN,
        distance="800 nmi",
        day="ISA-7",
        headwind="20 kt",
        departure={"elevation": "1000 ft"},
    )
    written = loaded(tmp_path, content).written
    assert written.payload == 2500.0
    assert written.distance == 800.0 * NAUTICAL_MILE
    assert written.day == -7.0
    assert written.headwind == pytest.approx(20.0 * KNOT)
    assert written.departure.elevation == pytest.approx(304.8)
    assert [part.kind for part in written.segment] == ["climb", "cruise", "descent"]


def test_what_is_not_said_is_listed(tmp_path: Path) -> None:
    said = "\n".join(loaded(tmp_path, mission_content(OUT_AND_DOWN, distance="800 nmi")).assumed)
    for expected in ("day = 0", "headwind = 0", "segment 2 cruise: holds = altitude and mach"):
        assert expected in said
    assert "segment 1 climb: name" not in said


@pytest.mark.parametrize(
    ("changes", "match"),
    [
        ({"distence": "800 nmi"}, r"distence: unknown key; did you mean distance\?"),
        ({"payload": None}, "payload.*is missing"),
        ({"payload": 2500}, r"payload: 2500 has no unit.*\"12\.5 t\""),
        ({"payload": "2500 m"}, "payload: 'm' is not a unit of mass"),
        ({"payload": "heavy"}, "payload: 'heavy' is not a number with a unit"),
        ({"payload": "-1 t"}, r"payload.*'-1 t'.*greater than or equal to 0"),
        ({"fuel": {"load": "3 t"}}, "fuel: load, to_take_off_mass and as_needed contradict"),
        ({"fuel": {"as_needed": False}}, 'fuel: give load = "9.5 t", say, or to_take_off_mass'),
        ({"fuel": {"as_needed": None, "load": "0 kg"}}, r"fuel\.load.*'0 kg'"),
        ({"fuel": {"as_needed": "yes"}}, r"fuel\.as_needed.*'yes'"),
        ({"day": "hot"}, "day: 'hot' is not a day; write for example"),
        ({"headwind": "300 kt"}, r"headwind.*'300 kt'"),
        ({"reserves": {"rul": "none"}}, r"reserves\.rul: unknown key; did you mean rule\?"),
        (
            {"reserves": {"alternate": {"distance": "100 nmi", "mach": 0.6}}},
            r"reserves\.alternate\.pressure_altitude.*is missing",
        ),
    ],
)
def test_refusals_name_the_file_and_the_key(tmp_path: Path, changes: Content, match: str) -> None:
    with pytest.raises(InputRefused, match=match) as refusal:
        loaded(tmp_path, mission_content([UP], **changes))
    assert refusal.value.where.endswith("mission.toml")


def test_a_mission_has_segments(tmp_path: Path) -> None:
    with pytest.raises(InputRefused, match=r"segment.*is missing"):
        loaded(tmp_path, mission_content([]))


def test_a_segments_refusal_counts_from_one_and_names_it(tmp_path: Path) -> None:
    bad = {"kind": "cruise", "name": "out to sea", "distance": 300}
    with pytest.raises(InputRefused, match=r'segment 2 "out to sea": distance: 300 has no unit'):
        loaded(tmp_path, mission_content([UP, bad]))


def test_text_that_is_not_toml(tmp_path: Path) -> None:
    path = tmp_path / "mission.toml"
    path.write_text("name = ", encoding="utf-8")
    with pytest.raises(InputRefused, match=r"mission\.toml: is not TOML"):
        load_mission(path)
