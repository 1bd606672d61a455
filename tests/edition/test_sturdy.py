"""Whatever stands in a file, the answer is an edition or a list of faults, never a traceback."""

from __future__ import annotations

import copy
import json
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

DATA = Path(__file__).parent / "data"
EXAMPLES = ("example", "asked", "adopted")
ODD: tuple[Any, ...] = (
    -1, 10**400, True, Decimal("nan"), Decimal("1e400"), "", "{", "../x", [], {}, [[]], [{}], [1, 2], {"p50": 1},
    date(2026, 1, 1), datetime(2026, 1, 1, tzinfo=UTC), [["30 mph", 0.5], ["60 mph"]],
)  # fmt: skip


def paths(value: Any, at: tuple[Any, ...] = ()) -> Iterator[tuple[Any, ...]]:
    if at:
        yield at
    items = value.items() if isinstance(value, dict) else enumerate(value) if isinstance(value, list) else ()
    for key, item in items:
        yield from paths(item, (*at, key))


def read(raw: dict[str, Any], name: str) -> tuple[Edition | None, Reading]:
    reading = Reading(file="e.toml")
    return load._edition(reading, raw, DATA / name), reading


RAW = {
    name: tomllib.loads((DATA / name / "edition.toml").read_text(encoding="utf-8"), parse_float=Decimal)
    for name in EXAMPLES
}


@pytest.mark.parametrize("name", EXAMPLES)
@pytest.mark.parametrize("odd", ODD, ids=lambda odd: repr(odd)[:20])
def test_an_odd_value_in_any_place_is_a_fault_or_nothing(odd: Any, name: str) -> None:
    for path in paths(RAW[name]):
        raw = copy.deepcopy(RAW[name])
        place = raw
        for key in path[:-1]:
            place = place[key]
        place[path[-1]] = odd
        made, reading = read(raw, name)
        assert (made is None) == bool(reading.faults), path
        assert all(fault_line(fault) for fault in reading.faults)


@pytest.mark.parametrize("name", EXAMPLES)
def test_any_key_may_be_missing(name: str) -> None:
    for path in paths(RAW[name]):
        raw = copy.deepcopy(RAW[name])
        place = raw
        for key in path[:-1]:
            place = place[key]
        del place[path[-1]]
        made, reading = read(raw, name)
        assert (made is None) == bool(reading.faults), path


SPOILT_CELLS = ("", "0", "-1", "1,5", "1e9", "nan", "x", "\u0661", "1" * 40, "9 %", '"', "a\nb", ",", "=1+1", "30 km/h")


@pytest.mark.parametrize("cell", SPOILT_CELLS)
def test_an_odd_cell_of_a_table_is_a_fault_or_nothing(cell: str, tmp_path: Path) -> None:
    for file in ("edition.toml", "table.csv"):
        (tmp_path / file).write_bytes((DATA / "adopted" / file).read_bytes())
    lines = [line.split(",") for line in (DATA / "adopted" / "table.csv").read_text(encoding="utf-8").splitlines()]
    for row in (0, 3):
        for column in range(len(lines[0])):
            spoilt = copy.deepcopy(lines)
            spoilt[row][column] = cell
            (tmp_path / "table.csv").write_text("\n".join(map(",".join, spoilt)), encoding="utf-8")
            reading = Reading(file="e.toml")
            made = load._edition(reading, copy.deepcopy(RAW["adopted"]), tmp_path)
            assert (made is None) == bool(reading.faults), (row, column)
            assert all(fault_line(fault) for fault in reading.faults)


ODD_JSON: tuple[Any, ...] = (None, True, -1, 1e308, "", "x", [], {}, [[]], [{}])


def test_an_odd_value_in_the_issue_before_is_a_fault_or_nothing(tmp_path: Path) -> None:
    good = json.loads((DATA / "asked" / "issue-1.json").read_text(encoding="utf-8"))
    for path in paths(good):
        for odd in ODD_JSON:
            spoilt = copy.deepcopy(good)
            place = spoilt
            for key in path[:-1]:
                place = place[key]
            place[path[-1]] = odd
            (tmp_path / "issue-1.json").write_text(json.dumps(spoilt), encoding="utf-8")
            reading = Reading(file="e.toml")
            made = load._edition(reading, copy.deepcopy(RAW["asked"]), tmp_path)
            assert (made is None) == bool(reading.faults), path


ODD_ROW = json.dumps(
    {
        "edition": "brackmoor", "speed_unit": "mph", "distance_unit": "m",
        "rows": [{"driver": "a", "vehicle": "b", "surface": "c", "grade": 10**400, "printed": {"speed": 1}}],
    }
)  # fmt: skip


@pytest.mark.parametrize(
    "text",
    ["[" * 100_000, '{"rows": ' * 50_000, "1" * 10_000, '{"rows": [1e999]}', ODD_ROW, "\x00", "nul", '{"edition": 1}'],
)
def test_an_issue_before_that_is_hardly_json(text: str, tmp_path: Path) -> None:
    (tmp_path / "issue-1.json").write_text(text, encoding="utf-8")
    reading = Reading(file="e.toml")
    assert load._edition(reading, copy.deepcopy(RAW["asked"]), tmp_path) is None
    assert all(fault_line(fault) for fault in reading.faults)
