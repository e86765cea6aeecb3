"""What all tests share: the demand for sources, a quiet hypothesis, and engines to run."""

from __future__ import annotations

from pathlib import Path

import pytest
from engine_files import load, turbofan_content, turbojet_content
from hypothesis import HealthCheck, settings
from sources import without_source

from engine.cycle_engine import CycleEngine

# Few examples and always the same ones, so that a run says the same twice.
settings.register_profile(
    "quick",
    max_examples=15,
    deadline=None,
    derandomize=True,
    suppress_health_check=[HealthCheck.too_slow],
)
settings.load_profile("quick")


def pytest_collection_modifyitems(items: list[pytest.Item]) -> None:
    """Refuse to run while a published check does not say where its values come from."""
    missing = without_source(items, Path(__file__).parent / "published")
    if missing:
        raise pytest.UsageError(
            'published checks need @pytest.mark.source("author, title, place; grade read" or '
            '"... grade from memory" or "... grade own"): ' + ", ".join(missing)
        )


@pytest.fixture(scope="session")
def turbofan() -> CycleEngine:
    """A cooled turbofan with bleed and shaft power taken off."""
    return load(turbofan_content())


@pytest.fixture(scope="session")
def turbojet() -> CycleEngine:
    """A straight jet."""
    return load(turbojet_content())


def pytest_ignore_collect(collection_path: Path, config: pytest.Config) -> bool | None:
    """Benchmarks run where they are asked for by name, from whatever folder."""
    is_asked = any("benchmarks" in str(argument) for argument in config.args)
    return True if collection_path.name == "benchmarks" and not is_asked else None
