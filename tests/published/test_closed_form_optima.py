"""Best speeds and levels found by search against the closed forms of a parabolic polar.

Consumption is constant, thrust falls with a power of density. The searches ask for 1e-4 in speed or
lift coefficient; they are held to ten times less here.
"""

from __future__ import annotations

from dataclasses import replace
from math import log, sqrt
from pathlib import Path

import numpy as np
import pytest
from mission_files import aircraft_content, engine_content, load_all, mission_content

from engine.atmosphere import flight_condition
from mission.air import Air
from mission.questions.point import Point, point
from mission.steady.best_levels import best_altitude, climb_level, highest_level
from mission.steady.best_speeds import (
    best_endurance_mach,
    long_range_mach,
    maximum_level_mach,
    maximum_range_mach,
)
from mission.steady.climbing import best_climb_mach, best_glide_mach, least_sink_mach
from mission.steady.level_flight import LevelFlight, Subject
from mission.steady.speed_range import speed_range

NICOLAI = (
    "L. M. Nicolai and G. E. Carichner, Fundamentals of Aircraft and Airship Design, vol. I "
    "(2010), table 3.2; D. P. Raymer, Aircraft Design: A Conceptual Approach, 6th ed., chapter 17; "
    "read at second hand"
)
TURN = (
    "D. P. Raymer, Aircraft Design: A Conceptual Approach, 6th ed., chapter 17, turn rate, radius "
    "and sustained load factor; read at second hand"
)
F104 = (
    "L. M. Nicolai and G. E. Carichner, Fundamentals of Aircraft and Airship Design, vol. I "
    "(2010), example with equation 3.42, F-104G at M 0.8 and 20,000 ft; read at second hand"
)
BUSINESS_JET = (
    "J. D. Anderson, Aircraft Performance and Design, chapter 5, business jet: inputs from memory, "
    "179.8 ft/s at 747.3 ft/s and L/D 14.43 from them by the closed forms; own arithmetic"
)
CJ_1 = (
    "J. D. Anderson, Introduction to Flight, chapter 6, CJ-1: level speeds, rate of climb and "
    "ceilings read off its graphs; from memory"
)
ENERGY = (
    "D. P. Raymer, Aircraft Design: A Conceptual Approach, 6th ed., section 17.6.3: energy height "
    "at M 0.9 and 30,000 ft; read at second hand"
)
LEVEL = (
    "greatest V L/D at a Mach number held: at the best lift-to-drag ratio, CL = sqrt(CD0/K), so "
    "that weight over pressure is 0.7 M^2 S CL; own arithmetic"
)
G, POUND, POUND_FORCE, FOOT = 9.80665, 0.45359237, 4.4482216152605, 0.3048
CD0, K, AREA = 0.0175, 0.042, 62.0
LEVELS = np.array([[0.0], [4000.0], [8000.0], [11000.0]])
MASSES = np.array([16e3, 20e3, 24e3])
CLOSE = 1e-5


def subject(
    folder: Path, *, exponent: float = 0.8, thrust: str = "90 kN", **plane: object
) -> Subject:
    """The test twin without limits that matter, with the engine of constant consumption."""
    limits = {
        "maximum_lift_coefficient": 5.0,
        "maximum_operating_mach": 0.95,
        "maximum_operating_calibrated_airspeed": "900 kt",
    }
    _, aircraft, engine = load_all(
        folder,
        aircraft_content(limits=limits, **plane),
        engine_content(static_thrust=thrust, density_exponent=exponent),
        mission_content([{"kind": "cruise", "distance": "100 km", "mach": 0.5,
                          "pressure_altitude": "5000 m"}]),
    )  # fmt: skip
    return Subject(aircraft, engine, Air())


def level(folder: Path) -> LevelFlight:
    return subject(folder).level_flight(LEVELS, MASSES, "cruise")


