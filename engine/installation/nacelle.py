"""The nacelle around an engine: its outer shape, its wetted area, its friction."""

from __future__ import annotations

from dataclasses import dataclass
from math import pi

# Raymer, Aircraft Design: A Conceptual Approach, 6th ed., equivalent skin friction of a civil
# transport: separation and interference in normal flight are inside it.
FRICTION_COEFFICIENT = 0.0026
_INLET_LENGTH_RATIO = 0.6  # of the fan's diameter; common practice, no source
_COWL_OVER_ENGINE = 1.2  # diameters, where no fan sets the nacelle's; common practice, no source


@dataclass(frozen=True)
class NacelleProportions:
    """Shape of a nacelle by ratios.

    Attributes
    ----------
    fan_cowl_share : length of the fan cowl over that of the nacelle; the rest is gas generator
    forebody_share : lip to greatest diameter, over the length of the fan cowl
    cowl_exit_ratio : diameter at the fan cowl's end over the greatest
    gas_generator_ratio : diameter of the gas generator's cowl over the nacelle's greatest
    gas_generator_exit_ratio : diameter at its end over its own
    plug_length_share : length of the plug over that of the nacelle
    plug_ratio : diameter of the plug over the nacelle's greatest
    """

    fan_cowl_share: float = 1.0
    forebody_share: float = 0.35
    cowl_exit_ratio: float = 0.67
    gas_generator_ratio: float = 0.0
    gas_generator_exit_ratio: float = 1.0
    plug_length_share: float = 0.0
    plug_ratio: float = 0.0


# Torenbeek, Synthesis of Subsonic Airplane Design, nacelle geometry (from memory), for a fan cowl
# of a share phi of the length: greatest diameter at 0.35 (full) or 0.21 / sqrt(phi) of the cowl,
# cowl exit at 1 - phi^2 / 3 of the diameter, gas generator's end at 0.55 of its own.
# Where the short cowl ends, the gas generator's diameter and the plug: common practice, no source.
FULL_COWL = NacelleProportions()
SHORT_COWL = NacelleProportions(
    fan_cowl_share=0.65,
    forebody_share=0.26,
    cowl_exit_ratio=0.86,
    gas_generator_ratio=0.55,
    gas_generator_exit_ratio=0.55,
    plug_length_share=0.10,
    plug_ratio=0.20,
)


def nacelle_length(engine_length: float, fan_diameter: float) -> float:
    """Lip to nozzle [m]: the bare engine and ahead of it an inlet of 0.6 fan diameters.

    The inlet's length is common practice, no source.
    """
    return engine_length + _INLET_LENGTH_RATIO * fan_diameter


def maximum_diameter(fan_diameter: float, length: float, engine_diameter: float | None) -> float:
    """Greatest diameter [m] of a nacelle of a length [m]: fan + 0.06 length + 0.03 m.

    An engine with a diameter of its own, a turboprop, has 1.2 times that (common practice).

    Source: Torenbeek, Synthesis of Subsonic Airplane Design, nacelle geometry (from memory), for
    a full-length cowl, with the fan's diameter as that of his inlet.
    """
    if engine_diameter is not None:
        return _COWL_OVER_ENGINE * engine_diameter
    return fan_diameter + 0.06 * length + 0.03


def wetted_area(
    length: float, diameter: float, lip_diameter: float, proportions: NacelleProportions
) -> float:
    """Outer wetted area [m2] of fan cowl, gas generator and plug.

    Source: Roskam, Airplane Design, Part II, Eqs 12.5-12.7 (after Torenbeek). In his letters:
    l_n, D_n the fan cowl; l_1 its lip to its greatest diameter; D_hl the lip; D_ef the cowl's
    end; l_g, D_g, D_eg the gas generator; l_p, D_p the plug.
    """
    p = proportions
    l_n, D_n, D_hl = p.fan_cowl_share * length, diameter, lip_diameter
    ahead = p.forebody_share
    fan_cowl = (
        l_n
        * D_n
        * (2.0 + 0.35 * ahead + 0.8 * ahead * D_hl / D_n + 1.15 * (1.0 - ahead) * p.cowl_exit_ratio)
    )
    l_g, D_g = (1.0 - p.fan_cowl_share) * length, p.gas_generator_ratio * diameter
    gas_generator = 0.0
    if l_g > 0.0:
        slenderness = 1.0 - 0.18 * (D_g / l_g) ** (5.0 / 3.0)
        taper = 1.0 - p.gas_generator_exit_ratio
        gas_generator = pi * l_g * D_g * (1.0 - taper * slenderness / 3.0)
    plug = 0.7 * pi * (p.plug_length_share * length) * (p.plug_ratio * diameter)
    return fan_cowl + gas_generator + plug
