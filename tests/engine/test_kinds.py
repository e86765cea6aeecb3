"""Options of every kind of engine: what cannot work is refused, and what is asked for is done."""

from __future__ import annotations

import re

import numpy as np
import pytest
from engine_files import Content, changed, load
from engine_kinds import (
    GEARED,
    KINDS,
    MIXED,
    MIXED_REHEATED,
    PART_MIXED,
    REHEATED,
    TURBOPROP,
    TWO_SPOOL,
    engine_of,
    envelope_of,
)

from engine.atmosphere import flight_condition
from engine.cycle_engine import CycleEngine
from engine.cycles.situation import OffTakes
from engine.cycles.sizing import size
from engine.errors import CycleCannotRun, InputRefused
from engine.finished import why_unphysical
from engine.interface import Outcome
from engine.options.loading import engine_from_content

CRUISE = flight_condition(10668.0, 0.78)


@pytest.mark.parametrize(
    ("base", "changes", "key", "said"),
    [
        (
            TWO_SPOOL,
            {"ratings.take_off.afterburner_temperature": "1900 K"},
            "",
            r"ratings.take_off has an afterburner_temperature, but there is no \[afterburner\]",
        ),
        (
            REHEATED,
            {"afterburner.temperature": "700 K"},
            "afterburner.temperature",
            r"= 700 K is not above the 9\d\d K that the dry engine leaves",
        ),
        (
            REHEATED,
            {"ratings.maximum_afterburning.afterburner_temperature": "900 K"},
            "ratings.maximum_afterburning.afterburner_temperature",
            r"= 900 K is not above the 9\d\d K that the dry engine leaves",
        ),
        (
            MIXED_REHEATED,
            {"ratings.maximum_afterburning.afterburner_fuel_air_ratio": 0.07},
            "ratings.maximum_afterburning.afterburner_fuel_air_ratio",
            r"= 0\.07 is above 0\.0682, the stoichiometric ratio of the fuel",
        ),
        (
            REHEATED,
            {
                "ratings.maximum_afterburning.afterburner_temperature": None,
                "ratings.maximum_afterburning.afterburner_fuel_air_ratio": 0.05,
            },
            "ratings.maximum_afterburning",
            "afterburner_fuel_air_ratio needs afterburner_temperature beside it",
        ),
        (
            REHEATED,
            {"afterburner.lit_pressure_loss_fraction": 0.01},
            "afterburner",
            "lit_pressure_loss_fraction is below dry_pressure_loss_fraction",
        ),
        (
            MIXED_REHEATED,
            {"mixer.effectiveness": 0.8},
            "",
            "mixer.effectiveness is for an engine without afterburner",
        ),
        (
            TURBOPROP,
            {"design_point.mach": 0.0},
            "",
            "propeller.efficiency is thrust power over shaft power, which is 0 at rest.*"
            r"give propeller.profile_factor",
        ),
        (
            TURBOPROP,
            {"propeller.profile_factor": 0.85},
            "propeller",
            "give either efficiency, of a moving design point, or profile_factor",
        ),
        (
            GEARED,
            {"ratings.climb": {"throttle_ratio": 1.05, "corrected_low_pressure_speed": 1.0}},
            "ratings.climb",
            "throttle_ratio lowers turbine_entry_temperature, which is missing",
        ),
        (
            GEARED,
            {"ratings.climb": {"flat_to": "ISA+15"}},
            "ratings.climb",
            "a rating needs at least one limit",
        ),
        (
            GEARED,
            {"off_takes.flight_idle.customer_bleed_fraction": 0.4},
            "cooling",
            "cooling and customer bleed take 52% of the core's air",
        ),
    ],
)
def test_an_option_that_cannot_work_is_refused(
    base: Content, changes: Content, key: str, said: str
) -> None:
    with pytest.raises(InputRefused, match=said) as caught:
        engine_from_content(changed(base, changes), "some.toml")

    assert caught.value.where == "some.toml"
    assert caught.value.key == key


