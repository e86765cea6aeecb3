"""How each state on and near the runway is flown, and the climbs that the rule asks for.

Source: 14 CFR 25.111, 25.119 and 25.121 (from memory). Speeds are multiples of the stall speed of
the flaps that are down, after the rule's wording before it counted from the 1-g stall: 1.2 V_S for
today's 1.13 V_SR, 1.25 V_S for 1.18 V_SR, 1.3 V_S for 1.23 V_SR. The approach climb is flown at
the fastest that is allowed, 1.4 V_SR.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import sqrt
from typing import Literal

from engine.quantities import FOOT
from mission.aircraft import Aircraft
from mission.segments.approach import STALL_MULTIPLE
from mission.segments.ground import LIFT_OFF_MULTIPLE


@dataclass(frozen=True)
class Case:
    """A configuration, a speed, a rating, and how many engines run.

    Attributes
    ----------
    name : in words
    stall_multiple : speed over the stall speed with these flaps
    flaps : which are down
    has_gear_down : whether the landing gear is
    rating : of the engines that run
    engines_out : how many do not run
    height : pressure altitude above the runway's [m]
    paragraph : of 14 CFR part 25 that asks for a climb; empty where none does
    required : least gradient of two, three, and four or more engines
    """

    name: str
    stall_multiple: float
    flaps: Literal["take_off", "approach", "none"]
    has_gear_down: bool
    rating: str
    engines_out: int = 0
    height: float = 0.0
    paragraph: str = ""
    required: tuple[float, float, float] = (0.0, 0.0, 0.0)


# Where forces that go with speed squared have their mean over a run from standstill.
RUN = Case("take-off run", LIFT_OFF_MULTIPLE / sqrt(2.0), "take_off", True, "take_off")
LIFT_OFF = Case("lift-off", LIFT_OFF_MULTIPLE, "take_off", True, "take_off")
GEAR_EXTENDED = Case(
    "gear extended", LIFT_OFF_MULTIPLE, "take_off", True, "take_off", 1, 0.0,
    "25.121(a)", (0.0, 0.003, 0.005),
)  # fmt: skip
SECOND_SEGMENT = Case(
    "second segment", 1.2, "take_off", False, "take_off", 1, 0.0,
    "25.121(b)", (0.024, 0.027, 0.030),
)  # fmt: skip
FINAL_TAKE_OFF = Case(
    "final take-off", 1.25, "none", False, "maximum_continuous", 1, 1500.0 * FOOT,
    "25.121(c)", (0.012, 0.015, 0.017),
)  # fmt: skip
APPROACH_CLIMB = Case(
    "approach climb", 1.4, "approach", False, "take_off", 1, 0.0,
    "25.121(d)", (0.021, 0.024, 0.027),
)  # fmt: skip
LANDING_CLIMB = Case(
    "landing climb", STALL_MULTIPLE, "approach", True, "take_off", 0, 0.0,
    "25.119", (0.032, 0.032, 0.032),
)  # fmt: skip
TAKE_OFF_CLIMBS = (GEAR_EXTENDED, SECOND_SEGMENT, FINAL_TAKE_OFF)
GO_AROUND_CLIMBS = (APPROACH_CLIMB, LANDING_CLIMB)


def required_gradient(case: Case, engine_count: int) -> float:
    """Least gradient of climb that the rule asks of an aircraft with so many engines."""
    return case.required[min(max(engine_count, 2), 4) - 2]


def is_met(case: Case, engine_count: int, gradient: float) -> bool:
    """Whether a gradient satisfies the rule; it must be above zero where no number is given."""
    return gradient > 0.0 and gradient >= required_gradient(case, engine_count)


def applies(case: Case, engine_count: int) -> bool:
    """Whether a case can be flown by so many engines: one engine cannot lose one."""
    return case.engines_out < engine_count


def lift_limit(aircraft: Aircraft, case: Case) -> float:
    """Greatest lift coefficient with the flaps of a case."""
    return {
        "take_off": aircraft.take_off_lift_coefficient,
        "approach": aircraft.approach_lift_coefficient,
        "none": aircraft.maximum_lift_coefficient,
    }[case.flaps]


def drag_increment(aircraft: Aircraft, case: Case) -> float:
    """Drag coefficient that gear and flaps add to the clean polar; 0 where none is given."""
    flaps = {
        "take_off": aircraft.take_off_flaps_drag_increment,
        "approach": aircraft.approach_flaps_drag_increment,
        "none": 0.0,
    }[case.flaps]
    return flaps + (aircraft.gear_drag_increment if case.has_gear_down else 0.0)


def parts_without_drag(aircraft: Aircraft) -> tuple[str, ...]:
    """What the aircraft tells no drag of, in words."""
    parts = {
        "gear": aircraft.gear_drag_increment,
        "take-off flaps": aircraft.take_off_flaps_drag_increment,
        "approach flaps": aircraft.approach_flaps_drag_increment,
    }
    return tuple(name for name, increment in parts.items() if increment == 0.0)
