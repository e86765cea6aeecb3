"""Values that no file stated, in plain words: grouped by file and by what they belong to."""

from __future__ import annotations

import re
from collections.abc import Iterable

from mission.outputs.wording import day_in_words, in_plain_words

# Last part of a key -> unit shown and its size in SI, for values that are not plain numbers.
_UNITS = {
    "lower_heating_value": ("MJ/kg", 1e6),
    "density": ("kg/m3", 1.0),
    "elevation": ("m", 1.0),
    "pressure_altitude": ("m", 1.0),
    "headwind": ("m/s", 1.0),
    "calibrated_airspeed": ("m/s", 1.0),
    "approach_time": ("min", 60.0),
    "time": ("min", 60.0),
    "unusable": ("kg", 1.0),
    "shaft_power": ("kW", 1000.0),
    "compressor_delivery_pressure": ("bar", 1e5),
    "turbine_entry_temperature": ("K", 1.0),
}
_SAID_ELSEWHERE = ("note", "as_needed")  # of no weight, or told at the head of the log
_LINE = re.compile(r"^(?:(?P<owner>segment \d+)[^:]*: )?(?P<key>[\w.]+) = (?P<value>.*)$")


def assumed_by_file(assumed: Iterable[str]) -> list[tuple[str, str]]:
    """File and one compact sentence of what was assumed for it, in the order given.

    Each line reads ``file: key = value`` or ``file: segment 3 name: key = value``; a line of
    another shape is shown as it is.
    """
    files: dict[str, list[str]] = {}
    for line in assumed:
        file, _, rest = line.partition(": ")
        files.setdefault(file, []).append(rest)
    return [(file, _sentence(lines)) for file, lines in files.items()]


def _sentence(lines: list[str]) -> str:
    """What belongs to the same owners stands together, owners with equal values are joined."""
    owners: dict[tuple[str, str], list[str]] = {}
    others: list[str] = []
    for line in lines:
        found = _LINE.match(line)
        if found is None:
            others.append(line)
            continue
        path, _, key = found["key"].rpartition(".")
        if key in _SAID_ELSEWHERE:
            continue
        owner = found["owner"] or in_plain_words(path.rpartition(".")[2])
        shown = f"{in_plain_words(key)} {_value(key, found['value'])}"
        owners.setdefault((key, shown), []).append(owner)
    together: dict[tuple[str, ...], list[str]] = {}
    for (_, shown), names in owners.items():
        together.setdefault(tuple(names), []).append(shown)
    groups = [_owned(names, values) for names, values in together.items()]
    return "; ".join([*groups, *others])


def _owned(names: tuple[str, ...], values: list[str]) -> str:
    """``segments 4, 6: rating cruise, drag factor 1``."""
    text = ", ".join(values)
    if names == ("",):
        return text
    numbers = [name.removeprefix("segment ") for name in names]
    if all(number.isdigit() for number in numbers):
        word = "segment" if len(numbers) == 1 else "segments"
        return f"{word} {', '.join(numbers)}: {text}"
    return f"{' and '.join(name or 'in general' for name in names)}: {text}"


def _value(key: str, text: str) -> str:
    """A value as a person would write it."""
    plain = {"True": "yes", "False": "no"}.get(text)
    if plain is not None:
        return plain
    try:
        value = float(text)
    except ValueError:
        return text.replace("_", " ")
    if key == "day":
        return day_in_words(value)
    unit, size = _UNITS.get(key, ("", 1.0))
    if value == 0.0 or not unit:
        return f"{value:g}"
    return f"{value / size:.4g} {unit}"
