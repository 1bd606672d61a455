"""A published table taken as it stands: its CSV read strictly, every row held against the cases and speeds that exist.

Header: driver, vehicle, surface, grade (each may be left out where the edition has only one, or only the level),
speed (mph) or speed (km/h), stopping (m) or (ft); reaction, lag and braking in the same unit where the table has them.
"""

from __future__ import annotations

import re
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from decimal import Decimal
from fractions import Fraction
from pathlib import Path
from typing import Any

from chartgen.edition import adopted_checks as checks
from chartgen.edition.beside import csv_lines, text_beside
from chartgen.edition.cases import Combination
from chartgen.edition.measures import GRADE, SPEED, NotAQuantityError
from chartgen.edition.model import Adopted, AdoptedRow, DistanceUnit, Source
from chartgen.edition.prints import Made
from chartgen.edition.quantity import factor, parse
from chartgen.edition.reading import Reading, Row, listed, near

WHO = ("driver", "vehicle", "surface")
PARTS = ("reaction", "lag", "braking", "stopping")
SPEED_COLUMNS = ("speed (mph)", "speed (km/h)")
COLUMNS = (*WHO, "grade", *SPEED_COLUMNS, *(f"{part} ({unit})" for part in PARTS for unit in ("m", "ft")))
MOST_DISTANCE = 100_000
SAME_SPEED = 1e-6
"""In the edition's unit: how far a converted speed may lie from one of the edition's speeds to be that speed."""


@dataclass(slots=True)
class Table:
    """What is known of the file while it is read. `columns`: name -> place in a row."""

    shown: str
    made: Made
    columns: Mapping[str, int]
    speed_unit: str = "mph"
    distance_unit: DistanceUnit = "m"
    alone: Mapping[str, Any] = field(default_factory=dict)
    """What a column that is left out stands for."""
    unclear: bool = False
    """Some row's driver, vehicle, surface, grade or speed is not known: then none is missed."""


def adopted(reading: Reading, figures: Row, folder: Path, made: Made) -> Adopted | None:
    """The table that `figures.adopt` names; None where there is none or it does not hold together."""
    if not _keys_hold(reading, figures):
        return None
    found = text_beside(reading, folder, figures.at("adopt"), figures["adopt"], "table.csv")
    lines = csv_lines(reading, *found) if found else None
    if found is None or lines is None:
        return None
    if not lines:
        reading.fault("", "the file is empty", "a line of headings, then the rows", file=found[1])
        return None
    table = _header(reading, found[1], made, lines[0][1])
    if table is None or made.rows is None or not made.speeds:
        return None
    read = [(line, _row(reading, table, line, cells)) for line, cells in lines[1:]]
    rows = [(line, row) for line, row in read if row is not None]
    checks.twice(reading, table.shown, rows, made)
    if not table.unclear:
        checks.missing(reading, table.shown, [row for _, row in rows], made)
    checks.adds_up(reading, figures["adopt"], rows)
    checks.rises(reading, figures["adopt"], rows, made)
    return Adopted(
        file=figures["adopt"],
        source=Source(text=figures["adopt_source"]),
        distance_unit=table.distance_unit,
        rows=tuple(row.record for _, row in rows),
    )


def _keys_hold(reading: Reading, figures: Row) -> bool:
    if "adopt" not in figures:
        if "adopt_source" in figures and "adopt" not in figures.broken:
            reading.fault(
                figures.at("adopt_source"), "no table is adopted", 'adopt = "table.csv" beside it, or leave it out',
                given=figures["adopt_source"],
            )  # fmt: skip
        return False
    if "method" in figures:
        reading.fault(
            figures.at("method"), "a table that is adopted stays as it stands; no method works anything out",
            "either method or adopt", given=figures["method"],
        )  # fmt: skip
    if "adopt_source" not in figures and "adopt_source" not in figures.broken:
        reading.fault(figures.at("adopt_source"), "an adopted table needs its source", 'adopt_source = "…"')
        figures.broken.add("adopt_source")
    return "adopt_source" not in figures.broken


