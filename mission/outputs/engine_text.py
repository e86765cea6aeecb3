"""An engine file as text, from its content."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from pathlib import Path
from typing import Any

import tomli_w

from engine.errors import InputRefused
from engine.options.fitting import Fit
from mission.outputs.files import check_target

_MARK = "# Written by longlegs fit"


def engine_text(content: Mapping[str, Any], remarks: Iterable[str]) -> str:
    """The content of an engine file as TOML, what it comes from in comments above."""
    lines = [_MARK, *(f"# {_on_one_line(remark)}" for remark in remarks)]
    return "\n".join(lines) + "\n\n" + tomli_w.dumps(content)


def fit_remarks(found: Fit, engine: str) -> list[str]:
    """What a fitted engine comes from; ``engine`` names the file that it started from."""
    before, after = found.rms_error(found.before), found.rms_error(found.after)
    return [
        f"from {Path(engine).name}, fitted to {found.points.data_count} data of "
        f"{found.points.line.size} points of {Path(found.points.where).name}",
        f"root mean square of the relative errors: {100.0 * after:.4f} %, "
        f"{100.0 * before:.4f} % before",
        *(
            f"free: {each.parameter.key} = {each.parameter.written(each.value)}, "
            f"{each.parameter.written(each.parameter.start)} before"
            for each in found.parameters
        ),
    ]


def check_engine_target(target: str, option: str) -> None:
    """Refuse a file that cannot be written, or that somebody else wrote."""
    check_target(target, option, ".toml")
    path = Path(target)
    if path.suffix != ".toml":
        raise InputRefused(f'"{target}" is an engine file: let it end in .toml', key=option)
    if path.exists() and not _is_ours(path):
        raise InputRefused(
            f'"{target}" is there already and was not written by longlegs fit; name a new file',
            key=option,
        )


def _is_ours(path: Path) -> bool:
    """Whether a file begins as :func:`engine_text` writes it; only such a one is replaced."""
    with path.open("rb") as file:
        return file.read(len(_MARK)) == _MARK.encode()


def _on_one_line(text: str) -> str:
    return "".join(letter if letter.isprintable() else "?" for letter in text)
