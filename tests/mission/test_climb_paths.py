"""Climb paths of least time, least fuel and best rate: what they are, and that they are best."""

from __future__ import annotations

import tempfile
from collections.abc import Callable
from dataclasses import dataclass, replace
from itertools import pairwise
from pathlib import Path

import numpy as np
import pytest
from climb_quadrature import cells, of_path, summed
from hypothesis import given, settings
from hypothesis import strategies as st
from mission_files import AIRCRAFT, CONSTANT_ENGINE, PROFILES, Content, merged, write

from engine import load_engine
from engine.atmosphere import FlightCondition, flight_condition
from engine.errors import InputRefused, OutOfRange
from engine.interface import Engine, EngineState
from mission.air import Air
from mission.aircraft import load_aircraft
from mission.airspeeds import (
    calibrated_airspeed,
    energy_height,
    mach_from_calibrated_airspeed,
    pressure_altitude_from_pressure,
)
from mission.forces import stall_mach
from mission.march.rules import SLOWEST_STALL_MULTIPLE
from mission.march.span import SLOWEST_CLIMB
from mission.paths.best_rate import best_rate_path
from mission.paths.climber import Climber, rates
from mission.paths.energy_path import least_fuel_path, least_time_path
from mission.paths.path import EnergyPath, Exchange, Piece, State
from mission.steady.climbing import best_climb_mach
from mission.steady.level_flight import LevelFlight

FOOT, KNOT = 0.3048, 1852.0 / 3600.0
START, END = State(0.0, 0.35), State(10500.0, 0.75)
PATHS = {"time": least_time_path, "fuel": least_fuel_path, "rate": best_rate_path}
FEW = settings(max_examples=6)


def climber(
    folder: Path,
    *,
    engine: Engine | Content | None = None,
    aircraft: Content | None = None,
    air: Air | None = None,
    **changes: object,
) -> Climber:
    """The test twin at 25 t on its constant-consumption engines, with changes."""
    here = air or Air()
    power = merged(CONSTANT_ENGINE, engine or {}) if not isinstance(engine, Engine) else engine
    known: dict[str, object] = {
        "aircraft": load_aircraft(write(folder, "aircraft", merged(AIRCRAFT, aircraft or {}))),
        "engine": power if isinstance(power, Engine) else load_engine(write(folder, "e", power)),
        "rating": "climb",
        "mass": 25000.0,
        "air": here.condition,
        "air_kinks": here.kinks,
        "engine_count": 2,
    }
    return Climber(**(known | changes))  # type: ignore[arg-type]


def table(folder: Path, thrust: Callable[[float, float], float]) -> Engine:
    """A tabulated engine of that thrust [N] over altitude [m] and Mach number."""
    lines = ["pressure_altitude_m,mach,rating,net_thrust_n,fuel_flow_kg_per_s"]
    for altitude in np.arange(0.0, 12001.0, 1000.0):
        for mach in np.arange(0.0, 0.901, 0.1):
            most = thrust(altitude, mach)
            for rating, share in (
                ("flight_idle", 0.05),
                ("0.5", 0.5),
                ("1.0", 1.0),
                ("climb", 1.0),
            ):
                lines.append(f"{altitude},{mach:.1f},{rating},{share * most},{2e-5 * share * most}")
    (folder / "points.csv").write_text("\n".join(lines) + "\n", encoding="utf-8")
    written: Content = {"kind": "tabulated", "name": "table", "points": "points.csv", "day": "ISA"}
    return load_engine(write(folder, "table", written))


def ends(leg: object) -> tuple[float, float]:
    assert isinstance(leg, Piece | Exchange)
    if isinstance(leg, Piece):
        return float(leg.energy_height[0]), float(leg.energy_height[-1])
    return leg.energy_height, leg.energy_height


def energy_of(who: Climber, state: State) -> float:
    """On a standard day."""
    here = who.air(np.array(state.pressure_altitude), np.array(state.mach))
    return float(energy_height(state.pressure_altitude, here.true_airspeed))


