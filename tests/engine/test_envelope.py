"""An engine over a grid: what it is asked, shares of thrust, and members without an answer."""

from __future__ import annotations

from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

import numpy as np
import pytest

from engine.atmosphere import FlightCondition, flight_condition
from engine.envelope import (
    ALTITUDE_STEP,
    HIGHEST_ALTITUDE,
    SHARES,
    WINDMILLING,
    Envelope,
    default_levels,
    envelope,
    grid,
)
from engine.errors import InputRefused
from engine.interface import IDLES, RATINGS, Engine, EngineState, Outcome
from engine.options.loading import load_engine
from tests.engine_files import load, turbofan_content, turbojet_content

PROFILES = Path(__file__).parents[2] / "profiles"
REHEAT = {
    "afterburner": {"temperature": "1900 K"},
    "ratings.maximum_afterburning": {
        "turbine_entry_temperature": "1250 K",
        "afterburner_temperature": "1900 K",
    },
}
HEIGHTS, MACHS = np.array([0.0, 6000.0, 12000.0]), np.array([0.0, 0.4, 0.8])


@dataclass(frozen=True)
class Recorder(Engine):
    """Another engine behind a list of what it is asked; with reheat it has one rating more."""

    inner: Engine
    calls: list[dict[str, Any]] = field(default_factory=list)

    def at(self, flight: FlightCondition, **asked: Any) -> EngineState:
        self.calls.append({"flight": flight, **asked})
        return self.inner.at(flight, **asked)

    def windmilling(self, flight: FlightCondition) -> EngineState:
        return self.inner.windmilling(flight)


def level(found: Envelope, name: str | float) -> tuple[np.ndarray, np.ndarray]:
    row = found.levels.index(name)
    return found.net_thrust[row], found.fuel_flow[row]


def test_every_point_is_the_engine_asked_there() -> None:
    engine = load(turbofan_content())
    found = envelope(engine, HEIGHTS, MACHS, 10.0, levels=(*RATINGS, *IDLES))
    assert found.net_thrust.shape == (6, 3, 3)
    assert found.is_answered.all()
    for name in (*RATINGS, *IDLES):
        flight = flight_condition(HEIGHTS[:, None], MACHS[None, :], 10.0)
        state = engine.at_rating(flight, name)
        thrust, fuel = level(found, name)
        assert thrust == pytest.approx(state.net_thrust, rel=1e-9, abs=1e-6)
        assert fuel == pytest.approx(state.fuel_flow, rel=1e-9)
        row = found.binding_limit[found.levels.index(name)]
        assert row.tolist() == state.binding_limit_names.tolist()


def test_a_share_lies_between_idle_and_the_highest_rating_of_its_point() -> None:
    """Of this engine take-off is the highest rating low down, and the lowest but one high up."""
    engine = load(turbofan_content())
    found = envelope(engine, HEIGHTS, MACHS, levels=(*RATINGS, *IDLES, 0.25, 1.0))
    tops = found.net_thrust[:4]
    assert len(set(np.argmax(tops, axis=0).ravel().tolist())) > 1
    idle, most = level(found, "flight_idle")[0], tops.max(axis=0)
    assert level(found, 0.25)[0] == pytest.approx(idle + 0.25 * (most - idle), rel=1e-9)
    assert level(found, 1.0)[0] == pytest.approx(most, rel=1e-9)
    flight = flight_condition(HEIGHTS[:, None], MACHS[None, :])
    asked = engine.at(flight, rating="climb", net_thrust=level(found, 0.25)[0])
    assert level(found, 0.25)[1] == pytest.approx(asked.fuel_flow, rel=1e-9)


def test_ratings_are_one_call_and_shares_a_second() -> None:
    engine = Recorder("recorded", load(turbofan_content()))
    envelope(engine, HEIGHTS, MACHS, levels=("climb",))
    assert len(engine.calls) == 1
    assert engine.calls.pop()["flight"].shape == (1, 3, 3)
    envelope(engine, HEIGHTS, MACHS, levels=default_levels(engine))
    assert [call["flight"].shape for call in engine.calls] == [(6, 3, 3), (len(SHARES), 3, 3)]


