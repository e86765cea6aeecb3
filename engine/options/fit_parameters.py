"""What of an engine file a fit may move: keys, the bounds they stay in, and their natural scales.

The scale of a key is a change that is large for an engineer, one point of efficiency or 20 K; in
it a fit reckons, and in it the effects of keys are compared. Where no source is named the bounds
are common practice, no source: what engines of the jet age have had, with room around it.
"""

from __future__ import annotations

import difflib
import re
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, replace
from typing import Any

from pydantic import BaseModel

from engine.errors import InputRefused
from engine.options.input_model import AnyCycleFile
from engine.options.tables import EfficiencyTable
from engine.quantities import KINDS, parse_quantity

_DIGITS = 9  # significant ones of what is written; a state moves less than matching leaves open
_UNIT = re.compile(r"\s*[-+]?[\d.]+(?:[eE][-+]?\d+)?\s*([A-Za-z].*?)\s*")


@dataclass(frozen=True)
class _Span:
    """Bounds and scale of the keys of one pattern; ``is_share``: as multiples of the start."""

    pattern: str
    low: float
    high: float
    scale: float
    kind: str = ""  # of quantity, empty for a bare number
    is_share: bool = False


_SPANS = (
    # A blade row of small-stage efficiency below 0.70 is stalled or tiny; 0.95 nobody has built.
    _Span(r"efficiencies\.(?!mechanical|gearbox).*", 0.70, 0.95, 0.01),
    # Bearings, windage and accessories take one or two hundredths, gears one more.
    _Span(r"efficiencies\.(mechanical|gearbox)", 0.95, 1.0, 0.005),
    # Size: a file that is wrong by more than a factor of five is of another engine.
    _Span(r"design_point\.net_thrust", 0.2, 5.0, 0.03, "force", is_share=True),
    _Span(r"design_point\.airflow", 0.2, 5.0, 0.03, "mass flow", is_share=True),
    _Span(r"scale\.factor", 0.2, 5.0, 0.03, is_share=True),
    _Span(r"scale\.static_thrust", 0.2, 5.0, 0.03, "force", is_share=True),
    _Span(r"scale\.airflow", 0.2, 5.0, 0.03, "mass flow", is_share=True),
    # From uncooled alloys of the first engines to below the melting of cooled ones in fighters.
    _Span(r"design_point\.turbine_entry_temperature", 800.0, 2200.0, 20.0, "absolute temperature"),
    _Span(r"ratings\..*\.turbine_entry_temperature", 800.0, 2300.0, 20.0, "absolute temperature"),
    # One to three fan stages; beyond it the part is a low-pressure compressor.
    _Span(r"design_point\.fan_(hub_)?pressure_ratio", 1.05, 5.0, 0.03),
    _Span(r"design_point\.booster_pressure_ratio", 1.0, 5.0, 0.03),
    _Span(r"design_point\.low_pressure_compressor_pressure_ratio", 1.2, 10.0, 0.1),
    _Span(r"design_point\.high_pressure_compressor_pressure_ratio", 1.5, 40.0, 0.3),
    _Span(r"design_point\.compressor_pressure_ratio", 2.0, 60.0, 0.3),
    _Span(r"design_point\.bypass_ratio", 0.1, 20.0, 0.1),
    _Span(r"design_point\.power_turbine_share", 0.3, 0.99, 0.01),
    # A plain pitot inlet loses a few hundredths, a long or supersonic one up to a tenth and more.
    _Span(r"inlet\.total_pressure_recovery", 0.85, 1.0, 0.005),
    # A lit combustor away from starting and altitude limits burns nearly all of its fuel.
    _Span(r"combustor\.efficiency", 0.90, 1.0, 0.005),
    _Span(r"combustor\.pressure_loss_fraction", 0.0, 0.12, 0.005),
    # A row of vanes or blades takes up to a tenth of the core's air; two rows stand in one key.
    _Span(r"cooling\.(vane|rotor|downstream)_fraction", 0.0, 0.20, 0.01),
    _Span(r"off_takes\.customer_bleed_fraction", 0.0, 0.15, 0.005),
    # Ducts and nozzles: a well-made one loses two hundredths of pressure and one of thrust.
    _Span(r"(core_|bypass_)?nozzle\.gross_thrust_coefficient", 0.90, 1.0, 0.005),
    _Span(r"(core_|bypass_)?nozzle\.isentropic_efficiency", 0.85, 1.0, 0.005),
    _Span(r"(core_|bypass_)?nozzle\.pressure_loss_fraction", 0.0, 0.12, 0.005),
    _Span(r"mixer\.(core_|bypass_)?pressure_loss_fraction", 0.0, 0.10, 0.005),
    _Span(r"mixer\.core_mach", 0.2, 0.8, 0.02),
    _Span(r"mixer\.effectiveness", 0.0, 1.0, 0.1),
    _Span(r"afterburner\.efficiency", 0.70, 1.0, 0.01),
    _Span(r"afterburner\.(dry|lit)_pressure_loss_fraction", 0.0, 0.15, 0.005),
    _Span(r"propeller\.efficiency", 0.50, 0.95, 0.01),
    _Span(r"propeller\.profile_factor", 0.50, 1.0, 0.01),
    # Ceilings of ratings and floors of idles: what a spool may turn above its design speed.
    _Span(r"ratings\..*_speed", 0.5, 1.3, 0.01),
    _Span(r"ratings\..*\.throttle_ratio", 0.9, 1.3, 0.01),
    _Span(
        r"ratings\..*\.compressor_delivery_temperature", 400.0, 1100.0, 10.0, "absolute temperature"
    ),
    _Span(r"ratings\..*\.compressor_delivery_pressure", 0.2, 5.0, 0.03, "pressure", is_share=True),
    _Span(r"ratings\..*\.propeller_shaft_power", 0.2, 5.0, 0.03, "power", is_share=True),
    _Span(r"ratings\..*\.afterburner_temperature", 1000.0, 2400.0, 30.0, "absolute temperature"),
    _Span(r"idle\..*\.corrected_high_pressure_speed", 0.2, 1.0, 0.01),
    _Span(r"idle\..*\.compressor_delivery_pressure", 0.2, 5.0, 0.03, "pressure", is_share=True),
    _Span(r"idle\..*\.fuel_air_ratio", 0.001, 0.03, 0.0005),
)


