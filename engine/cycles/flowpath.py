"""What an arrangement of parts returns when its unknowns are given, and what it must offer."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass, field, fields, is_dataclass, replace
from typing import Any, ClassVar, Protocol, cast

import numpy as np
from numpy.typing import NDArray

from engine.atmosphere import SEA_LEVEL_PRESSURE, SEA_LEVEL_TEMPERATURE, FlightCondition
from engine.cycles.situation import Situation, Sizing
from engine.fuels import Fuel
from engine.gas import Gas
from engine.installation.drag import Installation
from engine.parts.afterburner import Afterburner
from engine.parts.inlet import Inlet
from engine.parts.nozzle import Jet, Nozzle
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
    "propeller_shaft_power",
    "flat_rated_thrust",
    "afterburner_temperature",
    "afterburner_fuel_air_ratio",
)


@dataclass(frozen=True)
class PropellerWork:
    """What a propeller makes of its shaft: thrust [N], and the powers [W] taken and lost."""

    thrust: Array
    shaft_power: Array
    induced_loss: Array
    profile_loss: Array


@dataclass(frozen=True)
class Flowpath:
    """The engine at given unknowns, before anybody asked whether its flows match.

    Attributes
    ----------
    stations : total states by SAE AS755 station number
    jets : the stream of each nozzle entry with its jet, by the station of the nozzle exit
    areas : area [m2] that each flow-setting throat would need, by name
    flows : what grows with the engine's size and a loss or an efficiency goes with, by part:
        ``W sqrt(T) / p`` of a compressor or duct, air loading of the combustor
    loadings : square of blade speed over specific work of a turbine, by part
    statics : static temperature [K] and pressure [Pa] and velocity [m/s] by station, where known
    work_ratios : specific work of what turns with the fan, over the fan's
    limits : values that ratings and idle bound, by name (:data:`LIMIT_NAMES`)
    shaft_power : taken off by the customer [W]
    bleed : the stream taken off by the customer
    mechanical_loss : bearings and gearbox [W]
    unburnt_fuel : heat of the fuel that did not burn [W]
    fuel_flow : [kg/s]
    spool_rises : specific work [J/kg] and inlet total temperature [K] that estimate each speed
    propeller : what a propeller does, if there is one
    installation_drag : spillage and afterbody drag charged to the engine [N]
    misfits : what lies outside what a part is for, as a sentence with room for by how much, which
        is zero or less where it does not
    """

    stations: Mapping[str, Stream]
    jets: Mapping[str, tuple[Stream, Jet]]
    areas: Mapping[str, Array]
    flows: Mapping[str, Array]
    loadings: Mapping[str, Array]
    limits: Mapping[str, Array]
    shaft_power: Array
    bleed: Stream
    mechanical_loss: Array
    unburnt_fuel: Array
    fuel_flow: Array
    spool_rises: Mapping[str, tuple[Array, Array]]
    statics: Mapping[str, tuple[Array, Array, Array]] = field(default_factory=dict)
    work_ratios: Mapping[str, Array] = field(default_factory=dict)
    propeller: PropellerWork | None = None
    installation_drag: Array | float = 0.0
    misfits: Mapping[str, Array] = field(default_factory=dict)

    @property
    def gross_thrust(self) -> Array:
        """Sum of the jets' gross thrusts [N]."""
        return np.asarray(sum(jet.gross_thrust for _, jet in self.jets.values()))

    def net_thrust(self, flight: FlightCondition) -> Array:
        """Gross and propeller thrust less ram drag (of the air taken in) and installation [N]."""
        net = self.gross_thrust - self.stations["2"].mass_flow * flight.true_airspeed
        if self.propeller is not None:
            net = net + self.propeller.thrust
        return net - self.installation_drag

    def at(self, index: NDArray[np.int64]) -> Flowpath:
        """The members picked by an index array."""
        return cast(Flowpath, _picked(self, index))

    def limit_values(self, flight: FlightCondition, names: Iterable[str] = LIMIT_NAMES) -> Array:
        """Values of limits by name, stacked; one where the arrangement has no such quantity."""
        known = {**self.limits, "flat_rated_thrust": self.net_thrust(flight)}
        absent = np.ones_like(self.fuel_flow)
        return np.stack(np.broadcast_arrays(*(known.get(name, absent) for name in names)))


def _picked(record: Any, index: NDArray[np.int64]) -> Any:
    """Members of all arrays that a record, a mapping or a pair holds."""
    if isinstance(record, np.ndarray):
        return record[index] if record.ndim else record
    if isinstance(record, dict):
        return {key: _picked(value, index) for key, value in record.items()}
    if isinstance(record, tuple):
        return tuple(_picked(value, index) for value in record)
    if is_dataclass(record) and not isinstance(record, type):
        changed = {f.name: _picked(getattr(record, f.name), index) for f in fields(record)}
        return replace(record, **changed)
    return record


def shares_of(values: Array, bounds: Array) -> Array:
    """Limit values over their bounds; infinite where a floor is none."""
    return np.where(bounds > 0.0, values / bounds, np.inf)


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
    def unknown_names(self) -> tuple[str, ...]:
        """What matching solves for; the airflow, which sets the size, stands last."""
        ...

    @property
    def afterburner(self) -> Afterburner | None:
        """What may burn behind the last turbine."""
        ...

    @property
    def exhaust_nozzle(self) -> Nozzle:
        """The nozzle behind the last turbine, and behind the afterburner where there is one."""
        ...

    @property
    def installation(self) -> Installation | None:
        """What surrounds it, where drag that goes with the throttle is charged to it."""
        ...

    def design_unknowns(self, face: Stream) -> Array:
        """Logarithms of the unknowns at the design point, for a core airflow of 1 kg/s."""
        ...

    def evaluate(self, unknowns: Array, situation: Situation) -> Flowpath:
        """The engine at the logarithms of its unknowns (n, ...)."""
        ...


def corrected_flow_factor(face: Stream) -> Array:
    """Physical over corrected mass flow at the engine face: delta over root theta."""
    delta = face.total_pressure / SEA_LEVEL_PRESSURE
    return delta / np.sqrt(face.total_temperature / SEA_LEVEL_TEMPERATURE)


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


def core_limits(
    hot: Stream,
    delivery: Stream,
    rises: Mapping[str, tuple[Array, Array]],
    sizing: Sizing | None,
) -> dict[str, Array]:
    """Limits of a gas generator and its spools; a single spool counts as both."""
    low = spool_speeds(rises, next(iter(rises)), sizing)
    high = spool_speeds(rises, "high_pressure", sizing)
    return {
        "turbine_entry_temperature": hot.total_temperature,
        "compressor_delivery_temperature": delivery.total_temperature,
        "compressor_delivery_pressure": delivery.total_pressure,
        "corrected_low_pressure_speed": low[0],
        "low_pressure_speed": low[1],
        "corrected_high_pressure_speed": high[0],
        "high_pressure_speed": high[1],
        "fuel_air_ratio": hot.fuel_air_ratio,
    }
