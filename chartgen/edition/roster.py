"""The roster of a fleet: a CSV with one row a card."""

from __future__ import annotations

from collections.abc import Mapping
from pathlib import Path

from chartgen.edition.beside import csv_lines, text_beside
from chartgen.edition.model import RosterRow
from chartgen.edition.reading import Reading, listed, near

COLUMNS = ("vehicle_id", "vehicle", "languages", "depot", "holder", "copy_no")
NEEDED = ("vehicle_id", "vehicle", "languages", "copy_no")
LONGEST = 80


def read_roster(reading: Reading, folder: Path, name: str, vehicles: Mapping[str, bool]) -> tuple[RosterRow, ...]:
    """Read the roster `name` in the edition's folder. `vehicles`: id -> whether cards can be made for it.

    RFC 4180, UTF-8, commas; `languages` holds one tag or several with spaces between. Faults carry line numbers.
    """
    found = text_beside(reading, folder, "cards.roster", name, "roster.csv")
    if found is None:
        return ()
    text, shown = found
    lines = csv_lines(reading, text, shown)
    if lines is None:
        return ()
    if not _header(reading, shown, lines[0][1] if lines else []):
        return ()
    columns = lines[0][1]
    rows = [_row(reading, shown, line, columns, cells, vehicles) for line, cells in lines[1:]]
    if not lines[1:]:
        reading.fault("", "the roster has no cards", "a row for each card below the headings", file=shown)
    good = [row for row in rows if row is not None]
    _copies(reading, shown, good)
    return tuple(good)


def _header(reading: Reading, shown: str, columns: list[str]) -> bool:
    before = len(reading.faults)
    for number, column in enumerate(columns):
        if column not in COLUMNS:
            reading.fault(
                "line 1",
                "this column is not known",
                listed(COLUMNS),
                given=column,
                near=near(column, COLUMNS),
                file=shown,
            )
        elif column in columns[:number]:
            reading.fault("line 1", "this column stands there twice", "each column once", given=column, file=shown)
    for column in NEEDED:
        if column not in columns:
            reading.fault("line 1", f"the column {column} is missing", ",".join(COLUMNS), file=shown)
    return len(reading.faults) == before


def _row(
    reading: Reading, shown: str, line: int, columns: list[str], values: list[str], vehicles: Mapping[str, bool]
) -> RosterRow | None:
    if len(values) != len(columns):
        problem, allowed = f"the row has {len(values)} cells", f"{len(columns)} cells, one a column"
        reading.fault(f"line {line}", problem, allowed, given=",".join(values), file=shown)
        return None
    cells = dict(zip(columns, values, strict=True))
    before = len(reading.faults)
    at = f"line {line}, column "
    for column in NEEDED:
        if not cells[column]:
            reading.fault(at + column, "the cell is empty", "a value in each row", file=shown)
    for column, cell in cells.items():
        if len(cell) > LONGEST or any(ord(c) < 32 for c in cell):
            reading.fault(at + column, "the cell does not fit a card", f"one line, at most {LONGEST} characters",
                          given=cell, file=shown)  # fmt: skip
    vehicle = cells["vehicle"]
    if vehicle and vehicles and vehicle not in vehicles:
        reading.fault(at + "vehicle", "there is no vehicle with this id", listed(vehicles), given=vehicle,
                      near=near(vehicle, vehicles), file=shown)  # fmt: skip
    elif vehicle and not vehicles.get(vehicle, True):
        reading.fault(at + "vehicle", "no case has this vehicle with the driver, surfaces and grade of the cards",
                      listed([v for v, works in vehicles.items() if works]) or "a [[case]] that has them",
                      given=vehicle, file=shown)  # fmt: skip
    tags = tuple(cells["languages"].split())
    for tag in tags:
        if tag not in reading.languages:
            reading.fault(at + "languages", "this language is not among languages.use",
                          " ".join(reading.languages), given=tag, near=near(tag, reading.languages),
                          file=shown)  # fmt: skip
    if len(reading.faults) > before:
        return None
    return RosterRow(
        vehicle_id=cells["vehicle_id"],
        vehicle=vehicle,
        languages=tags,
        depot=cells.get("depot", ""),
        holder=cells.get("holder", ""),
        copy_no=cells["copy_no"],
        line=line,
    )


def _copies(reading: Reading, shown: str, rows: list[RosterRow]) -> None:
    seen: dict[str, int] = {}
    for row in rows:
        if row.copy_no in seen:
            reading.fault(f"line {row.line}, column copy_no", f"line {seen[row.copy_no]} has this copy number already",
                          "a number of its own", given=row.copy_no, file=shown)  # fmt: skip
        seen.setdefault(row.copy_no, row.line)
