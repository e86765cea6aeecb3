"""The drag polar of an aircraft file, in every kind, and what is refused about it."""

from __future__ import annotations

from math import radians
from pathlib import Path

import numpy as np
import pytest
from mission_files import Content, aircraft_content, write

from engine.atmosphere import flight_condition
from engine.errors import InputRefused
from mission.aerodynamics import PolarCoverage, drag_coefficient, polar_coverage
from mission.aircraft import Aircraft, load_aircraft
from mission.forces import load_factor_of_drag
from mission.polars.drag_table import DragTable
from mission.polars.over_mach import ParabolaOverMach
from mission.polars.parabola import Parabola, korn_drag_rise

KORN = {"technology_factor": 0.95, "sweep": "25 deg", "thickness_ratio": 0.11}
OVER_MACH: Content = {
    "machs": [0.1, 0.86, 1.05, 1.5],
    "zero_lift_drag_coefficient": [0.0169, 0.0169, 0.0428, 0.0382],
    "induced_drag_factor": [0.117, 0.117, 0.128, 0.252],
}
TABLE: Content = {
    "machs": [0.0, 0.8],
    "lift_coefficients": [0.0, 0.3, 0.6],
    "drag_coefficients": [[0.018, 0.022, 0.034], [0.019, 0.024, 0.041]],
}
CSV = """# invented
mach, lift_coefficient, drag_coefficient
0.0, 0.0, 0.018
0.0, 0.6, 0.034
0.0, 0.3, 0.022
0.8, 0.0, 0.019
0.8, 0.3, 0.024
0.8, 0.6, 0.041
"""


def loaded(folder: Path, polar: Content, points: str | None = None) -> Aircraft:
    """The test twin with a polar of its own, and a CSV beside it."""
    if points is not None:
        (folder / "polar.csv").write_text(points, encoding="utf-8")
    return load_aircraft(
        write(folder, "aircraft", aircraft_content(drag_polar=None) | {"drag_polar": polar})
    )


def test_a_drag_rise_from_the_wing(tmp_path: Path) -> None:
    parabola = {"zero_lift_drag_coefficient": 0.0175, "induced_drag_factor": 0.042}
    plane = loaded(tmp_path, {**parabola, "drag_rise": KORN})
    assert plane.polar == Parabola(0.0175, 0.042, 0.0, korn_drag_rise(0.95, radians(25.0), 0.11))
    said = "\n".join(plane.assumed)
    assert "drag_rise" not in said
    assert "drag_polar.least_drag_lift_coefficient = 0.0" in said


def test_a_drag_rise_at_a_mach_number_says_what_it_assumes(tmp_path: Path) -> None:
    rise = {"drag_rise": {"drag_divergence_mach": 0.8}}
    parabola = {"zero_lift_drag_coefficient": 0.0175, "induced_drag_factor": 0.042}
    said = loaded(tmp_path, {**parabola, **rise}).assumed
    assert "drag_polar.drag_rise.at_lift_coefficient = 0.5" in said
    assert "drag_polar.drag_rise.fall_with_lift_coefficient = 0.1" in said


def test_a_parabola_over_mach(tmp_path: Path) -> None:
    plane = loaded(tmp_path, OVER_MACH)
    assert plane.polar == ParabolaOverMach(
        (0.1, 0.86, 1.05, 1.5),
        (0.0169, 0.0169, 0.0428, 0.0382),
        (0.117, 0.117, 0.128, 0.252),
        (0.0, 0.0, 0.0, 0.0),
    )
    coverage = polar_coverage(plane.polar)
    assert coverage is not None
    assert coverage.mach == (0.1, 1.5)
    assert "drag_polar.interpolation = monotone cubic" in plane.assumed
    with_least = OVER_MACH | {"least_drag_lift_coefficient": [0.03, 0.03, 0.01, 0.0]}
    linear = loaded(tmp_path, with_least | {"interpolation": "linear"})
    assert drag_coefficient(linear.polar, 0.5, 0.48) == pytest.approx(
        0.0169 + 0.117 * 0.47**2, rel=1e-14
    )
    assert not any("interpolation" in line for line in linear.assumed)


