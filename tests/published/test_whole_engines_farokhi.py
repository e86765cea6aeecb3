"""Farokhi's worked engines with afterburner, mixer and propeller, through ordinary engine content.

Design points in the author's own air and gas. Expected values are the examples' own algebra with
more digits than the book prints; the printed value stands beside it where it is more than the same
number rounded. Tolerance: the seven digits of those columns.
"""

from __future__ import annotations

from dataclasses import replace
from math import sqrt

import numpy as np
import pytest
from engine_files import Content, air, changed, load, one_rating, turbofan_content, turbojet_content

from engine.atmosphere import FlightCondition
from engine.cycles.sizing import size
from engine.interface import EngineState

WITHIN = 2e-6
COLD_CP, COLD_GAMMA = 1004.0, 1.4
BOOK = "S. Farokhi, Aircraft Propulsion, 1st ed., Wiley"


def book_air(mach: float, temperature: float, pressure: float) -> FlightCondition:
    """Ambient air of the author's cold section."""
    gas_constant = COLD_CP * (1.0 - 1.0 / COLD_GAMMA)
    return air(mach, temperature, pressure, sqrt(COLD_GAMMA * gas_constant * temperature))


def sectional(**sections: tuple[float, float]) -> Content:
    """Heat capacity [J/(kg K)] and ratio of heat capacities by section; nothing taken off."""
    pairs = {"cold": (COLD_CP, COLD_GAMMA), **sections}
    return {
        "sectional_gas": {
            name: {"heat_capacity": f"{cp} J/kg/K", "heat_capacity_ratio": gamma}
            for name, (cp, gamma) in pairs.items()
        },
        "cooling": {},
        "off_takes": {},
    }


def at_design_point(
    content: Content, flight: FlightCondition, airflow: float, rating: str
) -> EngineState:
    """The engine sized in the author's air, then matched there at a rating."""
    engine = load(content)
    sizing, _ = size(engine.arrangement, flight, airflow=airflow)
    state = replace(engine, sizing=sizing).at_rating(flight, rating)
    assert int(state.outcome) == 0
    return state


def total(state: EngineState, station: str) -> tuple[float, float]:
    """Total temperature [K] and pressure [Pa]."""
    there = state.stations[station]
    return float(there.total_temperature), float(there.total_pressure)


def jet(state: EngineState, cp: float, gamma: float) -> tuple[float, float, float]:
    """Mach number, static temperature [K] and velocity [m/s] of the jet."""
    there = state.stations["9"]
    assert there.velocity is not None
    assert there.static_temperature is not None
    temperature, velocity = float(there.static_temperature), float(there.velocity)
    return velocity / sqrt((gamma - 1.0) * cp * temperature), temperature, velocity


def efficiencies(state: EngineState) -> tuple[float, float, float]:
    """Thermal, propulsive, overall; the author's definitions are those of the energy account."""
    account = state.energy
    assert account is not None
    return (
        float(account.thermal_efficiency),
        float(account.propulsive_efficiency),
        float(account.overall_efficiency),
    )


# --- Example 4.11: turbojet with afterburner -------------------------------------------------

HOT, REHEATED = (1156.0, 1.33), (1243.0, 1.3)
# tau_lambda 8 and 11 are cp T4 / (cp_cold T0) and cp_AB T7 / (cp_cold T0).
T4, T7 = 8.0 * COLD_CP * 228.0 / HOT[0], 11.0 * COLD_CP * 228.0 / REHEATED[0]
TURBOJET = turbojet_content(
    {
        **sectional(hot=HOT, reheated=REHEATED),
        "design_point": {
            "pressure_altitude": "16 km",
            "mach": 2.0,
            "airflow": "1 kg/s",
            "compressor_pressure_ratio": 12.0,
            "turbine_entry_temperature": f"{T4:.9f} K",
        },
        "efficiencies": {
            "compressor": {"polytropic": 0.9},
            "turbine": {"polytropic": 0.82},
            "mechanical": 0.995,
        },
        "fuel": {"lower_heating_value": "42 MJ/kg"},
        "inlet": {"total_pressure_recovery": 0.88},
        "combustor": {"efficiency": 0.98, "pressure_loss_fraction": 0.05},
        "nozzle": {"kind": "convergent-divergent", "pressure_loss_fraction": 0.07},
        # One pressure ratio, 0.93, is given for the afterburner: all of it duct and flame holders.
        "afterburner": {
            "temperature": f"{T7:.9f} K",
            "efficiency": 0.98,
            "dry_pressure_loss_fraction": 0.07,
            "lit_pressure_loss_fraction": 0.07,
        },
        **one_rating(turbine_entry_temperature=f"{T4:.9f} K"),
        "ratings.maximum_afterburning": {
            "turbine_entry_temperature": f"{T4:.9f} K",
            "afterburner_temperature": f"{T7:.9f} K",
        },
    }
)
EXAMPLE_4_11 = pytest.mark.source(
    f"{BOOK}, Example 4.11, p. 176; grade read, digits beyond the print own"
)


