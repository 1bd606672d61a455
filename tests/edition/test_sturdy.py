"""Whatever stands in a file, the answer is an edition or a list of faults, never a traceback."""

from __future__ import annotations

import copy
import tomllib
from collections.abc import Iterator
from datetime import UTC, date, datetime
from decimal import Decimal
from pathlib import Path
from typing import Any

import pytest

from chartgen.edition import load
from chartgen.edition.model import Edition
from chartgen.edition.reading import Reading
from chartgen.report import fault_line

EXAMPLE = Path(__file__).parent / "data" / "example"
ODD: tuple[Any, ...] = (
    -1, 10**400, True, Decimal("nan"), Decimal("1e400"), "", "{", "../x", [], {}, [[]], [{}], [1, 2], {"p50": 1},
    date(2026, 1, 1), datetime(2026, 1, 1, tzinfo=UTC),
)  # fmt: skip


def paths(value: Any, at: tuple[Any, ...] = ()) -> Iterator[tuple[Any, ...]]:
    if at:
        yield at
    items = value.items() if isinstance(value, dict) else enumerate(value) if isinstance(value, list) else ()
    for key, item in items:
        yield from paths(item, (*at, key))


def read(raw: dict[str, Any]) -> tuple[Edition | None, Reading]:
    reading = Reading(file="e.toml")
    return load._edition(reading, raw, EXAMPLE), reading


RAW = tomllib.loads((EXAMPLE / "edition.toml").read_text(encoding="utf-8"), parse_float=Decimal)


@pytest.mark.parametrize("odd", ODD, ids=lambda odd: repr(odd)[:20])
def test_an_odd_value_in_any_place_is_a_fault_or_nothing(odd: Any) -> None:
    for path in paths(RAW):
        raw = copy.deepcopy(RAW)
        place = raw
        for key in path[:-1]:
            place = place[key]
        place[path[-1]] = odd
        made, reading = read(raw)
        assert (made is None) == bool(reading.faults), path
        assert all(fault_line(fault) for fault in reading.faults)


def test_any_key_may_be_missing() -> None:
    for path in paths(RAW):
        raw = copy.deepcopy(RAW)
        place = raw
        for key in path[:-1]:
            place = place[key]
        del place[path[-1]]
        made, reading = read(raw)
        assert (made is None) == bool(reading.faults), path