def test_a_table_in_lists_and_in_a_file_are_one(tmp_path: Path) -> None:
    inline = loaded(tmp_path, TABLE).polar
    from_file = loaded(tmp_path, {"points": "polar.csv"}, CSV).polar
    assert isinstance(inline, DragTable)
    assert inline == from_file
    assert polar_coverage(inline) == PolarCoverage((0.0, 0.8), (0.0, 0.6))
    assert drag_coefficient(inline, 0.3, [0.0, 0.8]).tolist() == pytest.approx([0.022, 0.024])
    linear = loaded(tmp_path, {"points": "polar.csv", "interpolation": "linear"}, CSV).polar
    assert drag_coefficient(linear, 0.15, 0.4) == pytest.approx(
        np.mean([0.018, 0.022, 0.019, 0.024]), rel=1e-14
    )


def test_a_table_turns_as_tightly_as_the_parabola_it_is_made_of(tmp_path: Path) -> None:
    lifts = [i / 20.0 for i in range(33)]
    row = [0.0175 + 0.042 * lift**2 for lift in lifts]
    law = {"zero_lift_drag_coefficient": 0.0175, "induced_drag_factor": 0.042}
    table = {"machs": [0.0, 0.9], "lift_coefficients": lifts, "drag_coefficients": [row, row]}
    flight = flight_condition([3000.0, 6000.0], [0.4, 0.6])
    most = [
        load_factor_of_drag(
            loaded(tmp_path, polar),
            flight,
            np.array([2e4, 2e4]),
            np.array([4e4, 5e4]),
            np.array([9.0, 9.0]),
        )
        for polar in (law, table)
    ]
    # By 0.05 of lift coefficient a table is off by 3e-5 of drag here, and load with it.
    assert most[1] == pytest.approx(most[0], rel=3e-5)


def without(content: Content, *names: str) -> Content:
    return {name: value for name, value in content.items() if name not in names}


@pytest.mark.parametrize(
    ("polar", "match"),
    [
        ({}, r"drag_polar: give either|drag_polar\.zero_lift_drag_coefficient: is missing"),
        (
            {"zero_lift_drag_coefficient": 0.02, "induced_drag_factor": 0.04,
             "drag_rise": KORN | {"drag_divergence_mach": 0.8}},
            r"drag_rise\.drag_divergence_mach: unknown key\. Allowed here: sweep, technology_fac",
        ),
        (
            {"zero_lift_drag_coefficient": 0.02, "induced_drag_factor": 0.04,
             "drag_rise": without(KORN, "sweep")},
            r"drag_polar\.drag_rise\.sweep: is missing",
        ),
        (
            {"zero_lift_drag_coefficient": 0.02, "induced_drag_factor": 0.04,
             "drag_rise": KORN | {"sweep": 25}},
            r'drag_rise\.sweep: 25 has no unit: an angle .* for example "25 deg"',
        ),
        (
            {"zero_lift_drag_coefficient": 0.02, "induced_drag_factor": 0.04,
             "drag_rise": KORN | {"sweep": "70 deg"}},
            r"drag_rise\.sweep: = '70 deg'; it should be less than or equal to 1\.047.* rad",
        ),
        (
            {"zero_lift_drag_coefficient": 0.02, "induced_drag_factor": 0.04,
             "drag_rise": KORN | {"sweep": "60 deg"}},
            r"drag_rise: these make the drag divergence Mach number 1\.460 at no lift, outside",
        ),
        (
            OVER_MACH | {"machs": [0.1, 0.86, 0.86, 1.5]},
            r"drag_polar: machs has to rise from entry to entry: 0\.86 follows 0\.86",
        ),
        (OVER_MACH | {"machs": 0.8}, r"drag_polar\.machs: = 0\.8; a list belongs here"),
        (OVER_MACH | {"machs": [0.1, 0.2, 0.3, 7.0]}, r"drag_polar\.machs 4: = 7\.0; it should be"),
        (OVER_MACH | {"machs": [0.1]}, r"drag_polar: machs has 1 entries; at least 2 are needed"),
        (
            OVER_MACH | {"zero_lift_drag_coefficient": [0.02, 0.02, 0.04]},
            "zero_lift_drag_coefficient has 3 entries where machs has 4; give one for each",
        ),
        (
            OVER_MACH | {"least_drag_lift_coefficient": [0.1]},
            "least_drag_lift_coefficient has 1 entries where machs has 4",
        ),
        (OVER_MACH | {"induced_drag_factor": 0.1}, r"induced_drag_factor: = 0\.1; a list belongs"),
        (without(OVER_MACH, "machs"), r"drag_polar\.machs: is missing"),
        (
            OVER_MACH | {"drag_rise": {"drag_divergence_mach": 0.8}},
            r"drag_polar\.drag_rise: unknown key\. Allowed here: induced_drag_factor, interpolat",
        ),
        (
            OVER_MACH | {"interpolation": "cubic"},
            r"drag_polar\.interpolation: = 'cubic'; allowed: 'monotone cubic' or 'linear'",
        ),
        (
            TABLE | {"drag_coefficients": [[0.018, 0.022, 0.034]]},
            "drag_coefficients has 1 entries where machs has 2",
        ),
        (
            TABLE | {"drag_coefficients": [[0.018, 0.022], [0.019, 0.024, 0.041]]},
            "drag_coefficients 1 has 2 entries where lift_coefficients has 3",
        ),
        (
            TABLE | {"drag_coefficients": [[0.018, 0.022, -0.1], [0.019, 0.024, 0.041]]},
            r"drag_polar\.drag_coefficients 1: 3: = -0\.1; it should be greater than 0",
        ),
        (
            TABLE | {"lift_coefficients": [0.0, 0.3], "drag_coefficients": [[0.1, 0.2]] * 2},
            "lift_coefficients has 2 entries; at least 3 are needed",
        ),
        (without(TABLE, "lift_coefficients"), r"drag_polar\.lift_coefficients: is missing"),
        (TABLE | {"points": "polar.csv"}, r"drag_polar\.machs: unknown key|unknown key\. Allowed"),
    ],
)  # fmt: skip
def test_refusals_name_the_key(tmp_path: Path, polar: Content, match: str) -> None:
    with pytest.raises(InputRefused, match=match) as refusal:
        loaded(tmp_path, polar)
    assert refusal.value.where.endswith("aircraft.toml")


