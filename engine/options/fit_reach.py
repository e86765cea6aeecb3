"""Whether the data of a fit are of an engine like the one that the fit starts from."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from engine.envelope import COLUMNS
from engine.errors import InputRefused
from engine.options.fit_points import FitPoints
from engine.options.fit_trials import SMALL_THRUST, Answers

Array = NDArray[np.float64]
FARTHEST = 5.0  # times what the engine gives, or a fifth; sizes may move as far
_THRUST, _FUEL = COLUMNS[3:]


def refuse_far(answers: Answers, points: FitPoints, *, is_size_free: bool) -> None:
    """Refuse data far from what the engine to start from gives, which are of another, or a slip.

    Where its size is free, those are let through whose fuel flow over thrust is like the engine's.
    Raises :class:`InputRefused` naming file, line, datum and both numbers.
    """
    least = SMALL_THRUST * np.nanmax(np.abs(points.net_thrust), initial=0.0)
    told, found = (np.maximum(np.abs(x), least) for x in (points.net_thrust, answers.net_thrust))
    thrust_ratio, fuel_ratio = told / found, points.fuel_flow / answers.fuel_flow
    is_let_through = is_size_free & _is_near(fuel_ratio / thrust_ratio)
    for name, unit, given, there, ratio in (
        (_THRUST, "N", points.net_thrust, answers.net_thrust, thrust_ratio),
        (_FUEL, "kg/s", points.fuel_flow, answers.fuel_flow, fuel_ratio),
    ):
        far = np.flatnonzero(~np.isnan(ratio) & ~_is_near(ratio) & ~is_let_through)
        if far.size:
            i = int(far[0])
            raise InputRefused(
                f"{name} = {given[i]:g}, and the engine to start from gives {there[i]:g} {unit} "
                f"there, which is more than {FARTHEST:g} times off: check the units of the file, "
                "or bring the engine to size first, by design_point.net_thrust, "
                "design_point.airflow or scale",
                where=points.where,
                key=points.place(i),
            )


def _is_near(ratio: Array) -> NDArray[np.bool_]:
    """Whether neither is more than :data:`FARTHEST` times the other; not where one is unknown."""
    return np.asarray((ratio <= FARTHEST) & (ratio >= 1.0 / FARTHEST))
