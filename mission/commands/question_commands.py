"""Commands that ask about an aircraft with its engine: one point, the best levels and speeds."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Annotated, Any

import typer

from engine.errors import InputRefused
from mission.commands.shared import (
    NOT_FLYABLE,
    AircraftName,
    JsonTarget,
    UnitsName,
    check_json,
    read,
    show,
)
from mission.outputs.units import SYSTEMS, UnitSystem

if TYPE_CHECKING:
    import numpy as np
    from numpy.typing import NDArray
    from rich.console import RenderableType

    from engine.interface import Engine
    from mission.air import Air
    from mission.aircraft import Aircraft

_MASSES = 5  # looked at where none is given
_STRONGEST_WIND = 100.0  # m/s, as in a mission file
Named = Annotated[
    str | None,
    typer.Argument(
        help="Mission file or built-in mission, for its aircraft, engine, day and wind; the demo's "
        "aircraft and engine where none is given."
    ),
]
InPlaceOfEngine = Annotated[
    str | None, typer.Option("--engine", help="Engine file or built-in engine, in its place.")
]
Day = Annotated[
    str | None,
    typer.Option(
        "--day", help='Temperature, "ISA+10" say; that of a mission named, else ISA or a table\'s.'
    ),
]
Rating = Annotated[str, typer.Option(help="Rating that bounds the thrust of level flight.")]


@dataclass(frozen=True)
class _Asked:
    """What a question is about, and the mission's air where a mission is named."""

    aircraft: Aircraft
    engine: Engine
    air: Air | None


def point_command(
    altitude: Annotated[str, typer.Option(help='Pressure altitude: "35000 ft" or FL350.')],
    mach: Annotated[float, typer.Option(help="Flight Mach number.")],
    mass: Annotated[str, typer.Option(help='Mass of the aircraft, "24 t" say.')],
    mission: Named = None,
    aircraft: AircraftName = None,
    engine: InPlaceOfEngine = None,
    day: Day = None,
    rating: Rating = "cruise",
    json: JsonTarget = None,
    units: UnitsName = UnitSystem.METRIC,
) -> None:
    """Show an aircraft at one altitude, Mach number and mass: drag, thrust, climb, turn, limits."""
    from engine.quantities import parse_quantity
    from mission.commands.grids import condition_at
    from mission.outputs.point_screen import fault_sentences, point_screen
    from mission.questions.faults import faults
    from mission.questions.point import point

    check_json(json)
    height = read("--altitude", parse_quantity, altitude, "altitude")
    asked = _asked(mission, aircraft, engine)
    if not mach > 0.0:
        raise InputRefused(f"= {mach:g} carries nothing; it is above 0", key="--mach")
    deviation = float(_air(asked, day).deviation_at(height))
    found = point(
        asked.aircraft,
        asked.engine,
        condition_at(height, mach, deviation),
        _mass(mass, asked.aircraft),
        rating=_rating(rating, asked.engine),
    )

    def record() -> dict[str, Any]:
        from mission.outputs.point_record import point_record

        return point_record(found)

    show(lambda _: point_screen(found, units=SYSTEMS[units]), record, json)
    if faults(found):
        if json == "-":
            for sentence in fault_sentences(found, SYSTEMS[units]):
                typer.echo(f"Cannot be flown: {sentence}", err=True)
        raise typer.Exit(NOT_FLYABLE)


