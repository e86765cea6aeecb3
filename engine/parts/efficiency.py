"""Efficiency of a compressor or turbine, and how it falls away from the design point.

With ``w`` the corrected flow of a compressor over its design value, efficiency is
``1 / (1 + k (1 - w)^2)`` of its design value; with ``v`` the blade speed of a turbine over the
root of its specific work, over its design value, ``1 / (1 + (1 - x v)^2)`` of its greatest. Both
are smooth, positive everywhere and equal to the design value at the design point.

Support: measured operating line of the high-pressure compressor of the Energy Efficient Engine,
NASA CR-168211; rig of its high-pressure turbine, NASA CR-168189, Table 5.3.1-II.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import Literal

import numpy as np

from engine.parts.stream import Array

COMPRESSOR_FALL = 0.25
TURBINE_DESIGN_SPEED = 0.9  # of the speed of greatest efficiency


@dataclass(frozen=True)
class Efficiency:
    """A value between 0 and 1, whether it is polytropic or isentropic, and whether it falls off."""

    value: float | Array
    kind: Literal["polytropic", "isentropic"] = "polytropic"
    falls_off: bool = False

    def of_compressor(self, flow_ratio: Array) -> Efficiency:
        """At a corrected flow over that of the design point."""
        if not self.falls_off:
            return self
        return replace(self, value=self.value / (1.0 + COMPRESSOR_FALL * (1.0 - flow_ratio) ** 2))

    def of_turbine(self, loading_ratio: Array) -> Efficiency:
        """At a square of blade speed over specific work, over that of the design point."""
        if not self.falls_off:
            return self
        speed = TURBINE_DESIGN_SPEED * np.sqrt(np.abs(loading_ratio))
        share = (1.0 + (1.0 - TURBINE_DESIGN_SPEED) ** 2) / (1.0 + (1.0 - speed) ** 2)
        return replace(self, value=self.value * share)
