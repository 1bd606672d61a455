"""The issue before this one: its public figures (JSON) in the edition's folder, held against what is read from them."""

from __future__ import annotations

import json
from collections.abc import Mapping
from pathlib import Path
from typing import Any

from chartgen.edition.beside import text_beside
from chartgen.edition.model import Previous
from chartgen.edition.reading import Reading, Row, as_written

MOST_BYTES = 50_000_000
"""5,000 rows with their traces take about 10 MB."""
MOST_FAULTS = 10
"""Rows that are named one by one."""
MOST = 1e9
"""No number of a figure is as large; infinity and what is no number at all are not less either."""
_RIGHT = "the figures (JSON) of an issue, as they were made"


def previous(
    reading: Reading, head: Row, folder: Path, speed_unit: str | None, distance_unit: str | None
) -> Previous | None:
    """The figures that `edition.previous` names; None where there are none or they do not hold together."""
    if "previous" not in head:
        return None
    name: str = head["previous"]
    found = text_beside(reading, folder, head.at("previous"), name, "issue-2.json", MOST_BYTES)
    if found is None:
        return None
    text, shown = found
    figures = figures_in(reading, text, shown, speed_unit, distance_unit)
    if figures is None:
        return None
    if "id" in head and figures["edition"] != head["id"]:
        reading.warn(
            head.at("previous"),
            f'{name} holds the figures of the edition {as_written(figures["edition"])}, not of "{head["id"]}".',
        )
    return Previous(file=name, figures=figures)


def figures_in(
    reading: Reading, text: str, shown: str, speed_unit: str | None = None, distance_unit: str | None = None
) -> dict[str, Any] | None:
    """The figures that a JSON text holds, as the program makes them; None, with faults, where it holds none.

    `shown`: how messages call the file. With units, figures printed in other ones are a fault too.
    """
    try:
        figures = json.loads(text, parse_constant=_no_constant)
    except RecursionError:
        reading.fault("", "lists or objects stand too deep in one another", _RIGHT, file=shown)
        return None
    except ValueError as fault:
        reading.fault("", f"this is not JSON: {str(fault)[:160]}", _RIGHT, file=shown)
        return None
    before = len(reading.faults)
    if not isinstance(figures, dict):
        reading.fault("", "these are not figures of an edition", _RIGHT, file=shown)
        return None
    _head(reading, shown, figures, speed_unit, distance_unit)
    _rows(reading, shown, figures.get("rows"))
    return figures if len(reading.faults) == before else None


def _no_constant(word: str) -> float:
    raise ValueError(f"{word} is no number")


def _head(
    reading: Reading, shown: str, figures: Mapping[str, Any], speed_unit: str | None, distance_unit: str | None
) -> None:
    if not isinstance(figures.get("edition"), str):
        reading.fault("edition", "this is needed and missing", _RIGHT, file=shown)
    for key, now in (("speed_unit", speed_unit), ("distance_unit", distance_unit)):
        was = figures.get(key)
        if was is None:
            reading.fault(key, "this is needed and missing", _RIGHT, file=shown)
        elif now is not None and was != now:
            problem = f"the edition is printed in {now}: the numbers of the two issues cannot be compared"
            reading.fault(key, problem, f'"{now}"', given=was, file=shown)


def _rows(reading: Reading, shown: str, rows: object) -> None:
    if not isinstance(rows, list) or not rows:
        reading.fault("rows", "there are no rows", _RIGHT, file=shown)
        return
    bad = [(number, problem) for number, row in enumerate(rows, 1) if (problem := _odd(row)) is not None]
    for number, problem in bad[:MOST_FAULTS]:
        reading.fault(f"rows[{number}]", problem, _RIGHT, file=shown)
    if len(bad) > MOST_FAULTS:
        reading.fault("rows", f"{len(bad) - MOST_FAULTS} more rows are not as they were made", _RIGHT, file=shown)
    seen: dict[tuple[Any, ...], int] = {}
    for number, row in enumerate([] if bad else rows, 1):
        key = (*(row[k] for k in ("driver", "vehicle", "surface", "grade")), row["printed"]["speed"])
        if key in seen:
            reading.fault(f"rows[{number}]", f"rows[{seen[key]}] is this row already", "each row once", file=shown)
            return
        seen[key] = number


def _odd(row: object) -> str | None:
    """What is wrong with a row of figures, if anything is."""
    if not isinstance(row, dict):
        return "this is not a row of figures"
    for key in ("driver", "vehicle", "surface"):
        if not isinstance(row.get(key), str):
            return f"its {key} is missing"
    if not _is_number(row.get("grade")):
        return "its grade is missing"
    printed = row.get("printed")
    if not isinstance(printed, dict) or not _is_number(printed.get("speed")):
        return "its printed speed is missing"
    odd = [key for key, value in printed.items() if value is not None and not _is_number(value)]
    if odd:
        return f"its printed {odd[0]} is no number"
    return None if "stopping" in printed else "its printed stopping distance is missing"


def _is_number(value: object) -> bool:
    return isinstance(value, (int, float)) and not isinstance(value, bool) and abs(value) < MOST
