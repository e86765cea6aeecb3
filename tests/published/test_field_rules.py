"""Field length against the statistics of jet transports, and the gradients that the rule asks."""

from __future__ import annotations

import numpy as np
import pytest

from mission.field.cases import (
    APPROACH_CLIMB,
    FINAL_TAKE_OFF,
    GEAR_EXTENDED,
    LANDING_CLIMB,
    SECOND_SEGMENT,
    Case,
    is_met,
    required_gradient,
)
from mission.field.lengths import all_engine_field_length, balanced_field_length

RULE = "14 CFR part 25, sections 25.119 and 25.121, climb gradients by engine count; from memory"
TORENBEEK = (
    "E. Torenbeek, Synthesis of Subsonic Airplane Design (1982), section 5.4.5 and appendix K, "
    "with D. P. Raymer, Aircraft Design: A Conceptual Approach, equation 17.113; from memory"
)
LOFTIN = (
    "L. K. Loftin, Subsonic Aircraft: Evolution and the Matching of Size to Performance, NASA "
    "RP-1060 (1980), chapter 3, as J. Roskam, Airplane Design, part I, equation 3.8 has it in "
    "feet: 37.5 ft of FAR 25 field length a lb/ft2 of (W/S) / (sigma CL T/W); from memory"
)
G, FOOT, POUND_FORCE = 9.80665, 0.3048, 4.4482216152605


@pytest.mark.source(RULE)
@pytest.mark.parametrize(
    ("case", "percent"),
    [
        (GEAR_EXTENDED, (0.0, 0.3, 0.5)),
        (SECOND_SEGMENT, (2.4, 2.7, 3.0)),
        (FINAL_TAKE_OFF, (1.2, 1.5, 1.7)),
        (APPROACH_CLIMB, (2.1, 2.4, 2.7)),
        (LANDING_CLIMB, (3.2, 3.2, 3.2)),
    ],
)
def test_gradients_asked_of_two_three_and_four_engines(
    case: Case, percent: tuple[float, float, float]
) -> None:
    asked = [100.0 * required_gradient(case, engines) for engines in (2, 3, 4, 6)]
    assert asked == pytest.approx([*percent, percent[2]], abs=1e-12)


@pytest.mark.source(RULE)
def test_with_gear_down_two_engines_must_climb_at_all() -> None:
    assert not is_met(GEAR_EXTENDED, 2, 0.0)
    assert is_met(GEAR_EXTENDED, 2, 1e-6)
    assert not is_met(GEAR_EXTENDED, 3, 0.0029)
    assert is_met(SECOND_SEGMENT, 2, 0.024)


@pytest.mark.source(TORENBEEK)
def test_balanced_length_as_the_book_has_it_in_feet() -> None:
    """W/S 100 lb/ft2, CL_max 2, T/W 0.25, dgamma 0.01, 90 % of sea-level density, 35 ft."""
    weight_density = 0.9 * 1.225 * G / POUND_FORCE * FOOT**3  # rho g, lb/ft3
    climb_lift = 2.0 / 1.2**2
    feet = 0.863 / (1.0 + 2.3 * 0.01) * (100.0 / (weight_density * climb_lift) + 35.0) * (
        1.0 / (0.25 - (0.01 * 2.0 + 0.02)) + 2.7
    ) + 655.0 / np.sqrt(0.9)
    v2 = np.sqrt(2.0 * 100.0 * POUND_FORCE / FOOT**2 / (0.9 * 1.225 * climb_lift))
    ours = balanced_field_length(v2, 0.25, 0.01, 2.0, 0.9)
    # 655 ft are the book's 200 m rounded: 0.4 m of 1,800.
    assert float(ours) == pytest.approx(feet * FOOT, abs=0.5)


