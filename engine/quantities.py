"""Units at the edge: a string such as ``"35000 ft"`` becomes a plain SI number, and back.

Inside the program everything is coherent SI without suffix. The registry holds only the units of
the trade, which keeps the start of the program quick and lets a refusal list what is allowed.
"""

from __future__ import annotations

import re
from functools import lru_cache
from typing import TYPE_CHECKING, Annotated, Any

from pydantic import BeforeValidator, Field

if TYPE_CHECKING:
    import pint

# Exact by definition: SI brochure, 9th edition, tables 4 and 8 (nautical mile, hour, tonne, degree
# as pi / 180); international foot and pound 1959 agreement; standard gravity 9.80665 m/s2 (3rd
# CGPM, 1901).
_DEFINITIONS = """
meter = [length] = m
kilogram = [mass] = kg
second = [time] = s
kelvin = [temperature] = K
radian = [angle] = rad
gram = 0.001 * kg = g
tonne = 1000 * kg = t
pound = 0.45359237 * kg = lb
millimeter = 0.001 * m = mm
kilometer = 1000 * m = km
foot = 0.3048 * m = ft
inch = 0.0254 * m = in
nautical_mile = 1852 * m = nmi
statute_mile = 1609.344 * m = mi
minute = 60 * s = min
hour = 3600 * s = h
knot = 1852 * m / h = kt
newton = kg * m / s ** 2 = N
kilonewton = 1000 * N = kN
pound_force = 4.4482216152605 * N = lbf
pascal = N / m ** 2 = Pa
hectopascal = 100 * Pa = hPa
kilopascal = 1000 * Pa = kPa
megapascal = 1000000 * Pa = MPa
bar = 100000 * Pa
joule = N * m = J
kilojoule = 1000 * J = kJ
megajoule = 1000000 * J = MJ
watt = J / s = W
kilowatt = 1000 * W = kW
megawatt = 1000000 * W = MW
milligram = 0.000001 * kg = mg
rankine_degree = K / 1.8 = R
liter = 0.001 * m ** 3 = L
degree = 0.017453292519943295 * rad = deg
"""

# Kind of quantity -> (coherent SI unit, example shown in a refusal).
KINDS: dict[str, tuple[str, str]] = {
    "length": ("m", "2.1 m"),
    "distance": ("m", "1200 nmi"),
    "altitude": ("m", "35000 ft"),
    "angle": ("rad", "25 deg"),
    "area": ("m**2", "61 m**2"),
    "volume": ("m**3", "11000 L"),
    "mass": ("kg", "12.5 t"),
    "time": ("s", "30 min"),
    "speed": ("m/s", "300 kt"),
    "force": ("N", "45 kN"),
    "power": ("W", "80 kW"),
    "pressure": ("Pa", "30 bar"),
    "absolute temperature": ("K", "1500 K"),
    "mass flow": ("kg/s", "120 kg/s"),
    "specific energy": ("J/kg", "43.03 MJ/kg"),
    "specific heat": ("J/kg/K", "1004 J/kg/K"),
    "density": ("kg/m**3", "0.8 kg/L"),
    "specific fuel consumption": ("kg/s/N", "16 mg/N/s"),
}
_QUANTITY = re.compile(r"^\s*([-+]?(?:\d+\.?\d*|\.\d+)(?:[eE][-+]?\d+)?)\s*([A-Za-z].*?)\s*$")
_FLIGHT_LEVEL = re.compile(r"^\s*FL\s?(\d{1,3})\s*$", re.IGNORECASE)
_DAY = re.compile(r"^\s*ISA\s*(?:([-+])\s*(\d+\.?\d*)\s*(?:K|C|°C)?)?\s*$", re.IGNORECASE)
_LIKE_LBF_HOUR = re.compile(r"^\s*([-+]?[\d.]+(?:[eE][-+]?\d+)?)\s*1/h\s*$")
FOOT = 0.3048
KNOT = 1852.0 / 3600.0
NAUTICAL_MILE = 1852.0
POUND = 0.45359237
POUND_FORCE = 4.4482216152605
STANDARD_GRAVITY = 9.80665


