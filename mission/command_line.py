"""The command line ``longlegs``: hands what is asked to its command and ends with a status.

Status 0 flown, 2 input refused, 3 cannot be flown, 1 anything else.
"""

from __future__ import annotations

import gc

import typer

from engine.errors import InputRefused, LonglegsError
from mission.commands.engine_commands import envelope_command, stations_command
from mission.commands.fit_commands import fit_command
from mission.commands.listing import list_command
from mission.commands.mission_commands import compare_command, fly_command
from mission.commands.question_commands import best_command, point_command
from mission.commands.reach_command import reach_command
from mission.commands.shared import NOT_FLYABLE
from mission.errors import CannotBeFlown
from mission.outputs.wording import CAUTION

REFUSED = 2

app = typer.Typer(
    name="longlegs",
    help="Mission fuel burn, time, range and reserves of jet aircraft, from the engine cycle up.",
    epilog=CAUTION,
    add_completion=False,
    no_args_is_help=True,
    rich_markup_mode=None,
    pretty_exceptions_enable=False,
)
app.command("fly")(fly_command)
app.command("compare")(compare_command)
app.command("reach")(reach_command)
app.command("best")(best_command)
app.command("point")(point_command)
app.command("stations")(stations_command)
app.command("envelope")(envelope_command)
app.command("fit")(fit_command)
app.command("list")(list_command)


def main() -> None:
    """Run the command line; what a person can mend ends with a message and status 2."""
    gc.disable()  # looking for cycles, of which there are none, takes an eighth of a short process
    try:
        app(prog_name="longlegs")
    except LonglegsError as refusal:
        typer.echo(_refusal(refusal), err=True)
        cannot_fly = isinstance(refusal, CannotBeFlown)
        raise SystemExit(NOT_FLYABLE if cannot_fly else REFUSED) from None
    finally:
        gc.freeze()  # what is there at the end need not be looked through then either
        gc.enable()


def _refusal(refusal: LonglegsError) -> str:
    """A refusal over a few lines: which file, then which key and what is wrong with it."""
    if not isinstance(refusal, InputRefused):
        return f"Refused: {refusal}"
    head = "Cannot be flown" if isinstance(refusal, CannotBeFlown) else "Refused"
    joint = " " if refusal.what.startswith(("=", "is ")) else ": "
    said = f"{refusal.key}{joint}{refusal.what}" if refusal.key else refusal.what
    notes = "".join(f"\n  {note}" for note in getattr(refusal, "__notes__", ()))
    return (f"{head}: {refusal.where}\n  {said}" if refusal.where else f"{head}: {said}") + notes


if __name__ == "__main__":
    main()
