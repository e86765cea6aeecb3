"""What lies outside what a part is for is said, with by how much; nothing is clipped in silence."""

from __future__ import annotations

import numpy as np
import pytest
from engine_files import changed, load
from engine_kinds import REHEATED, TURBOPROP

from engine.atmosphere import flight_condition
from engine.finished import why_unphysical
from engine.interface import Outcome

FAST = flight_condition(11000.0, [0.8, 1.5, 1.5])
RATING = "maximum_afterburning"


def reheated(**installation: object) -> dict[str, object]:
    recovery = {"inlet.has_standard_ram_recovery": True}
    return changed(REHEATED, {**recovery, "installation": installation})


def test_more_air_than_the_capture_area_passes_is_no_state() -> None:
    open_inlet = load(reheated(capture_area="1 m**2")).at_rating(FAST, RATING)
    needed = open_inlet.stations["2"].mass_flow / (FAST.density * FAST.true_airspeed)
    small = 0.9 * float(needed[1])

    state = load(reheated(capture_area=f"{small} m**2")).at_rating(FAST, RATING)

    # Up to Mach 1 a small inlet spills nothing and chokes in no equation here.
    assert list(state.outcome) == [Outcome.MET, Outcome.UNPHYSICAL, Outcome.UNPHYSICAL]
    assert np.all(state.net_thrust[1:] == 0.0)
    told = str(why_unphysical(state)[1])
    passed = small * float(FAST.density[1] * FAST.true_airspeed[1])
    shortage = float(open_inlet.stations["2"].mass_flow[1]) - passed
    assert told == f"it takes in {shortage:.3g} kg/s more than its capture area passes"


def test_spilled_air_costs_thrust_and_stands_in_the_account() -> None:
    whole = load(reheated()).at_rating(FAST, RATING)
    spilling = load(reheated(capture_area="1 m**2")).at_rating(FAST, RATING)
    assert spilling.net_thrust[0] == pytest.approx(float(whole.net_thrust[0]), rel=1e-12)
    assert np.all(spilling.net_thrust[1:] < whole.net_thrust[1:])
    assert spilling.fuel_flow == pytest.approx(whole.fuel_flow, rel=1e-12)
    assert spilling.energy is not None
    lost = (whole.net_thrust - spilling.net_thrust) * FAST.true_airspeed
    assert spilling.energy.installation == pytest.approx(lost, rel=1e-9)
    assert np.all(np.abs(spilling.energy.residual) < 1e-9)


def test_a_nozzle_wider_than_its_afterbody_is_no_state() -> None:
    state = load(reheated(afterbody_area="0.05 m**2")).at_rating(FAST, RATING)
    assert set(state.outcome) == {Outcome.UNPHYSICAL}
    assert "m2 wider than its afterbody" in str(why_unphysical(state)[0])


def test_a_propeller_too_fast_is_no_state() -> None:
    flight = flight_condition(6000.0, [0.6, 0.9])
    state = load(TURBOPROP).at_rating(flight, "climb")
    assert list(state.outcome) == [Outcome.MET, Outcome.UNPHYSICAL]
    assert str(why_unphysical(state)[1]).startswith("it flies 0.05 above Mach 0.85")
