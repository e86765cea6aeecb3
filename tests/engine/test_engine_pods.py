"""The pod of a computed engine: sized by the air it takes in, shaped by how its streams leave."""

from __future__ import annotations

from math import sqrt

import numpy as np
import pytest
from engine_kinds import engine_of

from engine.atmosphere import flight_condition
from engine.installation.correlations import HUB_TIP_RATIO, SPECIFIC_AIRFLOW
from engine.installation.nacelle import FULL_COWL, SHORT_COWL, wetted_area
from engine.installation.pod import GivenPod, scaled_given


@pytest.mark.parametrize("kind", ["turbojet", "turbofan", "mixed", "turboprop"])
def test_the_fan_passes_the_greatest_corrected_airflow(kind: str) -> None:
    """At rest at take-off, or at the design point where that is more."""
    engine = engine_of(kind)
    at_rest = engine.at_rating(flight_condition(0.0, 0.0), "take_off").stations["2"]
    root = np.sqrt(float(at_rest.total_temperature) / 288.15)
    resting = float(at_rest.mass_flow) * root * 101325.0 / float(at_rest.total_pressure)

    fan = engine.pod.fan_diameter

    annulus = 0.25 * np.pi * fan**2 * (1.0 - HUB_TIP_RATIO**2)
    design = engine.sizing.flows.get("fan", engine.sizing.flows["high_pressure_compressor"])
    greatest = max(resting, design * 101325.0 / sqrt(288.15))
    assert annulus * SPECIFIC_AIRFLOW == pytest.approx(greatest, rel=1e-9)


@pytest.mark.parametrize(
    ("kind", "shape"),
    [
        ("turbofan", SHORT_COWL),
        ("geared", SHORT_COWL),
        ("mixed", FULL_COWL),
        ("turbojet", FULL_COWL),
    ],
)
def test_only_streams_that_leave_apart_have_a_short_cowl(kind: str, shape: object) -> None:
    pod = engine_of(kind).pod
    area = wetted_area(pod.length, pod.maximum_diameter, pod.fan_diameter, shape)  # type: ignore[arg-type]

    assert pod.wetted_area == pytest.approx(area, rel=1e-12)


def test_each_given_number_has_its_power_of_thrust() -> None:
    """Raymer's for mass, diameter and length; an area goes as length times diameter."""
    whole = GivenPod(1.2, 3.4, 1.5, 900.0, 1250.0, 14.0, 0.05)

    twice = scaled_given(whole, 2.0)

    assert twice.dry_mass == pytest.approx(900.0 * 2.0**1.1)
    assert twice.installed_mass == pytest.approx(1250.0 * 2.0**1.1)
    assert twice.maximum_diameter == pytest.approx(1.5 * 2.0**0.5)
    assert twice.wetted_area == pytest.approx(14.0 * 2.0 ** (0.4 + 0.5))
    assert twice.drag_area == pytest.approx(0.05 * 2.0 ** (0.4 + 0.5))
