"""The aircraft: the plain record that the physics works on, and how it comes from a file."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from math import inf
from pathlib import Path
from typing import Any, Literal

from engine.fuels import Fuel
from engine.reading import check, defaults_used, read_toml
from mission.aerodynamics import LEFT_OUT, BuffetOnset
from mission.aircraft_file import AircraftFile, StoreTable, file_model
from mission.polars.interface import Polar

# Manoeuvre to initial buffet in cruise: 14 CFR 25.251(e) and its guidance, from memory.
_BUFFET_LOAD_FACTOR = 1.3


@dataclass(frozen=True)
class Store:
    """One kind of external store: mass of one, empty [kg], what one adds in drag area [m2].

    ``fuel_capacity`` [kg] is that of one, 0 where it is no tank; ``most`` is how many may hang.
    """

    name: str
    mass: float
    drag_area: float
    fuel_capacity: float
    most: int


@dataclass(frozen=True)
class Aircraft:
    """Masses [kg], wing [m2], polar and limits; factors multiply drag and fuel flow.

    ``tank_capacity`` [kg] and ``tank_volume`` [m3] bound all that the tanks hold, infinite where
    the file does not say; ``unusable_fuel`` rides along on top of operating empty mass and payload.
    Drag increments are zero-lift drag coefficients on wing area. Limits of dynamic pressure [Pa]
    and pressure altitude [m], and the largest fan or nacelle that fits, ``fan_diameter_clearance``
    [m], are infinite where the file does not say; buffet onset is None there.
    ``external_drag_area`` [m2] is of what hangs outside on top of what a flight adds.
    """

    name: str
    operating_empty_mass: float
    maximum_zero_fuel_mass: float
    maximum_ramp_mass: float
    maximum_take_off_mass: float
    maximum_landing_mass: float
    tank_capacity: float
    tank_volume: float
    unusable_fuel: float
    wing_area: float
    polar: Polar
    drag_factor: float
    fuel_flow_factor: float
    maximum_lift_coefficient: float
    take_off_lift_coefficient: float
    approach_lift_coefficient: float
    engine_count: int
    maximum_operating_mach: float
    maximum_operating_calibrated_airspeed: float
    reference_engine: str
    gear_drag_increment: float = 0.0
    take_off_flaps_drag_increment: float = 0.0
    approach_flaps_drag_increment: float = 0.0
    stores: Mapping[str, Store] = field(default_factory=dict, hash=False)
    maximum_load_factor: float = 2.5
    maximum_dynamic_pressure: float = inf
    maximum_pressure_altitude: float = inf
    buffet_onset: BuffetOnset | None = None
    buffet_load_factor: float = _BUFFET_LOAD_FACTOR
    fan_diameter_clearance: float = inf
    external_drag_area: float = 0.0
    assumed: tuple[str, ...] = ()


def usable_fuel(aircraft: Aircraft, fuel: Fuel) -> float:
    """Mass [kg] of a fuel that the tanks hold for burning: the lesser by capacity and by volume."""
    by_volume = aircraft.tank_volume * fuel.density
    return min(aircraft.tank_capacity, by_volume) - aircraft.unusable_fuel


def governing_tank_limit(aircraft: Aircraft, fuel: Fuel) -> Literal["capacity", "volume"]:
    """Which of the two bounds how much of a fuel the tanks hold."""
    is_by_volume = aircraft.tank_volume * fuel.density < aircraft.tank_capacity
    return "volume" if is_by_volume else "capacity"


def load_aircraft(path: str | Path) -> Aircraft:
    """Read an aircraft file; :class:`engine.errors.InputRefused` names file, key and value."""
    where = Path(path)
    return aircraft_from_content(read_toml(where), str(where))


def aircraft_from_content(content: dict[str, Any], where: str) -> Aircraft:
    """The same from the content of a file, ``where`` naming it in a refusal.

    A CSV that the content names is looked for beside ``where``.
    """
    written = check(content, file_model(content), where)
    masses, tanks, limits = written.masses, written.fuel_tanks, written.limits
    increments, room = written.drag_increments, written.installation
    clean = limits.maximum_lift_coefficient
    return Aircraft(
        name=written.name,
        operating_empty_mass=masses.operating_empty,
        maximum_zero_fuel_mass=masses.maximum_zero_fuel,
        maximum_ramp_mass=masses.maximum_ramp or masses.maximum_take_off,
        maximum_take_off_mass=masses.maximum_take_off,
        maximum_landing_mass=masses.maximum_landing,
        tank_capacity=tanks.capacity or inf,
        tank_volume=tanks.volume or inf,
        unusable_fuel=tanks.unusable,
        wing_area=written.wing_area,
        polar=written.drag_polar.polar(Path(where).parent),
        drag_factor=written.drag_factor,
        fuel_flow_factor=written.fuel_flow_factor,
        maximum_lift_coefficient=clean,
        take_off_lift_coefficient=limits.take_off_lift_coefficient or clean,
        approach_lift_coefficient=limits.approach_lift_coefficient or clean,
        engine_count=written.engine_count,
        maximum_operating_mach=limits.maximum_operating_mach,
        maximum_operating_calibrated_airspeed=limits.maximum_operating_calibrated_airspeed,
        reference_engine=written.reference_engine,
        gear_drag_increment=increments.gear if increments else 0.0,
        take_off_flaps_drag_increment=increments.take_off_flaps if increments else 0.0,
        approach_flaps_drag_increment=increments.approach_flaps if increments else 0.0,
        stores={name: _store(name, s, written.wing_area) for name, s in written.stores.items()},
        maximum_load_factor=limits.maximum_load_factor,
        maximum_dynamic_pressure=limits.maximum_dynamic_pressure or inf,
        maximum_pressure_altitude=_or_none(limits.maximum_pressure_altitude),
        buffet_onset=_buffet_onset(written),
        buffet_load_factor=limits.buffet_load_factor or _BUFFET_LOAD_FACTOR,
        fan_diameter_clearance=room.fan_diameter_clearance if room else inf,
        assumed=tuple(_assumed(written)),
    )


def _or_none(limit: float | None) -> float:
    return inf if limit is None else limit


def _store(name: str, written: StoreTable, wing_area: float) -> Store:
    area = written.drag_area
    if area is None:
        assert written.drag_coefficient is not None
        area = written.drag_coefficient * wing_area
    return Store(name, written.mass, area, written.fuel_capacity, written.most)


def _buffet_onset(written: AircraftFile) -> BuffetOnset | None:
    buffet = written.limits.buffet
    if buffet is None:
        return None
    return BuffetOnset(tuple(buffet.machs), tuple(buffet.lift_coefficients))


def _assumed(written: AircraftFile) -> list[str]:
    """Values that the file did not state, and what no file can state."""
    limits, clean = written.limits, written.limits.maximum_lift_coefficient
    lines = defaults_used(written)
    lines += [
        f"limits.{name} = {clean} (as clean)"
        for name in ("take_off_lift_coefficient", "approach_lift_coefficient")
        if getattr(limits, name) is None
    ]
    if limits.buffet is not None and limits.buffet_load_factor is None:
        lines.append(f"limits.buffet_load_factor = {_BUFFET_LOAD_FACTOR}")
    if written.drag_increments is None:
        lines.append("drag_increments = 0.0")
    if written.masses.maximum_ramp is None:
        lines.append("masses.maximum_ramp = maximum_take_off")
    for name, store in written.stores.items():
        lines += defaults_used(store, f"stores.{name}.")
    return [*lines, LEFT_OUT]
