"""The factors at which a flight comes nearest to what is known of it, found by few flights.

The unknowns are the logarithms of the two factors, the residuals those of flown over known, all of
equal weight. Differences of 1 % give the first slopes; damped Gauss-Newton steps follow, each
flight correcting the slopes by Broyden's rank-one update (Broyden, A Class of Methods for Solving
Nonlinear Simultaneous Equations, Mathematics of Computation 19, 1965, from memory). Where a misfit
remains corrected slopes do not find its least; they are then measured again.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from engine.errors import InputRefused
from mission.errors import CannotBeFlown
from mission.known import KnownValue
from mission.questions.told_factors import FACTORS, Keys, columns
from mission.results import Flight

Array = NDArray[np.float64]
LEAST, GREATEST = 0.5, 2.0  # of a factor that is fitted
MOST_FLIGHTS = 12
_DIFFERENCE = float(np.log(0.99))  # of a logarithm; downwards, where a mission is easier to fly
_LARGEST_STEP = 0.3  # of a logarithm
_SETTLED = 1e-5  # the same; steps below it are not taken
# Shares of the misfit that the next step would explain: with less the factors are at rest, if the
# slopes are new enough to say so; with less than the other the misfit is not the factors' own, and
# it takes new slopes to find where it is least.
_AT_REST, _NOT_THEIRS = 1e-2, 0.2
FAR = 0.05  # of a logarithm: slopes measured further away than that are not those of here
_NO_MISFIT = 1e-12
_MOST_BLOCKED = 4  # steps halved one after another before flights that cannot be flown


@dataclass(frozen=True)
class Trial:
    """A flight: logarithms of the factors (2,), and of flown over known (n,).

    Only a usable one tells how far it is off. Where there was no flight at all ``refusal`` says
    why, and the rest is of the first trial.
    """

    place: Array
    flight: Flight
    values: tuple[KnownValue, ...]
    errors: Array
    is_usable: bool
    refusal: CannotBeFlown | None = None

    @property
    def misfit(self) -> float:
        """Root of the sum of squares of the errors."""
        return float(np.linalg.norm(self.errors))


@dataclass(frozen=True)
class Search:
    """How far a search has come: its best trial, the slopes (n, 2), and what stood in its way.

    ``corrections`` are the steps that have corrected the slopes since differences gave them, which
    was at the logarithms ``measured_at`` (2,) and gave ``measured`` (n, 2).
    """

    here: Trial
    slopes: Array
    measured: Array
    measured_at: Array
    corrections: int = 0
    has_settled: bool = False
    blocked: Trial | None = None


Attempt = Callable[[Array], Trial]


def begun(here: Trial) -> Search:
    """A search at its first trial, before any slopes."""
    none = np.zeros((len(here.errors), 2))
    return Search(here, none, none, here.place, blocked=None if here.is_usable else here)


def with_slopes(attempt: Attempt, found: Search, keys: Keys) -> Search:
    """Slopes by differences from where a search is, a flight for each factor of ``keys``."""
    slopes, here = found.slopes.copy(), found.here
    for column in columns(keys):
        trial = attempt(here.place + _DIFFERENCE * np.eye(2)[column])
        if not trial.is_usable:
            return replace(found, blocked=trial)
        slopes[:, column] = (trial.errors - here.errors) / _DIFFERENCE
    return replace(found, slopes=slopes, measured=slopes, measured_at=here.place, corrections=0)


def search(attempt: Attempt, found: Search, keys: Keys, where: str, flights: int) -> Search:
    """The nearest factors by at most so many flights; ``where`` names the mission's file.

    Steps are halved where a flight comes out worse or cannot be flown at all. Raises
    :class:`InputRefused` where the way leads out of the bounds.
    """
    limit, halvings, has_gained = _LARGEST_STEP, 0, True
    while halvings < _MOST_BLOCKED:
        here, step = found.here, _step(found, keys)
        size = float(np.max(np.abs(step)))
        share = float(np.linalg.norm(found.slopes @ step)) / max(here.misfit, _NO_MISFIT)
        if size < _SETTLED or (share < _AT_REST and found.corrections <= 1):
            return replace(found, has_settled=True, blocked=None)
        if flights <= 0:
            break
        is_old = found.corrections > 0 and (share < _NOT_THEIRS or not has_gained)
        if is_old and halvings == 0 and flights > len(keys):
            found, has_gained = with_slopes(attempt, found, keys), True
            halvings, flights = min(found.corrections, 1), flights - len(keys)
            continue
        step = _within(step * min(1.0, limit / size), here, keys, where)
        new = attempt(here.place + step)
        flights -= 1
        has_gained = new.is_usable and new.misfit < here.misfit
        halvings = 0 if new.is_usable else halvings + 1
        limit = min(2.0 * limit, _LARGEST_STEP) if has_gained else 0.5 * float(max(abs(step)))
        found = _taken(found, new)
    return found


def _taken(found: Search, new: Trial) -> Search:
    """A search after one more trial: gone there where it is nearer, its slopes corrected."""
    here = found.here
    if not new.is_usable:
        return replace(found, blocked=new)
    step = new.place - here.place
    missed = new.errors - here.errors - found.slopes @ step
    return replace(
        found,
        here=new if new.misfit < here.misfit else here,
        slopes=found.slopes + np.outer(missed, step) / float(step @ step),
        corrections=found.corrections + 1,
    )


def _step(found: Search, keys: Keys) -> Array:
    """The whole step (2,) to where the slopes put the least sum of squares."""
    step, free = np.zeros(2), columns(keys)
    step[free] = np.linalg.lstsq(found.slopes[:, free], -found.here.errors, rcond=None)[0]
    return step


def _within(step: Array, here: Trial, keys: Keys, where: str) -> Array:
    """A step that ends within the bounds; refused where it leads out from one of them."""
    ends = np.clip(here.place + step, np.log(LEAST), np.log(GREATEST))
    inside = np.where(step == 0.0, 0.0, ends - here.place)
    for key in keys:
        at = FACTORS.index(key)
        if abs(step[at]) > _SETTLED > abs(inside[at]):
            side = f"above {GREATEST:g}" if step[at] > 0.0 else f"below {LEAST:g}"
            off = ", ".join(f"{each.key} by {100.0 * each.error:+.1f} %" for each in here.values)
            raise InputRefused(
                f"asks for a {key} {side}, further than a fit goes. There the flight is still off "
                f"{off}: look at the units, and at the payload, the distance, the day, the fuel "
                "and the engine of this mission",
                where=where,
                key="known",
            )
    return inside
