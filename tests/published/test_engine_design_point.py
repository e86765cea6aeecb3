"""Design points of worked textbook examples, flown through ordinary engine content.

Expected values are the examples' own algebra with more digits than the books print; the printed
value stands beside it where it is more than the same number rounded. Tolerance 0.1 %: the own
columns carry six to seven digits, so this leaves room for nothing but the method.
"""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from engine_files import Content, air, load, one_rating, turbofan_content, turbojet_content

from engine.atmosphere import FlightCondition
from engine.cycles.sizing import size
from engine.fuels import KEROSENE
from engine.gas import RealGas
from engine.interface import EngineState
from engine.parts.compressor import compress
from engine.parts.efficiency import Efficiency
from engine.parts.inlet import Inlet, take_in
from engine.parts.nozzle import Nozzle, discharge
from engine.parts.stream import Stream
from engine.parts.turbine import expand_by_power

WITHIN = 1e-3
# A fuel so rich that its mass is nothing: the authors leave it out of the flow.
MASSLESS_FUEL = "1e9 MJ/kg"


def sectional(cold: tuple[float, float], hot: tuple[float, float]) -> Content:
    """Heat capacity [J/(kg K)] and ratio of heat capacities by section."""
    return {
        "sectional_gas": {
            name: {"heat_capacity": f"{cp} J/kg/K", "heat_capacity_ratio": gamma}
            for name, (cp, gamma) in (("cold", cold), ("hot", hot))
        },
        "cooling": {},
        "off_takes": {},
    }


def at_design_point(content: Content, flight: FlightCondition) -> EngineState:
    """The engine sized for 1 kg/s in the author's own air, then run there at its rating."""
    engine = load(content)
    sizing, _ = size(engine.arrangement, flight, airflow=1.0)
    state = replace(engine, sizing=sizing).at_rating(flight, "cruise")
    assert int(state.outcome) == 0
    return state


def total(state: EngineState, station: str) -> tuple[float, float]:
    """Total temperature [K] and pressure [Pa]."""
    there = state.stations[station]
    return float(there.total_temperature), float(there.total_pressure)


MATTINGLY = turbojet_content(
    {
        **sectional(cold=(1004.0, 1.4), hot=(1239.0, 1.3)),
        "design_point": {
            "pressure_altitude": "12 km",
            "mach": 2.0,
            "airflow": "1 kg/s",
            "compressor_pressure_ratio": 10.0,
            "turbine_entry_temperature": "1800 K",
        },
        "efficiencies": {
            "compressor": {"polytropic": 0.9},
            "turbine": {"polytropic": 0.9},
            "mechanical": 0.99,
        },
        "fuel": {"lower_heating_value": "42.8 MJ/kg"},
        "inlet": {"total_pressure_recovery": 0.95, "has_standard_ram_recovery": True},
        "combustor": {"efficiency": 0.98, "pressure_loss_fraction": 0.06},
        "nozzle": {
            "kind": "given exit pressure",
            "exit_pressure_ratio": 2.0,
            "pressure_loss_fraction": 0.04,
        },
        **one_rating(turbine_entry_temperature="1800 K"),
    }
)


