"""The Energy Efficient Engine's published cycle: a mixed turbofan at three points, then matched.

Published: NASA CR-168219, flight propulsion system, Tables XI to XV, XVIII, XXI, XXIII: dry air, no
off-takes, full ram recovery, uninstalled. What it leaves open is stated here:

- Mechanical efficiency 1: the turbines' published efficiencies are taken to hold bearing losses.
- Mach number of the core stream in the mixer 0.45, friction there none; from 0.3 to 0.6 the
  specific fuel consumption moves by 0.8 %.
- Efficiencies of turbines and losses of ducts are those of maximum cruise at all three points.
- The nozzle expands fully.
- The published "core duct" is taken between fan hub and compressor (1.70 x 23.1 less its 1.7 % is
  38.6, published 38.4). There is no duct there in an engine file: the hub bears its loss, its
  efficiency lowered so that its work stays.

Published T41 is behind the vane air, station 41; T49, entry of the low-pressure turbine, is station
45, behind the air that joins after the high-pressure turbine. T41 is that of the flat-rating day
(ISA+10, at take-off ISA+15), specific fuel consumption that of the standard day (the ISA+10 of
cruise is an own inference). The design evaluations stand on the flat-rating day; the same engine at
the same thrust on the standard day stands beside.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache

import numpy as np
import pytest
from engine_files import Content, load, one_rating, turbofan_content
from scipy.optimize import brentq

from engine.atmosphere import FlightCondition, flight_condition
from engine.cycle_engine import CycleEngine
from engine.interface import EngineState

REPORT = "NASA CR-168219, Energy Efficient Engine, flight propulsion system"
CORE_DUCT = 1.0 - 0.017
MATCH_POINT = f"{REPORT}, maximum climb, Tables XIV, XVIII, XXI, XXIII"
FAN_CORRECTED_FLOW = 646.0  # [kg/s] at maximum climb


@dataclass(frozen=True)
class Point:
    """One column of Table XII, with efficiencies of Tables XIII and XV."""

    feet: float
    mach: float
    warm: float  # [K] above the standard day
    bypass_ratio: float
    fan: float
    hub: float
    compressor: float
    rotor_entry: float  # [K]
    fan_efficiency: float
    hub_efficiency: float
    compressor_efficiency: float
    mixer_effectiveness: float
    overall: float
    consumption: float  # [kg/(N h)]

    def flight(self, warm: float | None = None) -> FlightCondition:
        return flight_condition(self.feet * 0.3048, self.mach, self.warm if warm is None else warm)


POINTS = {
    "climb": Point(
        35000, 0.8, 10, 6.7, 1.68, 1.70, 23.1, 1517.15, 0.888, 0.905, 0.860, 0.85, 38.4, 0.0541
    ),
    "cruise": Point(
        35000, 0.8, 10, 6.8, 1.64, 1.66, 22.4, 1485.15, 0.894, 0.906, 0.861, 0.838, 36.5, 0.0540
    ),
    # Mixer effectiveness at take-off is that of climb.
    "take-off": Point(
        0, 0.0, 15, 7.0, 1.56, 1.58, 20.8, 1638.15, 0.891, 0.909, 0.863, 0.85, 32.4, 0.0305
    ),
}


def content(point: Point, turbine_entry_temperature: float, changes: Content) -> Content:
    hub = point.hub * CORE_DUCT
    hub_work = (hub ** (1 / 3.5) - 1.0) / (point.hub ** (1 / 3.5) - 1.0)  # ideal, of the same work
    face = point.flight()
    theta = float(face.static_temperature) / 288.15 * (1.0 + 0.2 * point.mach**2)
    delta = float(face.static_pressure) / 101325.0 * (1.0 + 0.2 * point.mach**2) ** 3.5
    return turbofan_content(
        {
            "core_nozzle": None,
            "bypass_nozzle": None,
            "kind": "mixed turbofan",
            "design_point": {
                "pressure_altitude": f"{point.feet} ft",
                "mach": point.mach,
                "day": f"ISA+{point.warm}",
                "airflow": f"{FAN_CORRECTED_FLOW * delta / theta**0.5} kg/s",
                "bypass_ratio": point.bypass_ratio,
                "fan_pressure_ratio": point.fan,
                "fan_hub_pressure_ratio": hub,
                "high_pressure_compressor_pressure_ratio": point.compressor,
                "turbine_entry_temperature": f"{turbine_entry_temperature} K",
            },
            "efficiencies": {
                "fan": {"isentropic": point.fan_efficiency},
                "fan_hub": {"isentropic": point.hub_efficiency * hub_work},
                "high_pressure_compressor": {"isentropic": point.compressor_efficiency},
                "high_pressure_turbine": {"isentropic": 0.927},
                "low_pressure_turbine": {"isentropic": 0.925},
                "mechanical": 1.0,
                "away_from_design": "constant",
            },
            "inlet": {},
            "combustor": {"efficiency": 0.999, "pressure_loss_fraction": 0.050},
            "cooling": {
                "vane_fraction": 0.0746,  # delivery air not chargeable to the rotor
                "rotor_fraction": 0.0533 + 0.0195,  # delivery and stage 7 air
                "rotor_rise": (0.0533 + 0.0195 * 0.62) / (0.0533 + 0.0195),
                "downstream_fraction": 0.0140,  # stage 5 air
                "downstream_rise": 0.42,
            },
            "off_takes": {},
            "mixer": {
                "bypass_pressure_loss_fraction": 0.014,
                "effectiveness": point.mixer_effectiveness,
            },
            "nozzle": {
                "kind": "convergent-divergent",
                "pressure_loss_fraction": 0.0021,
                "gross_thrust_coefficient": 0.996,
            },
            **one_rating(turbine_entry_temperature="2200 K"),
            **changes,
        }
    )


def rotor_entry(state: EngineState) -> float:
    return float(state.stations["41"].total_temperature)


def at_own_thrust(engine: CycleEngine, point: Point) -> EngineState:
    """The design point, matched."""
    state = engine.at_thrust(point.flight(), engine.sizing.reference_thrust, rating="take_off")
    assert int(state.outcome) == 0
    return state


@cache
def designed(name: str, *changed: tuple[str, float]) -> tuple[CycleEngine, EngineState]:
    """An engine sized at one point, its turbine entry as hot as the published T41 wants."""
    point = POINTS[name]
    changes: Content = dict(changed)

    def excess(hot: float) -> float:
        engine = load(content(point, hot, changes))
        return rotor_entry(at_own_thrust(engine, point)) - point.rotor_entry

    hot = brentq(excess, point.rotor_entry + 30.0, point.rotor_entry + 90.0, xtol=1e-5)
    engine = load(content(point, hot, changes))
    return engine, at_own_thrust(engine, point)


@cache
def matched(name: str) -> EngineState:
    """The engine sized at climb, at another point's T41 and day."""
    engine, _ = designed("climb")
    point = POINTS[name]
    scale = engine.sizing.reference_thrust * float(point.flight().static_pressure) / 23842.0

    def state(thrust: float) -> EngineState:
        return engine.at_thrust(point.flight(), thrust, rating="take_off")

    thrust = brentq(
        lambda newtons: rotor_entry(state(newtons)) - point.rotor_entry, 0.8 * scale, 1.1 * scale
    )
    return state(thrust)


