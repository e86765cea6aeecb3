"""What a share more consumption or weight costs in fuel, by differences of flown cruises.

Landing mass is held (fuel as needed, no reserves), so that a cruise at constant Mach number and
lift coefficient burns ``m1 (e^y - 1)``, ``y = R c / (V L/D)``: fuel goes with consumption to the
power ``y e^y / (e^y - 1)``, and with landing mass in proportion. No published figure of the kind
"one per cent of consumption is so much of block fuel" could be read; the identity is exact.
"""

from __future__ import annotations

from math import exp, log, sqrt

import pytest
from mission_files import aircraft_content, engine_content, mission_content
from mission_strategies import flown

OWN = (
    "L. Breguet's range equation with landing mass held, differentiated: 1.0508, 1.1033, 1.1575, "
    "1.2707 at y of 0.1, 0.2, 0.3, 0.5; own arithmetic"
)
pytestmark = pytest.mark.source(OWN)

SPEED = 0.74 * sqrt(1.4 * 287.05287 * 216.65)  # m/s, isothermal layer of ISO 2533:1975
CD0, K, LIFT = 0.0175, 0.042, 0.55
LIFT_TO_DRAG = LIFT / (CD0 + K * LIFT**2)
PER_HOUR = 0.6
STEP = 1e-3  # a central difference then errs by its square


def fuel(y: float, *, consumption: float = 1.0, landing: float = 1.0) -> float:
    """Fuel [kg] of a cruise that is ``y`` long, consumption and landing mass times a factor."""
    metres = y * SPEED * LIFT_TO_DRAG / (PER_HOUR / 3600.0)
    cruise = {
        "kind": "cruise",
        "holds": "mach and lift coefficient",
        "mach": 0.74,
        "lift_coefficient": LIFT,
        "distance": f"{metres!r} m",
    }
    flight = flown(
        mission_content([cruise], payload="2 t"),
        aircraft=aircraft_content(
            masses={
                "operating_empty": f"{15000.0 * landing + 2000.0 * (landing - 1.0)!r} kg",
                "maximum_take_off": "40 t",
                "maximum_ramp": "40 t",
            },
            fuel_tanks={"capacity": "20 t"},
        ),
        engine=engine_content(
            specific_fuel_consumption=f"{PER_HOUR * consumption!r} 1/h", static_thrust="90 kN"
        ),
    )
    assert flight.failure is None
    altitude = flight.segments[0].steps.pressure_altitude
    assert 11000.0 < altitude.min() < altitude.max() < 20000.0
    assert flight.totals.landing_mass == pytest.approx(17000.0 * landing, rel=1e-10)
    return flight.totals.block_fuel


def power(more: float, less: float) -> float:
    """Logarithmic slope over a step up and a step down."""
    return log(more / less) / log((1.0 + STEP) / (1.0 - STEP))


@pytest.mark.parametrize(
    ("y", "printed"), [(0.1, 1.0508), (0.2, 1.1033), (0.3, 1.1575), (0.4, None), (0.5, 1.2707)]
)
def test_fuel_over_consumption(y: float, printed: float | None) -> None:
    found = power(fuel(y, consumption=1.0 + STEP), fuel(y, consumption=1.0 - STEP))
    # Fuel is closed to 1e-9, which a step of 1e-3 makes 1e-6.
    assert found == pytest.approx(y * exp(y) / (exp(y) - 1.0), rel=2e-6)
    if printed is not None:
        assert found == pytest.approx(printed, abs=0.00005 + 2e-6)


@pytest.mark.parametrize("y", [0.1, 0.5])
def test_fuel_over_landing_mass(y: float) -> None:
    found = power(fuel(y, landing=1.0 + STEP), fuel(y, landing=1.0 - STEP))
    assert found == pytest.approx(1.0, rel=2e-6)
