"""Field length of a take-off: the balanced one, and the one with all engines.

Source: E. Torenbeek, Synthesis of Subsonic Airplane Design (1982), section 5.4.5 and appendix K,
the balanced form also in D. P. Raymer, Aircraft Design: A Conceptual Approach, equation 17.113
(both from memory). Made for subsonic transports of two to four engines with wing loading, thrust
and flaps of their kind, on a dry, hard, level runway in still air. What is real here and a rule of
thumb there: mean thrust, thrust and drag at lift-off and with an engine out. Expect 15 % either way
(own judgement: 9 to 17 % longer than the statistics of jet transports, tests/published), and too
short a balanced length where the gear-down climb with an engine out is below some 4 %. A strong
engine is given a long way in the air, since the handbook has it gain speed all the way to 35 ft.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from engine.quantities import FOOT, STANDARD_GRAVITY
from mission.aircraft import Aircraft
from mission.field.cases import SECOND_SEGMENT, required_gradient
from mission.field.states import State, gradient, is_in_polar

Array = NDArray[np.float64]
SCREEN_HEIGHT = 35.0 * FOOT  # 14 CFR 25.113 (from memory)
ALL_ENGINE_FACTOR = 1.15  # 14 CFR 25.113(a)(2) (from memory)
_REACTION = 200.0  # m of runway, rolled at sea level while the failure is recognised
_SEA_LEVEL_DENSITY = 1.225  # kg/m3, ISO 2533:1975


@dataclass(frozen=True)
class FieldLengths:
    """Lengths [m], arrays of one shape; infinite where thrust does not overcome resistance.

    Attributes
    ----------
    balanced : with an engine failing where to go on takes as much as to stop; None of one engine
    all_engine : with all engines to 35 ft, 15 % added
    is_answered : whether the engine had an answer; lengths are NaN where it had none
    is_in_polar : whether the drag polar is given there; its edge's drag counts where it is not
    """

    balanced: Array | None
    all_engine: Array
    is_answered: NDArray[np.bool_]
    is_in_polar: NDArray[np.bool_]

    @property
    def needed(self) -> Array:
        """The greater of the two [m], 14 CFR 25.113(a)."""
        if self.balanced is None:
            return self.all_engine
        return np.maximum(self.balanced, self.all_engine)


def ground_resistance(take_off_lift_coefficient: ArrayLike) -> Array:
    """Friction and drag of the run, over weight: 0.02 + 0.01 CL_max, with take-off flaps."""
    return 0.02 + 0.01 * np.asarray(take_off_lift_coefficient, dtype=float)


def balanced_field_length(
    v2: ArrayLike,
    mean_thrust_to_weight: ArrayLike,
    excess_gradient: ArrayLike,
    take_off_lift_coefficient: ArrayLike,
    density_ratio: ArrayLike,
) -> Array:
    """Balanced field length [m] of a take-off to 35 ft.

    ``0.863 / (1 + 2.3 dgamma2) (V2^2 / 2g + h) (1 / (T/W - mu') + 2.7) + 200 m / sqrt(sigma)``,
    ``V2^2 / 2g`` being the book's ``(W/S) / (rho g CL_2)``.

    Parameters
    ----------
    v2 : true airspeed at 35 ft [m/s]
    mean_thrust_to_weight : T/W of all engines at 0.707 of the lift-off speed
    excess_gradient : dgamma2, gradient of the second segment less what 25.121(b) asks
    take_off_lift_coefficient : greatest with take-off flaps, for mu'
    density_ratio : sigma, to sea level on the standard day
    """
    resistance = ground_resistance(take_off_lift_coefficient)
    run = _over(1.0, np.asarray(mean_thrust_to_weight) - resistance)
    climb = _over(0.863, 1.0 + 2.3 * np.asarray(excess_gradient))
    height = np.asarray(v2) ** 2 / (2.0 * STANDARD_GRAVITY) + SCREEN_HEIGHT
    return np.asarray(climb * height * (run + 2.7) + _REACTION / np.sqrt(density_ratio))


def all_engine_field_length(
    lift_off_speed: ArrayLike,
    mean_thrust_to_weight: ArrayLike,
    lift_off_gradient: ArrayLike,
    take_off_lift_coefficient: ArrayLike,
) -> Array:
    """All-engine take-off distance to 35 ft [m] with 15 % added.

    ``1.15 [V_LOF^2 / 2g (1 / (T/W - mu') + sqrt 2) + h / gamma_LOF]``: a run at mean thrust, then
    the energy of 35 ft and of the speed gained, ``V_3^2 = V_LOF^2 (1 + sqrt 2 gamma_LOF)``, from
    the excess thrust at lift-off. The book lifts off so that V_3 is 1.3 V_S; here lift-off is
    where the flight has it.

    Parameters
    ----------
    lift_off_speed : true airspeed [m/s]
    mean_thrust_to_weight : T/W of all engines at 0.707 of the lift-off speed
    lift_off_gradient : gamma_LOF, (T - D) / W of all engines at lift-off, gear down
    take_off_lift_coefficient : greatest with take-off flaps, for mu'
    """
    resistance = ground_resistance(take_off_lift_coefficient)
    run = _over(1.0, np.asarray(mean_thrust_to_weight) - resistance)
    energy = np.asarray(lift_off_speed) ** 2 / (2.0 * STANDARD_GRAVITY)
    air = _over(SCREEN_HEIGHT, np.asarray(lift_off_gradient))
    return np.asarray(ALL_ENGINE_FACTOR * (energy * (run + np.sqrt(2.0)) + air))


def field_lengths(
    aircraft: Aircraft, run: State, lift_off: State, second: State | None
) -> FieldLengths:
    """Both lengths from the states of the cases RUN, LIFT_OFF and SECOND_SEGMENT.

    ``second`` is None of an aircraft with one engine, which has no balanced length.
    """
    limit = aircraft.take_off_lift_coefficient
    mean = aircraft.engine_count * run.running / (run.mass * STANDARD_GRAVITY)
    all_engine = all_engine_field_length(
        lift_off.flight.true_airspeed, mean, gradient(aircraft, lift_off), limit
    )
    is_answered = run.is_answered & lift_off.is_answered
    is_inside = is_in_polar(aircraft, lift_off)
    if second is None:
        return FieldLengths(None, all_engine, is_answered, is_inside)
    asked = required_gradient(SECOND_SEGMENT, aircraft.engine_count)
    balanced = balanced_field_length(
        second.flight.true_airspeed,
        mean,
        gradient(aircraft, second) - asked,
        limit,
        second.flight.density / _SEA_LEVEL_DENSITY,
    )
    is_inside = is_inside & is_in_polar(aircraft, second)
    return FieldLengths(balanced, all_engine, is_answered & second.is_answered, is_inside)


def _over(numerator: float, denominator: Array) -> Array:
    """A quotient, infinite where the denominator is not above zero, NaN where it is no number."""
    positive = denominator > 0.0
    quotient = numerator / np.where(positive, denominator, 1.0)
    return np.where(positive, quotient, np.where(np.isnan(denominator), np.nan, np.inf))
