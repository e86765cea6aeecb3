"""Reading what a person wrote: TOML checked by a pydantic model, refused in plain words."""

from __future__ import annotations

import difflib
import tomllib
from collections.abc import Callable
from pathlib import Path
from typing import Any, ClassVar, TypeVar, get_args

from pydantic import BaseModel, ConfigDict, ValidationError

from engine.errors import InputRefused
from engine.quantities import si_unit_of

_LARGEST_FILE = 1_000_000  # bytes; the longest sensible input is a hundredth of this
_Model = TypeVar("_Model", bound=BaseModel)


class Table(BaseModel):
    """A table of an input file: unknown keys are refused, numbers are not made from text.

    ``example`` is a line of it, shown where the whole table is missing and no key is a must.
    """

    example: ClassVar[str] = ""
    # Built when first asked for: an engine file of one kind needs none of the others' tables.
    model_config = ConfigDict(extra="forbid", frozen=True, strict=True, defer_build=True)


def read_text(path: Path, kind: str, most_bytes: int, *, remedy: str = "") -> str:
    """Text of a file in UTF-8; ``kind`` says what it is, ``remedy`` what to do if it is missing.

    Raises :class:`InputRefused` naming the file and what is wrong.
    """
    where = str(path)
    try:
        if path.is_dir():
            raise InputRefused("is a folder, not a file", where=where)
        if (size := path.stat().st_size) > most_bytes:
            raise InputRefused(
                f"is {size / 1e6:.1f} MB; {kind} has at most {most_bytes / 1e6:.0f} MB",
                where=where,
            )
        return path.read_bytes().decode("utf-8-sig")
    except FileNotFoundError:
        raise InputRefused(f"there is no such file{remedy}", where=where) from None
    except UnicodeDecodeError:
        raise InputRefused("is not a text file in UTF-8", where=where) from None
    except OSError as error:
        raise InputRefused(f"cannot be read: {error.strerror}", where=where) from None


def read_toml(path: Path) -> dict[str, Any]:
    """The content of a TOML file; :class:`InputRefused` names the file and what is wrong."""
    where = str(path)
    text = read_text(path, "an input file", _LARGEST_FILE)
    try:
        content = tomllib.loads(text)
    except tomllib.TOMLDecodeError as error:
        raise InputRefused(f"is not TOML: {error}", where=where) from None
    except RecursionError:
        raise InputRefused("nests its lists or tables too deep", where=where) from None
    if not content:
        raise InputRefused("is empty; start from a copy of a built-in profile", where=where)
    return content


def check(content: dict[str, Any], model: type[_Model], where: str) -> _Model:
    """``content`` as a model; the first wrong key is named with what is allowed there."""
    try:
        return model.model_validate(content)
    except ValidationError as error:
        first = _most_telling(error)
        key = _key(first["loc"], content)
        raise InputRefused(_in_words(first, model), where=where, key=key) from None


def _most_telling(error: ValidationError) -> Any:
    """An unknown key says more than the missing one that it was meant to be."""
    details = error.errors(include_url=False)
    unknown = [d for d in details if d["type"] == "extra_forbidden"]
    return (unknown or details)[0]


def _key(place: tuple[int | str, ...], content: dict[str, Any]) -> str:
    """Dotted key; an entry of a list is counted from one and named where it has a name."""
    text, at = "", content
    for part in place:
        if not isinstance(at, list | dict):
            break
        if isinstance(part, int):
            entry = at[part] if isinstance(at, list) and part < len(at) else None
            name = entry.get("name") if isinstance(entry, dict) else None
            text += f" {part + 1}" + (f' "{name}"' if name else "") + ":"
            at = entry if entry is not None else {}
        else:
            if isinstance(at, dict) and part not in at and part == at.get("kind"):
                continue  # the discriminator of a union, not a key that anybody wrote
            text += ("" if not text else " " if text.endswith(":") else ".") + part
            at = at.get(part, {}) if isinstance(at, dict) else {}
    return text.removesuffix(":")


def _no_kind(discriminator: str, model: type[BaseModel], place: tuple[int | str, ...]) -> str:
    """An entry that does not say of which kind it is, with the kinds that there are."""
    entry = _below(model, place)
    tags = [
        tag
        for each in (entry if isinstance(entry, tuple) else (entry,))
        for tag in get_args(each.model_fields[discriminator.strip("'")].annotation)
    ]
    return f"{discriminator} is missing; allowed: {', '.join(map(repr, tags))}"


def _missing(model: type[BaseModel], place: tuple[int | str, ...]) -> str:
    """What is missing; of a table, what has to stand in it."""
    table = _below(model, place)
    if not (isinstance(table, type) and issubclass(table, Table)):
        return "is missing"
    musts = [name for name, info in table.model_fields.items() if info.is_required()]
    if not table.example and not musts:
        return "is missing"
    held = f"{table.example}, say" if table.example else f"at least {', '.join(musts)}"
    return f"is missing; it is a table with {held}"


