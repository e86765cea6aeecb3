"""What tests of the command line share."""

from __future__ import annotations

import sys
from pathlib import Path

import pytest

from mission import command_line
from tests.terminal import Longlegs, Run


@pytest.fixture
def longlegs(
    monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str], tmp_path: Path
) -> Longlegs:
    """Run the command in an empty folder, on a terminal of 100 columns without colour."""
    monkeypatch.chdir(tmp_path)
    monkeypatch.setenv("COLUMNS", "100")
    monkeypatch.setenv("NO_COLOR", "1")

    def run(*words: str) -> Run:
        monkeypatch.setattr(sys, "argv", ["longlegs", *words])
        with pytest.raises(SystemExit) as ended:
            command_line.main()
        code = ended.value.code
        captured = capsys.readouterr()
        return Run(code if isinstance(code, int) else 0, captured.out, captured.err)

    return run
