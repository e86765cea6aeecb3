"""Commands about one engine: its stations at a flight condition, and its whole envelope."""

from __future__ import annotations

from typing import TYPE_CHECKING, Annotated

import typer

from engine.errors import InputRefused
from mission.commands.shared import (
    NOT_FLYABLE,
    EngineName,
    JsonTarget,
    OwnDay,
    check_json,
    read,
    show,
)

if TYPE_CHECKING:
    from pathlib import Path

    import numpy as np
    from numpy.typing import NDArray

    from engine.envelope import Envelope
    from engine.interface import Engine
    from mission.commands.grids import Reach


def stations_command(
    engine: EngineName,
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
            "windmilling, or another that the engine has; with a thrust the ceiling, by default "
            "maximum_continuous."
        ),
    ] = None,
    day: OwnDay = None,
    json: JsonTarget = None,
) -> None:
    """Show an engine at one flight condition."""
    from engine import load_engine
    from engine.envelope import WINDMILLING
    from engine.quantities import parse_quantity
    from mission.commands.grids import condition_at, day_of
    from mission.library import find
    from mission.outputs.records import stations_record
    from mission.outputs.stations_screen import (
        Question,
        flag_in_words,
        is_short_of_thrust,
        stations_screen,
    )

    check_json(json)
    height = read("--altitude", parse_quantity, altitude, "altitude")
    wanted = None if thrust is None else read("--thrust", parse_quantity, thrust, "force")
    chosen = load_engine(find(engine, "engine"))
    condition = condition_at(height, mach, day_of(chosen, day))
    ceiling = _rating(rating, chosen, has_thrust=wanted is not None)
    if ceiling == WINDMILLING:
        state = chosen.windmilling(condition)
    else:
        state = chosen.at(condition, rating=ceiling, net_thrust=wanted)
    question = Question(
        chosen.name, ceiling, wanted, chosen.coverage, chosen.doubts.get(ceiling, "")
    )

    show(
        lambda width: stations_screen(state, question, chosen.pod, width=width),
        lambda: stations_record(state, chosen, rating=ceiling),
        json,
    )
    if json == "-" and (flag := flag_in_words(state, question)):
        typer.echo(flag, err=True)
    if is_short_of_thrust(state):
        raise typer.Exit(NOT_FLYABLE)


def envelope_command(
    engine: EngineName,
    rating: Annotated[
        str | None,
        typer.Option(help="Rating or idle of the screen; climb where none is given."),
    ] = None,
    day: OwnDay = None,
    altitudes: Annotated[
        str | None, typer.Option(help='Pressure altitudes between commas: "0 ft, FL100, FL350".')
    ] = None,
    machs: Annotated[
        str | None, typer.Option(help='Flight Mach numbers between commas: "0, 0.4, 0.8".')
    ] = None,
    to_altitude: Annotated[
        str | None, typer.Option(help="Where the altitudes end if not listed; FL450 if not said.")
    ] = None,
    to_mach: Annotated[
        float | None,
        typer.Option(help="Where the Mach numbers end if not listed; 0.9 if not said."),
    ] = None,
    csv: Annotated[
        str | None,
        typer.Option(
            "--csv",
            metavar="FILE",
            help="Write every rating, idle, windmilling and share of thrust on a finer grid, for "
            "an engine of kind tabulated.",
        ),
    ] = None,
    json: JsonTarget = None,
) -> None:
    """Show an engine's thrust and fuel flow over altitude and Mach number."""
    from engine import load_engine
    from engine.envelope import envelope
    from mission.commands.grids import Reach
    from mission.library import find
    from mission.outputs.envelope_record import envelope_record
    from mission.outputs.envelope_screen import envelope_screen
    from mission.outputs.files import check_target

    check_json(json)
    if csv is not None:
        check_target(csv, "--csv", ".csv")
    path = find(engine, "engine")
    chosen = load_engine(path)
    reach = Reach.of(chosen, day, to_altitude, to_mach, altitudes, machs)
    found = envelope(chosen, *reach.screen, reach.day, levels=(_level(rating, chosen),))
    written = ""
    if csv is not None:
        _refuse_own_points(csv, path)
        written = _write_table(chosen, reach, csv)
    show(
        lambda width: envelope_screen(found, written=written, width=width),
        lambda: envelope_record(found),
        json,
    )


