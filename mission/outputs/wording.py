"""Words that more than one screen uses; light, so that ``--help`` may import it."""

from __future__ import annotations

CAUTION = (
    "Preliminary estimates for concept studies: not for dispatch, flight planning, certification "
    "or any operational decision. Reserve rules are summaries: the operator's manual and the "
    "authority's current text govern."
)
NOT_CHARGED = (
    "Pods, their mass and their drag, are not charged in this version and no engine is resized "
    "for the mission: every option flies with the aircraft's masses and drag polar as written."
)
TIMES = "\u00d7"  # the sign of multiplication
MINUTES_AN_HOUR = 60
# What a terminal without these characters shows instead.
_PLAIN = str.maketrans(
    {
        "█": "#", "▉": "#", "▊": "#", "▋": "#", "▌": "#", "▍": "'", "▎": "'", "▏": "'",
        "\u2500": "-", "\u2502": "|", "\u2514": "+", "\u2013": "-", "\u00d7": "x",
        **{chr(dots): "*" for dots in range(0x2801, 0x2900)},
    }
)  # fmt: skip


def plain_characters(text: str, encoding: str) -> str:
    """``text`` as a terminal of this encoding can show it."""
    try:
        text.encode(encoding)
    except UnicodeEncodeError:
        return text.translate(_PLAIN).encode(encoding, "replace").decode(encoding)
    return text


def day_in_words(temperature_deviation: float) -> str:
    """A day such as ``ISA+10`` from its temperature deviation [K]."""
    shown = round(temperature_deviation, 1)
    return f"ISA{shown:+g}" if shown else "ISA"


def hours_and_minutes(time: float) -> str:
    """A time [s] in hours and minutes, for reading beside a number of minutes."""
    hours, minutes = divmod(round(time / 60.0), MINUTES_AN_HOUR)
    return f"{hours} h {minutes:02d} min" if hours else f"{minutes} min"


def in_plain_words(key: str) -> str:
    """A snake-case key, or a dotted path of them, as words."""
    return key.replace(".", " ").replace("_", " ")
