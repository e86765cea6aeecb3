"""``longlegs fit``: the new engine file, the screen, the record, and what is refused."""

from __future__ import annotations

import json
import tomllib
from pathlib import Path

import numpy as np
import pytest

from engine import load_engine
from engine.atmosphere import flight_condition
from mission.library import find
from mission.outputs.wording import CAUTION
from tests.terminal import Longlegs

HEADER = "pressure_altitude_m,mach,rating,net_thrust_n,fuel_flow_kg_per_s\n"
SIZE = "design_point.net_thrust"
CORE = "efficiencies.high_pressure_compressor"
BROCHURE = """\
kind = "brochure"
name = "four numbers"
static_thrust = "120 kN"
static_specific_fuel_consumption = "9.6 mg/N/s"
bypass_ratio = 5.1
overall_pressure_ratio = 30.0
"""


@pytest.fixture
def longlegs(longlegs: Longlegs, monkeypatch: pytest.MonkeyPatch) -> Longlegs:
    """The command on a narrow terminal."""
    monkeypatch.setenv("COLUMNS", "80")
    return longlegs


def points_of_bypass_5(path: str) -> None:
    """What a built-in engine gives, as a file of points, and a start that is off."""
    engine = load_engine(find("bypass_5", "engine"))
    rows = [(0.0, 0.0, "take_off"), (6000.0, 0.6, "climb"), (10668.0, 0.78, "cruise")]
    text = "# one engine\n" + HEADER
    for altitude, mach, rating in rows:
        state = engine.at_rating(flight_condition(altitude, mach), rating)
        text += f"{altitude},{mach},{rating},{state.net_thrust:.9g},{state.fuel_flow:.9g}\n"
    state = engine.at_thrust(flight_condition(10668.0, 0.78), 7000.0)
    text += f"10668,0.78,,7000,{state.fuel_flow:.9g}\n"
    Path(path).write_text(text, encoding="utf-8")
    whole = find("bypass_5", "engine").read_text(encoding="utf-8")
    changed = whole.replace('net_thrust = "11 kN"', 'net_thrust = "10 kN"')
    changed = changed.replace(
        "high_pressure_compressor = {polytropic = 0.88}",
        "high_pressure_compressor = {polytropic = 0.86}",
    )
    assert changed != whole
    Path("start.toml").write_text(changed, encoding="utf-8")


def test_the_file_written_is_the_engine_that_the_screen_tells_of(longlegs: Longlegs) -> None:
    points_of_bypass_5("points.csv")
    words = ("--points", "points.csv", "--write", "new.toml", "--free", SIZE, "--free", CORE)
    run = longlegs("fit", "start.toml", *words, "--json", "fit.json")
    assert (run.status, run.err) == (0, "")
    content = tomllib.loads(Path("new.toml").read_text(encoding="utf-8"))
    assert content["design_point"]["net_thrust"].endswith(" kN")
    assert float(content["design_point"]["net_thrust"][:-3]) == pytest.approx(11.0, rel=1e-6)
    assert content["efficiencies"]["high_pressure_compressor"]["polytropic"] == pytest.approx(0.88)
    record = json.loads(Path("fit.json").read_text(encoding="utf-8"))
    assert record["format"] == "longlegs-fit"
    assert record["rms_error_before"] > 0.01
    assert record["rms_error_after"] < 1e-6
    engine = load_engine("new.toml")
    for point in record["points"][:3]:
        flight = flight_condition(point["pressure_altitude_m"], point["mach"])
        state = engine.at_rating(flight, point["rating"])
        assert float(state.net_thrust) == pytest.approx(point["after"]["net_thrust_n"], rel=1e-12)
        assert float(state.fuel_flow) == pytest.approx(
            point["after"]["fuel_flow_kg_per_s"], rel=1e-12
        )
    (size, core) = record["parameters"]
    assert (size["key"], size["unit"], size["start"]) == (SIZE, "kN", 10.0)
    assert size["value"] == float(content["design_point"]["net_thrust"][:-3])
    assert (core["lower_bound"], core["upper_bound"]) == (0.7, 0.95)
    assert core["is_determined"]
    comment = Path("new.toml").read_text(encoding="utf-8").partition("\n\n")[0].splitlines()
    assert comment[0] == "# Written by longlegs fit"
    assert "from start.toml, fitted to 7 data of 4 points of points.csv" in comment[1]
    assert "root mean square of the relative errors: 0.0000 %" in comment[2]
    assert longlegs("stations", "new.toml", "--altitude", "0 m", "--mach", "0", "--rating",
                    "climb").status == 0  # fmt: skip


