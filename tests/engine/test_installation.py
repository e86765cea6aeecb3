"""Installation: shapes whose areas are known, momentum balances, given numbers, refusals."""

from __future__ import annotations

from dataclasses import fields, replace
from math import pi

import numpy as np
import pytest
from engine_files import load, one_rating, turbofan_content, turbojet_content
from scipy.optimize import brentq

from engine.atmosphere import flight_condition
from engine.errors import InputRefused, OutOfRange
from engine.installation.correlations import INSTALLED_MASS_RATIO, jet_engine, turboprop
from engine.installation.drag import afterbody_drag, capture_area, spillage_drag
from engine.installation.inlets import inlet_type
from engine.installation.nacelle import (
    FULL_COWL,
    SHORT_COWL,
    NacelleProportions,
    wetted_area,
)
from engine.installation.pod import SCALING_EXPONENTS, GivenPod, Pod, pod, scaled_given

WHOLE = GivenPod(1.2, 3.4, 1.5, 900.0, 1250.0, 14.0, 0.05)


def small_pod(given: GivenPod | None = None, bypass_ratio: float = 5.0) -> Pod:
    bare = jet_engine(55e3, bypass_ratio, 0.85, has_afterburner=False)
    return pod(bare, corrected_airflow=190.0, given=given or GivenPod())


def test_an_unknown_inlet_type_is_refused_with_those_there_are() -> None:
    with pytest.raises(InputRefused, match="'buried' is no inlet type; there are 'podded', 'stra"):
        inlet_type("buried")


@pytest.mark.parametrize("forebody", [0.0, 0.3, 1.0])
def test_a_cowl_without_taper_is_a_cylinder(forebody: float) -> None:
    shape = NacelleProportions(forebody_share=forebody, cowl_exit_ratio=1.0)

    # The coefficients add up to 3.15 where a cylinder has pi.
    assert wetted_area(4.0, 1.5, 1.5, shape) == pytest.approx(pi * 4.0 * 1.5, rel=0.004)


def test_a_slender_gas_generator_is_a_cylinder_or_a_paraboloid() -> None:
    straight = NacelleProportions(fan_cowl_share=0.0, gas_generator_ratio=1.0)
    pointed = replace(straight, gas_generator_exit_ratio=0.0)

    assert wetted_area(50.0, 1.0, 1.0, straight) == pytest.approx(pi * 50.0, rel=1e-12)
    assert wetted_area(50.0, 1.0, 1.0, pointed) == pytest.approx(2 / 3 * pi * 50.0, rel=1e-3)


def test_a_plug_is_nearly_a_paraboloid() -> None:
    plug = replace(FULL_COWL, plug_length_share=0.2, plug_ratio=0.3)

    added = wetted_area(4.0, 1.5, 1.25, plug) - wetted_area(4.0, 1.5, 1.25, FULL_COWL)

    # 0.7 where a slender paraboloid has two thirds.
    assert added == pytest.approx(2 / 3 * pi * 0.8 * 0.45, rel=0.06)


def test_apart_from_each_other_the_exhausts_leave_less_skin() -> None:
    full, short = (wetted_area(4.0, 1.5, 1.25, shape) for shape in (FULL_COWL, SHORT_COWL))

    assert 0.8 * full < short < full < pi * 4.0 * 1.5


def test_estimates_say_what_they_come_from() -> None:
    found = small_pod()

    assert set(found.origins) == {field.name for field in fields(GivenPod)}
    assert "given" not in found.origins.values()
    assert found.installed_mass == pytest.approx(INSTALLED_MASS_RATIO * found.dry_mass)
    assert found.drag_area == pytest.approx(0.0026 * found.wetted_area)
    assert found.doubts == ()


def test_given_numbers_go_before_estimates() -> None:
    found = small_pod(WHOLE)

    assert set(found.origins.values()) == {"given"}
    assert [getattr(found, field.name) for field in fields(GivenPod)] == [
        getattr(WHOLE, field.name) for field in fields(GivenPod)
    ]


@pytest.mark.parametrize("name", [field.name for field in fields(GivenPod)])
def test_each_number_may_be_given_alone(name: str) -> None:
    plain = small_pod()
    given = 1.05 * getattr(plain, name)

    found = small_pod(GivenPod(**{name: given}))

    assert getattr(found, name) == given
    assert [key for key, origin in found.origins.items() if origin == "given"] == [name]


