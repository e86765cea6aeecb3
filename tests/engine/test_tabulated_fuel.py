"""Fuel flow of dynamic similarity comes back between the points of a table."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest
from test_tabulated import HEIGHTS, MACHS, engine_of, lines, table, thrust_of

from engine.atmosphere import flight_condition
from engine.envelope import Level


def burnt(level: Level, height: float, mach: float) -> float:
    """Over pressure and the root of temperature it is linear on each side of the tropopause."""
    air = flight_condition(height, mach, 10.0)
    unit = float(air.static_pressure * np.sqrt(air.static_temperature))
    share = {"flight_idle": 0.1, "ground_idle": 0.09}.get(str(level), 0.0)
    share = share or thrust_of(level, 0.0, 0.0) / 4e4
    return share * unit * 3e-7 * (1.0 + max(11000.0 - height, 0.0) / 2e4)


def test_fuel_that_scales_with_the_air_is_read_exactly(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setattr("test_tabulated.fuel_of", burnt)
    engine = engine_of(tmp_path, table(*lines()))
    heights = np.linspace(HEIGHTS[0], HEIGHTS[-1], 53)

    found = engine.at_rating(flight_condition(heights, MACHS[2], 10.0), "climb").fuel_flow

    assert found == pytest.approx([burnt("climb", h, MACHS[2]) for h in heights], rel=1e-12)
