"""Segment kinds: one small file each, joined in one table.

A kind is a table of the mission file with ``first_speed`` (what the bridge before it must reach)
and ``lay`` (its spans and where the aircraft is after it). To add one, write its file and add it
to :data:`AnySegment`.
"""

from __future__ import annotations

from typing import Annotated

from pydantic import Field

from mission.segments.acceleration import Accelerate
from mission.segments.allowance import Allowance
from mission.segments.approach import Approach
from mission.segments.climb import Climb
from mission.segments.cruise import Cruise
from mission.segments.descent import Descent
from mission.segments.failure import Driftdown, EngineFailure
from mission.segments.ground import TakeOff, Taxi
from mission.segments.loading import Refuelling, Release, Turnaround
from mission.segments.loiter import Loiter
from mission.segments.turn import Turn

AnySegment = Annotated[
    Allowance
    | Taxi
    | TakeOff
    | Climb
    | Accelerate
    | Cruise
    | Loiter
    | Turn
    | Descent
    | Approach
    | Release
    | Refuelling
    | Turnaround
    | EngineFailure
    | Driftdown,
    Field(discriminator="kind"),
]
