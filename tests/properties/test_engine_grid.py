"""Every kind of engine all over its envelope: each point has an answer, or says why not.

20 by 20 altitudes and Mach numbers, from ground idle to the highest rating; reheated ones another
20 by 20 up to Mach 1.8.
"""

from __future__ import annotations

import numpy as np
import pytest
from engine_files import changed, load
from engine_kinds import KINDS, MIXED, PART_MIXED, engine_of, envelope_of

from engine.atmosphere import flight_condition
from engine.finished import why_unphysical
from engine.interface import IDLES, EngineState, Outcome

STEPS = 20
SHARES = (0.002, 0.05, 0.5, 0.95)
TURNED_BY_AIR = "the air alone turns it faster than is asked"


def assert_met(state: EngineState, what: str) -> None:
    """Every member is met, or is turned by the air faster than a floor of speed asks."""
    causes = why_unphysical(state)
    lost = (state.outcome != Outcome.MET) & (causes != TURNED_BY_AIR)
    first = [
        (float(h), float(m), int(o))
        for h, m, o in zip(
            state.flight.pressure_altitude[lost],
            state.flight.mach[lost],
            state.outcome[lost],
            strict=True,
        )
    ]
    assert not first, f"{what}: {len(first)} of {lost.size}: {first[:5]}"
    turned = causes == TURNED_BY_AIR
    assert what == "ground_idle" or not turned.any(), what
    assert np.all(state.flight.mach[turned] > 1.0), what


@pytest.mark.parametrize("kind", KINDS)
def test_every_rating_and_idle_is_met(kind: str) -> None:
    engine, flight = engine_of(kind), envelope_of(kind, STEPS)

    for rating in (*engine.ratings, *IDLES):
        assert_met(engine.at_rating(flight, rating), rating)


@pytest.mark.parametrize("kind", KINDS)
def test_every_thrust_between_idle_and_the_highest_rating_is_met(kind: str) -> None:
    engine, flight = engine_of(kind), envelope_of(kind, STEPS)
    top = "maximum_afterburning" if "maximum_afterburning" in engine.ratings else "take_off"
    most = engine.at_rating(flight, top).net_thrust
    least = engine.at_rating(flight, "flight_idle").net_thrust

    for share in SHARES:
        wanted = least + share * (most - least)
        state = engine.at_thrust(flight, wanted, rating=top)
        assert_met(state, f"share {share}")
        assert state.net_thrust == pytest.approx(wanted, rel=1e-8, abs=1e-8 * float(most.max()))


@pytest.mark.parametrize("kind", KINDS)
def test_windmilling_drags_and_burns_nothing(kind: str) -> None:
    engine, flight = engine_of(kind), envelope_of(kind, STEPS)
    flight = flight.at(np.flatnonzero(flight.mach >= 0.19))

    state = engine.windmilling(flight)

    assert np.all(state.outcome == Outcome.MET)
    assert np.all(np.isfinite(state.net_thrust) & (state.net_thrust < 0.0))
    assert np.all(state.fuel_flow == 0.0)
    assert state.energy is not None
    assert np.all(np.abs(state.energy.residual) < 1e-9)


# Bypass Mach number at mixer entry from 0.1 to 0.94; outside, the design point is refused.
@pytest.mark.parametrize("fan_pressure_ratio", [3.25, 3.4, 4.65])
@pytest.mark.parametrize("base", [MIXED, PART_MIXED], ids=["mixed", "part mixed"])
def test_mixers_that_hardly_match_run(base: dict[str, object], fan_pressure_ratio: float) -> None:
    engine = load(changed(base, {"design_point.fan_pressure_ratio": fan_pressure_ratio}))
    altitude, mach = np.meshgrid(np.linspace(0.0, 12000.0, 6), np.linspace(0.0, 0.9, 6))
    flight = flight_condition(altitude.ravel(), mach.ravel())

    for rating in (*engine.ratings, *IDLES):
        assert_met(engine.at_rating(flight, rating), rating)
    unlit = engine.windmilling(flight.at(np.flatnonzero(flight.mach > 0.2)))
    assert np.all(unlit.outcome == Outcome.MET)
