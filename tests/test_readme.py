"""What the README shows is what the program does."""

from __future__ import annotations

import re
import tomllib
from pathlib import Path
from typing import get_args

import pytest

from engine.options.loading import engine_from_content
from mission.aircraft import aircraft_from_content
from mission.library import find
from mission.mission_file import MissionFile, mission_from_content
from mission.reserves.registry import RULES
from mission.segments import AnySegment

ROOT = Path(__file__).parents[1]
README = (ROOT / "README.md").read_text()


def block_after(mark: str) -> str:
    """The fenced block between a mark and its end."""
    found = re.search(rf"<!-- {mark} -->\n```\n(.*?)```\n<!-- end -->", README, re.DOTALL)
    assert found, mark
    return found.group(1)


def toml_blocks() -> list[str]:
    return re.findall(r"```toml\n(.*?)```", README, re.DOTALL)


def test_the_two_commands_are_one_line_each() -> None:
    for mark in ("command: demo", "command: test"):
        assert len(block_after(mark).splitlines()) == 1


def test_the_excerpt_is_real_output(
    capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch
) -> None:
    import sys

    from mission.command_line import main

    monkeypatch.setenv("COLUMNS", "100")
    monkeypatch.setenv("NO_COLOR", "1")
    monkeypatch.setattr(sys, "argv", ["longlegs", "fly"])
    with pytest.raises(SystemExit) as ended:
        main()
    assert not ended.value.code
    printed = {line.rstrip() for line in capsys.readouterr().out.splitlines()}
    assert [line for line in block_after("excerpt: fly").splitlines() if line not in printed] == []


def test_the_aircraft_and_the_mission_can_be_copied() -> None:
    aircraft, _, mission, own_rule = toml_blocks()
    aircraft_from_content(tomllib.loads(aircraft), "README.md")
    content = tomllib.loads(mission)
    mission_from_content(content, "README.md")
    mission_from_content(content | tomllib.loads(own_rule), "README.md")


def test_every_reserve_rule_is_named() -> None:
    assert [name for name in RULES if f"`{name}`" not in README] == []


def test_every_segment_kind_is_told() -> None:
    """In the first column of the table of segments."""
    table = README.partition("The segments, by `kind`")[2].split("\n\n")[1]
    told = {
        name
        for row in re.findall(r"^\| (`.*?) \|", table, re.MULTILINE)
        for name in re.findall(r"`([^`]+)`", row)
    }
    kinds, _ = get_args(AnySegment)
    known = {get_args(table.model_fields["kind"].annotation)[0] for table in get_args(kinds)}
    assert len(known) == len(get_args(kinds))
    assert known - told == set()


def test_every_key_of_a_mission_is_told() -> None:
    """In the part about missions, as a key of an example or in its words."""
    part = README.partition("\n**Mission**")[2].partition("\n## ")[0]
    keys = [
        name
        for name in MissionFile.model_fields
        if not re.search(rf"^{name} = |^\[\[?{name}[\].]|`{name}[` ]", part, re.MULTILINE)
    ]
    assert keys == []


def test_what_is_known_goes_with_the_mission() -> None:
    mission = toml_blocks()[2]
    content = tomllib.loads(f"{mission}\n{block_after('known')}")
    known = mission_from_content(content, "README.md").written.known
    assert known is not None
    assert (known.block_fuel, known.segment[0].time) == (4300.0, 1320.0)


def test_the_engine_lacks_only_what_its_comments_stand_for() -> None:
    content = tomllib.loads(toml_blocks()[1])
    for name in ("maximum_continuous", "climb", "cruise"):
        content["ratings"][name] = content["ratings"]["take_off"]
    content["idle"]["ground"] = content["idle"]["flight"]
    assert engine_from_content(content, "README.md").name == "bypass-5 turbofan"


def test_the_python_example_runs(capsys: pytest.CaptureFixture[str]) -> None:
    code = re.findall(r"```python\n(.*?)```", README, re.DOTALL)
    assert len(code) == 1
    folder = Path(find("coast_watch", "mission")).parent
    exec(code[0].replace("longlegs/profiles", str(folder)), {})
    assert "corrected" in capsys.readouterr().out
