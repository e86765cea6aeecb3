"""An engine known by its specific fuel consumption alone, behind the one interface.

Thrust at a rating is a static sea-level thrust times a power of the density ratio; fuel flow is
thrust times one constant. It serves hand checks and the first day of a study.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from engine.atmosphere import FlightCondition, broadcast_condition
from engine.errors import InputRefused
from engine.interface import IDLES, Engine, EngineState, Outcome

Array = NDArray[np.float64]
_SEA_LEVEL_DENSITY = 1.225  # kg/m3, ISO 2533:1975


@dataclass(frozen=True)
class ConstantConsumptionEngine(Engine):
    """Static thrust [N] by rating, exponent of density, consumption [kg/(N s)]."""

    specific_fuel_consumption: float
    static_thrust: Mapping[str, float]
    density_exponent: float

    def _thrust(self, flight: FlightCondition, rating: str) -> Array:
        if rating in IDLES:
            return np.zeros(flight.shape)
        if rating not in self.static_thrust:
            known = ", ".join([*self.static_thrust, *IDLES])
            raise InputRefused(f"'{rating}' is no rating of {self.name}; it has {known}")
        lapse = (flight.density / _SEA_LEVEL_DENSITY) ** self.density_exponent
        return self.static_thrust[rating] * lapse

    def at(
        self,
        flight: FlightCondition,
        *,
        rating: str | NDArray[np.str_],
        net_thrust: ArrayLike | None = None,
        idle: str = "flight_idle",
        start: Array | None = None,
    ) -> EngineState:
        """State at ratings and required thrusts; idle is no thrust and no fuel."""
        wanted = np.asarray(np.nan if net_thrust is None else net_thrust, dtype=np.float64)
        shape = np.broadcast_shapes(flight.shape, wanted.shape, np.shape(rating))
        flight = flight.with_mach(np.broadcast_to(flight.mach, shape))
        wanted = np.broadcast_to(wanted, shape)
        names = np.broadcast_to(rating, shape)
        most = np.zeros(shape)
        for name in np.unique(names):
            most = np.where(names == name, self._thrust(flight, str(name)), most)
        least = self._thrust(flight, idle)
        outcome = np.full(shape, Outcome.MET, dtype=np.int64)
        outcome[wanted > most * (1.0 + 1e-9)] = Outcome.BEYOND_RATING
        outcome[wanted < least] = Outcome.AT_IDLE
        thrust = np.where(np.isnan(wanted), most, np.clip(wanted, least, np.maximum(most, least)))
        positive = most > 0.0
        share = np.where(positive, thrust / np.where(positive, most, 1.0), 1.0)
        return self._state(flight, thrust, outcome, share)

    def windmilling(self, flight: FlightCondition) -> EngineState:
        """Unlit: no fuel and, for want of any geometry, no drag."""
        flight = broadcast_condition(flight)
        met = np.full(flight.shape, Outcome.MET, dtype=np.int64)
        return self._state(flight, np.zeros(flight.shape), met, np.zeros(flight.shape))

    def _state(
        self, flight: FlightCondition, thrust: Array, outcome: NDArray[np.int64], share: Array
    ) -> EngineState:
        shape = flight.shape
        zeros = np.zeros(shape, dtype=np.int64)
        return EngineState(
            flight=flight,
            net_thrust=thrust,
            fuel_flow=self.specific_fuel_consumption * thrust,
            outcome=np.asarray(outcome, dtype=np.int64),
            binding_limit=zeros,
            limit_names=("static_thrust",),
            limit_shares=share[None],
            dry_limit=zeros,
            kinks=np.empty((0, *shape)),
            unknowns=np.empty((0, *shape)),
            residual=np.zeros(shape),
            iterations=zeros,
        )
