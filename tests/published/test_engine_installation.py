"""Inlets, pods and spillage against published engines, and the honest error of the statistics.

Masses and sizes by correlation are compared with engines that the correlations were not fitted
to. The errors asserted are the measured ones, to half a per cent: a finding, written down so that
it can be seen to change, not a wish.
"""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from engine_files import load, turbojet_content

from engine.atmosphere import FlightCondition, flight_condition
from engine.cycle_engine import CycleEngine
from engine.installation.correlations import (
    INSTALLED_MASS_RATIO,
    fan_diameter,
    jet_engine,
    turboprop,
)
from engine.installation.drag import spillage_drag
from engine.installation.inlets import inlet_type
from engine.installation.pod import pod

POUND = 0.45359237  # kg
POUND_FORCE = 4.4482216152605  # N
INCH = 0.0254  # m
E3 = "NASA CR-168219, Energy Efficient Engine flight propulsion system, "
RAYMER = "D. P. Raymer, Aircraft Design: A Conceptual Approach, 6th ed., AIAA, "


@pytest.mark.source(RAYMER + "chapter 13, at Eqs 13.5-13.8; grade read")
@pytest.mark.parametrize(
    ("name", "recovery"), [("podded", 0.98), ("straight duct", 0.96), ("S-duct", 0.94)]
)
def test_subsonic_recovery(name: str, recovery: float) -> None:
    assert inlet_type(name).total_pressure_recovery == recovery


@pytest.mark.source(E3 + "fan at maximum climb, Tables XIV to XXIII; grade read")
def test_fan_diameter_from_airflow() -> None:
    found = fan_diameter(646.0)

    # Half of the last printed digit.
    assert found == pytest.approx(2.11, abs=0.005)


@pytest.mark.source(E3 + "Table XXVI; grade read")
def test_installed_mass_is_the_bare_engine_and_its_items() -> None:
    inlet, reverser, cowl_pylon_exhaust, build_up = 162.0, 379.0, 181.0, 270.0
    installed = 3473.0 + inlet + reverser + cowl_pylon_exhaust + build_up
    assert installed == 4465.0
    # Common practice, no source, is 1.3.
    ratio = INSTALLED_MASS_RATIO
    assert ratio == pytest.approx(installed / 3473.0, rel=1e-12)
    assert ratio == pytest.approx(1.3, abs=0.02)


@pytest.mark.source(
    RAYMER + "Eqs 10.1-10.15 and App. E; " + E3 + "Table XXVI; Smithsonian National Air and Space "
    "Museum, collection record of the J85-GE-17A; grade read"
)
@pytest.mark.parametrize(
    ("thrust", "bypass_ratio", "reheated_mach", "mass", "error"),
    [
        # The thrust that the masses belong to is not said: first or final size.
        pytest.param(162.36e3, 7.0, None, 3473.0, -0.164, id="E3 as first sized"),
        pytest.param(173.5e3, 7.0, None, 3473.0, -0.101, id="E3 as finally sized"),
        pytest.param(50000 * POUND_FORCE, 8.0, None, 7700 * POUND, 0.123, id="Raymer E.2"),
        pytest.param(2850 * POUND_FORCE, 0.0, None, 399 * POUND, 0.329, id="J85-GE-17A"),
        # Its greatest Mach number is not said.
        pytest.param(30000 * POUND_FORCE, 0.41, 1.0, 3000 * POUND, 0.267, id="E.1 for Mach 1"),
        pytest.param(30000 * POUND_FORCE, 0.41, 2.0, 3000 * POUND, 0.507, id="E.1 for Mach 2"),
    ],
)
def test_error_of_the_mass_correlation(
    thrust: float, bypass_ratio: float, reheated_mach: float | None, mass: float, error: float
) -> None:
    has_afterburner = reheated_mach is not None
    estimate = jet_engine(
        thrust, bypass_ratio, reheated_mach or 0.8, has_afterburner=has_afterburner
    )

    assert estimate.mass / mass - 1.0 == pytest.approx(error, abs=0.005)


@pytest.mark.source(RAYMER + "Eqs 10.1-10.15 and App. E; grade read, Mach numbers own")
@pytest.mark.parametrize(
    ("thrust", "mach", "has_afterburner", "inches", "error"),
    [
        (50000, 0.85, False, 150.0, 0.086),
        (30000, 1.0, True, 160.0, 0.181),
        (30000, 2.0, True, 160.0, 0.357),
    ],
)
def test_error_of_the_length_correlation(
    thrust: float, mach: float, has_afterburner: bool, inches: float, error: float
) -> None:
    estimate = jet_engine(thrust * POUND_FORCE, 0.4, mach, has_afterburner=has_afterburner)

    assert estimate.length / (inches * INCH) - 1.0 == pytest.approx(error, abs=0.005)


@pytest.mark.source(RAYMER + "App. E, notional engines E.1 and E.2; grade read")
@pytest.mark.parametrize(
    ("thrust", "bypass_ratio", "mach", "has_afterburner", "pounds_of_air", "inches"),
    [(30000, 0.41, 2.0, True, 246.0, 44.0), (50000, 8.0, 0.85, False, 1680.0, 100.0)],
    ids=["E.1", "E.2"],
)
def test_the_nacelle_goes_around_the_engine(
    thrust: float,
    bypass_ratio: float,
    mach: float,
    has_afterburner: bool,
    pounds_of_air: float,
    inches: float,
) -> None:
    bare = jet_engine(thrust * POUND_FORCE, bypass_ratio, mach, has_afterburner=has_afterburner)
    found = pod(bare, corrected_airflow=pounds_of_air * POUND)

    # The engine's greatest diameter, cases and accessories included, lies between fan and cowl.
    engine_diameter = inches * INCH
    assert found.fan_diameter < engine_diameter < found.maximum_diameter
    assert found.maximum_diameter < 1.2 * engine_diameter


