"""The air a leg is flown in: temperature and wind by pressure altitude."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from engine.atmosphere import FlightCondition, flight_condition

Array = NDArray[np.float64]


@dataclass(frozen=True)
class Air:
    """Temperature deviation [K] and tailwind [m/s], linear between the altitudes [m] given.

    Above the highest and below the lowest the nearest values hold (the flight log says where a
    flight leaves a table). Altitudes rise strictly.
    """

    temperature_deviation: tuple[float, ...] = (0.0,)
    tailwind: tuple[float, ...] = (0.0,)
    pressure_altitude: tuple[float, ...] = (0.0,)

    @property
    def is_table(self) -> bool:
        """Whether it changes with altitude."""
        return len(self.pressure_altitude) > 1

    @property
    def kinks(self) -> tuple[float, ...]:
        """Pressure altitudes [m] at which a slope changes."""
        return self.pressure_altitude if self.is_table else ()

    def tailwind_at(self, pressure_altitude: Array | float) -> Array:
        """Tailwind [m/s] at pressure altitudes [m]."""
        return np.asarray(np.interp(pressure_altitude, self.pressure_altitude, self.tailwind))

    def deviation_at(self, pressure_altitude: Array | float) -> Array:
        """Temperature deviation [K] at pressure altitudes [m]."""
        return np.asarray(
            np.interp(pressure_altitude, self.pressure_altitude, self.temperature_deviation)
        )

    def condition(
        self, pressure_altitude: Array | float, mach: Array | float = 0.0
    ) -> FlightCondition:
        """Flight condition at pressure altitudes [m], its lapse rate with the deviation's slope."""
        still = flight_condition(pressure_altitude, mach, self.deviation_at(pressure_altitude))
        if not self.is_table:
            return still
        slopes = np.diff(self.temperature_deviation) / np.diff(self.pressure_altitude)
        piece = np.searchsorted(self.pressure_altitude, still.pressure_altitude)
        own = np.concatenate([[0.0], slopes, [0.0]])[piece]
        return replace(still, lapse_rate=still.lapse_rate + own)


STILL_AIR = Air()
