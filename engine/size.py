"""How large an engine is: its pod, and the same engine larger or smaller."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace

import numpy as np

from engine.atmosphere import flight_condition
from engine.cycle_engine import CycleEngine
from engine.cycles.flowpath import LIMIT_NAMES, Arrangement
from engine.cycles.mixed_turbofan import MixedTurbofan
from engine.cycles.sizing import scaled as scaled_sizing
from engine.cycles.turbofan import Turbofan
from engine.cycles.turboprop import Turboprop
from engine.errors import CycleCannotRun, InputRefused
from engine.installation.correlations import BareEngine, jet_engine, turboprop
from engine.installation.nacelle import FULL_COWL, SHORT_COWL
from engine.installation.pod import GivenPod, Pod, pod, scaled_given
from engine.interface import EngineState, is_unanswered
from engine.ratings import Rating

_SHAFT_POWER = LIMIT_NAMES.index("propeller_shaft_power")
_MOST_ROUNDS = 20


def pod_of(engine: CycleEngine, given: GivenPod, greatest_mach: float) -> Pod:
    """Size, mass and skin drag of the engine in its nacelle; see :mod:`engine.installation.pod`.

    Estimated from its greatest static thrust at sea level on a standard day and its greatest
    corrected airflow, there or at the design point.
    """
    state = _static(engine)
    face = state.stations["2"]
    parts = engine.sizing.flows
    design_flow = parts.get("fan", parts["high_pressure_compressor"]) * 101325.0 / 288.15**0.5
    corrected = float(face.mass_flow * np.sqrt(face.total_temperature / 288.15))
    corrected *= 101325.0 / float(face.total_pressure)
    cowl = SHORT_COWL if isinstance(engine.arrangement, Turbofan) else FULL_COWL
    return pod(
        _bare(engine.arrangement, state, greatest_mach),
        corrected_airflow=max(corrected, design_flow),
        proportions=cowl,
        given=given,
    )


def _bare(arrangement: Arrangement, state: EngineState, greatest_mach: float) -> BareEngine:
    assert state.evidence is not None
    work = state.evidence.path.propeller
    if work is not None:
        return turboprop(float(work.shaft_power.item()))
    bypass = arrangement.bypass_ratio if isinstance(arrangement, Turbofan | MixedTurbofan) else 0.0
    return jet_engine(
        float(state.net_thrust),
        bypass,
        greatest_mach,
        has_afterburner=arrangement.afterburner is not None,
    )


def _static(engine: CycleEngine) -> EngineState:
    """The greatest rating at rest, at sea level on a standard day."""
    is_reheated = "maximum_afterburning" in engine.ratings
    state = engine.at_rating(
        flight_condition(0.0, 0.0), "maximum_afterburning" if is_reheated else "take_off"
    )
    if is_unanswered(state.outcome).any():
        raise CycleCannotRun(
            f"{engine.name} has no take-off state at rest, from which its size is reckoned"
        )
    return state


def scaled(engine: CycleEngine, factor: float) -> CycleEngine:
    """The same engine with all flow areas multiplied by a factor.

    A propeller's disc and the power its gearbox takes follow, as do the areas of the installation;
    what the aircraft takes off the engine, and intensive limits, stay.
    """
    arrangement = engine.arrangement
    if isinstance(arrangement, Turboprop):
        diameter = arrangement.train.propeller_diameter * factor**0.5
        train = replace(arrangement.train, propeller_diameter=diameter)
        arrangement = replace(arrangement, train=train)
    around = arrangement.installation
    if around is not None:
        arrangement = replace(arrangement, installation=around.scaled(factor))
    return replace(
        engine,
        arrangement=arrangement,
        sizing=scaled_sizing(engine.sizing, factor),
        bounds=_scaled_power(engine.bounds, factor),
        given_pod=scaled_given(engine.given_pod, factor),
    )


def _scaled_power(bounds: Mapping[str, Rating], factor: float) -> dict[str, Rating]:
    found = {}
    for name, rating in bounds.items():
        limits = rating.bounds.copy()
        limits[_SHAFT_POWER] *= factor
        found[name] = replace(rating, bounds=limits)
    return found


def scaled_to(
    engine: CycleEngine, *, static_thrust: float | None = None, airflow: float | None = None
) -> CycleEngine:
    """The engine scaled to a take-off thrust [N] at rest, or to an airflow [kg/s] at its design.

    Raises
    ------
    InputRefused
        where no size gives that thrust, as off-takes of the aircraft do not scale with the engine.
    """
    if airflow is not None:
        return scaled(engine, airflow / engine.sizing.design_airflow)
    assert static_thrust is not None
    factor, at_rest = 1.0, flight_condition(0.0, 0.0)
    for _ in range(_MOST_ROUNDS):
        found = scaled(engine, factor)
        state = found.at_rating(at_rest, "take_off")
        thrust = float(state.net_thrust)
        if is_unanswered(state.outcome).any() or not thrust > 0.0:
            break
        if abs(thrust / static_thrust - 1.0) < 1e-12:
            return found
        factor *= static_thrust / thrust
    raise InputRefused(
        f"= {static_thrust:.0f} N cannot be reached by scaling; at {factor:.3g} times its size the "
        "engine has no such take-off state",
        key="scale.static_thrust",
    )
