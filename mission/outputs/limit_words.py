"""What holds a speed of level flight, or for want of what there is none, in words."""

from __future__ import annotations

from mission.outputs.units import number
from mission.steady.level_flight import LevelSpeed, Limit

_FINE = 0.1  # per cent, below which a percentage has more decimals
_HELD = {
    Limit.NONE: "",
    Limit.OPERATING_MACH: "greatest Mach",
    Limit.OPERATING_AIRSPEED: "greatest airspeed",
    Limit.LIFT: "1.2 times stall speed",
    Limit.THRUST: "thrust",
    Limit.IDLE: "idle thrust",
    Limit.ENGINE: "end of the engine's states",
    Limit.TABLE: "end of the engine's table",
    Limit.GROUND_SPEED: "headwind",
    Limit.ALTITUDE: "end of the search",
    Limit.CEILING: "greatest altitude",
    Limit.DYNAMIC_PRESSURE: "greatest dynamic pressure",
    Limit.BUFFET: "buffet",
    Limit.BUFFET_TABLE: "end of the table of buffet onset",
    Limit.POLAR: "end of the drag polar's table",
}
_LACKING = {
    Limit.LIFT: "lift: 1.2 times stall speed is too fast",
    Limit.THRUST: "thrust",
    Limit.IDLE: "idle thrust is above drag",
    Limit.ENGINE: "the engine has no state",
    Limit.TABLE: "outside the engine's table",
    Limit.GROUND_SPEED: "the headwind is faster",
    Limit.CEILING: "above the greatest altitude",
    Limit.POLAR: "outside the drag polar's table",
}


def held_in_words(limit: int) -> str:
    """What a Mach number stands at; empty where at nothing."""
    return _HELD[Limit(limit)]


def lack_in_words(limit: int) -> str:
    """For want of what there is no level flight."""
    return _LACKING.get(Limit(limit), _HELD[Limit(limit)])


def verdict(speed: LevelSpeed, index: int) -> str:
    """What holds one speed of several, or why there is none; of thrust what it is over drag."""
    limit = int(speed.limit[index])
    if bool(speed.is_flyable[index]):
        return held_in_words(limit)
    said = f"none: {lack_in_words(limit)}"
    if limit == Limit.THRUST:
        over = 100.0 * float(speed.thrust_margin[index])
        return f"{said} {number(over, 1 if abs(over) >= _FINE else 3)} %"
    return said
