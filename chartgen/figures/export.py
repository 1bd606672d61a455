"""The figures as public data: JSON and CSV with the same names, the CSV flat. Deterministic, no clock, no locale.

A key that stands here keeps its name; more may be added.
"""

from __future__ import annotations

import csv
import io
import json
import math
from collections.abc import Hashable, Mapping
from typing import Final

from chartgen.figures.record import Figures

Value = bool | int | float | str | None

PLAIN: Final = (
    "case", "driver", "vehicle", "surface", "grade", "load", "method", "speed_mps",
    "reaction_time_s", "reaction_percentile", "brake_lag_s", "build_up_s", "brake_efficiency", "max_deceleration_mps2",
    "friction", "friction_f60", "friction_sp_kmh", "friction_max_mu", "full_deceleration_mps2",
    "reaction_distance_m", "lag_distance_m", "braking_distance_m", "stopping_distance_m", "stopping_time_s",
    "stops", "reason",
)  # fmt: skip
"""Row keys that are columns of the table as they stand: the inputs of the trace among them."""

PRINTED: Final = ("speed", "reaction", "lag", "braking", "stopping")
PRINTED_GAP: Final = ("gap_s", "gap_distance")


def to_json(figures: Figures) -> str:
    """The figures as JSON, UTF-8 text ending with a newline.

    `{"edition", "speed_unit", "distance_unit", "also_unit", "warnings", "sources", "rows"}`; what does not exist (a
    braking distance where the vehicle does not stop) is null. Whole numbers in `printed` are written as integers.
    Each row's trace: its inputs stand beside its results, `method`, `rounding`, and `sources`, keys into the list
    of sources at the top.
    """
    document = {
        "edition": figures.edition_id,
        "speed_unit": figures.speed_unit,
        "distance_unit": figures.distance_unit,
        "also_unit": figures.also_unit,
        "warnings": [
            {"code": n.code, "text": n.text, "reader": n.reader, "rows": list(n.rows)} for n in figures.notices
        ],
        "sources": {
            key: {"text": source.text, "kind": source.kind, "from_memory": source.from_memory}
            for key, source in figures.sources.items()
        },
        "rows": rows(figures),
    }
    return json.dumps(document, ensure_ascii=False, allow_nan=False, indent=1) + "\n"


def to_csv(figures: Figures) -> str:
    """The figures as CSV (RFC 4180: commas, CRLF, quotes doubled), a header first; nested keys joined with "_".

    What does not exist is empty; truths are `true` and `false`; several sources are joined with a space.
    """
    flat = [_flat(row) for row in rows(figures)]
    text = io.StringIO()
    writer = csv.writer(text, lineterminator="\r\n")
    writer.writerow(flat[0])
    writer.writerows([_cell(value) for value in row.values()] for row in flat)
    return text.getvalue()


def rows(figures: Figures) -> list[dict[str, object]]:
    """The rows under their public names: what JSON writes nested and CSV flat."""
    rounding = _rounding(figures)
    columns = figures.table.to_dict("list")
    return [
        _row(dict(zip(columns, values, strict=True)), figures, rounding)
        for values in zip(*columns.values(), strict=True)
    ]


def _row(record: Mapping[Hashable, object], figures: Figures, rounding: Mapping[str, Value]) -> dict[str, object]:
    row: dict[str, object] = {name: plain(record[name]) for name in PLAIN}
    gap = PRINTED_GAP if figures.gap_rule else ()
    if figures.gap_rule:
        row |= {"gap_rule": figures.gap_rule, "gap_s": plain(record["gap_s"])}
    row["printed"] = {name: whole(record[f"printed_{name}"]) for name in PRINTED + gap}
    if figures.also_unit:
        also = PRINTED[1:] + gap[1:]
        row["printed_also"] = {name: whole(record[f"printed_also_{name}"]) for name in also}
    row["rounding"] = dict(rounding)
    keys = [f"{kind}/{record[kind]}" for kind in ("driver", "surface", "vehicle")] + [figures.gap_rule or ""]
    row["sources"] = [key for key in keys if key in figures.sources]
    return row


def _rounding(figures: Figures) -> dict[str, Value]:
    rounding = figures.rounding
    out: dict[str, Value] = {"unit": figures.distance_unit, "step": whole(rounding.step)}
    if figures.also_unit:
        out |= {"also_unit": figures.also_unit, "also_step": whole(rounding.also_step)}
    return out | {part: str(rule) for part, rule in rounding.rules.items()} | {"total": rounding.total}


def plain(value: object) -> Value:
    """A table value as JSON knows it: nan and infinity (no limit, no figure) to None, "" to None, no minus zero."""
    if value is None or value == "":
        return None
    if isinstance(value, bool | str | int):
        return value
    if isinstance(value, float):
        return value + 0.0 if math.isfinite(value) else None
    raise TypeError(f"no public form for {value!r}")


def whole(value: object) -> Value:
    """As `plain`, and a whole number is an integer: 23, not 23.0."""
    known = plain(value)
    return int(known) if isinstance(known, float) and known.is_integer() else known


def _flat(row: Mapping[str, object]) -> dict[str, object]:
    out: dict[str, object] = {}
    for key, value in row.items():
        if isinstance(value, Mapping):
            out |= {f"{key}_{inner}": item for inner, item in value.items()}
        else:
            out[key] = value
    return out


def _cell(value: object) -> object:
    if isinstance(value, list):
        return " ".join(value)
    if isinstance(value, bool):
        return "true" if value else "false"
    return "" if value is None else value
