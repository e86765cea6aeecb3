"""Fuel flow at part power against rows of the emissions databank, each engine from four numbers.

Every row is sized at its 100 % point by the brochure rule (``engine.options.brochure``) from
thrust, fuel flow, bypass ratio and overall pressure ratio; its fuel flows at 85, 30 and 7 % thrust
are predicted. Two baselines stand beside: constant ratios (the median of the rows), and a
regression of the ratios on bypass and pressure ratio that leaves the predicted row out. ``pytest
-s`` prints the table. Targets were set beforehand; what is measured may not get worse.

The rule's form and constants were chosen with a view of these rows, by hand and in round numbers,
after some sixty variants. Only whether the constants generalise was looked at, not the form:
efficiency, temperature and the compressor's share of pressure ratio chosen anew on a random half
of the rows, out of 18 combinations, leave the other half (mean of 300 halves) median errors of
1.0, 2.4 and 8.0 % and worst ones of 3.7, 7.1 and 23 %.
"""

from __future__ import annotations

import csv
from dataclasses import dataclass
from functools import cache
from pathlib import Path

import numpy as np
import pytest
from numpy.typing import NDArray

from engine.atmosphere import flight_condition
from engine.cycle_engine import CycleEngine
from engine.options.loading import engine_from_content
from engine.parts import combustor
from engine.parts.combustor import relative_loading

Array = NDArray[np.float64]
POINTS = (85, 30, 7)  # % of thrust
# Median and worst error of fuel flow [%] by point.
TARGET = {"median": (1.5, 3.0, 10.0), "worst": (4.0, 10.0, 27.0)}
MEASURED = {"median": (1.03, 1.77, 6.5), "worst": (3.98, 7.5, 26.2)}
SLACK = 0.2
# Joules of carbon monoxide over those of fuel, from heats of formation: 10.1 of 43.0 MJ/kg.
CARBON_MONOXIDE_HEAT = 10.1 / 43.0
DATABANK = pytest.mark.source(
    "ICAO Aircraft Engine Emissions Databank, rows by UID in databank.csv; grade read"
)


@dataclass(frozen=True)
class Row:
    """One row: thrust [N], fuel flows [kg/s] and unburnt share of the fuel by % of thrust."""

    uid: str
    bypass_ratio: float
    overall_pressure_ratio: float
    thrust: float
    fuel_flow: dict[int, float]
    unburnt: dict[int, float]

    @property
    def ratios(self) -> Array:
        """Fuel flows over that at 100 %; NaN where the row has none."""
        return np.array([self.fuel_flow[p] for p in POINTS]) / self.fuel_flow[100]

    def engine(self) -> CycleEngine:
        """From the four numbers."""
        consumption = self.fuel_flow[100] / self.thrust
        content = {
            "kind": "brochure",
            "name": self.uid,
            "static_thrust": f"{self.thrust} N",
            "static_specific_fuel_consumption": f"{consumption} kg/s/N",
            "bypass_ratio": self.bypass_ratio,
            "overall_pressure_ratio": self.overall_pressure_ratio,
        }
        engine = engine_from_content(content, self.uid)
        assert isinstance(engine, CycleEngine)
        return engine


def number(text: str) -> float:
    return float(text) if text else float("nan")


@cache
def rows() -> tuple[Row, ...]:
    text = (Path(__file__).parent / "databank.csv").read_text(encoding="utf-8")
    read = csv.DictReader(line for line in text.splitlines() if not line.startswith("#"))
    return tuple(
        Row(
            entry["uid"],
            float(entry["bypass_ratio"]),
            float(entry["overall_pressure_ratio"]),
            1e3 * float(entry["thrust_kN"]),
            {p: number(entry[f"fuel_flow_{p}"]) for p in (100, *POINTS)},
            {
                p: 1e-3
                * (
                    number(entry[f"carbon_monoxide_{p}"]) * CARBON_MONOXIDE_HEAT
                    + number(entry[f"hydrocarbons_{p}"])
                )
                for p in POINTS
            },
        )
        for entry in read
    )


@dataclass(frozen=True)
class Prediction:
    """Fuel flow over that at 100 %, and relative loading of the combustor, at the points."""

    ratios: Array
    loading: Array


@cache
def predictions() -> tuple[Prediction, ...]:
    """Of all rows, the points of a row in one call."""
    found = []
    for row in rows():
        engine = row.engine()
        shares = np.array(POINTS) / 100.0
        state = engine.at(
            flight_condition(0.0, 0.0),
            rating="take_off",
            net_thrust=shares * row.thrust,
            idle="ground_idle",
        )
        assert np.all(state.outcome == 0), row.uid
        assert state.evidence is not None
        design = engine.sizing.flows["combustor"]
        loading = relative_loading(state.evidence.path.flows["combustor_loading"], design)
        found.append(Prediction(state.fuel_flow / row.fuel_flow[100], loading))
    return tuple(found)


def published() -> Array:
    return np.array([row.ratios for row in rows()])


def constant_ratios() -> Array:
    return np.broadcast_to(np.nanmedian(published(), axis=0), published().shape)


def regression() -> Array:
    """Each row from a plane through all others, in bypass and overall pressure ratio."""
    known = published()
    plane = np.array([[1.0, row.bypass_ratio, row.overall_pressure_ratio] for row in rows()])
    found = np.empty_like(known)
    for left_out in range(len(known)):
        for point in range(len(POINTS)):
            others = np.isfinite(known[:, point]) & (np.arange(len(known)) != left_out)
            slopes = np.linalg.lstsq(plane[others], known[others, point], rcond=None)[0]
            found[left_out, point] = plane[left_out] @ slopes
    return found


def errors(ratios: Array) -> Array:
    """[%] by row and point."""
    return np.asarray(100.0 * (ratios / published() - 1.0))