def check_continuous(who: Climber, path: EnergyPath, start: State, end: State) -> None:
    """Every leg begins where the one before it ends, in altitude, Mach number and energy."""
    states = [(leg.start, leg.end) for leg in path.legs]
    assert states[0][0].pressure_altitude == pytest.approx(start.pressure_altitude, abs=1e-3)
    assert states[-1][1].pressure_altitude == pytest.approx(end.pressure_altitude, abs=1e-3)
    for before, after in pairwise(states):
        there, here = before[1], after[0]
        assert here.pressure_altitude == pytest.approx(there.pressure_altitude, abs=1e-3)
        assert here.mach == pytest.approx(there.mach, abs=1e-6)
    energies = [ends(leg) for leg in path.legs]
    for before, after in pairwise(energies):
        assert after[0] == pytest.approx(before[1], abs=1e-6)
    for leg in path.legs:
        for state, energy in zip((leg.start, leg.end), ends(leg), strict=True):
            assert energy_of(who, state) == pytest.approx(energy, abs=1e-2)
    assert all(np.all(np.diff(piece.energy_height) > 0.0) for piece in path.pieces)


@pytest.fixture(scope="module")
def twin(tmp_path_factory: pytest.TempPathFactory) -> Climber:
    """The twin on a computed engine."""
    engine = load_engine(PROFILES / "straight_jet.toml")
    folder = tmp_path_factory.mktemp("twin")
    return climber(folder, engine=engine, mass=17000.0)


@pytest.fixture(scope="module")
def plain() -> Climber:
    """The twin with less thrust, which falls with density alone."""
    with tempfile.TemporaryDirectory() as folder:
        return climber(Path(folder), engine={"static_thrust": "38 kN"})


@dataclass
class Asked:
    """How often an engine was asked, and for how many states."""

    calls: int = 0
    states: int = 0


COSTS: dict[str, Asked] = {}


@pytest.fixture(scope="module")
def flown(twin: Climber) -> dict[str, EnergyPath]:
    """Its paths; what they ask of the engine is counted on the way."""
    found, real = {}, type(twin.engine).at
    for name, find in PATHS.items():
        count = COSTS[name] = Asked()

        def at(
            engine: Engine, flight: FlightCondition, count: Asked = count, **asked: object
        ) -> EngineState:
            count.calls, count.states = count.calls + 1, count.states + flight.mach.size
            return real(engine, flight, **asked)  # type: ignore[arg-type]

        with pytest.MonkeyPatch.context() as patch:
            patch.setattr(type(twin.engine), "at", at)
            found[name] = find(twin, START, END)
    return found


@pytest.mark.parametrize("name", PATHS)
@pytest.mark.usefixtures("flown")
def test_a_path_asks_a_bounded_number_of_states(name: str) -> None:
    """At 50 microseconds a state, and 15 ms a call of few, about a second."""
    assert 0 < COSTS[name].calls <= 45
    assert 1000 < COSTS[name].states <= 16000


@pytest.mark.parametrize("name", PATHS)
def test_legs_follow_each_other(twin: Climber, flown: dict[str, EnergyPath], name: str) -> None:
    path = flown[name]
    assert path.stop is None
    assert path.falls == ()
    assert path.unanswered == 0
    check_continuous(twin, path, START, END)
    assert path.exchanges[-1].kind == "zoom"


@pytest.mark.parametrize("name", PATHS)
def test_points_are_those_of_the_path(flown: dict[str, EnergyPath], name: str) -> None:
    for piece in flown[name].pieces:
        altitude, mach = piece.at(piece.energy_height)
        np.testing.assert_allclose(altitude, piece.pressure_altitude, atol=1e-6)
        np.testing.assert_allclose(mach, piece.mach, atol=1e-9)
        first, last = piece.energy_height[[0, -1]]
        for beyond in (first - 1e-3, last + 1e-3):
            with pytest.raises(OutOfRange, match=r"energy height = .* m is outside"):
                piece.at(np.array([first, beyond]))


