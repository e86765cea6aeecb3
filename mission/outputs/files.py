"""Writing a file so that a reader never meets half of it."""

from __future__ import annotations

import json
import os
from pathlib import Path
from typing import Any

from engine.errors import InputRefused

_INPUTS = (".toml", ".csv")  # missions, aircraft, engines; the points of a table


def json_text(record: dict[str, Any]) -> str:
    """A record as JSON; a value that is no number raises ValueError, it is never written."""
    return json.dumps(record, allow_nan=False, ensure_ascii=False, indent=1) + "\n"


def check_target(target: str, option: str = "--json", suffix: str = ".json") -> None:
    """Refuse a file that cannot be written, or that may be an input, before anything is computed.

    ``option`` names the target and ``suffix`` is how such files end.
    """
    path = Path(target)
    if path.is_dir():
        raise InputRefused(f'"{target}" is a folder; name a file in it', key=option)
    if path.suffix in _INPUTS and path.suffix != suffix:
        raise InputRefused(
            f'"{target}" would stand in the place of an input file; let it end in {suffix}',
            key=option,
        )
    if path.exists() and not os.access(path, os.W_OK):
        raise InputRefused(f'"{target}" may not be written', key=option)
    if not path.absolute().parent.is_dir():
        raise InputRefused(
            f'there is no folder "{path.absolute().parent}" to write "{path.name}" in', key=option
        )


def write_text(target: str, text: str, option: str = "--json") -> None:
    """Write to a temporary name beside the target, then rename; the old file stays until then."""
    try:
        _write(Path(os.path.realpath(target)), text)
    except OSError as error:
        reason = f'"{target}" cannot be written: {error.strerror or error}'
        raise InputRefused(reason, key=option) from None


def _write(path: Path, text: str) -> None:
    if path.exists() and not path.is_file():  # a device or a pipe is written to, not replaced
        path.write_text(text, encoding="utf-8")
        return
    temporary = path.with_name(f".{path.name}.{os.getpid()}.tmp")
    try:
        with temporary.open("x", encoding="utf-8") as file:
            file.write(text)
        temporary.replace(path)
    finally:
        temporary.unlink(missing_ok=True)