def test_part_power_is_asked_for_under_the_lowest_rating_that_gives_it() -> None:
    engine = Recorder("recorded", load(turbofan_content()))
    found = envelope(engine, HEIGHTS, MACHS, levels=(*RATINGS, 0.3, 1.0))
    part, full = engine.calls[1]["rating"]
    assert set(part.ravel().tolist()) == {"cruise"}
    tops = dict(zip(RATINGS, found.net_thrust, strict=False))
    chosen = np.choose([[RATINGS.index(name) for name in row] for row in full], [*tops.values()])
    assert chosen == pytest.approx(np.stack([*tops.values()]).max(axis=0), rel=1e-9)


def test_unlit_it_is_asked_where_air_turns_it_and_gives_nothing_at_rest() -> None:
    engine = load(turbofan_content())
    assert WINDMILLING in default_levels(engine)
    found = envelope(engine, HEIGHTS, MACHS, 10.0, levels=(WINDMILLING, "climb"))
    assert found.is_answered.all()
    thrust, fuel = level(found, WINDMILLING)
    assert thrust[:, 0].tolist() == [0.0] * 3
    assert np.all(fuel == 0.0)
    flight = flight_condition(HEIGHTS[:, None], MACHS[None, 1:], 10.0)
    assert thrust[:, 1:] == pytest.approx(engine.windmilling(flight).net_thrust, rel=1e-9)
    assert np.all(thrust[:, 1:] < 0.0)
    assert level(found.without(WINDMILLING), "climb")[0].tolist() == found.net_thrust[1].tolist()
    alone = envelope(engine, HEIGHTS, [0.0], levels=(WINDMILLING,))
    assert alone.net_thrust.tolist() == [[[0.0]] * 3]


def test_what_has_no_answer_is_flagged_and_its_shares_with_it() -> None:
    """At twice the speed of sound near the ground, air taken in is at the limit of pressure."""
    engine = load_engine(PROFILES / "straight_jet.toml")
    found = envelope(engine, [0.0, 10000.0], [0.5, 2.0], levels=("climb", 0.5))
    assert found.is_answered.tolist() == [[[True, False], [True, True]]] * 2
    assert found.outcome[0, 0, 1] in (Outcome.NOT_CONVERGED, Outcome.UNPHYSICAL)
    assert found.net_thrust[0, 0, 1] == 0.0


def test_with_reheat_shares_go_on_to_two() -> None:
    engine = load(turbojet_content(REHEAT))
    assert default_levels(engine)[-1] == 2.0
    levels = (*engine.ratings, *IDLES, 1.0, 1.5, 2.0)
    found = envelope(engine, HEIGHTS, MACHS, levels=levels)
    assert found.is_answered.all()
    dry, half, full = (level(found, share)[0] for share in (1.0, 1.5, 2.0))
    assert full == pytest.approx(level(found, "maximum_afterburning")[0], rel=1e-6)
    assert half == pytest.approx(0.5 * (dry + full), rel=1e-9)
    assert np.all(level(found, 1.5)[1] > 1.1 * level(found, 1.0)[1])


@pytest.mark.parametrize("share", [0.0, -0.1, 1.01])
def test_a_share_out_of_range_is_refused(share: float) -> None:
    with pytest.raises(InputRefused, match="above 0 and at most 1, not"):
        envelope(load(turbofan_content()), HEIGHTS, MACHS, levels=(share,))


def test_a_rating_that_is_none_is_refused() -> None:
    with pytest.raises(InputRefused, match="'full' is no rating of test turbofan"):
        envelope(load(turbofan_content()), HEIGHTS, MACHS, levels=("full",))


def test_grids_hold_both_ends_and_round_steps() -> None:
    assert grid(0.0, 1.0, 0.3).tolist() == [0.0, 0.3, 0.6, 0.9, 1.0]
    assert grid(0.1, 0.3, 0.1).tolist() == [0.1, 0.2, 0.3]
    altitudes = grid(0.0, HIGHEST_ALTITUDE, ALTITUDE_STEP)
    assert 11000.0 in altitudes  # the tropopause
    assert altitudes[-1] == pytest.approx(45000.0 * 0.3048)
