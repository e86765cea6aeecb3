"""Where the aircraft is between two segments, while a mission is laid out into spans."""

from __future__ import annotations

from dataclasses import dataclass

from engine.errors import InputRefused
from engine.quantities import FOOT
from mission.aircraft import Aircraft
from mission.march.span import SpeedRule


@dataclass(frozen=True)
class Here:
    """Altitude, speed and whereabouts before a segment; what is not known yet is None.

    Attributes
    ----------
    aircraft : whose lift coefficients set take-off and approach speed
    pressure_altitude : [m]
    speed : how the last segment ended
    on_ground : standing or rolling
    departure_elevation, destination_elevation : pressure altitude [m]
    distance : ground distance of the mission part [m]
    row : index of the log's row that is being laid
    is_reserve : whether this is the reserve flight
    """

    aircraft: Aircraft
    pressure_altitude: float | None
    speed: SpeedRule | None
    on_ground: bool
    departure_elevation: float
    destination_elevation: float
    distance: float | None
    row: int = 0
    is_reserve: bool = False

    def altitude_or(self, wanted: float | None, what: str) -> float:
        """The altitude here, or where none is known yet the one the segment names."""
        here = self.pressure_altitude
        if here is None:
            if wanted is None:
                raise InputRefused(
                    f"{what} starts the mission in the air: give its pressure_altitude"
                )
            return wanted
        if wanted is not None and abs(wanted - here) > 0.01:
            raise InputRefused(
                f"pressure_altitude = {wanted / FOOT:,.0f} ft, but the segment before ends at "
                f"{here / FOOT:,.0f} ft; put a climb or a descent between them"
            )
        return here
