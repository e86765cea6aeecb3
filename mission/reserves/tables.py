"""Reserves as a person writes them: a rule by name, or items of their own, and the alternate."""

from __future__ import annotations

import difflib
from collections import Counter
from collections.abc import Sequence
from typing import Annotated, Literal

from pydantic import Field, model_validator

from engine.quantities import Altitude, Distance, Speed, Time
from engine.reading import Table
from mission.reserves.items import (
    Alternate,
    FuelFlowMargin,
    Hold,
    Item,
    NoDescentCredit,
    Place,
    ShareOfInitialFuel,
    ShareOfTripFuel,
    ShareOfTripTime,
    TimeAtCruiseConsumption,
    TimeAtTripConsumption,
    alternate_of,
)
from mission.reserves.registry import RULES, Rule
from mission.segments.cruise import LONGEST

Share = Annotated[float, Field(gt=0.0, lt=1.0)]
Duration = Annotated[Time, Field(gt=0.0)]
LeastHold = Annotated[Time, Field(ge=0.0)]
_OWN = "own rule"
_ALTERNATE_KEYS = "distance, pressure_altitude, mach and calibrated_airspeed"


class _ItemTable(Table):
    """An item of the mission's own rule; without a name it has that of its kind."""

    name: Annotated[str, Field(min_length=1)] | None = None


class ShareOfTripFuelTable(_ItemTable):
    kind: Literal["share of trip fuel"]
    share: Share
    least_hold_time: LeastHold = 0.0


class TimeAtTripConsumptionTable(_ItemTable):
    kind: Literal["time at trip consumption"]
    time: Duration
    least_hold_time: LeastHold = 0.0


class ShareOfTripTimeTable(_ItemTable):
    kind: Literal["share of trip time"]
    share: Share


class TimeAtCruiseConsumptionTable(_ItemTable):
    kind: Literal["time at cruise consumption"]
    time: Duration


class AlternateItemTable(_ItemTable):
    kind: Literal["alternate"]


class HoldTable(_ItemTable):
    kind: Literal["hold"]
    time: Duration
    height: Annotated[Distance, Field(ge=0.0, le=20000.0)]
    above: Place


class ShareOfInitialFuelTable(_ItemTable):
    kind: Literal["share of initial fuel"]
    share: Share


class FuelFlowMarginTable(_ItemTable):
    kind: Literal["fuel-flow margin"]
    share: Share


class NoDescentCreditTable(_ItemTable):
    kind: Literal["no distance credit for descent"]


AnyItem = Annotated[
    ShareOfTripFuelTable
    | TimeAtTripConsumptionTable
    | ShareOfTripTimeTable
    | TimeAtCruiseConsumptionTable
    | AlternateItemTable
    | HoldTable
    | ShareOfInitialFuelTable
    | FuelFlowMarginTable
    | NoDescentCreditTable,
    Field(discriminator="kind"),
]
_ITEMS: dict[str, type[Item]] = {
    item.kind: item
    for item in (
        ShareOfTripFuel,
        TimeAtTripConsumption,
        ShareOfTripTime,
        TimeAtCruiseConsumption,
        Alternate,
        Hold,
        ShareOfInitialFuel,
        FuelFlowMargin,
        NoDescentCredit,
    )
}


def _item(table: _ItemTable) -> Item:
    """The item that a table describes: their keys are the same."""
    values = table.model_dump(exclude_none=True)
    return _ITEMS[values.pop("kind")](**values)


class AlternateTable(Table):
    """The way to the alternate: a climb, a cruise, a descent and, given its time, an approach."""

    distance: Annotated[Distance, Field(gt=0.0, le=LONGEST)] | None = None
    pressure_altitude: Altitude
    mach: Annotated[float, Field(gt=0.0, lt=5.0)]
    calibrated_airspeed: Annotated[Speed, Field(gt=0.0)]
    limited_below_10000_ft: bool = False
    elevation: Altitude | None = None
    approach_time: Annotated[Time, Field(ge=0.0)] = 0.0
    approach_drag_factor: Annotated[float, Field(gt=0.0, le=10.0)] = 1.0


