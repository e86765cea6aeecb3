"""``longlegs fit AIRCRAFT --flight``: the screen, the record, the statuses, and what is refused."""

from __future__ import annotations

import json
import re
import tomllib
from pathlib import Path

import pytest
from mission_files import OUT_AND_DOWN, Content, aircraft_content, engine_content, write

from mission.aircraft import load_aircraft
from mission.outputs.wording import CAUTION
from tests.terminal import Longlegs, Run, read_json

ENGINE = engine_content(static_thrust="38 kN")
BOTH: Content = {"block_fuel": "1520 kg", "segment": [{"name": "climb", "time": "7 min"}]}


def known(folder: Path = Path(), **table: object) -> None:
    """An aircraft, an engine, and a mission with what is known of it."""
    write(folder, "plane", aircraft_content())
    write(folder, "power", ENGINE)
    mission = {"name": "run home", "payload": "2.5 t", "engine": "power", "distance": "700 nmi",
               "aircraft": "plane", "fuel": {"as_needed": True}, "known": table}  # fmt: skip
    write(folder, "known", {**mission, "segment": OUT_AND_DOWN})


def told(run: Run) -> str:
    return " ".join(run.out.split())


@pytest.mark.parametrize("columns", [80, 100])
def test_the_screen_gives_lines_for_the_file_and_its_doubt(
    longlegs: Longlegs, monkeypatch: pytest.MonkeyPatch, columns: int
) -> None:
    monkeypatch.setenv("COLUMNS", str(columns))
    known(**BOTH)
    run = longlegs("fit", "plane", "--flight", "known.toml")
    assert (run.status, run.err) == (0, "")
    lines = run.out.splitlines()
    assert max(map(len, lines)) <= columns
    assert lines[0] == "run home"
    assert lines[1] == "test twin with constant consumption: 2 factors fitted to 2 knowns"
    assert "the 2 knowns come out, at worst" in told(run)
    assert [
        line for line in lines if re.fullmatch(r"  time of climb +min +7\.000 .* 0\.00 .*", line)
    ]
    assert "The factors take up every other error too" in told(run)
    assert told(run).endswith(CAUTION)


def test_the_lines_pasted_into_the_file_make_the_flight_come_out(longlegs: Longlegs) -> None:
    known(**BOTH)
    before = longlegs("fly", "known.toml")
    assert re.search(r"known +block fuel 1,520 kg, flown 1,3\d\d \(-\d", before.out)
    assert "time of climb 7.000 min, flown 6." in told(before)
    run = longlegs("fit", "plane", "--flight", "known.toml")
    pasted = "\n".join(re.findall(r"^  (\w+_factor = [\d.]+)$", run.out, re.MULTILINE))
    assert set(tomllib.loads(pasted)) == {"drag_factor", "fuel_flow_factor"}
    plane = Path("plane.toml")
    plane.write_text(pasted + "\n" + plane.read_text("utf-8"), encoding="utf-8")
    assert load_aircraft(plane).drag_factor > 1.05
    after = longlegs("fly", "known.toml")
    assert "block fuel 1,520 kg, flown 1,520 (0.00 %); " in told(after)
    assert "time of climb 7.000 min, flown 7.000 (0.00 %)" in told(after)


def test_fly_says_nothing_of_knowns_where_there_are_none(longlegs: Longlegs) -> None:
    known(**BOTH)
    text = Path("known.toml").read_text("utf-8")
    Path("known.toml").write_text(re.sub("(?m)^known.*\n", "", text), encoding="utf-8")
    assert not re.search("(?m)^known", longlegs("fly", "known.toml").out)


