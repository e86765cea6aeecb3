"""What points tell of the parameters fitted to them: uncertainties, correlations, and gaps.

With ``J`` the derivatives of the relative errors by the parameters, each in its scale, and ``s2``
the sum of squares over data less parameters, the covariance of the parameters is ``s2 (J'J)^-1``
(linear least squares; Draper and Smith, Applied Regression Analysis, chapter 5, from memory).
Along a right singular vector of ``J`` with a singular value near zero the parameters may move
together and no point changes: these are what the points do not determine.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from engine.options.fit_parameters import Parameter

Array = NDArray[np.float64]
# Share of the greatest singular value below which a direction is not determined. Differences
# leave 1e-6 of it, and two parameters that act alike to a part in ten thousand are one.
_GAP = 1e-4
_LEAST = 1e-6  # relative change of a datum for one scale, which no point tells
_TAKES_PART = 0.1  # least component of a parameter in a direction that is its own concern


@dataclass(frozen=True)
class Judgement:
    """What the points tell of one parameter.

    Attributes
    ----------
    is_at_bound : whether it would go further if it might; what follows is then none
    uncertainty : standard, in the parameter's unit SI; None where no residual tells it
    partner, correlation : the parameter it moves with most, and how much; empty and 0 if alone
    gap : the direction along which the points do not determine it, empty where they do
    """

    is_at_bound: bool = False
    uncertainty: float | None = None
    partner: str = ""
    correlation: float = 0.0
    gap: str = ""


def gaps(parameters: Sequence[Parameter], jacobian: Array) -> list[tuple[Array, str]]:
    """Directions (p,) that the data do not determine, and each in words."""
    _, values, directions = np.linalg.svd(jacobian)
    values = np.pad(values, (0, len(parameters) - values.size))
    return [
        (direction, in_words(parameters, direction))
        for value, direction in zip(values, directions, strict=True)
        if not value > max(_GAP * values[0], _LEAST)
    ]


def in_words(parameters: Sequence[Parameter], direction: Array) -> str:
    """A direction as changes that go together, its greatest part as one scale of its parameter."""
    order = np.argsort(-np.abs(direction)).tolist()
    step = direction / direction[order[0]]
    return ", ".join(
        f"{parameters[i].key} {parameters[i].in_unit(step[i] * parameters[i].scale):+.3g}"
        + (f" {parameters[i].unit}" if parameters[i].unit else "")
        for i in order
        if abs(step[i]) > _TAKES_PART
    )


def judge(
    parameters: Sequence[Parameter],
    at_bound: NDArray[np.bool_],
    jacobian: Array,
    square_sum: float,
    data_count: int,
) -> list[Judgement]:
    """What the points tell of each parameter, those at a bound held there.

    ``jacobian`` (rows, p) is by parameters in their scales; ``square_sum`` is that of the relative
    errors left.
    """
    inside = np.flatnonzero(~at_bound).tolist()
    found = [Judgement(is_at_bound=True)] * len(parameters)
    if not inside:
        return found
    free = [parameters[i] for i in inside]
    part = jacobian[:, inside]
    open_directions = gaps(free, part)
    surplus = data_count - len(inside)
    covariance = _covariance(part, len(open_directions))
    deviation = np.sqrt(np.diag(covariance))
    for place, i in enumerate(inside):
        gap = _gap_of(place, open_directions)
        partner, correlation = _partner(place, covariance, free)
        uncertainty = None
        if surplus > 0 and not gap:
            uncertainty = float(
                deviation[place] * np.sqrt(square_sum / surplus) * free[place].scale
            )
            if uncertainty > 0.5 * (free[place].high - free[place].low):
                gap = in_words(free, np.linalg.svd(part)[2][-1])
        found[i] = Judgement(False, uncertainty, partner, correlation, gap)
    return found


def _covariance(jacobian: Array, open_count: int) -> Array:
    """Inverse of J'J over the directions that are determined."""
    _, values, directions = np.linalg.svd(jacobian)
    known = directions.shape[0] - open_count
    scaled = directions[:known] / values[:known, None]
    return np.asarray(scaled.T @ scaled)


def _gap_of(place: int, open_directions: Sequence[tuple[Array, str]]) -> str:
    for direction, text in open_directions:
        if abs(direction[place]) > _TAKES_PART * np.max(np.abs(direction)):
            return text
    return ""


def _partner(place: int, covariance: Array, free: Sequence[Parameter]) -> tuple[str, float]:
    """The parameter that goes with this one most, and the correlation."""
    deviation = np.sqrt(np.diag(covariance))
    if len(free) == 1 or not deviation[place] > 0.0:
        return "", 0.0
    with np.errstate(all="ignore"):
        row = covariance[place] / deviation / deviation[place]
    row = np.where(np.isfinite(row), row, 0.0)
    row[place] = 0.0
    other = int(np.argmax(np.abs(row)))
    return free[other].key, float(row[other])
