"""What the commands share: options of one name and meaning, files found by name, and printing."""

from __future__ import annotations

import os
import shutil
import sys
from typing import TYPE_CHECKING, Annotated, Any

import typer

from engine.errors import InputRefused
from mission.outputs.units import UnitSystem
from mission.outputs.wording import plain_characters

if TYPE_CHECKING:
    from collections.abc import Callable
    from pathlib import Path

    from rich.console import RenderableType

    from mission.aircraft import Aircraft
    from mission.mission_file import Mission
    from mission.outputs.setting import Setting

NOT_FLYABLE = 3
MissionName = Annotated[
    str | None,
    typer.Argument(help="Mission file or built-in mission; the demo where none is given."),
]
AircraftName = Annotated[
    str | None,
    typer.Option(
        "--aircraft", help="Aircraft file or built-in aircraft, in place of the mission's."
    ),
]
EngineName = Annotated[str, typer.Argument(help="Engine file or built-in engine.")]
OwnDay = Annotated[
    str | None, typer.Option("--day", help='Temperature, "ISA+10" say; ISA, or a table\'s own.')
]
JsonTarget = Annotated[
    str | None,
    typer.Option("--json", metavar="FILE|-", help="Write JSON to a file, or print only it with -."),
]
UnitsName = Annotated[UnitSystem, typer.Option("--units", help="Units of the screen.")]


def mission_and_aircraft(mission: str | None, aircraft: str | None) -> tuple[Mission, Aircraft]:
    """The mission by name, and its aircraft or the one asked for."""
    from mission.aircraft import load_aircraft
    from mission.library import DEMO, find
    from mission.mission_file import load_mission

    written = load_mission(find(DEMO if mission is None else mission, "mission"))
    return written, load_aircraft(named(aircraft, written, "aircraft"))


def named(given: str | None, mission: Mission, kind: Any) -> Path:
    """A file named by an option, from the current folder, or by the mission, from beside it."""
    from pathlib import Path

    from mission.library import find, names_of

    if given is not None:
        return find(given, kind, key=f"--{kind}")
    name = getattr(mission.written, kind)
    if not name:
        raise InputRefused(
            f'is not named; add {kind} = "{names_of(kind)[0]}" say, or give --{kind}',
            where=mission.where,
            key=kind,
        )
    return find(name, kind, folder=Path(mission.where).parent, where=mission.where)


def setting(mission: Mission, aircraft: Aircraft) -> Setting:
    """What a log says of a flight beyond its results."""
    from mission.outputs.setting import Setting

    written = mission.written
    return Setting(
        payload=written.payload,
        headwind=written.headwind,
        engine_count=aircraft.engine_count,
        is_fuel_as_needed=written.fuel.as_needed,
        stores=written.stores,
        air_changes=_air_changes(mission),
        known=written.known,
    )


def _air_changes(mission: Mission) -> str:
    """By what day and wind change on the way, if they do."""
    from mission.plan import legs_of

    airs = {leg.air for leg in legs_of(mission.written)}
    if len(airs) > 1:
        return "leg"
    return "altitude" if any(air.is_table for air in airs) else ""


def read(option: str, parse: Callable[..., float], text: str, *kind: str) -> float:
    """A quantity from the command line; a refusal names the option."""
    try:
        return parse(text, *kind)
    except ValueError as error:
        raise InputRefused(str(error), key=option) from None


def check_json(target: str | None) -> None:
    """Refuse a JSON file that cannot be written before anything is computed."""
    if target not in (None, "-"):
        from mission.outputs.files import check_target

        check_target(str(target))


def show(
    screen: Callable[[int], RenderableType],
    record: Callable[[], dict[str, Any]],
    json: str | None,
) -> None:
    """JSON to its file, or alone to standard output; otherwise the screen."""
    if json is not None:
        from mission.outputs.files import json_text, write_text

        text = json_text(record())
        if json == "-":
            typer.echo(text, nl=False)
            return
        write_text(json, text)
    print_screen(screen)


def print_screen(screen: Callable[[int], RenderableType]) -> None:
    """A screen at the width of the terminal, in bold and dim only where it shows them."""
    from mission.outputs.page import NARROWEST, WIDEST, as_text

    columns = shutil.get_terminal_size((WIDEST, 40)).columns
    width = min(max(columns, NARROWEST), WIDEST)
    has_styles = sys.stdout.isatty() and not os.environ.get("NO_COLOR")
    text = as_text(screen(width), width, with_styles=has_styles)
    typer.echo(plain_characters(text, sys.stdout.encoding or "utf-8"), nl=False)


def engine_options(given: list[str] | None, mission: Mission) -> dict[str, Path]:
    """Engine files by name: those of options, or those that the mission lists."""
    from pathlib import Path

    from mission.library import find

    if given:
        return {name: find(name, "engine", key="--engine") for name in dict.fromkeys(given)}
    names = dict.fromkeys(mission.written.engine_options or (mission.written.engine,))
    if not any(names):
        raise InputRefused(
            'is missing; add engine_options = ["bypass_5", "bypass_10"] say, or give --engine',
            where=mission.where,
            key="engine_options",
        )
    folder = Path(mission.where).parent
    return {
        name: find(name, "engine", folder=folder, where=mission.where, key="engine_options")
        for name in names
    }
