"""Where published values come from: every test under tests/published must say it."""

from __future__ import annotations

import re
from collections.abc import Iterable
from pathlib import Path
from typing import Any

# Author, title and place, then how it was come by: read in the source, recalled, or own arithmetic.
SOURCE = re.compile(r"^\S.{15,}; (grade )?(read|from memory|own)\b.*$", re.DOTALL)


def without_source(items: Iterable[Any], folder: Path) -> list[str]:
    """Names of the collected tests in ``folder`` that do not say where their values come from."""
    found = []
    for item in items:
        if folder not in Path(item.path).parents:
            continue
        texts = [str(mark.args[0]) for mark in item.iter_markers("source") if mark.args]
        if not texts or not all(SOURCE.match(text) for text in texts):
            found.append(item.nodeid)
    return found
