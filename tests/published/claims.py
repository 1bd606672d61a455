"""What is claimed of each published table, read from `claims/*.toml`, and worked out anew.

README.md beside this file says what may be written there. A new table needs a CSV and a claim, and no code.
"""

from __future__ import annotations

import csv
import re
import tomllib
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass, field
from functools import cache
from pathlib import Path
from typing import Any

from chartgen.figures import rounding as rules

from .expressions import evaluate
from .products import Inputs, Printing, printed_by_edition

FOLDER = Path(__file__).parent
Row = Mapping[str, str]
Differs = tuple[str, float, float]
"""Row, printed, computed."""

PARAMETERS = {
    "reaction_time_s", "brake_lag_s", "build_up_s", "deceleration_mps2", "mu", "grade", "brake_efficiency",
}  # fmt: skip


@dataclass(frozen=True, kw_only=True)
class Claim:
    """One column of one table, under one way of working it out."""

    table: str
    column: str
    key: Sequence[str]
    score: str
    evidence: bool = True
    """False: agreement shows nothing, because its parameters were worked out from these very numbers, or because
    the rows are recalled and may have been recalled as the formula."""
    variant: bool = False
    """True: another way to a column already claimed, to show what a rule or constant does; not in the tally."""
    note: str = ""
    where: Mapping[str, Any] = field(default_factory=dict)
    only: Sequence[str] = ()
    """Rows, by key, where not all."""
    read: str = ""
    """Pattern that takes the number out of a cell of words."""
    printed: str = ""
    """What is compared, as a sum of the row, where it is not the cell of `column`."""
    within: float = 0.0
    given: Mapping[str, Mapping[str, float]] = field(default_factory=dict)
    """Numbers by row's key, as names for the sums."""
    differs: Sequence[Mapping[str, Any]] = ()
    # One of the two ways:
    formula: str = ""
    round: str = ""
    step: float = 1.0
    part: str = ""
    method: str = "first-principles"
    speed: str | float = ""
    speed_unit: str = ""
    speed_step_mps: float = 0.0
    unit: str = ""
    rounding: Mapping[str, Any] = field(default_factory=dict)
    friction_table: Sequence[Sequence[float]] = ()
    parameters: Mapping[str, str | float] = field(default_factory=dict)

    @property
    def id(self) -> str:
        """For a test's name."""
        return "-".join(filter(None, [self.table, *map(str, self.where.values()), self.column, self.note[:24]]))

    @property
    def listed(self) -> list[Differs]:
        """The disagreements as the claim lists them."""
        return [(str(d["row"]), float(d["printed"]), float(d["computed"])) for d in self.differs]


@dataclass(frozen=True, kw_only=True)
class Found:
    """What working it out gave: for each row whether it was read in a page and whether it agrees; those that differ."""

    read_in_page: list[bool]
    agrees: list[bool]
    differs: list[Differs]

    @property
    def score(self) -> str:
        return f"{sum(self.agrees)}/{len(self.agrees)}"


def load() -> tuple[list[Claim], dict[str, str], dict[str, str]]:
    """All claims; the tables with nothing to compute, each with its reason; and the tally."""
    claims: list[Claim] = []
    for path in sorted((FOLDER / "claims").glob("*.toml")):
        for entry in tomllib.loads(path.read_text(encoding="utf-8")).get("claim", []):
            columns = entry.pop("column")
            claims += [_claim(entry | column) for column in columns]
    rest = tomllib.loads((FOLDER / "claims" / "tally.toml").read_text(encoding="utf-8"))
    return claims, rest["nothing_to_compute"], rest["tally"]


def _claim(entry: Mapping[str, Any]) -> Claim:
    """A column's entry laid over its table's; an unknown key is a TypeError."""
    given = dict(entry)
    parameters = {name: given.pop(name) for name in PARAMETERS & set(given)}
    key = given.pop("key")
    column = given.pop("name")
    return Claim(**given, column=column, parameters=parameters, key=[key] if isinstance(key, str) else key)


