"""A comparison with published tables, for a terminal and as CSV and JSON. Deterministic, no clock, no locale."""

from __future__ import annotations

import json
from collections.abc import Iterator, Sequence
from dataclasses import asdict
from itertools import groupby
from typing import TYPE_CHECKING, Any, Final

from chartgen.edition.model import PARTS
from chartgen.figures.compare import ComparedRow, Comparison, meaning
from chartgen.figures.plain_table import columns, csv_text, wrapped
from chartgen.figures.why import Why

if TYPE_CHECKING:
    from chartgen.edition.model import Edition
    from chartgen.figures.record import Figures

MISSING: Final = {
    "does-not-stop": "the vehicle does not stop",
    "ours-totals-only": "the adopted table gives totals alone",
    "totals-only": "the published table gives totals alone",
    "not-reproduced": "the published parameters do not give the published total at this speed",
}
"""Why a difference is not split, in words."""

NAMES: Final = (*PARTS, "stopping")
SHARES: Final = (*PARTS, "rounding")
CSV_HEADS: Final = (
    "table", "row", "driver", "vehicle", "surface", "speed", "speed_unit", "distance_unit",
    *(f"ours_{n}" for n in NAMES), *(f"theirs_{n}" for n in NAMES), *(f"difference_{n}" for n in NAMES),
    *(f"split_{n}" for n in SHARES), *(f"basis_{n}" for n in PARTS), "split_missing", "why", "from_memory",
)  # fmt: skip

_CODES: Final = {
    "reaction": "reaction time in s",
    "friction": "friction",
    "deceleration": "deceleration in m/s²",
    "lag": "brake lag in s",
    "build-up": "build-up in s",
    "kind": "vehicle",
    "state": "road",
}


def to_json(comparisons: Sequence[Comparison], figures: Figures) -> str:
    """As JSON, UTF-8 text ending with a newline.

    `{"edition", "speed_unit", "distance_unit", "tables"}`. A table: `table` (its id), `source`, `year`, `country`,
    `meaning`, `state`, `kinds`, `stated` and `fitted` parameters, `rounding`, `remark`, `from_memory`, `not_level` and
    `tests` (rows of the figures at its speeds that are not compared), `rows`. A row: the fields of
    `compare.ComparedRow`, with `ours`, `theirs` and `difference` each of `reaction`, `lag`, `braking`, `stopping`;
    `split` of `reaction`, `lag`, `braking`, `rounding` and `basis`, or null; `why` a list of `code`, `ours`, `theirs`,
    `fitted`, `part`, `ours_step`, `theirs_step`.
    """
    document = {
        "edition": figures.edition_id,
        "speed_unit": figures.speed_unit,
        "distance_unit": figures.distance_unit,
        "tables": [_table(comparison) for comparison in comparisons],
    }
    return json.dumps(document, ensure_ascii=False, allow_nan=False, indent=1) + "\n"


def _table(comparison: Comparison) -> dict[str, Any]:
    table = comparison.table
    return {
        "table": table.id,
        "source": table.cited,
        "year": table.year,
        "country": table.country,
        "meaning": table.meaning,
        "state": table.state,
        "kinds": list(table.kinds),
        "stated": dict(table.stated),
        "fitted": dict(table.fitted),
        "rounding": asdict(table.rounding),
        "remark": table.remark,
        "from_memory": table.from_memory,
        "not_level": list(comparison.not_level),
        "tests": list(comparison.tests),
        "rows": [asdict(row) for row in comparison.rows],
    }


def to_csv(comparisons: Sequence[Comparison]) -> str:
    """As CSV (RFC 4180), one line a row and table: `CSV_HEADS`, the JSON's values with nested names joined by "_".

    `table` is the table's id; `why` as "reaction: 1.5, 0.68 (fitted); rounding reaction: up 1, nearest 1", ours first.
    """
    return csv_text(CSV_HEADS, (_flat(c, row) for c in comparisons for row in c.rows))


def _flat(comparison: Comparison, row: ComparedRow) -> dict[str, object]:
    table = comparison.table
    out: dict[str, object] = {
        "table": table.id, "row": row.row, "driver": row.driver, "vehicle": row.vehicle, "surface": row.surface,
        "speed": row.speed, "speed_unit": table.speed_unit, "distance_unit": table.distance_unit,
        "split_missing": row.split_missing, "why": "; ".join(map(_code, row.why)), "from_memory": row.from_memory,
    }  # fmt: skip
    for what in ("ours", "theirs", "difference"):
        out |= {f"{what}_{name}": getattr(getattr(row, what), name) for name in NAMES}
    if row.split is not None:
        out |= {f"split_{name}": getattr(row.split, name) for name in SHARES}
        out |= {f"basis_{part}": row.split.basis[part] for part in PARTS}
    return out


def _code(why: Why) -> str:
    part = f" {why.part}" if why.part else ""
    theirs = _value(why.theirs, why.theirs_step) + (" (fitted)" if why.fitted else "")
    return f"{why.code}{part}: {_value(why.ours, why.ours_step)}, {theirs}"


