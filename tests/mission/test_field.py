"""Field length, climbs with an engine out, and the masses that they allow: hand calculations."""

from __future__ import annotations

from dataclasses import dataclass, replace
from math import sqrt
from pathlib import Path

import numpy as np
import pytest
from mission_files import (
    OUT_AND_DOWN,
    PROFILES,
    Content,
    aircraft_content,
    engine_content,
    fly_files,
    load_all,
    mission_content,
)
from numpy.typing import NDArray

from engine import flight_condition, load_engine
from engine.atmosphere import FlightCondition
from engine.errors import InputRefused
from engine.interface import Engine, EngineState, Outcome
from engine.options.constant_consumption import ConstantConsumptionEngine
from mission.aircraft import Aircraft
from mission.field.allowed_mass import Verdict, mass_for_field_length, mass_for_gradient
from mission.field.cases import (
    APPROACH_CLIMB,
    FINAL_TAKE_OFF,
    GEAR_EXTENDED,
    LANDING_CLIMB,
    SECOND_SEGMENT,
    TAKE_OFF_CLIMBS,
)
from mission.field.performance import climb_gradients, take_off_lengths
from mission.field.states import Place
from mission.flight import fly
from mission.results import Flight

G, FOOT = 9.80665, 0.3048
MASS, WEIGHT = 27000.0, 27000.0 * G
THRUST = 55e3  # N, of one engine at sea level, whatever the speed
AREA, ZERO_LIFT, INDUCED = 62.0, 0.0175, 0.042
TAKE_OFF: Content = {"kind": "take-off"}
APPROACH: Content = {"kind": "approach", "time": "4 min"}
WHOLE = [TAKE_OFF, *OUT_AND_DOWN, APPROACH]
# Speed of sound and density of the program's air against 1.225 and 340.294: rounding of both.
ROUNDING = 1e-5


@pytest.fixture
def twin(tmp_path: Path) -> tuple[Aircraft, Engine]:
    """The test twin and its constant-consumption engine."""
    _, aircraft, engine = load_all(
        tmp_path, aircraft_content(), engine_content(), mission_content(WHOLE, distance="500 nmi")
    )
    return aircraft, engine


def drag_to_weight(lift: float, added: float = 0.0) -> float:
    """Drag over weight at a lift coefficient."""
    return (ZERO_LIFT + added + INDUCED * lift**2) / lift


def second_segment(thrust: float = THRUST, added: float = 0.0) -> float:
    """Gradient of the test twin on one engine at 1.2 times its stall speed."""
    return thrust / WEIGHT - drag_to_weight(1.9 / 1.44, added)


def test_gradients_by_hand(twin: tuple[Aircraft, Engine]) -> None:
    climbs = climb_gradients(
        *twin, (*TAKE_OFF_CLIMBS, APPROACH_CLIMB, LANDING_CLIMB), Place(MASS, 0.0)
    )
    flown = {climb.case.name: float(climb.gradient) for climb in climbs}
    # Density at 1,500 ft of the standard atmosphere, to the power of the engine.
    thin = ((1.0 - 0.0065 * 457.2 / 288.15) ** 4.255880) ** 0.8
    assert flown == pytest.approx(
        {
            "gear extended": second_segment(),
            "second segment": second_segment(),
            "final take-off": THRUST * thin / WEIGHT - drag_to_weight(1.5 / 1.25**2),
            "approach climb": THRUST / WEIGHT - drag_to_weight(2.2 / 1.4**2),
            "landing climb": 2.0 * THRUST / WEIGHT - drag_to_weight(2.2 / 1.3**2),
        },
        abs=ROUNDING,
    )


def test_lengths_by_hand(twin: tuple[Aircraft, Engine]) -> None:
    lengths = take_off_lengths(*twin, Place(MASS, 0.0))
    energy = 1.44 * WEIGHT / (1.225 * AREA * 1.9 * G)  # V2 is lift-off speed here: V^2 / 2g
    run = 1.0 / (2.0 * THRUST / WEIGHT - 0.039)
    excess = second_segment() - 0.024
    balanced = 0.863 / (1.0 + 2.3 * excess) * (energy + 35.0 * FOOT) * (run + 2.7) + 200.0
    rise = 2.0 * THRUST / WEIGHT - drag_to_weight(1.9 / 1.44)
    all_engine = 1.15 * (energy * (run + sqrt(2.0)) + 35.0 * FOOT / rise)
    assert lengths.balanced is not None
    assert float(lengths.balanced) == pytest.approx(balanced, rel=10.0 * ROUNDING)
    assert float(lengths.all_engine) == pytest.approx(all_engine, rel=10.0 * ROUNDING)
    assert float(lengths.needed) == max(float(lengths.balanced), float(lengths.all_engine))


