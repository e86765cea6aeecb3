"""Engines for tests, as the content of the files that a person would write.

Plain numbers of no real or notional engine.
"""

from __future__ import annotations

from copy import deepcopy
from typing import Any

import numpy as np

from engine.atmosphere import FlightCondition
from engine.cycle_engine import CycleEngine
from engine.options.loading import engine_from_content

Content = dict[str, Any]

TURBOFAN: Content = {
    "kind": "turbofan",
    "name": "test turbofan",
    "design_point": {
        "pressure_altitude": "35000 ft",
        "mach": 0.78,
        "net_thrust": "16 kN",
        "bypass_ratio": 5.0,
        "fan_pressure_ratio": 1.68,
        "booster_pressure_ratio": 1.5,
        "high_pressure_compressor_pressure_ratio": 11.5,
        "turbine_entry_temperature": "1480 K",
    },
    "efficiencies": {
        "fan": {"polytropic": 0.91},
        "booster": {"polytropic": 0.89},
        "high_pressure_compressor": {"polytropic": 0.895},
        "high_pressure_turbine": {"polytropic": 0.885},
        "low_pressure_turbine": {"polytropic": 0.90},
        "mechanical": 0.99,
    },
    "inlet": {"total_pressure_recovery": 0.99},
    "combustor": {"efficiency": 0.995, "pressure_loss_fraction": 0.05},
    "cooling": {"vane_fraction": 0.06, "rotor_fraction": 0.05, "downstream_fraction": 0.01},
    "off_takes": {"customer_bleed_fraction": 0.01, "shaft_power": "60 kW"},
    "core_nozzle": {"pressure_loss_fraction": 0.01, "gross_thrust_coefficient": 0.99},
    "bypass_nozzle": {"pressure_loss_fraction": 0.015, "gross_thrust_coefficient": 0.99},
    "ratings": {
        "take_off": {"turbine_entry_temperature": "1640 K", "corrected_low_pressure_speed": 1.0},
        "maximum_continuous": {
            "turbine_entry_temperature": "1560 K",
            "corrected_low_pressure_speed": 1.02,
        },
        "climb": {"turbine_entry_temperature": "1520 K", "corrected_low_pressure_speed": 1.02},
        "cruise": {"turbine_entry_temperature": "1480 K", "corrected_low_pressure_speed": 1.0},
    },
    "idle": {
        "flight": {"corrected_high_pressure_speed": 0.62, "fuel_air_ratio": 0.006},
        "ground": {"corrected_high_pressure_speed": 0.58},
    },
}

TURBOJET: Content = {
    "kind": "turbojet",
    "name": "test turbojet",
    "design_point": {
        "pressure_altitude": "0 m",
        "mach": 0.0,
        "airflow": "50 kg/s",
        "compressor_pressure_ratio": 8.0,
        "turbine_entry_temperature": "1250 K",
    },
    "efficiencies": {"compressor": {"polytropic": 0.88}, "turbine": {"isentropic": 0.89}},
    "inlet": {"total_pressure_recovery": 0.98},
    "combustor": {"efficiency": 0.99, "pressure_loss_fraction": 0.05},
    "cooling": {"vane_fraction": 0.02, "rotor_fraction": 0.01},
    "off_takes": {"customer_bleed_fraction": 0.01, "shaft_power": "50 kW"},
    "nozzle": {"gross_thrust_coefficient": 0.98, "pressure_loss_fraction": 0.01},
    "ratings": {
        "take_off": {"turbine_entry_temperature": "1250 K", "corrected_high_pressure_speed": 1.03},
        "maximum_continuous": {
            "turbine_entry_temperature": "1200 K",
            "corrected_high_pressure_speed": 1.03,
        },
        "climb": {"turbine_entry_temperature": "1180 K", "corrected_high_pressure_speed": 1.03},
        "cruise": {"turbine_entry_temperature": "1150 K", "corrected_high_pressure_speed": 1.03},
    },
    "idle": {
        "flight": {"corrected_high_pressure_speed": 0.6},
        "ground": {"corrected_high_pressure_speed": 0.5},
    },
}


def changed(content: Content, changes: Content) -> Content:
    """A copy with dotted keys set: ``{"design_point.mach": 0.8}``; None takes a key out."""
    copy = deepcopy(content)
    for key, value in changes.items():
        *tables, last = key.split(".")
        table = copy
        for name in tables:
            table = table.setdefault(name, {})
        if value is None:
            del table[last]
        else:
            table[last] = value
    return copy


def turbofan_content(changes: Content | None = None) -> Content:
    """The test turbofan, with dotted keys changed."""
    return changed(TURBOFAN, changes or {})


def turbojet_content(changes: Content | None = None) -> Content:
    """The test turbojet, with dotted keys changed."""
    return changed(TURBOJET, changes or {})


def load(content: Content) -> CycleEngine:
    """The engine of a content that describes a cycle."""
    engine = engine_from_content(content, "test.toml")
    assert isinstance(engine, CycleEngine)
    return engine


def one_rating(**limits: Any) -> Content:
    """The same limits for every rating, as a change for :func:`turbofan_content`."""
    names = ("take_off", "maximum_continuous", "climb", "cruise")
    return {f"ratings.{name}": dict(limits) for name in names}


def air(mach: float, temperature: float, pressure: float, speed_of_sound: float) -> FlightCondition:
    """Ambient air by its temperature [K] and pressure [Pa], as textbooks give it."""
    names = (0.0, mach, 0.0, temperature, pressure, pressure / (287.05 * temperature))
    return FlightCondition(*(np.array(value) for value in (*names, speed_of_sound, 0.0)))