@pytest.mark.source(NICOLAI)
def test_best_range_at_one_altitude(tmp_path: Path) -> None:
    found = maximum_range_mach(speed_range(level(tmp_path)))
    assert found.is_flyable.all()
    assert found.lift_coefficient == pytest.approx(
        np.full(found.mach.shape, sqrt(CD0 / (3.0 * K))), rel=CLOSE
    )
    assert found.lift_to_drag == pytest.approx(
        np.full(found.mach.shape, sqrt(3.0) / 2.0 * 0.5 / sqrt(CD0 * K)), rel=CLOSE
    )


@pytest.mark.source(NICOLAI)
def test_best_endurance_and_its_speed_beside_that_of_best_range(tmp_path: Path) -> None:
    speeds = speed_range(level(tmp_path))
    longest, furthest = best_endurance_mach(speeds), maximum_range_mach(speeds)
    assert longest.lift_coefficient == pytest.approx(
        np.full(longest.mach.shape, sqrt(CD0 / K)), rel=CLOSE
    )
    assert furthest.mach / longest.mach == pytest.approx(
        np.full(longest.mach.shape, 3.0**0.25), rel=CLOSE
    )


@pytest.mark.source(NICOLAI)
def test_long_range_is_99_percent_on_the_fast_side(tmp_path: Path) -> None:
    """V over drag, with x the speed over that of least drag: x / (x^2 + x^-2), 99 % of its peak."""
    speeds = speed_range(level(tmp_path))
    best = maximum_range_mach(speeds)
    found = long_range_mach(speeds, best)
    flight = speeds.flight
    least = np.sqrt(flight.weight / (0.7 * flight.air.static_pressure * AREA * sqrt(CD0 / K)))
    x = found.mach / least
    share = (x / (x**2 + x**-2)) / (3.0**0.75 / 4.0)
    assert share == pytest.approx(np.full(x.shape, 0.99), abs=1e-6)
    assert (found.mach > best.mach).all()


@pytest.mark.source(NICOLAI)
def test_best_climb(tmp_path: Path) -> None:
    flight = subject(tmp_path, thrust="30 kN").level_flight(LEVELS, MASSES, "climb")
    found = best_climb_mach(flight)
    thrust = flight.at_rating(found.mach[None], np.ones(found.mach.shape, bool)).thrust[0]
    weight, density = flight.weight, flight.air.density
    load = thrust / weight
    speed = np.sqrt(
        weight / AREA / (3.0 * density * CD0) * (load + np.sqrt(load**2 + 12.0 * CD0 * K))
    )
    inside = speed / flight.air.speed_of_sound < 0.95
    assert inside.sum() >= 9
    assert (found.mach * flight.air.speed_of_sound)[inside] == pytest.approx(
        speed[inside], rel=CLOSE
    )


@pytest.mark.source(NICOLAI)
def test_glides(tmp_path: Path) -> None:
    flight = level(tmp_path)
    best, least = best_glide_mach(flight), least_sink_mach(flight)
    assert best.lift_coefficient == pytest.approx(
        np.full(best.mach.shape, sqrt(CD0 / K)), rel=CLOSE
    )
    assert least.lift_coefficient == pytest.approx(
        np.full(best.mach.shape, sqrt(3.0 * CD0 / K)), rel=CLOSE
    )
    # The book's 0.76 is 3^-0.25.
    assert least.mach / best.mach == pytest.approx(np.full(best.mach.shape, 0.76), abs=5e-4)


@pytest.mark.source(LEVEL)
def test_best_level_at_the_greatest_operating_mach_number(tmp_path: Path) -> None:
    asked = subject(tmp_path, thrust="200 kN")
    held = replace(asked.aircraft, maximum_operating_mach=0.74)
    masses = np.array([16e3, 19e3, 22e3])
    found = best_altitude(replace(asked, aircraft=held), masses)
    coefficient = sqrt(CD0 / K)
    assert found.speed.mach == pytest.approx(np.full(3, 0.74), rel=1e-9)
    # The lift coefficient moves by 1.6e-4 a metre: this is a few centimetres of altitude.
    assert found.speed.lift_coefficient == pytest.approx(np.full(3, coefficient), rel=CLOSE)
    pressure = masses * G / (0.7 * 0.74**2 * AREA * coefficient)
    height = 11000.0 - 287.05287 * 216.65 / G * np.log(pressure / 22632.0)
    assert (height > 11000.0).all()
    assert found.pressure_altitude == pytest.approx(height, abs=0.5)
    expected = 0.7 * 101325.0 * 0.74**2 * AREA * coefficient
    assert found.weight_over_pressure_ratio == pytest.approx(np.full(3, expected), rel=1e-4)


