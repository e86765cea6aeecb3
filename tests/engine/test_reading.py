"""Files as people write them, and the plain words for what is wrong with them."""

from __future__ import annotations

from pathlib import Path

import pytest
from pydantic import Field

from engine.errors import InputRefused
from engine.quantities import Altitude
from engine.reading import Table, check, defaults_used, read_toml


class Leg(Table):
    name: str
    altitude: Altitude
    mach: float = Field(default=0.8, ge=0.0, le=5.0)


class Trip(Table):
    title: str = ""
    leg: list[Leg]
    home: Leg | None = None


def write(folder: Path, content: bytes) -> Path:
    path = folder / "trip.toml"
    path.write_bytes(content)
    return path


def test_a_file_is_read(tmp_path: Path) -> None:
    path = write(tmp_path, b'title = "out"\n[[leg]]\nname = "one"\naltitude = "FL100"\n')

    trip = check(read_toml(path), Trip, str(path))

    assert trip.leg[0].altitude == pytest.approx(3048.0)
    assert trip.leg[0].mach == 0.8


@pytest.mark.parametrize(
    ("content", "said"),
    [
        (b"title = ", "is not TOML: .*end of document"),
        (b"this is prose\n", "is not TOML"),
        (b"a = 1\na = 2\n", "is not TOML"),
        (b"", "is empty; start from a copy of a built-in profile"),
        (b"# only a remark\n", "is empty"),
        (b"\x00\x01\x02\xff\xfe", "is not a text file in UTF-8"),
        (b"\xff\xfet\x00i\x00", "is not a text file in UTF-8"),
        (b"# " + b"x" * 1_100_000, r"is 1\.1 MB; an input file has at most 1 MB"),
    ],
    ids=["cut off", "prose", "twice", "empty", "remark", "binary", "UTF-16", "huge"],
)
def test_what_is_no_input_file_is_refused(tmp_path: Path, content: bytes, said: str) -> None:
    path = write(tmp_path, content)

    with pytest.raises(InputRefused, match=said) as refusal:
        read_toml(path)

    assert refusal.value.where == str(path)
    assert str(refusal.value).startswith(f"{path}: ")


def test_a_missing_file_and_a_folder_are_refused(tmp_path: Path) -> None:
    with pytest.raises(InputRefused, match="there is no such file"):
        read_toml(tmp_path / "nowhere.toml")
    with pytest.raises(InputRefused, match="is a folder, not a file"):
        read_toml(tmp_path)


ONE = {"name": "one", "altitude": "FL100"}


@pytest.mark.parametrize(
    ("content", "key", "said"),
    [
        ({"leg": [{**ONE, "macg": 0.7}]}, 'leg 1 "one": macg', "unknown key; did you mean mach?"),
        ({"leg": [ONE], "zebra": 1}, "zebra", "unknown key. Allowed here: home, leg, title"),
        ({"leg": [ONE, {"name": "two"}]}, 'leg 2 "two": altitude', "is missing"),
        ({"title": "out"}, "leg", "is missing"),
        ({"leg": [{**ONE, "altitude": 10}]}, 'leg 1 "one": altitude', "10 has no unit"),
        (
            {"leg": [{**ONE, "mach": "0.8"}]},
            'leg 1 "one": mach',
            "= '0.8'; a bare number belongs here",
        ),
        ({"leg": [{**ONE, "mach": 7.0}]}, 'leg 1 "one": mach', "= 7.0; it should be less than or"),
        (
            {"leg": [{**ONE, "altitude": "FL999"}]},
            'leg 1 "one": altitude',
            "= 'FL999'; it should be less than or equal to 30000 m",
        ),
        ({"leg": [ONE], "home": 3}, "home", "= 3; a table belongs here"),
        ({"leg": [ONE], "title": 3}, "title", "= 3; it should be a valid string"),
        (
            {"leg": [{**ONE, "alt": 3, "altitude": None}]},
            'leg 1 "one": alt',
            "did you mean altitude?",
        ),
    ],
)
def test_the_wrong_key_is_named_with_what_is_allowed(
    content: dict[str, object], key: str, said: str
) -> None:
    with pytest.raises(InputRefused) as refusal:
        check(content, Trip, "trip.toml")

    assert refusal.value.where == "trip.toml"
    assert refusal.value.key == key
    assert said in refusal.value.what


def test_an_unknown_key_says_more_than_the_missing_one_it_was_meant_for() -> None:
    with pytest.raises(InputRefused, match=r"unknown key; did you mean altitude\?"):
        check({"leg": [{"name": "one", "altitud": "FL100"}]}, Trip, "trip.toml")


def test_defaults_that_were_used_are_listed() -> None:
    trip = check({"leg": [ONE], "home": {"name": "base", "altitude": "FL10"}}, Trip, "trip.toml")

    assert defaults_used(trip) == ["home.mach = 0.8"]