@pytest.mark.parametrize("name", ["time", "fuel"])
def test_interpolation_costs_next_to_nothing(
    twin: Climber, flown: dict[str, EnergyPath], name: str
) -> None:
    """Between its points the path is as good as the best of 3,000 points of each energy line."""
    path = flown[name]
    energy, step = (
        np.concatenate(part)
        for part in zip(*(cells(piece.energy_height[::8]) for piece in path.pieces), strict=True)
    )
    altitude = np.linspace(0.0, 13000.0, 3000)[:, None] + 0.0 * energy
    air = twin.air(altitude, np.zeros(altitude.shape))
    kinetic = np.maximum(energy - altitude, 0.0)
    mach = np.sqrt(2.0 * 9.80665 * kinetic) / air.speed_of_sound
    slow = 1.2 * stall_mach(twin.aircraft, air, np.array(twin.mass), 1.5)
    fast = mach_from_calibrated_airspeed(340.0 * KNOT, air.static_pressure)
    is_allowed = (mach >= slow) & (mach <= np.minimum(fast, 0.82))
    found = rates(twin, air.at(is_allowed).with_mach(mach[is_allowed]))
    greatest = np.zeros(altitude.shape)
    goal = found.excess_power / (found.fuel_flow if name == "fuel" else 1.0)
    greatest[is_allowed] = goal
    least = float(np.sum(step / greatest.max(axis=0)))
    ours = 0.0
    for piece in path.pieces:
        here = (energy >= piece.energy_height[0]) & (energy <= piece.energy_height[-1])
        if not here.any():
            continue
        there = rates(twin, twin.air(*piece.at(energy[here])))
        value = there.excess_power / (there.fuel_flow if name == "fuel" else 1.0)
        ours += float(np.sum(step[here] / value))
    # A hair less than the scan, which steps by 4 m; a hundred thousandth is a tenth of what is
    # promised, and what the path itself says it costs.
    assert ours == pytest.approx(least, rel=1e-5)
    assert path.interpolation_cost < 1e-5


@pytest.mark.parametrize("name", PATHS)
def test_a_path_keeps_to_the_bounds_between_its_points_too(tmp_path: Path, name: str) -> None:
    """Airspeed, Mach number and a dynamic pressure that each hold it somewhere; and the ground."""
    limits = {
        "maximum_operating_mach": 0.6,
        "maximum_operating_calibrated_airspeed": "240 kt",
        "maximum_lift_coefficient": 1.2,
        "maximum_dynamic_pressure": "8100.3125 Pa",
    }
    most = 0.5 * 1.225 * 115.0**2
    who = climber(
        tmp_path,
        aircraft={"limits": limits},
        engine={"static_thrust": "90 kN"},
        ground_elevation=300.0,
        air=Air((12.0,)),
    )
    path = PATHS[name](who, State(300.0, 0.32), State(9000.0, 0.6))
    assert path.stop is None
    held = {piece.held_by for piece in path.pieces}
    assert {"dynamic pressure", "maximum operating Mach number"} <= held
    for piece in path.pieces:
        if piece.held_by == "level acceleration":
            continue
        altitude, mach = piece.at(np.linspace(*piece.energy_height[[0, -1]], 200))
        flight = who.air(altitude, mach)
        slow = 1.2 * stall_mach(who.aircraft, flight, np.array(who.mass), 1.2)
        # The slack of the flight's own limits.
        assert np.all(mach <= 0.6 * (1.0 + 1e-6))
        airspeed = calibrated_airspeed(mach, flight.static_pressure)
        assert np.all(airspeed <= 240.0 * KNOT * (1.0 + 1e-6))
        assert np.all(0.7 * flight.static_pressure * mach**2 <= most * (1.0 + 1e-6))
        assert np.all(mach >= slow * (1.0 - 1e-6))
        assert np.all(altitude >= 300.0 - 1e-6)


