"""The layers of `engine`, by walking its imports; what prints, in the whole house."""

from __future__ import annotations

import ast
import importlib
from pathlib import Path

import pytest
from source_walk import ROOT, imported, parsed, prints, sources

import engine

# A room may import from rooms named before it and from itself.
FLOORS = [
    {"errors", "fuels", "quantities"},
    {"reading"},
    {"atmosphere"},
    {"installation"},
    {"gas"},
    {"parts"},
    {"cycles"},
    {"energy", "matching"},
    {"interface"},
    {"ratings"},
    {"finished", "pods"},
    {"cycle_engine"},
    {"envelope", "scaling"},
    {"options"},
]
ROOF = {"mission/outputs", "mission/commands", "mission/command_line.py"}


def floor_of(room: str) -> int:
    return next(level for level, rooms in enumerate(FLOORS) if room in rooms)


@pytest.mark.parametrize("path", sources("engine"), ids=lambda p: str(p.relative_to(ROOT)))
def test_engine_never_imports_mission(path: Path) -> None:
    assert not {name for name in imported(parsed(path)) if name.split(".")[0] == "mission"}


@pytest.mark.parametrize("path", sources("engine"), ids=lambda p: str(p.relative_to(ROOT)))
def test_rooms_import_downwards(path: Path) -> None:
    room = path.relative_to(ROOT / "engine").parts[0].removesuffix(".py")
    if room == "__init__":
        return  # the face of the package names every room
    here = floor_of(room)
    for name in imported(parsed(path)):
        parts = name.split(".")
        if parts[0] == "engine" and len(parts) > 1:
            there = floor_of(parts[1])
            assert there < here or parts[1] == room, f"{room} imports {name}"


@pytest.mark.parametrize(
    "path",
    [
        path
        for path in [*sources("engine"), *sources("mission")]
        if not any(path.is_relative_to(ROOT / place) for place in ROOF)
    ],
    ids=lambda p: str(p.relative_to(ROOT)),
)
def test_nothing_below_the_roof_prints(path: Path) -> None:
    assert prints(parsed(path)) == []


def test_a_breach_is_seen() -> None:
    assert "mission.aircraft" in imported(ast.parse("def f():\n    from mission import aircraft\n"))
    assert imported(ast.parse("import mission.fly as fly")) == {"mission.fly"}
    assert prints(ast.parse("x = 1\nprint(x)\n")) == [2]
    assert prints(ast.parse("import sys\nsys.stderr.write('x')\n")) == [2]
    assert prints(ast.parse("from rich.console import Console\n")) == [0]


@pytest.mark.parametrize("path", sources("engine"), ids=lambda p: str(p.relative_to(ROOT)))
def test_no_room_is_larger_than_a_room(path: Path) -> None:
    assert len(path.read_text(encoding="utf-8").splitlines()) <= 400


def test_the_face_of_the_package() -> None:
    assert list(engine.__all__) == sorted(engine.__all__)
    for name in engine.__all__:
        assert getattr(engine, name) is not None
    with pytest.raises(AttributeError, match="module 'engine' has no attribute 'nothing'"):
        _ = engine.nothing
    assert importlib.import_module("engine.options.loading").load_engine is engine.load_engine