@lru_cache(maxsize=1)
def _registry() -> pint.UnitRegistry[Any]:
    import pint  # noqa: PLC0415  a third of the start of the program, where no unit is read

    registry: pint.UnitRegistry[Any] = pint.UnitRegistry(None)
    registry.load_definitions(_DEFINITIONS.strip().splitlines())
    return registry


@lru_cache(maxsize=256)
def _unit_factor(unit: str, kind: str) -> float:
    """Factor from ``unit`` to the coherent SI unit of ``kind``; ValueError if it has none."""
    import pint  # noqa: PLC0415  as above

    target, example = KINDS[kind]
    try:
        return float(_registry().Quantity(1.0, unit).to(target).magnitude)
    except pint.DimensionalityError:
        raise ValueError(
            f"'{unit}' is not a unit of {kind}; write for example \"{example}\""
        ) from None
    except Exception:  # pint raises several kinds on text that is no unit
        raise ValueError(
            f"'{unit}' is not a unit known here; write for example \"{example}\""
        ) from None


def parse_quantity(text: object, kind: str) -> float:
    """SI value of a quantity written as a string with its unit.

    ``kind`` is a key of :data:`KINDS`. An altitude may also be a flight level (``"FL350"``); a
    specific fuel consumption may be given as weight per force and time (``"0.6 1/h"``).
    Raises ``ValueError`` naming the value and an example of what is allowed.
    """
    example = KINDS[kind][1]
    if not isinstance(text, str):
        article = "an" if kind[0] in "aeiou" else "a"
        raise ValueError(
            f"{text!r} has no unit: {article} {kind} is a string with a unit, "
            f'for example "{example}"'
        )
    if kind == "altitude" and (level := _FLIGHT_LEVEL.match(text)):
        return float(level.group(1)) * 100.0 * FOOT
    if kind == "specific fuel consumption" and (rate := _LIKE_LBF_HOUR.match(text)):
        return float(rate.group(1)) / 3600.0 / STANDARD_GRAVITY
    parts = _QUANTITY.match(text)
    if parts is None:
        raise ValueError(f"'{text}' is not a number with a unit; write for example \"{example}\"")
    return float(parts.group(1)) * _unit_factor(parts.group(2), kind)


def si_unit_of(text: str) -> str:
    """The coherent SI unit of a quantity written with its unit; empty where it is none."""
    for kind, (unit, _) in KINDS.items():
        try:
            parse_quantity(text, kind)
        except ValueError:
            continue
        return unit
    return ""


def parse_day(text: object) -> float:
    """Temperature deviation [K] from the standard atmosphere of a day such as ``"ISA+15"``."""
    if isinstance(text, str) and (day := _DAY.match(text)):
        deviation = float(day.group(2) or 0.0)
        return -deviation if day.group(1) == "-" else deviation
    raise ValueError(f'{text!r} is not a day; write for example "ISA" or "ISA+15"')


def day_text(temperature_deviation: float) -> str:
    """A day as :func:`parse_day` reads it, from its temperature deviation [K]."""
    return f"ISA{temperature_deviation:+g}" if temperature_deviation else "ISA"


def _reader(kind: str) -> BeforeValidator:
    return BeforeValidator(lambda text: parse_quantity(text, kind))


Length = Annotated[float, _reader("length")]
Distance = Annotated[float, _reader("distance")]
# The range of the standard atmosphere used here, engine.atmosphere.
Altitude = Annotated[float, _reader("altitude"), Field(ge=-2000.0, le=30000.0)]
Angle = Annotated[float, _reader("angle")]
Area = Annotated[float, _reader("area")]
Volume = Annotated[float, _reader("volume")]
Mass = Annotated[float, _reader("mass")]
Time = Annotated[float, _reader("time")]
Speed = Annotated[float, _reader("speed")]
Force = Annotated[float, _reader("force")]
Power = Annotated[float, _reader("power")]
Pressure = Annotated[float, _reader("pressure")]
Temperature = Annotated[float, _reader("absolute temperature")]
MassFlow = Annotated[float, _reader("mass flow")]
SpecificEnergy = Annotated[float, _reader("specific energy")]
SpecificHeat = Annotated[float, _reader("specific heat")]
Density = Annotated[float, _reader("density")]
SpecificFuelConsumption = Annotated[float, _reader("specific fuel consumption")]
Day = Annotated[float, BeforeValidator(parse_day)]