@pytest.fixture(scope="module")
def turbojet() -> EngineState:
    return at_design_point(TURBOJET, book_air(2.0, 228.0, 10000.0), 1.0, "maximum_afterburning")


@EXAMPLE_4_11
@pytest.mark.parametrize(
    ("station", "temperature", "pressure"),
    [
        ("0", 410.4, 78244.49),
        ("2", 410.4, 68855.15),
        ("3", 903.2429, 826261.8),
        ("4", 1584.166, 784948.7),
        ("5", 1163.855, 172469.7),
        # Station 7 stands behind the nozzle's duct here: his pressure at 9, for 160396.8 at 7.
        ("7", 2025.77, 149169.0),
    ],
)
def test_turbojet_stations(
    turbojet: EngineState, station: str, temperature: float, pressure: float
) -> None:
    assert total(turbojet, station) == pytest.approx((temperature, pressure), rel=WITHIN)


@EXAMPLE_4_11
def test_turbojet_jet(turbojet: EngineState) -> None:
    assert jet(turbojet, *REHEATED) == pytest.approx((2.402402, 1085.778, 1528.666), rel=WITHIN)


@EXAMPLE_4_11
def test_turbojet_fuel_and_thrust(turbojet: EngineState) -> None:
    f = float(turbojet.stations["4"].fuel_air_ratio)
    assert f == pytest.approx(0.02350548, rel=WITHIN)
    assert float(turbojet.fuel_flow) - f == pytest.approx(0.03105895, rel=WITHIN)
    assert float(turbojet.net_thrust) == pytest.approx(1006.883, rel=WITHIN)  # 3.3 a0, printed
    consumption = float(turbojet.specific_fuel_consumption) * 1e6
    assert consumption == pytest.approx(54.19143, rel=WITHIN)  # [mg/(N s)]
    assert turbojet.binding_limit_names == "afterburner_temperature"


@EXAMPLE_4_11
def test_turbojet_efficiencies(turbojet: EngineState) -> None:
    thermal, propulsive = 0.4577522, 0.5808767  # printed 0.5 and 0.6
    expected = (thermal, propulsive, thermal * propulsive)
    assert efficiencies(turbojet) == pytest.approx(expected, rel=WITHIN)


# --- Example 4.15: mixed turbofan with afterburner -------------------------------------------

MIXED_HOT, MIXED, MIXED_REHEATED = (1152.0, 1.33), (1099.027, 1.352105), (1241.0, 1.3)
CORE_LIMIT = {"turbine_entry_temperature": "1600 K"}
MIXED_TURBOFAN = changed(
    turbofan_content({"core_nozzle": None, "bypass_nozzle": None}),
    {
        **sectional(hot=MIXED_HOT, mixed=MIXED, reheated=MIXED_REHEATED),
        "kind": "mixed turbofan",
        "design_point": {
            "pressure_altitude": "16 km",
            "mach": 2.0,
            "airflow": "1 kg/s",
            "bypass_ratio": 0.5706831,  # what brings both streams to one total pressure
            "fan_pressure_ratio": 1.9,
            # The author's compressor pressure ratio of 13 is from engine face to delivery.
            "high_pressure_compressor_pressure_ratio": 13.0 / 1.9,
            "turbine_entry_temperature": "1600 K",
        },
        "efficiencies": {
            "fan": {"polytropic": 0.9},
            "high_pressure_compressor": {"polytropic": 0.9},
            "high_pressure_turbine": {"polytropic": 0.8},
            "low_pressure_turbine": {"polytropic": 0.8},
            "mechanical": 0.95,
        },
        "fuel": {"lower_heating_value": "42 MJ/kg"},
        "inlet": {"total_pressure_recovery": 0.9},
        "combustor": {"efficiency": 0.98, "pressure_loss_fraction": 0.05},
        "mixer": {
            "core_mach": 0.5,
            "bypass_pressure_loss_fraction": 0.01,
            "pressure_loss_fraction": 0.02,
        },
        "nozzle": {
            "kind": "given exit pressure",
            "exit_pressure_ratio": 3.8,
            "pressure_loss_fraction": 0.05,
        },
        "afterburner": {
            "temperature": "2000 K",
            "efficiency": 0.98,
            "dry_pressure_loss_fraction": 0.08,
            "lit_pressure_loss_fraction": 0.08,
        },
        **one_rating(**CORE_LIMIT),
        "ratings.maximum_afterburning": {**CORE_LIMIT, "afterburner_temperature": "2000 K"},
    },
)
EXAMPLE_4_15 = pytest.mark.source(
    f"{BOOK}, Example 4.15, p. 199; grade read, digits beyond the print own, mixer by an own "
    "momentum balance (printed 131.23 kPa)"
)


