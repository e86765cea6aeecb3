"""Sections of the log for what not every mission has: legs, loads that change, turns."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from itertools import groupby

import numpy as np
from rich.console import Group

from engine.quantities import STANDARD_GRAVITY
from mission.outputs.page import Column, note, ruled_table, section, words
from mission.outputs.segment_rows import Scales, altitude_header, altitude_text
from mission.outputs.units import Scale, number
from mission.results import Flight, SegmentLog, Steps

_EXCESS = (
    "Excess: specific excess power at the rating, turning and at one g. Rate of turn, radius and "
    "excess are those at the end."
)


def way_sections(flight: Flight, shown: Sequence[SegmentLog], scales: Scales) -> Iterable[Group]:
    """Those that the rows shown have something for."""
    found = (
        _legs(shown, scales),
        _levels(shown, scales),
        _loads(shown, scales),
        _turns(shown, scales),
    )
    return (group for group in found if group is not None)


def _legs(shown: Sequence[SegmentLog], scales: Scales) -> Group | None:
    """How far and how long each leg of the mission is, and what it burns."""
    rows = [log for log in shown if log.purpose == "mission"]
    names = list(dict.fromkeys(log.leg for log in rows if log.leg))
    if not names:
        return None
    fuel, distance = scales.fuel, scales.distance
    table = ruled_table(
        [
            words("leg"),
            Column(f"fuel\n{fuel.unit.name}"),
            Column(f"time\n{scales.units.time.name}"),
            Column(f"ground\n{distance.unit.name}"),
            Column(f"air\n{distance.unit.name}"),
        ]
    )
    for name in names:
        own = [log for log in rows if log.leg == name]
        table.add_row(
            name,
            fuel.bare(sum(log.fuel for log in own)),
            number(sum(log.time for log in own) / scales.units.time.size, 1),
            distance.bare(sum(log.ground_distance for log in own)),
            distance.bare(sum(log.air_distance for log in own)),
        )
    return section("Legs", table)


def _levels(shown: Sequence[SegmentLog], scales: Scales) -> Group | None:
    """Levels of cruises that climb in steps, with the masses between which each is flown."""
    rows = [(log, run) for log in shown if log.kind == "cruise" for run in _level_runs(log.steps)]
    stepped = {log.name for log, _ in rows if sum(other is log for other, _ in rows) > 1}
    if not stepped:
        return None
    mass = scales.mass
    table = ruled_table(
        [
            words("cruise"),
            Column(altitude_header(scales.units)),
            Column("Mach\nfirst, last"),
            Column(f"mass from\n{mass.unit.name}"),
            Column(f"to\n{mass.unit.name}"),
            Column(f"time\n{scales.units.time.name}"),
        ]
    )
    for log, run in rows:
        if log.name not in stepped:
            continue
        steps = log.steps
        elapsed = float(steps.elapsed_time[run[-1]] - steps.elapsed_time[run[0]])
        table.add_row(
            log.name,
            altitude_text(scales.units, float(steps.pressure_altitude[run[0]])),
            f"{steps.mach[run[0]]:.3f}, {steps.mach[run[-1]]:.3f}",
            mass.bare(float(steps.mass[run[0]])),
            mass.bare(float(steps.mass[run[-1]])),
            number(elapsed / scales.units.time.size, 1),
        )
    return section("Steps of cruises", table)


def _level_runs(steps: Steps) -> list[list[int]]:
    """Indices of the steps at each level, climbs between levels left out."""
    is_level = np.abs(steps.flight_path_angle) < _LEVEL
    level = np.round(steps.pressure_altitude, 1)
    runs = groupby(range(len(level)), lambda i: (bool(is_level[i]), float(level[i])))
    found = [list(run) for (level_there, _), run in runs if level_there]
    return [run for run in found if len(run) > 1]


def _loads(shown: Sequence[SegmentLog], scales: Scales) -> Group | None:
    """Mass that leaves or comes aboard besides what the engines burn, and that all is counted."""
    changed = [log for log in shown if log.mass_released or log.mass_received]
    if not changed:
        return None
    mass = Scale.of(
        scales.units.mass, [max(log.mass_released, log.mass_received) for log in changed]
    )
    gross = scales.mass
    table = ruled_table(
        [
            words("segment"),
            Column(f"released\n{mass.unit.name}"),
            Column(f"received\n{mass.unit.name}"),
            Column(f"mass before\n{gross.unit.name}"),
            Column(f"mass after\n{gross.unit.name}"),
        ]
    )
    for log in changed:
        table.add_row(
            log.name,
            mass.bare(log.mass_released),
            mass.bare(log.mass_received),
            gross.bare(log.mass_start),
            gross.bare(log.mass_end),
        )
    return section("What leaves and comes aboard", table)


def _turns(shown: Sequence[SegmentLog], scales: Scales) -> Group | None:
    """Load factor, turn rate and radius, and the specific excess power left at one g."""
    turns = [log for log in shown if log.kind == "turn"]
    if not turns:
        return None
    units = scales.units
    table = ruled_table(
        [
            words("turn"),
            Column("load factor\nfirst, last"),
            Column("rate\ndeg/s"),
            Column(f"radius\n{units.distance.name}"),
            Column("turned\ndeg"),
            Column(f"excess\n{units.vertical_speed.name}"),
            Column(f"at 1 g\n{units.vertical_speed.name}"),
            words("held by", is_wrapped=False),
        ],
        gap=1,
    )
    for log in turns:
        table.add_row(log.name, *_turn_cells(log, scales))
    return section("Turns", table, note(_EXCESS))


def _turn_cells(log: SegmentLog, scales: Scales) -> Iterable[str]:
    steps = log.steps
    factor = steps.lift / steps.weight
    speed = steps.true_airspeed
    rate = STANDARD_GRAVITY * np.sqrt(np.maximum(factor**2 - 1.0, 0.0)) / speed
    turned = float(np.degrees(np.trapezoid(rate, steps.elapsed_time)))
    radius = float(speed[-1] / rate[-1]) if rate[-1] > 0.0 else float("nan")
    excess = speed * (steps.rating_thrust - steps.drag) / steps.weight
    yield f"{factor[0]:.2f}, {factor[-1]:.2f}"
    yield number(float(np.degrees(rate[-1])), 2)
    yield number(radius / scales.units.distance.size, 2)
    yield number(turned, 0)
    yield number(float(excess[-1]) / scales.units.vertical_speed.size, 1)
    level = steps.level_drag
    straight = speed * (steps.rating_thrust - level) / steps.weight
    yield number(float(straight[-1]) / scales.units.vertical_speed.size, 1)
    yield _holder(steps)


def _holder(steps: Steps) -> str:
    """What holds the load factor at the end of a turn."""
    thrust, resistance = float(steps.thrust[-1]), float(steps.drag[-1])
    if thrust > resistance * (1.0 + _SAME_FORCE):
        return "lift or structure"
    is_at_rating = thrust > float(steps.rating_thrust[-1]) * (1.0 - _SAME_FORCE)
    return "thrust" if is_at_rating else "as given"


_SAME_FORCE = 1e-6  # relative
_LEVEL = 1e-9  # rad of path angle
