"""The command line ``longlegs``: reads what is asked, prints, and ends with a status.

Status 0 flown, 2 input refused, 3 cannot be flown, 1 anything else. Heavy rooms are loaded inside
the commands, so that ``--help`` answers at once.
"""

from __future__ import annotations

import gc
import os
import shutil
import sys
from typing import TYPE_CHECKING, Annotated, Any

import typer

from engine.errors import InputRefused, LonglegsError
from mission.outputs.units import SYSTEMS, UnitSystem
from mission.outputs.wording import CAUTION, plain_characters

if TYPE_CHECKING:
    from collections.abc import Callable
    from pathlib import Path

    from rich.console import RenderableType

    from mission.aircraft import Aircraft
    from mission.mission_file import Mission
    from mission.outputs.setting import Setting

REFUSED, NOT_FLYABLE = 2, 3
_UNLIMITED = "windmilling"  # asked for like a rating, though it is none

app = typer.Typer(
    name="longlegs",
    help="Mission fuel burn, time, range and reserves of jet aircraft, from the engine cycle up.",
    epilog=CAUTION,
    add_completion=False,
    no_args_is_help=True,
    rich_markup_mode=None,
    pretty_exceptions_enable=False,
)

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
JsonTarget = Annotated[
    str | None,
    typer.Option("--json", metavar="FILE|-", help="Write JSON to a file, or print only it with -."),
]
UnitsName = Annotated[UnitSystem, typer.Option("--units", help="Units of the screen.")]


@app.command("fly")
def fly_command(
    mission: MissionName = None,
    engine: Annotated[
        str | None,
        typer.Option(help="Engine file or built-in engine, in place of the mission's."),
    ] = None,
    aircraft: AircraftName = None,
    steps: Annotated[
        bool, typer.Option("--steps", help="Show every step of every segment.")
    ] = False,
    json: JsonTarget = None,
    units: UnitsName = UnitSystem.METRIC,
) -> None:
    """Fly a mission: fuel, time, reserves and margins."""
    from engine import load_engine
    from mission.flight import fly

    _check_json(json)
    written, plane = _mission_and_aircraft(mission, aircraft)
    flight = fly(written, plane, load_engine(_engine_path(engine, written)))

    def screen(width: int) -> RenderableType:
        from mission.outputs.flight_log import flight_log

        return flight_log(
            flight,
            _setting(written, plane),
            units=SYSTEMS[units],
            width=width,
            with_steps=steps,
        )

    def record() -> dict[str, Any]:
        from mission.outputs.records import flight_record

        return flight_record(flight)

    _show(screen, record, json)
    if flight.failure is not None:
        if json == "-":
            from mission.outputs.failure import failure_headline

            reason = failure_headline(flight.failure, SYSTEMS[units])
            typer.echo(f"Cannot be flown: {reason}", err=True)
        raise typer.Exit(NOT_FLYABLE)


@app.command("compare")
def compare_command(
    mission: MissionName = None,
    engine: Annotated[
        list[str] | None,
        typer.Option(
            help="Engine option, once for each; all built-in engines where none is given."
        ),
    ] = None,
    aircraft: AircraftName = None,
    json: JsonTarget = None,
    units: UnitsName = UnitSystem.METRIC,
) -> None:
    """Rank engine options by block fuel on one mission."""
    from engine import load_engine
    from mission.comparison import compare
    from mission.library import find, names_of
    from mission.outputs.records import comparison_record

    _check_json(json)
    written, plane = _mission_and_aircraft(mission, aircraft)
    options = list(dict.fromkeys(engine or names_of("engine")))
    engines = {name: load_engine(find(name, "engine", key="--engine")) for name in options}
    comparison = compare(written, plane, engines)

    def screen(width: int) -> RenderableType:
        from mission.outputs.comparison_screen import comparison_screen

        return comparison_screen(
            comparison, _setting(written, plane), units=SYSTEMS[units], width=width
        )

    _show(screen, lambda: comparison_record(comparison), json)
    if comparison.best is None:
        raise typer.Exit(NOT_FLYABLE)