# ---- the headings ----------------------------------------------------------------------------------------------------


def _header(reading: Reading, shown: str, made: Made, names: list[str]) -> Table | None:
    before = len(reading.faults)
    for number, name in enumerate(names):
        if name not in COLUMNS:
            guess = near(name, COLUMNS)
            reading.fault("line 1", "this column is not known", listed(COLUMNS, 20), given=name, near=guess, file=shown)
        elif name in names[:number]:
            reading.fault("line 1", "this column stands there twice", "each column once", given=name, file=shown)
    speeds = [name for name in names if name in SPEED_COLUMNS]
    units = {name: name.rpartition("(")[2].rstrip(")") for name in names if name.partition(" ")[0] in PARTS}
    if len(set(speeds)) == 2:
        reading.fault("line 1", "there are speeds in two units", "one column of speeds", file=shown)
    for what, there in (("speed", bool(speeds)), ("stopping", any(n.startswith("stopping (") for n in names))):
        if not there and len(reading.faults) == before:
            right = " or ".join(c for c in COLUMNS if c.startswith(what))
            reading.fault("line 1", f"the column of {what} is missing", right, file=shown)
    if len(set(units.values())) > 1 and len(reading.faults) == before:
        problem = f"the distances are in different units: {', '.join(units)}"
        reading.fault("line 1", problem, "all in m, or all in ft", file=shown)
    alone = _alone(reading, shown, made, names)
    if len(reading.faults) > before:
        return None
    return Table(
        shown=shown,
        made=made,
        columns={name.partition(" ")[0]: place for place, name in enumerate(names)},
        speed_unit=speeds[0].partition("(")[2].rstrip(")"),
        distance_unit="ft" if "ft" in units.values() else "m",
        alone=alone,
    )


def _alone(reading: Reading, shown: str, made: Made, names: list[str]) -> dict[str, Any]:
    """What each column that is left out stands for; a fault where the edition has several."""
    alone: dict[str, Any] = {}
    for place, kind in enumerate((*WHO, "grade")):
        if kind in names or made.rows is None:
            continue
        there = sorted({combination[place] for combination in made.rows}, key=str)
        if kind == "grade" and there != [0.0]:
            problem = "the column of grade is missing, and the cases are not all on the level"
            reading.fault("line 1", problem, "grade", file=shown)
        elif len(there) > 1:
            problem = f"the column of {kind} is missing, and the cases have several: {listed(map(str, there))}"
            reading.fault("line 1", problem, kind, file=shown)
        else:
            alone[kind] = there[0] if there else ""
    return alone


# ---- a row ---------------------------------------------------------------------------------------------------------


def _row(reading: Reading, table: Table, line: int, cells: Sequence[str]) -> checks.Checked | None:
    if len(cells) != len(table.columns):
        problem, allowed = f"the row has {len(cells)} cells", f"{len(table.columns)} cells, one a column"
        reading.fault(f"line {line}", problem, allowed, given=",".join(cells), file=table.shown)
        table.unclear = True
        return None
    before = len(reading.faults)
    key = {kind: _who(reading, table, line, kind, cells) for kind in WHO}
    grade = _grade(reading, table, line, cells)
    speed = _speed(reading, table, line, cells)
    known = len(reading.faults) == before
    table.unclear |= not known
    numbers = {part: _distance(reading, table, line, part, cells) for part in PARTS if part in table.columns}
    if not known:
        return None
    combination: Combination = (key["driver"], key["vehicle"], key["surface"], grade)
    if table.made.rows is not None and combination not in table.made.rows:
        checks.no_case(reading, table.shown, line, combination)
        return None
    sound = len(reading.faults) == before
    values = {part: float(number) for part, number in numbers.items() if number is not None}
    record = AdoptedRow(
        driver=key["driver"], vehicle=key["vehicle"], surface=key["surface"], grade=grade, speed=speed,
        **{"stopping": 0.0, **values},
    )  # fmt: skip
    return checks.Checked(record=record, numbers={p: n for p, n in numbers.items() if n is not None} if sound else {})


