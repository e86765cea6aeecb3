"""The drag factor and the fuel-flow factor with which one known mission comes out."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from engine.errors import InputRefused
from engine.interface import Engine
from mission.aircraft import Aircraft
from mission.errors import CannotBeFlown
from mission.flight import fly
from mission.known import KnownTable, KnownValue, known_against_flown
from mission.mission_file import Mission
from mission.questions.factor_search import (
    FAR,
    GREATEST,
    LEAST,
    MOST_FLIGHTS,
    Attempt,
    Search,
    Trial,
    begun,
    search,
    with_slopes,
)
from mission.questions.told_factors import (
    DRAG,
    FACTORS,
    FLOW,
    Keys,
    doubts,
    free_by_rule,
    named_factors,
    refuse_untold,
)
from mission.results import Flight

Array = NDArray[np.float64]
_CLOSED = 1e-6  # of the fuel loaded: reserves are met to so much where fuel is as needed


@dataclass(frozen=True)
class FittedFactor:
    """A key of the aircraft file: its value there and now, free or held.

    ``doubt`` is the percentage by which it moves where every known is off by 1 %, independently;
    None where it is held.
    """

    key: str
    start: float
    value: float
    doubt: float | None

    @property
    def is_free(self) -> bool:
        """Whether it was fitted."""
        return self.doubt is not None


@dataclass(frozen=True)
class FittedKnown:
    """A known beside what is flown now; ``before`` [kg or s] is flown with the file's factors.

    ``slopes`` are the percentages by which it grows with 1 % of each of :data:`FACTORS`.
    """

    value: KnownValue
    before: float
    slopes: tuple[float, float]


@dataclass(frozen=True)
class Blocked:
    """Factors of :data:`FACTORS` that cannot be flown with, and the flight that says why."""

    factors: tuple[float, float]
    flight: Flight


@dataclass(frozen=True)
class FlightFit:
    """Factors that make a known mission come out.

    Attributes
    ----------
    factors : those of :data:`FACTORS`, in this order
    knowns : in the order of the file; empty where the fit could not begin
    held_because : why a factor is held that nobody asked to hold; empty where none is
    flight : with the factors as they are now
    blocked : what the fit met and could not fly, None where it came to its end
    flights : how many were flown
    has_settled : whether the factors have come to rest
    """

    factors: tuple[FittedFactor, ...]
    knowns: tuple[FittedKnown, ...]
    held_because: str
    flight: Flight
    blocked: Blocked | None
    flights: int
    has_settled: bool

    @property
    def flown(self) -> bool:
        """Whether there is an answer, and the mission can be flown with it."""
        return self.blocked is None and self.flight.flown


def fit_flight(
    mission: Mission, aircraft: Aircraft, engine: Engine, free: Sequence[str] = ()
) -> FlightFit:
    """Factors of an aircraft with which the knowns of a mission come out, by few flights.

    ``free`` names the factors that may change; without it they are those that the knowns tell.
    Raises :class:`engine.errors.InputRefused` where the file has no knowns, where they do not tell
    what is to be free, or where they ask for a factor outside 0.5 to 2, and
    :class:`mission.errors.CannotBeFlown` where there is no flight to show; a mission that cannot be
    flown otherwise comes back with ``blocked`` set.
    """
    known, where, asked = _known_of(mission), mission.where, named_factors(free)
    trials: list[Trial] = []

    def attempt(place: Array) -> Trial:
        drag, flow = np.exp(place).tolist()
        plane = replace(aircraft, drag_factor=drag, fuel_flow_factor=flow)
        try:
            trial = _trial(place, fly(mission, plane, engine), known, mission)
        except CannotBeFlown as refusal:
            refusal.add_note(f"with {DRAG} = {drag:.4g} and {FLOW} = {flow:.4g}")
            if not trials:
                raise
            trial = replace(trials[0], place=place, is_usable=False, refusal=refusal)
        trials.append(trial)
        return trial

    here = attempt(np.log([aircraft.drag_factor, aircraft.fuel_flow_factor]))
    start = begun(here)
    if start.blocked is None:
        start = with_slopes(attempt, start, FACTORS)
    if start.blocked is not None:
        return _fit(start, start, (), "", len(trials))
    if asked:
        refuse_untold(start.slopes, asked, where)
    keys, why = (asked, "") if asked else free_by_rule(start.slopes, here.values, where)
    _refuse_start(here, keys)
    found = search(attempt, start, keys, where, MOST_FLIGHTS - len(trials))
    found = _judged_anew(attempt, found, MOST_FLIGHTS - len(trials))
    return _fit(start, found, keys, why, len(trials))


def _judged_anew(attempt: Attempt, found: Search, flights: int) -> Search:
    """Slopes of the answer itself, where those measured are of elsewhere and flights are left."""
    far = float(np.max(np.abs(found.here.place - found.measured_at)))
    if far < FAR or not found.has_settled or flights < len(FACTORS):
        return found
    anew = with_slopes(attempt, found, FACTORS)
    return found if anew.blocked is not None else anew


def _known_of(mission: Mission) -> KnownTable:
    known = mission.written.known
    if known is None:
        raise InputRefused(
            f"is missing; it is a table of what is known of this flight: {KnownTable.example}, say",
            where=mission.where,
            key="known",
        )
    return known


def _trial(place: Array, flight: Flight, known: KnownTable, mission: Mission) -> Trial:
    """A flight with its errors; usable where it is flown, or only a mass is not as it should be."""
    values = known_against_flown(known, flight)
    failure, total = flight.failure, flight.totals
    has_closed = not mission.written.fuel.as_needed or (
        total.fuel_margin >= -_CLOSED * total.loaded_fuel
    )
    is_usable = failure is None or (failure.unit == "kg" and has_closed)
    nothing = [each for each in values if not each.flown > 0.0]
    if is_usable and nothing:
        raise InputRefused(
            f"is {nothing[0].flown:g} {nothing[0].unit} in this mission whatever the factors: "
            "leave it out",
            where=mission.where,
            key=nothing[0].key,
        )
    errors = np.log([1.0 if each in nothing else each.flown / each.known for each in values])
    return Trial(place, flight, values, errors, is_usable and bool(np.all(np.isfinite(errors))))


def _refuse_start(start: Trial, keys: Keys) -> None:
    for key, value in zip(FACTORS, np.exp(start.place).tolist(), strict=True):
        if key in keys and not LEAST <= value <= GREATEST:
            raise InputRefused(
                f"= {value:g} in the aircraft file, where the fit starts; it goes from {LEAST:g} "
                f"to {GREATEST:g}",
                key=key,
            )


def _fit(start: Search, found: Search, keys: Keys, held_because: str, flights: int) -> FlightFit:
    """What was found; nothing is free and nothing known where the fit could not begin."""
    here, blocked = found.here, found.blocked
    if blocked is not None and blocked.refusal is not None:
        raise blocked.refusal
    doubt = dict(zip(keys, doubts(found.measured, keys).tolist(), strict=True)) if keys else {}
    places = zip(FACTORS, _factors(start.here), _factors(here), strict=True)
    rows = zip(here.values, start.here.values, found.measured.tolist(), strict=True)
    return FlightFit(
        factors=tuple(FittedFactor(key, a, b, doubt.get(key)) for key, a, b in places),
        knowns=tuple(FittedKnown(now, old.flown, (d, f)) for now, old, (d, f) in rows if keys),
        held_because=held_because,
        flight=here.flight,
        blocked=None if blocked is None else Blocked(_factors(blocked), blocked.flight),
        flights=flights,
        has_settled=found.has_settled,
    )


def _factors(trial: Trial) -> tuple[float, float]:
    drag, flow = np.exp(trial.place).tolist()
    return drag, flow