@pytest.mark.parametrize(
    ("base", "changes", "said"),
    [
        (
            TWO_SPOOL,
            {"design_point.turbine_entry_temperature": "800 K"},
            r"ahead of it = \d+\.\d kPa, ambient 101.3 kPa; the turbines cannot drive the "
            r"compressors.*raise turbine_entry_temperature or lower the pressure ratios",
        ),
        (
            GEARED,
            {"design_point.bypass_ratio": 25.0},
            r"ahead of it = \d+\.\d kPa, ambient 23.8 kPa; .*lower bypass_ratio",
        ),
        (
            TURBOPROP,
            {"off_takes.shaft_power": "8 MW"},
            r"ahead of it = \d+\.\d kPa.*lower power_turbine_share .*shaft_power, 8000 kW",
        ),
        (
            MIXED,
            {"design_point.turbine_entry_temperature": "1000 K"},
            r"ahead of it = \d+\.\d kPa, ambient 23.8 kPa; the turbines cannot drive",
        ),
        (
            MIXED,
            {"design_point.fan_pressure_ratio": 3.0},
            r"the core brings 13\d\.\d kPa .*the bypass 10\d\.\d kPa of total pressure and would "
            r"flow at Mach -0\.\d\d.*raise fan_pressure_ratio or mixer.core_mach, or lower turbine",
        ),
        (
            PART_MIXED,
            {"design_point.fan_pressure_ratio": 5.5},
            r"the core brings 9\d\.\d kPa .*the bypass 19\d\.\d kPa of total pressure and would "
            r"flow at Mach 1\.00.*lower fan_pressure_ratio or mixer.core_mach, or raise turbine",
        ),
    ],
)
def test_a_design_point_without_balance_says_by_how_much_and_what_helps(
    base: Content, changes: Content, said: str
) -> None:
    with pytest.raises(CycleCannotRun, match=said) as caught:
        engine_from_content(changed(base, changes), "some.toml")

    assert caught.value.key == "design_point"


@pytest.mark.parametrize(
    "remedy",
    [
        {"design_point.fan_pressure_ratio": 3.5},
        {"mixer.core_mach": 0.7, "design_point.fan_pressure_ratio": 3.2},
        {"design_point.turbine_entry_temperature": "1400 K"},
    ],
)
def test_what_the_mixer_s_refusal_advises_helps(remedy: Content) -> None:
    low = {"design_point.fan_pressure_ratio": 3.2}
    with pytest.raises(CycleCannotRun, match="raise fan_pressure_ratio or mixer"):
        load(changed(MIXED, low))

    engine = load(changed(MIXED, {**low, **remedy}))

    assert int(engine.at_rating(CRUISE, "cruise").outcome) == Outcome.MET


def test_thrust_is_sized_for_beside_any_shaft_power() -> None:
    """An engine of 200 kN may be asked for more than the first kilogram of its air could give."""
    for name, content in KINDS.items():
        size = {"design_point.net_thrust": "200 kN", "off_takes.shaft_power": "1 MW"}
        if "airflow" in content["design_point"]:
            size["design_point.airflow"] = None  # type: ignore[assignment]
        if "propeller" in content:
            size["propeller.diameter"] = "16 m"  # whatever carries 200 kN
        engine = load(changed(content, size))

        assert engine.sizing.reference_thrust == pytest.approx(2e5, rel=1e-9), name


def test_a_propeller_better_than_its_disc_is_refused() -> None:
    """Against momentum theory by hand: ``T = 2 rho A v (V + v)``, efficiency ``V / (V + v)``."""
    with pytest.raises(InputRefused, match=r"is above the 0\.\d+ that a disc of 1 m") as refused:
        load(changed(KINDS["turboprop"], {"propeller.diameter": "1 m"}))
    assert refused.value.key == "propeller.efficiency"
    best = float(re.findall(r"above the (0\.\d+)", refused.value.what)[0])
    # The stated efficiency's own thrust loads the disc, whatever that disc could do.
    flight = flight_condition(6096.0, 0.5)
    taken = OffTakes.of(0.01, 20e3)
    _, path = size(engine_of("turboprop").arrangement, flight, airflow=8.0, taken=taken)
    assert path.propeller is not None
    speed, area = float(flight.true_airspeed), 0.25 * np.pi
    thrust = 0.85 * float(path.propeller.shaft_power) / speed
    past = 0.5 * (speed + (speed**2 + 2.0 * thrust / (float(flight.density) * area)) ** 0.5)
    assert best == pytest.approx(speed / past, abs=6e-4)


def test_a_size_that_is_not_found_is_refused() -> None:
    changes = {
        "design_point.airflow": None,
        "design_point.net_thrust": "16 kN",
        "off_takes.shaft_power": "14.75 MW",
    }
    with pytest.raises(CycleCannotRun, match=r"no size is found .*14750 kW; lower off_takes"):
        load(changed(KINDS["turbojet"], changes))


@pytest.mark.parametrize("kind", KINDS)
def test_off_takes_of_a_phase_count_in_it_alone(kind: str) -> None:
    plain = engine_of(kind)
    power = float(plain.bounds["flight_idle"].taken.shaft_power) + 20e3
    more = load(changed(KINDS[kind], {"off_takes.flight_idle.shaft_power": f"{power} W"}))
    flight = flight_condition(3000.0, 0.4)

    idle, before = (engine.at_rating(flight, "flight_idle") for engine in (more, plain))

    assert float(idle.fuel_flow) > 1.01 * float(before.fuel_flow)
    assert idle.energy is not None
    assert float(idle.energy.shaft) == power
    for rating in ("climb", "ground_idle"):
        assert more.at_rating(flight, rating).fuel_flow == plain.at_rating(flight, rating).fuel_flow


