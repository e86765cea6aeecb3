"""Engine options on one mission, ranked by block fuel.

Pods are not charged yet: every option flies with the masses and the polar of the aircraft as
written, so that the comparison is of cycles alone.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from engine.interface import Engine
from mission.aircraft import Aircraft
from mission.flight import fly
from mission.mission_file import Mission
from mission.results import Flight


@dataclass(frozen=True)
class Comparison:
    """Flights by engine option in the order of rank; those not flown stand last."""

    mission: str
    aircraft: str
    flights: Mapping[str, Flight]

    @property
    def best(self) -> str | None:
        """The option that burns least block fuel, None where none could be flown."""
        flown = [name for name, flight in self.flights.items() if flight.flown]
        return flown[0] if flown else None


def compare(mission: Mission, aircraft: Aircraft, engines: Mapping[str, Engine]) -> Comparison:
    """Fly one mission with each engine option, by the name it is to be known by."""
    flights = {name: fly(mission, aircraft, engine) for name, engine in engines.items()}
    ranked = sorted(
        flights, key=lambda name: (not flights[name].flown, flights[name].totals.block_fuel)
    )
    return Comparison(mission.name, aircraft.name, {name: flights[name] for name in ranked})


def mean_cruise_consumption(flight: Flight) -> float:
    """Fuel over impulse of thrust of all mission cruises [kg/(N s)]; zero without a cruise."""
    cruises = [log for log in flight.segments if (log.kind, log.purpose) == ("cruise", "mission")]
    impulse = sum(log.impulse for log in cruises)
    return sum(log.fuel for log in cruises) / impulse if impulse > 0.0 else 0.0
