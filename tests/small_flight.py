"""A flight made up by hand, with round numbers, to try screens and records on.

Nothing here is computed by the program, so that every number on a screen can be worked out with a
pencil: cruise at 200 m/s for 1,000 s on 0.5 kg/s, a third of its thrust left to the rating.
"""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from mission.outputs.setting import Setting
from mission.reserves.items import Hold, ShareOfTripFuel
from mission.reserves.registry import Rule
from mission.results import (
    CrossCheck,
    Failure,
    Flight,
    Margin,
    ReserveItem,
    SegmentLog,
    Steps,
    Totals,
)

PAPER_RULE = Rule("paper rule", "", "", (ShareOfTripFuel(0.5), Hold(1800.0)))
FOOT, GRAVITY = 0.3048, 9.80665
SETTING = Setting(payload=1500.0, headwind=0.0, engine_count=2, is_fuel_as_needed=True)


def steps(
    *,
    elapsed: list[float],
    altitude: float,
    mach: float,
    speed: float,
    mass: list[float],
    lift_to_drag: float,
    thrust: float,
    fuel_flow: float,
    rating_thrust: float,
) -> Steps:
    """Steps of a level segment; no lift and drag where the lift-to-drag ratio is zero."""
    weight = GRAVITY * np.array(mass)
    lift = weight if lift_to_drag else 0.0 * weight
    level = np.ones(len(mass))
    return Steps(
        elapsed_time=np.array(elapsed),
        pressure_altitude=altitude * level,
        mach=mach * level,
        true_airspeed=speed * level,
        mass=np.array(mass),
        lift=lift,
        weight=weight,
        drag=lift / lift_to_drag if lift_to_drag else lift,
        thrust=thrust * level,
        fuel_flow=fuel_flow * level,
        flight_path_angle=0.0 * level,
        rating_thrust=rating_thrust * level,
        level_drag=lift / lift_to_drag if lift_to_drag else lift,
        held_by=np.full(len(mass), ""),
    )


def segment(
    name: str, kind: str, rating: str, flown: Steps, *, distance: float, purpose: str = "mission"
) -> SegmentLog:
    """A row that burns what its masses say; 600 kg of fuel are left at 9,400 kg."""
    first, last = float(flown.mass[0]), float(flown.mass[-1])
    return SegmentLog(
        name=name,
        kind=kind,
        purpose=purpose,
        rating=rating,
        fuel=first - last,
        time=float(flown.elapsed_time[-1] - flown.elapsed_time[0]),
        ground_distance=distance,
        air_distance=distance,
        mass_start=first,
        mass_end=last,
        mass_released=0.0,
        mass_received=0.0,
        fuel_left=last - 8800.0,
        steps=flown,
        impulse=float(flown.thrust[0] * (flown.elapsed_time[-1] - flown.elapsed_time[0])),
    )


def small_flight() -> Flight:
    """Ten minutes of taxi, one cruise of 200 km, and a hold as reserve."""
    taxi = steps(
        elapsed=[0.0, 600.0], altitude=0.0, mach=0.0, speed=0.0, mass=[10000.0, 9940.0],
        lift_to_drag=0.0, thrust=4000.0, fuel_flow=0.1, rating_thrust=4000.0,
    )  # fmt: skip
    cruise = steps(
        elapsed=[600.0, 1100.0, 1600.0], altitude=35000.0 * FOOT, mach=0.7, speed=200.0,
        mass=[9940.0, 9690.0, 9440.0], lift_to_drag=16.0, thrust=20000.0, fuel_flow=0.5,
        rating_thrust=30000.0,
    )  # fmt: skip
    hold = steps(
        elapsed=[1600.0, 3400.0], altitude=1500.0 * FOOT, mach=0.3, speed=100.0,
        mass=[9440.0, 9080.0], lift_to_drag=15.0, thrust=10000.0, fuel_flow=0.2,
        rating_thrust=40000.0,
    )  # fmt: skip
    return Flight(
        mission="short hop",
        aircraft="paper plane",
        engine="paper engine",
        day=10.0,
        totals=Totals(
            block_fuel=560.0, trip_fuel=500.0, reserve_fuel=640.0, loaded_fuel=1200.0,
            fuel_left=640.0, fuel_margin=0.0, block_time=1600.0, trip_time=1000.0,
            ground_distance=200e3, air_distance=200e3, ramp_mass=10000.0, takeoff_mass=9940.0,
            landing_mass=9440.0, integration_error=0.25,
        ),
        segments=(
            segment("taxi", "taxi", "ground_idle", taxi, distance=0.0),
            segment("long cruise", "cruise", "cruise", cruise, distance=200e3),
            segment("final hold", "loiter", "cruise", hold, distance=0.0, purpose="reserve"),
        ),
        reserves=(
            ReserveItem("contingency", 280.0, 4.0, "five percent, say"),
            ReserveItem("final reserve", 360.0, 5.0, "30 min hold, flown"),
        ),
        cross_check=(
            CrossCheck("long cruise", 500.0, 499.0, {"change along the cruise": 1.0}),
            CrossCheck("whole trip", 500.0, 495.0, {"loiter": 0.0, "climb": 12.0, "descent": -7.0}),
        ),
        margins=(
            Margin("thrust over drag", 1.5, 1.0, "", "long cruise", True),
            Margin("landing mass", 9440.0, 9500.0, "kg", "", True),
        ),
        assumed=("mission: headwind = 0.0", "engine: fuel.lower_heating_value = 43031900.0"),
        warnings=("long cruise: something to know",),
        failure=None,
        reserve_rule=PAPER_RULE,
    )  # fmt: skip


def failed_flight() -> Flight:
    """The same, short of thrust half way along the cruise."""
    failure = Failure(
        "long cruise", 1, "thrust at cruise rating against drag", 20000.0, 25000.0, "N", "fly lower"
    )
    return replace(small_flight(), failure=failure, cross_check=())


def overloaded_flight() -> Flight:
    """The same, too heavy before it starts."""
    failure = Failure("taxi", 0, "ramp mass", 10000.0, 9800.0, "kg", "carry less")
    return replace(small_flight(), failure=failure, cross_check=())