def statistics(engines: int) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """Balanced and all-engine length of a class of transports, and the statistical line [m].

    Loading 400 to 600 kg/m2, CL_max 1.8 and 2.2, static T/W 0.25 to 0.35. Mean thrust by the
    book's 0.75 (5 + b) / (4 + b) at bypass ratio b = 5, at lift-off 0.82 of static thrust; drag
    0.045 + 0.042 CL^2 with flaps, 0.015 more with gear: guesses of ours for the class.
    """
    loading, lift, thrust = np.meshgrid([400.0, 500.0, 600.0], [1.8, 2.2], [0.25, 0.30, 0.35])
    speed = 1.2 * np.sqrt(2.0 * loading * G / (1.225 * lift))
    flown = lift / 1.44
    drag = 0.045 / flown + 0.042 * flown
    mean, left = 0.75 * 10.0 / 9.0 * thrust, 0.82 * thrust
    excess = (engines - 1) / engines * left - drag - required_gradient(SECOND_SEGMENT, engines)
    balanced = balanced_field_length(speed, mean, excess, lift, 1.0)
    all_engine = all_engine_field_length(speed, mean, left - drag - 0.015 / flown, lift)
    pounds = loading * G / POUND_FORCE * FOOT**2
    return balanced, all_engine, 37.5 * FOOT * pounds / (lift * thrust)


@pytest.mark.source(LOFTIN)
@pytest.mark.parametrize("engines", [2, 3, 4])
def test_field_length_beside_the_statistics_of_jet_transports(engines: int) -> None:
    balanced, all_engine, line = statistics(engines)
    # Found: 9 to 17 % longer than the line.
    error = np.maximum(balanced, all_engine) / line - 1.0
    assert np.all(error > 0.0)
    assert np.all(error < 0.20)
    # The balanced length alone: -8 to +17 %.
    assert np.all(np.abs(balanced / line - 1.0) < 0.20)


@pytest.mark.source("Energy and mean-thrust balance of a take-off, independent march; own")
@pytest.mark.parametrize("engines", [3, 4])
@pytest.mark.parametrize("loading", [4000.0, 5500.0])
@pytest.mark.parametrize("lift", [1.8, 2.2])
@pytest.mark.parametrize("thrust", [0.27, 0.32])
def test_balanced_length_beside_a_failure_marched(
    engines: int, loading: float, lift: float, thrust: float
) -> None:
    """An engine fails at the speed at which to stop takes as much as to go on; N/m2, T/W.

    Stopping: 3 s at that speed, then 0.37 g. Going on: the run on the engines left, 2 s to turn
    the nose up, then the energy of 35 ft and of 1.15 to 1.2 V_S at the climb's gradient.
    """
    stall = np.sqrt(2.0 * loading / (1.225 * lift))
    share = (engines - 1) / engines

    def run(start: float, end: float, left: float) -> float:
        speed = np.linspace(start, end, 401)
        pressure = 0.6125 * speed**2 / loading
        gained = G * (left * thrust - 0.0705 * pressure - 0.02 * (1.0 - 0.5 * pressure))
        return float(np.trapezoid(speed / gained, speed))

    clean = 0.040 / (lift / 1.44) + 0.042 * lift / 1.44
    rise = share * thrust - clean - 0.020 / (lift / 1.44)
    air = 2.0 * 1.15 * stall + ((1.2**2 - 1.15**2) * stall**2 / (2.0 * G) + 35.0 * FOOT) / rise

    speeds = np.linspace(0.5, 1.15, 131) * stall
    on = np.array([run(0.0, v, 1.0) + run(v, 1.15 * stall, share) + air for v in speeds])
    off = np.array([run(0.0, v, 1.0) + 3.0 * v + v**2 / (2.0 * G * 0.37) for v in speeds])
    marched = float(np.min(np.maximum(on, off)))
    excess = share * thrust - clean - required_gradient(SECOND_SEGMENT, engines)
    found = balanced_field_length(1.2 * stall, thrust, excess, lift, 1.0)
    # Found: -6 to +5 %. No such agreement for twins that hardly climb with the gear down: marched,
    # they need 20 % more at a gradient of 3 % there, and twice the length near none.
    assert float(found) == pytest.approx(marched, rel=0.08)