def test_gear_and_flaps_add_their_drag(twin: tuple[Aircraft, Engine]) -> None:
    aircraft, engine = twin
    dirty = replace(
        aircraft,
        drag_factor=1.1,
        gear_drag_increment=0.02,
        take_off_flaps_drag_increment=0.015,
        approach_flaps_drag_increment=0.06,
    )
    climbs = climb_gradients(
        dirty, engine, (GEAR_EXTENDED, SECOND_SEGMENT, LANDING_CLIMB), Place(MASS, 0.0)
    )
    flaps, landing = 1.9 / 1.44, 2.2 / 1.69
    assert [float(climb.gradient) for climb in climbs] == pytest.approx(
        [
            THRUST / WEIGHT - 1.1 * drag_to_weight(flaps, 0.035),
            THRUST / WEIGHT - 1.1 * drag_to_weight(flaps, 0.015),
            2.0 * THRUST / WEIGHT - 1.1 * drag_to_weight(landing, 0.08),
        ],
        abs=ROUNDING,
    )


def test_what_hangs_in_the_wind_drags(twin: tuple[Aircraft, Engine]) -> None:
    areas = np.array([0.0, 0.62])  # a hundredth of the wing
    (climb,) = climb_gradients(*twin, [SECOND_SEGMENT], Place(MASS, 0.0, 0.0, areas))
    assert climb.gradient == pytest.approx([second_segment(), second_segment(added=0.01)], abs=1e-5)
    lengths = take_off_lengths(*twin, Place(MASS, 0.0, 0.0, areas))
    assert np.all(np.diff(lengths.needed) > 0.0)


def test_the_engine_that_is_out_drags() -> None:
    aircraft = load_built_in("coast_watch_twin")
    engine = load_engine(PROFILES / "bypass_5.toml")
    (climb,) = climb_gradients(aircraft, engine, [SECOND_SEGMENT], Place(22e3, 50.0, 10.0))
    speed = 1.2 * sqrt(2.0 * 22e3 * G / (air_density(50.0, 10.0) * aircraft.wing_area * 1.9))
    air = flight_condition(50.0, 0.0, 10.0)
    flight = air.with_mach(speed / air.speed_of_sound)
    running = engine.at_rating(flight, "take_off").net_thrust
    unlit = engine.windmilling(flight).net_thrust
    assert float(unlit) < -50.0
    lift = aircraft.take_off_lift_coefficient / 1.44
    polar = aircraft.polar
    drag = (
        polar.zero_lift_drag_coefficient
        + polar.induced_drag_factor * (lift - polar.least_drag_lift_coefficient) ** 2
    )
    drag += aircraft.take_off_flaps_drag_increment
    by_hand = (float(running) + float(unlit)) / (22e3 * G) - drag / lift
    assert float(climb.gradient) == pytest.approx(by_hand, abs=1e-9)


def load_built_in(name: str) -> Aircraft:
    """A built-in aircraft."""
    from mission.aircraft import load_aircraft

    return load_aircraft(PROFILES / f"{name}.toml")


def air_density(altitude: float, deviation: float) -> float:
    return float(flight_condition(altitude, 0.0, deviation).density)


def test_a_gradient_times_speed_is_the_rate_of_climb_flown(tmp_path: Path) -> None:
    """All engines, clean, at one Mach number low down: excess thrust either way.

    The climb flown holds Mach number, which slows it down a little as the air cools, and its lift
    is weight times the cosine of its path.
    """
    mach = 0.3
    climb: Content = {"kind": "climb", "to": "10 ft", "mach": mach, "rating": "take_off"}
    flight = fly_files(tmp_path, mission=mission_content([climb], payload="1 t"))
    steps = flight.segments[0].steps
    lift = 2.0 * steps.weight[0] / (1.4 * 101325.0 * mach**2 * AREA)
    speed = float(steps.true_airspeed[0])
    climbing = speed * (2.0 * THRUST / steps.weight[0] - drag_to_weight(lift))
    flown = speed * float(np.sin(steps.flight_path_angle[0]))
    induced = INDUCED * lift * (1.0 - np.cos(steps.flight_path_angle[0]) ** 2)
    factor = 1.0 - 0.5 * 1.4 * 287.05287 * 0.0065 / G * mach**2
    assert flown * factor == pytest.approx(climbing + speed * induced, rel=1e-6)


