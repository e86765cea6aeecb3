"""Which way the factors of a known flight go when what is known goes up."""

from __future__ import annotations

import tempfile
from pathlib import Path

import pytest
from hypothesis import given
from hypothesis import strategies as st
from mission_files import (
    OUT_AND_DOWN,
    Content,
    aircraft_content,
    engine_content,
    load_all,
    mission_content,
    segment,
)
from mission_strategies import FEW

from mission.flight import fly
from mission.questions.fit_flight import FlightFit, fit_flight
from mission.results import Flight

ENGINE = engine_content(static_thrust="38 kN")
distances = st.integers(500, 1500)
factors = st.floats(0.75, 1.3)


def flown(distance: int, drag: float = 1.0, flow: float = 1.0) -> Flight:
    """The plain trip of an aircraft with these factors."""
    plane = aircraft_content(drag_factor=drag, fuel_flow_factor=flow)
    mission = mission_content(OUT_AND_DOWN, distance=f"{distance} nmi")
    with tempfile.TemporaryDirectory() as folder:
        return fly(*load_all(Path(folder), plane, ENGINE, mission))


def fitted(distance: int, fuel: float | None, time: float | None) -> FlightFit:
    """Factors from the fuel [kg] of the block, the time [s] of the climb, or both."""
    known: Content = {} if fuel is None else {"block_fuel": f"{fuel} kg"}
    if time is not None:
        known["segment"] = [{"name": "climb", "time": f"{time} s"}]
    mission = mission_content(OUT_AND_DOWN, distance=f"{distance} nmi", known=known)
    with tempfile.TemporaryDirectory() as folder:
        return fit_flight(*load_all(Path(folder), aircraft_content(), ENGINE, mission))


def values(found: FlightFit) -> list[float]:
    assert found.flown
    assert found.has_settled
    return [factor.value for factor in found.factors]


@given(distance=distances, drag=factors, flow=factors)
@FEW
def test_a_fabricated_flight_gives_its_factors_back(
    distance: int, drag: float, flow: float
) -> None:
    flight = flown(distance, drag, flow)
    found = fitted(distance, flight.totals.block_fuel, segment(flight, "climb").time)
    assert values(found) == pytest.approx([drag, flow], abs=1e-4)


@given(distance=distances, more=st.floats(1.01, 1.3))
@FEW
def test_more_fuel_is_more_fuel_flow(distance: int, more: float) -> None:
    """The factor grows with the fuel, by less than its share: lighter aircraft burn less."""
    fuel = flown(distance).totals.block_fuel
    drag, flow = values(fitted(distance, more * fuel, None))
    assert drag == 1.0
    assert 1.0 < flow < more


@given(distance=distances, more=st.floats(1.01, 1.3))
@FEW
def test_a_longer_climb_is_more_drag_and_less_fuel_flow(distance: int, more: float) -> None:
    """With the block fuel as it was, what drag takes the fuel flow has to give."""
    flight = flown(distance)
    fuel, time = flight.totals.block_fuel, more * segment(flight, "climb").time
    drag, flow = values(fitted(distance, fuel, time))
    assert drag > 1.0
    assert flow < 1.0
    alone, held = values(fitted(distance, None, time))
    assert alone > 1.0
    assert held == 1.0


@given(distance=distances, more=st.floats(1.01, 1.2))
@FEW
def test_more_fuel_and_the_same_climb_leaves_the_drag_almost_as_it_was(
    distance: int, more: float
) -> None:
    flight = flown(distance)
    time = segment(flight, "climb").time
    drag, flow = values(fitted(distance, more * flight.totals.block_fuel, time))
    assert flow > 1.0 + 0.8 * (more - 1.0)
    assert abs(drag - 1.0) < 0.25 * (more - 1.0)
