"""Finding what a person names: a file, or a profile that comes with the program.

Light on purpose: ``longlegs list`` reads profiles as plain TOML and loads no model.
"""

from __future__ import annotations

import difflib
import tomllib
from collections.abc import Iterable
from dataclasses import dataclass
from functools import lru_cache
from importlib.resources import files
from pathlib import Path
from typing import Any, Literal

from engine.errors import InputRefused

Kind = Literal["mission", "aircraft", "engine"]
DEMO = "coast_watch"
_SUFFIX = ".toml"
_PLURAL = {"mission": "missions", "aircraft": "aircraft", "engine": "engines"}


@dataclass(frozen=True)
class Profile:
    """A built-in file: the name it is called by, what it is, and its one-line note."""

    name: str
    kind: Kind
    note: str
    path: Path


@lru_cache(maxsize=1)
def built_in() -> tuple[Profile, ...]:
    """Every built-in profile, by kind and name: missions first, then aircraft, then engines."""
    found = []
    for entry in files("profiles").iterdir():
        if entry.name.endswith(_SUFFIX):
            content = tomllib.loads(entry.read_text(encoding="utf-8"))
            name = entry.name.removesuffix(_SUFFIX)
            found.append(
                Profile(name, kind_of(content), str(content.get("note", "")), Path(str(entry)))
            )
    order = list(_PLURAL)
    return tuple(sorted(found, key=lambda p: (order.index(p.kind), _by_numbers(p.name))))


def kind_of(content: dict[str, Any]) -> Kind:
    """What a file is about, from the keys that only one kind has."""
    if "segment" in content:
        return "mission"
    return "aircraft" if "masses" in content else "engine"


def _by_numbers(name: str) -> tuple[bool, str, int]:
    """Order in which ``bypass_5`` stands before ``bypass_10`` and words before numbers."""
    stem, _, last = name.rpartition("_")
    return (last.isdigit(), stem, int(last)) if last.isdigit() else (False, name, 0)


def names_of(kind: Kind) -> list[str]:
    """Names of the built-in profiles of one kind."""
    return [profile.name for profile in built_in() if profile.kind == kind]


def find(
    name: str, kind: Kind, *, folder: Path | None = None, where: str = "", key: str = ""
) -> Path:
    """The file that a name stands for.

    A file below ``folder`` (the current one where none is given), with or without ``.toml``, or
    else the built-in profile of that name and kind. Raises :class:`InputRefused` listing what
    there is; ``where`` and ``key`` say who named it.
    """
    base = Path() if folder is None else folder
    for candidate in (base / name, base / f"{name}{_SUFFIX}"):
        if candidate.is_file():
            return candidate
    short = name.removesuffix(_SUFFIX)
    for profile in built_in():
        if profile.name == short and profile.kind == kind:
            return profile.path
    raise InputRefused(_nothing_found(name, kind, base), where=where, key=key or kind)


def _nothing_found(name: str, kind: Kind, base: Path) -> str:
    """Why a name cannot be resolved, and what might have been meant."""
    other = next((p for p in built_in() if p.name == name.removesuffix(_SUFFIX)), None)
    known = names_of(kind)
    if (base / name).is_dir():
        reason = f'"{name}" is a folder, not a file'
    elif other is not None:
        article = "an" if other.kind[0] in "ae" else "a"
        reason = f'"{name}" is {article} {other.kind}, and a name of {_article(kind)} is wanted'
    else:
        reason = f'"{name}" is neither a file nor a built-in {kind}'
    near = difflib.get_close_matches(name, [*known, *_files_in(base)], n=1)
    hint = f'; did you mean "{near[0]}"? Built-in' if near else "; built-in"
    return f"{reason}{hint} {_PLURAL[kind]}: {', '.join(known) or 'none'}"


def _article(kind: Kind) -> str:
    return f"an {kind}" if kind[0] in "ae" else f"a {kind}"


def _files_in(folder: Path) -> Iterable[str]:
    """Names of the TOML files of a folder, for a suggestion."""
    try:
        return sorted(entry.name for entry in folder.glob(f"*{_SUFFIX}"))
    except OSError:
        return []
