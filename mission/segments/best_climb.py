"""A climb along a best path, laid into spans by energy height."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

import numpy as np

from engine.quantities import FOOT
from mission.errors import CannotBeFlown
from mission.march.rules import hold_bounds, mach_at
from mission.march.span import Span, SpeedRule
from mission.paths.best_rate import best_rate_path
from mission.paths.climber import Climber
from mission.paths.energy_path import least_fuel_path, least_time_path
from mission.paths.path import EnergyPath, Fall, Piece, State
from mission.segments.acceleration import speed_span
from mission.segments.here import Here

if TYPE_CHECKING:
    from mission.segments.climb import Climb

_A_LITTLE_MORE = 1.001  # than the slowest speed, so that the path begins inside its bounds
_PATHS = {
    "best rate": best_rate_path,
    "least fuel": least_fuel_path,
    "least time": least_time_path,
}


def lay_path(climb: Climb, here: Here, start: float, end: float) -> tuple[list[Span], Here]:
    """Spans along the path found for the mass that the climb begins with, and where it ends."""
    assert climb.path is not None
    assert climb.to_mach is not None

    path, last = _PATHS[climb.path], State(end, climb.to_mach)

    def choose(mass: float) -> tuple[EnergyPath, float, float]:
        mach, slowest = _machs_here(here, start, mass)
        first = State(start, max(mach, slowest))
        return path(_climber(climb, here, mass), first, last), mach, slowest

    found, mach, slowest = here.choices.at(here.row, "path", here.mass_at(here.row), choose)
    if found.stop is not None and here.row in here.masses:
        stop = found.stop
        raise CannotBeFlown(
            f"the path of {climb.path} ends at {stop.state.pressure_altitude / FOOT:,.0f} ft and "
            f"Mach {stop.state.mach:.3f}: {stop.what} {stop.value:.4g} {stop.unit} against "
            f"{stop.bound:.4g}; end the climb lower or slower, or carry less"
        )
    spans: list[Span] = []
    if mach < slowest:
        first_speed = here.speed or SpeedRule("mach", mach)
        spans.append(speed_span(here, start, first_speed, SpeedRule("mach", slowest), climb.rating))
    for leg in found.legs:
        if isinstance(leg, Piece):
            spans.append(_energy_span(here, climb.rating, leg))
        elif isinstance(leg, Fall):
            ends = (SpeedRule("mach", leg.start.mach), SpeedRule("mach", leg.end.mach))
            spans.append(speed_span(here, leg.end.pressure_altitude, *ends, climb.rating))
    speed = SpeedRule("mach", climb.to_mach)
    return spans, replace(here, pressure_altitude=end, speed=speed, on_ground=False)


def _energy_span(here: Here, rating: str, leg: Piece) -> Span:
    """The span of a smooth piece of the path."""
    return here.span(
        "energy",
        rating=rating,
        start_altitude=leg.start.pressure_altitude,
        end_altitude=leg.end.pressure_altitude,
        start_speed=SpeedRule("mach", leg.start.mach),
        end_speed=SpeedRule("mach", leg.end.mach),
        path=leg,
        start_energy=float(leg.energy_height[0]),
        end_energy=float(leg.energy_height[-1]),
    )


def _climber(climb: Climb, here: Here, mass: float) -> Climber:
    """The aircraft as it climbs."""
    configured = here.configuration
    return Climber(
        aircraft=replace(
            here.aircraft,
            drag_factor=here.aircraft.drag_factor * configured.drag_factor,
            fuel_flow_factor=here.aircraft.fuel_flow_factor * configured.fuel_flow_factor,
        ),
        engine=here.world.engine,
        rating=climb.rating,
        mass=mass,
        air=here.air.condition,
        engine_count=here.aircraft.engine_count - configured.engines_out,
        air_kinks=here.air.kinks,
        extra_drag_area=configured.drag_area,
        ground_elevation=here.departure_elevation,
    )


def _machs_here(here: Here, altitude: float, mass: float) -> tuple[float, float]:
    """Mach number the climb begins with, and the slowest that the path may have."""
    air, masses = here.air.condition(np.array([altitude])), np.array([mass])
    slowest = float(hold_bounds(here.aircraft, air, masses)[0][0]) * _A_LITTLE_MORE
    if here.speed is None:
        return slowest, slowest
    return float(mach_at(here.speed, here.aircraft, air, masses)[0]), slowest
