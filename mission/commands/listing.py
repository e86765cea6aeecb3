"""The command that lists what comes with the program."""

from __future__ import annotations

from mission.commands.shared import print_screen


def list_command() -> None:
    """List the built-in missions, aircraft and engines, and the reserve rules."""
    from mission.library import built_in
    from mission.outputs.list_screen import list_screen

    print_screen(lambda width: list_screen(built_in()))
