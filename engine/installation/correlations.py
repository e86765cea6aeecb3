"""Size and mass of an engine from its thrust and airflow: statistics, wrong by 10 to 50 %.

Against the published engines at hand (tests/published/test_engine_installation.py) the masses come
out from 16 % light to 33 % heavy without an afterburner and 27 to 51 % heavy for the one with it:
a known mass is always the better one.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import exp, pi, sqrt

_POUND = 0.45359237  # kg
_POUND_FORCE = 4.4482216152605  # N
_FOOT = 0.3048  # m
_HORSEPOWER = 745.69987158227  # W
_RAYMER = "Raymer, Aircraft Design, 6th ed."

# Fan of the Energy Efficient Engine at maximum climb, NASA CR-168219, Tables XIV to XXIII.
SPECIFIC_AIRFLOW = 208.9  # kg/(s m2), corrected, per annulus area
HUB_TIP_RATIO = 0.342

# The same engine, Table XXVI: with inlet, reverser, cowl, pylon, exhaust and build-up, over bare.
# 1.3 is common practice, no source.
INSTALLED_MASS_RATIO = 4465.0 / 3473.0

# Bypass ratios that Raymer's equations are for: dry as he gives it, afterburning from memory.
HIGHEST_BYPASS_RATIO = 6.0
HIGHEST_AFTERBURNING_BYPASS_RATIO = 1.0


def fan_diameter(corrected_airflow: float) -> float:
    """Tip diameter [m] of the fan, or of the first compressor stage.

    ``corrected_airflow`` [kg/s] is the greatest that the engine takes in. Continuity alone:
    ``W = specific airflow * pi / 4 * D^2 * (1 - hub-tip ratio^2)``, with both ratios of the
    Energy Efficient Engine.
    """
    annulus = corrected_airflow / SPECIFIC_AIRFLOW
    return sqrt(4.0 * annulus / (pi * (1.0 - HUB_TIP_RATIO**2)))


@dataclass(frozen=True)
class BareEngine:
    """An engine without its installation, estimated.

    Attributes
    ----------
    mass : [kg], dry; of a turboprop with its gearbox, without its propeller
    length : [m]
    diameter : [m], greatest; None where the nacelle's is better had from the fan's
    source : of these estimates
    doubts : sentences on estimates outside what they are for
    """

    mass: float
    length: float
    diameter: float | None
    source: str
    doubts: tuple[str, ...] = ()


def jet_engine(
    static_thrust: float, bypass_ratio: float, greatest_mach: float, *, has_afterburner: bool
) -> BareEngine:
    """Turbojet or turbofan of a greatest sea-level static thrust [N], reheat included.

    ``bypass_ratio`` is 0 for a turbojet; ``greatest_mach`` is what the engine is built for.
    Source: Raymer, Aircraft Design: A Conceptual Approach, 6th ed., Eqs 10.1-10.15.
    """
    thrust = static_thrust / _POUND_FORCE
    if has_afterburner:
        pounds = 0.063 * thrust**1.1 * greatest_mach**0.25 * exp(-0.81 * bypass_ratio)
        feet = 0.255 * thrust**0.4 * greatest_mach**0.2
        highest, kind = HIGHEST_AFTERBURNING_BYPASS_RATIO, "with"
    else:
        pounds = 0.084 * thrust**1.1 * exp(-0.045 * bypass_ratio)
        feet = 0.185 * thrust**0.4 * greatest_mach**0.2
        highest, kind = HIGHEST_BYPASS_RATIO, "without"
    doubts: tuple[str, ...] = ()
    if bypass_ratio > highest:
        doubts = (
            f"dry mass is estimated at bypass ratio {bypass_ratio:.3g} by equations for engines "
            f"{kind} an afterburner up to {highest:g}; give dry_mass if it is known",
        )
    return BareEngine(pounds * _POUND, feet * _FOOT, None, f"{_RAYMER}, Eqs 10.1-10.15", doubts)


def turboprop(shaft_power: float) -> BareEngine:
    """Turboprop of a greatest sea-level static shaft power [W].

    Source: Raymer, Aircraft Design: A Conceptual Approach, table of propeller engines in chapter
    10 (from memory): mass 1.67 hp^0.803 lb, length 0.35 hp^0.373 ft, diameter 0.8 hp^0.120 ft.
    """
    power = shaft_power / _HORSEPOWER
    return BareEngine(
        mass=1.67 * power**0.803 * _POUND,
        length=0.35 * power**0.373 * _FOOT,
        diameter=0.8 * power**0.120 * _FOOT,
        source=f"{_RAYMER}, turboprops (from memory)",
        doubts=(
            "dry mass of a turboprop is estimated by an equation recalled, not read; give dry_mass "
            "if it is known",
        ),
    )
