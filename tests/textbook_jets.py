"""Legs of textbooks: a lift-to-drag ratio, a speed and a consumption each.

The files have a polar, an altitude and an engine with just those. Legs that a book flies at
constant lift coefficient and speed are flown so (Mach number and lift coefficient held, in the
isothermal layer), whatever altitude the book has in mind; its fixed fractions are allowances. An
allowance of no fuel stands for the way from one leg's altitude to the next, which no book charges.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import exp, log, sqrt
from typing import Any

from mission_files import aircraft_content, engine_content, segment

from mission.results import Flight

G, POUND, POUND_FORCE = 9.80665, 0.45359237, 4.4482216152605
SOUND = sqrt(1.4 * 287.05287 * 216.65)  # m/s, ISO 2533:1975, 11 to 20 km
KNOT, FOOT = 1852.0 / 3600.0, 0.3048


@dataclass(frozen=True)
class Jet:
    """A parabolic polar of given best lift-to-drag ratio, and the mass it starts with [kg]."""

    best: float
    mass: float
    speed: float  # m/s, of the cruise
    first_level: float = 12000.0  # m, isothermal
    zero_lift: float = 0.015

    @property
    def best_coefficient(self) -> float:
        """Lift coefficient of the best lift-to-drag ratio."""
        return 2.0 * self.best * self.zero_lift

    def coefficient(self, ratio: float) -> float:
        """The smaller lift coefficient of a lift-to-drag ratio below the best."""
        share = ratio / self.best
        return self.best_coefficient * (1.0 - sqrt(1.0 - share**2)) / share

    def wing_area(self, ratio: float, mass: float) -> float:
        """Wing area [m2] with which a mass flies that ratio at the first level."""
        lift = 0.7 * pressure_at(self.first_level) * (self.speed / SOUND) ** 2
        return mass * G / (lift * self.coefficient(ratio))

    def files(self, ratio: float, mass: float, empty: float) -> dict[str, Any]:
        """The aircraft file, its wing sized for a mass at the first cruise."""
        return aircraft_content(
            engine_count=2,
            wing_area=f"{self.wing_area(ratio, mass):.9f} m**2",
            masses={
                "operating_empty": f"{empty:.9f} kg",
                **dict.fromkeys(
                    ("maximum_zero_fuel", "maximum_ramp", "maximum_take_off", "maximum_landing"),
                    f"{2.0 * self.mass:.3f} kg",
                ),
            },
            fuel_tanks={"capacity": f"{self.mass:.3f} kg"},
            limits={"maximum_operating_mach": 0.85, "maximum_lift_coefficient": 2.5},
            drag_polar={
                "zero_lift_drag_coefficient": self.zero_lift,
                "induced_drag_factor": 0.25 / (self.zero_lift * self.best**2),
            },
        )

    def engine(self, consumption: str) -> dict[str, Any]:
        """An engine with thrust to spare."""
        return engine_content(
            specific_fuel_consumption=consumption,
            static_thrust=f"{0.4 * self.mass * G:.1f} N",
            density_exponent=0.3,
        )

    def level(self, ratio_of_mass: float) -> float:
        """Altitude [m] where a lighter aircraft flies the first level's lift coefficient."""
        return self.first_level - 287.05287 * 216.65 / G * log(ratio_of_mass)


def pressure_at(height: float) -> float:
    """Static pressure [Pa] in the isothermal layer (ISO 2533:1975)."""
    return 22632.0 * exp(-G * (height - 11000.0) / (287.05287 * 216.65))


def way_to(height: float) -> dict[str, Any]:
    """No fuel to another altitude."""
    return {"kind": "allowance", "fuel": "0 kg", "to": f"{height:.6f} m", "name": "way"}


def fraction(name: str, left: float, **more: Any) -> dict[str, Any]:
    """A fixed mass fraction."""
    return {"kind": "allowance", "name": name, "mass_fraction": round(1.0 - left, 6), **more}


def ratio(flight: Flight, name: str) -> float:
    """Mass at the end of a segment over mass at its start."""
    log_ = segment(flight, name)
    return log_.mass_end / log_.mass_start