@cache
def _file(name: str) -> tuple[Row, ...]:
    lines = (FOLDER / f"{name}.csv").read_text(encoding="utf-8").splitlines()
    return tuple(csv.DictReader(line for line in lines if not line.startswith("#")))


def key_of(row: Row, claim: Claim) -> str:
    return " | ".join(row[name] for name in claim.key)


def rows_of(claim: Claim) -> list[Row]:
    """The rows that the claim speaks of; those without a number in its column are passed over."""
    found = [r for r in _file(claim.table) if all(_matches(r[c], wanted) for c, wanted in claim.where.items())]
    if claim.only:
        found = [r for r in found if key_of(r, claim) in claim.only]
    return [r for r in found if claim.printed or _number(r[claim.column], claim.read) is not None]


def _matches(cell: str, wanted: Any) -> bool:
    return cell in wanted if isinstance(wanted, list) else cell == wanted


def _number(cell: str, read: str = "") -> float | None:
    if read:
        hit = re.search(read, cell)
        return float(hit[1]) if hit else None
    try:
        return float(cell)
    except ValueError:
        return None


def work_out(claim: Claim, rows: Sequence[Row]) -> Found:
    """The claim's column, computed for these rows and compared with what they print."""
    names = [_names(claim, row, place) for place, row in enumerate(rows)]
    computed = _by_formula(claim, names) if claim.formula else _by_edition(claim, names)
    found = Found(read_in_page=[row.get("seen") == "stored page" for row in rows], agrees=[], differs=[])
    for row, known, mine in zip(rows, names, computed, strict=True):
        theirs = evaluate(claim.printed, known) if claim.printed else _number(row[claim.column], claim.read)
        assert theirs is not None
        found.agrees.append(_same(theirs, mine, claim.within))
        if not found.agrees[-1]:
            found.differs.append((key_of(row, claim), theirs, mine))
    return found


def tally(claims: Iterable[Claim]) -> dict[str, str]:
    """Cells that agree, of all claimed, without variants: those that are evidence, and apart from them the others."""
    cells: dict[bool, list[bool]] = {True: [], False: []}
    for claim in claims:
        if not claim.variant:
            found = work_out(claim, rows_of(claim))
            for page, agrees in zip(found.read_in_page, found.agrees, strict=True):
                cells[claim.evidence and page].append(agrees)
    return {name: f"{sum(cells[k])}/{len(cells[k])}" for name, k in (("evidence", True), ("no_evidence", False))}


def _same(theirs: float, mine: float, within: float) -> bool:
    # With no tolerance both are numbers of a few digits, rounded by the same rule: equal or not.
    return abs(theirs - mine) <= within + 1e-9 if within else theirs == mine


def _names(claim: Claim, row: Row, place: int) -> dict[str, float]:
    """What a sum may use: the row's numbers, its place (`row`, from 0) and the numbers given for its key."""
    numbers = {re.sub(r"\W", "_", name): _number(cell) for name, cell in row.items()}
    names = {name: value for name, value in numbers.items() if value is not None} | {"row": float(place)}
    key = key_of(row, claim)
    return names | {name: values[key] for name, values in claim.given.items() if key in values}


def _by_formula(claim: Claim, names: Iterable[Mapping[str, float]]) -> list[float]:
    values = [evaluate(claim.formula, known) for known in names]
    if not claim.round:
        return values
    rounded = {"up": rules.up, "nearest": rules.nearest, "down": rules.down}[claim.round](values, claim.step)
    return [float(v) for v in rounded]


def _by_edition(claim: Claim, names: Sequence[Mapping[str, float]]) -> list[float]:
    """Through the product: editions in, printed figures out."""
    printing = Printing.of(claim.unit, claim.rounding)
    inputs = [
        Inputs(
            method=claim.method,
            speed=evaluate(claim.speed, known),
            speed_unit=claim.speed_unit,
            speed_step_mps=claim.speed_step_mps,
            friction_table=tuple((float(v), float(mu)) for v, mu in claim.friction_table),
            parameters=tuple(sorted((n, evaluate(v, known)) for n, v in claim.parameters.items())),
        )
        for known in names
    ]
    return [figures[claim.part] for figures in printed_by_edition(inputs, printing)]
