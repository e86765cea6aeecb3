"""The floors of `mission`, by walking its imports."""

from __future__ import annotations

import ast
from graphlib import CycleError, TopologicalSorter

import pytest
from source_walk import imports_of, module_name, parsed, sources

# A room is a module or a package. It may import from rooms of the floors before it and from itself.
FLOORS = [
    {"air", "airspeeds", "errors", "library", "polars", "solving"},
    {"aerodynamics", "aircraft_file"},
    {"aircraft"},
    {"forces"},
    {"paths"},
    {"march"},
    {"steady"},
    {"field.result", "reserves.items"},
    {"reserves.pricing", "reserves.registry"},
    {"results"},
    {"boundaries", "known", "segments"},
    {"legs", "reserves.tables"},
    {"mission_file", "reserves.laying"},
    {"plan"},
    {"coverage", "field", "fuel_plan", "warnings"},
    {"breguet", "free", "limits", "logbook", "reserves.carriage"},
    {"margins"},
    {"flight"},
    {"comparison", "questions"},
    {"outputs"},
    {"commands"},
    {"command_line"},
]
# Upward, or round in a circle, for the name of a type alone: nothing is loaded. A segment's table
# and its laying stand in files of their own, so that few missions load the laying.
FOR_TYPES = {
    ("mission.aerodynamics", "mission.aircraft"),
    ("mission.segments.best_climb", "mission.segments.climb"),
    ("mission.segments.climbing", "mission.segments.climb"),
    ("mission.segments.driftdown", "mission.segments.failure"),
    ("mission.segments.levels", "mission.segments.cruise"),
    ("mission.segments.steps", "mission.segments.cruise"),
}
Pairs = set[tuple[str, str]]
ALL = {module_name(path): path for path in sources("mission")}
# The face of the package names every room; the reserves stand on several floors.
FILES = {name: path for name, path in ALL.items() if name not in ("mission", "mission.reserves")}
ROOMS = {name: level for level, rooms in enumerate(FLOORS) for name in rooms}


def own(names: frozenset[str]) -> set[str]:
    """The modules of `mission` among imported names, without a package that is only the way."""

    def is_way(name: str) -> bool:
        inside = {other for other in names if other.rpartition(".")[0] == name}
        return bool(inside) and inside <= FILES.keys()

    return {name for name in names if name in FILES and not is_way(name)}


def room_of(module: str) -> str:
    """The room that a module is or stands in; the smallest one named."""
    name = module.removeprefix("mission.")
    while name and name not in ROOMS:
        name = name.rpartition(".")[0]
    assert name, f"{module} stands on no floor: put it on one"
    return name


def breaches(pairs: Pairs) -> list[str]:
    """Imports that do not go down."""
    rooms = [(room_of(a), room_of(b), f"{a} imports {b}") for a, b in sorted(pairs)]
    return [said for a, b, said in rooms if a != b and ROOMS[b] >= ROOMS[a]]


def circle(pairs: Pairs) -> list[str]:
    """Modules that import each other in a circle; empty if none do."""
    graph: dict[str, set[str]] = {}
    for name, other in pairs:
        graph.setdefault(name, set()).add(other)
    try:
        TopologicalSorter(graph).prepare()
    except CycleError as found:
        return list(found.args[1])
    return []


@pytest.fixture(scope="module")
def walked() -> tuple[Pairs, Pairs]:
    """Who imports whom: to run, wherever the import stands; and for types alone."""
    to_run: Pairs = set()
    for_types: Pairs = set()
    for name, path in FILES.items():
        found = imports_of(parsed(path))
        to_run |= {(name, other) for other in own(found.loaded | found.called)}
        for_types |= {(name, other) for other in own(found.typed)}
    return to_run, for_types


def test_rooms_import_downwards(walked: tuple[Pairs, Pairs]) -> None:
    to_run, for_types = walked
    assert breaches(to_run) == []
    assert breaches(for_types - FOR_TYPES) == []


def test_no_modules_import_each_other(walked: tuple[Pairs, Pairs]) -> None:
    """Not even inside functions; for types only where it is named."""
    to_run, for_types = walked
    assert circle(to_run) == []
    assert circle(to_run | (for_types - FOR_TYPES)) == []


def test_every_exception_is_one(walked: tuple[Pairs, Pairs]) -> None:
    to_run, for_types = walked
    assert for_types >= FOR_TYPES
    assert [pair for pair in FOR_TYPES if not circle(to_run | {pair})] == []


def test_every_floor_is_lived_on() -> None:
    assert sorted({room_of(name) for name in FILES}) == sorted(ROOMS)


def test_no_room_is_larger_than_a_room() -> None:
    lines = {name: len(path.read_text(encoding="utf-8").splitlines()) for name, path in ALL.items()}
    assert {name: count for name, count in lines.items() if count > 400} == {}


def test_a_breach_is_seen() -> None:
    down, up = ("mission.flight", "mission.plan"), ("mission.plan", "mission.flight")
    aside = ("mission.comparison", "mission.questions.best")
    assert breaches({down}) == []
    assert breaches({down, up, aside}) == [
        "mission.comparison imports mission.questions.best",
        "mission.plan imports mission.flight",
    ]
    assert circle({down}) == []
    assert set(circle({down, up})) == {"mission.flight", "mission.plan"}
    found = imports_of(
        ast.parse(
            "from typing import TYPE_CHECKING\n"
            "from mission.polars import kinds\n"
            "if TYPE_CHECKING:\n    from mission.aircraft import Aircraft\n"
            "def f():\n    from mission.segments import AnySegment\n"
        )
    )
    assert own(found.loaded) == {"mission.polars.kinds"}
    assert own(found.typed) == {"mission.aircraft"}
    assert own(found.called) == {"mission.segments"}