def consumption(state: EngineState) -> float:
    """[kg/(N h)]"""
    return float(state.specific_fuel_consumption) * 3600.0


def off(found: float, published: float) -> float:
    """Error [%]."""
    return 100.0 * (found / published - 1.0)


@pytest.mark.source(f"{REPORT}, Tables XI, XII, XIII, XV; grade read")
@pytest.mark.parametrize(
    ("name", "allowed", "recorded"), [("climb", 1.5, 1.2), ("cruise", 1.5, 1.2), ("take-off", 3, 2)]
)
def test_specific_fuel_consumption(name: str, allowed: float, recorded: float) -> None:
    _, state = designed(name)
    error = off(consumption(state), POINTS[name].consumption)

    assert rotor_entry(state) == pytest.approx(POINTS[name].rotor_entry, abs=1e-3)
    assert abs(error) < allowed
    assert error == pytest.approx(recorded, abs=0.06)


@pytest.mark.source(f"{REPORT}, Table XII; grade read (consumption of the standard day)")
@pytest.mark.parametrize(
    ("name", "recorded"), [("climb", -1.5), ("cruise", -1.5), ("take-off", -1.2)]
)
def test_consumption_of_the_standard_day(name: str, recorded: float) -> None:
    # At the thrust of the flat-rating day the cooler air needs less, by about the root of the
    # temperatures' ratio: the published value lies between the two days.
    engine, hot = designed(name)
    point = POINTS[name]

    cool = engine.at_thrust(point.flight(warm=0.0), float(hot.net_thrust), rating="take_off")

    assert off(consumption(cool), point.consumption) == pytest.approx(recorded, abs=0.06)
    assert consumption(cool) < point.consumption < consumption(hot)


