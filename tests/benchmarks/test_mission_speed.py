"""How quick a mission is: against the same equations marched one state at a time, and to start.

Run by name: ``pytest tests/benchmarks --override-ini addopts= -s``; a busy machine slows both
sides alike, and the best of some runs counts.
"""

from __future__ import annotations

import os
import subprocess
import sys
import time
from collections.abc import Callable
from pathlib import Path

import pytest
from mission_files import PROFILES
from reference_flight import Reference, again

from engine import load_engine
from mission.aircraft import load_aircraft
from mission.flight import fly
from mission.library import DEMO
from mission.mission_file import load_mission

ROOT = Path(__file__).parents[2]
TIMES_FASTER = 10.0
SAME_FUEL = 1e-6
FLY_OVER_IMPORTS, HELP_OVER_IMPORTS = 2.5, 2.0
RUNS = 5


def best_of(rounds: int, call: Callable[[], object]) -> float:
    """Shortest time [s] of a call: what it costs without what else the machine does."""
    times = []
    for _ in range(rounds):
        begin = time.perf_counter()
        call()
        times.append(time.perf_counter() - begin)
    return min(times)


def test_the_demo_is_ten_times_faster_than_a_runge_kutta_on_the_same_engine() -> None:
    mission = load_mission(PROFILES / f"{DEMO}.toml")
    aircraft = load_aircraft(PROFILES / f"{mission.written.aircraft}.toml")
    engine = load_engine(PROFILES / f"{mission.written.engine}.toml")
    flight = fly(mission, aircraft, engine)
    assert flight.failure is None
    written = mission.written
    references: list[Reference] = []

    def reference() -> float:
        """The mission part alone, from the mass that is known already: less than fly does."""
        references.append(
            Reference(aircraft, engine, written.day, -written.headwind, tolerance=1e-8)
        )
        return flight.totals.ramp_mass - again(references[-1], written, flight).mass

    begin = time.perf_counter()
    burnt = reference()
    slow = time.perf_counter() - begin
    quick = best_of(RUNS, lambda: fly(mission, aircraft, engine))
    print(f"\nfly {quick:.3f} s, DOP853 {slow:.2f} s in {references[0].calls} engine calls, ")
    print(f"{slow / quick:.1f} times; fuel differs by {burnt - flight.totals.block_fuel:.2e} kg")
    assert flight.totals.block_fuel == pytest.approx(burnt, rel=SAME_FUEL)
    assert slow > TIMES_FASTER * quick


def seconds(*commands: tuple[str, ...]) -> list[float]:
    """Best wall time [s] of Python processes, in turns, started in the root of the project."""
    environment = os.environ | {"PYTHONPATH": str(ROOT)}
    best = [float("inf")] * len(commands)
    for _ in range(RUNS + 1):  # byte code is written in the first
        for place, command in enumerate(commands):
            begin = time.perf_counter()
            subprocess.run(
                [sys.executable, *command],
                cwd=ROOT,
                env=environment,
                check=True,
                capture_output=True,
            )
            best[place] = min(best[place], time.perf_counter() - begin)
    return best


LONGLEGS = "from mission.command_line import main; main()"


def test_flying_the_demo_takes_little_more_than_its_imports() -> None:
    libraries = "import numpy, scipy.optimize, ambiance, pydantic, rich, pint, typer"
    imports, flown = seconds(("-c", libraries), ("-c", LONGLEGS, "fly"))
    print(f"\nlonglegs fly {flown:.2f} s, imports {imports:.2f} s: {flown / imports:.2f} times")
    assert flown < FLY_OVER_IMPORTS * imports


def test_help_takes_little_more_than_its_imports() -> None:
    imports, shown = seconds(("-c", "import typer, rich"), ("-c", LONGLEGS, "--help"))
    print(f"\nlonglegs --help {shown:.2f} s, imports {imports:.2f} s: {shown / imports:.2f} times")
    assert shown < HELP_OVER_IMPORTS * imports