# --- turns and excess power, at one point -----------------------------------------------------


def fighter(folder: Path) -> Point:
    """18,000 lb at M 0.8, 20,000 ft, with 10,000 lb of thrust and 2,086 lb of drag."""
    pressure = 101325.0 * (1.0 - 0.0065 * 20000.0 * FOOT / 288.15) ** 5.255880
    area = 2086.0 * POUND_FORCE / (0.7 * pressure * 0.64) / 18.0
    asked = subject(
        folder,
        exponent=0.0,
        thrust="10000 lbf",
        engine_count=1,
        wing_area="18 m**2",
        drag_polar={"zero_lift_drag_coefficient": area, "induced_drag_factor": 1e-9},
    )
    return point(
        asked.aircraft, asked.engine, flight_condition(20000.0 * FOOT, 0.8), 18000.0 * POUND
    )


@pytest.mark.source(F104)
def test_specific_excess_power(tmp_path: Path) -> None:
    at = fighter(tmp_path).at_ratings
    # 364 ft/s: half the last digit, and the book's speed of 829 ft/s for 829.5 (0.06 %).
    power = at.excess_power[at.names.index("climb")]
    assert power / FOOT == pytest.approx(364.0, abs=0.5 + 0.25)


@pytest.mark.source(TURN)
def test_sustained_turn(tmp_path: Path) -> None:
    """n = (T/W)(L/D) at the turn's own lift; rate g sqrt(n^2 - 1)/V, radius V^2 over it."""
    asked = subject(tmp_path, thrust="30 kN")
    strong = replace(asked.aircraft, maximum_load_factor=9.0)
    mass, flight = 17000.0, flight_condition(5000.0, 0.5)
    at = point(strong, asked.engine, flight, mass).at_ratings
    i = at.names.index("take_off")
    factor, thrust, speed = at.load_factor[i], at.thrust[i], float(flight.true_airspeed)
    weight = mass * G
    force = 0.7 * float(flight.static_pressure) * 0.25 * AREA
    lift = factor * weight / force
    assert at.load_limit[i] == "thrust"
    assert factor == pytest.approx(thrust / weight * lift / (CD0 + K * lift**2), rel=1e-9)
    by_hand = sqrt((thrust / force - CD0) / K) * force / weight
    assert factor == pytest.approx(by_hand, rel=1e-9)
    assert at.turn_rate[i] == pytest.approx(G * sqrt(factor**2 - 1.0) / speed, rel=1e-12)
    assert at.turn_radius[i] == pytest.approx(speed**2 / (G * sqrt(factor**2 - 1.0)), rel=1e-12)


@pytest.mark.source(ENERGY)
def test_energy_height(tmp_path: Path) -> None:
    asked = subject(tmp_path)
    found = point(asked.aircraft, asked.engine, flight_condition(30000.0 * FOOT, 0.9), 18000.0)
    # 42,447 ft: the book's speed of sound of 994.7 ft/s is geometric, 0.02 %, which is 5 ft.
    assert found.energy_height / FOOT == pytest.approx(42447.0, abs=10.0)


# --- J. D. Anderson's jets --------------------------------------------------------------------


