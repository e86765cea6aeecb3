"""The command ``reach``: how far with what payload, or for how long on station."""

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
    mission_and_aircraft,
    named,
    show,
)
from mission.outputs.units import SYSTEMS, UnitSystem

if TYPE_CHECKING:
    from rich.console import RenderableType


def reach_command(
    mission: MissionName = None,
    engine: Annotated[
        str | None,
        typer.Option(help="Engine file or built-in engine, in place of the mission's."),
    ] = None,
    aircraft: AircraftName = None,
    points: Annotated[int, typer.Option(help="Points of the boundary.")] = 40,
    json: JsonTarget = None,
    units: UnitsName = UnitSystem.METRIC,
) -> None:
    """Find how far a mission goes with what payload, or its radius against time on station."""
    from engine import load_engine
    from mission.questions.reach import reach

    check_json(json)
    written, plane = mission_and_aircraft(mission, aircraft)
    chosen = load_engine(named(engine, written, "engine"))
    found = reach(written, plane, chosen, points=points)

    def screen(width: int) -> RenderableType:
        from mission.outputs.reach_screen import reach_screen

        return reach_screen(found, units=SYSTEMS[units], width=width)

    def record() -> dict[str, Any]:
        from mission.outputs.reach_record import reach_record

        return reach_record(found)

    show(screen, record, json)
    if not found.flown:
        raise typer.Exit(NOT_FLYABLE)
