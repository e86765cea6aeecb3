"""With reheat the dry engine has a limit of its own, whose change is a kink too."""

from __future__ import annotations

from pathlib import Path

import numpy as np
from engine_kinds import REHEATED
from mission_files import aircraft_content, write
from test_joints import KINK, flight_at, span

from engine.options.loading import engine_from_content
from mission.aircraft import load_aircraft
from mission.march.joints import find_joints
from mission.march.world import World


def test_a_change_of_the_dry_limit_below_reheat_is_a_joint(tmp_path: Path) -> None:
    plane = load_aircraft(write(tmp_path, "plane", aircraft_content()))
    world = World(plane, engine_from_content(REHEATED, "test.toml"))
    whole = span(0.0, 29000.0, "maximum_afterburning")
    scan = np.linspace(whole.start_altitude, whole.end_altitude, 8001)

    state = world.engine.at(flight_at(whole, scan), rating=whole.rating)

    changes = np.flatnonzero(np.diff(state.dry_limit))
    assert set(state.binding_limit_names.tolist()) == {"afterburner_temperature"}
    assert changes.size == 1
    kink = 0.5 * (scan[changes[0]] + scan[changes[0] + 1])
    joints = [piece.end_altitude for piece in find_joints(world, [whole]).cut()[:-1]]
    step = scan[1] - scan[0]
    assert min(abs(joint - kink) for joint in joints) < KINK + step
