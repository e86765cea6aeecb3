"""Commands about missions: fly one, and compare engines on one."""

from __future__ import annotations

from typing import TYPE_CHECKING, Annotated, Any

import typer

from mission.commands.shared import (
    NOT_FLYABLE,
    AircraftName,
    JsonTarget,
    MissionName,
    UnitsName,
    check_json,
    engine_options,
    mission_and_aircraft,
    named,
    setting,
    show,
)
from mission.outputs.units import SYSTEMS, UnitSystem

if TYPE_CHECKING:
    from rich.console import RenderableType


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

    check_json(json)
    written, plane = mission_and_aircraft(mission, aircraft)
    flight = fly(written, plane, load_engine(named(engine, written, "engine")))

    def screen(width: int) -> RenderableType:
        from mission.outputs.flight_log import flight_log

        return flight_log(
            flight,
            setting(written, plane),
            units=SYSTEMS[units],
            width=width,
            with_steps=steps,
        )

    def record() -> dict[str, Any]:
        from mission.outputs.records import flight_record

        return flight_record(flight)

    show(screen, record, json)
    if flight.failure is not None:
        if json == "-":
            from mission.outputs.failure import failure_headline

            reason = failure_headline(flight.failure, SYSTEMS[units])
            typer.echo(f"Cannot be flown: {reason}", err=True)
        raise typer.Exit(NOT_FLYABLE)


def compare_command(
    mission: MissionName = None,
    engine: Annotated[
        list[str] | None,
        typer.Option(
            help="Engine option, once for each, in place of the mission's engine_options."
        ),
    ] = None,
    aircraft: AircraftName = None,
    json: JsonTarget = None,
    units: UnitsName = UnitSystem.METRIC,
) -> None:
    """Rank engine options by block fuel on one mission."""
    from engine import load_engine
    from mission.comparison import compare
    from mission.outputs.records import comparison_record

    check_json(json)
    written, plane = mission_and_aircraft(mission, aircraft)
    engines = {name: load_engine(path) for name, path in engine_options(engine, written).items()}
    comparison = compare(written, plane, engines)

    def screen(width: int) -> RenderableType:
        from mission.outputs.comparison_screen import comparison_screen

        return comparison_screen(
            comparison, setting(written, plane), units=SYSTEMS[units], width=width
        )

    show(screen, lambda: comparison_record(comparison), json)
    if comparison.best is None:
        raise typer.Exit(NOT_FLYABLE)
