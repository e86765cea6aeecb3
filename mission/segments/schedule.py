"""Climb and descent on a schedule of calibrated airspeed and Mach number, laid into spans."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from itertools import pairwise
from typing import Annotated, Self

from pydantic import Field, model_validator

from engine.atmosphere import flight_condition
from engine.quantities import FOOT, KNOT, Speed
from mission.airspeeds import crossover_altitude, mach_from_calibrated_airspeed
from mission.march.span import Span, SpeedRule
from mission.segments.base import Segment
from mission.segments.here import Here

TEN_THOUSAND_FEET = 10000.0 * FOOT
SPEED_LIMIT = 250.0 * KNOT  # 14 CFR 91.117(a), below 10,000 ft
_LOWEST, _HIGHEST = -1000.0, 29000.0  # m, altitudes a schedule is asked for
_SAME_MACH = 1e-6
_TROPOPAUSE, _STRATOSPHERE = 11000.0, 20000.0  # ISO 2533:1975, kinks of temperature


class Scheduled(Segment):
    """Speeds of a climb or a descent; with both given the lower one governs."""

    calibrated_airspeed: Annotated[Speed, Field(gt=0.0)] | None = None
    mach: Annotated[float, Field(gt=0.0, lt=5.0)] | None = None
    limited_below_10000_ft: bool = False

    @model_validator(mode="after")
    def _some_speed(self) -> Self:
        if self._needs_schedule and self.calibrated_airspeed is None and self.mach is None:
            raise ValueError("give calibrated_airspeed, mach, or both")
        return self

    @property
    def _needs_schedule(self) -> bool:
        return True

    @property
    def has_schedule(self) -> bool:
        """Whether any speed of a schedule is given."""
        given = (self.calibrated_airspeed, self.mach)
        return given != (None, None) or self.limited_below_10000_ft

    def rules(self) -> list[tuple[float, SpeedRule]]:
        """Speed rules upwards, each with the altitude [m] that it holds up to."""
        return zones(self.calibrated_airspeed, self.mach, limited=self.limited_below_10000_ft)


def zones(
    calibrated_airspeed: float | None, mach: float | None, *, limited: bool
) -> list[tuple[float, SpeedRule]]:
    """Speed rules upwards, each with the altitude [m] that it holds up to.

    The lowest of the speeds given governs everywhere, and 250 kt with them below 10,000 ft where
    ``limited``.
    """
    airspeeds = [] if calibrated_airspeed is None else [calibrated_airspeed]
    marks = [TEN_THOUSAND_FEET] if limited else []
    if mach is not None:
        candidates = [*airspeeds, SPEED_LIMIT] if limited else airspeeds
        marks += [crossover_altitude(airspeed, mach) for airspeed in candidates]
    marks = sorted(mark for mark in marks if _LOWEST < mark < _HIGHEST)
    found: list[tuple[float, SpeedRule]] = []
    for low, high in pairwise([_LOWEST, *marks, _HIGHEST]):
        middle = 0.5 * (low + high)
        rules = [SpeedRule("calibrated", airspeed) for airspeed in airspeeds]
        if limited and middle < TEN_THOUSAND_FEET:
            rules.append(SpeedRule("calibrated", SPEED_LIMIT))
        if mach is not None:
            rules.append(SpeedRule("mach", mach))
        governs = min(rules, key=lambda rule: mach_of(rule, middle))
        if found and found[-1][1] == governs:
            found.pop()
        found.append((high, governs))
    return [*found[:-1], (float("inf"), found[-1][1])]


def mach_of(rule: SpeedRule, altitude: float) -> float:
    """Mach number of a rule that no mass changes, at a pressure altitude [m]."""
    assert rule.value is not None
    if rule.kind == "mach":
        return rule.value
    pressure = flight_condition(altitude).static_pressure
    return float(mach_from_calibrated_airspeed(rule.value, pressure))


def is_same_speed(first: SpeedRule, second: SpeedRule, altitude: float) -> bool:
    """Whether two rules that no mass changes give one Mach number at an altitude."""
    return abs(mach_of(first, altitude) - mach_of(second, altitude)) < _SAME_MACH


def lay_schedule(
    here: Here,
    start: float,
    end: float,
    rules: list[tuple[float, SpeedRule]],
    rating: str,
    *,
    cuts: Sequence[float] = (),
    **given: float,
) -> tuple[list[Span], Here]:
    """Spans from one pressure altitude [m] to another along the rules of :func:`zones`.

    ``cuts`` are altitudes [m] at which to begin another span besides the kinks of the air.
    ``given`` are the path angle [rad] or vertical speed [m/s] of a descent that holds one, and the
    least rate [m/s] of one that may be slow.
    """
    low, high = min(start, end), max(start, end)
    pieces: list[tuple[float, float, SpeedRule]] = []
    floor = low
    for ceiling, rule in rules:
        kinks = sorted({_TROPOPAUSE, _STRATOSPHERE, *here.air.kinks, *cuts})
        marks = [mark for mark in kinks if floor < mark < min(ceiling, high)]
        for mark in [*marks, min(ceiling, high)]:
            if mark > floor:
                pieces.append((floor, mark, rule))
                floor = mark
    if end < start:
        pieces = [(upper, lower, rule) for lower, upper, rule in reversed(pieces)]
    spans: list[Span] = []
    last: SpeedRule | None = None
    for begin, stop, rule in pieces:
        if last is not None and not is_same_speed(last, rule, begin):
            spans.append(_change_speed(here, begin, last, rule, rating))
        spans.append(
            here.span(
                "altitude",
                rating=rating,
                start_altitude=begin,
                end_altitude=stop,
                start_speed=rule,
                end_speed=rule,
                **given,
            )
        )
        last = rule
    return spans, replace(here, pressure_altitude=end, speed=last or here.speed, on_ground=False)


def _change_speed(
    here: Here, altitude: float, before: SpeedRule, after: SpeedRule, rating: str
) -> Span:
    """Level change between two calibrated airspeeds, part of the climb or descent."""
    return here.span(
        "speed",
        rating=rating,
        start_altitude=altitude,
        end_altitude=altitude,
        start_speed=before,
        end_speed=after,
    )


def schedule_start(
    rules: list[tuple[float, SpeedRule]], altitude: float, *, upwards: bool
) -> SpeedRule:
    """The rule in force where a climb or descent begins."""
    for ceiling, rule in rules:
        if altitude < ceiling or (not upwards and altitude <= ceiling):
            return rule
    return rules[-1][1]
