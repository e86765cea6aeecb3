"""One engine of every kind for tests, as the content of the files that a person would write.

Plain numbers of no real or notional engine.
"""

from __future__ import annotations

from functools import cache

import numpy as np
from engine_files import TURBOFAN, TURBOJET, Content, changed, load

from engine.atmosphere import FlightCondition, flight_condition
from engine.cycle_engine import CycleEngine

_AFTERBURNING = {
    "corrected_high_pressure_speed": 1.03,
    "turbine_entry_temperature": "1250 K",
    "afterburner_temperature": "1900 K",
}

TWO_SPOOL: Content = changed(
    TURBOJET,
    {
        "kind": "two-spool turbojet",
        "name": "test two-spool turbojet",
        "design_point.compressor_pressure_ratio": None,
        "design_point.low_pressure_compressor_pressure_ratio": 3.0,
        "design_point.high_pressure_compressor_pressure_ratio": 4.0,
        "efficiencies": {
            "low_pressure_compressor": {"polytropic": 0.88},
            "high_pressure_compressor": {"polytropic": 0.87},
            "high_pressure_turbine": {"polytropic": 0.88},
            "low_pressure_turbine": {"polytropic": 0.89},
            "mechanical": 0.99,
        },
        "cooling.downstream_fraction": 0.005,
        "cooling.rotor_rise": 0.6,
        "idle.ground.corrected_high_pressure_speed": 0.55,
    },
)

REHEATED: Content = changed(
    TURBOJET,
    {
        "name": "test reheated turbojet",
        "inlet.has_standard_ram_recovery": True,
        "nozzle.kind": "convergent-divergent",
        "afterburner": {"temperature": "1900 K"},
        "ratings.maximum_afterburning": _AFTERBURNING,
    },
)

MIXED: Content = changed(
    TURBOFAN,
    {
        "kind": "mixed turbofan",
        "name": "test mixed turbofan",
        "core_nozzle": None,
        "bypass_nozzle": None,
        "nozzle": {"pressure_loss_fraction": 0.01, "gross_thrust_coefficient": 0.99},
        "design_point.bypass_ratio": 1.0,
        "design_point.fan_pressure_ratio": 3.8,
        "design_point.booster_pressure_ratio": 1.0,
        "design_point.high_pressure_compressor_pressure_ratio": 8.0,
        "design_point.turbine_entry_temperature": "1500 K",
        "efficiencies.booster": None,
        "mixer": {
            "core_pressure_loss_fraction": 0.005,
            "bypass_pressure_loss_fraction": 0.01,
            "pressure_loss_fraction": 0.01,
        },
    },
)

MIXED_REHEATED: Content = changed(
    MIXED,
    {
        "name": "test reheated mixed turbofan",
        "inlet.has_standard_ram_recovery": True,
        "nozzle.kind": "convergent-divergent",
        "afterburner": {"temperature": "1950 K"},
        "ratings.maximum_afterburning": {
            "turbine_entry_temperature": "1640 K",
            "corrected_low_pressure_speed": 1.0,
            "afterburner_temperature": "1950 K",
        },
    },
)

PART_MIXED: Content = changed(
    MIXED, {"name": "test partly mixed turbofan", "mixer.effectiveness": 0.8}
)

TURBOPROP: Content = changed(
    TURBOJET,
    {
        "kind": "turboprop",
        "name": "test turboprop",
        "design_point": {
            "pressure_altitude": "20000 ft",
            "mach": 0.5,
            "airflow": "8 kg/s",
            "compressor_pressure_ratio": 12.0,
            "turbine_entry_temperature": "1250 K",
            "power_turbine_share": 0.9,
        },
        "efficiencies.turbine": {"polytropic": 0.88},
        "efficiencies.power_turbine": {"polytropic": 0.88},
        "off_takes.shaft_power": "20 kW",
        "propeller": {"diameter": "3.6 m", "efficiency": 0.85},
        **{
            f"ratings.{name}.propeller_shaft_power": "2.2 MW"
            for name in ("take_off", "maximum_continuous", "climb", "cruise")
        },
    },
)

GEARED: Content = changed(
    TURBOFAN,
    {
        "name": "test geared turbofan",
        "design_point.bypass_ratio": 10.0,
        "design_point.fan_pressure_ratio": 1.45,
        "design_point.fan_hub_pressure_ratio": 1.35,
        "efficiencies.fan_hub": {"polytropic": 0.9},
        "efficiencies.gearbox": 0.99,
    },
)

KINDS: dict[str, Content] = {
    "turbojet": TURBOJET,
    "reheated": REHEATED,
    "two-spool": TWO_SPOOL,
    "turbofan": TURBOFAN,
    "geared": GEARED,
    "mixed": MIXED,
    "part mixed": PART_MIXED,
    "mixed reheated": MIXED_REHEATED,
    "turboprop": TURBOPROP,
}


@cache
def engine_of(kind: str) -> CycleEngine:
    """The engine of a kind; made once."""
    return load(KINDS[kind])


def envelope_of(kind: str, steps: int, *, fastest: float = 2.0) -> FlightCondition:
    """Where a kind flies, ``steps`` altitudes by as many Mach numbers up to ``fastest``, (N,)."""
    highest, most = (9000.0, 0.65) if kind == "turboprop" else (13000.0, 0.9)
    altitude, mach = _grid((0.0, highest), (0.0, min(most, fastest)), steps)
    if "reheated" in kind and fastest > most:
        above = _grid((5000.0, highest), (most, min(1.8, fastest)), steps)
        altitude, mach = np.append(altitude, above[0]), np.append(mach, above[1])
    return flight_condition(altitude, mach)


def _grid(rows: tuple[float, float], columns: tuple[float, float], steps: int) -> np.ndarray:
    return np.reshape(np.meshgrid(np.linspace(*rows, steps), np.linspace(*columns, steps)), (2, -1))