def to_text(comparisons: Sequence[Comparison], figures: Figures, edition: Edition, width: int = 100) -> str:
    """For a person, in plain English, ending with a newline; lines of at most `width`, at least 40, are kept to."""
    width = max(width, 40)
    units = f"{figures.speed_unit} and {figures.distance_unit}"
    what = "design sight distances" if meaning(edition) == "sight-design" else "stopping distances"
    if not comparisons:
        text = f"No published table that comes with chartgen has {what} in {units} at a speed of this edition."
        return "\n".join(wrapped(text, width)) + "\n"
    lines = wrapped(
        f"{figures.edition_id} beside published {what} in {units}. Tables differ because they assume different "
        "things; none of them is the measure of another. Distances are ours/theirs; they differ by "
        "ours less theirs, which is reaction + lag + braking before rounding + what rounding makes of it.",
        width,
    )
    for comparison in comparisons:
        lines += ["", *_block(comparison, width)]
    return "\n".join(lines) + "\n"


def _block(comparison: Comparison, width: int) -> Iterator[str]:
    table = comparison.table
    yield from wrapped(f"{table.id}: {table.cited}.", width)
    yield from wrapped(table.remark, width, "  ")
    if table.from_memory:
        yield from wrapped("Some of its numbers were recalled and not read (marked *).", width, "  ")
    for (driver, vehicle, surface), group in groupby(comparison.rows, key=lambda r: (r.driver, r.vehicle, r.surface)):
        rows = list(group)
        yield ""
        yield from wrapped(f"{driver}, {vehicle}, {surface}", width, "  ")
        yield from columns(_heads(table.speed_unit), [_cells(row) for row in rows], width, "    ")
        for missing, speeds in _not_split(rows).items():
            yield from wrapped(f"{', '.join(speeds)} {table.speed_unit}: not split, {MISSING[missing]}.", width, "    ")
        yield from _differ(rows, width)
    for skipped, why in ((comparison.not_level, "on a grade"), (comparison.tests, "a brake test's figure")):
        if skipped:
            count = f"{len(skipped)} row{'s' if len(skipped) > 1 else ''} of the edition"
            yield from wrapped(f"Not compared, {why}: {count} at these speeds.", width, "  ")


def _heads(speed_unit: str) -> tuple[str, ...]:
    return (speed_unit, *NAMES, "differ", "= reaction", "+ lag", "+ braking", "+ rounding")


def _cells(row: ComparedRow) -> tuple[str, ...]:
    shares = (getattr(row.split, name) for name in SHARES) if row.split else (None,) * len(SHARES)
    pairs = [f"{_figure(getattr(row.ours, name))}/{_figure(getattr(row.theirs, name))}" for name in NAMES]
    pairs[-1] += "*" if row.from_memory else ""
    return (_value(row.speed), *pairs, _signed(row.difference.stopping), *map(_signed, shares))


def _not_split(rows: Sequence[ComparedRow]) -> dict[str, list[str]]:
    out: dict[str, list[str]] = {}
    for row in rows:
        if row.split_missing is not None:
            out.setdefault(row.split_missing, []).append(_value(row.speed))
    return out


def _differ(rows: Sequence[ComparedRow], width: int) -> Iterator[str]:
    """What differs, a line an assumption; one that goes by speed from its first value to its last."""
    found: dict[tuple[str, str | None], list[tuple[str, Why]]] = {}
    for row in rows:
        for why in row.why:
            found.setdefault((why.code, why.part), []).append((_value(row.speed), why))
    for some in found.values():
        (first_speed, first), (last_speed, last) = some[0], some[-1]
        text = _worded(first)
        if any(why != first for _, why in some):
            text += f" at {first_speed}, to {_worded(last).partition(': ')[2] or _worded(last)} at {last_speed}"
        elif len(some) < len(rows):
            text += " at " + ", ".join(speed for speed, _ in some)
        yield from wrapped(f"{text}.", width, "    ")


def _worded(why: Why) -> str:
    ours = "none" if why.ours is None else _value(why.ours, why.ours_step)
    theirs = _value(why.theirs, why.theirs_step)
    if why.code == "sum":
        return f"published sum: the parts add up to {ours}, the published total is {theirs}"
    what = {"rounding": f"rounding of the {why.part}", "total": "total"}.get(why.code) or _CODES[why.code]
    return f"{what}: ours {ours}, theirs {theirs}" + (" (worked out from its rows)" if why.fitted else "")


def _value(value: float | str | None, step: float | None = None) -> str:
    shown = "not stated" if value is None else value if isinstance(value, str) else f"{value:.6g}"
    return shown if step is None else f"{shown} {step:g}"


def _figure(value: float | None) -> str:
    return "–" if value is None else f"{value:.6g}"


def _signed(value: float | None) -> str:
    """With its sign, a true minus; 0 has none."""
    return "" if value is None else f"{value:+.6g}".replace("-", "−") if value else "0"