@pytest.mark.source(
    "J. D. Mattingly, Elements of Propulsion: Gas Turbines and Rockets, AIAA, 2006, Example 7.1, "
    "pp. 387-389; grade read, digits beyond the print own"
)
def test_mattingly_turbojet() -> None:
    speed_of_sound = 295.0029
    flight = air(2.0, 216.7, 20000.0, speed_of_sound)  # the pressure cancels

    state = at_design_point(MATTINGLY, flight)

    (t2, p2), (t3, _), (t4, p4), (t5, p5) = (total(state, name) for name in ("2", "3", "4", "5"))
    p0 = total(state, "0")[1]
    jet = state.stations["9"]
    assert jet.velocity is not None
    assert jet.static_temperature is not None
    assert p0 / 20000.0 == pytest.approx(7.824449, rel=WITHIN)
    assert p2 / p0 == pytest.approx(0.87875, rel=WITHIN)
    assert t3 / t2 == pytest.approx(2.077114, rel=WITHIN)
    assert float(state.stations["4"].fuel_air_ratio) == pytest.approx(0.03567425, rel=WITHIN)
    assert t5 / t4 == pytest.approx(0.8155305, rel=WITHIN)
    assert p5 / p4 == pytest.approx(0.3746286, rel=WITHIN)
    assert jet.static_temperature / 216.7 == pytest.approx(3.846076, rel=WITHIN)
    assert jet.velocity / speed_of_sound == pytest.approx(4.250536, rel=WITHIN)
    assert float(state.net_thrust) == pytest.approx(807.0595, rel=WITHIN)  # printed 806.9
    consumption = float(state.specific_fuel_consumption) * 1e6
    assert consumption == pytest.approx(44.20275, rel=WITHIN)  # [mg/(N s)] printed 44.21


@pytest.mark.source(
    "J. D. Mattingly, Elements of Propulsion: Gas Turbines and Rockets, AIAA, 2006, Example 7.1, "
    "efficiencies by his definitions, on the jet's velocity without its pressure; grade read, "
    "digits beyond the print own"
)
def test_mattingly_efficiencies() -> None:
    state = at_design_point(MATTINGLY, air(2.0, 216.7, 20000.0, 295.0029))

    speed, jet = float(state.flight.true_airspeed), state.stations["9"]
    assert jet.velocity is not None
    gained = 0.5 * (float(jet.mass_flow) * float(jet.velocity) ** 2 - speed**2)
    fuel_power = float(state.fuel_flow) * 42.8e6
    assert gained / fuel_power == pytest.approx(0.4192599, rel=WITHIN)
    thrust_power = float(state.net_thrust) * speed
    assert thrust_power / gained == pytest.approx(0.7438406, rel=WITHIN)
    assert thrust_power / fuel_power == pytest.approx(0.3118625, rel=WITHIN)


FAROKHI_TET = 8.0 * 1004.0 * 233.0 / 1152.0  # [K]; the example gives cp_t Tt4 / (cp_c T0) = 8
FAROKHI = turbofan_content(
    {
        **sectional(cold=(1004.0, 1.4), hot=(1152.0, 1.33)),
        "design_point": {
            "pressure_altitude": "14 km",
            "mach": 0.88,
            "airflow": "1 kg/s",
            "bypass_ratio": 8.0,
            "fan_pressure_ratio": 1.6,
            # The author's compressor pressure ratio of 40 is from engine face to delivery.
            "high_pressure_compressor_pressure_ratio": 40.0 / 1.6,
            "turbine_entry_temperature": f"{FAROKHI_TET:.9f} K",
        },
        "efficiencies": {
            "fan": {"polytropic": 0.9},
            "high_pressure_compressor": {"polytropic": 0.9},
            "high_pressure_turbine": {"polytropic": 0.85},
            "low_pressure_turbine": {"polytropic": 0.85},
            "mechanical": 0.95,
        },
        "fuel": {"lower_heating_value": "42 MJ/kg"},
        "inlet": {"total_pressure_recovery": 0.995},
        "combustor": {"efficiency": 0.992, "pressure_loss_fraction": 0.05},
        "core_nozzle": {"pressure_loss_fraction": 0.02},
        "bypass_nozzle": {"pressure_loss_fraction": 0.05},
        **one_rating(turbine_entry_temperature=f"{FAROKHI_TET:.9f} K"),
    }
)
FAROKHI_SOURCE = pytest.mark.source(
    "S. Farokhi, Aircraft Propulsion, 1st ed., Wiley, Example 4.13, p. 187; grade read, digits "
    "beyond the print own"
)


@pytest.fixture(scope="module")
def farokhi() -> EngineState:
    return at_design_point(FAROKHI, air(0.88, 233.0, 15000.0, 305.8967))