def test_arrays_are_answered_one_by_one(twin: tuple[Aircraft, Engine]) -> None:
    mass = np.array([[20e3], [27e3]])
    altitude, deviation = np.array([0.0, 1000.0, 2000.0]), 15.0
    lengths = take_off_lengths(*twin, Place(mass, altitude, deviation))
    (climb,) = climb_gradients(*twin, [FINAL_TAKE_OFF], Place(mass, altitude, deviation))
    assert lengths.needed.shape == climb.gradient.shape == (2, 3)
    alone = take_off_lengths(*twin, Place(27e3, 1000.0, deviation))
    assert lengths.needed[1, 1] == pytest.approx(float(alone.needed), rel=1e-14)
    (one,) = climb_gradients(*twin, [FINAL_TAKE_OFF], Place(27e3, 1000.0, deviation))
    assert climb.gradient[1, 1] == pytest.approx(float(one.gradient), abs=1e-14)


def test_the_mass_that_a_runway_allows_needs_that_runway(twin: tuple[Aircraft, Engine]) -> None:
    mass = np.array([[18e3], [24e3], [40e3]])
    altitude = np.array([0.0, 1500.0])
    needed = take_off_lengths(*twin, Place(mass, altitude, 10.0)).needed
    allowed = mass_for_field_length(*twin, needed, altitude, 10.0)
    assert np.all(allowed.verdict == Verdict.FOUND)
    assert allowed.mass == pytest.approx(np.broadcast_to(mass, (3, 2)), rel=1e-8)


def test_the_mass_that_a_gradient_allows_climbs_so(twin: tuple[Aircraft, Engine]) -> None:
    allowed = mass_for_gradient(*twin, SECOND_SEGMENT, [0.024, 0.1], 0.0)
    lift = 1.9 / 1.44
    by_hand = THRUST / (np.array([0.024, 0.1]) + drag_to_weight(lift)) / G
    assert allowed.mass == pytest.approx(by_hand, rel=10.0 * ROUNDING)
    assert np.all(allowed.verdict == Verdict.FOUND)


def test_what_no_mass_satisfies_is_said(twin: tuple[Aircraft, Engine]) -> None:
    found = mass_for_field_length(*twin, [100.0, 1500.0, 1e6])
    assert found.verdict.tolist() == [Verdict.BELOW, Verdict.FOUND, Verdict.ABOVE]
    assert found.mass[[0, 2]].tolist() == [0.5 * 15.5e3, 3.0 * 27e3]
    (scalar,) = [mass_for_gradient(*twin, SECOND_SEGMENT, 0.9)]
    assert scalar.mass.shape == ()
    assert int(scalar.verdict) == Verdict.BELOW


def test_a_mass_that_thrust_cannot_move_needs_no_end_of_runway(
    twin: tuple[Aircraft, Engine],
) -> None:
    lengths = take_off_lengths(*twin, Place([27e3, 2.0 * THRUST / G / 0.038], 0.0))
    assert np.isfinite(lengths.needed).tolist() == [True, False]
    assert lengths.is_answered.all()


def test_an_engine_without_an_answer_is_flagged(twin: tuple[Aircraft, Engine]) -> None:
    aircraft, engine = twin
    assert isinstance(engine, ConstantConsumptionEngine)
    lengths = take_off_lengths(aircraft, Deaf(**vars(engine)), Place([20e3, 27e3], [0.0, 2000.0]))
    assert lengths.is_answered.tolist() == [True, False]
    assert np.isnan(lengths.needed).tolist() == [False, True]
    found = mass_for_field_length(aircraft, Deaf(**vars(engine)), 2500.0, [0.0, 2000.0])
    assert found.verdict.tolist() == [Verdict.FOUND, Verdict.UNANSWERED]
    assert np.isnan(found.mass).tolist() == [False, True]


@dataclass(frozen=True)
class Deaf(ConstantConsumptionEngine):
    """An engine that has no answer above 1,000 m."""

    def _state(
        self,
        flight: FlightCondition,
        thrust: NDArray[np.float64],
        outcome: NDArray[np.int64],
        share: NDArray[np.float64],
    ) -> EngineState:
        state = super()._state(flight, thrust, outcome, share)
        lost = flight.pressure_altitude > 1000.0
        return replace(state, outcome=np.where(lost, Outcome.NOT_CONVERGED, state.outcome))


