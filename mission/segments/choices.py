"""Choices that depend on mass, kept from one plan of a flight to the next.

A plan is laid out, flown, and laid out again with the masses found. A choice is made again only
where the mass it was made for has moved enough to matter, so that planning comes to rest.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field
from typing import Any, TypeVar

MASS_THAT_MATTERS = 1e-3  # relative; a level, a path or a speed hardly moves with less
_Choice = TypeVar("_Choice")


@dataclass(frozen=True)
class _Made:
    """A choice, the mass [kg] it was made for, whose that is, and how far it may move."""

    value: Any
    mass: float
    row: int
    end: int
    matters: float

    def is_stale(self, masses: Mapping[int, tuple[float, float]]) -> bool:
        """Whether the mass has moved since."""
        if self.row not in masses:
            return False
        return abs(masses[self.row][self.end] - self.mass) > self.matters * self.mass


@dataclass
class Choices:
    """What was chosen, by row and subject; ``counts`` what may only become less."""

    counts: dict[tuple[int, str], int] = field(default_factory=dict)
    made: dict[tuple[int, str], _Made] = field(default_factory=dict)
    is_at_rest: bool = True

    def at(
        self,
        row: int,
        subject: str,
        mass: float,
        choose: Callable[[float], _Choice],
        *,
        end: int = 0,
        matters: float = MASS_THAT_MATTERS,
        is_exact: bool = False,
    ) -> _Choice:
        """The choice for the mass [kg] at one end (0, -1) of a row, the earlier one if it holds.

        ``is_exact`` tells that nothing near that mass will do.
        """
        known = self.made.get((row, subject))
        if known is None:
            known = _Made(choose(mass), mass, row, end, matters)
            self.made[row, subject] = known
        chosen: _Choice = known.value
        return chosen

    @property
    def has_any(self) -> bool:
        """Whether anything was chosen."""
        return bool(self.made)

    def fit(self, masses: Mapping[int, tuple[float, float]]) -> None:
        """Forget what was chosen for masses that a flight has shown to be others."""
        stale = [key for key, made in self.made.items() if made.is_stale(masses)]
        for key in stale:
            del self.made[key]
        self.is_at_rest = not stale
