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


def test_files_that_are_none_are_named(tmp_path: Path) -> None:
    for path, said in ((tmp_path / "no.csv", "no such file"), (tmp_path, "is a folder")):
        with pytest.raises(InputRefused, match=said):
            read_fit_points(path)
    (tmp_path / "b.csv").write_bytes(b"\xff\xfe\x00")
    with pytest.raises(InputRefused, match="not a text file"):
        read_fit_points(tmp_path / "b.csv")
