"""Reserves as text: the rule, its lines and what carrying each costs, its citation."""

from __future__ import annotations

from rich.console import Group, RenderableType
from rich.text import Text

from mission.outputs.page import Column, note, ruled_table, section, words
from mission.outputs.segment_rows import Scales
from mission.reserves.items import FuelFlowMargin, NoDescentCredit
from mission.reserves.registry import GOVERNS
from mission.results import Flight


def reserve_section(flight: Flight, scales: Scales) -> Group:
    """What is kept aboard at the stop and by which rule."""
    rule = flight.reserve_rule
    if not rule.items:
        return section("Reserves", note("none asked for"))
    fuel = scales.fuel
    table = ruled_table(
        [
            words("reserve"),
            Column(f"fuel\n{fuel.unit.name}"),
            Column(f"costs in trip fuel\n{fuel.unit.name}"),
            words("how it is found"),
        ]
    )
    for line in flight.reserves:
        cost = fuel.bare(line.carriage_cost) if flight.flown else ""
        table.add_row(line.item, fuel.bare(line.fuel), cost, line.note)
    table.add_section()
    table.add_row("all reserves", fuel.bare(flight.totals.reserve_fuel), "", "")
    for item in rule.items:
        if isinstance(item, FuelFlowMargin):
            table.add_row(item.name, fuel.bare(flight.fuel_flow_margin), "", item.manner)
    title = f"{rule.name}: {rule.title}" if rule.title else rule.name
    return section("Reserves", Text(title), table, *_remarks(flight))


def _remarks(flight: Flight) -> list[RenderableType]:
    """What has no line of its own, and what the rule is taken from."""
    rule = flight.reserve_rule
    said = [
        f"{item.manner.capitalize()}." for item in rule.items if isinstance(item, NoDescentCredit)
    ]
    if rule.has_standard_holds:
        said.append(
            "The text has its holds on a standard day; here they are flown on the mission's."
        )
    if rule.citation:
        said.append(f"{rule.citation}. {GOVERNS}")
    return [note(sentence) for sentence in said]