def test_a_polar_that_is_no_table_or_not_there(tmp_path: Path) -> None:
    for polar, match in ((3, "drag_polar: = 3; a table belongs"), (None, "drag_polar: is missing")):
        content = aircraft_content(drag_polar=None) | ({} if polar is None else {"drag_polar": 3})
        with pytest.raises(InputRefused, match=match):
            load_aircraft(write(tmp_path, "aircraft", content))


@pytest.mark.parametrize(
    ("points", "key", "match"),
    [
        ("", "line 1", "the header is mach,lift_coefficient,drag_coefficient, not nothing"),
        ("mach,cl,cd\n", "line 1", "not mach, cl, cd"),
        (CSV + "0.8, 0.6\n", "line 9", "2 values stand where the header names 3"),
        (CSV + "0.8, 0.9, high\n", "line 9", "drag_coefficient = 'high' is no number"),
        (CSV + "0.8, 0.9, 0\n", "line 9", "drag_coefficient = 0; drag is above 0"),
        (CSV + "7.0, 0.9, 0.02\n", "line 9", "mach = 7 is outside 0 to 5"),
        (CSV + "0.8, nan, 0.02\n", "line 9", "lift_coefficient = nan is no finite number"),
        (
            CSV + "0.8, 0.6, 0.05\n",
            "line 9",
            r"mach 0\.8 and lift_coefficient 0\.6 is given already in line 8: 0\.041 there, 0\.05",
        ),
        (
            CSV + "0.8, 0.9, 0.05\n",
            "",
            r"there is no row for mach 0 and lift_coefficient 0\.9: 7 rows stand where 2 Mach "
            "numbers and 4 lift coefficients need 8",
        ),
        (
            "mach,lift_coefficient,drag_coefficient\n0.1,0.1,0.02\n",
            "",
            "1 values of mach; a table has at least 2",
        ),
        (
            "mach,lift_coefficient,drag_coefficient\n0.1,0.1,0.02\n0.2,0.1,0.02\n",
            "",
            "1 values of lift_coefficient; a table has at least 3",
        ),
    ],
)
def test_refusals_of_a_csv_name_the_line(tmp_path: Path, points: str, key: str, match: str) -> None:
    with pytest.raises(InputRefused, match=match) as refusal:
        loaded(tmp_path, {"points": "polar.csv"}, points)
    assert refusal.value.where.endswith("polar.csv")
    assert refusal.value.key == key


def test_a_csv_that_is_not_there(tmp_path: Path) -> None:
    with pytest.raises(InputRefused, match=r"none\.csv: there is no such file; points names a CSV"):
        loaded(tmp_path, {"points": "none.csv"})