def best_command(
    mission: Named = None,
    aircraft: AircraftName = None,
    engine: InPlaceOfEngine = None,
    mass: Annotated[
        list[str] | None,
        typer.Option(
            help='Mass, "24 t" say, once for each; five from greatest zero-fuel to greatest '
            "take-off mass where none is given."
        ),
    ] = None,
    cost_index: Annotated[
        str | None,
        typer.Option(help='Cost of time over cost of fuel, "30 kg/min" say: speeds of least cost.'),
    ] = None,
    headwind: Annotated[
        str | None, typer.Option(help='Headwind, "40 kt" say; that of a mission named, else none.')
    ] = None,
    day: Day = None,
    rating: Rating = "cruise",
    json: JsonTarget = None,
    units: UnitsName = UnitSystem.METRIC,
) -> None:
    """Find the best cruise levels and speeds of an aircraft against its mass."""
    from engine.quantities import parse_quantity
    from mission.questions.best import best_cruise
    from mission.steady.level_flight import Subject

    check_json(json)
    asked = _asked(mission, aircraft, engine)
    index = 0.0
    if cost_index is not None:
        index = read("--cost-index", parse_quantity, cost_index, "mass flow")
        if index < 0.0:
            raise InputRefused(f'= "{cost_index}" is below 0', key="--cost-index")
    subject = Subject(asked.aircraft, asked.engine, _air(asked, day, headwind))
    found = best_cruise(
        subject, _masses(mass, asked.aircraft), index, rating=_rating(rating, asked.engine)
    )

    def screen(width: int) -> RenderableType:
        from mission.outputs.best_screen import best_screen

        return best_screen(found, units=SYSTEMS[units], width=width)

    def record() -> dict[str, Any]:
        from mission.outputs.best_record import best_record

        return best_record(found)

    show(screen, record, json)
    if not found.best.speed.is_flyable.any():
        raise typer.Exit(NOT_FLYABLE)


def _asked(mission: str | None, aircraft: str | None, engine: str | None) -> _Asked:
    """The aircraft and the engine asked for, or those of the mission, or of the demo."""
    from engine import load_engine
    from mission.aircraft import load_aircraft
    from mission.commands.shared import mission_and_aircraft, named
    from mission.legs import air_of
    from mission.library import find

    if aircraft is not None and engine is not None and mission is None:
        return _Asked(
            load_aircraft(find(aircraft, "aircraft", key="--aircraft")),
            load_engine(find(engine, "engine", key="--engine")),
            None,
        )
    written, plane = mission_and_aircraft(mission, aircraft)
    whole = written.written
    return _Asked(
        plane,
        load_engine(named(engine, written, "engine")),
        None if mission is None else air_of(whole.day, whole.headwind, whole.air),
    )


def _air(asked: _Asked, day: str | None, headwind: str | None = None) -> Air:
    """The mission's air, with the day and the headwind of the options in their place."""
    from engine.quantities import day_text, parse_quantity
    from mission.air import Air
    from mission.commands.grids import day_of

    known = Air() if asked.air is None else asked.air
    count = len(known.pressure_altitude)
    days, winds = known.temperature_deviation, known.tailwind
    if day is not None or asked.air is None:
        days = (day_of(asked.engine, day),) * count
    for each in days:
        day_of(asked.engine, day_text(each))  # refuses another day than a table's
    if headwind is not None:
        wind = read("--headwind", parse_quantity, headwind, "speed")
        if abs(wind) > _STRONGEST_WIND:
            most = f"{-_STRONGEST_WIND:g} to {_STRONGEST_WIND:g} m/s"
            raise InputRefused(f'= "{headwind}" is outside {most}', key="--headwind")
        winds = (-wind,) * count
    return Air(days, winds, known.pressure_altitude)


def _mass(text: str, aircraft: Aircraft) -> float:
    """A mass that the aircraft can have."""
    from engine.quantities import parse_quantity

    mass = read("--mass", parse_quantity, text, "mass")
    low, high = aircraft.operating_empty_mass, aircraft.maximum_ramp_mass
    if not low <= mass <= high:
        raise InputRefused(
            f'= "{text}" is outside {low:,.0f} kg, operating empty, to {high:,.0f} kg, greatest '
            f"ramp mass, of {aircraft.name}",
            key="--mass",
        )
    return mass


def _masses(given: list[str] | None, aircraft: Aircraft) -> NDArray[np.float64]:
    """The masses asked for, or some from greatest zero-fuel to greatest take-off mass."""
    import numpy as np

    if given:
        return np.unique([_mass(text, aircraft) for text in given])
    return np.linspace(aircraft.maximum_zero_fuel_mass, aircraft.maximum_take_off_mass, _MASSES)


def _rating(rating: str, engine: Engine) -> str:
    """A rating of the engine by name, dashes read as underscores."""
    name = rating.replace("-", "_")
    if name not in engine.ratings:
        raise InputRefused(
            f'"{rating}" is none of {", ".join(engine.ratings)}, which {engine.name} has',
            key="--rating",
        )
    return name
