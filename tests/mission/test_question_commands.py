"""The commands that look at one point of the envelope and for the best levels and speeds."""

from __future__ import annotations

import re
from math import degrees
from pathlib import Path

import pytest
from mission_files import aircraft_content, engine_content, write

from mission.outputs.units import ABSENT
from mission.outputs.wording import CAUTION, TIMES
from tests.terminal import Longlegs, read_json

POINT = ("point", "--altitude", "FL370", "--mach", "0.76", "--mass", "23 t")


def words_of(text: str) -> str:
    return " ".join(text.split())


@pytest.mark.parametrize("columns", [80, 100])
@pytest.mark.parametrize("units", ["metric", "trade"])
def test_a_point_fits_the_screen_answer_first(
    longlegs: Longlegs, monkeypatch: pytest.MonkeyPatch, columns: int, units: str
) -> None:
    monkeypatch.setenv("COLUMNS", str(columns))
    run = longlegs(*POINT, "--day", "ISA+10", "--units", units)
    assert (run.status, run.err) == (0, "")
    lines = run.out.splitlines()
    assert lines[0] == "coast watch twin"
    assert max(map(len, lines)) <= columns
    assert lines[3].startswith("level flight  ")
    said = words_of(run.out)
    assert said.endswith(CAUTION)
    if units == "metric":
        assert lines[1] == f"2 {TIMES} bypass-5 turbofan, at FL370, Mach 0.760, 23.000 t, ISA+10"
        assert "km/kg of specific air range" in said
        assert "kt" not in said.split()
    else:
        assert "at 37,000 ft, Mach 0.760, 50,706 lb, ISA+10" in said
        assert "true 445.9 kt" in said
        record = read_json(longlegs(*POINT, "--day", "ISA+10", "--json", "-").out)
        idle = degrees(record["ratings"][-1]["flight_path_angle_rad"])
        # Nothing is cut off: the last column of the widest table.
        assert any(line.startswith("  flight idle") and line.endswith(f" {idle:.2f}")
                   for line in lines)  # fmt: skip
    assert f"Climb by rating, {'m/s' if units == 'metric' else 'ft/min'}" in lines
    for title in (
        "Air and speed", "Lift and drag", "Thrust and fuel by rating",
        "Level turn that thrust sustains", "Room to the limits",
    ):  # fmt: skip
        assert title in lines
    assert "\x1b" not in run.out


def test_a_point_for_programs_agrees_with_the_engine_alone(longlegs: Longlegs) -> None:
    record = read_json(longlegs(*POINT, "--day", "ISA+10", "--json", "-").out)
    assert (record["format"], record["version"]) == ("longlegs-point", 1)
    assert record["faults"] == []
    level = record["level_flight"]
    assert level["outcome"] == "met"
    assert level["thrust_n"] == pytest.approx(record["drag_n"])
    engine = read_json(
        longlegs("stations", "bypass_5", "--altitude", "FL370", "--mach", "0.76", "--day", "ISA+10",
                 "--rating", "cruise", "--thrust", f"{record['drag_n'] / 2.0!r} N",
                 "--json", "-").out
    )  # fmt: skip
    assert level["fuel_flow_kg_per_s"] == pytest.approx(2.0 * engine["fuel_flow_kg_per_s"])
    ratings = {entry["rating"]: entry for entry in record["ratings"]}
    assert list(ratings) == [
        "take_off", "maximum_continuous", "climb", "cruise", "flight_idle"
    ]  # fmt: skip
    climb = ratings["climb"]
    assert climb["thrust_over_drag_n"] == pytest.approx(climb["thrust_n"] - record["drag_n"])
    assert ratings["flight_idle"]["sustained_load_factor"] is None
    assert sum(record["drag_coefficient_parts"].values()) == pytest.approx(
        record["drag_coefficient"]
    )


def test_what_cannot_be_flown_level_is_said_and_ends_with_status_3(
    longlegs: Longlegs, tmp_path: Path
) -> None:
    write(tmp_path, "plane", aircraft_content())
    words = ("point", "--aircraft", "plane", "--altitude", "FL460", "--mach", "0.83", "--mass",
             "27 t")  # fmt: skip
    run = longlegs(*words)
    assert run.status == 3
    said = words_of(run.out)
    assert "not possible: Mach number: 0.8300 is above 0.8200, by 0.0100 (1.2 %)" in said
    assert "thrust at cruise rating against drag:" in said
    assert "level flight  " not in run.out
    assert "what to try fly slower; fly lower or slower" in said
    alone = longlegs(*words, "--json", "-")
    assert alone.status == 3
    assert alone.err.startswith("Cannot be flown: Mach number")
    record = read_json(alone.out)
    assert record["level_flight"]["fuel_flow_kg_per_s"] is None
    assert [fault["what"] for fault in record["faults"]] == [
        "Mach number", "thrust at cruise rating against drag"
    ]  # fmt: skip


