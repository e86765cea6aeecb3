"""The command that shows an engine's envelope and writes it for a tabulated engine."""

from __future__ import annotations

from pathlib import Path

import pytest

from mission.outputs.units import ABSENT
from mission.outputs.wording import CAUTION
from tests.terminal import Longlegs, read_json


@pytest.mark.parametrize("columns", [80, 100])
def test_envelope_shows_thrust_with_what_holds_it_and_fuel_flow(
    longlegs: Longlegs, monkeypatch: pytest.MonkeyPatch, columns: int
) -> None:
    monkeypatch.setenv("COLUMNS", str(columns))
    run = longlegs("envelope", "bypass_5", "--day", "ISA+10")
    assert run.status == 0
    lines = run.out.splitlines()
    assert lines[:2] == ["bypass-5 turbofan", "one engine at climb rating, ISA+10"]
    assert lines[3].startswith("Net thrust from ")
    assert max(map(len, lines)) <= columns
    thrust, fuel = run.out.split("Fuel flow, kg/h")
    at_sea_level = longlegs("stations", "bypass_5", "--altitude", "FL0", "--mach", "0.15",
                            "--rating", "climb", "--day", "ISA+10", "--json", "-")  # fmt: skip
    record = read_json(at_sea_level.out)
    row = next(line.split() for line in thrust.splitlines() if line.startswith("      000 "))
    assert row[3:5] == [f"{record['thrust_n'] / 1e3:.2f}", "a"]
    row = next(line.split() for line in fuel.splitlines() if line.startswith("      000 "))
    assert row[2] == f"{record['fuel_flow_kg_per_s'] * 3600:,.0f}"
    assert "a turbine entry temperature; b corrected low pressure speed." in " ".join(
        run.out.split()
    )
    assert " ".join(run.out.split()).endswith(CAUTION)


def test_an_envelope_as_json_has_nothing_where_there_is_no_answer(longlegs: Longlegs) -> None:
    words = ("envelope", "straight_jet", "--altitudes", "0 ft, FL350", "--machs", "0.5,2.0")
    run = longlegs(*words, "--rating", "take-off", "--json", "-")
    assert run.status == 0
    record = read_json(run.out)
    assert record["rating"] == "take_off"
    assert record["mach"] == [0.5, 2.0]
    assert record["pressure_altitude_m"] == pytest.approx([0.0, 10668.0])
    assert record["net_thrust_n"][0][1] is None
    assert record["outcome"][0][1] in ("not_converged", "unphysical")
    assert record["net_thrust_n"][1][1] > 0.0
    shown = " ".join(longlegs(*words).out.split())
    assert f"1 of 4 points have no answer ({ABSENT}): the engine" in shown
    assert " at FL000, Mach 2. " in shown


def test_an_envelope_written_as_csv_is_an_engine(longlegs: Longlegs, tmp_path: Path) -> None:
    words = ("envelope", "bypass_5", "--day", "ISA+10", "--csv", "points.csv")
    run = longlegs(*words, "--altitudes", "0 ft, 6000 m, FL350", "--machs", "0,0.4,0.8")
    assert run.status == 0
    assert "Written to points.csv: 180 points." in run.out
    text = (tmp_path / "points.csv").read_text(encoding="utf-8")
    assert text.startswith("# engine: bypass-5 turbofan\n# day: ISA+10\n# units: SI")
    assert "share of the thrust span" in text
    toml = 'kind = "tabulated"\nname = "table"\npoints = "points.csv"\nday = "ISA+10"\n'
    (tmp_path / "table.toml").write_text(toml, encoding="utf-8")
    there = ["--altitude", "FL350", "--mach", "0.8", "--rating", "climb", "--day", "ISA+10"]
    table, cycle = (
        read_json(longlegs("stations", name, *there, "--json", "-").out)
        for name in ("table", "bypass_5")
    )
    assert table["thrust_n"] == pytest.approx(cycle["thrust_n"], rel=1e-6)
    assert table["fuel_flow_kg_per_s"] == pytest.approx(cycle["fuel_flow_kg_per_s"], rel=1e-6)
    beyond = longlegs(
        "stations", "table", "--altitude", "FL360", "--mach", "0.8", "--rating", "climb"
    )
    unlit, drag = (
        read_json(longlegs("stations", name, *there[:4], "--rating", "windmilling", "--day",
                           "ISA+10", "--json", "-").out)["thrust_n"]
        for name in ("table", "bypass_5")
    )  # fmt: skip
    assert unlit == pytest.approx(drag, rel=1e-6)
    assert unlit < 0.0
    assert beyond.status == 3
    assert "FL360, Mach 0.800, ISA+10, the day of its table, climb rating" in beyond.out
    assert (
        "No answer outside the engine's table: pressure altitude is 10972.8 m and it holds 0 to "
        "10668 m."
    ) in " ".join(beyond.out.split())
    assert longlegs("envelope", "table").out.startswith(
        "table\none engine at climb rating, ISA+10\n"
    )
    kept = longlegs("envelope", "table", "--csv", "points.csv")
    assert (kept.status, kept.err) == (
        2, 'Refused: --csv: "points.csv" holds the points that table.toml is read from\n',
    )  # fmt: skip
    for words in (("envelope", "table"), ("stations", "table", *there[:6])):
        day = longlegs(*words, "--day", "ISA")
        assert day.status == 2
        assert '--day = "ISA", and the table of table is of ISA+10 alone' in day.err
    assert longlegs("fly", "ferry", "--engine", "table").status == 2
    assert longlegs("fly", "--engine", "table", "--json", "points.csv").status == 2
    assert (tmp_path / "points.csv").read_text(encoding="utf-8") == text