def test_a_dry_mass_follows_from_the_installed_one() -> None:
    found = small_pod(GivenPod(installed_mass=1300.0))

    assert found.dry_mass == pytest.approx(1300.0 / INSTALLED_MASS_RATIO)
    assert "Energy Efficient Engine" in found.origins["dry_mass"]


@pytest.mark.parametrize(
    ("given", "key", "words"),
    [
        (GivenPod(dry_mass=-5.0), "dry_mass", "-5 is not above zero"),
        (GivenPod(length=float("nan")), "length", "nan is not above zero"),
        (GivenPod(drag_area=0.0), "drag_area", "0 is not above zero"),
        (GivenPod(dry_mass=900.0, installed_mass=800.0), "installed_mass", "than the bare engi"),
        (GivenPod(maximum_diameter=1.0), "maximum_diameter", "1 m is less than the fan's 1.145"),
    ],
)
def test_impossible_pods_are_refused(given: GivenPod, key: str, words: str) -> None:
    with pytest.raises(InputRefused, match=words) as refusal:
        small_pod(given)
    assert refusal.value.key == key


def test_a_fan_of_unknown_size_is_refused() -> None:
    bare = jet_engine(55e3, 5.0, 0.85, has_afterburner=False)
    with pytest.raises(InputRefused, match="no airflow to size a fan by"):
        pod(bare)
    assert pod(bare, given=GivenPod(fan_diameter=1.2)).fan_diameter == 1.2


def test_a_turboprop_is_as_wide_as_its_engine_not_its_compressor() -> None:
    bare = turboprop(1.5e6)
    found = pod(bare, corrected_airflow=8.0)

    assert bare.diameter is not None
    assert found.maximum_diameter == pytest.approx(1.2 * bare.diameter)
    assert found.fan_diameter < 0.5 * bare.diameter
    assert "recalled, not read" in found.doubts[0]


def test_a_mass_outside_its_equation_is_doubted() -> None:
    (doubt,) = small_pod(bypass_ratio=10.0).doubts

    assert "bypass ratio 10 by equations for engines without an afterburner up to 6" in doubt
    assert small_pod(GivenPod(dry_mass=900.0), bypass_ratio=10.0).doubts == ()
    reheated = jet_engine(9e4, 1.5, 1.6, has_afterburner=True)
    assert "with an afterburner up to 1" in reheated.doubts[0]


def test_given_numbers_follow_the_scaled_engine() -> None:
    twice = scaled_given(replace(WHOLE, wetted_area=None), 2.0)

    assert twice.dry_mass == pytest.approx(900.0 * 2.0**1.1)
    assert twice.fan_diameter == pytest.approx(1.2 * 2.0**0.5)
    assert twice.length == pytest.approx(3.4 * 2.0**0.4)
    assert twice.drag_area == pytest.approx(0.05 * 2.0**0.9)
    assert twice.wetted_area is None
    assert set(SCALING_EXPONENTS) == {field.name for field in fields(GivenPod)}


@pytest.mark.parametrize("mach", [1.2, 1.6, 2.2])
def test_spillage_is_the_momentum_of_the_spilled_air(mach: float) -> None:
    """The balance behind it, from another side: a control volume around the captured air.

    One-dimensional additive drag: stream thrust at the lip, behind a normal shock and a slow
    diffusion from A0 to A1, less that of the free stream, less ambient pressure on the difference
    of areas. For little spillage it is ``spilled flow (V0 - V_shock)``; ours has a* for V_shock,
    and ``a*^2 = V0 V_shock`` (Prandtl), so the two differ by the factor ``1 + a*/V0``.
    """
    flight, g, area_ratio = flight_condition(11000.0, mach), 1.4, 1.0 + 1e-5
    p0, V0 = float(flight.static_pressure), float(flight.true_airspeed)
    behind = np.sqrt((1.0 + 0.2 * mach**2) / (g * mach**2 - 0.2))
    shock_pressure = p0 * (1.0 + 2.0 * g / (g + 1.0) * (mach**2 - 1.0))

    def area_function(m: float) -> float:
        return float((1.0 + 0.2 * m**2) ** 3 / m)

    lip = brentq(
        lambda m: area_function(m) - area_ratio * area_function(behind), 0.1, behind, xtol=1e-15
    )
    pressure = shock_pressure * ((1.0 + 0.2 * behind**2) / (1.0 + 0.2 * lip**2)) ** 3.5
    A0 = float(capture_area(flight, 50.0))
    A1 = area_ratio * A0
    additive = pressure * A1 * (1.0 + g * lip**2) - p0 * A0 * (1.0 + g * mach**2) - p0 * (A1 - A0)
    sonic = float(flight.speed_of_sound) * np.sqrt((2.0 + (g - 1.0) * mach**2) / (g + 1.0))

    found = spillage_drag(flight, 50.0, A1)

    assert float(found.spilled_flow) == pytest.approx(50.0 * (area_ratio - 1.0), rel=1e-6)
    assert float(found.drag) * (1.0 + sonic / V0) == pytest.approx(additive, rel=1e-4)


