"""Where the aircraft is between two segments, while a mission is laid out into spans."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Any

from engine.errors import InputRefused
from engine.quantities import FOOT
from mission.air import Air
from mission.aircraft import Aircraft
from mission.march.span import CLEAN, Configuration, March, Span, SpeedRule
from mission.march.world import World
from mission.segments.choices import Choices


@dataclass(frozen=True)
class Leg:
    """From one place to the next.

    Attributes
    ----------
    number : index, that of the reserve flight being negative
    name : as the mission has it, empty for the only leg
    distance : ground distance to cover [m]; None where only segments say how far
    is_free : its distance is what the flight is solved for
    air : temperature and wind by altitude
    destination_elevation : pressure altitude [m] of the place it ends at
    """

    number: int
    name: str
    distance: float | None
    is_free: bool
    air: Air
    destination_elevation: float


@dataclass(frozen=True)
class Load:
    """What is aboard besides fuel: payload [kg] and stores by name."""

    payload: float
    stores: Mapping[str, int] = field(default_factory=dict)

    def mass(self, aircraft: Aircraft) -> float:
        """Payload and stores [kg], without what the stores hold."""
        return self.payload + self._of_stores(aircraft, "mass")

    def empty_mass(self, aircraft: Aircraft) -> float:
        """Mass of the aircraft [kg] without usable fuel."""
        return aircraft.operating_empty_mass + aircraft.unusable_fuel + self.mass(aircraft)

    def drag_area(self, aircraft: Aircraft) -> float:
        """Drag area [m2] of the stores."""
        return self._of_stores(aircraft, "drag_area")

    def tank_capacity(self, aircraft: Aircraft) -> float:
        """Fuel [kg] that the stores hold."""
        return self._of_stores(aircraft, "fuel_capacity")

    def _of_stores(self, aircraft: Aircraft, what: str) -> float:
        return float(
            sum(getattr(aircraft.stores[name], what) * n for name, n in self.stores.items())
        )


@dataclass(frozen=True)
class Here:
    """Altitude, speed and whereabouts before a segment; what is not known yet is None.

    Attributes
    ----------
    world : aircraft and engine
    pressure_altitude : [m]
    speed : how the last segment ended
    on_ground : standing or rolling
    departure_elevation : pressure altitude [m]
    leg : the one it is on
    load : what is aboard besides fuel
    configuration : drag, fuel flow and dead engines from here on
    masses : at both ends of rows of the log [kg], as the last march of the plan had them
    choices : what was chosen for the masses of an earlier plan
    row : index of the log's row that is being laid
    is_reserve : whether this is the reserve flight
    ahead : the segments that follow
    """

    world: World
    pressure_altitude: float | None
    speed: SpeedRule | None
    on_ground: bool
    departure_elevation: float
    leg: Leg
    load: Load
    configuration: Configuration = CLEAN
    masses: Mapping[int, tuple[float, float]] = field(default_factory=dict)
    choices: Choices = field(default_factory=Choices)
    row: int = 0
    is_reserve: bool = False
    ahead: tuple[Any, ...] = ()

    @property
    def aircraft(self) -> Aircraft:
        """Whose lift coefficients set take-off and approach speed."""
        return self.world.aircraft

    @property
    def air(self) -> Air:
        """The air of the leg."""
        return self.leg.air

    @property
    def destination_elevation(self) -> float:
        """Pressure altitude [m] of the place that the leg ends at."""
        return self.leg.destination_elevation

    def mass_at(self, row: int, end: int = 0) -> float:
        """Mass [kg] at one end of a row (0, -1), a guess before anything was flown."""
        known = self.masses.get(row)
        return self._guess if known is None else known[end]

    @property
    def _guess(self) -> float:
        """Halfway between empty and the greatest take-off mass."""
        empty = self.load.empty_mass(self.aircraft)
        return 0.5 * (empty + max(empty, self.aircraft.maximum_take_off_mass))

    def span(self, march: March, **given: Any) -> Span:
        """A span of the row being laid, in this leg's air and this configuration."""
        return Span(
            segment=self.row,
            march=march,
            **{
                "air": self.air,
                "configuration": self.configuration,
                "leg": self.leg.number,
                "is_reserve": self.is_reserve,
                **given,
            },
        )

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