def test_bleed_of_a_phase_takes_air_in_it() -> None:
    engine = load(changed(GEARED, {"off_takes.climb.customer_bleed_fraction": 0.05}))
    flight = flight_condition(9000.0, 0.75)

    for rating, share in (("climb", 0.05), ("cruise", 0.01)):
        state = engine.at_rating(flight, rating)
        assert state.evidence is not None
        bleed, core = state.evidence.path.bleed.mass_flow, state.stations["25"].mass_flow
        assert float(bleed[0]) == pytest.approx(share * float(core), rel=1e-12)


def test_the_air_that_turns_an_engine_beyond_its_idle_is_said() -> None:
    engine = engine_of("reheated")
    flight = flight_condition(8000.0, [0.5, 1.5])

    state = engine.at_rating(flight, "ground_idle")
    windmill = engine.windmilling(flight)

    assert state.outcome.tolist() == [Outcome.MET, Outcome.UNPHYSICAL]
    assert why_unphysical(state)[0] == ""
    assert re.match("the air alone turns it faster than is asked", why_unphysical(state)[1])
    speed = windmill.limit_names.index("corrected_high_pressure_speed")
    floor = engine.bounds["ground_idle"].bounds[speed]
    assert windmill.evidence is not None
    turning = windmill.evidence.path.limits["corrected_high_pressure_speed"]
    assert turning[0] < floor < turning[1]


def test_a_floor_of_fuel_keeps_such_an_engine_lit() -> None:
    content = changed(KINDS["reheated"], {"idle.ground.fuel_air_ratio": 0.004})

    state = load(content).at_rating(flight_condition(8000.0, [0.5, 1.5, 1.8]), "ground_idle")

    assert np.all(state.outcome == Outcome.MET)
    assert state.binding_limit_names[1] == "fuel_air_ratio"


def test_more_fuel_than_air_can_burn_is_said() -> None:
    """Idle so slow, high and loaded that the core's little air cannot carry the load."""
    content = changed(
        KINDS["turbofan"],
        {"idle.flight": {"corrected_high_pressure_speed": 0.5}, "off_takes.shaft_power": "80 kW"},
    )

    state = load(content).at_rating(flight_condition(12500.0, 0.2), "flight_idle")

    assert int(state.outcome) == Outcome.UNPHYSICAL
    assert str(why_unphysical(state)) == "it would need more fuel than its air can burn"


@pytest.mark.parametrize("kind", KINDS)
def test_low_power_is_asked_for_in_speed_or_thrust(kind: str) -> None:
    """Close to idle one turbine entry temperature belongs to two states; a speed, to one."""
    engine: CycleEngine = load(
        changed(
            KINDS[kind],
            {f"idle.{name}": {"corrected_high_pressure_speed": speed} for name, speed in SPEEDS},
        )
    )
    flight = envelope_of(kind, 6, fastest=0.6)

    idles = [engine.at_rating(flight, name) for name in ("ground_idle", "flight_idle")]

    for state, (_, speed) in zip(idles, SPEEDS[::-1], strict=True):
        assert np.all(state.outcome == Outcome.MET)
        assert state.evidence is not None
        found = state.evidence.path.limits["corrected_high_pressure_speed"]
        assert found == pytest.approx(np.full(found.shape, speed), rel=1e-9)
    between = 0.5 * (idles[0].net_thrust + idles[1].net_thrust)
    part = engine.at_thrust(flight, between, idle="ground_idle")
    assert np.all(part.outcome == Outcome.MET)
    scale = engine.sizing.reference_thrust
    assert part.net_thrust == pytest.approx(between, rel=1e-9, abs=1e-9 * scale)


SPEEDS = (("flight", 0.72), ("ground", 0.66))


def test_close_to_idle_one_temperature_belongs_to_two_states() -> None:
    """Why neither part power nor idle is ever asked for by turbine entry temperature."""
    engine, flight = engine_of("mixed"), flight_condition(12000.0, 0.45)
    most = float(engine.at_rating(flight, "cruise").net_thrust)
    least = float(engine.at_rating(flight, "flight_idle").net_thrust)

    state = engine.at_thrust(flight, least + np.geomspace(1e-3, 1.0, 30) * (most - least))

    assert np.all(state.outcome == Outcome.MET)
    temperature = state.turbine_entry_temperature
    lowest = int(np.argmin(temperature))
    assert 3 < lowest < 25
    assert np.all(np.diff(temperature[: lowest + 1]) < 0.0)
    assert np.all(np.diff(temperature[lowest:]) > 0.0)
    assert state.evidence is not None
    assert np.all(np.diff(state.evidence.path.limits["corrected_high_pressure_speed"]) > 0.0)
