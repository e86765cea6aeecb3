"""Items that reserve rules are made of: what each keeps aboard at the stop, and how it is found.

A priced item takes its fuel from the flown trip and is carried unburnt; a flown one is burnt on
the reserve flight, in the order of the rule's items. Both answer ``fuel`` [kg] and ``found``, its
words, from what was flown for it [kg] (nothing for most) and from the :class:`Trip`. The last two
keep nothing aboard but say in what ``manner`` the whole flight is flown. ``name`` is its line in
the log.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from math import prod
from typing import ClassVar, Literal

from engine.quantities import FOOT

HOLD_HEIGHT = 1500.0 * FOOT  # ICAO Annex 6 Part I, 4.3.6.3 (from memory); 14 CFR 121.645(b)(4)
Place = Literal["aerodrome", "sea level"]


@dataclass(frozen=True)
class Trip:
    """What items are priced from.

    Attributes
    ----------
    fuel, time : of the trip, take-off to landing [kg], [s]
    cruise_fuel_flow : mean of the longest cruise, of the trip where there is none [kg/s]
    initial_fuel : usable fuel at engine start [kg]
    """

    fuel: float
    time: float
    cruise_fuel_flow: float
    initial_fuel: float


@dataclass(frozen=True)
class ShareOfTripFuel:
    """A share of trip fuel, not less than a hold over the destination at the mass at the stop."""

    kind: ClassVar[str] = "share of trip fuel"
    share: float
    least_hold_time: float = 0.0
    name: str = "contingency"

    def fuel(self, flown: float, trip: Trip) -> float:
        """The larger of share and hold."""
        return max(self.share * trip.fuel, flown)

    def found(self, flown: float, trip: Trip) -> str:
        """Which of the two it is."""
        if flown > self.share * trip.fuel:
            return _least_hold(self.least_hold_time)
        return f"{percent(self.share)} of trip fuel, carried"


@dataclass(frozen=True)
class TimeAtTripConsumption:
    """A time at the mean fuel flow of the trip, not less than a hold over the destination."""

    kind: ClassVar[str] = "time at trip consumption"
    time: float
    least_hold_time: float = 0.0
    name: str = "contingency"

    def fuel(self, flown: float, trip: Trip) -> float:
        """The larger of the two; a trip that takes no time has no fuel flow."""
        return max(self.time * trip.fuel / trip.time if trip.time > 0.0 else 0.0, flown)

    def found(self, flown: float, trip: Trip) -> str:
        """Which of the two it is."""
        if self.fuel(flown, trip) > self.fuel(0.0, trip):
            return _least_hold(self.least_hold_time)
        return f"{minutes(self.time)} at the trip's mean fuel flow, carried"


@dataclass(frozen=True)
class ShareOfTripTime:
    """A share of trip time at cruise consumption."""

    kind: ClassVar[str] = "share of trip time"
    share: float
    name: str = "contingency"

    def fuel(self, flown: float, trip: Trip) -> float:
        """At the fuel flow of the longest cruise."""
        return self.share * trip.time * trip.cruise_fuel_flow

    def found(self, flown: float, trip: Trip) -> str:
        """With the minutes it comes to."""
        share = percent(self.share)
        return (
            f"{share} of trip time, {minutes(self.share * trip.time)}, at cruise fuel flow, carried"
        )


@dataclass(frozen=True)
class TimeAtCruiseConsumption:
    """A time at cruise consumption."""

    kind: ClassVar[str] = "time at cruise consumption"
    time: float
    name: str = "final reserve"

    def fuel(self, flown: float, trip: Trip) -> float:
        """At the fuel flow of the longest cruise."""
        return self.time * trip.cruise_fuel_flow

    def found(self, flown: float, trip: Trip) -> str:
        """The time and where the fuel flow comes from."""
        return f"{minutes(self.time)} at cruise fuel flow, carried"


@dataclass(frozen=True)
class Alternate:
    """A way from a missed approach at the destination, as the mission's ``[reserves.alternate]``.

    ``distance`` [m] is the rule's own, None where the mission gives it; where ``is_always`` no
    mission goes without.
    """

    kind: ClassVar[str] = "alternate"
    distance: float | None = None
    is_always: bool = False
    name: str = "alternate"

    def fuel(self, flown: float, trip: Trip) -> float:
        """All that is flown for it."""
        return flown

    def found(self, flown: float, trip: Trip) -> str:
        """Where it begins."""
        return "from a missed approach at the destination, flown"


@dataclass(frozen=True)
class Hold:
    """A hold at the speed of least fuel flow.

    Where it stands before the alternate it is flown over the destination on the way out of the
    missed approach, otherwise over the alternate or, without one, the destination. ``height`` [m]
    is above the elevation there or above sea level.
    """

    kind: ClassVar[str] = "hold"
    time: float
    height: float = HOLD_HEIGHT
    above: Place = "aerodrome"
    is_only_without_alternate: bool = False
    name: str = "final reserve"

    def fuel(self, flown: float, trip: Trip) -> float:
        """All that is flown for it."""
        return flown

    def found(self, flown: float, trip: Trip) -> str:
        """Time and place."""
        place = f"{self.height / FOOT:,.0f} ft above the {self.above}"
        if self.above == "sea level":
            place = f"at {self.height / FOOT:,.0f} ft" if self.height else "at sea level"
        return f"{minutes(self.time)} hold {place}, flown"

    def altitude(self, elevation: float) -> float:
        """Pressure altitude [m] over an aerodrome at this elevation [m]."""
        return self.height + (elevation if self.above == "aerodrome" else 0.0)


@dataclass(frozen=True)
class ShareOfInitialFuel:
    """A share of the usable fuel at engine start, itself and all other reserves included."""

    kind: ClassVar[str] = "share of initial fuel"
    share: float
    name: str = "share of initial fuel"

    def fuel(self, flown: float, trip: Trip) -> float:
        """Of what is loaded."""
        return self.share * trip.initial_fuel

    def found(self, flown: float, trip: Trip) -> str:
        """The share."""
        return f"{percent(self.share)} of the fuel at engine start, carried"


@dataclass(frozen=True)
class FuelFlowMargin:
    """Every fuel flow of the flight, reserves included, raised by a share of itself.

    The extra is burnt, so that masses stay those of the flight; a fuel mass booked by an allowance
    is no flow.
    """

    kind: ClassVar[str] = "fuel-flow margin"
    share: float
    name: str = "fuel-flow margin"

    @property
    def manner(self) -> str:
        """What it does to the flight."""
        return f"{percent(self.share)} on every fuel flow, burnt inside block fuel"


@dataclass(frozen=True)
class NoDescentCredit:
    """The ground covered in descents does not count towards any distance."""

    kind: ClassVar[str] = "no distance credit for descent"
    name: str = "no distance credit for descent"

    @property
    def manner(self) -> str:
        """What it does to the flight."""
        return "no distance credit for descent: cruise covers the ground that descents would"


Kept = (
    ShareOfTripFuel | TimeAtTripConsumption | ShareOfTripTime | TimeAtCruiseConsumption
    | Alternate | Hold | ShareOfInitialFuel
)  # fmt: skip
Item = Kept | FuelFlowMargin | NoDescentCredit


def kept(items: Sequence[Item]) -> list[tuple[int, Kept]]:
    """The items that keep fuel aboard, each with its place among all."""
    return [
        (index, item)
        for index, item in enumerate(items)
        if not isinstance(item, FuelFlowMargin | NoDescentCredit)
    ]


def least_hold_time(item: Item) -> float:
    """Time [s] of the hold over the destination that an item is not to be less than."""
    return getattr(item, "least_hold_time", 0.0)


def alternate_of(items: Sequence[Item]) -> tuple[int, Alternate | None]:
    """Place and item of the alternate among some items; past their end where there is none."""
    for index, item in enumerate(items):
        if isinstance(item, Alternate):
            return index, item
    return len(items), None


def fuel_flow_factor(items: Sequence[Item]) -> float:
    """What every fuel flow is multiplied by."""
    return prod(1.0 + item.share for item in items if isinstance(item, FuelFlowMargin))


def credits_descents(items: Sequence[Item]) -> bool:
    """Whether descents count towards the distance."""
    return not any(isinstance(item, NoDescentCredit) for item in items)


def percent(share: float) -> str:
    """A share in words: ``5 %``."""
    return f"{100.0 * share:.4g} %"


def minutes(time: float) -> str:
    """A time [s] in words: ``30 min``."""
    return f"{round(time / 60.0, 1):g} min"


def _least_hold(time: float) -> str:
    height = f"{HOLD_HEIGHT / FOOT:,.0f} ft"
    return f"{minutes(time)} hold {height} above the destination, carried"