def _rating(rating: str | None, engine: Engine, *, has_thrust: bool) -> str:
    """The rating asked for, or the one that bounds a thrust; windmilling is asked for like one."""
    from engine.envelope import WINDMILLING

    if rating is None:
        if not has_thrust:
            raise InputRefused('give --thrust "9 kN" or --rating cruise, say', key="--rating")
        return "maximum_continuous"
    if has_thrust:
        return _one_of(rating, engine.ratings, " with --thrust")
    if rating == WINDMILLING:
        return rating  # where a table has no such rows the engine says what it wants
    unlit = (WINDMILLING,) if engine.is_known_unlit else ()
    return _one_of(rating, (*engine.ratings, *engine.idles, *unlit))


def _one_of(rating: str, known: tuple[str, ...], beside: str = "") -> str:
    """A rating by name, dashes read as underscores."""
    name = rating.replace("-", "_")
    if name not in known:
        raise InputRefused(f'"{rating}" is none{beside} of {", ".join(known)}', key="--rating")
    return name


def _level(rating: str | None, engine: Engine) -> str:
    """The rating or idle asked for, climb or else the first there is where none is."""
    if rating is not None:
        return _one_of(rating, (*engine.ratings, *engine.idles))
    return "climb" if "climb" in engine.ratings else (*engine.ratings, *engine.idles)[0]


def _refuse_own_points(csv: str, path: Path) -> None:
    """Keep the points that an engine is read from."""
    import tomllib
    from pathlib import Path

    points = tomllib.loads(path.read_text(encoding="utf-8-sig")).get("points")
    if points is not None and (path.parent / points).resolve() == Path(csv).resolve():
        raise InputRefused(f'"{csv}" holds the points that {path.name} is read from', key="--csv")


def _refuse_no_fuel(table: Envelope) -> None:
    """Refuse to write what is no table of a tabulated engine: one that is lit burns fuel."""
    import numpy as np

    from engine.envelope import WINDMILLING

    lit = table.without(WINDMILLING)
    burns_none = np.any(lit.is_answered & (lit.fuel_flow <= 0.0), axis=(1, 2))
    for i in np.flatnonzero(burns_none)[:1].tolist():
        raise InputRefused(
            f"{table.engine} burns nothing at {lit.levels[i]}, and in a table an engine that is "
            "lit burns fuel: no tabulated engine can be made of it; name its own file instead",
            key="--csv",
        )


def _write_table(engine: Engine, reach: Reach, csv: str) -> str:
    """The table of a tabulated engine, written, and what went to the file in words.

    Where windmilling alone would make holes in the grid it is left out as a whole.
    """
    from engine.envelope import WINDMILLING, default_levels, envelope
    from mission.outputs.envelope_record import envelope_csv
    from mission.outputs.files import write_text

    table = envelope(engine, *reach.table, reach.day, levels=default_levels(engine))
    _refuse_no_fuel(table)
    lit, remark = table.without(WINDMILLING), ""
    unlit_lost = int((~table.is_answered).sum() - (~lit.is_answered).sum())
    if unlit_lost and lit.is_answered.all():
        table = lit
        remark = f" Windmilling is left out: {unlit_lost:,} of its points have no answer."
    write_text(csv, envelope_csv(table), "--csv")
    return _written(table.is_answered, csv) + remark


def _written(is_answered: NDArray[np.bool_], csv: str) -> str:
    """What went to the file, and what could not."""
    lost = int((~is_answered).sum())
    left_out = (
        f"; {lost:,} without an answer are left out, so that the grid has holes and no tabulated "
        "engine can be made of it: narrow it"
        if lost
        else ""
    )
    return f"Written to {csv}: {is_answered.size - lost:,} points{left_out}."
