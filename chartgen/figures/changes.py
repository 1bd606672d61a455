"""Two issues of figures -> every printed number that differs, old and new, with the input that changed it.

Works on the public data (`export.document`, or the JSON file of it), so that an issue whose edition file is gone can
still be compared. Pure: no files, no clock.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass
from typing import Any, Final, Literal

from chartgen.figures.causes import bears_on, document_inputs, inputs, own_reference
from chartgen.figures.units import MPS_IN

Value = bool | int | float | str | None
Document = Mapping[str, Any]
Row = Mapping[str, Any]
Reason = Literal["input", "program", "untold", "added", "removed"]
"""Why a number differs: an input changed; no input changed, so the program or its rounding did; an input that the
figures do not carry or the program (only for what is not one of `BASIC`); the row is new; the row is gone."""

BASIC: Final = frozenset({"speed", "reaction", "perception", "lag", "braking", "stopping"})
"""Numbers whose every input stands in their row, so that "no input changed" can be said for sure."""

_HEAD: Final = ("driver", "vehicle", "surface", "grade")


@dataclass(frozen=True, slots=True, kw_only=True)
class InputChange:
    """An input that changed. `key` as in the public data, nested keys joined with "." ("rounding.step"); an input of
    another row has that row in front: "driver/ready.reaction_time_s"."""

    key: str
    old: Value
    new: Value


@dataclass(frozen=True, slots=True, kw_only=True)
class Change:
    """One printed number that differs; None where it is not printed (the vehicle does not stop, the row is new)."""

    key: str
    """Where it stands in the row: "printed.stopping", "gaps.gap/two-seconds.printed_gap_s"."""
    name: str
    """What it is: "reaction", "stopping", "gap_distance" and so on, the same in both units."""
    also: bool
    """True: printed in the second unit."""
    old: Value
    new: Value
    old_unit: str | None
    new_unit: str | None
    reason: Reason
    inputs: tuple[InputChange, ...] = ()
    """With the reason "input": those that changed and bear on this number."""


@dataclass(frozen=True, slots=True, kw_only=True)
class RowChange:
    """One row with at least one `Change`. `speed` as printed, in `speed_unit`: new, or old where the row is gone."""

    kind: Literal["changed", "added", "removed"]
    driver: str
    vehicle: str
    surface: str
    grade: float
    speed: float
    speed_unit: str
    changes: tuple[Change, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Changes:
    """What differs between two issues; rows in the order of the new one, then those that are gone in that of the old.

    `units`: the edition's own units that changed ("distance_unit": "m" to "ft"), each one statement; then every number
    in that unit counts as changed. `matched`, `compared`: rows of both issues, and the printed numbers in them.
    """

    old: str
    new: str
    """Ids of the editions."""
    units: tuple[InputChange, ...]
    rows: tuple[RowChange, ...]
    matched: int
    compared: int

    @property
    def same_edition(self) -> bool:
        """False: the two are figures of different editions."""
        return self.old == self.new

    def of(self, kind: str) -> tuple[RowChange, ...]:
        """The rows of a kind: changed, added or removed."""
        return tuple(row for row in self.rows if row.kind == kind)

    @property
    def numbers(self) -> int:
        """How many printed numbers differ in rows that both issues have."""
        return sum(len(row.changes) for row in self.of("changed"))


def changes(old: Document, new: Document) -> Changes:
    """Every printed number that differs between two issues.

    Formula: none. Rows are matched by driver, vehicle, surface, grade and printed speed (by the speed itself where the
    unit of speed changed). Compared is whatever stands under a key that begins with `printed`, at any depth. Everything
    else in a row that is no result (`causes.RESULTS`) is an input; which inputs bear on which number: `causes`.

    Args:
        old: public figures of the issue before; the rows each once.
        new: those of this issue.

    Returns:
        `Changes`; its `rows` are empty where no printed number differs.

    Raises:
        KeyError: a key is missing that every figures JSON has (`edition.previous.figures_in` looks before).

    Source: the two issues.
    """
    units = tuple(_unit_changes(old, new))
    whole = tuple(_input_changes(document_inputs(old), document_inputs(new)))
    same_speeds = old["speed_unit"] == new["speed_unit"]
    before = {_match(row, old, same_speeds): row for row in old["rows"]}
    after = {_match(row, new, same_speeds): row for row in new["rows"]}
    changed_inputs = {key: _row_inputs(before[key], row) for key, row in after.items() if key in before}
    rows: list[RowChange] = []
    compared = 0
    for key, row in after.items():
        if key not in before:
            rows.append(_alone("added", row, new))
            continue
        pair = _Pair(before[key], row, old, new, units, changed_inputs[key], whole)
        differing, count = _differing(pair, changed_inputs, key)
        compared += count
        if differing:
            rows.append(_row("changed", row, new, differing))
    rows += [_alone("removed", row, old) for key, row in before.items() if key not in after]
    return Changes(
        old=str(old["edition"]),
        new=str(new["edition"]),
        units=units,
        rows=tuple(rows),
        matched=len(changed_inputs),
        compared=compared,
    )


@dataclass(frozen=True, slots=True)
class _Pair:
    """One row of both issues with what changed for it."""

    before: Row
    after: Row
    old: Document
    new: Document
    units: tuple[InputChange, ...]
    own: tuple[InputChange, ...]
    whole: tuple[InputChange, ...]


_Key = tuple[Any, ...]


def _match(row: Row, document: Document, same_speeds: bool) -> _Key:
    speed = row["printed"]["speed"]
    # A unit that nobody knows matches nothing but itself.
    scale = MPS_IN.get(str(document["speed_unit"]))
    asked = speed if same_speeds or scale is None else round(speed * scale, 6)
    return (row["driver"], row["vehicle"], row["surface"], round(row["grade"], 12), asked)


def printed_numbers(row: Row) -> dict[str, Value]:
    """Everything printed of a row, by its key: what stands under a key that begins with `printed`, at any depth.

    Formula: none.

    Args:
        row: one row of the public data.

    Returns:
        Values by key, nested ones joined with ".".

    Raises:
        Nothing.

    Source: the public data.
    """
    return dict(_printed("", row, inside=False))


def _printed(prefix: str, node: Row, *, inside: bool) -> Iterator[tuple[str, Value]]:
    for key, value in node.items():
        printed = inside or key.startswith("printed")
        if isinstance(value, Mapping):
            yield from _printed(f"{prefix}{key}.", value, inside=printed)
        elif printed:
            yield f"{prefix}{key}", value


def _unit_changes(old: Document, new: Document) -> Iterator[InputChange]:
    for key in ("speed_unit", "distance_unit", "also_unit"):
        if old.get(key) != new.get(key):
            yield InputChange(key=key, old=old.get(key), new=new.get(key))


def _row_inputs(before: Row, after: Row) -> tuple[InputChange, ...]:
    return tuple(_input_changes(inputs(before), inputs(after)))


def _input_changes(before: Mapping[str, Value], after: Mapping[str, Value]) -> Iterator[InputChange]:
    """Inputs of both issues that differ, in the order of the new one."""
    for key, new in after.items():
        if key in before and not _same(before[key], new):
            yield InputChange(key=key, old=before[key], new=new)


def _same(old: Value, new: Value) -> bool:
    """Equal; for inputs to 1e-9, as the last digit of a curve is the machine's business and no change."""
    if isinstance(old, float) and isinstance(new, int | float):
        return math.isclose(old, new, rel_tol=1e-9, abs_tol=0.0)
    return old == new


