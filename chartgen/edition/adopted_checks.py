"""The rows of an adopted table held against one another and against the cases: twice, missing, adding up, rising."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from decimal import Decimal
from itertools import pairwise

from chartgen.edition.cases import Combination, combination_text
from chartgen.edition.model import AdoptedRow
from chartgen.edition.prints import Made
from chartgen.edition.reading import Reading, listed

MOST_NAMED = 20
"""Missing combinations that are named one by one."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Checked:
    """A row whose place in the edition is known. `numbers`: its distances as written; empty where one is at fault."""

    record: AdoptedRow
    numbers: Mapping[str, Decimal]

    @property
    def combination(self) -> Combination:
        row = self.record
        return row.driver, row.vehicle, row.surface, row.grade


Numbered = Sequence[tuple[int, Checked]]
"""Rows with their lines in the file."""


def no_case(reading: Reading, shown: str, line: int, combination: Combination) -> None:
    """Fault a row that no case has: it would stand in no table."""
    problem = f"no [[case]] has the combination {combination_text(combination)}"
    reading.fault(f"line {line}", problem, "a case with all four of them, or leave the row out", file=shown)


def twice(reading: Reading, shown: str, rows: Numbered, made: Made) -> None:
    """Fault each row whose combination and speed an earlier one has."""
    seen: dict[tuple[Combination, float], int] = {}
    for line, row in rows:
        key = row.combination, row.record.speed
        if key in seen:
            problem = f"line {seen[key]} has {combination_text(key[0])} at {made.speeds[key[1]]} already"
            reading.fault(f"line {line}", problem, "each row once", file=shown)
        seen.setdefault(key, line)


def missing(reading: Reading, shown: str, rows: Sequence[Checked], made: Made) -> None:
    """Fault each combination that lacks a speed; an adopted table has no figure to put in its place."""
    there = {(row.combination, row.record.speed) for row in rows}
    gaps = {c: [v for v in made.speeds if (c, v) not in there] for c in sorted(made.rows or ())}
    short = [(combination, speeds) for combination, speeds in gaps.items() if speeds]
    for combination, speeds in short[:MOST_NAMED]:
        at = listed([made.speeds[speed] for speed in speeds]).replace(" or ", " and ")
        problem = f"there is no row for {combination_text(combination)} at {at}"
        reading.fault("", problem, "a row for each combination of the cases and each speed", file=shown)
    if len(short) > MOST_NAMED:
        problem = f"{len(short) - MOST_NAMED} more combinations lack rows"
        reading.fault("", problem, "a row for each combination of the cases and each speed", file=shown)


def adds_up(reading: Reading, name: str, rows: Numbered) -> None:
    """Warn of rows whose parts are more than one unit of their last printed place away from the total."""
    odd = []
    for line, row in rows:
        parts = [number for part, number in row.numbers.items() if part != "stopping"]
        if not parts:
            continue
        total = row.numbers["stopping"]
        coarsest = max(Decimal((0, (1,), int(n.as_tuple().exponent))) for n in row.numbers.values())
        whole = {"reaction", "braking"} <= set(row.numbers)
        if sum(parts) - total > coarsest or (whole and total - sum(parts) > coarsest):
            odd.append(line)
    if odd:
        reading.warn(f"{name}, {_lines(odd)}", "the parts do not add up to the total, by more than their rounding.")


def rises(reading: Reading, name: str, rows: Numbered, made: Made) -> None:
    """Warn of totals that get shorter as the speed rises."""
    by: dict[Combination, dict[float, tuple[int, Decimal]]] = {}
    for line, row in rows:
        if row.numbers:
            by.setdefault(row.combination, {})[row.record.speed] = (line, row.numbers["stopping"])
    for combination, at in by.items():
        for slow, fast in pairwise(sorted(at)):
            if at[fast][1] < at[slow][1]:
                reading.warn(
                    f"{name}, {_lines(sorted((at[slow][0], at[fast][0])))}",
                    f"the total of {combination_text(combination)} is shorter at {made.speeds[fast]} than at "
                    f"{made.speeds[slow]}.",
                )


def _lines(lines: Sequence[int]) -> str:
    """ "line 3", or "lines 3, 5 and 8"."""
    return f"line{'s' if len(lines) > 1 else ''} " + listed(map(str, lines)).replace(" or ", " and ")
