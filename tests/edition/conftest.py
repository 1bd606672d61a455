"""A small sound edition, and ways to break it."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from pathlib import Path
from types import MappingProxyType
from typing import Any

import pytest

from chartgen.edition.load import load_edition
from chartgen.edition.model import Edition
from chartgen.errors import EditionFaults
from chartgen.report import fault_line

SOUND = """\
[edition]
id = "vale"
status = "uncontrolled"
title = { en-GB = "Room", cy = "Lle" }
publisher = { en-GB = "Vale", cy = "Dyffryn" }
reference = "V-1"
issue = "1"
issued = 2026-11-02
review_by = 2027-11-02

[languages]
use = ["en-GB", "cy"]

[units]
system = "uk"

[speeds]
steps = ["20 mph", "30 mph", "70 mph"]

[[driver]]
id = "ready"
name = { en-GB = "Ready", cy = "Parod" }
reaction_time = "0.8 s"

[[surface]]
id = "dry"
name = { en-GB = "Dry", cy = "Sych" }
friction = 0.64

[[surface]]
id = "wet"
name = { en-GB = "Wet", cy = "Gwlyb" }
friction = { f60 = 0.35, sp = "110 km/h" }

[[vehicle]]
id = "car"
kind = "car"
name = { en-GB = "Car", cy = "Car" }

[[vehicle]]
id = "lorry"
kind = "lorry"
load = "laden"
name = { en-GB = "Lorry", cy = "Lori" }
max_deceleration = "5 m/s^2"
brake_lag = "0.4 s"
length = "10 m"

[[case]]
driver = ["ready"]
vehicle = ["car", "lorry"]
surface = ["dry", "wet"]

[[poster]]
headline = { en-GB = "At {speed:70 mph}, {stopping:70 mph}.", cy = "Ar {speed:70 mph}, {stopping:70 mph}." }
"""


@pytest.fixture
def write(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Callable[..., str]:
    """Write the sound edition with some of its text changed, and files beside it, into the folder `vale` of the
    current folder."""
    monkeypatch.chdir(tmp_path)
    (tmp_path / "vale").mkdir()

    def write(*changes: tuple[str, str], more: str = "", files: Mapping[str, str] = MappingProxyType({})) -> str:
        text = SOUND
        for old, new in changes:
            assert text.count(old) >= 1, f"{old!r} is not in the sound edition"
            text = text.replace(old, new, 1)
        (tmp_path / "vale" / "edition.toml").write_text(text + more, encoding="utf-8")
        for name, content in files.items():
            (tmp_path / "vale" / name).write_bytes(content.encode())
        return "vale"

    return write


@pytest.fixture
def edition(write: Callable[..., str]) -> Callable[..., Edition]:
    """The sound edition, changed, loaded."""

    def edition(*changes: tuple[str, str], **beside: Any) -> Edition:
        return load_edition(write(*changes, **beside))

    return edition


@pytest.fixture
def messages(write: Callable[..., str]) -> Callable[..., list[str]]:
    """The whole messages that the changed edition gives."""

    def messages(*changes: tuple[str, str], **beside: Any) -> list[str]:
        folder = write(*changes, **beside)
        with pytest.raises(EditionFaults) as caught:
            load_edition(folder)
        assert caught.value.exit_code == 2
        return [fault_line(fault) for fault in caught.value.faults]

    return messages