@FAROKHI_SOURCE
@pytest.mark.parametrize(
    ("station", "temperature", "pressure"),
    [
        ("0", 269.087, 24829.63),
        ("2", 269.087, 24705.48),
        ("13", 312.3869, 39528.77),
        ("17", 312.3869, 37552.33),
        ("3", 867.9271, 988219.3),
        ("4", 1624.528, 938808.4),  # the text truncates 1624.5 to 1624.0
        ("5", 778.627, 28717.21),
        ("7", 778.627, 28142.86),
    ],
)
def test_farokhi_turbofan_stations(
    farokhi: EngineState, station: str, temperature: float, pressure: float
) -> None:
    assert total(farokhi, station) == pytest.approx((temperature, pressure), rel=WITHIN)


@FAROKHI_SOURCE
@pytest.mark.parametrize(
    ("station", "temperature", "pressure", "velocity"),
    [("9", 668.3493, 15207.39, 504.0632), ("19", 260.3224, 19838.21, 323.3349)],
)
def test_farokhi_turbofan_jets(
    farokhi: EngineState, station: str, temperature: float, pressure: float, velocity: float
) -> None:
    jet = farokhi.stations[station]
    found = (jet.static_temperature, jet.static_pressure, jet.velocity)

    assert found == pytest.approx((temperature, pressure, velocity), rel=WITHIN)


@FAROKHI_SOURCE
def test_farokhi_turbofan_thrust_and_fuel(farokhi: EngineState) -> None:
    assert farokhi.stations["4"].fuel_air_ratio == pytest.approx(0.02513177, rel=WITHIN)
    assert float(farokhi.net_thrust) == pytest.approx(126.2903, rel=WITHIN)
    consumption = float(farokhi.specific_fuel_consumption) * 1e6
    assert consumption == pytest.approx(22.11111, rel=WITHIN)  # [mg/(N s)] printed 22.1
    assert float(np.min(farokhi.kinks[:2])) > 0.0  # both nozzles choked, as he finds


@FAROKHI_SOURCE
def test_farokhi_turbofan_efficiencies(farokhi: EngineState) -> None:
    # His definitions, on velocities that hold the jets' pressure, are those of the account.
    account = farokhi.energy
    assert account is not None
    assert float(account.thermal_efficiency) == pytest.approx(0.3632316, rel=WITHIN)
    assert float(account.propulsive_efficiency) == pytest.approx(0.7980206, rel=WITHIN)
    assert float(account.overall_efficiency) == pytest.approx(0.2898663, rel=WITHIN)


@pytest.mark.source(
    "S. Farokhi, Aircraft Propulsion, 1st ed., Wiley, Example 4.13, effective jet velocities; "
    "grade own (the text read repeats the core's in the place of the fan's)"
)
@pytest.mark.parametrize(("station", "velocity"), [("9", 509.2317), ("19", 379.6607)])
def test_farokhi_turbofan_effective_velocities(
    farokhi: EngineState, station: str, velocity: float
) -> None:
    assert farokhi.evidence is not None
    stream, jet = farokhi.evidence.path.jets[station]
    effective = float((jet.gross_thrust / stream.mass_flow)[0])

    assert effective == pytest.approx(velocity, rel=WITHIN)


