"""Subsonic inlets: what a duct of each type leaves of the ram pressure, as data with its source.

What shocks take above Mach 1 comes on top: ``standard_ram_recovery`` in ``engine.parts.inlet``.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from engine.errors import InputRefused

_RAYMER = "Raymer, Aircraft Design: A Conceptual Approach, 6th ed., chapter 13, at Eqs 13.5-13.8"


@dataclass(frozen=True)
class InletType:
    """An inlet with its duct.

    Attributes
    ----------
    total_pressure_recovery : engine-face over free-stream total pressure, subsonic
    source : where the value stands
    """

    total_pressure_recovery: float
    source: str


# Raymer gives the podded one as "0.98 or better".
INLET_TYPES: Mapping[str, InletType] = {
    "podded": InletType(0.98, _RAYMER),
    "straight duct": InletType(0.96, _RAYMER),
    "S-duct": InletType(0.94, _RAYMER),
}


def inlet_type(name: str) -> InletType:
    """The inlet type of a name.

    Raises
    ------
    InputRefused
        for a name that is none; the message lists those there are.
    """
    if name not in INLET_TYPES:
        allowed = ", ".join(f"'{known}'" for known in INLET_TYPES)
        raise InputRefused(f"'{name}' is no inlet type; there are {allowed}")
    return INLET_TYPES[name]
