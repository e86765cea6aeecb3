"""Climbs by energy height against a published fighter and a closed form, from input files."""

from __future__ import annotations

import csv
from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path

import numpy as np
import pytest
from climb_quadrature import of_path
from mission_files import (
    Content,
    aircraft_content,
    engine_content,
    mission_content,
    segment,
    write,
)
from numpy.typing import NDArray

from engine import load_engine
from engine.atmosphere import flight_condition
from mission.aircraft import load_aircraft
from mission.airspeeds import energy_height
from mission.flight import fly
from mission.mission_file import load_mission
from mission.paths.best_rate import best_rate_path
from mission.paths.climber import Climber
from mission.paths.energy_path import least_fuel_path, least_time_path
from mission.paths.path import EnergyPath, Exchange, Piece, State

Array = NDArray[np.float64]
BRYSON = (
    "A. E. Bryson, M. N. Desai and W. C. Hoffman, Energy-State Approximation in Performance "
    "Optimization of Supersonic Aircraft, J. Aircraft 6(6), 1969, 481-488: tables and end states "
    "read at second hand, least time 277 s; grade from memory"
)
BETTS = (
    "J. T. Betts, Practical Methods for Optimal Control, minimum time to climb with the tables of "
    "Bryson, Desai and Hoffman as a point mass, 324.975 s; grade from memory"
)
AGAIN = (
    "The tables of Bryson, Desai and Hoffman (J. Aircraft 6(6), 1969) evaluated apart from this "
    "program: straight lines in thrust, steps of 50 ft of energy height; own arithmetic"
)
RAYMER = (
    "D. P. Raymer, Aircraft Design: A Conceptual Approach, ch. 17, speed of best rate of climb of "
    "a jet; read at second hand"
)
FOOT, POUND, POUND_FORCE, GRAVITY = 0.3048, 0.45359237, 4.4482216152605, 9.80665
IMPULSE = 1600.0  # s: thrust over weight flow of fuel
WEIGHT = 42000.0  # lb, at the start
EMPTY = 28000.0  # lb, invented: no part of the climb asks for it
HERE = Path(__file__).parent
Fill = Callable[[Array, Array], Array]
# Levels below the greatest thrust are invented, for a table has to have some; none is asked for.
LEVELS = {"flight_idle": 0.05, "0.5": 0.5, "1.0": 1.0, "maximum_continuous": 1.0}


def read(name: str) -> tuple[list[str], Array]:
    """Header and numbers of a table, NaN for a blank."""
    lines = (HERE / name).read_text(encoding="utf-8").splitlines()
    header, *rows = csv.reader(line for line in lines if not line.startswith("#"))
    return header, np.array([[float(cell or "nan") for cell in row] for row in rows])


def nearest(mach: Array, thrust: Array) -> Array:
    """Blanks of one altitude filled with the value at the nearest Mach number."""
    known = np.isfinite(thrust)
    return np.interp(mach, mach[known], thrust[known])


def drawn_on(mach: Array, thrust: Array) -> Array:
    """Blanks of one altitude on the straight line through the two nearest values, above zero."""
    known = np.flatnonzero(np.isfinite(thrust))
    filled = nearest(mach, thrust)
    for first, second, beyond in (
        (known[0], known[1], slice(None, known[0])),
        (known[-1], known[-2], slice(known[-1] + 1, None)),
    ):
        slope = (thrust[second] - thrust[first]) / (mach[second] - mach[first])
        filled[beyond] = np.maximum(thrust[first] + slope * (mach[beyond] - mach[first]), 200.0)
    return filled


@dataclass(frozen=True)
class Grid:
    """Thrust [lbf] over altitude [ft] and Mach number, (A, M)."""

    altitude: Array
    mach: Array
    thrust: Array


def published(fill: Fill) -> Grid:
    header, rows = read("fighter_thrust.csv")
    mach = rows[:, 0]
    columns = [fill(mach, 1000.0 * column) for column in rows[:, 1:].T]
    return Grid(np.array([float(name) for name in header[1:]]), mach, np.array(columns))


def on_straight_lines(grid: Grid) -> Grid:
    """The same on a grid so close that monotone cubics through it are straight lines."""
    altitude = np.arange(0.0, 70001.0, 1000.0)
    mach = np.round(np.arange(0.0, 1.801, 0.02), 2)
    rows = np.array([np.interp(mach, grid.mach, row) for row in grid.thrust])
    thrust = np.array([np.interp(altitude, grid.altitude, column) for column in rows.T]).T
    return Grid(altitude, mach, thrust)


