"""The one tree of errors of the program; each is also the nearest builtin.

Every message names what failed, its value, what was allowed and what to try. Upper layers add
context with ``add_note`` and re-raise.
"""

from __future__ import annotations


class LonglegsError(Exception):
    """Root of every error the program raises on purpose."""


class InputRefused(LonglegsError, ValueError):  # noqa: N818  says what happened, not that it did
    """Something a person wrote cannot be used: exit status 2.

    ``where`` names the file, ``key`` the entry in it; both may be empty while the error is still
    close to the number that caused it and are filled in by the layer that knows them.
    """

    def __init__(self, what: str, *, where: str = "", key: str = "") -> None:
        super().__init__(what, where, key)
        self.what = what
        self.where = where
        self.key = key

    def __reduce__(self) -> tuple[object, ...]:
        return (_rebuilt, (type(self), self.what, self.where, self.key), self.__dict__)

    def __str__(self) -> str:
        place = ": ".join(part for part in (self.where, self.key) if part)
        return f"{place}: {self.what}" if place else self.what


def _rebuilt(kind: type[InputRefused], what: str, where: str, key: str) -> InputRefused:
    return kind(what, where=where, key=key)


class CycleCannotRun(InputRefused):
    """The design point of an engine has no physical answer: exit status 2."""


class OutOfRange(LonglegsError, ValueError):  # noqa: N818  as above
    """A state lies outside the range in which a property function may be believed."""