@pytest.mark.source(
    "M. J. Moran and H. N. Shapiro, Fundamentals of Engineering Thermodynamics, SI edition, "
    "Example 9.12, p. 416; grade read, digits by the nine-coefficient air own"
)
def test_moran_and_shapiro_ideal_turbojet() -> None:
    gas, ideal = RealGas(KEROSENE), Efficiency(1.0, "isentropic")
    speed = 278.0
    flight = air(1.0, 240.0, 0.8e5, speed)

    _, face = take_in(gas, Inlet(), flight)
    delivery = compress(gas, face, np.array(8.0), ideal)
    hot_temperature = np.array(1200.0)  # heated without fuel
    hot = Stream(
        hot_temperature,
        delivery.total_pressure,
        delivery.mass_flow,
        delivery.fuel_air_ratio,
        gas.enthalpy(hot_temperature, 0.0),
        "hot",
    )
    work = delivery.mass_flow * (delivery.enthalpy - face.enthalpy)
    behind = expand_by_power(gas, hot, work, ideal)
    jet = discharge(gas, Nozzle("convergent-divergent"), behind, flight.static_pressure)

    expected = {
        "p1": (face.total_pressure, 1.34588e5),  # printed 1.35
        "T2": (delivery.total_temperature, 502.169),
        "p3": (hot.total_pressure, 10.767e5),  # printed 10.78
        "T4": (behind.total_temperature, 1004.351),
        "p4": (behind.total_pressure, 5.24978e5),  # printed 5.25
        "T5": (jet.exit_static_temperature, 613.65),
        "V5": (jet.exit_velocity, 927.023),  # printed 926.99
    }
    for name, (found, wanted) in expected.items():
        assert float(found) == pytest.approx(wanted, rel=WITHIN), name


SARAVANAMUTTOO = turbojet_content(
    {
        **sectional(cold=(1005.0, 1.4), hot=(1148.0, 4.0 / 3.0)),
        "design_point": {
            "pressure_altitude": "10 km",
            "mach": 0.8,
            "airflow": "1 kg/s",
            "compressor_pressure_ratio": 8.0,
            "turbine_entry_temperature": "1200 K",
        },
        "efficiencies": {
            "compressor": {"isentropic": 0.87},
            "turbine": {"isentropic": 0.90},
            "mechanical": 0.99,
        },
        "fuel": {"lower_heating_value": MASSLESS_FUEL},
        "inlet": {"isentropic_efficiency": 0.93},
        "combustor": {"efficiency": 0.98, "pressure_loss_fraction": 0.04},
        "nozzle": {"isentropic_efficiency": 0.95},
        **one_rating(turbine_entry_temperature="1200 K"),
    }
)
SARAVANAMUTTOO_SOURCE = pytest.mark.source(
    "H. I. H. Saravanamuttoo, G. F. C. Rogers and H. Cohen, Gas Turbine Theory, Example 3.1; "
    "grade from memory (inputs), answers own from those inputs, the page not read"
)


@pytest.fixture(scope="module")
def saravanamuttoo() -> EngineState:
    # The author's speed of sound goes with R = 287 J/(kg K).
    return at_design_point(SARAVANAMUTTOO, air(0.8, 223.3, 26500.0, 239.629 / 0.8))


@SARAVANAMUTTOO_SOURCE
@pytest.mark.parametrize(
    ("station", "temperature", "pressure"),
    [
        ("2", 251.8682, 39275.8),
        ("3", 486.7851, 314206.4),
        ("4", 1200.0, 301638.2),
        ("5", 992.268, 128348.6),
    ],
)
def test_saravanamuttoo_turbojet_stations(
    saravanamuttoo: EngineState, station: str, temperature: float, pressure: float
) -> None:
    assert total(saravanamuttoo, station) == pytest.approx((temperature, pressure), rel=WITHIN)


@SARAVANAMUTTOO_SOURCE
def test_saravanamuttoo_turbojet_jet_and_thrust(saravanamuttoo: EngineState) -> None:
    jet = saravanamuttoo.stations["9"]
    found = (jet.static_temperature, jet.static_pressure, jet.velocity)
    assert saravanamuttoo.evidence is not None
    area = saravanamuttoo.evidence.path.areas["core_nozzle"]

    assert found == pytest.approx((850.637, 66888.2, 570.2499), rel=WITHIN)
    assert float(area[0]) == pytest.approx(0.006395663, rel=WITHIN)
    assert float(saravanamuttoo.net_thrust) == pytest.approx(588.9302, rel=WITHIN)