@dataclass(frozen=True)
class Few(Deaf):
    """An engine without a maximum continuous rating."""

    @property
    def ratings(self) -> tuple[str, ...]:
        return ("take_off", "climb", "cruise")


@pytest.mark.parametrize(
    ("kind", "elevation", "climbs", "said"),
    [
        (Few, "0 ft", 4, "the engine has no maximum continuous rating: its climb is left out"),
        (Deaf, "2600 ft", 4, "the engine has no answer for final take-off: left out"),
    ],
)
def test_what_an_engine_cannot_tell_is_left_out_and_said(
    tmp_path: Path, kind: type[Deaf], elevation: str, climbs: int, said: str
) -> None:
    mission, aircraft, engine = load_all(
        tmp_path,
        aircraft_content(),
        engine_content(),
        mission_content([TAKE_OFF, APPROACH], departure={"elevation": elevation}),
    )
    flight = fly(mission, aircraft, kind(**vars(engine)))
    assert flight.field is not None
    assert len(flight.field.climbs) == climbs
    assert said in flight.field.remarks
    assert flight.field.length is not None


def test_one_engine_has_no_climb_with_one_out(twin: tuple[Aircraft, Engine]) -> None:
    aircraft, engine = twin
    single = replace(aircraft, engine_count=1)
    assert take_off_lengths(single, engine, Place(12e3, 0.0)).balanced is None
    with pytest.raises(InputRefused, match=r"second segment \(25.121\(b\)\) is flown with an eng"):
        climb_gradients(single, engine, [SECOND_SEGMENT], Place(12e3, 0.0))


def flown(tmp_path: Path, segments: list[Content], **changes: object) -> Flight:
    """The test twin over 400 nmi."""
    if "distance" not in changes:
        changes["distance"] = "400 nmi"
    return fly_files(tmp_path, mission=mission_content(segments, **changes))


def test_a_flight_keeps_its_field(tmp_path: Path) -> None:
    flight = flown(
        tmp_path,
        WHOLE,
        day="ISA+20",
        departure={"elevation": "2000 ft", "runway": "1500 m"},
        destination={"elevation": "300 ft"},
    )
    field = flight.field
    assert field is not None
    assert field.take_off_mass == flight.totals.takeoff_mass
    assert field.pressure_altitude == pytest.approx(609.6)
    assert [climb.name for climb in field.climbs] == [
        "gear extended", "second segment", "final take-off", "approach climb", "landing climb",
    ]  # fmt: skip
    assert {climb.mass for climb in field.climbs[:3]} == {flight.totals.takeoff_mass}
    assert {climb.mass for climb in field.climbs[3:]} == {flight.totals.landing_mass}
    assert field.length == max(field.balanced_length or 0.0, field.all_engine_length or 0.0)
    margin = next(m for m in flight.margins if m.name == "take-off field length")
    assert (margin.value, margin.bound, margin.unit) == (field.length, 1500.0, "m")
    assert margin.is_met
    assert margin.where == "take-off"
    assert [remark[:30] for remark in field.remarks] == [
        "the aircraft gives no drag of ",
        "the engine's drag when out is ",
    ]


def test_each_climb_has_the_air_and_the_elevation_of_its_place(tmp_path: Path) -> None:
    air = {
        "pressure_altitude": ["0 ft", "2000 ft", "FL400"],
        "day": ["ISA+10", "ISA+30", "ISA"],
    }
    flight = flown(
        tmp_path,
        WHOLE,
        departure={"elevation": "1000 ft"},
        destination={"elevation": "2000 ft"},
        air=air,
    )
    field = flight.field
    assert field is not None
    assert field.temperature_deviation == pytest.approx(20.0)
    _, aircraft, engine = load_all(
        tmp_path, aircraft_content(), engine_content(), mission_content(WHOLE, distance="9 nmi")
    )
    for check, case, height, deviation in (
        (field.climbs[1], SECOND_SEGMENT, 1000.0, 20.0),
        (field.climbs[2], FINAL_TAKE_OFF, 1000.0, 30.0 - 30.0 * 500.0 / 38000.0),
        (field.climbs[3], APPROACH_CLIMB, 2000.0, 30.0),
    ):
        place = Place(check.mass, height * FOOT, deviation)
        (climb,) = climb_gradients(aircraft, engine, [case], place)
        assert check.gradient == pytest.approx(float(climb.gradient), abs=1e-12)


