"""Broken editions, each with the whole of what it says: where, what was given, what is wrong, what would be right.

An untested message rots. Every case of `data/broken*.toml` changes the sound edition of `conftest.py` in one way and
expects exactly these messages, so that one mistake gives one message (or those that truly follow).
"""

from __future__ import annotations

import tomllib
from collections.abc import Callable
from pathlib import Path

import pytest

from chartgen.edition.catalogue import SHELVES
from chartgen.edition.reading import listed

BROKEN = {
    case["name"]: case
    for file in sorted((Path(__file__).parent / "data").glob("broken*.toml"))
    for case in tomllib.loads(file.read_text(encoding="utf-8"))["broken"]
}


def whole(line: str) -> str:
    """What a message says, with each list of the catalogue, such as «gap», as it is today."""
    for shelf, presets in SHELVES.items():
        line = line.replace(f"«{shelf}»", listed(presets))
    return line


@pytest.mark.parametrize("name", BROKEN)
def test_a_broken_edition_says_what_to_do(name: str, messages: Callable[..., list[str]]) -> None:
    case = BROKEN[name]
    said = messages(*case["changes"], files=case.get("files", {}))
    # A fault of a file beside the edition names that file.
    expected = [line if line.startswith("vale/") else f"vale/edition.toml: {line}" for line in case["said"]]
    assert said == [whole(line) for line in expected]


def test_all_faults_are_said_at_once(messages: Callable[..., list[str]]) -> None:
    said = messages(
        ('"0.8 s"', '"0,8 s"'),
        ("friction = 0.64", "friction = 2"),
        ('kind = "car"', 'kind = "cat"'),
        ('"70 mph"]', '"70 kmh"]'),
        ("At {speed:70 mph}", "At 70"),
    )
    keys = [line.split(": ")[1].split(" ")[0] for line in said]
    assert keys == [
        "speeds.steps[3]",
        "driver[1].reaction_time",
        "surface[1].friction",
        "vehicle[1].kind",
        "poster[1].headline.en-GB",
    ]


def test_a_fault_in_an_id_brings_no_others(messages: Callable[..., list[str]]) -> None:
    assert messages(('id = "wet"', 'id = "Wet road"')) == [
        (
            'vale/edition.toml: surface[2].id = "Wet road" (in the 2nd [[surface]]): this is not an id. '
            'Right: small letters a to z, digits and hyphens, at most 64: "wet-road".'
        )
    ]
