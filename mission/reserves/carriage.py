"""The lines of the reserves, and what carrying each costs: the trip flown again without it."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from mission.fuel_plan import Sums, add_up
from mission.march.sweep import Marched, march
from mission.march.world import World
from mission.mission_file import MissionFile
from mission.plan import FlightPlan
from mission.reserves.items import kept
from mission.results import ReserveItem

Array = NDArray[np.float64]
_SETTLED = 1e-6


def reserve_items(
    world: World,
    plan: FlightPlan,
    written: MissionFile,
    coarse: Marched,
    sums: Sums,
    *,
    free: Array | None,
    with_cost: bool,
) -> tuple[ReserveItem, ...]:
    """Every item that keeps fuel aboard, in the order of the rule.

    ``coarse`` is the march that the lighter trips, one a member of one batch, start from; they
    keep what it was solved for, ``free`` (1,).
    """
    lines = [
        (item, sums.reserves_flown[index], sums.reserve_fuels[index])
        for index, item in kept(written.reserves.rule_in_force.items)
        if sums.reserve_fuels[index] > 0.0
    ]
    costs = np.zeros(len(lines))
    if lines and with_cost:
        costs = _costs(world, plan, written, coarse, [fuel for _, _, fuel in lines], free)
    return tuple(
        ReserveItem(item.name, fuel, float(cost), item.found(flown, sums.trip))
        for (item, flown, fuel), cost in zip(lines, costs, strict=True)
    )


def _costs(
    world: World,
    plan: FlightPlan,
    written: MissionFile,
    coarse: Marched,
    fuels: Sequence[float],
    free: Array | None,
) -> Array:
    """Trip fuel [kg] less that of the same flight landing lighter by each of some fuels [kg]."""
    lighter = coarse.stop_mass - np.array(fuels)
    trip_plan = replace(plan, parts=replace(plan.parts, reserve=()))
    flown = march(
        world,
        trip_plan.parts,
        len(coarse.tracks[0].mass),
        lighter,
        lambda stop, integrals: lighter,
        coarse,
        _SETTLED,
        None if free is None else np.broadcast_to(free, lighter.shape),
    )
    trips = [
        add_up(trip_plan, written, flown.integrals, member).trip_fuel
        for member in range(len(fuels))
    ]
    return add_up(plan, written, coarse.integrals).trip_fuel - np.array(trips)
