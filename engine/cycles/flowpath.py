"""What an arrangement of parts returns when its unknowns are given, and what it must offer."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any, ClassVar, Protocol

import numpy as np
from numpy.typing import NDArray

from engine.atmosphere import FlightCondition
from engine.cycles.core import Core
from engine.fuels import Fuel
from engine.gas import Gas
from engine.parts.inlet import Inlet
from engine.parts.nozzle import Jet
from engine.parts.stream import Stream

Array = NDArray[np.float64]

# Quantities that a rating may hold below a ceiling and idle above a floor.
LIMIT_NAMES = (
    "turbine_entry_temperature",
    "compressor_delivery_temperature",
    "compressor_delivery_pressure",
    "corrected_low_pressure_speed",
    "low_pressure_speed",
    "corrected_high_pressure_speed",
    "high_pressure_speed",
    "fuel_air_ratio",
)


@dataclass(frozen=True)
class Flowpath:
    """The engine at given unknowns, before anybody asked whether its flows match.

    Attributes
    ----------
    stations : total states by SAE AS755 station number
    jets : the stream of each nozzle entry with its jet, by the station of the nozzle exit
    areas : area [m2] that each flow-setting throat would need, by name
    duct_flows : ``W sqrt(T) / p`` at the entry of each duct that loses pressure, by name
    limits : values that ratings and idle bound, by :data:`LIMIT_NAMES`, shape (8, ...)
    shaft_power : taken off by the customer [W]
    bleed : the stream taken off by the customer
    mechanical_loss : bearings and gearbox [W]
    fuel_flow : [kg/s]
    spool_rises : specific work [J/kg] and inlet total temperature [K] that estimate each speed
    """

    stations: Mapping[str, Stream]
    jets: Mapping[str, tuple[Stream, Jet]]
    areas: Mapping[str, Array]
    duct_flows: Mapping[str, Array]
    limits: Array
    shaft_power: Array
    bleed: Stream
    mechanical_loss: Array
    fuel_flow: Array
    spool_rises: Mapping[str, tuple[Array, Array]]

    @property
    def gross_thrust(self) -> Array:
        """Sum of the jets' gross thrusts [N]."""
        return np.asarray(sum(jet.gross_thrust for _, jet in self.jets.values()))

    def net_thrust(self, flight: FlightCondition) -> Array:
        """Gross thrust less the momentum of the air taken in [N]."""
        return self.gross_thrust - self.stations["2"].mass_flow * flight.true_airspeed


@dataclass(frozen=True)
class Sizing:
    """What sizing the engine at its design point leaves fixed.

    Attributes
    ----------
    unknowns : logarithms of the arrangement's unknowns at the design point, shape (n,)
    areas : fixed area [m2] of each flow-setting throat, shape (n - 1,)
    duct_flows : ``W sqrt(T) / p`` at the design point, by duct
    spool_rises : design values behind the estimated spool speeds
    booster_rise_ratio : booster over fan specific work; 0 without booster
    reference_thrust : net thrust at the design point [N]
    reference_pressure : engine-face total pressure at the design point [Pa]
    design_airflow : at the design point [kg/s]
    """

    unknowns: Array
    areas: Mapping[str, float]
    duct_flows: Mapping[str, float]
    spool_rises: Mapping[str, tuple[float, float]]
    booster_rise_ratio: float
    reference_thrust: float
    reference_pressure: float
    design_airflow: float


class Arrangement(Protocol):
    """Parts joined to an engine, a frozen dataclass: names its unknowns and evaluates them."""

    __dataclass_fields__: ClassVar[dict[str, Any]]

    @property
    def gas(self) -> Gas:
        """Properties of every stream."""
        ...

    @property
    def fuel(self) -> Fuel:
        """What it burns."""
        ...

    @property
    def inlet(self) -> Inlet:
        """What stands ahead of the engine face."""
        ...

    @property
    def core(self) -> Core:
        """The gas generator."""
        ...

    @property
    def unknown_names(self) -> tuple[str, ...]:
        """What matching solves for; the airflow, which sets the size, stands last."""
        ...

    def design_unknowns(self, face: Stream) -> Array:
        """Logarithms of the unknowns at the design point, for a core airflow of 1 kg/s."""
        ...

    def evaluate(
        self,
        unknowns: Array,
        face: Stream,
        ambient_pressure: Array,
        sizing: Sizing | None,
        *,
        is_lit: bool,
    ) -> Flowpath:
        """The engine at the logarithms of its unknowns (n, ...), at an engine-face state."""
        ...


def corrected_flow_factor(face: Stream) -> Array:
    """Physical over corrected mass flow at the engine face: delta over root theta."""
    return (face.total_pressure / 101325.0) / np.sqrt(face.total_temperature / 288.15)


def spool_speeds(
    rises: Mapping[str, tuple[Array, Array]], spool: str, sizing: Sizing | None
) -> tuple[Array, Array]:
    """Corrected and physical speed over their design values, estimated at constant loading.

    Specific work grows with the square of blade speed where the velocity triangles stay similar;
    so does Farokhi, Aircraft Propulsion, section 10.3 and Example 10.2.
    """
    work, temperature = rises[spool]
    if sizing is None:
        return np.ones_like(work), np.ones_like(work)
    reference = sizing.spool_rises[spool]
    ratio = np.maximum(work, 1e-6 * reference[0]) / reference[0]
    return np.sqrt(ratio * reference[1] / temperature), np.sqrt(ratio)
