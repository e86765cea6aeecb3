"""An engine read from a table: at its points, between them, beyond them, and tables refused."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.interpolate import PchipInterpolator

from engine.atmosphere import flight_condition
from engine.envelope import COLUMNS, Level
from engine.errors import InputRefused
from engine.fuels import FUELS
from engine.interface import Engine, Outcome
from engine.options.loading import load_engine
from engine.options.monotone import interpolate
from engine.options.tabulated import TabulatedEngine

HEIGHTS, MACHS = (0.0, 5000.0, 11000.0, 12000.0, 13000.0), (0.0, 0.2, 0.5, 0.8, 0.9)
# Ratings, idles and shares of an invented engine: a factor on thrust each.
FACTORS: dict[Level, float] = {
    "take_off": 1.0, "maximum_continuous": 0.95, "climb": 0.9, "cruise": 0.8,
    "flight_idle": 0.05, "ground_idle": 0.04, 0.3: 0.335, 0.6: 0.62, 1.0: 1.0,
}  # fmt: skip
HEADER = ",".join(COLUMNS)
Row = tuple[Level, float, float]


def thrust_of(level: Level, altitude: float, mach: float) -> float:
    """Static 40 kN, falling with altitude and speed."""
    return 4e4 * FACTORS[level] * (1.0 - altitude / 16000.0) * (1.0 - 0.4 * mach)


def fuel_of(level: Level, altitude: float, mach: float) -> float:
    return 0.02 + 1.5e-5 * thrust_of(level, altitude, mach) * (1.0 + 0.5 * mach)


def lines(
    factors: dict[Level, float] = FACTORS, thrust: Callable[..., float] = thrust_of
) -> list[str]:
    """A table, a line a point, no header."""
    return [
        f"{height},{mach},{level},{thrust(level, height, mach)!r},{fuel_of(level, height, mach)!r}"
        for level in factors
        for height in HEIGHTS
        for mach in MACHS
    ]


def engine_of(folder: Path, text: str, extra: str = "") -> Engine:
    """The engine of a table, read from files."""
    (folder / "t.csv").write_text(text, encoding="utf-8")
    toml = f'kind = "tabulated"\nname = "table"\npoints = "t.csv"\nday = "ISA+10"\n{extra}'
    (folder / "t.toml").write_text(toml, encoding="utf-8")
    return load_engine(folder / "t.toml")


def table(*rows: str) -> str:
    return "\n".join([HEADER, *rows]) + "\n"


@pytest.fixture(scope="module")
def engine(tmp_path_factory: pytest.TempPathFactory) -> Engine:
    return engine_of(tmp_path_factory.mktemp("table"), table(*lines()))


@given(
    st.lists(st.floats(0.01, 3.0), min_size=2, max_size=7),
    st.lists(st.floats(-5.0, 5.0), min_size=8, max_size=8),
    st.floats(0.0, 1.0),
)
def test_rows_are_interpolated_as_scipy_does_one(
    steps: list[float], values: list[float], way: float
) -> None:
    x = np.cumsum([0.0, *steps])
    y = np.array(values[: x.size])
    at = np.array([way * x[-1]])
    found = interpolate(x[None], y[None], at)
    if x.size > 2:
        assert found == pytest.approx(PchipInterpolator(x, y)(at), abs=1e-9)
    cell = min(int(np.searchsorted(x, at[0], side="right")) - 1, x.size - 2)
    low, high = sorted(y[cell : cell + 2])
    assert low - 1e-9 <= found[0] <= high + 1e-9


def test_at_its_points_the_table_is_given_back(engine: Engine) -> None:
    height, mach = (axis.ravel() for axis in np.meshgrid(HEIGHTS, MACHS))
    flight = flight_condition(height, mach, 10.0)
    for level in FACTORS:
        wanted = [thrust_of(level, h, m) for h, m in zip(height, mach, strict=True)]
        burnt = [fuel_of(level, h, m) for h, m in zip(height, mach, strict=True)]
        if isinstance(level, str):
            state = engine.at_rating(flight, level)
            assert state.net_thrust == pytest.approx(wanted, rel=1e-12)
        else:
            state = engine.at_thrust(flight, wanted, rating="take_off")
        assert state.fuel_flow == pytest.approx(burnt, rel=1e-9)
        assert np.all(state.outcome == Outcome.MET)


@given(st.floats(0.0, 13000.0), st.floats(0.0, 0.9), st.lists(st.floats(0.0, 1.0), min_size=2))
def test_more_thrust_burns_more_between_the_points(
    engine: Engine, height: float, mach: float, ways: list[float]
) -> None:
    flight = flight_condition(height, mach, 10.0)
    idle, most = (float(engine.at_rating(flight, r).net_thrust) for r in ("flight_idle", "climb"))
    wanted = idle + np.sort(ways) * (most - idle)
    state = engine.at_thrust(flight, wanted, rating="climb")
    assert np.all(state.outcome == Outcome.MET)
    assert np.all(np.diff(state.fuel_flow) >= -1e-12)
    assert state.net_thrust == pytest.approx(wanted, rel=1e-12)


def test_what_scales_with_the_air_is_read_exactly_on_each_side_of_the_tropopause(
    tmp_path: Path,
) -> None:
    """Thrust over pressure with a kink at 11 km comes back between the points of both sides."""

    def scaled(level: Level, height: float, mach: float) -> float:
        air = flight_condition(height, mach, 10.0)
        return float(FACTORS[level] * air.static_pressure * (1.0 + max(11000.0 - height, 0) / 2e4))

    engine = engine_of(tmp_path, table(*lines(thrust=scaled)))
    heights = np.linspace(0.0, 13000.0, 53)
    found = engine.at_rating(flight_condition(heights, 0.4, 10.0), "climb").net_thrust
    assert found == pytest.approx([scaled("climb", h, 0.4) for h in heights], rel=1e-12)


def test_beyond_the_rating_and_below_idle_are_flagged_with_what_there_is(engine: Engine) -> None:
    flight = flight_condition(5000.0, 0.5, 10.0)
    most, least = engine.at_rating(flight, "cruise"), engine.at_rating(flight, "flight_idle")
    asked = engine.at_thrust(flight, [0.0, 9e3, 9e4], rating="cruise")
    assert asked.outcome.tolist() == [Outcome.AT_IDLE, Outcome.MET, Outcome.BEYOND_RATING]
    assert asked.net_thrust.tolist() == [float(least.net_thrust), 9e3, float(most.net_thrust)]
    assert float(least.fuel_flow) == asked.fuel_flow[0] < asked.fuel_flow[1]
    assert asked.fuel_flow[2] == float(most.fuel_flow)
    low = engine.at(flight, rating="cruise", net_thrust=0.0, idle="ground_idle")
    assert low.net_thrust == engine.at_rating(flight, "ground_idle").net_thrust


def test_beyond_the_table_there_is_no_answer_and_neighbours_are_not_touched(
    engine: Engine,
) -> None:
    day = np.array([10.0, 10.0, 10.0, 0.0, 10.0])
    flight = flight_condition([5e3, 13.1e3, 5e3, 5e3, 13e3], [0.5, 0.5, 0.91, 0.5, 0.9], day)
    for state in (
        engine.at_rating(flight, "climb"),
        engine.at_thrust(flight, 3e3, rating="climb"),
    ):
        inside = [0, 5, 5, 5, 0]
        assert state.outcome.tolist() == inside
        assert state.unanswered_count == 3
        assert np.all(state.net_thrust[1:4] == 0.0)
        assert np.all(state.fuel_flow[1:4] == 0.0)
    alone = engine.at_rating(flight.at(0), "climb")
    assert engine.at_rating(flight, "climb").net_thrust[0] == alone.net_thrust


def test_a_rating_that_the_table_lacks_is_refused_by_name(tmp_path: Path) -> None:
    less = {level: f for level, f in FACTORS.items() if level not in ("climb", "ground_idle")}
    engine = engine_of(tmp_path, table(*lines(less)))
    assert engine.ratings == ("take_off", "maximum_continuous", "cruise")
    flight = flight_condition(0.0, 0.0, 10.0)
    for name in ("climb", "ground_idle", "windmilling"):
        with pytest.raises(InputRefused, match=f"'{name}' is no rating of table; its table has ta"):
            engine.at_rating(flight, name)


def test_an_unlit_engine_drags_as_the_table_says_or_is_refused(
    tmp_path: Path, engine: Engine
) -> None:
    flight = flight_condition(5000.0, [0.2, 0.8], 10.0)
    assert not engine.is_known_unlit
    with pytest.raises(InputRefused, match="table of table has no rows rated windmilling; add"):
        engine.windmilling(flight)
    unlit = [f"{h},{m},windmilling,{-1e3 * m},0" for h in HEIGHTS for m in MACHS]
    other = engine_of(tmp_path, table(*lines(), *unlit))
    state = other.windmilling(flight)
    assert state.net_thrust == pytest.approx([-200.0, -800.0], rel=1e-12)
    assert state.fuel_flow.tolist() == [0.0, 0.0]
    beyond = other.windmilling(flight_condition(5000.0, [0.2, 0.95], 10.0))
    assert beyond.outcome.tolist() == [Outcome.MET, Outcome.OUTSIDE_TABLE]
    assert beyond.net_thrust[1] == 0.0
    assert other.is_known_unlit


def test_comments_blank_lines_dashes_and_a_share_of_zero(tmp_path: Path, engine: Engine) -> None:
    text = table("", "# a remark", *lines()).replace("flight_idle", "0").replace("take_", "take-")
    other = engine_of(tmp_path, "# by hand\n\n" + text, 'fuel = "hydrogen"\n')
    flight = flight_condition(3000.0, 0.3, 10.0)
    for rating in ("take_off", "flight_idle"):
        there = engine.at_rating(flight, rating).fuel_flow
        assert other.at_rating(flight, rating).fuel_flow == there
    assert other.fuel == FUELS["hydrogen"]


def test_thrust_above_the_dry_shares_is_read_along_those_of_reheat(tmp_path: Path) -> None:
    """Along the shares, or, where the table has none, on a straight line to the full rating."""
    lit: dict[Level, float] = {**FACTORS, "maximum_afterburning": 1.6, 1.4: 1.24, 2.0: 1.6}

    def thrust_lit(level: Level, altitude: float, mach: float) -> float:
        return lit[level] * thrust_of("take_off", altitude, mach)

    def row(level: Level, height: float, mach: float, more: float) -> str:
        thrust = thrust_lit(level, height, mach)
        return f"{height},{mach},{level},{thrust!r},{0.02 + 1.5e-5 * thrust + more!r}"

    hungry, whole = (
        [row(key, h, m, more if key == 1.4 else 0.0) for key in lit for h in HEIGHTS for m in MACHS]
        for more in (0.4, 0.0)
    )
    flight = flight_condition(0.0, 0.0, 10.0)
    asked = {"rating": "maximum_afterburning"}
    engine = engine_of(tmp_path, table(*hungry))
    assert engine.ratings[0] == "maximum_afterburning"
    thrust = 4e4 * 1.24
    assert float(engine.at_thrust(flight, thrust, **asked).fuel_flow) == pytest.approx(
        0.02 + 1.5e-5 * thrust + 0.4
    )
    few = [line for line in whole if ",1.4," not in line and ",2.0," not in line]
    straight = engine_of(tmp_path, table(*few)).at_thrust(flight, [thrust, 7e4], **asked)
    assert straight.outcome.tolist() == [Outcome.MET, Outcome.BEYOND_RATING]
    assert straight.fuel_flow == pytest.approx([0.02 + 1.5e-5 * thrust, 0.02 + 1.5e-5 * 6.4e4])


def changed(row: int, column: int, value: str) -> Callable[[list[str]], list[str]]:
    """The table with one cell changed; row 0 stands in line 2."""

    def change(rows: list[str]) -> list[str]:
        cells = rows[row].split(",")
        cells[column] = value
        return [*rows[:row], ",".join(cells), *rows[row + 1 :]]

    return change


def without(word: str) -> Callable[[list[str]], list[str]]:
    return lambda rows: [row for row in rows if f",{word}," not in row]


REFUSED = [
    (changed(3, 3, "much"), r"line 5: net_thrust_n = 'much' is no number"),
    (changed(3, 3, "nan"), r"line 5: net_thrust_n = nan is no finite number"),
    (changed(3, 0, "40000"), r"line 5: pressure_altitude_m = 40000 is outside -2000 to 30000"),
    (changed(3, 1, "-0.1"), r"line 5: mach = -0.1 is outside 0 to 5"),
    (changed(3, 2, "fast"), r"line 5: rating = 'fast' is none of maximum_afterburning, take_off"),
    (changed(3, 4, "0"), r"line 5: fuel_flow_kg_per_s = 0; a lit engine burns fuel"),
    (changed(3, 4, "1,2"), r"line 5: 6 values stand where the header names 5"),
    (lambda rows: [*rows, rows[7]], r"line 227: take_off at pressure_altitude_m 5000 and mach 0.5 "
     r"is given already in line 9: 22000 N there, 22000 N here"),
    (lambda rows: rows[1:], r"no row for take_off at pressure_altitude_m 0 and mach 0: 224 rows "
     r"stand where 5 altitudes, 5 Mach numbers and 9 ratings need 225"),
    (changed(3, 1, "0.81"), r"no row for take_off at pressure_altitude_m 0 and mach 0.8: 225 rows"),
    (changed(175, 3, "12000"), r"line 177: share 0.6 at pressure_altitude_m 0 and mach 0 has 12000 "
     r"N, which is not above the 13400 N of share 0.3 there \(line 152\)"),
    (changed(76, 3, "1000"), r"line 78: cruise at .* and mach 0.2 has 1000 N, which is not above "
     r"the 1840 N of flight_idle there \(line 103\)"),
    (without("flight_idle"), r"there is no row of flight_idle"),
    (lambda rows: without("0.3")(without("0.6")(rows)), r"shares above 0 and up to 1 are 1 here, "
     r"and at least 2 are needed"),
    (lambda rows: [row for row in rows if row.startswith("0.0,")], r"1 value of pressure_altitude"),
    (lambda rows: [], "0 value of pressure_altitude_m"),
]  # fmt: skip


@pytest.mark.parametrize(("change", "said"), REFUSED)
def test_a_wrong_table_is_refused_by_line_with_what_shows_it(
    tmp_path: Path, change: Callable[[list[str]], list[str]], said: str
) -> None:
    with pytest.raises(InputRefused, match=said) as caught:
        engine_of(tmp_path, table(*change(lines())))
    assert caught.value.where == str(tmp_path / "t.csv")


@pytest.mark.parametrize(
    ("text", "said"),
    [
        ("", "line 1: the header is pressure_altitude_m,mach,rating,net_thrust_n,"),
        ("# a remark\n1,2,3,4,5\n", "line 2: the header is .*, not 1, 2, 3, 4, 5"),
    ],
)
def test_a_wrong_header_is_refused(tmp_path: Path, text: str, said: str) -> None:
    with pytest.raises(InputRefused, match=said):
        engine_of(tmp_path, text)


def test_files_that_are_not_there_or_no_text(tmp_path: Path) -> None:
    engine = engine_of(tmp_path, table(*lines()))
    assert isinstance(engine, TabulatedEngine)
    (tmp_path / "t.csv").write_bytes(b"\xff\xfe\x00")
    with pytest.raises(InputRefused, match=r"t\.csv: is not a text file in UTF-8"):
        load_engine(tmp_path / "t.toml")
    (tmp_path / "t.csv").unlink()
    with pytest.raises(InputRefused, match="there is no such file; points names a CSV beside"):
        load_engine(tmp_path / "t.toml")
    (tmp_path / "t.csv").mkdir()
    with pytest.raises(InputRefused, match="is a folder"):
        load_engine(tmp_path / "t.toml")
    (tmp_path / "t.toml").write_text('kind = "tabulated"\nname = "x"\npoints = "t.csv"\n')
    with pytest.raises(InputRefused, match="day: is missing"):
        load_engine(tmp_path / "t.toml")
