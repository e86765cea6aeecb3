"""How much room a limit leaves, and which of them leaves least."""

from __future__ import annotations

from collections.abc import Sequence

from mission.results import Margin


def room(margin: Margin) -> float:
    """Distance from a bound as a share of it, negative where the limit is passed.

    Which side is the allowed one follows from where the value stands and whether that is met.
    """
    if margin.bound == 0.0:
        return abs(margin.value) if margin.is_met else -abs(margin.value)
    distance = abs(margin.value - margin.bound) / abs(margin.bound)
    return distance if margin.is_met else -distance


def least_margin(margins: Sequence[Margin]) -> Margin | None:
    """The margin with the least room, None where there are no margins."""
    return min(margins, key=room, default=None)
