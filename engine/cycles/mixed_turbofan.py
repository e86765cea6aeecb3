"""Turbofan whose core and bypass streams leave through one nozzle, with afterburner or without.

Unknowns: fan pressure ratio, bypass ratio, high-pressure-compressor pressure ratio, turbine entry
temperature over engine-face temperature, static pressure in the mixer, corrected core airflow. Held
from the design point: flow capacity of both turbines, both areas of the mixer and the nozzle
throat. Where the streams meet in the mixer their static pressures are equal: each then needs an
area, and has one.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from engine.cycles.core import Core
from engine.cycles.exhaust import Exhaust, let_out
from engine.cycles.flowpath import Flowpath, corrected_flow_factor
from engine.cycles.low_spool import LowSpool
from engine.cycles.situation import Situation
from engine.cycles.two_spools import join_spools, run_spools
from engine.fuels import Fuel
from engine.gas import Gas
from engine.installation.drag import Installation
from engine.parts.afterburner import Afterburner
from engine.parts.inlet import Inlet
from engine.parts.mixer import Passage, at_mach, at_static_pressure, mix
from engine.parts.nozzle import Jet, Nozzle, discharge
from engine.parts.stream import Array, Stream


@dataclass(frozen=True)
class Mixer:
    """Where core and bypass streams meet.

    Attributes
    ----------
    core_mach : Mach number of the core stream at mixer entry, at the design point
    core_pressure_loss_fraction, bypass_pressure_loss_fraction : of the ducts ahead of it
    pressure_loss_fraction : friction of the mixer itself
    effectiveness : share of the gain of gross thrust by full mixing that is had; 1 for mixing
        complete by momentum
    """

    core_mach: float = 0.45
    core_pressure_loss_fraction: float = 0.0
    bypass_pressure_loss_fraction: float = 0.0
    pressure_loss_fraction: float = 0.0
    effectiveness: float = 1.0


@dataclass(frozen=True)
class MixedTurbofan:
    """A mixed-exhaust turbofan and its design point."""

    gas: Gas
    fuel: Fuel
    inlet: Inlet
    low_spool: LowSpool
    core: Core
    mixer: Mixer
    exhaust_nozzle: Nozzle
    bypass_ratio: float
    fan_pressure_ratio: float
    high_pressure_compressor_pressure_ratio: float
    turbine_entry_temperature: float
    afterburner: Afterburner | None = None
    installation: Installation | None = None
    unknown_names: tuple[str, ...] = (
        "fan_pressure_ratio",
        "bypass_ratio",
        "high_pressure_compressor_pressure_ratio",
        "turbine_entry_temperature_ratio",
        "mixer_static_pressure",
        "corrected_core_airflow",
    )

    def design_unknowns(self, face: Stream) -> Array:
        return np.log(
            [
                self.fan_pressure_ratio,
                self.bypass_ratio,
                self.high_pressure_compressor_pressure_ratio,
                self.turbine_entry_temperature / float(face.total_temperature),
                1.0,
                1.0 / float(corrected_flow_factor(face)),
            ]
        )

    def _meet(
        self, last: Stream, bypass: Stream, static_pressure: Array, situation: Situation
    ) -> tuple[Passage, Passage, Passage]:
        """Core, bypass and mixed stream in the mixer, friction left out.

        ``static_pressure`` is an unknown, over that of the design point as a share of the bypass
        stream's total pressure. The streams are mixed in the areas that are there, whatever areas
        they would need.
        """
        gas, mixer, sizing = self.gas, self.mixer, situation.sizing
        core = last.with_pressure_loss(
            situation.duct_loss("core_duct", mixer.core_pressure_loss_fraction, last)
        )
        outer = bypass.with_pressure_loss(
            situation.duct_loss("bypass_duct", mixer.bypass_pressure_loss_fraction, bypass)
        )
        if sizing is None:
            inside = at_mach(gas, core, np.asarray(mixer.core_mach))
            around = at_static_pressure(gas, outer, inside.static_pressure)
            # Backward flow, which sizing refuses, has a mixed state, too: a size hangs on it.
            forward = replace(around, velocity=abs(around.velocity), area=abs(around.area))
            return inside, around, mix(gas, inside, forward)
        pressure = static_pressure * sizing.loadings["mixer_static_share"] * outer.total_pressure
        inside = at_static_pressure(gas, core, pressure)
        around = at_static_pressure(gas, outer, pressure)
        built = (np.asarray(sizing.areas[name]) for name in ("mixer_core", "mixer_bypass"))
        parts = (
            replace(part, area=area) for part, area in zip((inside, around), built, strict=True)
        )
        return inside, around, mix(gas, *parts)

    def _jet(self, exhaust: Exhaust, parts: tuple[Passage, Passage], situation: Situation) -> Jet:
        """The jet of a mixer that leaves a share of the streams unmixed.

        Each stream alone loses the same fraction of pressure on its way to the nozzle. Only thrust
        is shared out: the throat passes the mixed stream, for at idle one stream alone may be
        below ambient pressure and need no throat that there is.
        """
        share, ambient = self.mixer.effectiveness, situation.flight.static_pressure
        if share == 1.0:
            return exhaust.jet
        inside, around = (
            discharge(
                self.gas, self.exhaust_nozzle, part.stream.with_pressure_loss(exhaust.lost), ambient
            )
            for part in parts
        )
        return replace(
            exhaust.jet,
            gross_thrust=share * exhaust.jet.gross_thrust
            + (1.0 - share) * (inside.gross_thrust + around.gross_thrust),
        )

    def evaluate(self, unknowns: Array, situation: Situation) -> Flowpath:
        fan_ratio, bypass_ratio, core_ratio, temperature_ratio, static, airflow = np.exp(unknowns)
        spools = run_spools(
            self.gas,
            self.low_spool,
            self.core,
            fan_ratio,
            bypass_ratio,
            core_ratio,
            temperature_ratio,
            airflow,
            situation,
        )
        last, bypass = spools.last, spools.front.bypass
        inside, around, together = self._meet(last, bypass, static, situation)
        friction = situation.duct_loss("mixer", self.mixer.pressure_loss_fraction, together.stream)
        mixed = together.stream.with_pressure_loss(friction)
        exhaust = let_out(self.gas, self.exhaust_nozzle, self.afterburner, mixed, situation)
        jet = self._jet(exhaust, (inside, around), situation)
        path = join_spools(
            spools,
            situation,
            stations={
                "21": spools.front.hub,
                "6": inside.stream,
                "64": mixed,
                "7": exhaust.nozzle_entry,
                "13": bypass,
                "16": around.stream,
            },
            jets={"9": (exhaust.nozzle_entry, jet)},
            areas={
                "mixer_core": inside.area,
                "mixer_bypass": around.area,
                "core_nozzle": jet.throat_area,
            },
            flows={
                **exhaust.flows,
                "core_duct": last.duct_flow,
                "bypass_duct": bypass.duct_flow,
                "mixer": together.stream.duct_flow,
            },
            loadings={"mixer_static_share": inside.static_pressure / around.stream.total_pressure},
        )
        return replace(
            path,
            statics={
                station: (there.static_temperature, there.static_pressure, there.velocity)
                for station, there in (("6", inside), ("16", around))
            },
        )