def _who(reading: Reading, table: Table, line: int, kind: str, cells: Sequence[str]) -> str:
    if kind not in table.columns:
        return str(table.alone[kind])
    given, ids = cells[table.columns[kind]], table.made.ids[kind]
    if ids and given not in ids:
        problem = f"there is no {kind} with this id" if given else "the cell is empty"
        where = f"line {line}, column {kind}"
        reading.fault(where, problem, listed(ids), given=given, near=near(given, ids), file=table.shown)
    return given


def _grade(reading: Reading, table: Table, line: int, cells: Sequence[str]) -> float:
    if "grade" not in table.columns:
        return float(table.alone["grade"])
    given = cells[table.columns["grade"]]
    try:
        return parse(given, GRADE).value
    except NotAQuantityError as fault:
        where = f"line {line}, column grade"
        reading.fault(where, fault.problem, fault.right, given=given, near=fault.near, file=table.shown)
        return 0.0


def _number(reading: Reading, table: Table, line: int, column: str, given: str) -> Decimal | None:
    if re.fullmatch(r"[0-9]{1,9}(\.[0-9]{1,9})?", given):
        return Decimal(given)
    where, right = f"line {line}, column {column}", "such as 23 or 23.5"
    if not given:
        problem, right = "the cell is empty", "a value in each row"
    elif re.fullmatch(r"[0-9]+,[0-9]+", given):
        problem, right = "a comma is not read as a decimal point, nor as a thousands mark", given.replace(",", ".")
        if re.fullmatch(r"[1-9][0-9]{0,2},[0-9]{3}", given):
            right += f", or {given.replace(',', '')} if thousands were meant"
    elif re.match(r"[-\u2212\u2013]", given):
        problem = "a speed or a distance is never below 0"
    elif re.fullmatch(r"[0-9]+(\.[0-9]+)? ?[a-z/]+", given):
        problem = "the unit stands in the heading, the number alone in the cell"
        right = re.sub(r" ?[a-z/]+$", "", given)
    else:
        problem = "this is not a number"
    reading.fault(where, problem, right, given=given, file=table.shown)
    return None


def _speed(reading: Reading, table: Table, line: int, cells: Sequence[str]) -> float:
    given = cells[table.columns["speed"]]
    number = _number(reading, table, line, f"speed ({table.speed_unit})", given)
    if number is None:
        return 0.0
    made = table.made
    value = float(number)
    if table.speed_unit != made.speed_unit:
        unit, own = (factor(SPEED.units[u], SPEED.inside) for u in (table.speed_unit, made.speed_unit or "mph"))
        value = float(Fraction(number) * unit / own)
    same = [speed for speed in made.speeds if abs(speed - value) <= SAME_SPEED]
    if not same:
        where = f"line {line}, column speed ({table.speed_unit})"
        problem = "this is not one of the edition's speeds"
        if table.speed_unit != made.speed_unit:
            problem = f"this is {value:.6g} {made.speed_unit}, which is not one of the edition's speeds"
        reading.fault(where, problem, listed(list(made.speeds.values())), given=given, file=table.shown)
        return 0.0
    return same[0]


def _distance(reading: Reading, table: Table, line: int, part: str, cells: Sequence[str]) -> Decimal | None:
    column = f"{part} ({table.distance_unit})"
    number = _number(reading, table, line, column, cells[table.columns[part]])
    if number is None:
        return None
    if number > MOST_DISTANCE or (part == "stopping" and number == 0):
        right = f"{'above 0' if part == 'stopping' else '0'}, up to {MOST_DISTANCE:,} {table.distance_unit}"
        reading.fault(
            f"line {line}, column {column}", "this is out of range", right, given=str(number), file=table.shown
        )
        return None
    return number
