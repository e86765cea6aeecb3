"""What a flight keeps of its runway and its climbs with an engine out: plain numbers, SI."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True)
class ClimbCheck:
    """A climb flown against the gradient that 14 CFR part 25 asks.

    Attributes
    ----------
    name, paragraph : in words, and of the rule
    engines_running : so many of the aircraft's
    mass : [kg]
    calibrated_airspeed : [m/s]
    gradient, required : height over distance
    is_met : whether the rule is satisfied
    """

    name: str
    paragraph: str
    engines_running: int
    mass: float
    calibrated_airspeed: float
    gradient: float
    required: float
    is_met: bool


@dataclass(frozen=True)
class FieldPerformance:
    """Field length of the first take-off of a flight, and the climbs after it and at the end.

    Attributes
    ----------
    take_off : name of the segment
    take_off_mass : at brake release [kg]
    pressure_altitude : of the runway [m]
    temperature_deviation : of the day [K]
    v2 : calibrated airspeed at 35 ft [m/s]
    balanced_length, all_engine_length : [m]; None where there is none, of one engine for instance
    runway : field length available [m], None where the mission does not say
    climbs : in the order flown
    remarks : sentences on what was left out
    """

    take_off: str
    take_off_mass: float
    pressure_altitude: float
    temperature_deviation: float
    v2: float
    balanced_length: float | None
    all_engine_length: float | None
    runway: float | None
    climbs: tuple[ClimbCheck, ...]
    remarks: tuple[str, ...]

    @property
    def length(self) -> float | None:
        """Field length needed [m], the greater of the two."""
        known = [x for x in (self.balanced_length, self.all_engine_length) if x is not None]
        return max(known, default=None)

    @property
    def governed_by(self) -> str:
        """Which of the two is the greater, in words; empty where there is none."""
        if self.length is None:
            return ""
        return "balanced" if self.length == self.balanced_length else "all engines"
