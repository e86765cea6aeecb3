"""What a command of the terminal gave back, and its JSON."""

from __future__ import annotations

import json
from collections.abc import Callable
from typing import Any, NamedTuple


class Run(NamedTuple):
    """What a command gave back."""

    status: int
    out: str
    err: str


Longlegs = Callable[..., Run]


def read_json(text: str) -> dict[str, Any]:
    """JSON without NaN or infinities in it."""

    def refuse(constant: str) -> None:
        raise AssertionError(f"{constant} is no number")

    record: dict[str, Any] = json.loads(text, parse_constant=refuse)
    return record
