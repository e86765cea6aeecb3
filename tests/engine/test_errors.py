"""One tree of errors that comes home from another process."""

from __future__ import annotations

import pickle

import pytest

from engine.errors import CycleCannotRun, InputRefused, LonglegsError, OutOfRange


@pytest.mark.parametrize("kind", [InputRefused, CycleCannotRun])
def test_a_refusal_survives_pickling(kind: type[InputRefused]) -> None:
    error = kind("= 3; it should be less", where="a.toml", key="mach")
    error.add_note("segment 2")

    back = pickle.loads(pickle.dumps(error))

    assert type(back) is kind
    assert (back.what, back.where, back.key) == (error.what, error.where, error.key)
    assert str(back) == str(error) == "a.toml: mach: = 3; it should be less"
    assert back.__notes__ == ["segment 2"]


def test_out_of_range_survives_pickling() -> None:
    back = pickle.loads(pickle.dumps(OutOfRange("Mach number = 7 is outside 0 to 5")))

    assert str(back) == "Mach number = 7 is outside 0 to 5"


@pytest.mark.parametrize("kind", [InputRefused, CycleCannotRun, OutOfRange])
def test_each_is_of_the_tree_and_the_nearest_builtin(kind: type[Exception]) -> None:
    assert issubclass(kind, LonglegsError)
    assert issubclass(kind, ValueError)


def test_a_place_that_is_not_known_yet_is_left_out() -> None:
    assert str(InputRefused("is missing")) == "is missing"
    assert str(InputRefused("is missing", key="mach")) == "mach: is missing"