def _differing(pair: _Pair, of_rows: Mapping[_Key, tuple[InputChange, ...]], key: _Key) -> tuple[list[Change], int]:
    """The numbers of a pair of rows that differ, and how many were compared."""
    before, after = printed_numbers(pair.before), printed_numbers(pair.after)
    names = list(dict.fromkeys((*after, *before)))
    out = []
    for where in names:
        was, now = before.get(where), after.get(where)
        name, also = _what(where)
        old_unit, new_unit = _unit(name, also, pair.old), _unit(name, also, pair.new)
        # Nothing is nothing in any unit.
        if was == now and (old_unit == new_unit or not was):
            continue
        causes = tuple(_causes(pair, where, name, also, of_rows, key))
        reason: Reason = "input" if causes else "program" if name in BASIC else "untold"
        out.append(
            Change(
                key=where, name=name, also=also, old=was, new=now, old_unit=old_unit, new_unit=new_unit,
                reason=reason, inputs=causes,
            )
        )  # fmt: skip
    return out, len(names)


def _causes(
    pair: _Pair, where: str, name: str, also: bool, of_rows: Mapping[_Key, tuple[InputChange, ...]], key: _Key
) -> Iterator[InputChange]:
    """The changed inputs that bear on one number: units, the row's own, the reference row's, the whole edition's."""
    for unit in pair.units:
        if unit.key in _unit_keys(name, also):
            yield unit
    shared = any(row["rounding"]["total"] == "controlled" for row in (pair.before, pair.after) if "rounding" in row)
    for change in pair.own:
        if bears_on(change.key, name, also=also, shared=shared, where=where):
            yield change
    reference = own_reference(name, pair.new)
    if reference is not None:
        column, id = reference
        other = tuple(id if field == column else value for field, value in zip((*_HEAD, "speed"), key, strict=True))
        # What changed alike in both is told once.
        for change in of_rows.get(other, ()):
            if change not in pair.own and bears_on(change.key, "stopping", also=also, shared=shared, where=where):
                yield InputChange(key=f"{column}/{id}.{change.key}", old=change.old, new=change.new)
    for change in pair.whole:
        if name not in BASIC and bears_on(change.key, name, also=also, shared=shared, where=where):
            yield change


def _what(where: str) -> tuple[str, bool]:
    """A printed number's name, and whether it is one in the second unit, from its key."""
    *path, last = where.split(".")
    also = any(step.startswith("printed_also") for step in (*path, last))
    return last.removeprefix("printed_also_").removeprefix("printed_"), also


def _unit(name: str, also: bool, document: Document) -> str | None:
    if name.endswith("_s"):
        return "s"
    unit = document.get(_unit_keys(name, also)[0])
    return None if unit is None else str(unit)


def _unit_keys(name: str, also: bool) -> tuple[str, ...]:
    if name.endswith("_s"):
        return ("",)
    if name.endswith("speed") or name.startswith("greatest_"):
        return ("speed_unit",)
    return ("also_unit",) if also else ("distance_unit",)


def _alone(kind: Literal["added", "removed"], row: Row, document: Document) -> RowChange:
    """A row that one issue alone has, with all its printed numbers but its speed."""
    made = []
    for where, value in printed_numbers(row).items():
        name, also = _what(where)
        if where == "printed.speed" or value is None:
            continue
        unit = _unit(name, also, document)
        old, new = (None, value) if kind == "added" else (value, None)
        made.append(
            Change(key=where, name=name, also=also, old=old, new=new, old_unit=unit, new_unit=unit, reason=kind)
        )
    return _row(kind, row, document, made)


def _row(
    kind: Literal["changed", "added", "removed"], row: Row, document: Document, made: Iterable[Change]
) -> RowChange:
    return RowChange(
        kind=kind,
        driver=row["driver"],
        vehicle=row["vehicle"],
        surface=row["surface"],
        grade=row["grade"],
        speed=row["printed"]["speed"],
        speed_unit=str(document["speed_unit"]),
        changes=tuple(made),
    )