@pytest.fixture(scope="module")
def mixed() -> EngineState:
    flight = book_air(2.0, 223.0, 10000.0)
    return at_design_point(MIXED_TURBOFAN, flight, 1.5706831, "maximum_afterburning")


@EXAMPLE_4_15
@pytest.mark.parametrize(
    ("station", "temperature", "pressure"),
    [
        ("0", 401.4, 78244.49),
        ("2", 401.4, 70420.04),
        ("13", 492.1195, 133798.1),
        ("16", 492.1195, 132460.1),
        ("3", 906.171, 915460.5),
        ("4", 1600.0, 869687.5),
        ("5", 1101.269, 132460.1),  # as at 16: so the author finds the bypass ratio
        ("64", 902.0913, 131231.4 * 0.98),  # printed ideal 131.23 kPa; 0.98 is friction
        ("7", 2000.0, 112402.4),  # behind the nozzle's duct: his pressure at 9
    ],
)
def test_mixed_turbofan_stations(
    mixed: EngineState, station: str, temperature: float, pressure: float
) -> None:
    assert total(mixed, station) == pytest.approx((temperature, pressure), rel=WITHIN)


@EXAMPLE_4_15
def test_mixed_turbofan_jet(mixed: EngineState) -> None:
    assert jet(mixed, *MIXED_REHEATED) == pytest.approx((1.376882, 1557.183, 1048.367), rel=WITHIN)
    assert mixed.evidence is not None
    stream, out = mixed.evidence.path.jets["9"]
    effective = float((out.gross_thrust / stream.mass_flow)[0])
    assert effective == pytest.approx(1361.804, rel=WITHIN)


@pytest.mark.source(
    f"{BOOK}, Example 4.15, p. 199, with the mass of afterburner fuel made consistent; grade own: "
    "the author adds afterburner fuel per mixed gas (0.0385) to fuel per core air, so that his "
    "48.5 mg/(N s) and 2.7 a0 are no checks"
)
def test_mixed_turbofan_fuel_and_thrust(mixed: EngineState) -> None:
    f = float(mixed.stations["4"].fuel_air_ratio)  # of 1 kg/s of core air
    assert f == pytest.approx(0.0237406, rel=WITHIN)
    assert float(mixed.fuel_flow) - f == pytest.approx(0.06144608, rel=WITHIN)
    assert float(mixed.net_thrust) / 1.5706831 == pytest.approx(837.141, rel=WITHIN)
    consumption = float(mixed.specific_fuel_consumption) * 1e6
    assert consumption == pytest.approx(64.7865, rel=WITHIN)  # [mg/(N s)]
    assert efficiencies(mixed) == pytest.approx((0.3505138, 0.6275385, 0.2199609), rel=WITHIN)


# --- Example 4.17: turboprop -----------------------------------------------------------------

