"""The command line: exit statuses, what stands where, refusals, and a quick ``--help``."""

from __future__ import annotations

import re
import subprocess
import sys
from pathlib import Path

import pytest
from mission_files import aircraft_content, write

from mission import command_line
from mission.library import built_in, find
from mission.outputs.wording import CAUTION, NOT_CHARGED
from tests.terminal import Longlegs, read_json

ROOT = Path(__file__).parents[2]
PROFILES = ROOT / "profiles"
HEAVY = {"numpy", "scipy", "pydantic", "pint", "ambiance", "matplotlib"}


def demo() -> str:
    """The demo mission as it is written."""
    return (PROFILES / "coast_watch.toml").read_text(encoding="utf-8")


def written(name: str, old: str, new: str) -> str:
    """A variant of the demo as a file in the current folder; its path."""
    text = demo()
    assert old in text
    Path(name).write_text(text.replace(old, new), encoding="utf-8")
    return name


def test_without_a_file_the_demo_is_flown(longlegs: Longlegs) -> None:
    run = longlegs("fly")
    assert run.status == 0
    assert run.err == ""
    lines = run.out.splitlines()
    assert lines[0] == "coast watch"
    assert lines[3].startswith("block fuel  ")
    assert "bridge to watch" in run.out
    assert " ".join(run.out.split()).endswith(CAUTION)
    assert max(map(len, lines)) <= 100


def test_json_alone_balances_and_agrees_with_the_log(longlegs: Longlegs) -> None:
    run = longlegs("fly", "coast_watch", "--json", "-")
    assert run.status == 0
    record = read_json(run.out)
    mission = [s for s in record["segments"] if s["purpose"] == "mission"]
    totals = record["totals"]
    assert sum(s["fuel_kg"] for s in mission) == pytest.approx(totals["block_fuel_kg"], rel=1e-9)
    assert sum(s["time_s"] for s in mission) == pytest.approx(totals["block_time_s"], rel=1e-9)
    for segment in record["segments"]:
        burnt = segment["mass_start_kg"] - segment["mass_end_kg"]
        assert burnt == pytest.approx(segment["fuel_kg"], abs=1e-6)
        assert len({len(values) for values in segment["steps"].values()}) == 1
        assert segment["steps"]["mass_kg"][0] == segment["mass_start_kg"]
        assert segment["steps"]["mass_kg"][-1] == segment["mass_end_kg"]
    assert record["failure"] is None
    shown = longlegs("fly").out
    assert f"block fuel  {totals['block_fuel_kg']:,.0f} kg" in shown


def test_json_to_a_file_stands_beside_the_log(longlegs: Longlegs, tmp_path: Path) -> None:
    target = tmp_path / "out.json"
    run = longlegs("fly", "--json", str(target))
    assert run.status == 0
    assert run.out.startswith("coast watch\n")
    assert read_json(target.read_text(encoding="utf-8"))["flown"] is True
    assert list(tmp_path.iterdir()) == [target]


def test_steps_and_trade_units(longlegs: Longlegs) -> None:
    run = longlegs("fly", "--steps", "--units", "trade")
    assert run.status == 0
    assert "Steps of cruise out" in run.out
    assert re.search(r"block fuel  [\d,]+ lb", run.out)
    assert "nmi/lb" in run.out