@pytest.mark.parametrize("name", PATHS)
def test_buffet_holds_a_path_and_ends_it_below_its_corner(tmp_path: Path, name: str) -> None:
    """Where only one speed is free of buffet no climb goes on; a path may end a little below."""
    machs, onset = [0.2, 0.6, 0.7, 0.8, 0.85], [1.3, 0.95, 0.8, 0.5, 0.3]
    limits: Content = {"buffet": {"machs": machs, "lift_coefficients": onset}}
    power: Content = {"static_thrust": "120 kN"}
    who = climber(tmp_path, aircraft={"limits": limits}, engine=power, rating="take_off")
    path = PATHS[name](who, State(0.0, 0.4), State(15000.0, 0.7))
    assert path.stop is not None
    assert path.stop.what == "buffet onset at 1.3 g"
    assert path.stop.value <= path.stop.bound
    assert "buffet onset at 1.3 g" in {piece.held_by for piece in path.pieces}
    for piece in path.pieces:
        altitude, mach = piece.at(np.linspace(*piece.energy_height[[0, -1]], 200))
        dynamic = 0.7 * who.air(altitude, mach).static_pressure * mach**2
        coefficient = who.mass * 9.80665 / (dynamic * who.aircraft.wing_area)
        share = 1.3 * coefficient / np.interp(mach, machs, onset)
        # Bounds are tabulated every 5 m, and the last step ends in the corner itself.
        is_last = altitude > path.pieces[-1].end.pressure_altitude - 10.0
        assert np.all(share <= np.where(is_last, 1.0 + 1e-3, 1.0 + 1e-6))
    fine = np.linspace(0.2, 0.85, 10001)
    borne = np.max(np.interp(fine, machs, onset) * fine**2)
    pressure = 1.3 * who.mass * 9.80665 / (0.7 * borne * who.aircraft.wing_area)
    corner = float(pressure_altitude_from_pressure(pressure))
    assert corner - 400.0 < path.pieces[-1].end.pressure_altitude < corner + 5.0


@pytest.mark.parametrize("name", ["time", "fuel"])
def test_a_start_slower_than_the_least_speed_is_said(tmp_path: Path, name: str) -> None:
    who = climber(tmp_path)
    start = State(0.0, 0.2)
    path = PATHS[name](who, start, END)
    air = flight_condition(0.0, 0.2)
    slowest = 1.2 * stall_mach(who.aircraft, air, np.array(who.mass), 1.5) * air.speed_of_sound
    assert path.legs == ()
    assert path.stop is not None
    assert path.stop.what == "1.2 times stall speed"
    assert path.stop.energy_height == pytest.approx(energy_of(who, start))
    assert path.stop.value == pytest.approx(float(air.true_airspeed), rel=1e-6)
    assert path.stop.bound == pytest.approx(float(slowest), rel=1e-9)


@pytest.mark.parametrize("name", PATHS)
def test_a_ceiling_ends_the_path_where_too_little_power_is_left(plain: Climber, name: str) -> None:
    heavy = replace(plain, least_rate=2.0)
    path = PATHS[name](heavy, START, State(17000.0, 0.8))
    stop = path.stop
    assert stop is not None
    assert stop.what == "specific excess power"
    assert stop.bound == 2.0
    assert stop.value == pytest.approx(2.0, abs=0.05)
    assert stop.energy_height == pytest.approx(path.pieces[-1].energy_height[-1], abs=10.0)
    there = rates(
        heavy, heavy.air(*(np.array(v) for v in (stop.state.pressure_altitude, stop.state.mach)))
    )
    assert float(there.excess_power) == pytest.approx(stop.value, rel=1e-6)
    last = rates(heavy, heavy.air(*path.pieces[-1].at(path.pieces[-1].energy_height[-1])))
    assert float(last.excess_power) == pytest.approx(2.0, abs=0.05)


def test_the_edge_of_the_atmosphere_of_an_engine_ends_the_path(tmp_path: Path) -> None:
    """A table up to 12 km and Mach 0.9: more energy than that is nowhere."""
    engine = table(tmp_path, lambda altitude, mach: 90e3 * np.exp(-altitude / 12000.0))
    who = climber(tmp_path, engine=engine, aircraft={"limits": {"maximum_operating_mach": 1.2}})
    with pytest.raises(InputRefused, match="= 12500 m is above 12000 m, the pressure altitude in"):
        least_time_path(who, START, State(12500.0, 0.8))
    path = least_time_path(who, START, State(11900.0, 1.05))
    assert path.stop is not None
    assert path.stop.what == "pressure altitude in the engine's table"
    assert path.stop.state.pressure_altitude == pytest.approx(12000.0)
    assert path.stop.state.mach == pytest.approx(0.9)


