"""The aircraft: what an engineer writes about it, and the plain record the physics works on."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from math import inf, pi
from pathlib import Path
from typing import Annotated, Any, Literal

from pydantic import Field, model_validator

from engine.fuels import Fuel
from engine.quantities import Area, Mass, Speed, Volume
from engine.reading import Table, check, defaults_used, read_toml
from mission.aerodynamics import DragRise, Polar

PositiveMass = Annotated[Mass, Field(gt=0.0)]
Factor = Annotated[float, Field(gt=0.0, le=10.0, allow_inf_nan=False)]


@dataclass(frozen=True)
class Aircraft:
    """Masses [kg], wing [m2], polar and limits; factors multiply drag and fuel flow.

    ``tank_capacity`` [kg] and ``tank_volume`` [m3] bound all that the tanks hold, infinite where
    the file does not say; ``unusable_fuel`` rides along on top of operating empty mass and payload.
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
    assumed: tuple[str, ...] = ()
    stores: Mapping[str, Any] = field(default_factory=dict)
    maximum_load_factor: float = 2.5
    maximum_pressure_altitude: float = inf
    external_drag_area: float = 0.0


def usable_fuel(aircraft: Aircraft, fuel: Fuel) -> float:
    """Mass [kg] of a fuel that the tanks hold for burning: the lesser by capacity and by volume."""
    by_volume = aircraft.tank_volume * fuel.density
    return min(aircraft.tank_capacity, by_volume) - aircraft.unusable_fuel


def governing_tank_limit(aircraft: Aircraft, fuel: Fuel) -> Literal["capacity", "volume"]:
    """Which of the two bounds how much of a fuel the tanks hold."""
    is_by_volume = aircraft.tank_volume * fuel.density < aircraft.tank_capacity
    return "volume" if is_by_volume else "capacity"


class MassesTable(Table):
    operating_empty: PositiveMass
    maximum_zero_fuel: PositiveMass
    maximum_ramp: PositiveMass | None = None
    maximum_take_off: PositiveMass
    maximum_landing: PositiveMass


class FuelTanksTable(Table):
    """What the tanks hold at most: a mass, a volume, or both, of which the lesser governs."""

    capacity: PositiveMass | None = None
    volume: Annotated[Volume, Field(gt=0.0)] | None = None
    unusable: Annotated[Mass, Field(ge=0.0)] = 0.0

    @model_validator(mode="after")
    def _some_bound(self) -> FuelTanksTable:
        if self.capacity is None and self.volume is None:
            raise ValueError('give capacity = "9 t", or volume = "11000 L", or both')
        if self.capacity is not None and self.unusable >= self.capacity:
            raise ValueError("unusable is not below capacity")
        return self


class DragRiseTable(Table):
    drag_divergence_mach: Annotated[float, Field(gt=0.3, lt=1.2)]
    at_lift_coefficient: Annotated[float, Field(ge=0.0, le=1.5)] = 0.5
    fall_with_lift_coefficient: Annotated[float, Field(ge=0.0, le=1.0)] = 0.1


class DragPolarTable(Table):
    zero_lift_drag_coefficient: Annotated[float, Field(gt=0.0, le=0.5)]
    induced_drag_factor: Annotated[float, Field(gt=0.0, le=1.0)] | None = None
    oswald_efficiency: Annotated[float, Field(gt=0.2, le=1.2)] | None = None
    aspect_ratio: Annotated[float, Field(gt=0.3, le=60.0)] | None = None
    least_drag_lift_coefficient: Annotated[float, Field(ge=-0.5, le=1.0)] = 0.0
    drag_rise: DragRiseTable | None = None

    @model_validator(mode="after")
    def _one_induced_drag(self) -> DragPolarTable:
        pair = (self.oswald_efficiency, self.aspect_ratio)
        by_pair = None not in pair
        if (self.induced_drag_factor is None) != by_pair or (not by_pair and pair != (None, None)):
            raise ValueError(
                "give either induced_drag_factor, or oswald_efficiency with aspect_ratio"
            )
        return self


class LimitsTable(Table):
    maximum_lift_coefficient: Annotated[float, Field(gt=0.2, le=5.0)]
    take_off_lift_coefficient: Annotated[float, Field(gt=0.2, le=5.0)] | None = None
    approach_lift_coefficient: Annotated[float, Field(gt=0.2, le=5.0)] | None = None
    maximum_operating_mach: Annotated[float, Field(gt=0.1, le=3.0)]
    maximum_operating_calibrated_airspeed: Annotated[Speed, Field(gt=10.0)]


class AircraftFile(Table):
    """An aircraft file."""

    name: str
    note: str = ""
    engine_count: Annotated[int, Field(ge=1, le=12)]
    reference_engine: str = ""
    wing_area: Annotated[Area, Field(gt=0.0)]
    masses: MassesTable
    fuel_tanks: FuelTanksTable
    drag_polar: DragPolarTable
    limits: LimitsTable
    drag_factor: Factor = 1.0
    fuel_flow_factor: Factor = 1.0

    @model_validator(mode="after")
    def _masses_in_order(self) -> AircraftFile:
        masses = self.masses
        if masses.operating_empty > masses.maximum_zero_fuel:
            raise ValueError("masses.operating_empty is above masses.maximum_zero_fuel")
        if masses.maximum_zero_fuel > masses.maximum_take_off:
            raise ValueError("masses.maximum_zero_fuel is above masses.maximum_take_off")
        if masses.maximum_ramp is not None and masses.maximum_ramp < masses.maximum_take_off:
            raise ValueError("masses.maximum_ramp is below masses.maximum_take_off")
        if masses.maximum_landing > masses.maximum_take_off:
            raise ValueError("masses.maximum_landing is above masses.maximum_take_off")
        return self


def load_aircraft(path: str | Path) -> Aircraft:
    """Read an aircraft file; :class:`engine.errors.InputRefused` names file, key and value."""
    where = Path(path)
    written = check(read_toml(where), AircraftFile, str(where))
    masses, polar, limits = written.masses, written.drag_polar, written.limits
    tanks = written.fuel_tanks
    factor = polar.induced_drag_factor
    if factor is None:
        assert polar.oswald_efficiency is not None
        assert polar.aspect_ratio is not None
        factor = 1.0 / (pi * polar.oswald_efficiency * polar.aspect_ratio)
    rise = polar.drag_rise
    clean = limits.maximum_lift_coefficient
    assumed = defaults_used(written)
    for name, value in (
        ("limits.take_off_lift_coefficient", limits.take_off_lift_coefficient),
        ("limits.approach_lift_coefficient", limits.approach_lift_coefficient),
    ):
        if value is None:
            assumed.append(f"{name} = {clean} (as clean)")
    if masses.maximum_ramp is None:
        assumed.append("masses.maximum_ramp = maximum_take_off")
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
        polar=Polar(
            polar.zero_lift_drag_coefficient,
            factor,
            polar.least_drag_lift_coefficient,
            None if rise is None else DragRise(**rise.model_dump()),
        ),
        drag_factor=written.drag_factor,
        fuel_flow_factor=written.fuel_flow_factor,
        maximum_lift_coefficient=clean,
        take_off_lift_coefficient=limits.take_off_lift_coefficient or clean,
        approach_lift_coefficient=limits.approach_lift_coefficient or clean,
        engine_count=written.engine_count,
        maximum_operating_mach=limits.maximum_operating_mach,
        maximum_operating_calibrated_airspeed=limits.maximum_operating_calibrated_airspeed,
        reference_engine=written.reference_engine,
        assumed=tuple(assumed),
    )