class ReservesTable(Table):
    """A rule of :data:`RULES` by name, or a list of items; nothing is no reserves."""

    rule: str | None = None
    title: str = ""
    item: list[AnyItem] = Field(default_factory=list, max_length=20)
    alternate: AlternateTable | None = None
    alternate_required: bool | None = None

    @property
    def rule_in_force(self) -> Rule:
        """The rule as it stands for this mission, with or without its alternate."""
        rule = self._written_rule()
        if self.alternate_required is False:
            return rule.without_alternate()
        if self.alternate is None:
            return rule
        return rule.with_alternate(self.alternate.distance)

    def _written_rule(self) -> Rule:
        if self.item:
            return Rule(self.title or _OWN, "", "", tuple(_item(entry) for entry in self.item))
        return RULES[self.rule or "none"]

    @model_validator(mode="after")
    def _one_rule(self) -> ReservesTable:
        if self.rule is not None and self.item:
            raise ValueError("give either rule or items, not both")
        if self.title and not self.item:
            raise ValueError("title goes with items of your own; a rule has its own name")
        if self.rule is not None and self.rule not in RULES:
            near = difflib.get_close_matches(self.rule, RULES, n=1, cutoff=0.4)
            hint = f'; did you mean "{near[0]}"?' if near else ""
            known = ", ".join(f'"{name}"' for name in RULES)
            raise ValueError(f'"{self.rule}" is no rule known here{hint} Rules: {known}')
        rule = self._written_rule()
        _refuse_odd_items(rule.items)
        self._refuse_odd_alternate(rule)
        return self

    def _refuse_odd_alternate(self, rule: Rule) -> None:
        """What the rule needs of an alternate and the file has not, or the other way round."""
        _, item = alternate_of(rule.items)
        what = f'the rule "{rule.name}"'
        if item is None:
            if self.alternate is not None or self.alternate_required is not None:
                raise ValueError(
                    f"{what} flies to no alternate: leave out alternate and alternate_required, "
                    "or take a rule that does"
                )
        elif self.alternate_required is False:
            _refuse_going_without(what, item, self.alternate)
        elif self.alternate is None:
            own = "" if item.distance is None else f"; distance is the rule's, {_miles(item)}"
            without = "" if item.is_always else ", or alternate_required = false where none is"
            raise ValueError(
                f"{what} flies to an alternate: add [reserves.alternate] with "
                f"{_ALTERNATE_KEYS}{own}{without}"
            )
        elif (item.distance is None) == (self.alternate.distance is None):
            said = (
                'needs alternate.distance = "150 nmi", say'
                if item.distance is None
                else f"has its own distance, {_miles(item)}: leave alternate.distance out"
            )
            raise ValueError(f"{what} {said}")


def _refuse_going_without(what: str, item: Alternate, alternate: AlternateTable | None) -> None:
    if alternate is not None:
        raise ValueError("alternate and alternate_required = false contradict each other")
    if item.is_always:
        raise ValueError(f"{what} always flies to an alternate: leave alternate_required out")


def _miles(item: Alternate) -> str:
    return f"{(item.distance or 0.0) / 1852.0:,.0f} nmi"


def _refuse_odd_items(items: Sequence[Item]) -> None:
    """Items that cannot stand together."""
    names = Counter(item.name for item in items)
    twice = [name for name, count in names.items() if count > 1]
    if twice:
        raise ValueError(f'two items are named "{twice[0]}"; give each a name of its own')
    for kind in (Alternate, FuelFlowMargin, NoDescentCredit):
        if sum(isinstance(item, kind) for item in items) > 1:
            raise ValueError(f'there are two items of kind "{kind.kind}"; one is enough')
    shares = sum(item.share for item in items if isinstance(item, ShareOfInitialFuel))
    if shares >= 1.0:
        raise ValueError(f"the shares of initial fuel add up to {shares:g}, which leaves no trip")
    alternate, _ = alternate_of(items)
    before = [item for item in items[:alternate] if isinstance(item, Hold)]
    if alternate < len(items) and len(before) > 1:
        raise ValueError("two holds stand before the alternate; at most one is flown there")