def fighter(folder: Path, grid: Grid, *, polar: str = "monotone cubic") -> Climber:
    """The fighter from its files."""
    rows = ["pressure_altitude_m,mach,rating,net_thrust_n,fuel_flow_kg_per_s"]
    for i, altitude in enumerate((FOOT * grid.altitude).tolist()):
        for j, mach in enumerate(grid.mach.tolist()):
            for level, share in LEVELS.items():
                thrust = float(share * grid.thrust[i, j] * POUND_FORCE)
                fuel = thrust / (GRAVITY * IMPULSE)
                rows.append(f"{altitude!r},{mach!r},{level},{thrust!r},{fuel!r}")
    (folder / "thrust.csv").write_text("\n".join(rows) + "\n", encoding="utf-8")
    engine: Content = {
        "kind": "tabulated",
        "name": "fighter's",
        "points": "thrust.csv",
        "day": "ISA",
    }
    mach, slope, zero_lift, eta = read("fighter_polar.csv")[1].T
    masses = ("maximum_zero_fuel", "maximum_ramp", "maximum_take_off", "maximum_landing")
    aircraft = aircraft_content(
        name="fighter",
        engine_count=1,
        wing_area=f"{530.0 * FOOT**2!r} m**2",
        masses={"operating_empty": f"{EMPTY} lb", **dict.fromkeys(masses, f"{WEIGHT} lb")},
        fuel_tanks={"capacity": "14000 lb"},
        limits={
            "maximum_operating_mach": 1.8,
            "maximum_operating_calibrated_airspeed": "1000 kt",
        },
        drag_polar={
            "machs": mach.tolist(),
            "zero_lift_drag_coefficient": zero_lift.tolist(),
            "induced_drag_factor": (eta / slope).tolist(),
            "interpolation": polar,
        },
    )
    return Climber(
        aircraft=load_aircraft(write(folder, "aircraft", aircraft)),
        engine=load_engine(write(folder, "engine", engine)),
        rating="maximum_continuous",
        mass=WEIGHT * POUND,
        air=flight_condition,
        engine_count=1,
    )


def state(altitude: float, speed: float) -> State:
    """At an altitude [ft] and true airspeed [ft/s]."""
    sound = float(flight_condition(altitude * FOOT).speed_of_sound)
    return State(altitude * FOOT, speed * FOOT / sound)


START, END = state(0.0, 424.26), state(65600.0, 968.148)


def energy_of(place: State) -> float:
    """Energy height [m]."""
    speed = flight_condition(place.pressure_altitude, place.mach).true_airspeed
    return float(energy_height(place.pressure_altitude, speed))


def flown(who: Climber, path: EnergyPath) -> tuple[float, float]:
    """Time [s] and fuel [lb], mass falling from the start."""
    assert path.stop is None
    time, fuel = of_path(who, path, burns=True)
    return time, fuel / POUND


@pytest.fixture(scope="module")
def as_published(tmp_path_factory: pytest.TempPathFactory) -> Climber:
    return fighter(tmp_path_factory.mktemp("cubic"), published(nearest))


@pytest.fixture(scope="module")
def on_lines(tmp_path_factory: pytest.TempPathFactory) -> Climber:
    grid = on_straight_lines(published(nearest))
    return fighter(tmp_path_factory.mktemp("lines"), grid, polar="linear")


@pytest.mark.source(BRYSON)
def test_least_time_to_climb(as_published: Climber) -> None:
    time, _ = flown(as_published, least_time_path(as_published, START, END))
    # How thrust runs between points and through blanks is each author's own: 1 to 3 %.
    assert time == pytest.approx(277.0, rel=0.03)


def as_a_mission(folder: Path, who: Climber, path: str) -> tuple[float, float]:
    """Time [s] and fuel [lb] of the climb in a mission of its own, flown as any other."""
    short = {"from_mach": float(START.mach) - 1e-4, "to_mach": float(START.mach)}
    segments: list[Content] = [
        {"kind": "acceleration", "pressure_altitude": "0 ft", **short},
        {
            "kind": "climb",
            "path": path,
            "to": "65600 ft",
            "to_mach": float(END.mach),
            "rating": who.rating,
        },
    ]
    fuel = {"as_needed": None, "load": f"{WEIGHT - EMPTY} lb"}
    content = mission_content(segments, payload="0 kg", fuel=fuel)
    flight = fly(load_mission(write(folder, "mission", content)), who.aircraft, who.engine)
    assert flight.failure is None
    assert flight.totals.ramp_mass == pytest.approx(WEIGHT * POUND)
    climb = segment(flight, "climb")
    steps = climb.steps
    # The zoom takes no time and has no step: the last one has its energy.
    energy = energy_height(steps.pressure_altitude, steps.true_airspeed)
    assert energy[[0, -1]] == pytest.approx([energy_of(START), energy_of(END)], rel=1e-6)
    return climb.time, climb.fuel / POUND


@pytest.mark.source(BRYSON)
@pytest.mark.source(AGAIN)
def test_flown_as_a_mission(tmp_path: Path, as_published: Climber) -> None:
    time, fuel = as_a_mission(tmp_path, as_published, "least time")
    # 1 to 3 % for each author's own reading of the thrust, as above.
    assert time == pytest.approx(277.0, rel=0.03)
    assert (time, fuel) == pytest.approx((274.4, 4299.0), rel=0.03)


@pytest.mark.source(AGAIN)
def test_flown_as_a_mission_on_straight_lines(tmp_path: Path, on_lines: Climber) -> None:
    time, fuel = as_a_mission(tmp_path, on_lines, "least time")
    # Lift is weight there; in flight it is less by the cosine of the path, worth 0.4 % of time.
    assert (time, fuel) == pytest.approx((274.4, 4299.0), rel=0.006)