@pytest.mark.source(
    "Common data sheets of two turboprops of 750 and 4591 hp, PT6A-34 and T56-A-15; grade from "
    "memory"
)
@pytest.mark.parametrize(
    ("horsepower", "pounds", "inches_across", "within"),
    [(750.0, 331.0, 19.0, 0.15), (4591.0, 1850.0, 27.0, 0.25)],
)
def test_turboprops_are_of_the_right_size(
    horsepower: float, pounds: float, inches_across: float, within: float
) -> None:
    """Rough, as the figures are recalled: enough to tell the equation of another kind of engine.

    Found: 3 % heavy and 21 % light; 12 % wide and 2 % narrow.
    """
    bare = turboprop(horsepower * 745.7)

    assert bare.mass == pytest.approx(pounds * POUND, rel=within)
    assert bare.diameter == pytest.approx(inches_across * INCH, rel=0.15)


def loss_per_recovery(engine: CycleEngine, flight: FlightCondition, drop: float) -> np.ndarray:
    """Fraction of net thrust lost at the rating, over the drop of recovery from 1."""

    def thrust(recovery: float) -> np.ndarray:
        inlet = replace(engine.arrangement.inlet, total_pressure_recovery=recovery)
        arrangement = replace(engine.arrangement, inlet=inlet)
        state = replace(engine, arrangement=arrangement).at_rating(flight, "climb")
        assert np.all(state.outcome == 0)
        return state.net_thrust

    return (1.0 - thrust(1.0 - drop) / thrust(1.0)) / drop


@pytest.mark.source(RAYMER + "chapter 13, at Eqs 13.5-13.8: C_ram; grade read")
def test_thrust_lost_with_recovery_of_a_turbojet() -> None:
    """Raymer's one number for all engines, 1.35 and falling by 0.15 per Mach number.

    At a fixed turbine entry temperature a choked engine loses ``1 + p0 A8 / F`` per recovery
    (tests/engine/test_installation.py), 1.2 to 1.5 for the specific thrusts of turbojets: hence
    the tolerance of 0.15. Found: 1.25 to 1.46 subsonic with a convergent nozzle, least where it is
    well choked; with a convergent-divergent one 1.34, falling to 1.30 at Mach 2 (Raymer 1.20).
    """
    ratings = ("take_off", "maximum_continuous", "climb", "cruise")
    rating = {f"ratings.{name}": {"turbine_entry_temperature": "1250 K"} for name in ratings}
    convergent = load(turbojet_content(rating))
    divergent = load(turbojet_content({**rating, "nozzle.kind": "convergent-divergent"}))
    subsonic = flight_condition([0.0, 0.0, 5000.0, 10668.0, 10668.0], [0.0, 0.3, 0.5, 0.78, 0.9])
    faster = flight_condition(11000.0, [0.5, 0.8, 1.0, 1.2, 1.5, 2.0])

    assert loss_per_recovery(convergent, subsonic, 0.02) == pytest.approx(1.35, abs=0.15)
    expected = 1.35 - 0.15 * np.maximum(faster.mach - 1.0, 0.0)
    found = loss_per_recovery(divergent, faster, 0.05)
    assert found == pytest.approx(expected, abs=0.15)
    assert np.all(np.diff(found[2:]) < 0.0)


@pytest.mark.source(RAYMER + "chapter 13, at Eqs 13.5-13.8: C_ram; grade read, range own")
def test_a_bypass_makes_recovery_dearer_than_published(turbofan: CycleEngine) -> None:
    """A finding: 1.35 does not hold for a turbofan of bypass ratio 5, which loses 1.9 to 2.6.

    By the same closed form: a low jet velocity needs a large nozzle for its thrust, and ambient
    pressure on that area does not fall with recovery.
    """
    flight = flight_condition([0.0, 0.0, 5000.0, 10668.0, 10668.0], [0.0, 0.3, 0.5, 0.78, 0.9])

    found = loss_per_recovery(turbofan, flight, 0.02)

    assert np.all(found > 1.35 + 0.5)
    assert np.all(found < 2.7)


@pytest.mark.source(
    "J. D. Mattingly, W. H. Heiser and D. T. Pratt, Aircraft Engine Design, 2nd ed., AIAA, section "
    "6.2; grade from memory"
)
@pytest.mark.parametrize("mach", [1.1, 1.5, 2.0])
@pytest.mark.parametrize("area_ratio", [1.02, 1.3])
def test_spillage_in_the_letters_of_its_authors(mach: float, area_ratio: float) -> None:
    flight = flight_condition(11000.0, mach)
    m0, F, g = 60.0, 40e3, 1.4
    A0 = m0 / (flight.density * flight.true_airspeed)
    a0 = flight.speed_of_sound

    sonic = np.sqrt(2.0 / (g + 1.0) + (g - 1.0) / (g + 1.0) * mach**2)
    phi = (area_ratio - 1.0) * (mach - sonic) / (F / (m0 * a0))

    found = spillage_drag(flight, m0, area_ratio * A0)
    assert float(found.drag) == pytest.approx(float(phi * F), rel=1e-12)
