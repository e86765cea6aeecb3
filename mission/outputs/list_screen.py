"""What comes with the program, by kind."""

from __future__ import annotations

from collections.abc import Sequence

from rich.console import Group, RenderableType
from rich.text import Text

from mission.library import DEMO, Profile
from mission.outputs.page import note, pairs, section
from mission.reserves.registry import RULES

_TITLES = {"mission": "Missions", "aircraft": "Aircraft", "engine": "Engines"}


def list_screen(profiles: Sequence[Profile]) -> Group:
    """Names and their one-line notes."""
    parts: list[RenderableType] = [Text("What comes with longlegs", "bold")]
    for kind, title in _TITLES.items():
        rows = [(p.name, p.note) for p in profiles if p.kind == kind]
        if rows:
            parts.append(section(title, pairs(rows)))
    parts.append(section("Reserve rules", pairs((r.name, r.title) for r in RULES.values())))
    parts += [
        Text(),
        note(
            f"Missions, aircraft and engines are invented. `longlegs fly` flies {DEMO}; a name "
            "stands for its file. A rule is what a mission's reserves.rule names, a summary."
        ),
    ]
    return Group(*parts)
