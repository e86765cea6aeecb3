"""Efficiency of a compressor or turbine, and how it falls away from the design point.

With ``w`` the corrected flow of a compressor over its design value, efficiency is
``1 / (1 + k (1 - w)^2)`` of its design value; with ``v`` the blade speed of a turbine over the
root of its specific work, over its design value, ``1 / (1 + (1 - x v)^2)`` of its greatest. Both
are smooth, positive everywhere and equal to the design value at the design point.

Both constants are least squares, every line of data with a level of its own (points of efficiency,
root mean square and worst residual; ``tests/published/test_component_falloff.py``):

- ``k`` = 0.26: measured operating line of the high-pressure compressor of the Energy Efficient
  Engine, w = 0.33 to 0.85 (NASA CR-168211, from a plot), with its design point (NASA CR-168219,
  Table XV): 0.53, 0.96.
- ``x`` = 0.925: eleven rig points of its high-pressure turbine, v = 0.93 to 1.09 (NASA CR-168189,
  Table 5.3.1-II), and three cycle points of its low-pressure turbine, v = 0.97 to 1: 0.48, 0.98.

What the law does not tell: the textbook's operating line of Farokhi, Aircraft Propulsion, Example
10.1, does not fall (its own best k is -0.07; under this law 1.6, 2.7), and the fan of the Energy
Efficient Engine, designed at the top of climb, gains 2.1 points at take-off, w = 0.90 (NASA
CR-165148, Table I), where the law loses 0.2: an engine sized at take-off keeps that fan's best.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import Literal

import numpy as np

from engine.parts.stream import Array

COMPRESSOR_FALL = 0.26
TURBINE_DESIGN_SPEED = 0.925  # of the speed of greatest efficiency


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


def shaft_drag(
    delivered: Array, mechanical_efficiency: float, falls_off: bool, flow_ratio: Array
) -> Array:
    """Power [W] that bearings, seals and windage take from a shaft that delivers a power [W].

    At the design point it is what mechanical efficiency says. Of the power of a spool, viscous drag
    (with the square of speed) takes a share that goes with one over air flow, windage (with density
    and the cube of speed) one that goes with corrected speed over corrected flow: the share is
    taken to go with one over corrected flow (common practice, no source). ``flow_ratio`` is that
    of the spool's compressor over the design point's. A windmilling spool, which such a drag would
    stop at a low Mach number, is given its share of the design point.
    """
    drag = delivered * (1.0 / mechanical_efficiency - 1.0)
    return drag / flow_ratio if falls_off else drag
