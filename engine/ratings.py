"""Ratings and idles: the limits that hold an engine, where they depend on the flight, too.

A rating is a set of ceilings of which the least governs, an idle a set of floors of which the
highest governs. Two ceilings depend on the flight. With a throttle ratio the turbine entry
temperature falls with the total temperature below the theta break (Mattingly, Heiser and Pratt,
Aircraft Engine Design, 2nd ed., appendix D): ``T4 = T4_max theta0 / TR`` where ``theta0 < TR``,
``theta0 = T0 (1 + 0.2 M^2) / 288.15 K``. A flat rating holds the thrust of a warm day on every
colder one (common practice, no source).
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from engine.atmosphere import SEA_LEVEL_TEMPERATURE, FlightCondition
from engine.cycles.flowpath import LIMIT_NAMES
from engine.cycles.situation import OffTakes
from engine.errors import InputRefused
from engine.matching import Demand, Throttle

Array = NDArray[np.float64]
_TURBINE_ENTRY = LIMIT_NAMES.index("turbine_entry_temperature")
FLAT = LIMIT_NAMES.index("flat_rated_thrust")
AFTERBURNER_TEMPERATURE = LIMIT_NAMES.index("afterburner_temperature")
AFTERBURNER_FUEL = LIMIT_NAMES.index("afterburner_fuel_air_ratio")
REHEAT_ROWS = [AFTERBURNER_TEMPERATURE, AFTERBURNER_FUEL]
LIT_ROWS = [*REHEAT_ROWS, FLAT]  # what may govern an engine whose afterburner burns


@dataclass(frozen=True)
class Rating:
    """Bounds of one rating or idle.

    Attributes
    ----------
    throttle : ceilings or floors
    bounds : one for each of LIMIT_NAMES, infinite (a floor: zero) where there is none
    taken : what the aircraft takes off the engine in the phase that the rating stands for
    flat_to : temperature deviation [K] up to which the thrust is flat, or None
    throttle_ratio : theta break, or None
    """

    throttle: Throttle
    bounds: Array
    taken: OffTakes
    flat_to: float | None = None
    throttle_ratio: float | None = None

    @property
    def is_reheated(self) -> bool:
        """Whether the afterburner may be lit."""
        is_ceiling = self.throttle == Throttle.CEILING
        return is_ceiling and bool(np.isfinite(self.bounds[AFTERBURNER_TEMPERATURE]))

    @property
    def hottest(self) -> float:
        """Highest total temperature [K] that its ceilings name; 0 where none does."""
        named = self.bounds[[_TURBINE_ENTRY, AFTERBURNER_TEMPERATURE]]
        return float(np.max(named[np.isfinite(named)], initial=0.0))

    def dry_bounds(self, flight: FlightCondition) -> Array:
        """Bounds on the gas generator at N flight conditions, (L, N)."""
        bounds = np.repeat(self.bounds[:, None], flight.mach.size, axis=1)
        if self.throttle == Throttle.CEILING:
            bounds[REHEAT_ROWS] = np.inf
        bounds[_TURBINE_ENTRY] *= 1.0 + np.minimum(self.past_break(flight), 0.0)
        return bounds

    def past_break(self, flight: FlightCondition) -> Array:
        """Total temperature over that of the theta break, less one; 0 where there is none."""
        if self.throttle_ratio is None:
            return np.zeros_like(flight.mach)
        total_temperature = flight.static_temperature * (1.0 + 0.2 * flight.mach**2)
        return total_temperature / SEA_LEVEL_TEMPERATURE / self.throttle_ratio - 1.0


Ratings = Mapping[str, Rating]


def pick(ratings: Ratings, name: str, owner: str) -> Rating:
    """A rating or idle by name."""
    if name not in ratings:
        raise InputRefused(f"'{name}' is no rating of {owner}; it has {', '.join(ratings)}")
    return ratings[name]


@dataclass(frozen=True)
class Asked:
    """A call as flat arrays: net thrust [N], NaN where a rating or idle is asked for itself.

    ``throttle`` (N,), ``bounds`` (L, N) and ``taken`` (N,) are those of the rating;
    ``past_break`` (N,) is total temperature over that of the theta break less one, 0 without one.
    """

    flat: FlightCondition
    thrust: Array
    throttle: NDArray[np.int64]
    bounds: Array
    taken: OffTakes
    past_break: Array

    @property
    def is_thrust(self) -> NDArray[np.bool_]:
        """Where a thrust is asked for."""
        return ~np.isnan(self.thrust)

    @property
    def is_ceiling(self) -> NDArray[np.bool_]:
        """Where the rating is a ceiling, not an idle."""
        return np.asarray(self.throttle == Throttle.CEILING)

    @property
    def demand(self) -> Demand:
        """The same in the words of matching."""
        throttle = np.where(self.is_thrust, Throttle.THRUST, self.throttle)
        return Demand(throttle, np.where(self.is_thrust, self.thrust, 0.0), self.bounds)

    def at(self, index: NDArray[np.int64]) -> Asked:
        """The members picked by an index array."""
        return Asked(
            self.flat.at(index),
            self.thrust[index],
            self.throttle[index],
            self.bounds[:, index],
            self.taken.at(index),
            self.past_break[index],
        )

    def without_thrust(self) -> Asked:
        """The ratings themselves."""
        return replace(self, thrust=np.full_like(self.thrust, np.nan))

    def with_bounds(self, bounds: Array) -> Asked:
        """Other bounds, (L, N)."""
        return replace(self, bounds=bounds)

    def with_off_takes(self, taken: OffTakes) -> Asked:
        """Other off-takes, (N,)."""
        return replace(self, taken=taken)

    def with_thrust(self, thrust: Array) -> Asked:
        """Another net thrust [N] with no limit."""
        bounds = np.full_like(self.bounds, np.inf)
        ceiling = np.full_like(self.throttle, Throttle.CEILING)
        return replace(self, thrust=thrust, throttle=ceiling, bounds=bounds)

    def with_one_limit(self, row: int) -> Asked:
        """The same with all limits but one lifted."""
        alone = np.where(self.is_ceiling, np.full_like(self.bounds, np.inf), 0.0)
        alone[row] = self.bounds[row]
        return replace(self, bounds=alone)


def ask_rating(rating: Rating, flat: FlightCondition) -> Asked:
    """One rating or idle everywhere."""
    count = flat.mach.size
    return Asked(
        flat,
        np.full(count, np.nan),
        np.full(count, rating.throttle),
        rating.dry_bounds(flat),
        rating.taken.spread(count),
        rating.past_break(flat),
    )


def join(
    parts: Mapping[str, Asked], names: NDArray[np.str_], flat: FlightCondition, thrust: Array
) -> Asked:
    """One call from a call for each rating, by the rating that each member names."""
    count = flat.mach.size
    whole = Asked(
        flat,
        thrust,
        np.zeros(count, dtype=np.int64),
        np.zeros((len(LIMIT_NAMES), count)),
        OffTakes(np.zeros(count), np.zeros(count)),
        np.zeros(count),
    )
    for name, part in parts.items():
        here = np.flatnonzero(names == name)
        whole.throttle[here] = part.throttle
        whole.bounds[:, here] = part.bounds
        whole.past_break[here] = part.past_break
        whole.taken.customer_bleed_fraction[here] = part.taken.customer_bleed_fraction
        whole.taken.shaft_power[here] = part.taken.shaft_power
    return whole


def reheat_bounds(ratings: Ratings, names: NDArray[np.str_], bounds: Array) -> Array:
    """Bounds (L, N) with the afterburner's own put in, by the rating that each member names."""
    bounds = bounds.copy()
    for name in np.unique(names):
        here = np.flatnonzero(names == name)
        for row in REHEAT_ROWS:
            bounds[row, here] = ratings[str(name)].bounds[row]
    return bounds
