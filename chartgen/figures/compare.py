"""An edition's rows beside published tables of the same units and meaning: how far apart, and what makes it up.

Neutral: tables differ because they assume different things, and none is the measure of another. Pure: no clock.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any, Final, Literal

import numpy as np

from chartgen.edition.model import PARTS, Part
from chartgen.figures.apart import Parts, Split, SplitMissing, difference, split
from chartgen.figures.library import PublishedRow, PublishedTable, tables
from chartgen.figures.units import METRES_IN
from chartgen.figures.why import Why, whys

if TYPE_CHECKING:
    from chartgen.edition.model import Edition
    from chartgen.figures.record import Figures

Meaning = Literal["stopping", "sight-design"]

SIGHT: Final = frozenset({"sight-metric", "sight-us"})


@dataclass(frozen=True, slots=True, kw_only=True)
class ComparedRow:
    """One row of the edition beside the published row of the same speed. Distances in the printed unit of both."""

    row: int
    """Number of the row in the figures' table."""
    driver: str
    vehicle: str
    surface: str
    speed: float
    """As printed, in the speed unit of both."""
    ours: Parts
    theirs: Parts
    difference: Parts
    """Printed, ours less theirs; a part is None where either does not print it."""
    split: Split | None
    """What the difference of the totals is made of; None with `split_missing` saying why."""
    split_missing: SplitMissing | None
    why: tuple[Why, ...]
    """Which assumptions differ."""
    from_memory: bool
    """True: the published row was recalled and not read."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Comparison:
    """The edition beside one published table, at the speeds that both have.

    `rows`: on the level, in the order of the figures. `not_level`: numbers of rows at these speeds that are on a
    grade: published tables are for the level, so they are named and not compared. `tests`: numbers of rows whose
    vehicle has the deceleration of a brake test: no stop on a road, so likewise.
    """

    table: PublishedTable
    rows: tuple[ComparedRow, ...]
    not_level: tuple[int, ...] = ()
    tests: tuple[int, ...] = ()


def meaning(edition: Edition) -> Meaning:
    """What the edition's totals mean: design values of the sight methods, else stops on a road.

    Formula: none.

    Args:
        edition: for its method.

    Returns:
        "sight-design" or "stopping".

    Raises:
        Nothing.

    Source: the kinds of table in the library.
    """
    return "sight-design" if edition.method in SIGHT else "stopping"


def compare(figures: Figures, edition: Edition) -> tuple[Comparison, ...]:
    """The edition's rows beside each published table of its units and meaning, at equal speeds.

    Formula: ``difference = ours printed - theirs printed``. The difference of the totals is the sum of the differences
    of reaction, lag and braking before rounding, and of what rounding makes of them (see `apart.split`).

    Args:
        figures: the figures of the edition.
        edition: the same edition, for its method, vehicles and surfaces.

    Returns:
        One `Comparison` for each table that has a speed in common, in the order of the library; never a table of
        brake tests. `edition.compare` does not matter here: it says whether the publisher wants the page.

    Raises:
        MachineFault: a file of the library is missing.

    Source: each table's own, in the library.
    """
    wanted = (figures.speed_unit, figures.distance_unit, meaning(edition))
    found = (t for t in tables() if (t.speed_unit, t.distance_unit, t.meaning) == wanted)
    return tuple(filter(None, (_comparison(table, figures, edition) for table in found)))


def _comparison(table: PublishedTable, figures: Figures, edition: Edition) -> Comparison | None:
    rows, not_level, on_test = [], [], []
    tested = {v.id for v in edition.vehicles if v.test_figure}
    adopted_test = edition.adopted is not None and edition.adopted.test_figure
    for record in _records(figures):
        published = table.at(record["printed_speed"])
        if published is None:
            continue
        if adopted_test or record["vehicle"] in tested:
            on_test.append(int(record["row"]))
        elif record["grade"] != 0.0:
            not_level.append(int(record["row"]))
        else:
            rows.append(_compared(record, published, table, edition))
    if not (rows or not_level or on_test):
        return None
    return Comparison(table=table, rows=tuple(rows), not_level=tuple(not_level), tests=tuple(on_test))


def _records(figures: Figures) -> Iterator[dict[str, Any]]:
    columns = figures.table.to_dict("list")
    for values in zip(*columns.values(), strict=True):
        yield dict(zip(map(str, columns), values, strict=True))


def _compared(
    record: Mapping[str, Any], published: PublishedRow, table: PublishedTable, edition: Edition
) -> ComparedRow:
    ours = Parts(**{name: _number(record[f"printed_{name}"]) for name in (*PARTS, "stopping")})
    theirs = Parts(**{name: getattr(published, name) for name in (*PARTS, "stopping")})
    scale = METRES_IN[table.distance_unit]
    exact: dict[Part, float | None] = {part: _number(record[f"{part}_distance_m"], scale) for part in PARTS}
    made = split(ours, exact, published, table, speed_mps=float(record["speed_mps"]), method=edition.method)
    return ComparedRow(
        row=int(record["row"]),
        driver=record["driver"],
        vehicle=record["vehicle"],
        surface=record["surface"],
        speed=float(record["printed_speed"]),
        ours=ours,
        theirs=theirs,
        difference=difference(ours, theirs),
        split=made if isinstance(made, Split) else None,
        split_missing=None if isinstance(made, Split) else made,
        why=tuple(whys(record, published, table, edition)),
        from_memory=published.from_memory,
    )


def _number(value: Any, scale: float = 1.0) -> float | None:
    return None if np.isnan(value) else float(value) / scale
