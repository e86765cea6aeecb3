"""The demand that published checks say where their values come from."""

from __future__ import annotations

from dataclasses import dataclass, field
from pathlib import Path

import pytest
from sources import without_source

FOLDER = Path("/here/tests/published")


@dataclass
class Mark:
    args: tuple[str, ...]


@dataclass
class Item:
    path: Path
    marks: list[Mark] = field(default_factory=list)
    nodeid: str = "a test"

    def iter_markers(self, name: str) -> list[Mark]:
        assert name == "source"
        return self.marks


@pytest.mark.parametrize(
    "text",
    [
        "A. Author, A Title, p. 3; grade read",
        "A. Author, A Title, p. 3; grade from memory (inputs), answers own",
        "A. Author, A Title, p. 3; own: regression",
    ],
)
def test_a_source_with_its_grade_is_enough(text: str) -> None:
    assert without_source([Item(FOLDER / "test_a.py", [Mark((text,))])], FOLDER) == []


@pytest.mark.parametrize(
    "marks",
    [[], [Mark(())], [Mark(("A. Author, A Title, p. 3",))], [Mark(("; grade read",))],
     [Mark(("A. Author, A Title, p. 3; grade guessed",))]],
    ids=["none", "empty", "no grade", "no title", "unknown grade"],
)  # fmt: skip
def test_anything_less_is_found(marks: list[Mark]) -> None:
    assert without_source([Item(FOLDER / "deep" / "test_a.py", marks)], FOLDER) == ["a test"]


def test_other_folders_are_left_alone() -> None:
    assert without_source([Item(Path("/here/tests/engine/test_a.py"))], FOLDER) == []
