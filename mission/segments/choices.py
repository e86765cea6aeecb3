"""Choices that depend on mass, kept from one plan of a flight to the next.

A plan is laid out, flown, and laid out again with the masses found. A choice is made again only
where the mass it was made for has moved enough to matter, so that planning comes to rest. The mass
found answers to the choice: from two of both a secant tells the mass that will be found again.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field
from typing import Any, TypeVar

MASS_THAT_MATTERS = 1e-3  # relative; a level, a path or a speed hardly moves with less
_STEEPEST = 0.5  # of the mass found over the mass chosen for, that a secant is believed
_Choice = TypeVar("_Choice")


@dataclass(frozen=True)
class _Made:
    """A choice, the mass [kg] it was made for, whose that is, and how far it may move."""

    value: Any
    mass: float
    row: int
    end: int
    matters: float

    def found(self, masses: Mapping[int, tuple[float, float]]) -> float:
        """The mass [kg] as it was flown."""
        return masses[self.row][self.end] if self.row in masses else self.mass

    def is_stale(self, masses: Mapping[int, tuple[float, float]]) -> bool:
        """Whether the mass has moved since."""
        return abs(self.found(masses) - self.mass) > self.matters * self.mass


@dataclass
class Choices:
    """What was chosen, by row and subject.

    ``tried`` are masses chosen for, and found then [kg]; ``counts`` what may only become less.
    """

    counts: dict[tuple[int, str], int] = field(default_factory=dict)
    made: dict[tuple[int, str], _Made] = field(default_factory=dict)
    tried: dict[tuple[int, str], list[tuple[float, float]]] = field(default_factory=dict)
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
            mass = _next_mass(self.tried.get((row, subject), [])) or mass
            known = _Made(choose(mass), mass, row, end, matters)
            self.made[row, subject] = known
        chosen: _Choice = known.value
        return chosen

    def no_more(self, row: int, subject: str, count: int) -> int:
        """A count, or the least that it has been in earlier plans."""
        least = min(count, self.counts.get((row, subject), count))
        self.counts[row, subject] = least
        return least

    @property
    def has_any(self) -> bool:
        """Whether anything was chosen."""
        return bool(self.made)

    def fit(self, masses: Mapping[int, tuple[float, float]]) -> None:
        """Forget what was chosen for masses that a flight has shown to be others."""
        stale = [key for key, made in self.made.items() if made.is_stale(masses)]
        for key in stale:
            made = self.made.pop(key)
            self.tried.setdefault(key, []).append((made.mass, made.found(masses)))
        self.is_at_rest = not stale


def _next_mass(tried: list[tuple[float, float]]) -> float | None:
    """The mass [kg] that will be found again, on the line through the last two; None without."""
    if len(tried) < 2 or tried[-1][0] == tried[-2][0]:
        return None
    (_, before), (mass, found) = tried[-2:]
    slope = (found - before) / (mass - tried[-2][0])
    return mass + (found - mass) / (1.0 - slope) if abs(slope) < _STEEPEST else None