def test_an_engine_without_an_answer_is_said(tmp_path: Path) -> None:
    engine = table(tmp_path, lambda altitude, mach: 90e3 * np.exp(-altitude / 12000.0))
    for find in PATHS.values():
        path = find(climber(tmp_path, engine=engine, air=Air((10.0,))), START, END)
        assert path.legs == ()
        assert path.stop is not None
        assert path.stop.what == "speeds at which the engine has an answer"
        assert path.unanswered > 0


@pytest.mark.parametrize("name", PATHS)
def test_a_climb_that_gains_nothing_is_refused(tmp_path: Path, name: str) -> None:
    who = climber(tmp_path)
    with pytest.raises(InputRefused, match="end it higher or faster"):
        PATHS[name](who, State(9000.0, 0.7), State(8000.0, 0.7))
    with pytest.raises(InputRefused, match="= -10 m is below 0 m, the ground elevation"):
        PATHS[name](who, State(-10.0, 0.7), State(8000.0, 0.7))


def test_energy_height_is_geometric(tmp_path: Path) -> None:
    """On a warm day more height lies between two pressure altitudes, by the temperatures' ratio."""
    warm = Air((20.0,))
    path = least_time_path(climber(tmp_path, air=warm), State(2000.0, 0.5), END)
    altitude = np.linspace(2000.0, END.pressure_altitude, 20001)
    air = warm.condition(altitude)
    ratio = air.static_temperature / (air.static_temperature - 20.0)
    risen = float(np.sum(0.5 * (ratio[1:] + ratio[:-1]) * np.diff(altitude)))
    kinetic = [
        float(energy_height(0.0, warm.condition(state.pressure_altitude, state.mach).true_airspeed))
        for state in (State(2000.0, 0.5), END)
    ]
    first, last = ends(path.legs[0])[0], ends(path.legs[-1])[1]
    assert last - first == pytest.approx(risen + kinetic[1] - kinetic[0], abs=1e-3)


def test_temperature_by_altitude_cuts_a_path_where_it_kinks(tmp_path: Path) -> None:
    air = Air((15.0, 0.0, 5.0), (0.0, 0.0, 0.0), (0.0, 4000.0, 12000.0))
    path = least_time_path(climber(tmp_path, air=air), State(0.0, 0.4), END)
    inner = [piece.start.pressure_altitude for piece in path.pieces[1:]]
    assert np.min(np.abs(np.array(inner) - 4000.0)) < 5.0


@pytest.mark.parametrize("name", PATHS)
def test_drag_area_and_engines_count_as_they_should(tmp_path: Path, name: str) -> None:
    """A drag area is as much more zero-lift drag; three engines of two thirds are two."""
    start = State(0.0, 0.5)
    area = climber(tmp_path, extra_drag_area=0.62)
    polar = {"drag_polar": {"zero_lift_drag_coefficient": 0.0175 + 0.62 / 62.0}}
    known = of_path(area, PATHS[name](area, start, END))
    for other in (
        climber(tmp_path, aircraft=polar),
        climber(
            tmp_path,
            extra_drag_area=0.62,
            engine_count=3,
            engine={"static_thrust": f"{55.0 * 2.0 / 3.0:.12f} kN"},
        ),
    ):
        assert of_path(other, PATHS[name](other, start, END)) == pytest.approx(known, rel=1e-7)


def test_best_rate_is_that_of_a_point_of_an_aircraft(twin: Climber) -> None:
    """The search of best climb speeds altitude by altitude is another one."""
    path = best_rate_path(twin, START, END)
    for piece in path.pieces:
        if piece.held_by == "level acceleration":
            continue
        inner = slice(1, -1)  # the ends are those of the neighbours
        altitude = piece.pressure_altitude[inner]
        asked = LevelFlight.of(twin.aircraft, twin.engine, altitude, twin.mass, rating="climb")
        found = best_climb_mach(asked)
        rate = rates(twin, twin.air(altitude, piece.mach[inner])).excess_power
        # On a kink of the engine the other one is content with a little less.
        np.testing.assert_allclose(rate, found.rate_of_climb, rtol=5e-4)
        assert np.all(rate >= found.rate_of_climb * (1.0 - 1e-6))
        np.testing.assert_allclose(piece.mach[inner], found.mach, atol=3e-3)


