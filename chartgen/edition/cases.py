"""Cases: which drivers, vehicles, surfaces and grades go together."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from chartgen.edition.methods import FIRST_PRINCIPLES, THUMB, called
from chartgen.edition.model import Case
from chartgen.edition.reading import Reading, Row, listed, near

MOST_ROWS = 5000
Combination = tuple[str, str, str, float]
"""Driver, vehicle, surface, grade."""


def cases(reading: Reading, root: Row, ids: Mapping[str, tuple[str, ...]]) -> tuple[Case, ...]:
    """The [[case]] sections; with none, one that is the whole product on the level. Empty where one is at fault."""
    rows: Sequence[Row] = root.get("case", [])
    if not rows:
        if "case" in root.broken or not all(ids.values()):
            return ()
        return (Case(drivers=ids["driver"], vehicles=ids["vehicle"], surfaces=ids["surface"]),)
    read = [_case(reading, row, ids) for row in rows]
    found = [(row.path, case) for row, case in zip(rows, read, strict=True) if case is not None]
    if len(found) < len(rows) or sum(_size(case) for _, case in found) > MOST_ROWS:
        return tuple(case for _, case in found) if len(found) == len(rows) else ()
    _only_once(reading, found)
    return tuple(case for _, case in found)


def _case(reading: Reading, row: Row, ids: Mapping[str, tuple[str, ...]]) -> Case | None:
    for kind in ("driver", "vehicle", "surface"):
        for number, given in enumerate(row.get(kind, ()), 1):
            if not known(reading, f"{row.at(kind)}[{number}]", kind, given, ids[kind]):
                row.broken.add(kind)
    grades: list[float] = []
    for number, grade in enumerate(row.get("grade", ()), 1):
        if grade.value in grades:
            row.broken.add("grade")
            where = f"{row.at('grade')}[{number}]"
            reading.fault(where, "this grade stands there twice", "each grade once", given=grade.text)
        grades.append(grade.value)
    if row.broken:
        return None
    return Case(drivers=row["driver"], vehicles=row["vehicle"], surfaces=row["surface"], grades=tuple(grades) or (0.0,))


def level(reading: Reading, root: Row, method: str) -> None:
    """Fault each slope where the method is a rule of thumb, which knows only the level."""
    for row in root.get("case", []) if method in THUMB else ():
        for number, grade in enumerate(row.get("grade", ()), 1):
            if grade.value != 0.0:
                reading.fault(
                    f"{row.at('grade')}[{number}]",
                    f"{called(method)} holds on the level only",
                    f'"0 %", or method = "{FIRST_PRINCIPLES}"',
                    given=grade.text,
                )


def known(reading: Reading, where: str, kind: str, given: str, ids: Sequence[str]) -> bool:
    """Fault a reference to an id that does not exist; where the ids themselves are at fault (none), it may be right."""
    if given in ids or not ids:
        return True
    reading.fault(where, f"there is no {kind} with this id", listed(ids), given=given, near=near(given, ids))
    return False


def combinations(case: Case) -> list[Combination]:
    """The product of a case's lists."""
    return [(d, v, s, g) for d in case.drivers for v in case.vehicles for s in case.surfaces for g in case.grades]


def combination_text(combination: Combination) -> str:
    """ "ready, car, dry, -9 %"."""
    driver, vehicle, surface, grade = combination
    return f"{driver}, {vehicle}, {surface}, {grade * 100:.6g} %"


def _size(case: Case) -> int:
    return len(case.drivers) * len(case.vehicles) * len(case.surfaces) * len(case.grades)


def _only_once(reading: Reading, found: Sequence[tuple[str, Case]]) -> None:
    """A combination in two cases would stand in every table twice."""
    seen: dict[Combination, str] = {}
    for path, case in found:
        for combination in combinations(case):
            if combination in seen:
                problem = f"the combination {combination_text(combination)} stands in {seen[combination]} already"
                reading.fault(path, problem, "each combination once")
                break
            seen[combination] = path


def few_enough(reading: Reading, found: Sequence[Case], speeds: int) -> bool:
    """Fault an edition of more than 5,000 rows; counted, not made."""
    rows = speeds * sum(_size(case) for case in found)
    if rows <= MOST_ROWS:
        return True
    allowed = f"at most {MOST_ROWS:,} rows: fewer speeds or shorter lists"
    reading.fault("case", f"the cases and speeds make {rows:,} rows", allowed)
    return False