def test_nothing_is_spilled_up_to_mach_1_or_at_full_flow() -> None:
    flight = flight_condition(11000.0, [0.0, 0.8, 1.0, 1.001, 1.5])
    flow = flight.density * flight.true_airspeed * 0.4

    slow = spillage_drag(flight, 0.5 * flow, 0.4)
    assert np.all(slow.drag[:3] == 0.0)
    assert np.all(slow.air_shortage == 0.0)
    assert 0.0 < slow.drag[3] < 0.01 * slow.drag[4]
    full = spillage_drag(flight, flow, 0.4)
    assert full.drag == pytest.approx(0.0, abs=1e-9)
    assert full.air_shortage == pytest.approx(0.0, abs=1e-9)


def test_air_that_the_inlet_cannot_pass_is_told() -> None:
    flight = flight_condition(11000.0, [0.8, 1.5])
    flow = flight.density * flight.true_airspeed * 0.4

    found = spillage_drag(flight, 1.1 * flow, 0.4)

    assert found.drag == pytest.approx(0.0)
    assert found.air_shortage == pytest.approx([0.0, 0.1 * flow[1]])


def test_a_capture_area_at_rest_is_refused() -> None:
    with pytest.raises(OutOfRange, match="capture area at Mach 0 would be infinite"):
        capture_area(flight_condition(0.0, [0.0, 0.5]), 50.0)


def test_afterbody_drag_and_a_nozzle_too_large_for_it() -> None:
    found = afterbody_drag([10e3, 20e3, 20e3], 0.8, [0.5, 0.5, 0.9], coefficient=0.1)

    assert found.drag == pytest.approx([300.0, 600.0, 0.0])
    assert found.excess_exit_area == pytest.approx([0.0, 0.0, 0.1])


@pytest.mark.parametrize("content", [turbojet_content, turbofan_content])
def test_thrust_lost_with_recovery_where_the_nozzles_choke(content: object) -> None:
    """A closed form for choked nozzles at one turbine entry temperature, and nothing taken off.

    All ratios inside the engine stay, so all pressures, flows and ``FG + C p0 A8`` go with the
    recovery, C being the gross thrust coefficient: ``dlnF / dlnrecovery = 1 + C p0 A8 / F``.
    """
    constant = {"off_takes": {}, "efficiencies.away_from_design": "constant"}
    changes = {**one_rating(turbine_entry_temperature="1480 K"), **constant}
    engine = load(content(changes))
    flight = flight_condition(10668.0, [0.8, 0.85])

    def at(recovery: float) -> object:
        inlet = replace(engine.arrangement.inlet, total_pressure_recovery=recovery)
        arrangement = replace(engine.arrangement, inlet=inlet)
        return replace(engine, arrangement=arrangement).at_rating(flight, "climb")

    low, middle, high = at(0.9799), at(0.98), at(0.9801)

    assert np.all(middle.kinks[:1] > 0.0)
    coefficient = 0.99 if "13" in middle.stations else 0.98
    area = sum(jet.throat_area for _, jet in middle.evidence.path.jets.values())
    expected = 1.0 + coefficient * flight.static_pressure * area / middle.net_thrust
    found = (high.net_thrust - low.net_thrust) / 2e-4 * 0.98 / middle.net_thrust
    assert found == pytest.approx(expected, rel=1e-7)  # what the central difference leaves
