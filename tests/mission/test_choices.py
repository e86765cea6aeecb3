"""Choices that depend on mass: kept while it stays, and led to rest where it answers to them."""

from __future__ import annotations

import pytest

from mission.segments.choices import Choices

SAME = 1e-7


def plans_until_rest(slope: float, start: float, *, matters: float = SAME) -> tuple[int, float]:
    """Plans of a flight whose mass is found a share of what it was chosen for, until at rest."""
    choices, mass = Choices(), start
    for plan in range(1, 20):
        chosen = choices.at(3, "level", mass, lambda own: own, end=-1, matters=matters)
        mass = 20000.0 + slope * (chosen - 20000.0) + 2e-6 * (chosen - 20000.0) ** 2
        choices.fit({3: (25000.0, mass)})
        if choices.is_at_rest:
            return plan, mass
    return 20, mass


@pytest.mark.parametrize("slope", [-0.3, -0.1, 0.0, 0.12, 0.4])
def test_a_mass_that_answers_to_the_choice_comes_to_rest_soon(slope: float) -> None:
    """By plain repetition 0.4 would take 20 plans to come within 1e-7."""
    plans, mass = plans_until_rest(slope, 22500.0)
    assert plans <= 6
    assert mass == pytest.approx(20000.0, rel=2e-7)


def test_a_choice_is_kept_while_the_mass_hardly_moves() -> None:
    choices, asked = Choices(), []

    def choose(mass: float) -> float:
        asked.append(mass)
        return mass

    for mass in (20000.0, 20010.0, 19990.0):
        assert choices.at(0, "level", mass, choose) == 20000.0
        choices.fit({0: (mass, mass)})
        assert choices.is_at_rest
    assert asked == [20000.0]
    choices.fit({0: (20100.0, 20100.0)})
    assert not choices.is_at_rest
    assert choices.at(0, "level", 20100.0, choose) == 20100.0


def test_choices_of_rows_and_subjects_are_apart() -> None:
    choices = Choices()
    assert choices.at(0, "level", 1.0, lambda mass: "first") == "first"
    assert choices.at(1, "level", 1.0, lambda mass: "other row") == "other row"
    assert choices.at(0, "path", 1.0, lambda mass: "other subject") == "other subject"
    choices.fit({1: (2.0, 2.0)})
    assert choices.at(0, "level", 1.0, lambda mass: "again") == "first"
    assert choices.at(1, "level", 2.0, lambda mass: "again") == "again"


def test_a_mass_that_swings_too_far_is_not_led_further() -> None:
    """Steeper than a half no secant is believed: the mass found is chosen for."""
    choices = Choices()
    asked: list[float] = []

    def choose(mass: float) -> float:
        asked.append(mass)
        return mass

    mass = 100.0
    for _ in range(4):
        chosen = choices.at(0, "level", mass, choose, matters=SAME)
        mass = 200.0 - 0.8 * chosen
        choices.fit({0: (mass, mass)})
    assert asked == pytest.approx([100.0, 120.0, 104.0, 116.8])