def test_windmilling_that_alone_has_no_answer_somewhere_is_left_out(
    longlegs: Longlegs, tmp_path: Path
) -> None:
    """Hardly moving, the air does not turn this engine."""
    run = longlegs("envelope", "bypass_10", "--csv", "points.csv", "--altitudes",
                   "0 ft, FL350", "--machs", "0,0.005,0.4")  # fmt: skip
    said = " ".join(run.out.split())
    assert "Written to points.csv: 114 points. Windmilling is left out: " in said
    assert ",windmilling," not in (tmp_path / "points.csv").read_text(encoding="utf-8")


def test_without_rows_of_it_a_table_is_not_asked_for_windmilling(
    longlegs: Longlegs, tmp_path: Path
) -> None:
    longlegs("envelope", "bypass_5", "--csv", "points.csv", "--altitudes", "0 ft, FL350",
             "--machs", "0,0.4")  # fmt: skip
    path = tmp_path / "points.csv"
    lines = path.read_text(encoding="utf-8").splitlines()
    path.write_text("\n".join(line for line in lines if "windmilling" not in line), "utf-8")
    toml = 'kind = "tabulated"\nname = "table"\npoints = "points.csv"\nday = "ISA"\n'
    (tmp_path / "table.toml").write_text(toml, encoding="utf-8")
    there = ("stations", "table", "--altitude", "FL200", "--mach", "0.3", "--rating")
    unlit, none = longlegs(*there, "windmilling"), longlegs(*there, "fast")
    assert (unlit.status, none.status) == (2, 2)
    assert "the table of table has no rows rated windmilling; add them" in unlit.err
    assert "windmilling" not in none.err


def test_what_burns_nothing_at_idle_makes_no_table(longlegs: Longlegs, tmp_path: Path) -> None:
    text = 'kind = "constant consumption"\nname = "plain"\nstatic_thrust = "20 kN"\n'
    (tmp_path / "plain.toml").write_text(text + 'specific_fuel_consumption = "16 mg/N/s"\n')
    run = longlegs("envelope", "plain", "--csv", "points.csv")
    assert run.status == 2
    assert "--csv: plain burns nothing at flight_idle" in run.err
    assert not (tmp_path / "points.csv").exists()


@pytest.mark.parametrize(
    ("words", "told"),
    [
        (["envelope", "bypass_5", "--rating", "fast"], ["--rating", '"fast" is none of take_off']),
        (
            ["envelope", "bypass_5", "--machs", "0,x"],
            ["--machs", '"0,x" is no list of Mach numbers'],
        ),
        (["envelope", "bypass_5", "--altitudes", "0 ft,9"], ["--altitudes", "'9'", '"35000 ft"']),
        (["envelope", "bypass_5", "--to-altitude", "0 ft"], ["--to-altitude = 0 m is not above 0"]),
        (
            ["envelope", "bypass_5", "--to-mach", "9"],
            ["--to-mach: Mach number = 9 is outside 0 to 5"],
        ),
        (["envelope", "bypass_5", "--machs", "0,-1"], ["--machs: Mach number = -1 is outside"]),
        (
            ["envelope", "bypass_5", "--altitudes", "0 m,40 km"],
            ["--altitudes: pressure altitude = 40000 m is outside"],
        ),
        (["envelope", "bypass_5", "--csv", "x.toml"], ["--csv", "let it end in .csv"]),
    ],
)
def test_refusals_name_the_option_and_what_is_allowed(
    longlegs: Longlegs, words: list[str], told: list[str]
) -> None:
    run = longlegs(*words)
    assert (run.status, run.out) == (2, "")
    for part in told:
        assert part in run.err
