"""What an arrangement is evaluated in: the air it takes in, what is taken off it, its size."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from engine.atmosphere import FlightCondition
from engine.parts.stream import Stream

Array = NDArray[np.float64]


@dataclass(frozen=True)
class OffTakes:
    """What the aircraft takes: a fraction of compressor entry flow, and shaft power [W]."""

    customer_bleed_fraction: Array
    shaft_power: Array

    @classmethod
    def of(cls, customer_bleed_fraction: float = 0.0, shaft_power: float = 0.0) -> OffTakes:
        """The same everywhere."""
        return cls(np.asarray(customer_bleed_fraction), np.asarray(shaft_power))

    def spread(self, count: int) -> OffTakes:
        """Arrays of one dimension and this length."""
        return OffTakes(
            np.broadcast_to(self.customer_bleed_fraction, (count,)),
            np.broadcast_to(self.shaft_power, (count,)),
        )

    def at(self, index: NDArray[np.int64]) -> OffTakes:
        """The members picked by an index array."""
        return OffTakes(self.customer_bleed_fraction[index], self.shaft_power[index])


NOTHING_TAKEN = OffTakes.of()


@dataclass(frozen=True)
class Sizing:
    """What sizing the engine at its design point leaves fixed.

    Attributes
    ----------
    unknowns : logarithms of the arrangement's unknowns at the design point, shape (n,)
    areas : fixed area [m2] of each flow-setting throat, shape (n - 1,)
    flows, loadings : of the design point, by part; see :class:`engine.cycles.flowpath.Flowpath`
    work_ratios : specific work of what turns with the fan, over the fan's
    spool_rises : design values behind the estimated spool speeds
    reference_thrust : net thrust at the design point [N]
    reference_pressure : engine-face total pressure at the design point [Pa]
    design_airflow : at the design point [kg/s]
    """

    unknowns: Array
    areas: Mapping[str, float]
    flows: Mapping[str, float]
    loadings: Mapping[str, float]
    work_ratios: Mapping[str, float]
    spool_rises: Mapping[str, tuple[float, float]]
    reference_thrust: float
    reference_pressure: float
    design_airflow: float


@dataclass(frozen=True)
class Situation:
    """Where an arrangement is evaluated, arrays of one dimension (or none).

    ``face`` is the engine-face state for 1 kg/s; without ``sizing`` it is the design point.
    """

    face: Stream
    flight: FlightCondition
    taken: OffTakes
    sizing: Sizing | None
    is_lit: bool = True

    def at(self, index: NDArray[np.int64]) -> Situation:
        """The members picked by an index array."""
        return replace(
            self,
            face=self.face.at(index),
            flight=self.flight.at(index),
            taken=self.taken.at(index),
        )

    def flow_ratio(self, part: str, flow: Array) -> Array:
        """Flow measure of a part over that of its design point."""
        if self.sizing is None:
            return np.ones_like(flow)
        return flow / self.sizing.flows[part]

    def loading_ratio(self, part: str, loading: Array) -> Array:
        """Loading of a turbine over that of its design point."""
        if self.sizing is None:
            return np.ones_like(loading)
        return loading / self.sizing.loadings[part]

    def duct_loss(self, part: str, design_loss: float, stream: Stream) -> Array:
        """Share of total pressure [-] that a duct takes from a stream.

        A lit engine keeps nearly the same corrected flow in its ducts and so the share of its
        design point; windmilling has a fraction of it, and the share goes with its square, as
        friction does (common practice, no source). Held at 0.9 at most, for iterates far from
        an answer.
        """
        if self.is_lit or self.sizing is None:
            return np.asarray(design_loss)
        return np.minimum(design_loss * self.flow_ratio(part, stream.duct_flow) ** 2, 0.9)