def anderson(
    folder: Path,
    weight: float,
    area: float,
    polar: tuple[float, float],
    thrust: float,
    **more: float,
) -> Subject:
    """An aircraft of a weight [lb], wing area [ft2], polar and thrust [lbf] of each of its two."""
    return subject(
        folder,
        thrust=f"{thrust} lbf",
        wing_area=f"{area * FOOT**2:.9f} m**2",
        drag_polar={"zero_lift_drag_coefficient": polar[0], "induced_drag_factor": polar[1]},
        masses={"operating_empty": f"{0.5 * weight} lb", "maximum_zero_fuel": f"{weight} lb",
                "maximum_ramp": f"{weight} lb", "maximum_take_off": f"{weight} lb",
                "maximum_landing": f"{weight} lb"},
        **more,
    )  # fmt: skip


@pytest.mark.source(BUSINESS_JET)
def test_business_jet(tmp_path: Path) -> None:
    asked = anderson(tmp_path, 73000.0, 950.0, (0.015, 0.08), 13850.0)
    flight = asked.level_flight(np.array(0.0), np.array(73000.0 * POUND), "climb")
    climb = best_climb_mach(flight)
    # To the digits given, and sea-level density 1.225 for 0.002377 slug/ft3 (0.003 %).
    assert climb.rate_of_climb / FOOT == pytest.approx(179.8, abs=0.06)
    assert climb.mach * flight.air.speed_of_sound / FOOT == pytest.approx(747.3, abs=0.1)
    assert best_glide_mach(flight).lift_to_drag == pytest.approx(14.43, abs=0.005)


@pytest.fixture
def cj_1(tmp_path: Path) -> Subject:
    """Two engines whose thrust falls with density; 1/(pi e AR) from its span and area."""
    induced = 1.0 / (np.pi * 0.81 * 53.3**2 / 318.0)
    return anderson(tmp_path, 19815.0, 318.0, (0.02, induced), 3650.0, exponent=1.0)


CJ_1_MASS = np.array(19815.0 * POUND)


@pytest.mark.source(CJ_1)
@pytest.mark.parametrize(("feet", "speed"), [(0.0, 975.0), (22000.0, 965.0)])
def test_cj_1_greatest_level_speed(cj_1: Subject, feet: float, speed: float) -> None:
    flight = cj_1.level_flight(np.array(feet * FOOT), CJ_1_MASS, "cruise")
    found = maximum_level_mach(speed_range(flight))
    # Crossings of two curves read off a graph to about half a per cent.
    assert found.true_airspeed / FOOT == pytest.approx(speed, rel=5e-3)
    assert found.thrust_margin == pytest.approx(0.0, abs=1e-5)


@pytest.mark.source(CJ_1)
def test_cj_1_climb_and_ceilings(cj_1: Subject) -> None:
    climb = best_climb_mach(cj_1.level_flight(np.array(0.0), CJ_1_MASS, "climb"))
    # "about 8,100 ft/min near 570 ft/s", off a graph.
    assert climb.rate_of_climb * 60.0 / FOOT == pytest.approx(8100.0, abs=50.0)
    masses = CJ_1_MASS[None]
    service = climb_level(cj_1, masses, 100.0 * FOOT / 60.0).pressure_altitude
    absolute = highest_level(cj_1, masses).pressure_altitude
    # 48,000 and 49,000 ft, to the thousand, from a straight line through rates of climb.
    assert service / FOOT == pytest.approx(48000.0, abs=500.0)
    assert absolute / FOOT == pytest.approx(49000.0, abs=500.0)


@pytest.mark.source(CJ_1)
def test_cj_1_absolute_ceiling_by_hand(cj_1: Subject) -> None:
    """Where the thrust left is that of the best lift-to-drag ratio: own closed form beside it."""
    polar = cj_1.aircraft.polar
    zero_lift, induced, _ = polar.terms(np.asarray(1.0), np.asarray(0.5))
    best = 0.5 / sqrt(float(zero_lift) * float(induced))
    density = float(CJ_1_MASS) * G / best / (2.0 * 3650.0 * POUND_FORCE) * 1.225
    height = 11000.0 + 287.05287 * 216.65 / G * log(0.36391 / density)
    found = highest_level(cj_1, CJ_1_MASS[None]).pressure_altitude
    assert found == pytest.approx(height, abs=1.0)
