"""The energy account and the mass account of every kind of engine close, whatever its cycle.

For each kind 8 engines of drawn cycle, at 26 drawn states each.
"""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest
from engine_files import Content, changed, load
from engine_kinds import KINDS
from hypothesis import given, reject, settings
from hypothesis import strategies as st

from engine.atmosphere import FlightCondition, flight_condition
from engine.cycle_engine import CycleEngine
from engine.errors import CycleCannotRun
from engine.interface import EngineState, is_unanswered

MEMBERS = 26
CLOSES = 1e-9
# What is drawn around the value of the file, as a factor.
FACTORS = {
    "design_point.compressor_pressure_ratio": (0.7, 1.5),
    "design_point.low_pressure_compressor_pressure_ratio": (0.7, 1.4),
    "design_point.high_pressure_compressor_pressure_ratio": (0.8, 1.3),
    "design_point.bypass_ratio": (0.8, 1.15),
    "design_point.fan_pressure_ratio": (0.95, 1.08),
    "design_point.power_turbine_share": (0.8, 1.08),
    "combustor.efficiency": (0.96, 1.005),
}
SHARES = {
    "off_takes.customer_bleed_fraction": (0.0, 0.04),
    "cooling.vane_fraction": (0.0, 0.08),
    "cooling.rotor_fraction": (0.0, 0.06),
    "cooling.downstream_fraction": (0.0, 0.02),
    "cooling.rotor_rise": (0.3, 1.0),
    "cooling.downstream_rise": (0.3, 1.0),
}


def value_of(content: Content, key: str) -> Any:
    table: Any = content
    for name in key.split("."):
        table = table.get(name) if isinstance(table, dict) else None
    return table


@st.composite
def engines(draw: st.DrawFn, kind: str) -> CycleEngine:
    """An engine of a kind; a cycle that cannot run is refused as one, and drawn again."""
    content = KINDS[kind]
    changes: Content = {}
    for key, bounds in FACTORS.items():
        if (value := value_of(content, key)) is not None:
            changes[key] = draw(st.floats(*bounds)) * value
    for key, bounds in SHARES.items():
        changes[key] = draw(st.floats(*bounds))
    power = float(content["off_takes"]["shaft_power"].removesuffix(" kW"))
    changes["off_takes.shaft_power"] = f"{draw(st.floats(0.0, power)):.6f} kW"
    changes["off_takes.flight_idle.shaft_power"] = f"{draw(st.floats(0.0, 0.3 * power)):.6f} kW"
    try:
        return load(changed(content, changes))
    except CycleCannotRun:
        reject()


@st.composite
def flights(draw: st.DrawFn, kind: str) -> FlightCondition:
    """Mixed flight conditions on mixed days, not slower than an aircraft flies so high."""

    def values(low: float, high: float) -> np.ndarray:
        return np.array(draw(st.lists(st.floats(low, high), min_size=MEMBERS, max_size=MEMBERS)))

    highest, fastest = (9000.0, 0.65) if kind == "turboprop" else (12500.0, 0.9)
    fastest = 1.6 if "reheated" in kind else fastest
    altitude = values(0.0, highest)
    slowest = 0.4 * altitude / highest
    return flight_condition(
        altitude, slowest + values(0.0, 1.0) * (fastest - slowest), values(-20.0, 30.0)
    )


def throttles() -> st.SearchStrategy[list[float]]:
    """From idle to the highest rating, both included."""
    return st.lists(st.floats(0.0, 1.0), min_size=MEMBERS, max_size=MEMBERS)


def assert_closed(state: EngineState) -> None:
    """Energy to 1e-9 of the fuel's power, mass to round-off, at every state."""
    assert not is_unanswered(state.outcome).any(), state.outcome
    assert state.energy is not None
    assert state.evidence is not None
    assert np.max(np.abs(state.energy.residual)) < CLOSES
    path = state.evidence.path
    leaving = sum(stream.mass_flow for stream, _ in path.jets.values())
    entering = path.stations["2"].mass_flow + path.fuel_flow - path.bleed.mass_flow
    assert leaving == pytest.approx(entering, rel=1e-12)


@pytest.mark.parametrize("kind", KINDS)
@settings(max_examples=8)
@given(data=st.data())
def test_accounts_close_at_any_throttle(kind: str, data: st.DataObject) -> None:
    engine, flight = data.draw(engines(kind)), data.draw(flights(kind))
    top = "maximum_afterburning" if "maximum_afterburning" in engine.ratings else "take_off"
    most = engine.at_rating(flight, top).net_thrust
    least = engine.at_rating(flight, "flight_idle").net_thrust
    share = np.array(data.draw(throttles()))

    state = engine.at_thrust(flight, least + share * (most - least), rating=top)

    assert_closed(state)