@pytest.mark.source(f"{REPORT}, Table XII; grade read")
@pytest.mark.parametrize("name", POINTS)
def test_overall_pressure_ratio(name: str) -> None:
    _, state = designed(name)

    # 1 %: three pressure ratios and a loss of two or three digits each.
    assert float(state.overall_pressure_ratio) == pytest.approx(POINTS[name].overall, rel=0.01)


@pytest.mark.source(f"{MATCH_POINT}; grade read")
def test_stations_at_climb() -> None:
    _, state = designed("climb")
    entry = state.stations["25"]

    assert float(entry.total_temperature) == pytest.approx(304.8, rel=0.005)
    assert float(entry.total_pressure) == pytest.approx(60469.0, rel=0.005)
    # T49: entry of the low-pressure turbine, the air behind the high-pressure turbine mixed in.
    assert float(state.stations["45"].total_temperature) == pytest.approx(1056.3, rel=0.01)


@pytest.mark.source(f"{MATCH_POINT}; grade read")
@pytest.mark.parametrize(
    ("name", "published", "allowed"),
    [
        ("compressor corrected flow, kg/s", 54.4, 0.01),
        ("compressor polytropic efficiency", 0.906, 0.002),
        ("high-pressure turbine flow, g sqrt(K)/(s Pa)", 0.8643, 0.01),
        ("high-pressure turbine work over T41, J/(kg K)", 355.5, 0.01),
        # Found 1.2 % low; the bypass ratio behind it is published to 1 %.
        ("low-pressure turbine flow, g sqrt(K)/(s Pa)", 3.936, 0.02),
    ],
)
def test_parts_at_climb(name: str, published: float, allowed: float) -> None:
    assert of_parts()[name] == pytest.approx(published, rel=allowed)


@pytest.mark.source(f"{MATCH_POINT}; grade read")
def test_low_pressure_turbine_work_is_found_too_high() -> None:
    # A finding: with published fan pressure ratios, efficiencies and bypass ratio the fan needs
    # 3.9 % more than the turbine is said to give. Bypass ratio rounds to 0.6 % of it, the gap in
    # the turbine's flow above is another 1.2 %; the rest is open.
    work = of_parts()["low-pressure turbine work over T49, J/(kg K)"]

    assert off(work, 326.5) == pytest.approx(3.9, abs=0.15)


def of_parts() -> dict[str, float]:
    engine, state = designed("climb")
    assert state.evidence is not None
    at = state.evidence.path.stations
    gas, entry, delivery = engine.arrangement.gas, at["25"], at["3"]
    ratio = delivery.total_pressure / entry.total_pressure
    rise = gas.entropy(delivery.total_temperature, 0.0, "cold") - gas.entropy(
        entry.total_temperature, 0.0, "cold"
    )
    fan_power = at["13"].mass_flow * (at["13"].enthalpy - at["2"].enthalpy)
    hub_power = entry.mass_flow * (entry.enthalpy - at["2"].enthalpy)
    rotor, power_entry = at["41"], at["45"]
    rotor_work = (rotor.enthalpy - at["44"].enthalpy) / rotor.total_temperature
    low_work = (fan_power + hub_power) / (power_entry.mass_flow * power_entry.total_temperature)
    delta = entry.total_pressure / 101325.0
    corrected = entry.mass_flow * np.sqrt(entry.total_temperature / 288.15) / delta
    polytropic = gas.gas_constant(0.0, "cold") * np.log(ratio) / rise
    swallowed = {
        name: 1e3 * there.mass_flow * np.sqrt(there.total_temperature) / there.total_pressure
        for name, there in (("high", rotor), ("low", power_entry))
    }
    found = {
        "compressor corrected flow, kg/s": corrected,
        "compressor polytropic efficiency": polytropic,
        "high-pressure turbine flow, g sqrt(K)/(s Pa)": swallowed["high"],
        "high-pressure turbine work over T41, J/(kg K)": rotor_work,
        "low-pressure turbine flow, g sqrt(K)/(s Pa)": swallowed["low"],
        "low-pressure turbine work over T49, J/(kg K)": low_work,
    }
    return {name: float(np.squeeze(value)) for name, value in found.items()}


