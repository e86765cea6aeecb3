"""What hangs under the wing for an engine: its size, its mass, the drag of its skin.

Every quantity may be given; what is not is estimated from those that are.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, fields
from math import isfinite

from engine.errors import InputRefused
from engine.installation import correlations as engines
from engine.installation import nacelle

GIVEN = "given"
_TORENBEEK = "Torenbeek, Synthesis of Subsonic Airplane Design (from memory)"
_ROSKAM = "Roskam, Airplane Design, Part II, Eqs 12.5-12.7"
_INSTALLED_OVER_BARE = "installed over bare mass of the Energy Efficient Engine, NASA CR-168219"

# A given number follows the thrust of a scaled engine by these powers: Raymer, Aircraft Design,
# 6th ed., chapter 10, for mass, diameter and length; areas as length times diameter.
SCALING_EXPONENTS: Mapping[str, float] = {
    "fan_diameter": 0.5,
    "length": 0.4,
    "maximum_diameter": 0.5,
    "dry_mass": 1.1,
    "installed_mass": 1.1,
    "wetted_area": 0.9,
    "drag_area": 0.9,
}


@dataclass(frozen=True)
class GivenPod:
    """What is known of a pod, one engine; None where it is to be estimated. Units as in Pod."""

    fan_diameter: float | None = None
    length: float | None = None
    maximum_diameter: float | None = None
    dry_mass: float | None = None
    installed_mass: float | None = None
    wetted_area: float | None = None
    drag_area: float | None = None


@dataclass(frozen=True)
class Pod:
    """One engine with its nacelle.

    Attributes
    ----------
    fan_diameter : [m], of the compressor's face where there is no fan
    length, maximum_diameter : [m], of the nacelle
    dry_mass : [kg], of the bare engine
    installed_mass : [kg], with inlet, cowl, reverser, exhaust, pylon and build-up
    wetted_area : [m2], of the nacelle's outside
    drag_area : [m2], friction coefficient times wetted area; times dynamic pressure it is drag
    origins : for each of those "given", or what it was estimated by
    doubts : sentences on estimates outside what they are for
    """

    fan_diameter: float
    length: float
    maximum_diameter: float
    dry_mass: float
    installed_mass: float
    wetted_area: float
    drag_area: float
    origins: Mapping[str, str]
    doubts: tuple[str, ...] = ()


def pod(
    bare: engines.BareEngine,
    *,
    corrected_airflow: float | None = None,
    proportions: nacelle.NacelleProportions = nacelle.FULL_COWL,
    given: GivenPod = GivenPod(),
) -> Pod:
    """The pod of one engine.

    Parameters
    ----------
    bare : estimates for the engine, by ``jet_engine`` or ``turboprop`` of ``correlations``
    corrected_airflow : [kg/s], the greatest; None only where ``given`` has the fan's diameter
    proportions : of the nacelle; ``SHORT_COWL`` where core and bypass leave apart
    given : numbers that go before the estimates

    Raises
    ------
    InputRefused
        a given number that is not positive, a fan that does not fit its nacelle, an engine
        heavier bare than installed, or a fan of unknown size; ``key`` names which.
    """
    _refuse_impossible(given)
    fan = given.fan_diameter or _fan_from_airflow(corrected_airflow)
    length = given.length or nacelle.nacelle_length(bare.length, fan)
    diameter = given.maximum_diameter or nacelle.maximum_diameter(fan, length, bare.diameter)
    _refuse_narrow(diameter, fan)
    dry, installed, mass_origins = _masses(given, bare)
    area = given.wetted_area or nacelle.wetted_area(length, diameter, fan, proportions)
    estimates = {
        "fan_diameter": "corrected airflow over annulus area of a transonic fan, NASA CR-168219",
        "length": f"engine by {bare.source}, inlet of 0.6 fan diameters (common practice)",
        "maximum_diameter": _TORENBEEK
        if bare.diameter is None
        else f"1.2 times the engine's by {bare.source}",
        **mass_origins,
        "wetted_area": _ROSKAM,
        "drag_area": f"skin friction coefficient {nacelle.FRICTION_COEFFICIENT:g} on wetted area",
    }
    origins = {
        name: estimate if getattr(given, name) is None else GIVEN
        for name, estimate in estimates.items()
    }
    is_estimated = given.dry_mass is None and given.installed_mass is None
    return Pod(
        fan_diameter=fan,
        length=length,
        maximum_diameter=diameter,
        dry_mass=dry,
        installed_mass=installed,
        wetted_area=area,
        drag_area=given.drag_area or nacelle.FRICTION_COEFFICIENT * area,
        origins=origins,
        doubts=bare.doubts if is_estimated else (),
    )


def scaled_given(given: GivenPod, factor: float) -> GivenPod:
    """The given numbers for an engine of ``factor`` times the thrust.

    Each by its power of :data:`SCALING_EXPONENTS`; what is estimated needs no scaling, being
    estimated again for the scaled engine.
    """
    scaled: dict[str, float | None] = {}
    for name, exponent in SCALING_EXPONENTS.items():
        value = getattr(given, name)
        scaled[name] = None if value is None else value * factor**exponent
    return GivenPod(**scaled)


def _masses(given: GivenPod, bare: engines.BareEngine) -> tuple[float, float, dict[str, str]]:
    """Dry and installed mass [kg], the estimate serving where neither is given."""
    origins = {"dry_mass": bare.source, "installed_mass": _INSTALLED_OVER_BARE}
    ratio = engines.INSTALLED_MASS_RATIO
    dry, installed = given.dry_mass, given.installed_mass
    if dry is None and installed is None:
        dry = bare.mass
    elif dry is None and installed is not None:
        dry = installed / ratio
        origins["dry_mass"] = _INSTALLED_OVER_BARE
    assert dry is not None
    if installed is None:
        installed = ratio * dry
    if installed < dry:
        raise InputRefused(
            f"{installed:.4g} kg is less than the bare engine's {dry:.4g} kg (dry_mass); the "
            f"installed mass is commonly 1.3 times the bare one, {1.3 * dry:.4g} kg",
            key="installed_mass",
        )
    return dry, installed, origins


def _fan_from_airflow(corrected_airflow: float | None) -> float:
    if corrected_airflow is None:
        raise InputRefused(
            "is needed where the engine has no airflow to size a fan by; give it, for example "
            'fan_diameter = "1.2 m"',
            key="fan_diameter",
        )
    return engines.fan_diameter(corrected_airflow)


def _refuse_impossible(given: GivenPod) -> None:
    for field in fields(given):
        value = getattr(given, field.name)
        if value is not None and not (isfinite(value) and value > 0.0):
            raise InputRefused(
                f"{value:g} is not above zero; give the real one or leave it out to have it "
                "estimated",
                key=field.name,
            )


def _refuse_narrow(diameter: float, fan: float) -> None:
    if diameter < fan:
        raise InputRefused(
            f"{diameter:.4g} m is less than the fan's {fan:.4g} m (fan_diameter); a nacelle is "
            "commonly 1.2 times as wide as its fan",
            key="maximum_diameter",
        )