def test_one_known_frees_one_factor_and_says_why(longlegs: Longlegs) -> None:
    known(block_fuel="1500 kg")
    run = longlegs("fit", "plane.toml", "--flight", "known")
    assert "1 factor fitted to 1 known" in run.out
    answer = r"With fuel_flow_factor = 1\.\d+ the block fuel comes out to 0\.00 %\."
    assert re.search(answer, told(run))
    assert re.search(r"drag_factor +1\.0000 +1\.0000 +held", run.out)
    assert "drag_factor is held. One known tells one factor" in told(run)
    asked = longlegs("fit", "plane.toml", "--flight", "known", "--free", "drag_factor")
    assert re.search(r"fuel_flow_factor +1\.0000 +1\.0000 +held", asked.out)
    assert "is held." not in asked.out


def test_the_engine_may_be_another_one(longlegs: Longlegs) -> None:
    known(block_fuel="1500 kg")
    write(Path(), "thirsty", ENGINE | {"name": "thirsty", "specific_fuel_consumption": "0.7 1/h"})
    words = ("fit", "plane", "--flight", "known", "--json", "-")
    one, other = (
        json.loads(longlegs(*words, *engine).out) for engine in ((), ("--engine", "thirsty"))
    )
    assert other["engine"] == "thirsty"
    assert other["factors"][1]["value"] < one["factors"][1]["value"]


def test_the_record(longlegs: Longlegs) -> None:
    known(**BOTH)
    run = longlegs("fit", "plane", "--flight", "known", "--json", "-")
    assert (run.status, run.err) == (0, "")
    record = read_json(run.out)
    assert record["format"] == "longlegs-flight-fit"
    assert record["version"] == 1
    assert (record["mission"], record["aircraft"]) == ("run home", "test twin")
    assert record["is_fitted"]
    assert record["flown"]
    assert record["has_settled"]
    assert record["flights"] <= 12
    assert record["held_because"] == ""
    assert record["failure"] is None
    assert record["not_flown_with"] is None
    drag, flow = record["factors"]
    assert (drag["key"], drag["start"], drag["is_free"]) == ("drag_factor", 1.0, True)
    assert flow["percent_for_1_percent_in_every_known"] > 0.5
    fuel, time = record["knowns"]
    assert (fuel["what"], fuel["segment"], fuel["unit"]) == ("block fuel", "", "kg")
    assert (time["what"], time["segment"], time["known"]) == ("time", "climb", 420.0)
    assert fuel["after"] == pytest.approx(1520.0, rel=1e-5)
    assert fuel["before"] < 1450.0
    assert abs(time["error"]) < 1e-5
    assert set(fuel["percent_for_1_percent_of"]) == {"drag_factor", "fuel_flow_factor"}
    held = json.loads((longlegs("fit", "plane", "--flight", "known", "--json", "-",
                                "--free", "drag_factor")).out)  # fmt: skip
    assert held["factors"][1]["percent_for_1_percent_in_every_known"] is None


def test_a_mission_that_cannot_be_flown_ends_with_status_3(longlegs: Longlegs) -> None:
    known(**BOTH)
    write(Path(), "power", ENGINE | {"static_thrust": "12 kN"})
    run = longlegs("fit", "plane", "--flight", "known")
    assert run.status == 3
    assert "Cannot be fitted: with drag_factor = 1 and fuel_flow_factor = 1 the mi" in told(run)
    assert "what failed" in run.out
    assert "the fit starts from there" in told(run)
    assert "_factor = 1." not in run.out
    only = longlegs("fit", "plane", "--flight", "known", "--json", "-")
    assert only.status == 3
    assert only.err.startswith("Cannot be fitted: ")
    record = read_json(only.out)
    assert not record["is_fitted"]
    assert record["knowns"] == []
    assert record["not_flown_with"] == {"drag_factor": 1.0, "fuel_flow_factor": 1.0}
    assert record["failure"]["what"]


def test_knowns_that_lead_astray_end_with_status_3_and_how_far_it_came(longlegs: Longlegs) -> None:
    known(segment=[{"name": "climb", "time": "2 h"}])
    write(Path(), "power", ENGINE | {"density_exponent": 1.3})
    run = longlegs("fit", "plane", "--flight", "known")
    assert run.status == 3
    assert "Cannot be fitted: with drag_factor = 1." in told(run)
    assert "look at the knowns: they lead to where the mission cannot be flown" in told(run)
    assert re.search(r"time of climb +min +120\.0 ", run.out)


