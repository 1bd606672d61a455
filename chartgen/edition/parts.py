"""What drivers, surfaces and vehicles have in common: ids, presets, sources, and what a method can use of them."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import TypeVar

from chartgen.edition.methods import ADOPTED, FIRST_PRINCIPLES, called
from chartgen.edition.model import Source, Text
from chartgen.edition.quantity import Quantity
from chartgen.edition.reading import Reading, Row, listed, near
from chartgen.edition.spec import TABLES
from chartgen.edition.walk import example

OWN_ASSUMPTION = Source(text="", kind="publisher")
"""No source stated: printed as the publisher's own assumption."""
_P = TypeVar("_P")


def unique(reading: Reading, rows: Sequence[Row]) -> None:
    """Fault each id that an earlier row of the same kind has."""
    seen: dict[str, Row] = {}
    for row in rows:
        if "id" in row and row["id"] in seen:
            first = seen[row["id"]].path
            reading.fault(row.at("id"), f"{first} has this id already", "an id of its own", given=row["id"])
        seen.setdefault(row.get("id", ""), row)


def needed(reading: Reading, row: Row, table: str, *keys: str) -> bool:
    """Fault each key that is missing though no preset stands in for it. True where all are there and sound."""
    for key in keys:
        if key not in row and key not in row.broken:
            row.broken.add(key)
            reading.fault(row.at(key), "this is needed and missing", example(key, TABLES[table][key], reading))
    return not row.broken


def picked(reading: Reading, row: Row, catalogue: Mapping[str, _P]) -> _P | None:
    """The preset that `use` names; a fault where the catalogue has none of that name."""
    key = row.get("use")
    if key is None:
        return None
    if key not in catalogue:
        row.broken.add("use")
        reading.fault(
            row.at("use"), "the catalogue has no such preset", listed(catalogue), given=key, near=near(key, catalogue)
        )
    return catalogue.get(key)


def preset_name(reading: Reading, row: Row, names: Text) -> Text:
    """The preset's own name in the edition's languages; one that it lacks is the edition's to give."""
    for tag in reading.languages:
        if tag not in names:
            reading.missing_text(row.at(f"name.{tag}"), tag)
    return {tag: names[tag] for tag in reading.languages if tag in names}


def source(row: Row) -> Source:
    """The source as stated, else the publisher's own assumption."""
    return Source(text=row["source"]) if "source" in row else OWN_ASSUMPTION


def cannot_use(reading: Reading, row: Row, key: str, method: str) -> None:
    """An input that the method cannot use is a fault: it is never ignored. Beside a table that is adopted it may say
    what its source assumes, and then it is only a warning."""
    if method == ADOPTED:
        reading.warn(
            row.at(key), f"{called(method)} stays as it stands: this is printed beside it, and changes no figure."
        )
        return
    row.broken.add(key)
    reading.fault(
        row.at(key),
        f"{called(method)} cannot use this",
        f'leave it out, or method = "{FIRST_PRINCIPLES}"',
        given=plain(row.get(key)),
    )


def plain(value: object) -> object:
    """A value that passed the walk as it was written, for a message."""
    if isinstance(value, Quantity):
        return value.text
    if isinstance(value, Mapping):
        return {key: plain(item) for key, item in value.items()}
    if isinstance(value, float) and value.is_integer():
        return int(value)
    return [plain(item) for item in value] if isinstance(value, (list, tuple)) else value