TURBOPROP = changed(
    turbojet_content(),
    {
        **sectional(hot=MIXED_HOT),
        "kind": "turboprop",
        "design_point": {
            "pressure_altitude": "13 km",
            "mach": 0.7,
            "airflow": "10 kg/s",
            "compressor_pressure_ratio": 30.0,
            "turbine_entry_temperature": "1600 K",
            "power_turbine_share": 0.85,
        },
        "efficiencies": {
            "compressor": {"polytropic": 0.92},
            "turbine": {"polytropic": 0.82},
            "power_turbine": {"isentropic": 0.88},
            "mechanical": 0.99,
            "gearbox": 0.995,
        },
        "fuel": {"lower_heating_value": "42 MJ/kg"},
        "inlet": {"total_pressure_recovery": 0.98},
        "combustor": {"efficiency": 0.99, "pressure_loss_fraction": 0.04},
        "propeller": {"diameter": "5 m", "efficiency": 0.85},  # the author leaves the diameter open
        "nozzle": {"isentropic_efficiency": 0.95},
        **one_rating(turbine_entry_temperature="1600 K"),
    },
)
EXAMPLE_4_17 = pytest.mark.source(
    f"{BOOK}, Example 4.17, p. 211; grade read, digits beyond the print own"
)


@pytest.fixture(scope="module")
def turboprop() -> EngineState:
    return at_design_point(TURBOPROP, book_air(0.7, 228.0, 16000.0), 10.0, "cruise")


@EXAMPLE_4_17
@pytest.mark.parametrize(
    ("station", "temperature", "pressure"),
    [
        ("0", 250.344, 22193.62),
        ("2", 250.344, 21749.75),
        ("3", 719.8972, 652492.5),
        ("4", 1600.0, 626392.8),
        ("45", 1197.973, 151065.1),
        ("5", 815.2474, 24528.37),
    ],
)
def test_turboprop_stations(
    turboprop: EngineState, station: str, temperature: float, pressure: float
) -> None:
    assert total(turboprop, station) == pytest.approx((temperature, pressure), rel=WITHIN)


@EXAMPLE_4_17
def test_turboprop_powers_and_thrusts(turboprop: EngineState) -> None:
    evidence = turboprop.evidence
    assert evidence is not None
    path = evidence.path
    entry, leaves = path.stations["45"], path.stations["5"]
    drawn = float((entry.mass_flow * (entry.enthalpy - leaves.enthalpy))[0])
    assert drawn == pytest.approx(4533319.0, rel=WITHIN)
    assert path.propeller is not None
    assert float(path.propeller.shaft_power[0]) == pytest.approx(4465546.0, rel=WITHIN)
    assert float(path.propeller.thrust[0]) == pytest.approx(17919.72, rel=WITHIN)
    assert float(turboprop.net_thrust) == pytest.approx(20157.5, rel=WITHIN)
    core = float(turboprop.net_thrust) - float(path.propeller.thrust[0])
    assert core == pytest.approx(2237.782, rel=WITHIN)


@EXAMPLE_4_17
def test_turboprop_jet(turboprop: EngineState) -> None:
    # His nozzle efficiency is turned into a total pressure, 23983.3 Pa: the same jet.
    assert jet(turboprop, *MIXED_HOT) == pytest.approx((0.8001812, 737.3482, 423.6506), rel=WITHIN)


@EXAMPLE_4_17
def test_turboprop_fuel_and_efficiencies(turboprop: EngineState) -> None:
    account, speed = turboprop.energy, float(turboprop.flight.true_airspeed)
    assert account is not None
    assert turboprop.evidence is not None
    path = turboprop.evidence.path
    f = float(turboprop.stations["4"].fuel_air_ratio)
    assert f == pytest.approx(0.02819611, rel=WITHIN)
    consumption = float(turboprop.specific_fuel_consumption) * 1e6
    assert consumption == pytest.approx(13.9879, rel=WITHIN)  # [mg/(N s)]
    # Fuel over shaft power at the propeller and the kinetic power that the jet has gained.
    stream, out = path.jets["9"]
    gained = 0.5 * float(out.gross_thrust[0] ** 2 / stream.mass_flow[0]) - 0.5 * 10.0 * speed**2
    assert path.propeller is not None
    power = float(np.sum(path.propeller.shaft_power)) + gained
    assert float(turboprop.fuel_flow) / power * 1e9 == pytest.approx(54.6022, rel=WITHIN)
    assert efficiencies(turboprop) == pytest.approx((0.4360543, 0.8268371, 0.3605458), rel=WITHIN)
