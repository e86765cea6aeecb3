"""Throttle ratio and theta break: the turbojet of Aircraft Engine Design, appendix D, matched.

The author's turbojet holds pressure ratio and corrected flow below the theta break and turbine
entry temperature above it, and gives its thrust and fuel in closed form through printed constants:
f1 = F / (m a0) = sqrt(C3 tau_r (1 - (5.451 pi_r)^(-(g-1)/g))) - M, S / sqrt(theta) = C4 tau_r / f1,
pressure ratio above the break (1 + C1 T4 / theta0)^3.5. The inputs that these constants imply:

- C1: compressor of constant isentropic efficiency; pressure ratio 20 at T4 = 3300 R, theta0 = 1.1.
- tau_lambda* 7.378 = cp_hot T4max / (cp_cold 518.67 R): the ratio of heat capacities, 1.1596.
- C3 = 5 tau_lambda* / 1.1 times the turbine's ratio of temperatures, 0.7625. With a mechanical
  efficiency of 0.99, which is a choice here, the compressor's efficiency is then 0.858.
- 5.451 = 20 times the ratios of all pressures lost and dropped: with a turbine of polytropic
  efficiency 0.9, again a choice, 0.919 is left for inlet, combustor and nozzle together.
- C4: heat released per kilogram of fuel. No mass of fuel is in these equations: a fuel without
  mass gives the engine here its heat, and its flow is counted by C4's heat.

So three numbers are fitted and the dependence on Mach number and temperature is predicted.
Tolerances: the digits of the closed form, 1e-5; for the pressure ratio the four digits of C1.
"""

from __future__ import annotations

from math import sqrt

import numpy as np
import pytest
from engine_files import Content, air, changed, load, one_rating, turbojet_content

from engine.atmosphere import FlightCondition, flight_condition
from engine.cycle_engine import CycleEngine
from engine.interface import EngineState

DIGITS, FOUR_DIGITS = 1e-5, 2e-4
STANDARD = 288.15  # [K]
COLD_CP, COLD_GAMMA, HOT_GAMMA = 1004.0, 1.4, 1.33
# The printed constants.
C1, C3, C4, KEPT_PRESSURE, TAU_LAMBDA = 0.0004512, 25.57, 3.012, 5.451, 7.378
HOTTEST = 3300.0 / 1.8  # [K]
BREAK = 1.1  # theta0
BOOK = (
    "J. D. Mattingly, W. H. Heiser and D. T. Pratt, Aircraft Engine Design, 2nd ed., AIAA, "
    "appendix D"
)

# What they imply, see above.
HOT_CP = COLD_CP * TAU_LAMBDA * STANDARD / HOTTEST
TURBINE_FALL = C3 * BREAK / (5.0 * TAU_LAMBDA)  # exit over entry temperature
MECHANICAL = 0.99
COMPRESSOR_RISE = 1.0 + MECHANICAL * TAU_LAMBDA / BREAK * (1.0 - TURBINE_FALL)
COMPRESSOR_EFFICIENCY = (20.0 ** (1 / 3.5) - 1.0) / (COMPRESSOR_RISE - 1.0)
TURBINE_EFFICIENCY = 0.9
TURBINE_DROP = TURBINE_FALL ** (HOT_GAMMA / ((HOT_GAMMA - 1.0) * TURBINE_EFFICIENCY))
ALL_DUCTS = KEPT_PRESSURE / (20.0 * TURBINE_DROP)
SOUND = sqrt((COLD_GAMMA - 1.0) * COLD_CP * STANDARD)
PER_HOUR = 3600.0 * 9.80665  # kg/(N s) to lb/(h lbf)
HEAT = PER_HOUR * COLD_CP * STANDARD / SOUND * (TAU_LAMBDA / BREAK - COMPRESSOR_RISE) / C4
MASSLESS_HEAT = 1e15  # [J/kg]

TEMPERATURE = {"turbine_entry_temperature": f"{HOTTEST} K"}
BY_THROTTLE_RATIO: Content = {**TEMPERATURE, "throttle_ratio": BREAK}
BY_SPEED: Content = {**TEMPERATURE, "corrected_high_pressure_speed": 1.0}


