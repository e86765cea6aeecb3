"""Losses that grow at part power: drag of shafts and slow burning, nothing at the design point."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from engine_files import load, turbofan_content

from engine.atmosphere import flight_condition
from engine.cycle_engine import CycleEngine
from engine.cycles.sizing import scaled
from engine.parts.combustor import Combustor
from engine.parts.efficiency import shaft_drag

CONSTANT = {"efficiencies.away_from_design": "constant"}


def test_drag_of_a_shaft_is_its_mechanical_efficiency_at_the_design_point() -> None:
    power, flow = np.array([1e6, 1e6]), np.array([1.0, 0.5])
    falling = shaft_drag(power, 0.99, True, flow)
    assert power[0] / (power[0] + falling[0]) == pytest.approx(0.99)
    assert falling[1] == pytest.approx(2.0 * falling[0])
    assert shaft_drag(power, 0.99, False, flow).tolist() == pytest.approx([falling[0]] * 2)


def test_slow_burning_takes_nothing_at_the_design_loading() -> None:
    combustor = Combustor(0.995, 0.05, 43e6, falls_off=True)
    values = combustor.efficiency_at(np.array([1.0, 3.0, 30.0, 1e6]), 3.0)
    assert values[1] == 0.995
    assert np.all(np.diff(values) < 0.0)
    assert np.all(values > 0.09)  # an iterate far from an answer


def test_idle_burns_more_than_with_constant_efficiencies(turbofan: CycleEngine) -> None:
    """And the design point burns the same."""
    constant = load(turbofan_content(CONSTANT))
    point = turbofan.sizing.reference_thrust
    flight = flight_condition(10668.0, 0.78)
    falling, steady = (
        engine.at_thrust(flight, np.array([point, 0.1 * point]), rating="take_off").fuel_flow
        for engine in (turbofan, constant)
    )
    assert falling[0] == pytest.approx(steady[0], rel=1e-9)
    assert falling[1] > 1.03 * steady[1]


def test_a_scaled_engine_loses_the_same(turbofan: CycleEngine) -> None:
    twice = replace(turbofan, sizing=scaled(turbofan.sizing, 2.0))
    flight = flight_condition(5000.0, 0.5)
    one, two = (
        engine.at_thrust(flight, size * 4e3, rating="climb")
        for engine, size in ((replace(turbofan), 1.0), (twice, 2.0))
    )
    # Its shaft power is not scaled, which is all that differs.
    assert float(two.fuel_flow) == pytest.approx(2.0 * float(one.fuel_flow), rel=0.02)
