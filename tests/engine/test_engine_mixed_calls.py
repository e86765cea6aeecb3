"""Ratings of different off-takes in one call: each member has those of its own."""

from __future__ import annotations

import numpy as np
import pytest
from engine_files import TURBOFAN, changed, load

from engine.atmosphere import flight_condition

TAKEN = {
    "take_off": (0.0, "20 kW"),
    "climb": (0.03, "60 kW"),
    "cruise": (0.02, "80 kW"),
    "flight_idle": (0.04, "30 kW"),
}


def test_members_of_one_call_have_the_off_takes_of_their_ratings() -> None:
    phases = {
        f"off_takes.{name}": {"customer_bleed_fraction": bleed, "shaft_power": power}
        for name, (bleed, power) in TAKEN.items()
    }
    engine = load(changed(TURBOFAN, phases))
    names = np.array([*TAKEN, *reversed(TAKEN)])
    flight = flight_condition(np.linspace(3000.0, 7000.0, names.size), 0.5)

    together = engine.at(flight, rating=names)

    assert together.evidence is not None
    path = together.evidence.path
    bleed = path.bleed.mass_flow / path.stations["25"].mass_flow
    assert bleed == pytest.approx([TAKEN[name][0] for name in names], rel=1e-12)
    power = [1e3 * float(TAKEN[name][1].removesuffix(" kW")) for name in names]
    assert path.shaft_power.tolist() == power
    for member, name in enumerate(names):
        alone = engine.at_rating(flight.at(np.array([member])), str(name))
        assert together.fuel_flow[member] == pytest.approx(float(alone.fuel_flow[0]), rel=1e-9)