def test_a_point_of_files_of_ones_own_under_another_rating(
    longlegs: Longlegs, tmp_path: Path
) -> None:
    write(tmp_path, "plane", aircraft_content())
    write(tmp_path, "jet", engine_content())
    words = ("point", "--aircraft", "plane", "--engine", "jet", "--altitude", "30000 ft",
             "--mach", "0.7", "--mass", "20 t", "--rating", "maximum-continuous")  # fmt: skip
    run = longlegs(*words)
    assert run.status == 0
    assert "of maximum continuous rating" in words_of(run.out)
    assert run.out.splitlines()[1].endswith("20.000 t, ISA")


@pytest.mark.parametrize("columns", [80, 100])
def test_the_best_fits_the_screen_answer_and_doubt_first(
    longlegs: Longlegs, monkeypatch: pytest.MonkeyPatch, tmp_path: Path, columns: int
) -> None:
    monkeypatch.setenv("COLUMNS", str(columns))
    write(tmp_path, "jet", engine_content())
    masses = ("--mass", "23 t", "--mass", "20 t", "--mass", "26 t")
    options = ("--engine", "jet", "--cost-index", "10 kg/min", "--json", "best.json")
    run = longlegs("best", "coast_watch", *masses, *options)
    assert (run.status, run.err) == (0, "")
    lines = run.out.splitlines()
    assert lines[0] == "coast watch twin"
    assert max(map(len, lines)) <= columns
    said = words_of(run.out)
    assert "ISA+10, headwind 5.1 m/s, cost index 10 kg/min, thrust up to cruise rating" in said
    record = read_json(Path("best.json").read_text(encoding="utf-8"))
    best = record["best_level"]
    level = round(best["pressure_altitude_m"][1] / 30.48)
    mach = best["maximum_range"]["mach"][1]
    at = next(line for line in lines if line.startswith("at 23.00 t"))
    assert at.startswith(f"at 23.00 t  FL{level:03d}, Mach {mach:.3f}: ")
    assert "doubt 99 % of it from FL" in said
    assert "climb 300 ft/min is left up to FL" in said
    for title in (
        "Best level and speed by mass", "What other levels cost, and how high it climbs",
        "Speeds by level at 23.00 t", "Specific air range below the best of each mass, %",
    ):  # fmt: skip
        assert title in lines
    assert re.search(rf"No level flight \({ABSENT}\) for want of: a (thrust|buffet)", said)
    assert said.endswith(CAUTION)


def test_no_number_is_cut_off_on_a_narrow_screen(
    longlegs: Longlegs, monkeypatch: pytest.MonkeyPatch, tmp_path: Path
) -> None:
    """Every number of the narrow tables stands in the wide ones."""
    write(tmp_path, "jet", engine_content())
    words = ("best", "coast_watch", "--engine", "jet", "--mass", "23 t", "--mass", "26 t",
             "--units", "trade")  # fmt: skip
    shown = {}
    for columns in (80, 100):
        monkeypatch.setenv("COLUMNS", str(columns))
        tables = (
            longlegs(*words).out.split("Best level and speed by mass")[1].split("Preliminary")[0]
        )
        shown[columns] = {
            word for word in tables.split() if word[0].isdigit() and word[-1].isdigit()
        }
    assert len(shown[80]) > 30
    assert shown[80] <= shown[100]


def test_the_best_for_programs(longlegs: Longlegs) -> None:
    run = longlegs("best", "--mass", "24 t", "--headwind", "20 kt", "--day", "ISA+10",
                   "--json", "-")  # fmt: skip
    assert run.status == 0
    record = read_json(run.out)
    assert (record["format"], record["version"]) == ("longlegs-best", 1)
    assert record["mass_kg"] == [24000.0]
    assert record["air"]["temperature_deviation_k"] == [10.0]
    assert record["air"]["headwind_m_per_s"] == pytest.approx([20 * 1852 / 3600])
    levels = record["levels"]
    count = len(levels["pressure_altitude_m"])
    for name in ("maximum_range", "long_range", "endurance", "greatest", "least_cost"):
        speed = levels[name]
        assert len(speed["mach"]) == count
        for row in range(count):
            is_flyable = speed["is_flyable"][row][0]
            assert (speed["mach"][row][0] is not None) == is_flyable
            assert is_flyable or speed["limit"][row][0] in ("thrust", "buffet")
    best = record["best_level"]["maximum_range"]
    point = read_json(
        longlegs("point", "--altitude", f"{record['best_level']['pressure_altitude_m'][0]!r} m",
                 "--mach", repr(best["mach"][0]), "--mass", "24 t", "--day", "ISA+10",
                 "--json", "-").out
    )  # fmt: skip
    assert point["level_flight"]["specific_air_range_m_per_kg"] == pytest.approx(
        best["specific_air_range_m_per_kg"][0], rel=1e-6
    )