def content(limits: Content) -> Content:
    return turbojet_content(
        {
            "sectional_gas": {
                "cold": {"heat_capacity": f"{COLD_CP} J/kg/K", "heat_capacity_ratio": 1.4},
                "hot": {"heat_capacity": f"{HOT_CP} J/kg/K", "heat_capacity_ratio": HOT_GAMMA},
            },
            "design_point": {
                "pressure_altitude": "0 m",
                "mach": 0.0,
                "airflow": "45.36 kg/s",
                "compressor_pressure_ratio": 20.0,
                "turbine_entry_temperature": f"{HOTTEST / BREAK} K",
            },
            "efficiencies": {
                "compressor": {"isentropic": COMPRESSOR_EFFICIENCY},
                "turbine": {"polytropic": TURBINE_EFFICIENCY},
                "mechanical": MECHANICAL,
                "away_from_design": "constant",
            },
            "fuel": {"lower_heating_value": f"{MASSLESS_HEAT / 1e6} MJ/kg"},
            "inlet": {"total_pressure_recovery": ALL_DUCTS / 0.95},
            "combustor": {"efficiency": 1.0, "pressure_loss_fraction": 0.05},
            "cooling": {},
            "off_takes": {},
            "nozzle": {"kind": "convergent-divergent"},
            **one_rating(**limits),
        }
    )


@pytest.fixture(scope="module")
def by_ratio() -> CycleEngine:
    return load(content(BY_THROTTLE_RATIO))


@pytest.fixture(scope="module")
def by_speed() -> CycleEngine:
    return load(content(BY_SPEED))


def book_air(mach: float, temperature: float) -> FlightCondition:
    """Air of the author's cold section; the pressure cancels."""
    speed = sqrt((COLD_GAMMA - 1.0) * COLD_CP * temperature)
    return air(mach, temperature, 30000.0, speed)


def at(engine: CycleEngine, mach: float, temperature: float) -> EngineState:
    state = engine.at_rating(book_air(mach, temperature), "take_off")
    assert int(state.outcome) == 0
    return state


def consumption(state: EngineState) -> float:
    """[1/h] over root theta, the fuel counted by its heat."""
    fuel = float(state.fuel_flow) * MASSLESS_HEAT / HEAT
    theta = float(state.flight.static_temperature) / STANDARD
    return PER_HOUR * fuel / float(state.net_thrust) / sqrt(theta)


# Mach number, a temperature [K] below the break there, S / sqrt(theta) [1/h] and f1. No day on
# earth is so cold that Mach 2 lies below the break; the equations do not mind.
CLOSED_FORM = [
    (0.0, 288.15, 1.01638, 2.96346),
    (0.5, 288.15, 1.19130, 2.65476),
    (1.0, 216.65, 1.35236, 2.67267),
    (1.5, 216.65, 1.50086, 2.90993),
    (2.0, 170.0, 1.65246, 3.28093),
]
CONSTANTS = pytest.mark.source(f"{BOOK}; grade read (constants), digits own")


@pytest.mark.source(f"{BOOK}; grade read (constants), inferences own")
def test_inputs_that_the_constants_imply() -> None:
    # No check of the engine: that the inputs are what one would expect of an engine.
    implied = {
        "ratio of heat capacities": (HOT_CP / COLD_CP, 1.1596),
        "turbine's ratio of temperatures": (TURBINE_FALL, 0.7625),
        "compressor efficiency": (COMPRESSOR_EFFICIENCY, 0.858),
        "pressure kept by inlet, combustor and nozzle": (ALL_DUCTS, 0.919),
        "heat released, MJ/kg": (HEAT / 1e6, 41.2),
        "pressure ratio by C1": ((1.0 + C1 * 3300.0 / BREAK) ** 3.5, 20.0),
    }
    for name, (found, stated) in implied.items():
        assert found == pytest.approx(stated, rel=1e-3), name