def summary(found: Array) -> dict[str, Array]:
    size = np.abs(found)
    return {"median": np.nanmedian(size, axis=0), "worst": np.nanmax(size, axis=0)}


def table(cycle: Array, others: dict[str, Array]) -> str:
    """Errors of the cycle row by row, then all ways of predicting side by side."""
    lines = ["", "error of fuel flow, %       85 %    30 %     7 %  of thrust"]
    for row, line in zip(rows(), cycle, strict=True):
        ratios = f"{row.bypass_ratio:5.2f} {row.overall_pressure_ratio:5.1f}"
        lines.append(f"{row.uid:<12}{ratios}" + "".join(f"{x:+8.1f}" for x in line))
    for name, found in {"the cycle": cycle, **others}.items():
        for what, values in summary(found).items():
            lines.append(f"{name + ', ' + what:<24}" + "".join(f"{x:8.2f}" for x in values))
    for what, target in TARGET.items():
        lines.append(f"{'target, ' + what:<24}" + "".join(f"{x:8.2f}" for x in target))
    return "\n".join(lines)


@DATABANK
def test_part_power_fuel_flow() -> None:
    """The targets, all met, and no worse than measured."""
    cycle = errors(np.array([prediction.ratios for prediction in predictions()]))
    constant, plane = errors(constant_ratios()), errors(regression())
    print(table(cycle, {"constant ratios": constant, "regression": plane}))

    found = summary(cycle)
    for what, target in TARGET.items():
        assert np.all(found[what] <= target), what
        assert np.all(found[what] <= np.array(MEASURED[what]) + SLACK), what
        assert np.all(found[what][1:] < summary(constant)[what][1:]), what


@DATABANK
def test_the_worst_rows_are_known() -> None:
    cycle = errors(np.array([prediction.ratios for prediction in predictions()]))
    worst = [rows()[i].uid for i in np.nanargmax(np.abs(cycle), axis=0)]
    assert worst == ["01P08CM104", "01P08CM104", "1PW002"]


@DATABANK
def test_fuel_left_over_grows_with_air_loading() -> None:
    """Constants of the combustor: least squares of logarithms at 30 and 7 % thrust."""
    left = np.array([[row.unburnt[p] for p in POINTS] for row in rows()])[:, 1:]
    loading = np.array([prediction.loading for prediction in predictions()])[:, 1:]
    known = np.isfinite(left) & np.array([row.uid != "3GE074" for row in rows()])[:, None]
    across, up = np.log(loading[known]), np.log(left[known])

    exponent, level = np.polyfit(across, up, 1)
    scatter = up - (level + exponent * across)

    assert exponent == pytest.approx(combustor.LOADING_EXPONENT, abs=0.1)
    assert np.exp(level) == pytest.approx(combustor.SLOW_BURNING_LOSS, rel=0.25)
    assert np.exp(np.std(scatter)) == pytest.approx(2.1, abs=0.1)
    assert 1.0 - np.var(scatter) / np.var(up) == pytest.approx(0.79, abs=0.03)


def e3() -> CycleEngine:
    """The Energy Efficient Engine from its four take-off numbers."""
    content = {
        "kind": "brochure",
        "name": "E3",
        "static_thrust": "173.5 kN",
        "static_specific_fuel_consumption": "0.0305 kg/N/h",
        "bypass_ratio": 7.0,
        "overall_pressure_ratio": 32.4,
    }
    engine = engine_from_content(content, "e3.toml")
    assert isinstance(engine, CycleEngine)
    return engine


@pytest.mark.source("NASA CR-168219, Energy Efficient Engine, Table XII; grade read")
@pytest.mark.parametrize(
    ("rating", "fan", "overall", "bypass_ratio", "consumption"),
    [("climb", 1.68, 38.4, 6.7, 0.0541), ("cruise", 1.64, 36.5, 6.8, 0.0540)],
)
def test_an_engine_from_its_take_off_numbers_at_altitude(
    rating: str, fan: float, overall: float, bypass_ratio: float, consumption: float
) -> None:
    """Mach 0.8 at 35,000 ft. Its streams are mixed, which saves 2.9 % there (Table XIV), and the
    rule's are not: fuel consumption comes out 4 % high."""
    state = e3().at_rating(flight_condition(10668.0, 0.8), rating)
    found = state.stations["13"].total_pressure / state.stations["2"].total_pressure

    assert float(found) == pytest.approx(fan, rel=0.01)
    assert float(state.overall_pressure_ratio) == pytest.approx(overall, rel=0.02)
    assert float(state.bypass_ratio) == pytest.approx(bypass_ratio, rel=0.02)
    high = float(state.specific_fuel_consumption) * 3600.0 / consumption - 1.0
    assert high == pytest.approx(0.040, abs=0.005)


@pytest.mark.source("NASA CR-168219, Table XII, and NASA CR-168301 (combustor at idle); grade read")
def test_an_engine_from_its_take_off_numbers_at_take_off_and_idle() -> None:
    engine, ground = e3(), flight_condition(0.0, 0.0)
    low = engine.at(ground, rating="take_off", net_thrust=0.06 * 173.5e3, idle="ground_idle")
    high = engine.at(ground, rating="take_off", net_thrust=0.99 * 173.5e3)
    fan = high.stations["13"].total_pressure / high.stations["2"].total_pressure
    shares = [state.stations["3"].total_pressure / 101325.0 / 32.4 for state in (low, high)]

    assert float(fan) == pytest.approx(1.56, rel=0.01)
    assert float(low.stations["3"].total_temperature) == pytest.approx(497.0, rel=0.02)
    # Published: 0.43 of 3.02 MPa.
    assert float(shares[0]) == pytest.approx(0.43 / 3.02, rel=0.06)
