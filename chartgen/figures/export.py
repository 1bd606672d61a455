"""The figures as public data: JSON and CSV with the same names, the CSV flat. Deterministic, no clock, no locale.

A key that stands here keeps its name; more may be added.
"""

from __future__ import annotations

import csv
import io
import json
import math
from collections.abc import Hashable, Iterator, Mapping
from dataclasses import asdict
from typing import Any, Final

from chartgen.edition.model import Questions
from chartgen.figures.record import Figures

Value = bool | int | float | str | None

PLAIN: Final = (
    "case", "driver", "vehicle", "surface", "grade", "load", "state", "length_m", "method", "speed_mps",
    "reaction_time_s", "reaction_percentile", "brake_lag_s", "build_up_s", "brake_efficiency", "max_deceleration_mps2",
    "reaction_mu", "reaction_sigma", "friction_low", "friction_high",
    "brake_share", "friction", "friction_f60", "friction_sp_kmh", "friction_max_mu", "friction_table", "valid_to_mps",
    "full_deceleration_mps2",
    "reaction_distance_m", "lag_distance_m", "braking_distance_m", "stopping_distance_m", "stopping_time_s",
    "stops", "reason",
)  # fmt: skip
"""Row keys that are columns of the table as they stand: the inputs of the trace among them."""

PRINTED: Final = ("speed", "reaction", "lag", "braking", "stopping")
PRINTED_GAP: Final = ("gap_s", "gap_distance")


def to_json(figures: Figures) -> str:
    """The figures as JSON, UTF-8 text ending with a newline: `document`, one row a line."""
    whole_document = document(figures)
    made = whole_document.pop("rows")
    head = json.dumps(whole_document, ensure_ascii=False, allow_nan=False, indent=1)[:-2]
    # One row a line: the encoder's quick way, and a file that shows which rows of two issues differ.
    lines = (json.dumps(row, ensure_ascii=False, allow_nan=False) for row in made)
    return head + ',\n "rows": [\n  ' + ",\n  ".join(lines) + "\n ]\n}\n"


def document(figures: Figures) -> dict[str, Any]:
    """The figures as public data.

    `{"edition", "issue", "issued", "speed_unit", "distance_unit", "also_unit", "warnings", "sources", "questions",
    "spread", "rows"}`; what does not exist (a braking distance where the vehicle does not stop) is null. Whole numbers
    in `printed` are written as integers. `questions` and `spread` are what the edition asks for, null where it does
    not. Each row's trace: its inputs stand beside its results, `method`, `rounding`, and `sources`, keys into the list
    of sources at the top. What an edition does not ask for has no key in a row: `perception_distance_m` where a source
    keeps perception apart, `spread` with `[figures.spread]`, `residual_speed_mps`, `greatest_speed_mps`, `added_m` and
    `gaps` with `[questions]`; what they print stands in `printed` too.
    """
    return {
        "edition": figures.edition_id,
        "issue": figures.issue,
        "issued": figures.issued,
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
        "questions": asdict(figures.questions),
        "spread": None if figures.spread is None else asdict(figures.spread),
        "rows": rows(figures),
    }


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
    printed, also = list(PRINTED), list(PRINTED[1:])
    if figures.gap_rule:
        row |= {"gap_rule": figures.gap_rule, "gap_s": plain(record["gap_s"])}
        printed += ["gap_s", "gap_distance"]
        also += ["gap_distance"]
    for more_keys, more, more_also in _asked(record, figures):
        row |= more_keys
        printed += more
        also += more_also
    row["printed"] = {name: whole(record[f"printed_{name}"]) for name in printed}
    if figures.also_unit:
        row["printed_also"] = {name: whole(record[f"printed_also_{name}"]) for name in also}
    row["rounding"] = dict(rounding)
    gaps = dict.fromkeys(filter(None, (figures.gap_rule, *figures.questions.gaps, figures.questions.headlight)))
    keys = [f"{kind}/{record[kind]}" for kind in ("driver", "surface", "vehicle")] + [*gaps, "adopted"]
    row["sources"] = [key for key in keys if key in figures.sources]
    return row


_Asked = tuple[dict[str, object], list[str], list[str]]
"""Keys of the row, printed names, printed names that have a value in the second unit."""


def _asked(record: Mapping[Hashable, object], figures: Figures) -> Iterator[_Asked]:
    """What the edition asks for beside the distances, each under its public name."""
    if any(~figures.table["perception_s"].isna()):
        names = ["perception"]
        yield {name: plain(record[name]) for name in ("perception_s", "perception_distance_m")}, names, names
    if figures.spread is not None:
        names = ["p50", "p85", "p95"]
        made: dict[str, object] = {f"{name}_m": plain(record[f"stopping_{name}_m"]) for name in names}
        made |= {"error_m": plain(record["spread_error_m"]), "samples": figures.spread.samples}
        yield {"spread": made}, names, names
    asked = figures.questions
    if asked.residual_from is not None:
        yield {"residual_speed_mps": plain(record["residual_speed_mps"])}, ["residual_speed"], []
    greatest = asked_greatest(asked)
    if greatest:
        speeds = {name: plain(record[f"greatest_{name}_mps"]) for name in greatest}
        at_top = {name: bool(record[f"greatest_{name}_at_top"]) for name in greatest}
        names = [f"greatest_{name}" for name in greatest]
        yield {"greatest_speed_mps": speeds, "greatest_speed_at_least": at_top}, names, []
    added = [name for name in ("driver", "surface") if getattr(asked, name) is not None]
    if added:
        names = [f"added_by_{name}" for name in added]
        yield {"added_m": {name: plain(record[f"added_by_{name}_m"]) for name in added}}, names, names
    if asked.gaps:
        yield {"gaps": {key: _gap(record, key, figures) for key in asked.gaps}}, [], []


def asked_greatest(asked: Questions) -> tuple[str, ...]:
    """Which greatest speeds an edition asks for: of "sight", "headlight", "gap"."""
    there = {"sight": asked.sight_m is not None, "headlight": bool(asked.headlight), "gap": bool(asked.gaps)}
    return tuple(name for name, wanted in there.items() if wanted)


def _gap(record: Mapping[Hashable, object], key: str, figures: Figures) -> dict[str, Value]:
    out = {"gap_s": plain(record[f"gap_s {key}"])}
    out |= {f"printed_{name}": whole(record[f"printed_{name} {key}"]) for name in PRINTED_GAP}
    if figures.also_unit:
        out["printed_also_gap_distance"] = whole(record[f"printed_also_gap_distance {key}"])
    return out


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


def _flat(row: Mapping[Any, object]) -> dict[str, object]:
    out: dict[str, object] = {}
    for key, value in row.items():
        if isinstance(value, Mapping):
            out |= {f"{key}_{inner}": item for inner, item in _flat(value).items()}
        else:
            out[key] = value
    return out


def _cell(value: object) -> object:
    if isinstance(value, list):
        return " ".join(value)
    if isinstance(value, bool):
        return "true" if value else "false"
    return "" if value is None else value
