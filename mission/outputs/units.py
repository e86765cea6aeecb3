"""Units at the way out: metric by default, the trade's own on request."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from enum import StrEnum
from math import isfinite, log10

# As in engine.quantities, which a screen does not import for the sake of six numbers.
_FOOT = 0.3048
_NAUTICAL_MILE = 1852.0
_KNOT = 1852.0 / 3600.0
_POUND = 0.45359237
_POUND_FORCE = 4.4482216152605
_STANDARD_GRAVITY = 9.80665
ABSENT = "\u2013"  # an en dash: what a cell without a value shows


class UnitSystem(StrEnum):
    """What ``--units`` takes."""

    METRIC = "metric"
    TRADE = "trade"


@dataclass(frozen=True)
class Unit:
    """A unit by name and its size in coherent SI."""

    name: str
    size: float


@dataclass(frozen=True)
class Units:
    """One unit for each quantity that a screen shows."""

    mass: Unit
    large_mass: Unit
    distance: Unit
    altitude: Unit
    speed: Unit
    vertical_speed: Unit
    force: Unit
    fuel_flow: Unit
    specific_fuel_consumption: Unit
    specific_air_range: Unit
    time: Unit = Unit("min", 60.0)
    length: Unit = Unit("m", 1.0)

    def gross_mass(self, greatest: float) -> Unit:
        """Unit for a column of aircraft masses up to ``greatest`` [kg]: large ones in tonnes."""
        return self.large_mass if greatest >= 10_000.0 else self.mass


METRIC = Units(
    mass=Unit("kg", 1.0),
    large_mass=Unit("t", 1000.0),
    distance=Unit("km", 1000.0),
    altitude=Unit("FL", 100.0 * _FOOT),
    speed=Unit("m/s", 1.0),
    vertical_speed=Unit("m/s", 1.0),
    force=Unit("kN", 1000.0),
    fuel_flow=Unit("kg/h", 1.0 / 3600.0),
    specific_fuel_consumption=Unit("mg/(N s)", 1e-6),
    specific_air_range=Unit("km/kg", 1000.0),
)
TRADE = Units(
    mass=Unit("lb", _POUND),
    large_mass=Unit("lb", _POUND),
    distance=Unit("nmi", _NAUTICAL_MILE),
    altitude=Unit("ft", _FOOT),
    speed=Unit("kt", _KNOT),
    vertical_speed=Unit("ft/min", _FOOT / 60.0),
    force=Unit("lbf", _POUND_FORCE),
    fuel_flow=Unit("lb/h", _POUND / 3600.0),
    specific_fuel_consumption=Unit("lb/(lbf h)", 1.0 / (3600.0 * _STANDARD_GRAVITY)),
    specific_air_range=Unit("nmi/lb", _NAUTICAL_MILE / _POUND),
    length=Unit("ft", _FOOT),
)
SYSTEMS = {UnitSystem.METRIC: METRIC, UnitSystem.TRADE: TRADE}


def number(value: float, decimals: int) -> str:
    """A number with thousands separated, and no minus before a zero; absent if not finite."""
    if not isfinite(value):
        return ABSENT
    text = f"{value:,.{decimals}f}"
    return text.lstrip("-") if not text.strip("-0.,") else text


def decimals_for(values: Iterable[float], significant: int) -> int:
    """Decimals that give the greatest of the values so many significant digits."""
    greatest = max((abs(value) for value in values if isfinite(value)), default=0.0)
    if greatest == 0.0:
        return 0
    return max(0, significant - 1 - int(log10(greatest) // 1))


@dataclass(frozen=True)
class Scale:
    """A unit and the decimals that a set of values is shown with."""

    unit: Unit
    decimals: int

    @classmethod
    def of(cls, unit: Unit, values: Iterable[float], significant: int = 4) -> Scale:
        """Decimals so that the greatest value [SI] has so many significant digits."""
        return cls(unit, decimals_for((value / unit.size for value in values), significant))

    def bare(self, value: float) -> str:
        """A value [SI] as a number alone."""
        return number(value / self.unit.size, self.decimals)

    def full(self, value: float) -> str:
        """A value [SI] with its unit."""
        return f"{self.bare(value)} {self.unit.name}"


def signed(text: str) -> str:
    """A number's text with a plus where it is above zero."""
    is_plain = text.startswith("-") or text == ABSENT or not text.strip("0.,")
    return text if is_plain else f"+{text}"


def flight_level(pressure_altitude: float) -> str:
    """Pressure altitude [m] as hundreds of feet, three digits."""
    return f"{round(pressure_altitude / (100.0 * _FOOT)):03d}"
