"""What the knowns of a flight tell of the drag factor and the fuel-flow factor, and what not.

With ``P`` the pseudo-inverse of the slopes, independent errors of 1 % in every known move a factor
by the root of the sum of squares of its row of ``P``, in percent (linear least squares; Draper and
Smith, Applied Regression Analysis, chapter 5, from memory). That is the factor's doubt. A fuel
moves with both factors much alike, so that one fuel tells one of them only; the time of a climb
moves with drag, and with fuel flow through the mass alone.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from engine.errors import InputRefused
from mission.known import KnownValue

Array = NDArray[np.float64]
Keys = tuple[str, ...]
DRAG, FLOW = "drag_factor", "fuel_flow_factor"  # keys of the aircraft file
FACTORS = (DRAG, FLOW)
MOST_DOUBT = 5.0  # of a factor that is told; own choice
_LEAST = 1e-6  # singular value of slopes that tell nothing along some direction
_TIMES_ONLY = (
    "times depend on the fuel flow through the mass alone, and the fuel-flow factor wants a known "
    "fuel"
)
_REMEDY = "a fuel of the whole mission and the time of a climb together tell both"


def doubts(slopes: Array, keys: Keys) -> Array:
    """Percent by which each factor of ``keys`` moves with 1 % in every known; inf where untold.

    ``slopes`` (n, 2) are those of the logarithms of the knowns by those of :data:`FACTORS`.
    """
    chosen = slopes[:, columns(keys)]
    if chosen.shape[0] < len(keys) or np.linalg.svd(chosen, compute_uv=False)[-1] < _LEAST:
        return np.full(len(keys), np.inf)
    return np.asarray(np.sqrt(np.sum(np.linalg.pinv(chosen) ** 2, axis=1)))


def columns(keys: Keys) -> list[int]:
    """Where the factors of ``keys`` stand among :data:`FACTORS`."""
    return [FACTORS.index(key) for key in keys]


def free_by_rule(slopes: Array, values: Sequence[KnownValue], where: str) -> tuple[Keys, str]:
    """The factors that the knowns tell, and why another is held; empty where none is.

    Both where they are told apart, or else the fuel-flow factor where a fuel is known and the drag
    factor where none is. Raises :class:`InputRefused` where the knowns tell nothing.
    """
    has_fuel = any(value.unit == "kg" for value in values)
    if has_fuel and _is_told(slopes, FACTORS):
        return FACTORS, ""
    why = _untold(slopes, FACTORS) if has_fuel else _TIMES_ONLY
    for key in (FLOW, DRAG) if has_fuel else (DRAG,):
        if _is_told(slopes, (key,)):
            return (key,), why
    raise InputRefused(_untold(slopes, (FLOW if has_fuel else DRAG,)), where=where, key="known")


def named_factors(asked: Sequence[str]) -> Keys:
    """The factors asked for, in the order of :data:`FACTORS`; another key is refused."""
    for key in asked:
        if key not in FACTORS:
            raise InputRefused(
                f'"{key}" is no factor of an aircraft file; allowed: {", ".join(FACTORS)}',
                key="--free",
            )
    return tuple(key for key in FACTORS if key in asked)


def refuse_untold(slopes: Array, keys: Keys, where: str) -> None:
    """Refuse factors that the knowns do not tell; ``where`` names the mission's file."""
    if not _is_told(slopes, keys):
        raise InputRefused(_untold(slopes, keys), where=where, key="known")


def _is_told(slopes: Array, keys: Keys) -> bool:
    return bool(np.all(doubts(slopes, keys) <= MOST_DOUBT))


def _untold(slopes: Array, keys: Keys) -> str:
    """Why the knowns do not tell these factors, or not both."""
    if len(keys) == 1:
        most = float(np.max(np.abs(slopes[:, columns(keys)])))
        return (
            f"tells too little of {keys[0]}: 1 % of it moves no known by more than {most:.2f} %; "
            "add the block fuel, say, or the time of a climb"
        )
    if len(slopes) == 1:
        return f"one known tells one factor, and {_REMEDY}"
    by = doubts(slopes, keys)
    if not np.all(np.isfinite(by)):
        return f"these knowns do not tell the two factors apart, and {_REMEDY}"
    moved = " and ".join(f"{key} by {each:.2g} %" for key, each in zip(keys, by, strict=True))
    return (
        "these knowns hardly tell the two factors apart: 1 % of error in each of them would move "
        f"{moved}; {_REMEDY}"
    )