def test_a_narrow_terminal_cuts_nothing_off(
    longlegs: Longlegs, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setenv("COLUMNS", "80")
    for words in (("fly",), ("list",)):
        run = longlegs(*words)
        assert run.status == 0
        assert max(map(len, run.out.splitlines())) <= 80
        assert "…" not in run.out


def test_names_beside_the_mission_come_first(longlegs: Longlegs, tmp_path: Path) -> None:
    folder = tmp_path / "study"
    folder.mkdir()
    twin = (PROFILES / "coast_watch_twin.toml").read_text(encoding="utf-8")
    (folder / "my_twin.toml").write_text(
        re.sub(r'^name = ".*"', 'name = "my own twin"', twin), encoding="utf-8"
    )
    for number, entry in enumerate(("my_twin", "my_twin.toml")):
        text = demo().replace('"coast_watch_twin"', f'"{entry}"')
        (folder / f"m{number}.toml").write_text(text, encoding="utf-8")
        run = longlegs("fly", f"study/m{number}", "--json", "-")
        assert run.status == 0
        assert read_json(run.out)["aircraft"] == "my own twin"


def test_an_engine_given_takes_the_place_of_the_missions(longlegs: Longlegs) -> None:
    written("m.toml", 'engine = "bypass_5"\n', "")
    refused = longlegs("fly", "m")
    assert refused.status == 2
    assert "m.toml" in refused.err
    assert 'engine is not named; add engine = "brochure_fan" say, or give --engine' in refused.err
    run = longlegs("fly", "m", "--engine", "bypass_10.toml", "--json", "-")
    assert run.status == 0
    assert read_json(run.out)["engine"] == "bypass-10 turbofan"


MISSIONS = ", ".join(
    sorted(path.stem for path in PROFILES.glob("*.toml") if "[[segment]]" in path.read_text())
)
REFUSED = [
    (["fly", "coast_wach"], ['did you mean "coast_watch"?', MISSIONS]),
    (["fly", "bypass_5"], ['"bypass_5" is an engine, and a name of a mission is wanted']),
    (["fly", "--engine", "bypas_5"], ["--engine", 'did you mean "bypass_5"?', "straight_jet"]),
    (["fly", "--aircraft", "nothing"], ["--aircraft", "neither a file nor a built-in aircraft"]),
    (["fly", "--json", "nowhere/x.json"], ["--json", "there is no folder"]),
    (["fly", "--json", "."], ["--json", '"." is a folder']),
    (["compare", "--engine", "no"], ["--engine", '"no" is neither a file nor a built-in engine']),
    (["stations", "bypass_5", "--altitude", "35000", "--mach", "0.8", "--rating", "cruise"],
     ["--altitude", "'35000'", '"35000 ft"']),
    (["stations", "bypass_5", "--altitude", "FL350", "--mach", "8", "--rating", "cruise"],
     ["Mach number = 8", "0 to 5"]),
    (["stations", "bypass_5", "--altitude", "FL350", "--mach", "0.8", "--rating", "fast"],
     ["--rating", '"fast" is none of take_off', "windmilling"]),
    (["stations", "bypass_5", "--altitude", "FL350", "--mach", "0.8"], ["give --thrust"]),
    (["stations", "bypass_5", "--altitude", "FL350", "--mach", "0.8", "--thrust", "9 kg"],
     ["--thrust", "'kg' is not a unit of force"]),
    (["stations", "bypass_5", "--altitude", "FL350", "--mach", "0.8", "--rating", "cruise",
      "--day", "hot"], ["--day", "'hot' is not a day"]),
]  # fmt: skip


@pytest.mark.parametrize(("words", "told"), REFUSED)
def test_refusals_name_what_is_wrong_and_what_is_allowed(
    longlegs: Longlegs, words: list[str], told: list[str]
) -> None:
    run = longlegs(*words)
    assert run.status == 2
    assert run.out == ""
    assert run.err.startswith("Refused: ")
    assert "Traceback" not in run.err
    for part in told:
        assert part in run.err


@pytest.mark.parametrize(
    ("old", "new", "told"),
    [
        ('payload = "1.5 t"', "payload = 1.5", ["payload: 1.5 has no unit", '"12.5 t"']),
        ("payload =", "payloud =", ["payloud: unknown key; did you mean payload?"]),
        ('kind = "loiter"', 'kind = "dance"', ["segment 6", "dance", "loiter"]),
    ],
)
def test_a_wrong_file_is_refused_by_file_and_key_and_nothing_is_written(
    longlegs: Longlegs, tmp_path: Path, old: str, new: str, told: list[str]
) -> None:
    written("m.toml", old, new)
    run = longlegs("fly", "m.toml", "--json", "o.json")
    assert run.status == 2
    assert run.err.startswith("Refused: m.toml\n")
    for part in told:
        assert part in run.err
    assert not (tmp_path / "o.json").exists()


@pytest.mark.parametrize("words", [["fly", "--units", "cubits"], ["soar"], ["stations", "x"]])
def test_wrong_usage_is_status_2(longlegs: Longlegs, words: list[str]) -> None:
    run = longlegs(*words)
    assert run.status == 2
    assert "Usage: longlegs" in run.err


def test_a_mission_that_cannot_be_flown(longlegs: Longlegs) -> None:
    """A climb to flight level 470 leaves less thrust at cruise rating than there is drag.

    With an aircraft that has no other limit up there.
    """
    written("m.toml", 'to = "FL390"', 'to = "FL470"')
    write(Path(), "plane", aircraft_content())
    words = ("fly", "m.toml", "--aircraft", "plane", "--json")
    run = longlegs(*words, "o.json")
    assert run.status == 3
    assert run.err == ""
    assert "Traceback" not in run.out
    assert re.search(
        r"Cannot be flown: thrust at cruise rating against drag: (\S+) kN is below (\S+) kN, by "
        r'(\S+) kN \(\d+\.\d %\); in "cruise out" at step 0',
        " ".join(run.out.split()),
    )
    assert "take-off" in run.out
    assert "cruise out, to step 0" in run.out
    assert "cruise home" not in run.out
    assert "what to try  fly lower or slower" in run.out
    record = read_json(Path("o.json").read_text(encoding="utf-8"))
    assert record["flown"] is False
    assert set(record["failure"]) == {"segment", "step", "what", "value", "bound", "unit", "advice"}
    last = record["segments"][-1]
    assert last["name"] == record["failure"]["segment"]
    assert len(last["steps"]["mach"]) == record["failure"]["step"] + 1
    alone = longlegs(*words, "-")
    assert alone.status == 3
    assert read_json(alone.out) == record
    assert alone.err.startswith("Cannot be flown: thrust at cruise rating against drag: ")


def test_too_much_payload_cannot_be_flown(longlegs: Longlegs) -> None:
    written("m.toml", 'payload = "1.5 t"', 'payload = "6 t"')
    run = longlegs("fly", "m.toml")
    assert run.status == 3
    assert "zero-fuel mass: 21,660 kg is above 19,000 kg, by 2,660 kg" in run.out
    assert "carry less payload" in run.out


def test_compare_ranks_the_missions_own_options(longlegs: Longlegs) -> None:
    run = longlegs("compare", "ferry", "--json", "o.json")
    assert run.status == 0
    record = read_json(Path("o.json").read_text(encoding="utf-8"))
    names = [option["option"] for option in record["options"]]
    assert set(names) == {"straight_jet", "bypass_1", "bypass_5", "bypass_10"}
    flown = [option for option in record["options"] if option["flown"]]
    burnt = [option["block_fuel_kg"] for option in flown]
    assert burnt == sorted(burnt)
    assert run.out.splitlines()[3].startswith(f"{names[0]} burns ")
    text = " ".join(run.out.split())
    assert text.endswith(f"{NOT_CHARGED} {CAUTION}")
    for option in record["options"]:
        assert option["option"] in run.out
        assert option["flown"] is (option["failure"] is None)


def test_an_option_that_is_too_weak_stands_last_with_the_reason(longlegs: Longlegs) -> None:
    """Ten kilonewtons at sea level are less than the drag of a climbing twin."""
    Path("weak.toml").write_text(
        'kind = "constant consumption"\nname = "weak"\nstatic_thrust = "10 kN"\n'
        'specific_fuel_consumption = "15 mg/N/s"\n'
    )
    run = longlegs("compare", "--engine", "weak", "--engine", "bypass_5")
    assert run.status == 0
    assert run.out.splitlines()[3].startswith("bypass_5 burns ")
    assert run.out.splitlines()[3].endswith("the only one to fly it.")
    assert "  weak  " in run.out.split("Options that cannot fly it")[1]
    none = longlegs("compare", "--engine", "weak", "--json", "-")
    assert none.status == 3
    assert read_json(none.out)["best"] == ""


STATIONS = ["stations", "bypass_5", "--altitude", "FL350", "--mach", "0.78"]


def test_stations_at_a_rating(longlegs: Longlegs) -> None:
    run = longlegs(*STATIONS, "--rating", "climb", "--day", "ISA+10")
    assert run.status == 0
    assert run.out.startswith(
        "bypass-5 turbofan\none engine at FL350, Mach 0.780, ISA+10, climb rating\n"
    )
    assert " ".join(run.out.split()).endswith(CAUTION)
    record = read_json(longlegs(*STATIONS, "--rating", "climb", "--json", "-").out)
    # The profile's own design point: 11 kN at FL350 and Mach 0.78.
    assert record["thrust_n"] == pytest.approx(11e3, rel=1e-6)
    assert set(record) >= {
        "thrust_n", "fuel_flow_kg_per_s", "specific_fuel_consumption_kg_per_n_s", "bypass_ratio",
        "overall_pressure_ratio", "turbine_entry_temperature_k", "binding_limit", "stations",
        "energy", "efficiencies",
    }  # fmt: skip


def test_altitude_in_feet_is_the_flight_level(longlegs: Longlegs) -> None:
    feet = ["stations", "bypass_5", "--altitude", "35000 ft", "--mach", "0.78"]
    assert longlegs(*feet, "--rating", "cruise") == longlegs(*STATIONS, "--rating", "cruise")


def test_a_thrust_beyond_the_rating_is_status_3(longlegs: Longlegs) -> None:
    run = longlegs(*STATIONS, "--thrust", "20 kN")
    assert run.status == 3
    assert "Beyond the rating: 20.00 kN is asked for and maximum continuous gives " in run.out
    alone = longlegs(*STATIONS, "--thrust", "20 kN", "--json", "-")
    assert alone.status == 3
    record = read_json(alone.out)
    assert record["outcome"] == "beyond_rating"
    assert 10e3 < record["thrust_n"] < 20e3
    assert alone.err.startswith("Beyond the rating: ")


def test_a_thrust_below_idle_is_a_warning(longlegs: Longlegs) -> None:
    run = longlegs(*STATIONS, "--thrust", "-9 kN")
    assert run.status == 0
    assert "Below idle: " in run.out


def test_windmilling_is_asked_for_like_a_rating(longlegs: Longlegs) -> None:
    run = longlegs(*STATIONS, "--rating", "windmilling", "--json", "-")
    assert run.status == 0
    record = read_json(run.out)
    assert record["thrust_n"] < 0.0
    assert record["specific_fuel_consumption_kg_per_n_s"] is None


def test_list_shows_what_there_is(longlegs: Longlegs) -> None:
    run = longlegs("list")
    assert run.status == 0
    text = " ".join(run.out.split())
    for profile in built_in():
        assert f"{profile.name} {profile.note}" in text
    assert run.out.index("straight_jet") < run.out.index("bypass_5") < run.out.index("bypass_10")


def test_built_in_profiles_are_found_by_name() -> None:
    assert {profile.kind for profile in built_in()} == {"mission", "aircraft", "engine"}
    for profile in built_in():
        assert find(profile.name, profile.kind) == profile.path


def test_anything_else_is_not_hidden(
    monkeypatch: pytest.MonkeyPatch,
) -> None:
    """A fault of the program itself keeps its traceback; Python ends with status 1 for it."""

    def fail(*_: object) -> None:
        raise RuntimeError("a fault of the program")

    monkeypatch.setattr("mission.library.built_in", fail)
    monkeypatch.setattr(sys, "argv", ["longlegs", "list"])
    with pytest.raises(RuntimeError, match="a fault of the program"):
        command_line.main()


def test_help_carries_the_caution(longlegs: Longlegs) -> None:
    run = longlegs("--help")
    assert run.status == 0
    assert CAUTION in " ".join(run.out.split())
    for command in ("fly", "compare", "stations", "envelope", "fit", "list"):
        assert longlegs(command, "--help").status == 0


def loaded_by(*words: str) -> set[str]:
    """Names of all modules that a process of the command ends with."""
    code = (
        f"import sys; sys.argv = {['longlegs', *words]}\n"
        "from mission.command_line import main\n"
        "try:\n    main()\nexcept SystemExit as end:\n    assert not end.code\n"
        "print('loaded:', *sorted(sys.modules))"
    )
    done = subprocess.run(
        [sys.executable, "-c", code], cwd=ROOT, capture_output=True, text=True, check=True
    )
    return set(done.stdout.splitlines()[-1].split())


def test_help_loads_nothing_heavy() -> None:
    """``--help`` has to answer at once."""
    loaded = {name.split(".")[0] for name in loaded_by("--help")}
    assert "typer" in loaded
    assert not loaded & HEAVY


def test_flying_loads_no_room_that_it_does_not_use() -> None:
    loaded = loaded_by("fly")
    assert "engine.cycles.turbofan" in loaded
    unused = ("fitting", "fit_points", "brochure", "tabulated", "points_file")
    assert not loaded & {"tomli_w", "engine.envelope", *(f"engine.options.{n}" for n in unused)}