@CONSTANTS
@pytest.mark.parametrize(("mach", "temperature", "expected", "specific_thrust"), CLOSED_FORM)
def test_consumption_and_thrust_below_the_break(
    by_ratio: CycleEngine, mach: float, temperature: float, expected: float, specific_thrust: float
) -> None:
    state = at(by_ratio, mach, temperature)
    flow = float(state.stations["2"].mass_flow)
    sound = float(state.flight.speed_of_sound)

    assert consumption(state) == pytest.approx(expected, rel=DIGITS)
    assert float(state.net_thrust) / (flow * sound) == pytest.approx(specific_thrust, rel=DIGITS)


@CONSTANTS
@pytest.mark.parametrize(("mach", "temperature"), [row[:2] for row in CLOSED_FORM])
def test_compressor_stays_where_it_is_below_the_break(
    by_ratio: CycleEngine, mach: float, temperature: float
) -> None:
    state = at(by_ratio, mach, temperature)
    theta0 = temperature * (1.0 + 0.2 * mach**2) / STANDARD

    assert float(state.overall_pressure_ratio) == pytest.approx(20.0, rel=1e-9)
    assert float(state.turbine_entry_temperature) == pytest.approx(HOTTEST * theta0 / BREAK)


@CONSTANTS
@pytest.mark.parametrize(
    ("mach", "temperature"), [(0.9, 288.15), (1.2, 288.15), (2.0, 216.65), (2.5, 216.65)]
)
def test_pressure_ratio_falls_above_the_break(
    by_ratio: CycleEngine, mach: float, temperature: float
) -> None:
    state = at(by_ratio, mach, temperature)
    theta0 = temperature * (1.0 + 0.2 * mach**2) / STANDARD

    expected = (1.0 + C1 * 3300.0 / theta0) ** 3.5
    assert expected < 20.0
    assert float(state.overall_pressure_ratio) == pytest.approx(expected, rel=FOUR_DIGITS)
    assert float(state.turbine_entry_temperature) == pytest.approx(HOTTEST, rel=1e-9)


@CONSTANTS
def test_a_limit_of_corrected_speed_does_the_same(
    by_ratio: CycleEngine, by_speed: CycleEngine
) -> None:
    for mach, temperature in ((0.0, 250.0), (0.5, 288.15), (1.5, 216.65), (2.2, 216.65)):
        one, other = at(by_ratio, mach, temperature), at(by_speed, mach, temperature)
        assert float(one.net_thrust) == pytest.approx(float(other.net_thrust), rel=1e-9)
        assert float(one.fuel_flow) == pytest.approx(float(other.fuel_flow), rel=1e-9)


@pytest.mark.source(f"{BOOK}, break Mach number at sea level sqrt(5 (TR - 1)); grade read")
def test_break_at_sea_level(by_speed: CycleEngine) -> None:
    # Found by the compressor's limit, which knows nothing of a throttle ratio.
    mach = np.arange(0.69, 0.72, 0.001)
    speed = sqrt((COLD_GAMMA - 1.0) * COLD_CP * STANDARD)
    flight = air(0.0, STANDARD, 101325.0, speed).with_mach(mach)

    state = by_speed.at_rating(flight, "take_off")

    is_hot = state.binding_limit_names == "turbine_entry_temperature"
    assert set(state.binding_limit_names[~is_hot]) == {"corrected_high_pressure_speed"}
    assert mach[is_hot].min() - mach[~is_hot].max() == pytest.approx(0.001)
    assert mach[~is_hot].max() < sqrt(5.0 * (BREAK - 1.0)) < mach[is_hot].min()


@pytest.mark.source(f"{BOOK}, the compressor below the break; grade read")
@pytest.mark.parametrize(
    ("altitude", "mach"), [(0.0, 0.0), (0.0, 0.5), (5000.0, 0.9), (11000.0, 1.0), (11000.0, 1.5)]
)
def test_real_gas_keeps_the_compressor_nearly_there(altitude: float, mach: float) -> None:
    # Heat capacities rise with temperature, so that equal T4 / theta0 is no longer equal work.
    gas = {"sectional_gas": None, "fuel": None, "combustor.efficiency": 0.98}
    engine = load(changed(content(BY_THROTTLE_RATIO), gas))

    state = engine.at_rating(flight_condition(altitude, mach), "take_off")

    assert int(state.outcome) == 0
    assert float(state.overall_pressure_ratio) == pytest.approx(20.0, rel=0.012)
