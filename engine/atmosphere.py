"""The flight condition: still air at a pressure altitude, on a day, met at a Mach number.

Pressure altitude is geopotential height in the standard atmosphere. On a day that is not
standard, pressure at a pressure altitude stays and temperature is shifted.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from ambiance import CONST, Atmosphere
from numpy.typing import ArrayLike, NDArray

from engine.errors import OutOfRange

Array = NDArray[np.float64]
LOWEST_PRESSURE_ALTITUDE = -2000.0
HIGHEST_PRESSURE_ALTITUDE = 30000.0
LARGEST_TEMPERATURE_DEVIATION = 100.0
SEA_LEVEL_PRESSURE = 101325.0
SEA_LEVEL_TEMPERATURE = 288.15
_LAPSE_RATES = np.array([0.0] + [layer["beta"] for layer in CONST.LAYER_DICTS.values()])


@dataclass(frozen=True)
class FlightCondition:
    """Ambient air and flight speed, arrays of one broadcast shape.

    Attributes
    ----------
    pressure_altitude : array [m]
    mach : array
    temperature_deviation : array [K], from the standard atmosphere
    static_temperature : array [K]
    static_pressure : array [Pa]
    density : array [kg/m3]
    speed_of_sound : array [m/s]
    lapse_rate : array [K/m], of static temperature with pressure altitude
    """

    pressure_altitude: Array
    mach: Array
    temperature_deviation: Array
    static_temperature: Array
    static_pressure: Array
    density: Array
    speed_of_sound: Array
    lapse_rate: Array

    @property
    def true_airspeed(self) -> Array:
        """Flight speed through the air [m/s]."""
        return self.mach * self.speed_of_sound

    @property
    def shape(self) -> tuple[int, ...]:
        """Common shape of all the arrays."""
        return self.mach.shape

    def with_mach(self, mach: ArrayLike) -> FlightCondition:
        """The same air met at other Mach numbers (broadcast against this shape)."""
        return broadcast_condition(replace(self, mach=np.asarray(mach, dtype=np.float64)))

    def at(self, index: object) -> FlightCondition:
        """The members picked by a NumPy index."""
        return FlightCondition(*(getattr(self, name)[index] for name in self.__dataclass_fields__))


def broadcast_condition(condition: FlightCondition) -> FlightCondition:
    """All arrays of a condition brought to one shape."""
    names = condition.__dataclass_fields__
    arrays = np.broadcast_arrays(*(getattr(condition, name) for name in names))
    return FlightCondition(*(np.array(a, dtype=np.float64) for a in arrays))


def flight_condition(
    pressure_altitude: ArrayLike, mach: ArrayLike = 0.0, temperature_deviation: ArrayLike = 0.0
) -> FlightCondition:
    """Flight condition in the standard atmosphere, shifted in temperature.

    Parameters
    ----------
    pressure_altitude : array_like [m], -2 000 to 30 000
    mach : array_like, not negative
    temperature_deviation : array_like [K], -100 to 100

    Raises
    ------
    OutOfRange
        outside those ranges, or for a value that is no number.

    Notes
    -----
    ISO 2533:1975, Standard Atmosphere, by way of the ``ambiance`` library, which takes geometric
    height: pressure altitude is converted to it first. Speed of sound after the same standard,
    ``a = sqrt(1.4 R T)``.
    """
    height = np.asarray(pressure_altitude, dtype=np.float64)
    mach_number = np.asarray(mach, dtype=np.float64)
    _refuse_outside(
        height, LOWEST_PRESSURE_ALTITUDE, HIGHEST_PRESSURE_ALTITUDE, "pressure altitude", "m"
    )
    _refuse_outside(mach_number, 0.0, 5.0, "Mach number", "")
    layers = Atmosphere(CONST.r * height / (CONST.r - height))
    deviation = np.asarray(temperature_deviation, dtype=np.float64)
    most = LARGEST_TEMPERATURE_DEVIATION
    _refuse_outside(deviation, -most, most, "temperature deviation", "K")
    temperature = np.reshape(layers.temperature, height.shape) + deviation
    pressure = np.reshape(layers.pressure, height.shape)
    return broadcast_condition(
        FlightCondition(
            pressure_altitude=height,
            mach=mach_number,
            temperature_deviation=deviation,
            static_temperature=temperature,
            static_pressure=pressure,
            density=pressure / (CONST.R * temperature),
            speed_of_sound=np.sqrt(CONST.kappa * CONST.R * temperature),
            lapse_rate=np.reshape(_LAPSE_RATES[layers.layer_nums], height.shape),
        )
    )


def _refuse_outside(value: Array, low: float, high: float, name: str, unit: str) -> None:
    wrong = ~((value >= low) & (value <= high))
    if np.any(wrong):
        first = float(value[wrong][0]) if value.ndim else float(value)
        unit = f" {unit}" if unit else ""
        raise OutOfRange(f"{name} = {first:g}{unit} is outside {low:g} to {high:g}{unit}")