@pytest.mark.source(f"{MATCH_POINT}, mixer; grade read")
def test_gain_by_mixing() -> None:
    # In percent of consumption; core Mach number and friction, not published, move it.
    _, mixed = designed("climb")
    _, apart = designed("climb", ("mixer.effectiveness", 0.0))
    gain = 100.0 * (1.0 - consumption(mixed) / consumption(apart))

    assert gain == pytest.approx(2.9, abs=0.5)  # published
    assert gain == pytest.approx(3.2, abs=0.06)


@pytest.mark.source(
    f"{REPORT}, maximum climb; grade own: regression, how much what the report leaves open moves"
)
@pytest.mark.parametrize(
    ("key", "value", "movement"),
    [
        ("mixer.core_mach", 0.3, -0.28),
        ("mixer.core_mach", 0.6, 0.45),
        ("efficiencies.mechanical", 0.99, 1.73),
    ],
)
def test_what_is_not_published(key: str, value: float, movement: float) -> None:
    _, stated = designed("climb")
    _, other = designed("climb", (key, value))

    assert off(consumption(other), consumption(stated)) == pytest.approx(movement, abs=0.05)
    if key == "mixer.core_mach":
        entry = "45"  # the turbines do not see the mixer
        there, here = other.stations[entry], stated.stations[entry]
        assert there.total_temperature == pytest.approx(here.total_temperature, rel=1e-6)


# Errors in percent of the engine sized once, at climb, with every efficiency, loss and the mixer's
# effectiveness kept; T49 is against the design evaluation of that point, for none of this cycle is
# published there.
MATCHED = {
    "cruise": {"consumption": 1.3, "bypass": 1.4, "overall": -0.2, "fan": -0.4, "t49": 0.0},
    "take-off": {"consumption": 1.9, "bypass": 1.3, "overall": -1.5, "fan": -0.3, "t49": 0.1},
}


@pytest.mark.source(f"{REPORT}, Table XII; grade read, T49 own")
@pytest.mark.parametrize("name", MATCHED)
def test_matched_away_from_climb(name: str) -> None:
    point, state = POINTS[name], matched(name)
    _, evaluated = designed(name)
    fan = state.stations["13"].total_pressure / state.stations["2"].total_pressure

    found = {
        "consumption": off(consumption(state), point.consumption),
        "bypass": off(float(state.bypass_ratio), point.bypass_ratio),
        "overall": off(float(state.overall_pressure_ratio), point.overall),
        "fan": off(float(fan), point.fan),
        "t49": off(
            float(state.stations["45"].total_temperature),
            float(evaluated.stations["45"].total_temperature),
        ),
    }

    assert rotor_entry(state) == pytest.approx(point.rotor_entry, abs=1e-3)
    assert found == pytest.approx(MATCHED[name], abs=0.1)
    assert max(abs(error) for error in found.values()) < (1.5 if name == "cruise" else 2.0)


@pytest.mark.source(f"{REPORT}, take-off thrust of the final and of the first cycle; grade read")
def test_take_off_thrust_of_the_engine_sized_at_climb() -> None:
    # The report gives 173.5 kN for the final engine, 162.36 kN before; size is by fan airflow.
    thrust = float(matched("take-off").net_thrust)

    assert off(thrust, 173.5e3) == pytest.approx(-1.2, abs=0.1)
