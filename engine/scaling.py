"""The same engine larger or smaller."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace

from engine.atmosphere import flight_condition
from engine.cycle_engine import CycleEngine
from engine.cycles.flowpath import LIMIT_NAMES
from engine.cycles.sizing import scaled as scaled_sizing
from engine.cycles.turboprop import Turboprop
from engine.errors import InputRefused
from engine.installation.pod import scaled_given
from engine.interface import is_unanswered
from engine.ratings import Rating

_SHAFT_POWER = LIMIT_NAMES.index("propeller_shaft_power")
_MOST_ROUNDS = 20


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
