"""Propeller: what becomes of its shaft power, from rest to its design point."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from engine.parts.propeller import Propeller, drive, profile_factor

propellers = {
    "power": st.floats(1e3, 8e6),
    "speed": st.floats(0.0, 230.0),
    "density": st.floats(0.2, 1.3),
    "mach": st.floats(0.6, 0.85),
}
PROPELLER = Propeller(diameter=3.9, profile_factor=0.9, solidity=0.12)


def thrust(power: float, speed: float, density: float = 1.0) -> float:
    values = (np.array(power), np.array(speed), np.array(density), np.array(0.3))
    return float(drive(PROPELLER, *values).thrust)


@given(**propellers)
def test_shaft_power_is_thrust_power_and_losses(
    power: float, speed: float, density: float, mach: float
) -> None:
    values = (np.array(power), np.array(speed), np.array(density), np.array(mach))

    found = drive(PROPELLER, *values)

    total = found.thrust * speed + found.induced_loss + found.profile_loss
    assert float(total) == pytest.approx(power, rel=1e-14)
    assert found.thrust > 0.0
    assert found.induced_loss > 0.0
    # Momentum theory itself: what reaches the air is T (V + v), with T = 2 rho A v (V + v).
    past = (power - float(found.profile_loss)) / float(found.thrust)
    momentum = 2.0 * density * PROPELLER.disc_area * (past - speed) * past
    assert momentum == pytest.approx(float(found.thrust), rel=1e-9, abs=1e-9 * past**2)


@given(power=st.floats(1e3, 8e6), speed=st.floats(0.0, 230.0))
def test_thrust_rises_with_power_and_falls_with_speed(power: float, speed: float) -> None:
    assert thrust(1.01 * power, speed) > thrust(power, speed) > thrust(power, speed + 1.0)


@given(power=st.floats(1e-6, 10.0), speed=st.floats(20.0, 230.0))
def test_little_power_goes_all_into_thrust(power: float, speed: float) -> None:
    assert thrust(power, speed) == pytest.approx(0.9 * power / speed, rel=1e-3)
    assert thrust(-power, speed) == -thrust(power, speed)


@pytest.mark.parametrize("speed", [0.0, 80.0])
def test_no_power_no_thrust(speed: float) -> None:
    assert thrust(0.0, speed) == 0.0


@given(efficiency=st.floats(0.6, 0.88), power=st.floats(1e5, 4e6), speed=st.floats(90.0, 220.0))
def test_stated_efficiency_comes_out(efficiency: float, power: float, speed: float) -> None:
    air = np.array(power), np.array(speed), np.array(0.6), np.array(0.75)
    factor = float(profile_factor(PROPELLER.disc_area, efficiency, *air))

    found = drive(Propeller(PROPELLER.diameter, factor, 0.12), *air)

    assert float(found.thrust) == pytest.approx(efficiency * power / speed, rel=1e-12)