def test_factors_found_with_which_a_limit_is_passed_end_with_status_3(longlegs: Longlegs) -> None:
    known(block_fuel="1500 kg")
    text = Path("known.toml").read_text("utf-8")
    Path("known.toml").write_text(text.replace("as_needed = true", 'load = "1.45 t"'), "utf-8")
    run = longlegs("fit", "plane", "--flight", "known")
    assert run.status == 3
    assert "comes out to 0.00 %." in told(run)
    assert "With these factors the mission cannot be flown: usable fuel left" in told(run)
    assert re.search(r"(?m)^  fuel_flow_factor = 1\.\d+$", run.out)


def test_factors_still_on_the_move_are_said_to_be(
    longlegs: Longlegs, monkeypatch: pytest.MonkeyPatch
) -> None:
    from mission.questions import fit_flight as question

    monkeypatch.setattr(question, "MOST_FLIGHTS", 4)
    known(**BOTH)
    run = longlegs("fit", "plane", "--flight", "known", "--json", "fit.json")
    assert run.status == 0
    assert "They had not settled after 4 flights: write them into the aircraft file" in told(run)
    assert not json.loads(Path("fit.json").read_text("utf-8"))["has_settled"]


@pytest.mark.parametrize(
    ("words", "said"),
    [
        (("plane", "--flight", "known", "--write", "new.toml"), "--write: goes with an engine"),
        (("plane", "--flight", "known", "--points", "p.csv"), "--points: goes with an engine"),
        (("power", "--engine", "power", "--write", "new.toml"), "--engine: goes with --flight"),
        (("power",), "--write is missing; name the new engine file"),
        (("plane",), "plane.toml\\n +is an aircraft file: an aircraft is fitted with --flight"),
        (("known", "--write", "new.toml"), "known.toml\\n +is a mission file: an aircraft is"),
        (("power", "--flight", "known"), "power.toml\\n +is an engine file: --flight fits an"),
        (("known", "--flight", "known"), "known.toml\\n +is a mission file: --flight fits an"),
        (("bypass_5", "--flight", "known"), '"bypass_5" is an engine.*\\n +--flight fits an air'),
        (("coast_watch_twin", "--write", "n.toml"), 'is an aircraft, and.*\\n +an aircraft is fit'),
        (("plane", "--flight", "nothing"), '--flight: "nothing" is neither a file nor'),
        (("plane", "--flight", "ferry"), "known is missing; it is a table of what is known"),
        (("plane", "--flight", "plane"), "plane.toml"),
        (("plane", "--flight", "known", "--engine", "none"), '--engine: "none" is neither a file'),
        (("plane", "--flight", "known", "--free", "drag"), '--free: "drag" is no factor'),
        (("plane", "--flight", "known", "--json", "new.toml"), "place of an input file"),
    ],
)  # fmt: skip
def test_mixtures_are_refused(longlegs: Longlegs, words: tuple[str, ...], said: str) -> None:
    known(**BOTH)
    before = sorted(path.name for path in Path().iterdir())
    run = longlegs("fit", *words)
    assert (run.status, run.out) == (2, "")
    assert re.search(said, run.err)
    assert sorted(path.name for path in Path().iterdir()) == before


def test_what_the_knowns_cannot_tell_is_refused(longlegs: Longlegs) -> None:
    known(block_fuel="9 t")
    run = longlegs("fit", "plane", "--flight", "known")
    assert run.status == 2
    assert "known: asks for a fuel_flow_factor above 2, further than a fit goes" in run.err
    known(trip_fuel="1500 kg")
    free = ("--free", "drag_factor", "--free", "fuel_flow_factor")
    run = longlegs("fit", "plane", "--flight", "known", *free)
    assert run.status == 2
    assert "known: one known tells one factor, and a fuel of the whole mission" in run.err
