"""What each item of a rule comes to, from the flown trip and the reserve flight."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

from mission.reserves.items import Item, ShareOfInitialFuel, Trip, kept


def price(
    items: Sequence[Item],
    flown: Sequence[float],
    trip: Trip,
    needed: float,
    load: float | None,
) -> tuple[Trip, tuple[float, ...]]:
    """The trip with its initial fuel, and the fuel [kg] that every item keeps aboard, in order.

    ``flown`` [kg] is what was flown for each item. The initial fuel is the ``load`` [kg] where
    that is known beforehand; otherwise what the mission has ``needed`` [kg] of it with all
    reserves: L = needed + others + s L, with s the shares of L.
    """
    others = sum(
        item.fuel(flown[index], trip)
        for index, item in kept(items)
        if not isinstance(item, ShareOfInitialFuel)
    )
    shares = sum(item.share for item in items if isinstance(item, ShareOfInitialFuel))
    initial = (needed + others) / (1.0 - shares) if load is None else load
    trip = replace(trip, initial_fuel=initial)
    fuels = {index: item.fuel(flown[index], trip) for index, item in kept(items)}
    return trip, tuple(fuels.get(index, 0.0) for index in range(len(items)))