@pytest.mark.source(BETTS)
def test_no_point_mass_climbs_as_fast(as_published: Climber) -> None:
    """Exchanges that take no time, and lift that is weight, are to the path's advantage."""
    time, _ = flown(as_published, least_time_path(as_published, START, END))
    assert 0.8 * 324.975 < time < 324.975


@pytest.mark.source(AGAIN)
def test_time_and_fuel_on_straight_lines(on_lines: Climber) -> None:
    # The path is found here for one mass, there for each; and its steps of 50 ft at ties: 0.3 %.
    path = least_time_path(on_lines, START, END)
    assert flown(on_lines, path) == pytest.approx((274.4, 4299.0), rel=0.003)


@pytest.mark.source(AGAIN)
def test_way_of_least_time(on_lines: Climber) -> None:
    """A subsonic climb, a dive through Mach 1, a supersonic climb, and a zoom to the end."""
    legs = least_time_path(on_lines, START, END).legs
    level, climb, dive = legs[:3]
    assert isinstance(level, Piece)
    assert level.held_by == "ground elevation"
    assert isinstance(climb, Piece)
    assert 0.89 < climb.mach.min() < climb.mach.max() < 0.96
    assert isinstance(dive, Exchange)
    assert dive.kind == "dive"
    # "To about 29,400 ft": where two maxima tie, little in mass or thrust moves the place much.
    assert dive.start.pressure_altitude / FOOT == pytest.approx(29400.0, rel=0.05)
    assert dive.end.mach == pytest.approx(1.1, abs=0.05)
    zoom, last = legs[-1], legs[-2]
    assert isinstance(last, Piece)
    # Mach 1.31 at 26,000 ft and Mach 1.73 near 34,500 ft, as round as they are given.
    for mach, altitude in ((1.31, 26000.0), (1.73, 34500.0)):
        there = np.interp(mach, last.mach, last.pressure_altitude) / FOOT
        assert there == pytest.approx(altitude, abs=500.0), mach
    assert isinstance(zoom, Exchange)
    assert zoom.kind == "zoom"
    assert zoom.end == END


@pytest.mark.source(AGAIN)
def test_blanks_of_the_table_hardly_matter(tmp_path: Path, as_published: Climber) -> None:
    """What the header of the table says."""
    other = fighter(tmp_path, published(drawn_on))
    ours, theirs = (flown(who, least_time_path(who, START, END)) for who in (as_published, other))
    assert ours == pytest.approx((272.3, 4275.0), abs=0.5)
    assert theirs[0] - ours[0] == pytest.approx(-0.04, abs=0.01)
    assert theirs[1] - ours[1] == pytest.approx(1.3, abs=0.3)


@pytest.mark.source(AGAIN)
@pytest.mark.parametrize("find", [least_time_path, least_fuel_path])
def test_points_are_dense_enough_for_a_polar_given_at_nine_mach_numbers(
    as_published: Climber, find: Callable[[Climber, State, State], EnergyPath]
) -> None:
    """A thousandth if the first points were all; of what is made least, a hundred thousandth."""
    assert find(as_published, START, END).interpolation_cost < 1e-5


@pytest.mark.source(AGAIN)
def test_least_fuel_burns_less_and_takes_longer(as_published: Climber) -> None:
    fast = flown(as_published, least_time_path(as_published, START, END))
    frugal = flown(as_published, least_fuel_path(as_published, START, END))
    assert frugal[1] < 0.95 * fast[1]
    assert frugal[0] > 1.05 * fast[0]


@pytest.mark.source(RAYMER)
@pytest.mark.parametrize("share", [0.2, 0.3, 0.45])
def test_best_rate_at_constant_thrust(tmp_path: Path, share: float) -> None:
    """``V^2 = (W/S) / (3 rho CD0) [T/W + sqrt((T/W)^2 + 12 CD0 K)]``, T/W being ``share``."""
    mass, area, zero_lift, factor = 20000.0, 62.0, 0.0175, 0.042
    weight = mass * GRAVITY
    aircraft = aircraft_content(
        limits={
            "maximum_operating_mach": 2.9,
            "maximum_operating_calibrated_airspeed": "900 kt",
        }
    )
    engine = engine_content(static_thrust=f"{0.5 * share * weight!r} N", density_exponent=0.0)
    who = Climber(
        aircraft=load_aircraft(write(tmp_path, "aircraft", aircraft)),
        engine=load_engine(write(tmp_path, "engine", engine)),
        rating="take_off",
        mass=mass,
        air=flight_condition,
        engine_count=2,
    )
    path = best_rate_path(who, State(0.0, 0.4), State(9000.0, 0.7))
    assert path.stop is None
    for piece in path.pieces:
        if piece.held_by == "level acceleration":
            continue
        air = flight_condition(piece.pressure_altitude, piece.mach)
        bracket = share + np.sqrt(share**2 + 12.0 * zero_lift * factor)
        square = weight / area / (3.0 * air.density * zero_lift) * bracket
        np.testing.assert_allclose(air.true_airspeed, np.sqrt(square), rtol=1e-4)
