"""Random missions for property tests: any of these can be flown by the test twin."""

from __future__ import annotations

import tempfile
from pathlib import Path
from typing import Any

from hypothesis import Phase, settings
from hypothesis import strategies as st
from mission_files import (
    ALTERNATE,
    CONTINGENCY,
    TO_ALTERNATE,
    Content,
    final_reserve,
    fly_files,
    mission_content,
)

from mission.results import Flight, SegmentLog

# Each example is a flight or two. A failing one is shown as drawn: to shrink it takes minutes.
FEW = settings(max_examples=6, phases=[Phase.explicit, Phase.reuse, Phase.generate])
SOME = settings(FEW, max_examples=12)
LEVEL_KINDS = ("cruise", "loiter", "approach")


@st.composite
def reserves(draw: st.DrawFn) -> Content:
    """Contingency, and sometimes an alternate, a final reserve and shares of the whole flight."""
    items: list[Content] = [CONTINGENCY | {"share": draw(st.sampled_from([0.001, 0.03, 0.05]))}]
    table: Content = {"item": items}
    if draw(st.booleans()):
        items[0]["least_hold_time"] = "5 min"
    if draw(st.booleans()):
        items.append(TO_ALTERNATE)
        table["alternate"] = ALTERNATE | {"distance": f"{draw(st.integers(150, 300))} nmi"}
    if draw(st.booleans()):
        items.append(final_reserve("30 min"))
    if draw(st.booleans()):
        items.append({"kind": "share of initial fuel", "share": 0.04})
    if draw(st.booleans()):
        items.append({"kind": "fuel-flow margin", "share": 0.03})
    if draw(st.booleans()):
        items.append({"kind": "no distance credit for descent"})
    return table


HOLDS = ("altitude and mach", "altitude and lift coefficient", "mach and lift coefficient")


@st.composite
def missions(draw: st.DrawFn, holds: tuple[str, ...] = HOLDS, **fixed: Any) -> Content:
    """A mission out over some distance, with or without a watch in the middle.

    ``holds`` are the ways its last cruise may be flown; ``fixed`` replaces what else is drawn.
    """
    airspeed, mach = draw(st.integers(285, 300)), draw(st.sampled_from([0.66, 0.70, 0.74]))
    speeds: Content = {"calibrated_airspeed": f"{airspeed} kt", "mach": mach}
    if draw(st.booleans()):
        speeds["limited_below_10000_ft"] = True
    level = draw(st.integers(310, 380))
    segments: list[Content] = []
    if draw(st.booleans()):
        segments += [{"kind": "taxi", "time": "9 min"}, {"kind": "take-off"}]
    segments.append({"kind": "climb", "to": f"FL{level}", **speeds})
    if draw(st.booleans()):
        segments += [
            {"kind": "cruise", "name": "out", "distance": "200 nmi"},
            {"kind": "descent", "name": "to the watch", "to": "FL150", **speeds},
            {"kind": "loiter", "time": f"{draw(st.integers(10, 90))} min"},
            {"kind": "climb", "name": "climb again", "to": f"FL{level}", **speeds},
        ]
    segments.append({"kind": "cruise", "distance": "rest", "holds": draw(st.sampled_from(holds))})
    segments.append({"kind": "descent", **speeds})
    if draw(st.booleans()):
        segments += [
            {"kind": "approach", "time": "4 min", "drag_factor": 2.0},
            {"kind": "allowance", "name": "go round once", "fuel": "40 kg"},
            {"kind": "taxi", "name": "taxi in", "time": "5 min"},
        ]
    changes: Content = {
        "distance": f"{draw(st.integers(900, 1500))} nmi",
        "payload": f"{draw(st.integers(500, 2500))} kg",
        "day": draw(st.sampled_from(["ISA-15", "ISA", "ISA+12"])),
        "headwind": f"{draw(st.integers(-60, 60))} kt",
        "reserves": draw(reserves()),
        **fixed,
    }
    return mission_content(segments, **changes)


def flown(mission: Content, **files: Any) -> Flight:
    """The mission flown from files of its own."""
    with tempfile.TemporaryDirectory() as folder:
        return fly_files(Path(folder), mission=mission, **files)


def of_mission(flight: Flight) -> list[SegmentLog]:
    """The rows that are not reserves."""
    return [log for log in flight.segments if log.purpose == "mission"]
