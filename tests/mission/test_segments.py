"""What each kind of segment demands of the person who writes it, and what it does when flown."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import numpy as np
import pytest
from mission_files import (
    BYPASS_5,
    Content,
    aircraft_content,
    engine_content,
    fly_files,
    mission_content,
    segment,
)

from engine import load_engine
from engine.atmosphere import flight_condition
from engine.errors import InputRefused
from engine.quantities import FOOT, KNOT
from mission.results import Flight

UP: Content = {"kind": "climb", "to": "FL350", "calibrated_airspeed": "280 kt", "mach": 0.74}
HOLD: Content = {"kind": "loiter", "time": "30 min", "pressure_altitude": "FL200"}
G = 9.80665


def flown(folder: Path, *segments: Content, **changes: Any) -> Flight:
    return fly_files(folder, mission=mission_content(list(segments), **changes))


@pytest.mark.parametrize(
    ("segments", "match"),
    [
        ([{"kind": "climb", "to": "FL350"}], "give calibrated_airspeed, mach, or both"),
        ([{"kind": "climb", "mach": 0.7}], r"segment 1.*to.*is missing"),
        ([UP | {"rating": "combat"}], r"segment 1.*rating.*'combat'.*allowed: 'take_off'"),
        ([UP | {"machh": 0.7}], r"segment 1.*machh: unknown key; did you mean mach\?"),
        ([UP, {"kind": "descent"}], "give calibrated_airspeed, mach, or both"),
        ([{"kind": "descent", "mach": 0.7}], "a descent starts the mission in the air"),
        (
            [{"kind": "cruise", "mach": 0.7, "distance": "100 nmi"}],
            "a cruise starts the mission in the air: give its pressure_altitude",
        ),
        (
            [{"kind": "cruise", "pressure_altitude": "FL300", "distance": "100 nmi"}],
            "give mach",
        ),
        (
            [
                {
                    "kind": "cruise",
                    "pressure_altitude": "FL300",
                    "distance": "100 nmi",
                    "holds": "altitude and lift coefficient",
                }
            ],
            "give lift_coefficient: there is no segment before",
        ),
        ([UP, {"kind": "cruise", "distance": "0 nmi"}], "'0 nmi' is not a distance above zero"),
        ([UP, {"kind": "cruise", "distance": 100}], "100 has no unit"),
        ([UP, {"kind": "cruise"}], r"segment 2.*give one of distance \(\"rest\""),
        (
            [UP, {"kind": "cruise", "distance": "100 nmi", "holds": "speed"}],
            "'speed'; allowed: 'altitude and mach'",
        ),
        (
            [HOLD | {"mach": 0.4, "calibrated_airspeed": "220 kt"}],
            "give mach or calibrated_airspeed, or neither",
        ),
        ([{"kind": "loiter", "time": "1 h"}], "a loiter starts the mission in the air"),
        ([HOLD | {"time": "0 min"}], r"segment 1.*time.*'0 min'"),
        (
            [UP, {"kind": "acceleration", "to_mach": 0.8, "to_calibrated_airspeed": "200 kt"}],
            "give either to_mach or to_calibrated_airspeed",
        ),
        ([UP, {"kind": "acceleration"}], "give either to_mach or to_calibrated_airspeed"),
        (
            [{"kind": "acceleration", "to_mach": 0.8, "pressure_altitude": "FL300"}],
            "give from_mach",
        ),
        (
            [{"kind": "acceleration", "to_mach": 0.8, "from_mach": 0.5}],
            "an acceleration starts the mission in the air",
        ),
        ([{"kind": "approach", "time": "3 min"}], "an approach starts the mission in the air"),
        (
            [{"kind": "allowance", "fuel": "30 kg", "mass_fraction": 0.1}],
            "give one of fuel, mass_fraction, or time with rating",
        ),
        ([{"kind": "allowance"}], "give one of fuel, mass_fraction, or time with rating"),
        ([{"kind": "allowance", "time": "3 min"}], "time and rating go together"),
        ([{"kind": "allowance", "fuel": "3 kg", "mach": 0.4}], "mach goes with time and rating"),
        ([{"kind": "taxi"}], r"segment 1.*time.*is missing"),
        ([{"kind": "clmb", "to": "FL300"}], r"segment 1.*kind.*'clmb'.*allowed.*'climb'"),
        ([{"to": "FL300"}], r"segment 1.*kind.*is missing"),
    ],
)
def test_refusals(tmp_path: Path, segments: list[Content], match: str) -> None:
    with pytest.raises(InputRefused, match=match) as refusal:
        flown(tmp_path, *segments)
    assert refusal.value.where.endswith("mission.toml")


# --- what they do -----------------------------------------------------------------------------


def test_taxi_burns_ground_idle_for_its_time(tmp_path: Path) -> None:
    flight = fly_files(
        tmp_path,
        mission=mission_content(
            [{"kind": "taxi", "time": "10 min"}, {"kind": "take-off"}, UP],
            departure={"elevation": "2000 ft"},
            day="ISA+10",
        ),
        engine=BYPASS_5,
    )
    idle = load_engine(BYPASS_5).at(
        flight_condition(2000.0 * FOOT, 0.0, 10.0), rating="ground_idle"
    )
    log = segment(flight, "taxi")
    # Two engines, ten minutes; the engine settles each answer to its own 1e-10.
    assert log.fuel == pytest.approx(2.0 * 600.0 * float(idle.fuel_flow), rel=1e-8)
    assert log.ground_distance == 0.0
    assert np.all(log.steps.lift == 0.0)
    assert np.all(log.steps.drag == 0.0)


def test_take_off_rolls_to_1_2_times_the_stall_speed(tmp_path: Path) -> None:
    flight = flown(
        tmp_path,
        {"kind": "taxi", "time": "1 min"},
        {"kind": "take-off"},
        UP,
        fuel={"load": "5 t", "as_needed": None},
    )
    log = segment(flight, "take-off")
    steps = log.steps
    stall = np.sqrt(2.0 * steps.weight[-1] / (1.225 * 62.0 * 1.9))
    assert steps.true_airspeed[-1] == pytest.approx(1.2 * stall, rel=1e-5)
    # Thrust of 110 kN less rolling friction of two hundredths of the weight, at constant thrust.
    acceleration = (110e3 - 0.02 * steps.weight[0]) / steps.mass[0]
    assert log.time == pytest.approx(steps.true_airspeed[-1] / acceleration, rel=1e-3)
    assert log.ground_distance == 0.0


def test_loiter_gains_no_distance_but_takes_its_time(tmp_path: Path) -> None:
    log = segment(flown(tmp_path, HOLD), "loiter")
    assert log.time == pytest.approx(1800.0, rel=1e-12)
    assert log.ground_distance == 0.0
    assert log.air_distance > 0.0


@pytest.mark.parametrize("engine", ["constant", "cycle"])
def test_no_neighbouring_speed_burns_less_than_the_loiters(tmp_path: Path, engine: str) -> None:
    power = engine_content() if engine == "constant" else BYPASS_5

    def fuel(**speed: Any) -> tuple[float, float]:
        flight = fly_files(tmp_path, mission=mission_content([HOLD | speed]), engine=power)
        log = segment(flight, "loiter")
        return log.fuel, float(log.steps.mach[0])

    least, mach = fuel()
    for other in (mach - 0.02, mach - 0.005, mach + 0.005, mach + 0.02):
        assert fuel(mach=other)[0] > least


def test_a_loiter_keeps_away_from_the_stall(tmp_path: Path) -> None:
    """The least-fuel speed of this aircraft is below 1.2 times its stall speed."""
    flight = fly_files(
        tmp_path,
        mission=mission_content([HOLD]),
        aircraft=aircraft_content(limits={"maximum_lift_coefficient": 0.8}),
    )
    steps = segment(flight, "loiter").steps
    dynamic = 0.5 * flight_condition(20000.0 * FOOT).density * steps.true_airspeed**2
    assert steps.lift / (dynamic * 62.0) == pytest.approx(0.8 / 1.2**2, rel=1e-5)


def test_approach_flies_1_3_times_the_stall_speed_with_its_drag(tmp_path: Path) -> None:
    down = {"kind": "descent", "calibrated_airspeed": "250 kt"}
    approach = {"kind": "approach", "time": "4 min", "drag_factor": 2.5}
    flight = flown(tmp_path, HOLD, down, approach)
    log = segment(flight, "approach and landing")
    steps = log.steps
    density = flight_condition(steps.pressure_altitude).density
    force = 0.5 * density * steps.true_airspeed**2 * 62.0
    coefficient = steps.lift / force
    assert coefficient == pytest.approx(2.2 / 1.3**2, rel=1e-6)
    assert steps.drag == pytest.approx(2.5 * force * (0.0175 + 0.042 * coefficient**2), rel=1e-9)
    assert log.ground_distance == 0.0
    assert log.time == pytest.approx(240.0)


@pytest.mark.parametrize(
    ("amount", "expected"),
    [({"fuel": "123 kg"}, 123.0), ({"mass_fraction": 0.02}, 0.02 * 21000.0)],
)
def test_booked_allowances(tmp_path: Path, amount: Content, expected: float) -> None:
    flight = flown(
        tmp_path, {"kind": "allowance", **amount}, UP, fuel={"as_needed": None, "load": "3 t"}
    )
    log = segment(flight, "allowance")
    assert log.fuel == pytest.approx(expected, rel=1e-12)
    assert log.time == 0.0
    assert log.mass_start - log.mass_end == pytest.approx(expected, rel=1e-9)


def test_an_allowance_of_time_runs_the_engines_at_a_rating(tmp_path: Path) -> None:
    dash = {"kind": "allowance", "name": "dash", "time": "4 min", "rating": "take_off", "mach": 0.6}
    log = segment(flown(tmp_path, HOLD, dash), "dash")
    density = float(flight_condition(20000.0 * FOOT).density)
    thrust = 2.0 * 55e3 * (density / 1.225) ** 0.8
    assert log.fuel == pytest.approx(thrust * 0.6 / 3600.0 / G * 240.0, rel=1e-9)
    assert log.time == pytest.approx(240.0)


def test_drag_and_fuel_flow_factors_multiply(tmp_path: Path) -> None:
    cruise = {"kind": "cruise", "distance": "1 nmi", "mach": 0.7, "pressure_altitude": "FL300"}

    def first_step(aircraft: Content, **factors: float) -> tuple[float, float]:
        flight = fly_files(
            tmp_path,
            mission=mission_content([cruise | factors], fuel={"as_needed": None, "load": "3 t"}),
            aircraft=aircraft,
        )
        steps = segment(flight, "cruise").steps
        return float(steps.drag[0]), float(steps.fuel_flow[0])

    drag, flow = first_step(aircraft_content())
    both = aircraft_content(drag_factor=1.1, fuel_flow_factor=1.05)
    other_drag, other_flow = first_step(both, drag_factor=1.2, fuel_flow_factor=0.9)
    assert other_drag == pytest.approx(drag * 1.1 * 1.2, rel=1e-12)
    assert other_flow == pytest.approx(flow * 1.1 * 1.2 * 1.05 * 0.9, rel=1e-12)


def test_acceleration_to_an_airspeed(tmp_path: Path) -> None:
    start = {"kind": "acceleration", "pressure_altitude": "FL200", "from_mach": 0.4}
    flight = flown(tmp_path, start | {"to_calibrated_airspeed": "300 kt"})
    steps = segment(flight, "acceleration").steps
    # 300 kt at 20,000 ft is M 0.65129 (own arithmetic, see the published airspeed checks).
    assert steps.mach[-1] == pytest.approx(0.65129, abs=1e-5)
    assert steps.true_airspeed[-1] / KNOT == pytest.approx(400.10, abs=0.01)
    assert np.all(np.diff(steps.mach) > 0.0)


def test_slowing_down_is_at_idle_and_speeding_up_at_the_rating(tmp_path: Path) -> None:
    hold = HOLD | {"mach": 0.6}
    flight = flown(
        tmp_path,
        hold,
        {"kind": "acceleration", "name": "slower", "to_mach": 0.5},
        {"kind": "acceleration", "name": "faster", "to_mach": 0.6, "rating": "climb"},
    )
    assert np.all(segment(flight, "slower").steps.thrust == 0.0)
    assert np.all(segment(flight, "faster").steps.thrust > 0.0)


def test_a_warm_day_shifts_temperature_and_stretches_heights(tmp_path: Path) -> None:
    """Pressure altitudes stay; the geometric climb is longer by the ratio of temperatures."""

    def climbed(day: str) -> float:
        leg = UP | {"to": "2000 ft", "mach": 0.4, "calibrated_airspeed": "500 kt"}
        flight = fly_files(
            tmp_path,
            mission=mission_content([leg], day=day, fuel={"as_needed": None, "load": "3 t"}),
        )
        steps = segment(flight, "climb").steps
        assert steps.pressure_altitude[-1] / FOOT == pytest.approx(2000.0, abs=0.01)
        rise = steps.true_airspeed * np.sin(steps.flight_path_angle)
        rates = np.gradient(steps.pressure_altitude, steps.elapsed_time)
        return float(np.mean(rise[3:-3] / rates[3:-3]))

    middle = 288.15 - 0.0065 * 1000.0 * FOOT
    # The gradient is of second order on nine nodes: a few parts in ten thousand.
    assert climbed("ISA") == pytest.approx(1.0, rel=1e-3)
    assert climbed("ISA+30") == pytest.approx((middle + 30.0) / middle, rel=1e-3)


def test_a_cruise_holds_the_speed_it_comes_in_with(tmp_path: Path) -> None:
    """Also where the climb ends at a calibrated airspeed: the Mach number is that one's."""
    climb = {"kind": "climb", "to": "FL200", "calibrated_airspeed": "280 kt"}
    flight = flown(tmp_path, climb, {"kind": "cruise", "distance": "100 nmi"})
    assert [log.name for log in flight.segments] == ["climb", "cruise"]
    cruise = segment(flight, "cruise").steps
    assert cruise.mach == pytest.approx(segment(flight, "climb").steps.mach[-1], abs=1e-6)