def _wrong_kind(discriminator: str, tag: str, expected_tags: str) -> str:
    """An entry that says it is of a kind that there is not, with the nearest one there is."""
    kinds = [kind.strip().strip("'") for kind in expected_tags.split(",")]
    close = difflib.get_close_matches(tag.lower(), kinds, n=1, cutoff=0.5)
    hint = f"; did you mean {close[0]}?" if close else ""
    return f"{discriminator} = {tag!r}; allowed: {expected_tags}{hint}"


# What pydantic found, by its kind of error, said to the person who wrote the file.
_WORDS: dict[str, Callable[[Any], str]] = {
    "value_error": lambda found: str(found["ctx"]["error"]),
    "union_tag_invalid": lambda found: _wrong_kind(**found["ctx"]),
    "literal_error": lambda found: f"= {found['input']!r}; allowed: {found['ctx']['expected']}",
    "float_type": lambda found: f"= {found['input']!r}; a bare number belongs here",
    "int_type": lambda found: f"= {found['input']!r}; a bare whole number belongs here",
    "too_short": lambda found: f"= {found['input']!r}; at least one entry belongs here",
    "list_type": lambda found: f"= {found['input']!r}; a list of tables belongs here",
    "model_type": lambda found: f"= {found['input']!r}; a table belongs here",
    "dict_type": lambda found: f"= {found['input']!r}; a table belongs here",
}


_BOUNDS = ("greater_than", "greater_than_equal", "less_than", "less_than_equal")


def _in_words(found: Any, model: type[BaseModel]) -> str:
    """One entry of a ValidationError as a sentence."""
    if found["type"] == "missing":
        return _missing(model, found["loc"])
    if found["type"] == "union_tag_not_found":
        return _no_kind(found["ctx"]["discriminator"], model, found["loc"])
    if found["type"] in _WORDS:
        return _WORDS[found["type"]](found)
    if found["type"] != "extra_forbidden":
        message = found["msg"].replace("Input should be", "it should be")
        is_quantity = isinstance(found["input"], str) and found["type"] in _BOUNDS
        unit = si_unit_of(found["input"]) if is_quantity else ""
        return f"= {found['input']!r}; {message} {unit}".rstrip()
    allowed = _keys_beside(model, found["loc"])
    key = str(found["loc"][-1])
    close = difflib.get_close_matches(key, allowed, n=1)
    close = close or [name for name in allowed if name.startswith(key)]
    hint = f"; did you mean {close[0]}?" if close else "."
    return f"unknown key{hint} Allowed here: {', '.join(allowed)}"


def _keys_beside(model: Any, place: tuple[int | str, ...]) -> list[str]:
    """Keys that the table holding ``place`` allows."""
    for part in place[:-1]:
        found = _member(model, part)
        if found is None:
            break
        model = found
    return sorted(getattr(model, "model_fields", {}))


def _below(model: Any, place: tuple[int | str, ...]) -> Any:
    """The model, or the tuple of models, at a place; None where no table belongs there."""
    for part in place:
        model = _member(model, part)
    return model or None


def _member(model: Any, part: int | str) -> Any:
    """The model below one step of an error's place, looking through lists, unions and options."""
    if isinstance(part, str) and hasattr(model, "model_fields"):
        info = model.model_fields.get(part)
        return None if info is None else _models_in(info.annotation)
    candidates = model if isinstance(model, tuple) else (model,)
    if isinstance(part, int):
        return model
    for candidate in candidates:
        tag = getattr(candidate, "model_fields", {}).get("kind")
        if tag is not None and part in getattr(tag.annotation, "__args__", ()):
            return candidate
    return None


def _models_in(annotation: Any) -> Any:
    """The model, or the tuple of models, that an annotation holds."""
    found: list[Any] = []

    def look(item: Any) -> None:
        if isinstance(item, type) and issubclass(item, BaseModel):
            found.append(item)
        for inner in getattr(item, "__args__", ()):
            look(inner)

    look(annotation)
    return found[0] if len(found) == 1 else tuple(found)


def defaults_used(model: BaseModel, prefix: str = "") -> list[str]:
    """Every value that the file did not state, as ``key = value``, tables followed inwards."""
    lines: list[str] = []
    for name in type(model).model_fields:
        value = getattr(model, name)
        key = f"{prefix}{name}"
        if isinstance(value, BaseModel):
            lines += defaults_used(value, f"{key}.")
        elif name not in model.model_fields_set and value not in (None, "", (), [], {}):
            lines.append(f"{key} = {value}")
    return lines
