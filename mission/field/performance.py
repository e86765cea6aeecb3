"""Field length and gradients of climb of an aircraft with an engine, over arrays of places."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from engine.errors import InputRefused
from engine.interface import Engine
from mission.aircraft import Aircraft
from mission.field.cases import LIFT_OFF, RUN, SECOND_SEGMENT, Case, applies
from mission.field.lengths import FieldLengths, field_lengths
from mission.field.states import Place, gradient, is_in_polar, states

Array = NDArray[np.float64]


@dataclass(frozen=True)
class Climb:
    """Gradient of a case, an array; NaN where ``is_answered`` says the engine had no answer.

    Where ``is_in_polar`` is false the drag polar is not given and its edge's drag counts.
    """

    case: Case
    gradient: Array
    is_answered: NDArray[np.bool_]
    is_in_polar: NDArray[np.bool_]


def take_off_lengths(aircraft: Aircraft, engine: Engine, place: Place) -> FieldLengths:
    """Field lengths at a mass, a pressure altitude and a temperature, arrays that broadcast."""
    cases = [RUN, LIFT_OFF, SECOND_SEGMENT][: 2 + applies(SECOND_SEGMENT, aircraft.engine_count)]
    run, lift_off, *second = states(aircraft, engine, [(case, place) for case in cases])
    return field_lengths(aircraft, run, lift_off, second[0] if second else None)


def climb_gradients(
    aircraft: Aircraft, engine: Engine, cases: Sequence[Case], place: Place
) -> tuple[Climb, ...]:
    """Gradients of climb at places, by case.

    Raises
    ------
    InputRefused
        for a case with an engine out of an aircraft that has one.
    """
    for case in cases:
        if not applies(case, aircraft.engine_count):
            raise InputRefused(
                f"{case.name} ({case.paragraph}) is flown with an engine out, and "
                f"{aircraft.name} has but {aircraft.engine_count}"
            )
    found = states(aircraft, engine, [(case, place) for case in cases])
    return tuple(
        Climb(s.case, gradient(aircraft, s), s.is_answered, is_in_polar(aircraft, s)) for s in found
    )
