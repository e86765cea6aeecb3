"""The pod of a computed engine, estimated from what it does at rest at sea level."""

from __future__ import annotations

import numpy as np

from engine.atmosphere import SEA_LEVEL_PRESSURE, SEA_LEVEL_TEMPERATURE
from engine.cycles.flowpath import Arrangement
from engine.cycles.mixed_turbofan import MixedTurbofan
from engine.cycles.situation import Sizing
from engine.cycles.turbofan import Turbofan
from engine.installation.correlations import BareEngine, jet_engine, turboprop
from engine.installation.nacelle import FULL_COWL, SHORT_COWL
from engine.installation.pod import GivenPod, Pod, pod
from engine.interface import EngineState


def pod_of(
    arrangement: Arrangement,
    sizing: Sizing,
    at_rest: EngineState,
    given: GivenPod,
    greatest_mach: float,
) -> Pod:
    """Size, mass and skin drag of an engine in its nacelle; see :mod:`engine.installation.pod`.

    ``at_rest`` is its greatest rating at sea level on a standard day, of no shape; the greatest
    corrected airflow is that there or of the design point.
    """
    face = at_rest.stations["2"]
    design_flow = sizing.flows.get("fan", sizing.flows["high_pressure_compressor"])
    flow = float(face.mass_flow * np.sqrt(face.total_temperature) / face.total_pressure)
    greatest = max(flow, design_flow)
    return pod(
        _bare(arrangement, at_rest, greatest_mach),
        corrected_airflow=greatest * SEA_LEVEL_PRESSURE / SEA_LEVEL_TEMPERATURE**0.5,
        proportions=SHORT_COWL if isinstance(arrangement, Turbofan) else FULL_COWL,
        given=given,
    )


def _bare(arrangement: Arrangement, at_rest: EngineState, greatest_mach: float) -> BareEngine:
    """The engine without its nacelle."""
    assert at_rest.evidence is not None
    work = at_rest.evidence.path.propeller
    if work is not None:
        return turboprop(float(work.shaft_power.item()))
    bypass = arrangement.bypass_ratio if isinstance(arrangement, Turbofan | MixedTurbofan) else 0.0
    return jet_engine(
        float(at_rest.net_thrust),
        bypass,
        greatest_mach,
        has_afterburner=arrangement.afterburner is not None,
    )