def test_a_path_by_altitude_that_loses_energy_says_so(tmp_path: Path) -> None:
    """Thrust that above 6 km fades with speed, so that best rate is a good deal slower there."""

    def thrust(altitude: float, mach: float) -> float:
        return 60e3 * (1.0 + 2.0 * mach if altitude < 6000.0 else 2.2 - 1.5 * mach)

    who = climber(tmp_path, engine=table(tmp_path, thrust))
    path = best_rate_path(who, State(0.0, 0.6), State(9000.0, 0.8))
    assert path.stop is None
    assert len(path.falls) == 1
    fall = path.falls[0]
    assert fall.energy_height[1] < fall.energy_height[0] - 300.0
    assert 5000.0 <= fall.start.pressure_altitude <= fall.end.pressure_altitude <= 6000.0
    assert fall.end.mach < fall.start.mach
    assert least_time_path(who, State(0.0, 0.6), State(9000.0, 0.8)).falls == ()


def test_best_rate_speeds_up_or_zooms_at_its_ends(plain: Climber) -> None:
    slow, fast = State(1000.0, 0.3), State(1000.0, 0.7)
    ends_slow, ends_fast = State(9000.0, 0.6), State(9000.0, 0.79)
    for start, end, first, last in (
        (slow, ends_slow, Piece, Exchange),
        (fast, ends_fast, Exchange, Piece),
    ):
        path = best_rate_path(plain, start, end)
        assert path.stop is None
        check_continuous(plain, path, start, end)
        assert (type(path.legs[0]), type(path.legs[-1])) == (first, last)
        level = path.pieces[0 if first is Piece else -1]
        assert level.held_by == "level acceleration"
        assert np.all(level.pressure_altitude == level.pressure_altitude[0])
        assert path.exchanges[0].kind == "zoom"


def test_the_ends_of_a_climb_are_those_of_the_flight() -> None:
    """Rate at which a climb is over, and least speed over stall speed."""
    known = {name: f.default for name, f in Climber.__dataclass_fields__.items()}
    assert known["least_rate"] == SLOWEST_CLIMB
    assert known["least_over_stall"] == SLOWEST_STALL_MULTIPLE


@FEW
@given(
    airspeed=st.integers(220, 330),
    low=st.integers(0, 3000),
    top=st.integers(7000, 11000),
    mass=st.integers(18000, 27000),
    day=st.integers(-20, 20),
)
def test_no_schedule_of_calibrated_airspeed_beats_the_paths(
    plain: Climber, airspeed: int, low: int, top: int, mass: int, day: int
) -> None:
    """From the energy of its start to the energy of its end, at one mass throughout."""
    who = replace(plain, mass=float(mass), air=Air((float(day),)).condition)
    height = np.linspace(low, top, 201)
    air = who.air(height, np.zeros(height.size))
    mach = np.minimum(mach_from_calibrated_airspeed(airspeed * KNOT, air.static_pressure), 0.8)
    speed = mach * air.speed_of_sound
    ratio = air.static_temperature / (air.static_temperature - day)
    geometric = np.concatenate([[0.0], np.cumsum(0.5 * (ratio[1:] + ratio[:-1]) * np.diff(height))])
    rise = np.diff(energy_height(geometric, speed))
    middle = 0.5 * (height[1:] + height[:-1])
    there = who.air(middle, np.zeros(middle.size))
    held = np.minimum(mach_from_calibrated_airspeed(airspeed * KNOT, there.static_pressure), 0.8)
    time, fuel = summed(who, middle, held, rise, burns=False)
    start, end = State(float(low), float(mach[0])), State(float(top), float(mach[-1]))
    paths = [find(who, start, end) for find in (least_time_path, least_fuel_path)]
    assert [path.stop for path in paths] == [None, None]
    (least_time, more_fuel), (more_time, least_fuel) = (of_path(who, path) for path in paths)
    # Midpoints of 200 cells, and interpolation: a hundredth of a per cent together.
    assert least_time <= time * (1.0 + 1e-4)
    assert least_fuel <= fuel * (1.0 + 1e-4)
    assert least_time <= more_time * (1.0 + 1e-5)
    assert least_fuel <= more_fuel * (1.0 + 1e-5)
