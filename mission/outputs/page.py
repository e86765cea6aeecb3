"""Pieces of a screen: titles, tables with one thin rule, wrapped notes; and a screen as text."""

from __future__ import annotations

import io
import textwrap
from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from typing import Literal

from rich.box import Box
from rich.console import Console, Group, RenderableType
from rich.padding import Padding
from rich.table import Table
from rich.text import Text

from mission.outputs.wording import CAUTION

NARROWEST, WIDEST = 80, 100  # columns that the screens are laid out for
INDENT = 2  # of what stands under a title
_RULED = Box("    \n    \n ── \n    \n ── \n ── \n    \n    \n")


@dataclass(frozen=True)
class Column:
    """A column: its header, and whether it holds numbers (right-aligned) or words."""

    header: str
    justify: Literal["left", "right"] = "right"
    is_wrapped: bool = False


def words(header: str, *, is_wrapped: bool = True) -> Column:
    """A column of words."""
    return Column(header, "left", is_wrapped)


def ruled_table(columns: Sequence[Column], *, gap: int = 2) -> Table:
    """An empty table: headers over a thin rule, ``gap`` spaces between columns, no frame."""
    table = Table(
        box=_RULED,
        show_edge=False,
        pad_edge=False,
        padding=(0, gap - 1, 0, 0),
        header_style="",
        safe_box=False,
    )
    lines = max(column.header.count("\n") for column in columns)
    for column in columns:
        table.add_column(
            column.header + "\n" * (lines - column.header.count("\n")),
            justify=column.justify,
            no_wrap=not column.is_wrapped,
            overflow="fold",
        )
    return table


def fold(text: str, width: int) -> str:
    """A name on as many lines as it needs, the later ones indented."""
    return textwrap.fill(text, max(width, 8), subsequent_indent="  ", break_on_hyphens=False)


def pairs(rows: Iterable[tuple[str, str]], *, strong: bool = False) -> Table:
    """Label and text, a line each; the text wraps beside its label."""
    table = Table.grid(padding=(0, 2, 0, 0))
    table.add_column(no_wrap=True)
    table.add_column(overflow="fold")
    for label, text in rows:
        table.add_row(label, Text(text, "bold" if strong else ""))
    return table


def section(title: str, *body: RenderableType | None) -> Group:
    """A blank line, a title, and what stands under it."""
    inner = [Padding(item, (0, 0, 0, INDENT), expand=False) for item in body if item is not None]
    return Group(Text(), Text(title, "bold"), *inner)


def apart(tables: Iterable[Table]) -> list[RenderableType]:
    """Tables with an empty line between them."""
    spaced: list[RenderableType] = [item for table in tables for item in (table, Text(" "))]
    return spaced[:-1]


def note(text: str) -> Text:
    """A wrapped remark in a quieter voice."""
    return Text(text, "dim")


def bullets(lines: Iterable[str]) -> Table:
    """A list of sentences, each wrapped beside its dash."""
    return pairs(("-", line) for line in lines)


def caution() -> Group:
    """What stands under every screen."""
    return Group(Text(), note(CAUTION))


def as_text(screen: RenderableType, width: int, *, with_styles: bool = False) -> str:
    """A screen as text of so many columns; with styles only bold and dim are used."""
    console = Console(
        file=io.StringIO(),
        width=width,
        force_terminal=with_styles,
        color_system="standard" if with_styles else None,
        markup=False,
        emoji=False,
        highlight=False,
        legacy_windows=False,
    )
    with console.capture() as captured:
        console.print(screen)
    return "\n".join(line.rstrip() for line in captured.get().splitlines()) + "\n"