def test_masses_and_air_where_none_are_given(longlegs: Longlegs, tmp_path: Path) -> None:
    """Five masses from greatest zero-fuel to greatest take-off; ISA, still, without a mission."""
    write(tmp_path, "plane", aircraft_content())
    write(tmp_path, "jet", engine_content())
    record = read_json(
        longlegs("best", "--aircraft", "plane", "--engine", "jet", "--json", "-").out
    )
    assert record["mass_kg"] == pytest.approx([19500.0, 21375.0, 23250.0, 25125.0, 27000.0])
    assert record["air"] == {
        "pressure_altitude_m": [0.0],
        "temperature_deviation_k": [0.0],
        "headwind_m_per_s": [0.0],
    }
    assert record["best_level"]["least_cost"] is None


def test_the_end_of_the_altitudes_is_named(longlegs: Longlegs, tmp_path: Path) -> None:
    write(tmp_path, "plane", aircraft_content(limits={"maximum_pressure_altitude": "FL300"}))
    write(tmp_path, "jet", engine_content())
    words = ("best", "--aircraft", "plane", "--engine", "jet", "--mass", "20 t")
    said = words_of(longlegs(*words).out)
    assert "at 20.00 t FL300, Mach " in said
    assert "held by greatest altitude" in said
    assert "300 ft/min is left up to FL300 and beyond" in said
    record = read_json(longlegs(*words, "--json", "-").out)
    assert record["best_level"]["limit"] == ["ceiling"]
    assert record["highest_level"]["limit"] == ["ceiling"]


def test_nothing_that_can_be_flown_ends_with_status_3(longlegs: Longlegs, tmp_path: Path) -> None:
    write(tmp_path, "plane", aircraft_content())
    write(tmp_path, "jet", engine_content(static_thrust="5 kN"))
    run = longlegs("best", "--aircraft", "plane", "--engine", "jet")
    assert run.status == 3
    said = words_of(run.out)
    assert "no level can be flown: thrust" in said
    assert "no level: thrust" in said


def test_an_engine_in_a_table_is_asked_on_its_day(longlegs: Longlegs) -> None:
    run = longlegs("best", "coast_watch", "--engine", "tabulated_fan", "--mass", "22 t")
    assert run.status == 0
    other = longlegs("best", "coast_watch", "--engine", "tabulated_fan", "--day", "ISA+20")
    assert other.status == 2
    assert "--day" in other.err


@pytest.mark.parametrize(
    ("words", "told"),
    [
        ((*POINT[:-1], "23"), ["--mass", "'23'", '"12.5 t"']),
        ((*POINT[:-1], "40 t"), ['--mass = "40 t" is outside 15,600 kg, operating empty, to']),
        ((*POINT[:4], "0", "--mass", "23 t"), ["--mach = 0 carries nothing"]),
        ((*POINT[:4], "9", "--mass", "23 t"), ["--mach: Mach number = 9 is outside 0 to 5"]),
        ((*POINT, "--rating", "fast"), ['--rating: "fast" is none of take_off, ']),
        ((*POINT, "--day", "hot"), ["--day", '"ISA+15"']),
        (
            ("point", "--altitude", "40 km", "--mach", "0.5", "--mass", "23 t"),
            ["--altitude: pressure altitude = 40000 m is outside"],
        ),
        (("best", "--cost-index", "30"), ["--cost-index", "'30'"]),
        (("best", "--cost-index=-3 kg/min"), ['--cost-index = "-3 kg/min" is below 0']),
        (("best", "--headwind", "300 kt"), ['--headwind = "300 kt" is outside -100 to 100 m/s']),
        (("best", "--mass", "1 t"), ['--mass = "1 t" is outside']),
        (("best", "nowhere"), ['"nowhere" is neither a file nor a built-in mission']),
        (("best", "--aircraft", "bypass_5"), ['"bypass_5" is an engine']),
    ],
)
def test_refusals_name_the_option_and_what_is_allowed(
    longlegs: Longlegs, words: tuple[str, ...], told: list[str]
) -> None:
    run = longlegs(*words)
    assert (run.status, run.out) == (2, "")
    for part in told:
        assert part in run.err
