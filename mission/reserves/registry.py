"""The reserve rules known by name, each a short summary with its citation.

To add a rule, add an entry to ``_ENTRIES``, its items in the order in which they are flown.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace

from engine.quantities import FOOT, NAUTICAL_MILE
from mission.reserves.items import (
    Alternate,
    FuelFlowMargin,
    Hold,
    Item,
    NoDescentCredit,
    ShareOfInitialFuel,
    ShareOfTripFuel,
    ShareOfTripTime,
    TimeAtCruiseConsumption,
    TimeAtTripConsumption,
)

MINUTE, HOUR = 60.0, 3600.0
GOVERNS = "Summary; the authority's current text governs."


@dataclass(frozen=True)
class Rule:
    """Items of a reserve rule.

    ``citation`` is empty for a rule of the mission's own; ``has_standard_holds`` where the text
    puts its holds on a standard day.
    """

    name: str
    title: str
    citation: str
    items: tuple[Item, ...]
    has_standard_holds: bool = False

    def without_alternate(self) -> Rule:
        """The rule where it asks for no alternate."""
        return replace(self, items=tuple(i for i in self.items if not isinstance(i, Alternate)))

    def with_alternate(self, distance: float | None) -> Rule:
        """The rule with the way to the alternate [m] where it has none of its own."""
        items: list[Item] = []
        for item in self.items:
            if isinstance(item, Alternate) and item.distance is None:
                items.append(replace(item, distance=distance))
            elif not (isinstance(item, Hold) and item.is_only_without_alternate):
                items.append(item)
        return replace(self, items=tuple(items))


# Contingency and final reserve of ICAO Annex 6 and of what is written after it.
_FIVE_MINUTES, _FINAL = 5 * MINUTE, Hold(30 * MINUTE)
_NO_ALTERNATE_HOLD = Hold(15 * MINUTE, is_only_without_alternate=True, name="destination hold")
_AFTER_ANNEX_6 = (
    "final reserve and hold where there is no alternate EU-OPS Appendix 1 to 1.255, 1.5 and 1.6(b)"
)


def _business_ifr(miles: int, name: str, citation: str) -> Rule:
    level = 5000.0 * FOOT
    return Rule(
        name,
        f"missed approach, 5 min hold for clearance, {miles} nmi away, 30 min hold at 5,000 ft",
        citation,
        (
            Hold(5 * MINUTE, level, "sea level", name="hold for clearance"),
            Alternate(miles * NAUTICAL_MILE, is_always=True),
            Hold(30 * MINUTE, level, "sea level"),
        ),
    )


_ENTRIES = (
    Rule("none", "no reserves", "", ()),
    Rule(
        "14 CFR 121.639",
        "US airline, domestic: alternate, 45 min at cruise fuel flow",
        "14 CFR 121.639",
        (Alternate(), TimeAtCruiseConsumption(45 * MINUTE)),
    ),
    Rule(
        "14 CFR 121.645(b)",
        "US airline, flag, turbine: 10 % of trip time, alternate, 30 min hold",
        "14 CFR 121.645(b)",
        (ShareOfTripTime(0.10), Alternate(), Hold(30 * MINUTE)),
        has_standard_holds=True,
    ),
    Rule(
        "14 CFR 121.645(c)",
        "the same, released without an alternate: 2 h at cruise fuel flow",
        "14 CFR 121.645(c)",
        (TimeAtCruiseConsumption(2 * HOUR),),
    ),
    Rule(
        "14 CFR 91.151, day",
        "US, visual flight by day: 30 min at cruise fuel flow",
        "14 CFR 91.151(a)(1)",
        (TimeAtCruiseConsumption(30 * MINUTE),),
    ),
    Rule(
        "14 CFR 91.151, night",
        "US, visual flight by night: 45 min at cruise fuel flow",
        "14 CFR 91.151(a)(2)",
        (TimeAtCruiseConsumption(45 * MINUTE),),
    ),
    Rule(
        "14 CFR 91.167",
        "US, instrument flight: alternate, 45 min at cruise fuel flow",
        "14 CFR 91.167(a)",
        (Alternate(), TimeAtCruiseConsumption(45 * MINUTE)),
    ),
    Rule(
        "ICAO Annex 6",
        "5 % of trip fuel or 5 min hold, alternate or 15 min hold, 30 min hold",
        "ICAO Annex 6 Part I, 4.3.6.3 (from memory); contingency as in OTAR Part 121, "
        + _AFTER_ANNEX_6,
        (ShareOfTripFuel(0.05, _FIVE_MINUTES), Alternate(), _NO_ALTERNATE_HOLD, _FINAL),
        has_standard_holds=True,
    ),
    Rule(
        "ICAO Annex 6, isolated",
        "isolated aerodrome: 5 % of trip fuel or 5 min hold, 2 h at cruise fuel flow",
        "ICAO Annex 6 Part I, 4.3.6.3 (from memory); two hours, final reserve included, as in UK "
        "AMC7 CAT.OP.MPA.182",
        (ShareOfTripFuel(0.05, _FIVE_MINUTES), TimeAtCruiseConsumption(2 * HOUR)),
        has_standard_holds=True,
    ),
    Rule(
        "EASA, 3 %",
        "as ICAO Annex 6, contingency 3 % of trip fuel with an en-route alternate",
        "AMC6 CAT.OP.MPA.181 to Regulation (EU) 965/2012; " + _AFTER_ANNEX_6,
        (ShareOfTripFuel(0.03, _FIVE_MINUTES), Alternate(), _NO_ALTERNATE_HOLD, _FINAL),
        has_standard_holds=True,
    ),
    Rule(
        "EASA, 20 min",
        "as ICAO Annex 6, contingency 20 min at the trip's fuel flow",
        "AMC6 CAT.OP.MPA.181 to Regulation (EU) 965/2012; " + _AFTER_ANNEX_6,
        (
            TimeAtTripConsumption(20 * MINUTE, _FIVE_MINUTES),
            Alternate(),
            _NO_ALTERNATE_HOLD,
            _FINAL,
        ),
        has_standard_holds=True,
    ),
    _business_ifr(
        200,
        "business IFR",
        "NBAA IFR reserves, as quoted at second hand from the association's glossary",
    ),
    _business_ifr(100, "business IFR, 100 nmi", "NBAA IFR reserves of light jets, from memory"),
    Rule(
        "classic military",
        "20 min at sea level, 5 % of initial fuel, 5 % on fuel flow, no credit for descent",
        "USAF practice after MIL-C-5011, from memory; the standard itself was not read",
        (
            Hold(20 * MINUTE, 0.0, "sea level"),
            ShareOfInitialFuel(0.05),
            FuelFlowMargin(0.05),
            NoDescentCredit(),
        ),
    ),
)
RULES: Mapping[str, Rule] = {rule.name: rule for rule in _ENTRIES}
