"""Drag that goes with the throttle, charged to the engine: spillage and afterbody."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from engine.cycles.flowpath import Arrangement, Flowpath
from engine.cycles.situation import Situation
from engine.installation.drag import Installation, afterbody_drag, spillage_drag
from engine.parts.stream import Array


def charge(path: Flowpath, installation: Installation | None, situation: Situation) -> Flowpath:
    """The flowpath with its installation drag [N], and what does not fit told."""
    if installation is None:
        return path
    flight = situation.flight
    drag, misfits = np.zeros_like(path.fuel_flow), {}
    if installation.capture_area is not None:
        spillage = spillage_drag(flight, path.stations["2"].mass_flow, installation.capture_area)
        drag = drag + spillage.drag
        misfits["it takes in {:.3g} kg/s more than its capture area passes"] = spillage.air_shortage
    if installation.afterbody_area is not None:
        pressure = 0.5 * flight.density * flight.true_airspeed**2
        exits: Array = np.asarray(sum(jet.exit_area for _, jet in path.jets.values()))
        slope = afterbody_drag(
            pressure, installation.afterbody_area, exits, installation.afterbody_coefficient
        )
        drag = drag + slope.drag
        misfits["its nozzles end {:.3g} m2 wider than its afterbody"] = slope.excess_exit_area
    return replace(path, installation_drag=drag, misfits={**path.misfits, **misfits})


def run(arrangement: Arrangement, unknowns: Array, situation: Situation) -> Flowpath:
    """The arrangement evaluated, its installation drag charged."""
    return charge(arrangement.evaluate(unknowns, situation), arrangement.installation, situation)