@app.command("stations")
def stations_command(
    engine: Annotated[str, typer.Argument(help="Engine file or built-in engine.")],
    altitude: Annotated[str, typer.Option(help='Pressure altitude: "35000 ft" or FL350.')],
    mach: Annotated[float, typer.Option(help="Flight Mach number.")],
    thrust: Annotated[
        str | None,
        typer.Option(help='Net thrust of one engine, "9 kN" say, held below the rating.'),
    ] = None,
    rating: Annotated[
        str | None,
        typer.Option(
            help="take_off, maximum_continuous, climb, cruise, flight_idle, ground_idle or "
            "windmilling; with a thrust the ceiling, by default maximum_continuous."
        ),
    ] = None,
    day: Annotated[str, typer.Option(help='Temperature, "ISA+10" say.')] = "ISA",
    json: JsonTarget = None,
) -> None:
    """Show an engine at one flight condition."""
    from engine import flight_condition, load_engine
    from engine.quantities import parse_day, parse_quantity
    from mission.library import find
    from mission.outputs.records import stations_record
    from mission.outputs.stations_screen import (
        Question,
        flag_in_words,
        is_short_of_thrust,
        stations_screen,
    )

    _check_json(json)
    condition = flight_condition(
        _read("--altitude", parse_quantity, altitude, "altitude"),
        mach,
        _read("--day", parse_day, day),
    )
    wanted = None if thrust is None else _read("--thrust", parse_quantity, thrust, "force")
    ceiling = _rating(rating, has_thrust=wanted is not None)
    chosen = load_engine(find(engine, "engine"))
    if ceiling == _UNLIMITED:
        state = chosen.windmilling(condition)
    else:
        state = chosen.at(condition, rating=ceiling, net_thrust=wanted)
    question = Question(chosen.name, ceiling, wanted)

    _show(
        lambda width: stations_screen(state, question, width=width),
        lambda: stations_record(state, engine=chosen.name, rating=ceiling),
        json,
    )
    if json == "-" and (flag := flag_in_words(state, question)):
        typer.echo(flag, err=True)
    if is_short_of_thrust(state):
        raise typer.Exit(NOT_FLYABLE)


@app.command("list")
def list_command() -> None:
    """List the built-in missions, aircraft and engines."""
    from mission.library import built_in
    from mission.outputs.list_screen import list_screen

    _print(lambda width: list_screen(built_in()))


def main() -> None:
    """Run the command line; what a person can mend ends with a message and status 2."""
    gc.disable()  # looking for cycles, of which there are none, takes an eighth of a short process
    try:
        app(prog_name="longlegs")
    except LonglegsError as refusal:
        typer.echo(_refusal(refusal), err=True)
        raise SystemExit(REFUSED) from None
    finally:
        gc.freeze()  # what is there at the end need not be looked through then either
        gc.enable()


def _refusal(refusal: LonglegsError) -> str:
    """A refusal over a few lines: which file, then which key and what is wrong with it."""
    if not isinstance(refusal, InputRefused):
        return f"Refused: {refusal}"
    joint = " " if refusal.what.startswith(("=", "is ")) else ": "
    said = f"{refusal.key}{joint}{refusal.what}" if refusal.key else refusal.what
    notes = "".join(f"\n  {note}" for note in getattr(refusal, "__notes__", ()))
    return (f"Refused: {refusal.where}\n  {said}" if refusal.where else f"Refused: {said}") + notes


def _mission_and_aircraft(mission: str | None, aircraft: str | None) -> tuple[Mission, Aircraft]:
    """The mission by name, and its aircraft or the one asked for."""
    from mission.aircraft import load_aircraft
    from mission.library import DEMO, find
    from mission.mission_file import load_mission

    written = load_mission(find(DEMO if mission is None else mission, "mission"))
    return written, load_aircraft(_named(aircraft, written, "aircraft"))


def _engine_path(engine: str | None, mission: Mission) -> Path:
    return _named(engine, mission, "engine")


def _named(given: str | None, mission: Mission, kind: Any) -> Path:
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


def _setting(mission: Mission, aircraft: Aircraft) -> Setting:
    from mission.outputs.setting import Setting

    written = mission.written
    return Setting(
        payload=written.payload,
        headwind=written.headwind,
        engine_count=aircraft.engine_count,
        is_fuel_as_needed=written.fuel.as_needed,
    )


def _read(option: str, parse: Callable[..., float], text: str, *kind: str) -> float:
    """A quantity from the command line; a refusal names the option."""
    try:
        return parse(text, *kind)
    except ValueError as error:
        raise InputRefused(str(error), key=option) from None


def _rating(rating: str | None, *, has_thrust: bool) -> str:
    """The rating asked for, or the one that bounds a thrust."""
    from engine.interface import IDLES, RATINGS

    if rating is None:
        if not has_thrust:
            raise InputRefused('give --thrust "9 kN" or --rating cruise, say', key="--rating")
        return "maximum_continuous"
    allowed = RATINGS if has_thrust else (*RATINGS, *IDLES, _UNLIMITED)
    name = rating.replace("-", "_")
    if name not in allowed:
        beside = " with --thrust" if has_thrust else ""
        raise InputRefused(f'"{rating}" is none{beside} of {", ".join(allowed)}', key="--rating")
    return name


def _check_json(target: str | None) -> None:
    if target not in (None, "-"):
        from mission.outputs.files import check_target

        check_target(str(target))


def _show(
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
    _print(screen)


def _print(screen: Callable[[int], RenderableType]) -> None:
    """A screen at the width of the terminal, in bold and dim only where it shows them."""
    from mission.outputs.page import NARROWEST, WIDEST, as_text

    columns = shutil.get_terminal_size((WIDEST, 40)).columns
    width = min(max(columns, NARROWEST), WIDEST)
    has_styles = sys.stdout.isatty() and not os.environ.get("NO_COLOR")
    text = as_text(screen(width), width, with_styles=has_styles)
    typer.echo(plain_characters(text, sys.stdout.encoding or "utf-8"), nl=False)


if __name__ == "__main__":
    main()
