"""Efficiency of a compressor or turbine, with the definition it was given by."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal


@dataclass(frozen=True)
class Efficiency:
    """A value between 0 and 1 and whether it is polytropic or isentropic."""

    value: float
    kind: Literal["polytropic", "isentropic"] = "polytropic"
