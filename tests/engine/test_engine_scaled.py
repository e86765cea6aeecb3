"""Twice the engine: all areas, disc, body and gearbox grow, so that twice the thrust comes out."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from engine_files import Content, changed, load
from engine_kinds import KINDS, TURBOPROP, envelope_of

from engine.cycle_engine import CycleEngine
from engine.cycles.turboprop import Turboprop
from engine.installation.pod import GivenPod
from engine.interface import Outcome
from engine.scaling import scaled

FACTOR = 2.0
# What the aircraft takes off does not scale with the engine.
NOTHING: Content = {"off_takes": {"shaft_power": "0 kW"}}
AROUND: Content = {
    "installation.capture_area": "0.5 m**2",
    "installation.afterbody_area": "0.6 m**2",
    "installation.afterbody_coefficient": 0.05,
}


def both(content: Content) -> tuple[CycleEngine, CycleEngine]:
    engine = load(changed(content, NOTHING))
    return engine, scaled(engine, FACTOR)


@pytest.mark.parametrize("kind", KINDS)
def test_twice_the_engine_is_two_engines(kind: str) -> None:
    one, two = both(changed(KINDS[kind], AROUND) if "reheated" in kind else KINDS[kind])
    flight = envelope_of(kind, 3)

    for rating in (*one.ratings, "flight_idle"):
        small, large = (engine.at_rating(flight, rating) for engine in (one, two))

        assert np.all(small.outcome == large.outcome)
        met = small.outcome == Outcome.MET
        assert met.any()
        for name in ("net_thrust", "fuel_flow"):
            found, wanted = getattr(large, name)[met], FACTOR * getattr(small, name)[met]
            scale = FACTOR * (one.sizing.reference_thrust if name == "net_thrust" else 1.0)
            assert found == pytest.approx(wanted, rel=1e-9, abs=1e-9 * scale), (rating, name)


def test_the_propeller_and_its_gearbox_follow() -> None:
    one, two = both(TURBOPROP)
    assert isinstance(one.arrangement, Turboprop)
    assert isinstance(two.arrangement, Turboprop)

    small, large = (e.arrangement.train.propeller_diameter for e in (one, two))

    assert large == pytest.approx(FACTOR**0.5 * small, rel=1e-12)
    flight = envelope_of("turboprop", 1)
    states = [engine.at_rating(flight, "take_off") for engine in (one, two)]
    assert [str(state.binding_limit_names[0]) for state in states] == ["propeller_shaft_power"] * 2
    assert float(states[1].net_thrust[0]) == pytest.approx(
        FACTOR * float(states[0].net_thrust[0]), rel=1e-9
    )


def test_given_numbers_of_the_pod_follow() -> None:
    engine = replace(load(KINDS["turbofan"]), given_pod=GivenPod(dry_mass=900.0, length=3.4))

    pod = scaled(engine, FACTOR).pod

    assert pod.dry_mass == pytest.approx(900.0 * FACTOR**1.1, rel=1e-12)
    assert pod.length == pytest.approx(3.4 * FACTOR**0.4, rel=1e-12)
