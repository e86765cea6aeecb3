"""Reading the points of a fit: what a file says, and what is refused of it."""

from __future__ import annotations

import re
from pathlib import Path

import numpy as np
import pytest

from engine.errors import InputRefused
from engine.options.fit_points import DEMAND, read_fit_points


def csv(folder: Path, text: str) -> Path:
    path = folder / "points.csv"
    path.write_text(text, encoding="utf-8")
    return path


HEADER = "pressure_altitude_m,mach,rating,net_thrust_n,fuel_flow_kg_per_s"


def test_points_are_read_by_the_names_of_their_columns(tmp_path: Path) -> None:
    text = """\
# measured on a stand

rating,mach,pressure_altitude_m,temperature_deviation_k,fuel_flow_kg_per_s,net_thrust_n
take-off,0,0,15,,75000
  # indented
0.5 , 0.78,10668,,0.15,8000
,0.78,10668,-5,0.2,11000
"""
    points = read_fit_points(csv(tmp_path, text))
    assert points.line.tolist() == [4, 6, 7]
    assert points.rating.tolist() == ["take_off", DEMAND, DEMAND]
    assert points.temperature_deviation.tolist() == [15.0, 0.0, -5.0]
    assert points.net_thrust.tolist() == [75000.0, 8000.0, 11000.0]
    assert np.isnan(points.fuel_flow[0])
    assert points.data_count == 3


@pytest.mark.parametrize(
    ("text", "line", "said"),
    [
        ("", "line 1", "there is no column pressure_altitude_m"),
        (HEADER, "", "there are no points below the header"),
        (HEADER.replace("mach", "mack"), "line 1", "'mack' is no column; did you mean mach?"),
        (HEADER + ",mach", "line 1", "mach stands there twice"),
        (HEADER + "\n0,0,climb,1", "line 2", "4 values stand where the header names 5"),
        (HEADER + "\n0,0,climb,,", "line 2", "both empty"),
        (HEADER + "\n0,0,,5000,", "line 2", "fuel_flow_kg_per_s is empty; where no rating"),
        (HEADER + "\n0,0,,,0.1", "line 2", "net_thrust_n is empty; where no rating"),
        (HEADER + "\n0,0,climb,x,0.1", "line 2", "net_thrust_n = 'x' is no number"),
        (HEADER + "\n0,0,climb,nan,0.1", "line 2", "net_thrust_n = nan is no finite number"),
        (HEADER + "\n\n0,0,climb,1,0", "line 3", "fuel_flow_kg_per_s = 0; a lit engine"),
        (HEADER + "\n0,6,climb,1,1", "line 2", "mach = 6 is outside 0 to 5"),
        (HEADER + "\n4e4,0,climb,1,1", "line 2", "= 40000 is outside -2000 to 30000"),
        (HEADER + "\n0,0,clim,1,1", "line 2", "rating = 'clim' is none of take_off"),
        (HEADER + "\n0,0,clim,1,1", "line 2", "did you mean climb?"),
        (HEADER + "\n0,0,windmilling,-1,0.1", "line 2", "rating = 'windmilling' is none of"),
        (HEADER + "\n0,0,2.5,1,1", "line 2", "rating = 2.5 is outside 0 to 2"),
        (HEADER + "\n0,0,climb,100,1.03", "line 2", "is 1.03e+04 mg/(N s), outside the 2 to 300"),
        (HEADER + "\n0,0,climb,100,1.03", "line 2", "kg/h in place of kg/s or kN in place of N?"),
        (HEADER + "\n0,0,climb,100,0.5", "line 2", "of engines: kN in place of N?"),
        (HEADER + "\n0,0,climb,100,100", "line 2", "of engines: kg/h in place of kg/s?"),
        (
            HEADER + "\n0,0,,100000,0.1",
            "line 2",
            "is 1 mg/(N s), outside the 2 to 300 of engines; c",
        ),
        (HEADER + "\n0,0,climb,-1,", "line 2", "net_thrust_n = -1; only an idle may give less"),
        (
            HEADER + "\n0,0,climb,100000,1.03\n0,0,climb,120000,1",
            "line 3",
            "climb at 0 m, Mach 0, ISA is given already in line 2: 100000 N and 1.03 kg/s there",
        ),
        (HEADER + "\n0,0,,1e4,.2\n0,0,,1e4,.3", "line 3", "this thrust at 0 m, Mach 0, ISA is"),
        (HEADER + "\n0,0,climb,1e4,\n0,0,climb,,1", "line 3", "10000 N there, 1 kg/s here"),
        ("# day: ISA+10\n" + HEADER + "\n0,0,climb,1,1", "line 1", "10 K from standard"),
    ],
)
def test_points_that_cannot_be_read_are_named(
    tmp_path: Path, text: str, line: str, said: str
) -> None:
    with pytest.raises(InputRefused, match=re.escape(said)) as caught:
        read_fit_points(csv(tmp_path, text))
    assert caught.value.key == line
    assert caught.value.where.endswith("points.csv")


def test_what_looks_alike_and_is_not_is_read(tmp_path: Path) -> None:
    """Thrust near idle, other thrusts and days, and rows of an unlit engine, which are counted."""
    text = f"""\
{HEADER},temperature_deviation_k
9000,0.8,flight_idle,-300,0.05,0
9000,0.8,ground_idle,3,0.05,0
9000,0.8,0.02,2,0.051,0
9000,0.8,0.05,40,0.053,0
9000,0.8,,5000,0.1,0
9000,0.8,,5000,0.11,10
9000,0.8,,6000,0.12,0
9000,0.8,windmilling,-900,0,0
"""
    points = read_fit_points(csv(tmp_path, text))
    assert points.line.tolist() == [2, 3, 4, 5, 6, 7, 8]
    assert points.unlit_count == 1
    assert points.with_static(1e4, 0.1).unlit_count == 1


def test_files_that_are_none_are_named(tmp_path: Path) -> None:
    for path, said in ((tmp_path / "no.csv", "no such file"), (tmp_path, "is a folder")):
        with pytest.raises(InputRefused, match=said):
            read_fit_points(path)
    (tmp_path / "b.csv").write_bytes(b"\xff\xfe\x00")
    with pytest.raises(InputRefused, match="not a text file"):
        read_fit_points(tmp_path / "b.csv")
