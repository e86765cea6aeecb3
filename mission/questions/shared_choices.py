"""Choices of plans that many flights share: each made for masses a little apart.

What is chosen at a mass (a level, where a climb ends, a path) is chosen once for many flights where
it comes out alike at masses 3 % apart, and within 0.2 % of a flight's own mass where not. A path,
of which no two are alike, is that of the nearest of masses 3 % apart. What is counted at a mass is
counted at each flight's own.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, field, replace
from math import exp, floor, isinf, log
from typing import Any

from mission.segments.choices import MASS_THAT_MATTERS, Choices

_APART = 0.03  # of mass, between choices that are compared
_CLOSEST = 0.125  # of that, where they differ
Masses = Mapping[int, tuple[float, float]]
Token = tuple[object, ...]


@dataclass(frozen=True)
class Asked:
    """A question that a plan has asked, after which answers, and what came of it.

    It is asked for the mass at an end of a row; of ``one_mass`` [kg] where mass does not matter.
    """

    after: Token
    row: int
    subject: str
    end: int
    choose: Callable[[float], Any]
    is_exact: bool
    one_mass: float | None
    answer: Any = None


@dataclass
class SharedChoices(Choices):
    """Answers by question and mass, and what the plan that is being laid has asked so far.

    A question depends on the answers before it: what they were is part of it.
    """

    answers: dict[tuple[object, ...], Any] = field(default_factory=dict)
    asked: list[Asked] = field(default_factory=list)
    about: Token = ()

    def begin(self, about: Token) -> None:
        """Another plan, which differs from others by ``about`` before anything is chosen."""
        self.asked, self.about = [], about

    @property
    def token(self) -> Token:
        """What tells the plan laid since :meth:`begin` from any other."""
        return (*self.about, *(_token(asked.answer) for asked in self.asked))

    def at(
        self,
        row: int,
        subject: str,
        mass: float,
        choose: Callable[[float], Any],
        *,
        end: int = 0,
        matters: float = MASS_THAT_MATTERS,
        is_exact: bool = False,
    ) -> Any:
        """The choice for the mass [kg] at one end (0, -1) of a row."""
        one_mass = mass if isinf(matters) else None
        question = Asked(self.token, row, subject, end, choose, is_exact, one_mass)
        answer = self._answer(question, mass)
        self.asked.append(replace(question, answer=answer))
        return answer

    def no_more(self, row: int, subject: str, count: int) -> int:
        """The count: members have no earlier plans in common."""
        return count

    def suit(self, asked: Sequence[Asked], masses: Masses) -> bool:
        """Whether every question of a plan has the same answer at other masses."""
        return all(
            each.row in masses
            and _token(self._answer(each, masses[each.row][each.end])) == _token(each.answer)
            for each in asked
        )

    def _answer(self, asked: Asked, mass: float) -> Any:
        if asked.one_mass is not None:
            return self._made(asked, asked.one_mass)
        if asked.is_exact:
            return self._made(asked, mass)
        place = log(mass) / _APART
        low, high = float(floor(place)), floor(place) + 1.0
        answer = self._made(asked, exp(_APART * round(place)))
        if answer is not None and not isinstance(answer, float):
            return answer
        while True:
            below, above = (self._made(asked, exp(_APART * end)) for end in (low, high))
            if below == above or high - low <= _CLOSEST:
                return below if place - low <= high - place else above
            middle = 0.5 * (low + high)
            low, high = (low, middle) if place <= middle else (middle, high)

    def _made(self, asked: Asked, mass: float) -> Any:
        key = (asked.after, asked.row, asked.subject, mass)
        if key not in self.answers:
            self.answers[key] = asked.choose(mass)
        return self.answers[key]


def _token(answer: Any) -> object:
    """What an answer is told by: itself, or where it is kept."""
    return answer if answer is None or isinstance(answer, int | float) else id(answer)
