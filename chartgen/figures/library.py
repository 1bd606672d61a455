"""Published tables of stopping distances that come with the program: what an edition's own rows are set beside.

Files in `published/`: `index.json` says what each table is, one CSV a table holds its rows as printed, in the table's
own units; an empty cell is a part that the table does not give. A table is added as data, with no code.
"""

from __future__ import annotations

import csv
import json
from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache
from pathlib import Path
from typing import Any, Final, Literal

from chartgen.edition.model import DistanceUnit, Kind, Part, Rule, SpeedUnit
from chartgen.errors import MachineFault
from chartgen.sources import BIBLIOGRAPHY, cite

FOLDER: Final = Path(__file__).resolve().parent / "published"

Meaning = Literal["stopping", "sight-design", "test"]
"""`stopping`: what a driver on a road needs; `sight-design`: what a road is laid out for; `test`: what a vehicle must
show in a brake test, never to be set beside totals of a road."""

TotalRule = Literal["sum-of-parts", "up-from-sum", "up", "nearest"]
"""How the printed total is made: the printed parts added; that sum taken up to the next step; the unrounded total
taken up, or to the nearest step."""


@dataclass(frozen=True, slots=True, kw_only=True)
class PublishedRounding:
    """The table's habit, as worked out from its rows. Steps in its distance unit; None: no rule reproduces it."""

    parts: Mapping[Part, Rule | None]
    step: float
    total: TotalRule | None
    total_step: float


@dataclass(frozen=True, slots=True, kw_only=True)
class PublishedRow:
    """One row as printed, in the table's own units, on the level."""

    speed: float
    stopping: float
    reaction: float | None = None
    lag: float | None = None
    braking: float | None = None
    friction: float | None = None
    """Coefficient that the table itself prints for this speed."""
    from_memory: bool = False
    """True: this row, or some part of it, was recalled and not read."""


@dataclass(frozen=True, slots=True, kw_only=True)
class PublishedTable:
    """A published table. Facts only; why it differs from another is for the reader of the numbers to say."""

    id: str
    name_key: str
    """Word key of its name: ``"published." + id``."""
    source: str
    """Key in `sources.BIBLIOGRAPHY`."""
    place: str
    """Rule, table or section within the source, in English."""
    year: int | None
    """Year of the issue quoted; None where the source bears none or it was not noted."""
    country: str
    """ISO 3166-1 code, for a name of the country in any language."""
    speed_unit: SpeedUnit
    distance_unit: DistanceUnit
    meaning: Meaning
    state: Literal["dry", "wet", "snow", "ice"] | None
    """State of the road that the table says it is for; None where it does not say."""
    kinds: tuple[Kind, ...]
    """Vehicles it says it is for; empty where it does not say."""
    parts: tuple[Part, ...]
    """Parts given beside the total."""
    stated: Mapping[str, float]
    """What the source states: `reaction_time_s`, `brake_lag_s`, `deceleration_mps2`."""
    fitted: Mapping[str, float]
    """The same, where it was worked out from the rows and the source does not state it."""
    rounding: PublishedRounding
    remark: str
    """What a careful reader should know, in English."""
    rows: tuple[PublishedRow, ...]
    """In the order printed."""

    @property
    def from_memory(self) -> bool:
        """True where any row is."""
        return any(row.from_memory for row in self.rows)

    @property
    def cited(self) -> str:
        """Source and place, with the remark that the source is quoted from memory where nobody opened it."""
        return f"{cite(self.source)}; {self.place}"

    def value(self, name: str) -> float | None:
        """A parameter, stated or fitted; None where neither is known."""
        return self.stated.get(name, self.fitted.get(name))

    def at(self, speed: float) -> PublishedRow | None:
        """The row of that speed, in the table's speed unit; None where it has none."""
        return next((row for row in self.rows if row.speed == speed), None)


@cache
def tables() -> tuple[PublishedTable, ...]:
    """Every table that comes with the program, in the order of its index.

    Raises MachineFault where a file of the library is missing.

    Formula: none.

    Returns:
        The tables as printed, in their own units.

    Raises:
        MachineFault: a file of the library is missing.

    Source: each table's own, a key of the bibliography.
    """
    try:
        index = json.loads((FOLDER / "index.json").read_text(encoding="utf-8"))
        return tuple(_table(id, entry) for id, entry in index.items())
    except FileNotFoundError as missing:
        raise MachineFault(
            f"chartgen's own table '{Path(str(missing.filename)).name}' is missing.", "Install chartgen again."
        ) from missing


def table(id: str) -> PublishedTable:
    """The table of that id. Raises KeyError where there is none.

    Formula: none.

    Args:
        id: of a table, as in the index.

    Returns:
        The table as printed.

    Raises:
        KeyError: there is none of that id; MachineFault: a file is missing.

    Source: the table's own.
    """
    found = {t.id: t for t in tables()}
    return found[id]


def _table(id: str, entry: dict[str, Any]) -> PublishedTable:
    if entry["source"] not in BIBLIOGRAPHY:
        raise KeyError(f"{id}: no work {entry['source']!r} in the bibliography")
    tuples = {name: tuple(entry[name]) for name in ("kinds", "parts")}
    rounding = PublishedRounding(**entry["rounding"])
    return PublishedTable(
        **(entry | tuples | {"id": id, "name_key": f"published.{id}", "rounding": rounding, "rows": _rows(id)})
    )


def _rows(id: str) -> tuple[PublishedRow, ...]:
    with (FOLDER / f"{id}.csv").open(encoding="utf-8", newline="") as file:
        return tuple(_row(record) for record in csv.DictReader(file))


def _row(record: dict[str, str]) -> PublishedRow:
    remembered = record.pop("from_memory") == "true"
    return PublishedRow(**{name: float(cell) for name, cell in record.items() if cell}, from_memory=remembered)