def test_a_runway_too_short_ends_no_flight(tmp_path: Path) -> None:
    flight = flown(tmp_path, WHOLE, departure={"runway": "600 m"})
    assert flight.flown
    margin = next(m for m in flight.margins if m.name == "take-off field length")
    assert not margin.is_met


def test_no_take_off_no_field(tmp_path: Path) -> None:
    flight = flown(tmp_path, OUT_AND_DOWN, departure={"runway": "1500 m"})
    assert flight.flown
    assert flight.field is None
    assert "take-off field length" not in [margin.name for margin in flight.margins]


def test_without_approach_there_is_no_go_around(tmp_path: Path) -> None:
    field = flown(tmp_path, [TAKE_OFF, *OUT_AND_DOWN]).field
    assert field is not None
    assert [climb.name for climb in field.climbs] == [case.name for case in TAKE_OFF_CLIMBS]
    assert "the mission has no approach: no go-around" in field.remarks


def test_the_runway_is_the_departures_alone(tmp_path: Path) -> None:
    """A take-off after a landing at the destination is not from the departure's runway."""
    again: Content = {"kind": "climb", "to": "FL100", "calibrated_airspeed": "250 kt", "mach": 0.7}
    flight = flown(
        tmp_path,
        [*OUT_AND_DOWN, APPROACH, TAKE_OFF, again],
        departure={"runway": "1500 m"},
        destination={"elevation": "1000 ft"},
    )
    assert flight.field is not None
    assert flight.field.runway is None
    assert flight.field.pressure_altitude == pytest.approx(304.8)


def test_a_runway_at_the_destination_is_refused(tmp_path: Path) -> None:
    with pytest.raises(InputRefused, match=r"destination.*runway"):
        flown(tmp_path, WHOLE, destination={"runway": "1500 m"})


def test_a_runway_needs_a_unit(tmp_path: Path) -> None:
    with pytest.raises(InputRefused, match=r"departure.runway.*1500 has no unit"):
        flown(tmp_path, WHOLE, departure={"runway": 1500})


def test_a_polar_that_ends_too_early_is_said(tmp_path: Path) -> None:
    """A table from Mach 0.2 on: the twin climbs away at Mach 0.21, light it comes in below 0.2."""
    table = {
        "machs": [0.2, 0.9],
        "zero_lift_drag_coefficient": [0.0175, 0.0175],
        "induced_drag_factor": [0.042, 0.042],
    }
    mission, aircraft, engine = load_all(
        tmp_path,
        aircraft_content() | {"drag_polar": table},
        engine_content(),
        mission_content([TAKE_OFF]),
    )
    field = fly(mission, aircraft, engine).field
    assert field is not None
    said = "outside the drag polar's table, with the drag of its edge: lift-off, gear extended, sec"
    assert any(remark.startswith(said) for remark in field.remarks)
    place = Place(np.array([26e3, 17e3]))
    (climb,) = climb_gradients(aircraft, engine, [SECOND_SEGMENT], place)
    assert climb.is_in_polar.tolist() == [True, False]
    assert take_off_lengths(aircraft, engine, place).is_in_polar.tolist() == [True, False]


def test_a_single_engine_is_told_what_does_not_apply(tmp_path: Path) -> None:
    flight = fly_files(
        tmp_path,
        mission=mission_content(WHOLE, distance="300 nmi"),
        aircraft=aircraft_content(engine_count=1),
        engine=engine_content(static_thrust="110 kN"),
    )
    assert flight.field is not None
    assert [climb.name for climb in flight.field.climbs] == ["landing climb"]
    assert flight.field.balanced_length is None
    assert flight.field.length == flight.field.all_engine_length
    assert any("25.121" in remark for remark in flight.field.remarks)


def test_a_climb_too_flat_is_not_met(tmp_path: Path) -> None:
    up: Content = {"kind": "climb", "to": "FL100", "calibrated_airspeed": "250 kt", "mach": 0.7}
    flight = fly_files(
        tmp_path,
        mission=mission_content([TAKE_OFF, up], payload="4 t"),
        aircraft=aircraft_content(drag_polar={"induced_drag_factor": 0.06}),
        engine=engine_content(static_thrust="22 kN"),
    )
    assert flight.field is not None
    second = flight.field.climbs[1]
    assert second.gradient < 0.024
    assert not second.is_met
    assert any("hardly climbs with an engine out" in remark for remark in flight.field.remarks)
