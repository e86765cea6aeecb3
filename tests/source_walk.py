"""What the program's own files import and print, read off their syntax."""

from __future__ import annotations

import ast
from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path

ROOT = Path(__file__).parents[1]
LOUD = {"rich", "logging", "warnings", "typer", "click"}
_FUNCTIONS = (ast.FunctionDef, ast.AsyncFunctionDef, ast.Lambda)


@dataclass(frozen=True)
class Imports:
    """Dotted names that a file imports: as it is loaded, inside functions, for its types alone."""

    loaded: frozenset[str]
    called: frozenset[str]
    typed: frozenset[str]


def sources(package: str) -> list[Path]:
    """All files of a package."""
    return sorted((ROOT / package).rglob("*.py"))


def parsed(path: Path) -> ast.Module:
    return ast.parse(path.read_text(encoding="utf-8"))


def module_name(path: Path) -> str:
    """The dotted name that a file is imported by."""
    parts = path.relative_to(ROOT).with_suffix("").parts
    return ".".join(parts[:-1] if parts[-1] == "__init__" else parts)


def named(node: ast.AST) -> set[str]:
    """Dotted names of an import statement: modules, and what is taken from them."""
    if isinstance(node, ast.Import):
        return {alias.name for alias in node.names}
    if isinstance(node, ast.ImportFrom):
        assert node.level == 0, "imports are absolute here"
        return {f"{node.module}.{alias.name}" for alias in node.names} | {str(node.module)}
    return set()


def imported(tree: ast.AST) -> set[str]:
    """Dotted names of all that a tree imports, wherever the import stands."""
    return {name for node in ast.walk(tree) for name in named(node)}


def imports_of(tree: ast.AST) -> Imports:
    """The same by when they are needed."""
    found: dict[str, set[str]] = {"loaded": set(), "called": set(), "typed": set()}
    for kind, node in _statements(tree, "loaded"):
        found[kind] |= named(node)
    return Imports(**{kind: frozenset(names) for kind, names in found.items()})


def _statements(tree: ast.AST, kind: str) -> Iterator[tuple[str, ast.AST]]:
    """Every node below a tree with the kind of import that it would be."""
    for node in ast.iter_child_nodes(tree):
        here = kind
        if isinstance(node, _FUNCTIONS):
            here = "called"
        elif isinstance(node, ast.If) and ast.unparse(node.test) == "TYPE_CHECKING":
            here = "typed"
        yield here, node
        yield from _statements(node, here)


def prints(tree: ast.AST) -> list[int]:
    """Lines that write to a terminal or a log."""
    lines = []
    for node in ast.walk(tree):
        if isinstance(node, ast.Call) and isinstance(node.func, ast.Name):
            lines += [node.lineno] if node.func.id in ("print", "input", "breakpoint") else []
        if isinstance(node, ast.Attribute) and node.attr in ("stdout", "stderr"):
            lines.append(node.lineno)
    names = {name.split(".")[0] for name in imported(tree)}
    return lines + ([0] if names & LOUD else [])
