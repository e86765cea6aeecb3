"""The part of a log on take-off and go-around: runway needed, and climbs against the rule."""

from __future__ import annotations

from rich.console import Group
from rich.table import Table

from mission.field.result import ClimbCheck, FieldPerformance
from mission.outputs.page import WIDEST, Column, bullets, note, pairs, ruled_table, section, words
from mission.outputs.units import Scale, Units, number
from mission.outputs.wording import day_in_words

_LENGTHS = (
    "Field length after Torenbeek's handbook formulas, from memory: transports on a dry level "
    "runway in still air; allow 15 % either way, a judgement of ours."
)
_CLIMBS = (
    "Gradients are steady, at lift equal to weight; left out are the rudder against a one-sided "
    "thrust, the air that spills around an engine that is out, and the time to spool up."
)


def field_sections(field: FieldPerformance | None, units: Units, width: int) -> list[Group]:
    """One section, or none where the flight has no take-off."""
    if field is None:
        return []
    return [
        section(
            "Take-off and go-around",
            pairs(_answers(field, units)),
            _climbs(field.climbs, units, width) if field.climbs else None,
            bullets(field.remarks) if field.remarks else None,
            note(f"{_LENGTHS} {_CLIMBS}" if field.climbs else _LENGTHS),
        )
    ]


def _answers(field: FieldPerformance, units: Units) -> list[tuple[str, str]]:
    mass = Scale.of(units.gross_mass(field.take_off_mass), [field.take_off_mass])
    height = number(field.pressure_altitude / units.length.size, 0)
    return [
        ("field length", _length(field, units)),
        (
            "V2",
            f"{Scale.of(units.speed, [field.v2], 3).full(field.v2)} calibrated, 1.2 times stall "
            f"speed, at {mass.full(field.take_off_mass)} off a runway at {height} "
            f"{units.length.name}, {day_in_words(field.temperature_deviation)}",
        ),
    ]


def _length(field: FieldPerformance, units: Units) -> str:
    if field.length is None:
        return "none can be told"

    def shown(length: float) -> str:
        return f"{number(length / units.length.size, 0)} {units.length.name}"

    need = shown(field.length)
    if field.runway is not None:
        verdict = "enough" if field.length <= field.runway else "NOT ENOUGH"
        need += f" of {shown(field.runway)} runway, {verdict}"
    if field.balanced_length is None:
        return f"{need}: all engines with 15 % added"
    assert field.all_engine_length is not None
    if field.governed_by == "balanced":
        other = f"all engines with 15 % added {shown(field.all_engine_length)}"
        return f"{need}: the balanced length governs ({other})"
    other = f"balanced {shown(field.balanced_length)}"
    return f"{need}: all engines with 15 % added govern ({other})"


def _climbs(climbs: tuple[ClimbCheck, ...], units: Units, width: int) -> Table:
    mass_unit = units.gross_mass(max(climb.mass for climb in climbs))
    table = ruled_table(
        [
            words("climb", is_wrapped=False),
            words("14 CFR", is_wrapped=False),
            Column("engines\nrunning"),
            Column(f"mass\n{mass_unit.name}"),
            Column(f"speed\n{units.speed.name}"),
            Column("gradient\n%"),
            Column("required\n%"),
            words("", is_wrapped=False),
        ],
        gap=2 if width >= WIDEST else 1,
    )
    mass = Scale.of(mass_unit, [climb.mass for climb in climbs])
    speed = Scale.of(units.speed, [climb.calibrated_airspeed for climb in climbs], 3)
    for climb in climbs:
        table.add_row(
            climb.name,
            climb.paragraph,
            str(climb.engines_running),
            mass.bare(climb.mass),
            speed.bare(climb.calibrated_airspeed),
            number(100.0 * climb.gradient, 1),
            number(100.0 * climb.required, 1) if climb.required else "above 0",
            "met" if climb.is_met else "NOT MET",
        )
    return table