def test_the_screen_tells_errors_values_and_trust(longlegs: Longlegs) -> None:
    points_of_bypass_5("points.csv")
    words = ("--points", "points.csv", "--write", "new.toml")
    run = longlegs("fit", "start.toml", *words, "--free", SIZE, "--free", "combustor.efficiency")
    lines = run.out.splitlines()
    assert max(map(len, lines)) <= 80
    assert lines[0] == "bypass-5 turbofan"
    assert lines[1] == "2 parameters fitted to 7 data of 4 points of points.csv"
    assert lines[3].startswith("Root mean square error ")
    (size,) = (line.split() for line in lines if line.split()[:2] == [SIZE, "10.000"])
    assert size[-1] == "kN"
    assert 10.5 < float(size[2]) < 11.5
    told = "combustor.efficiency: at its upper bound, 1.00000, and the points ask for more;"
    assert told in " ".join(run.out.split())
    assert f"{SIZE}: determined; allowed is" in " ".join(run.out.split())
    (demand,) = (line for line in lines if " thrust " in line and "met" in line)
    assert demand.split()[:6] == ["6", "350", "0.78", "thrust", "7.00", "met"]
    assert "Written to new.toml." in run.out
    assert " ".join(run.out.split()).endswith(CAUTION)
    by_rule = longlegs("fit", "start.toml", *words)  # over its own file
    assert by_rule.status == 0
    assert "No --free was given." in by_rule.out
    assert "correlation" in by_rule.out


def test_many_points_are_shown_by_their_worst(longlegs: Longlegs) -> None:
    longlegs("envelope", "bypass_5", "--altitudes", "0 ft, FL200, FL350", "--machs", "0.3, 0.6",
             "--csv", "grid.csv")  # fmt: skip
    rows = Path("grid.csv").read_text(encoding="utf-8").count("\n0,0.3,")
    assert rows > 10
    rows -= 1  # of the engine unlit
    points_of_bypass_5("points.csv")
    run = longlegs("fit", "start.toml", "--points", "grid.csv", "--write", "new.toml",
                   "--free", SIZE, "--free", CORE)  # fmt: skip
    assert run.status == 0
    assert f"The 24 of {6 * rows} points that are furthest off" in run.out
    assert "6 rows rated windmilling are left out" in run.out
    content = tomllib.loads(Path("new.toml").read_text(encoding="utf-8"))
    assert float(content["design_point"]["net_thrust"][:-3]) == pytest.approx(11.0, rel=1e-5)


def test_four_numbers_become_an_engine_file(longlegs: Longlegs) -> None:
    Path("b.toml").write_text(BROCHURE, encoding="utf-8")
    run = longlegs("fit", "b.toml", "--write", "full.toml")
    assert run.status == 0
    assert "Written to full.toml as a turbofan." in run.out
    flight = flight_condition(np.array([0.0, 10668.0]), np.array([0.0, 0.8]))
    given, whole = (
        load_engine(name).at_rating(flight, "cruise") for name in ("b.toml", "full.toml")
    )
    assert whole.net_thrust == pytest.approx(given.net_thrust, rel=1e-12)
    assert whole.fuel_flow == pytest.approx(given.fuel_flow, rel=1e-12)
    only = longlegs("fit", "b.toml", "--write", "full.toml", "--json", "-")
    assert json.loads(only.out)["kind"] == "turbofan"


def test_four_numbers_meet_points_at_part_power(longlegs: Longlegs) -> None:
    Path("b.toml").write_text(BROCHURE, encoding="utf-8")
    part = HEADER + "10668,0.8,,20000,0.345\n0,0,,36000,0.29\n"
    Path("part.csv").write_text(part, encoding="utf-8")
    run = longlegs("fit", "b.toml", "--write", "full.toml", "--points", "part.csv", "--json", "-")
    assert run.status == 0
    record = json.loads(run.out)
    assert record["is_free_by_rule"]
    assert record["data_count"] == 3
    assert [point["line"] for point in record["points"]] == [None, 2, 3]
    assert record["rms_error_after"] < record["rms_error_before"]
    assert load_engine("full.toml").name == "four numbers"


@pytest.mark.parametrize(
    ("words", "said"),
    [
        (("--write", "start.toml"), "is there already and was not written by longlegs fit"),
        (("--write", "points.csv"), "would stand in the place of an input file"),
        (("--write", "new.txt"), "let it end in .toml"),
        (("--write", "none/new.toml"), "there is no folder"),
        (("--write", "new.toml", "--free", "efficiencies.core"), "may be free; did you mean"),
        (("--write", "new.toml", "--json", "points.csv"), "in the place of an input file"),
    ],
)
def test_what_is_refused_leaves_no_file(
    longlegs: Longlegs, words: tuple[str, ...], said: str
) -> None:
    points_of_bypass_5("points.csv")
    before = {path.name: path.read_bytes() for path in Path().iterdir()}
    run = longlegs("fit", "start.toml", "--points", "points.csv", *words)
    assert run.status == 2
    assert said in run.err
    assert {path.name: path.read_bytes() for path in Path().iterdir()} == before


def test_points_may_only_be_left_out_for_a_brochure(longlegs: Longlegs) -> None:
    for name in ("bypass_5", "b.toml"):
        Path("b.toml").write_text(BROCHURE, encoding="utf-8")
        free = ("--free", SIZE) if name == "b.toml" else ()
        run = longlegs("fit", name, "--write", "new.toml", *free)
        assert run.status == 2
        assert "--points is missing" in run.err
        assert not Path("new.toml").exists()
