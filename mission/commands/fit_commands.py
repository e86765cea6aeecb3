"""The command that fits: an engine to points of it, or an aircraft to one known flight."""

from __future__ import annotations

from typing import TYPE_CHECKING, Annotated, Any

import typer

from engine.errors import InputRefused
from mission.commands.shared import NOT_FLYABLE, JsonTarget, check_json, named, show

if TYPE_CHECKING:
    from pathlib import Path

    from mission.library import Kind


def fit_command(
    file: Annotated[
        str,
        typer.Argument(
            metavar="ENGINE|AIRCRAFT",
            help="Engine file or built-in engine; with --flight an aircraft file or built-in "
            "aircraft.",
        ),
    ],
    write: Annotated[
        str | None,
        typer.Option(metavar="FILE", help="New engine file, ending in .toml; needed for engines."),
    ] = None,
    points: Annotated[
        str | None,
        typer.Option(
            metavar="FILE",
            help="CSV of points to meet: pressure_altitude_m, mach, rating, net_thrust_n, "
            "fuel_flow_kg_per_s and, where it is needed, temperature_deviation_k; where the "
            "rating is empty the thrust is asked for. Without it a brochure is written out as "
            "the cycle that its four numbers make.",
        ),
    ] = None,
    flight: Annotated[
        str | None,
        typer.Option(
            metavar="MISSION",
            help="Mission file with a table of what is known of it, [known]: finds the drag_factor "
            "and fuel_flow_factor of the aircraft file with which it comes out.",
        ),
    ] = None,
    engine: Annotated[
        str | None,
        typer.Option(help="With --flight: engine file or built-in engine, not the mission's."),
    ] = None,
    free: Annotated[
        list[str] | None,
        typer.Option(
            metavar="KEY",
            help="Key of the file that may change, efficiencies.fan or drag_factor say; may be "
            "given more than once. Without it those that the data tell best.",
        ),
    ] = None,
    json: JsonTarget = None,
) -> None:
    """Fit an engine to points of thrust and fuel flow, or an aircraft to a known flight."""
    check_json(json)
    if flight is not None:
        _refuse_beside_flight({"--write": write, "--points": points})
        _fit_aircraft(file, flight, engine, free, json)
        return
    if engine is not None:
        raise InputRefused("goes with --flight, for an aircraft", key="--engine")
    path, content = _file_of_kind(file, "engine")
    if write is None:
        raise InputRefused("is missing; name the new engine file, fitted.toml say", key="--write")
    _fit_engine(content, path, write, points, free, json)


def _refuse_beside_flight(given: dict[str, str | None]) -> None:
    for option, value in given.items():
        if value is not None:
            raise InputRefused(
                "goes with an engine, and --flight fits an aircraft: ask for one of the two",
                key=option,
            )


_INSTEAD = {
    "engine": "an aircraft is fitted with --flight and the mission file of a known flight, an "
    "engine without",
    "aircraft": "--flight fits an aircraft; an engine is fitted with --points and --write",
}


def _file_of_kind(name: str, kind: Kind) -> tuple[Path, dict[str, Any]]:
    """The file that is to be fitted and its content; refused where it is of another kind."""
    from engine.reading import read_toml
    from mission.library import built_in, find, kind_of

    other = {profile.name: profile.kind for profile in built_in() if profile.kind != kind}
    try:
        path = find(name, kind)
    except InputRefused as refusal:
        if name.removesuffix(".toml") in other:
            refusal.add_note(_INSTEAD[kind])
        raise
    content = read_toml(path)
    if (found := kind_of(content)) != kind:
        article = "a" if found == "mission" else "an"
        raise InputRefused(f"is {article} {found} file: {_INSTEAD[kind]}", where=str(path))
    return path, content


def _fit_aircraft(
    name: str, flight: str, engine: str | None, free: list[str] | None, json: str | None
) -> None:
    """The factors of an aircraft with which a known mission comes out."""
    from engine import load_engine
    from mission.aircraft import load_aircraft
    from mission.library import find
    from mission.mission_file import load_mission
    from mission.outputs.fit_flight_record import fit_flight_record
    from mission.outputs.fit_flight_screen import answer, fit_flight_screen
    from mission.questions.fit_flight import fit_flight

    path, _ = _file_of_kind(name, "aircraft")
    written = load_mission(find(flight, "mission", key="--flight"))
    power = load_engine(named(engine, written, "engine"))
    found = fit_flight(written, load_aircraft(path), power, free or ())
    show(
        lambda width: fit_flight_screen(found, width=width), lambda: fit_flight_record(found), json
    )
    if not found.flown:
        if json == "-":
            typer.echo("\n".join(answer(found)), err=True)
        raise typer.Exit(NOT_FLYABLE)


def _fit_engine(
    content: dict[str, Any],
    path: Path,
    write: str,
    points: str | None,
    free: list[str] | None,
    json: str | None,
) -> None:
    """An engine fitted to points, and written as a new file."""
    from pathlib import Path

    from engine.options.fit_points import read_fit_points
    from engine.options.fitting import fit
    from mission.outputs.engine_text import check_engine_target, engine_text, fit_remarks
    from mission.outputs.files import write_text
    from mission.outputs.fit_record import fit_record
    from mission.outputs.fit_screen import fit_screen

    check_engine_target(write, "--write")
    if points is None:
        _write_out(content, path, write, free, json)
        return
    found = fit(content, str(path), read_fit_points(Path(points)), free or ())
    write_text(write, engine_text(found.content, fit_remarks(found, str(path))), "--write")
    show(
        lambda width: fit_screen(found, written=write, width=width),
        lambda: fit_record(found, written=write),
        json,
    )


def _write_out(
    content: dict[str, Any], path: Path, write: str, free: list[str] | None, json: str | None
) -> None:
    """A brochure as the engine file that its four numbers make."""
    from engine.options.fitting import cycle_content
    from mission.outputs.engine_text import engine_text
    from mission.outputs.files import write_text
    from mission.outputs.fit_record import written_record
    from mission.outputs.fit_screen import written_screen

    if free or content.get("kind") != "brochure":
        raise InputRefused(
            "is missing; give a file of points to meet: only a brochure is written out without",
            key="--points",
        )
    whole = cycle_content(content, str(path))
    remark = f"from {path.name}: the cycle that its four numbers make"
    write_text(write, engine_text(whole, [remark]), "--write")
    show(
        lambda _: written_screen(whole, written=write),
        lambda: written_record(whole, written=write),
        json,
    )
