"""Climb and descent on a schedule of calibrated airspeed and Mach number, laid into spans."""

from __future__ import annotations

from engine.quantities import FOOT, KNOT
from mission.airspeeds import crossover_altitude
from mission.march.span import Span, SpeedRule
from mission.segments.here import Here

TEN_THOUSAND_FEET = 10000.0 * FOOT
SPEED_LIMIT = 250.0 * KNOT  # 14 CFR 91.117(a), below 10,000 ft
_TROPOPAUSE, _STRATOSPHERE = 11000.0, 20000.0  # ISO 2533:1975, kinks of temperature


def zones(
    calibrated_airspeed: float | None, mach: float | None, *, limited: bool
) -> list[tuple[float, SpeedRule]]:
    """Speed rules upwards, each with the altitude [m] that it holds up to."""
    found: list[tuple[float, SpeedRule]] = []
    if calibrated_airspeed is None:
        assert mach is not None
        return [(float("inf"), SpeedRule("mach", mach))]
    if limited and calibrated_airspeed > SPEED_LIMIT:
        found.append((TEN_THOUSAND_FEET, SpeedRule("calibrated", SPEED_LIMIT)))
    top = float("inf") if mach is None else crossover_altitude(calibrated_airspeed, mach)
    if not found or top > found[-1][0]:
        found.append((top, SpeedRule("calibrated", calibrated_airspeed)))
    if mach is not None:
        found.append((float("inf"), SpeedRule("mach", mach)))
    return found


def lay_schedule(
    here: Here,
    start: float,
    end: float,
    rules: list[tuple[float, SpeedRule]],
    rating: str,
) -> tuple[list[Span], Here]:
    """Spans from one pressure altitude [m] to another along the rules of :func:`zones`."""
    low, high = min(start, end), max(start, end)
    pieces: list[tuple[float, float, SpeedRule]] = []
    floor = low
    for ceiling, rule in rules:
        marks = [m for m in (_TROPOPAUSE, _STRATOSPHERE) if floor < m < min(ceiling, high)]
        for mark in [*marks, min(ceiling, high)]:
            if mark > floor:
                pieces.append((floor, mark, rule))
                floor = mark
    if end < start:
        pieces = [(upper, lower, rule) for lower, upper, rule in reversed(pieces)]
    spans: list[Span] = []
    last: SpeedRule | None = None
    for begin, stop, rule in pieces:
        if last is not None and rule != last and last.kind == rule.kind:
            spans.append(_change_speed(here, begin, last, rule, rating))
        spans.append(
            Span(
                segment=here.row,
                march="altitude",
                rating=rating,
                start_altitude=begin,
                end_altitude=stop,
                start_speed=rule,
                end_speed=rule,
                is_reserve=here.is_reserve,
            )
        )
        last = rule
    return spans, here.now(pressure_altitude=end, speed=last or here.speed, on_ground=False)


def _change_speed(
    here: Here, altitude: float, before: SpeedRule, after: SpeedRule, rating: str
) -> Span:
    """Level change between two calibrated airspeeds, part of the climb or descent."""
    return Span(
        segment=here.row,
        march="speed",
        rating=rating,
        start_altitude=altitude,
        end_altitude=altitude,
        start_speed=before,
        end_speed=after,
        is_reserve=here.is_reserve,
    )


def schedule_start(
    rules: list[tuple[float, SpeedRule]], altitude: float, *, upwards: bool
) -> SpeedRule:
    """The rule in force where a climb or descent begins."""
    for ceiling, rule in rules:
        if altitude < ceiling or (not upwards and altitude <= ceiling):
            return rule
    return rules[-1][1]
