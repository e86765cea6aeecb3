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
from engine.interface import IDLES, EngineState, Outcome

Array = NDArray[np.float64]
_SEA_LEVEL_DENSITY = 1.225  # kg/m3, ISO 2533:1975


@dataclass(frozen=True)
class ConstantConsumptionEngine:
    """Static thrust [N] by rating, exponent of density, consumption [kg/(N s)]."""

    name: str
    specific_fuel_consumption: float
    static_thrust: Mapping[str, float]
    density_exponent: float
    assumed: tuple[str, ...] = ()

    def _thrust(self, flight: FlightCondition, rating: str) -> Array:
        if rating in IDLES:
            return np.zeros(flight.shape)
        if rating not in self.static_thrust:
            known = ", ".join([*self.static_thrust, *IDLES])
            raise InputRefused(f"'{rating}' is no rating of {self.name}; it has {known}")
        lapse = (flight.density / _SEA_LEVEL_DENSITY) ** self.density_exponent
        return self.static_thrust[rating] * lapse

    def at_thrust(
        self,
        flight: FlightCondition,
        net_thrust: ArrayLike,
        *,
        rating: str = "maximum_continuous",
        idle: str = "flight_idle",
        start: EngineState | None = None,
    ) -> EngineState:
        """State that gives a required net thrust [N]; idle is no thrust and no fuel."""
        wanted = np.asarray(net_thrust, dtype=np.float64)
        shape = np.broadcast_shapes(flight.shape, wanted.shape)
        flight = flight.with_mach(np.broadcast_to(flight.mach, shape))
        wanted = np.broadcast_to(wanted, shape)
        most, least = self._thrust(flight, rating), self._thrust(flight, idle)
        outcome = np.where(
            wanted > most * (1.0 + 1e-9),
            Outcome.BEYOND_RATING,
            np.where(wanted < least, Outcome.AT_IDLE, Outcome.MET),
        )
        thrust = np.where(outcome == Outcome.MET, wanted, np.clip(wanted, least, most))
        return self._state(flight, thrust, outcome, thrust / most)

    def at_rating(
        self, flight: FlightCondition, rating: str, *, start: EngineState | None = None
    ) -> EngineState:
        """State at a rating or idle."""
        flight = broadcast_condition(flight)
        thrust = self._thrust(flight, rating)
        met = np.full(flight.shape, Outcome.MET, dtype=np.int64)
        return self._state(flight, thrust, met, np.ones(flight.shape))

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
            choking=np.empty((0, *shape)),
            unknowns=np.empty((0, *shape)),
            residual=np.zeros(shape),
            iterations=zeros,
        )
