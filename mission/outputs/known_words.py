"""What is known of a mission beside what is flown, in words."""

from __future__ import annotations

from collections.abc import Sequence

from mission.known import KnownValue
from mission.outputs.units import METRIC, Scale, Units, number, signed
from mission.outputs.wording import in_plain_words

_LEAST_SHOWN = 1e-6  # of a share: an error below it is the flight's own


def known_name(value: KnownValue) -> str:
    """``block fuel``, or ``time of climb out``."""
    what = in_plain_words(value.what)
    return f"{what} of {value.segment}" if value.segment else what


def known_scale(value: KnownValue, units: Units = METRIC) -> Scale:
    """Unit and decimals for a known and what is flown: kilograms, or minutes."""
    unit = units.mass if value.unit == "kg" else units.time
    return Scale.of(unit, [value.known, value.flown])


def error_percent(value: KnownValue, decimals: int = 2) -> str:
    """Flown less known in percent of the known, signed."""
    error = 0.0 if abs(value.error) < _LEAST_SHOWN else value.error
    return signed(number(100.0 * error, decimals))


def against_flown(values: Sequence[KnownValue], units: Units = METRIC) -> str:
    """Every known and how far the flight is off it, in one line."""
    return "; ".join(
        f"{known_name(value)} {known_scale(value, units).full(value.known)}, "
        f"flown {known_scale(value, units).bare(value.flown)} ({error_percent(value)} %)"
        for value in values
    )
