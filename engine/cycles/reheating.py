"""How hot the afterburner burns: as its limits allow, or as a thrust needs."""

from __future__ import annotations

from dataclasses import dataclass, fields, replace

import numpy as np
from numpy.typing import NDArray

from engine.cycles.exhaust import with_reheat
from engine.cycles.flowpath import LIMIT_NAMES, Arrangement, Flowpath
from engine.cycles.situation import Situation
from engine.parts.nozzle import Jet
from engine.parts.stream import Stream

Array = NDArray[np.float64]
_ROWS = {
    name: LIMIT_NAMES.index(name)
    for name in ("flat_rated_thrust", "afterburner_temperature", "afterburner_fuel_air_ratio")
}


@dataclass(frozen=True)
class Reheat:
    """Where the afterburner burns, and the total temperature [K] at its exit there; (N,)."""

    is_lit: NDArray[np.bool_]
    temperature: Array

    @classmethod
    def of(cls, count: int, lit: NDArray[np.int64], temperature: Array) -> Reheat:
        """Lit for the members of an index array only."""
        is_lit = np.zeros(count, dtype=bool)
        is_lit[lit] = True
        whole = np.full(count, np.nan)
        whole[lit] = temperature
        return cls(is_lit, whole)

    def applied(self, arrangement: Arrangement, path: Flowpath, situation: Situation) -> Flowpath:
        """The engine with its afterburner lit where it is."""
        dry_stream, dry_jet = path.jets["9"]
        temperature = np.where(self.is_lit, self.temperature, dry_stream.total_temperature)
        lit = with_reheat(arrangement, path, situation, temperature)
        stream, jet = lit.jets["9"]
        chosen = _chosen_stream(self.is_lit, stream, dry_stream)
        return replace(
            lit,
            stations={**lit.stations, "7": chosen},
            jets={**lit.jets, "9": (chosen, _chosen_jet(self.is_lit, jet, dry_jet))},
            fuel_flow=np.where(self.is_lit, lit.fuel_flow, path.fuel_flow),
            unburnt_fuel=np.where(self.is_lit, lit.unburnt_fuel, path.unburnt_fuel),
        )


def _chosen_stream(mask: NDArray[np.bool_], lit: Stream, dry: Stream) -> Stream:
    """A stream that is lit where the mask says so; the section is that of the lit one."""
    names = [f.name for f in fields(Stream) if f.name != "section"]
    chosen = {n: np.where(mask, getattr(lit, n), getattr(dry, n)) for n in names}
    return replace(lit, **chosen)


def _chosen_jet(mask: NDArray[np.bool_], lit: Jet, dry: Jet) -> Jet:
    return Jet(*(np.where(mask, getattr(lit, f.name), getattr(dry, f.name)) for f in fields(Jet)))


def light(
    arrangement: Arrangement, situation: Situation, path: Flowpath, bounds: Array, thrust: Array
) -> Array:
    """Temperature [K] behind the afterburner at which a bound or the thrust asked for is met, (N,).

    ``bounds`` (L, N) hold afterburner temperature, total fuel-air ratio and flat-rated thrust;
    ``thrust`` (N,) [N] is NaN where none is asked for. Thrust and fuel rise with temperature, so
    that there is one answer between the dry temperature and the highest allowed.
    """
    from scipy.optimize.elementwise import find_root  # only reheated engines need it

    coldest = path.jets["9"][0].total_temperature
    hottest = np.maximum(bounds[_ROWS["afterburner_temperature"]], coldest)
    flat = bounds[_ROWS["flat_rated_thrust"]]
    most_thrust = np.where(np.isnan(thrust), flat, np.minimum(thrust, flat))
    richest = bounds[_ROWS["afterburner_fuel_air_ratio"]]

    def excess(temperature: Array, member: Array) -> Array:
        at = member.astype(np.int64)
        lit = with_reheat(arrangement, path.at(at), situation.at(at), temperature)
        stream, _ = lit.jets["9"]
        shares = (
            temperature / hottest[at],
            stream.fuel_air_ratio / richest[at],
            lit.net_thrust(situation.flight.at(at)) / most_thrust[at],
        )
        worst: Array = np.max(np.stack(shares), axis=0)
        return worst - 1.0

    with np.errstate(all="ignore"):
        found = find_root(
            excess, (coldest, hottest), args=(np.arange(coldest.size, dtype=np.float64),)
        )
        # Where even the dry engine is beyond a bound the afterburner stays at its entry's
        # temperature, where nothing is burnt.
        temperature: Array = np.where(found.success, found.x, coldest)
    return temperature
