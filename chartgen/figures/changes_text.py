"""What differs between two issues, for a terminal and as CSV and JSON. Deterministic, no clock, no locale."""

from __future__ import annotations

import json
from dataclasses import asdict
from itertools import groupby
from typing import Final

from chartgen.figures.changes import Change, Changes, InputChange, RowChange, Value
from chartgen.figures.plain_table import columns, csv_text, wrapped

REASONS: Final = {
    "program": "the program or its rounding changed",
    "untold": "an input that the figures do not carry, or the program or its rounding, changed",
    "added": "new row",
    "removed": "no longer printed",
}
"""In words, for the reasons that are not an input."""

TITLES: Final = {"changed": "Changed", "added": "Added", "removed": "Removed"}

CSV_HEADS: Final = (
    "change", "driver", "vehicle", "surface", "grade", "speed", "speed_unit", "number", "old", "old_unit", "new",
    "new_unit", "reason", "inputs",
)  # fmt: skip


def to_json(changes: Changes) -> str:
    """As JSON, UTF-8 text ending with a newline.

    `{"old", "new", "same_edition", "units", "matched", "compared", "differing", "rows"}`: ids of the editions; units
    of the edition that changed; rows that both have, printed numbers in them, how many of those differ. A row:
    `kind` (changed, added, removed), `driver`, `vehicle`, `surface`, `grade`, `speed`, `speed_unit`, `changes`. A
    change: `key` in the figures' row, `name`, `also` (true in the second unit), `old`, `new`, `old_unit`, `new_unit`,
    `reason` (input, program, untold, added, removed), `inputs`, each `key`, `old`, `new`. Units: likewise.
    """
    document = {
        "old": changes.old,
        "new": changes.new,
        "same_edition": changes.same_edition,
        "units": [asdict(unit) for unit in changes.units],
        "matched": changes.matched,
        "compared": changes.compared,
        "differing": changes.numbers,
        "rows": [asdict(row) for row in changes.rows],
    }
    return json.dumps(document, ensure_ascii=False, allow_nan=False, indent=1) + "\n"


def to_csv(changes: Changes) -> str:
    """As CSV (RFC 4180), one line a number: `CSV_HEADS`, the JSON's values under the same names.

    `change` is the row's kind, `number` the change's key, `inputs` as "friction: 0.7 -> 0.6; rounding.step: 1 -> 5".
    """
    return csv_text(
        CSV_HEADS,
        (
            {
                "change": row.kind, "driver": row.driver, "vehicle": row.vehicle, "surface": row.surface,
                "grade": row.grade, "speed": row.speed, "speed_unit": row.speed_unit, "number": change.key,
                "old": change.old, "old_unit": change.old_unit, "new": change.new, "new_unit": change.new_unit,
                "reason": change.reason, "inputs": "; ".join(map(_input, change.inputs)),
            }
            for row in changes.rows
            for change in row.changes
        ),
    )  # fmt: skip


def to_text(changes: Changes, width: int = 100) -> str:
    """For a person, in plain English, ending with a newline; lines of at most `width`, at least 40, are kept to."""
    width = max(width, 40)
    lines = wrapped(_first(changes), width)
    for unit in changes.units:
        lines += wrapped(f"{_input(unit)}: every number in it counts as changed.", width)
    ordered = [row for kind in TITLES for row in changes.of(kind)]
    for (kind, *_), rows in groupby(ordered, key=_group):
        some = list(rows)
        lines += ["", *wrapped(_title(kind, some[0]), width)]
        cells = [_line(row, change, first=change is row.changes[0]) for row in some for change in row.changes]
        lines += columns((f"Speed ({some[0].speed_unit})", "Number", "Old", "New", "Reason"), cells, width, words=True)
    return "\n".join(lines) + "\n"


def _first(changes: Changes) -> str:
    added, removed = changes.of("added"), changes.of("removed")
    if not changes.rows:
        return f"No printed number differs: {_counted(changes.compared, 'number')} compared."
    said = f"{changes.numbers} of {_counted(changes.compared, 'printed number')} differ"
    said += f" in {len(changes.of('changed'))} of {_counted(changes.matched, 'row')}"
    for rows, what in ((added, "added"), (removed, "removed")):
        said += f"; {_counted(len(rows), 'row')} {what}" if rows else ""
    return said + "."


def _group(row: RowChange) -> tuple[str, str, str, str, float]:
    return row.kind, row.driver, row.vehicle, row.surface, row.grade


def _title(kind: str, row: RowChange) -> str:
    grade = "level" if row.grade == 0.0 else f"{abs(100 * row.grade):g} % {'uphill' if row.grade > 0 else 'downhill'}"
    return f"{TITLES[kind]}: {row.driver}, {row.vehicle}, {row.surface}, {grade}"


def _line(row: RowChange, change: Change, *, first: bool) -> tuple[str, str, str, str, str]:
    reason = REASONS.get(change.reason) or "; ".join(map(_input, change.inputs))
    name = change.key.removeprefix("printed.")
    speed = _value(row.speed) if first else ""
    return speed, name, _with_unit(change.old, change.old_unit), _with_unit(change.new, change.new_unit), reason


def _input(change: InputChange) -> str:
    return f"{change.key}: {_value(change.old)} -> {_value(change.new)}"


def _with_unit(value: Value, unit: str | None) -> str:
    return "none" if value is None else f"{_value(value)} {unit or ''}".rstrip()


def _value(value: Value) -> str:
    if value is None:
        return "none"
    return f"{value:.6g}" if isinstance(value, float) else str(value)


def _counted(number: int, what: str) -> str:
    return f"{number} {what}{'' if number == 1 else 's'}"