@dataclass(frozen=True)
class Parameter:
    """One key that a fit may move.

    Attributes
    ----------
    key : dotted; an efficiency without the word of its definition
    place : where its number stands in the content of the file
    start : value that the file has, SI
    low, high, scale : bounds, and a change that is large for an engineer, SI
    unit, unit_size : as the file writes it; empty and 1 for a bare number
    """

    key: str
    place: tuple[str, ...]
    start: float
    low: float
    high: float
    scale: float
    unit: str = ""
    unit_size: float = 1.0

    def written(self, value: float) -> str | float:
        """A value [SI] as it is written in the file."""
        number = float(f"{value / self.unit_size:.{_DIGITS}g}")
        return f"{number!r} {self.unit}" if self.unit else number

    def rounded(self, value: float) -> float:
        """A value [SI] as the file gives it back."""
        return float(f"{value / self.unit_size:.{_DIGITS}g}") * self.unit_size

    def exactly(self, value: float) -> str | float:
        """A value [SI] with all its digits, for a trial that nobody reads."""
        return f"{value / self.unit_size!r} {self.unit}" if self.unit else value

    def in_unit(self, value: float) -> float:
        """A value [SI] in the unit of the file."""
        return value / self.unit_size


def free_parameters(written: AnyCycleFile, content: Mapping[str, Any]) -> dict[str, Parameter]:
    """Every key of an engine file that a fit may move, as the file has it or by default."""
    found = {}
    for key, place, value in _numbers(written, ()):
        span = next((span for span in _SPANS if re.fullmatch(span.pattern, key)), None)
        if span is not None:
            found[key] = _parameter(span, key, place, value, content)
    return found


def choose(keys: Sequence[str], known: Mapping[str, Parameter]) -> list[Parameter]:
    """Parameters by their keys, in the order asked for.

    Raises :class:`InputRefused` for a key that is none, or asked for twice, or whose start lies
    outside its bounds.
    """
    chosen: list[Parameter] = []
    for text in keys:
        key = re.sub(r"\.(polytropic|isentropic)$", "", text)
        if key not in known:
            near = difflib.get_close_matches(key, known, n=3, cutoff=0.5)
            hint = (
                f"did you mean {' or '.join(near)}?" if near else f"these may: {', '.join(known)}"
            )
            raise InputRefused(
                f'"{text}" is no number of this engine file that may be free; {hint}', key="--free"
            )
        if known[key] in chosen:
            raise InputRefused(f'"{text}" is asked for twice', key="--free")
        _refuse_outside(known[key])
        chosen.append(known[key])
    return chosen


def is_inside(parameter: Parameter) -> bool:
    """Whether what the file has lies within the bounds."""
    return parameter.low <= parameter.start <= parameter.high


def put(
    content: Mapping[str, Any], values: Mapping[tuple[str, ...], str | float]
) -> dict[str, Any]:
    """A content with other values at their places; the one given stays, and what it shares."""
    whole = dict(content)
    for place, value in values.items():
        table = whole
        for name in place[:-1]:
            table[name] = dict(table.get(name, {}))
            table = table[name]
        table[place[-1]] = value
    return whole


def _refuse_outside(parameter: Parameter) -> None:
    if not is_inside(parameter):
        low, high, start = (
            f"{parameter.in_unit(value):.6g}"
            for value in (parameter.low, parameter.high, parameter.start)
        )
        raise InputRefused(
            f"{parameter.key} = {start} {parameter.unit}".rstrip()
            + f" is where the fit would start, outside the {low} to {high} that it may move in; "
            "change it in the engine file, or leave it fixed",
            key="--free",
        )


def _numbers(
    model: BaseModel, before: tuple[str, ...]
) -> Iterator[tuple[str, tuple[str, ...], float]]:
    """Key, place and value of every number of a file, defaults included."""
    for name, value in model:
        place = (*before, name)
        if isinstance(value, EfficiencyTable):
            kind = "isentropic" if value.polytropic is None else "polytropic"
            yield ".".join(place), (*place, kind), getattr(value, kind)
        elif isinstance(value, BaseModel):
            yield from _numbers(value, place)
        elif isinstance(value, float):
            yield ".".join(place), place, value


def _parameter(
    span: _Span, key: str, place: tuple[str, ...], value: float, content: Mapping[str, Any]
) -> Parameter:
    share = value if span.is_share else 1.0
    found = Parameter(key, place, value, span.low * share, span.high * share, span.scale * share)
    if not span.kind:
        return found
    unit = _unit(place, content) or KINDS[span.kind][0]
    return replace(found, unit=unit, unit_size=parse_quantity(f"1 {unit}", span.kind))


def _unit(place: tuple[str, ...], content: Mapping[str, Any]) -> str:
    """The unit that a file writes a quantity in."""
    value: Any = content
    for name in place:
        value = value[name] if isinstance(value, Mapping) and name in value else None
    match = _UNIT.fullmatch(value) if isinstance(value, str) else None
    return match.group(1) if match else ""
