"""What stands behind the last turbine: duct, afterburner or none, nozzle; and lighting it.

The gas generator is matched with the afterburner dry. Lit, the throat opens by what the hotter
stream needs, so that nothing ahead of it moves.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from engine.cycles.flowpath import Arrangement, Flowpath
from engine.cycles.installed import charge
from engine.cycles.situation import Situation
from engine.gas import Gas
from engine.parts.afterburner import Afterburner, reheat
from engine.parts.nozzle import Jet, Nozzle, discharge
from engine.parts.stream import Array, Stream


@dataclass(frozen=True)
class Exhaust:
    """The stream at nozzle entry, its jet, the share of pressure lost ahead, the duct's flow."""

    nozzle_entry: Stream
    jet: Jet
    lost: Array
    flows: dict[str, Array]


def let_out(
    gas: Gas,
    nozzle: Nozzle,
    afterburner: Afterburner | None,
    stream: Stream,
    situation: Situation,
    part: str = "core_nozzle",
) -> Exhaust:
    """A stream through a duct, an afterburner that is dry, and a nozzle; ``part`` names both."""
    lost = situation.duct_loss(part, nozzle.pressure_loss_fraction, stream)
    if afterburner is not None:
        dry = situation.duct_loss(part, afterburner.dry_pressure_loss_fraction, stream)
        lost = 1.0 - (1.0 - lost) * (1.0 - dry)
    ahead = stream.with_pressure_loss(lost)
    jet = discharge(gas, nozzle, ahead, situation.flight.static_pressure)
    return Exhaust(ahead, jet, lost, {part: stream.duct_flow})


def with_reheat(
    arrangement: Arrangement, path: Flowpath, situation: Situation, temperature: Array
) -> Flowpath:
    """The same engine with its afterburner lit to a total temperature [K] at station 7."""
    afterburner = arrangement.afterburner
    assert afterburner is not None
    dry, _ = path.jets["9"]
    lit = reheat(arrangement.gas, afterburner, dry, temperature)
    jet = discharge(
        arrangement.gas, arrangement.exhaust_nozzle, lit, situation.flight.static_pressure
    )
    fuel_flow = lit.fuel_flow - dry.fuel_flow
    heat = fuel_flow * afterburner.lower_heating_value
    limits = {
        "afterburner_temperature": lit.total_temperature,
        "afterburner_fuel_air_ratio": lit.fuel_air_ratio,
    }
    hot = replace(
        path,
        stations={**path.stations, "7": lit},
        jets={**path.jets, "9": (lit, jet)},
        limits={**path.limits, **limits},
        fuel_flow=path.fuel_flow + fuel_flow,
        unburnt_fuel=path.unburnt_fuel + heat * (1.0 - np.asarray(afterburner.efficiency)),
    )
    return charge(hot, arrangement.installation, situation)
