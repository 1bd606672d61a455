"""Posters and cards: what is printed, held against the cases that exist."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from pathlib import Path

from chartgen.edition import headline
from chartgen.edition.catalogue import GAP_RULES
from chartgen.edition.model import Cards, Case, Poster, Show
from chartgen.edition.paper import paper
from chartgen.edition.reading import Reading, Row, listed, near
from chartgen.edition.roster import read_roster

_Row = tuple[str, str, str, float]


@dataclass(frozen=True, slots=True, kw_only=True)
class Made:
    """What the rest of the edition offers to a sheet. `speeds`: value -> as written; `ids` by "driver", "vehicle",
    "surface"; `rows`: every (driver, vehicle, surface, grade) that some case has."""

    speeds: Mapping[float, str]
    speed_unit: str
    distance_unit: str
    ids: Mapping[str, tuple[str, ...]]
    cases: tuple[Case, ...]
    rows: frozenset[_Row]
    lengths: Mapping[str, float | None]
    """Length in m by vehicle id."""


def known(reading: Reading, where: str, kind: str, given: str, ids: Sequence[str]) -> bool:
    """Fault a reference to an id that does not exist."""
    if given in ids:
        return True
    reading.fault(where, f"there is no {kind} with this id", listed(ids), given=given, near=near(given, ids))
    return False


# ---- posters -----------------------------------------------------------------------------------------------------


def poster(reading: Reading, row: Row, number: int, made: Made) -> Poster | None:
    """One [[poster]]; None where it does not hold together."""
    show = _show(reading, row, made)
    if show is not None and "headline" in row:
        for tag, text in row["headline"].items():
            where = row.at(f"headline.{tag}")
            for item in headline.check(reading, where, text, made.speeds, made.speed_unit, made.ids):
                _exists(reading, where, show, item, made)
    if row.broken or show is None:
        return None
    read_from = row.get("read_from")
    return Poster(
        id=row.get("id", f"poster-{number}"),
        layout="columns",
        paper=row.get("paper") or paper("A3"),
        together=row.get("languages", "together") == "together",
        headline=row["headline"],
        show=show,
        read_from_m=read_from.value if read_from else 3.0,
    )


def _show(reading: Reading, row: Row, made: Made) -> Show | None:
    given: Row = row.get("show", Row(row.at("show")))
    if "show" in row.broken or given.broken:
        return None
    first = made.cases[0]
    before = len(reading.faults)
    drivers: tuple[str, ...] = given.get("driver", first.drivers[:1])
    vehicle: str = given.get("vehicle", first.vehicles[0])
    surface: str = given.get("surface", first.surfaces[0])
    grade = given["grade"].value if "grade" in given else first.grades[0]
    for driver in drivers:
        known(reading, given.at("driver"), "driver", driver, made.ids["driver"])
    known(reading, given.at("vehicle"), "vehicle", vehicle, made.ids["vehicle"])
    known(reading, given.at("surface"), "surface", surface, made.ids["surface"])
    speeds = _speeds(reading, given, made)
    if len(reading.faults) > before:
        return None
    for driver in drivers:
        if (driver, vehicle, surface, grade) not in made.rows:
            _no_row(reading, given.path, (driver, vehicle, surface, grade))
    if len(reading.faults) > before:
        return None
    return Show(drivers=drivers, vehicle=vehicle, surface=surface, grade=grade, speeds=speeds)


def _speeds(reading: Reading, given: Row, made: Made) -> tuple[float, ...] | None:
    if "speeds" not in given:
        return None
    values = []
    for number, quantity in enumerate(given["speeds"], 1):
        value = float(quantity.number)
        if quantity.unit != made.speed_unit or value not in made.speeds:
            reading.fault(
                f"{given.at('speeds')}[{number}]",
                "this is not one of the edition's speeds",
                listed(list(made.speeds.values())),
                given=f"{value:g} {quantity.unit}",
            )
        elif value in values:
            reading.fault(f"{given.at('speeds')}[{number}]", "this speed stands there twice", "each speed once")
        values.append(value)
    return tuple(sorted(values))


def _no_row(reading: Reading, where: str, row: _Row) -> None:
    driver, vehicle, surface, grade = row
    given = f"{driver}, {vehicle}, {surface}, {grade * 100:g} %"
    reading.fault(where, "no [[case]] has this combination", "a case with all four of them", given=given)


def _exists(reading: Reading, where: str, show: Show, item: headline.Placeholder, made: Made) -> None:
    row = (
        item.rows.get("driver", show.drivers[0]),
        item.rows.get("vehicle", show.vehicle),
        item.rows.get("surface", show.surface),
        show.grade if item.grade is None else item.grade,
    )
    if row not in made.rows:
        _no_row(reading, where, row)


# ---- cards -------------------------------------------------------------------------------------------------------


def cards(reading: Reading, row: Row, folder: Path, made: Made) -> Cards | None:
    """The [cards] section with its roster; None where it does not hold together."""
    first = made.cases[0]
    before = len(reading.faults)
    driver: str = row.get("driver", first.drivers[0])
    surfaces: tuple[str, ...] = row.get("surfaces", first.surfaces)
    grade = row["grade"].value if "grade" in row else first.grades[0]
    known(reading, row.at("driver"), "driver", driver, made.ids["driver"])
    for surface in surfaces:
        known(reading, row.at("surfaces"), "surface", surface, made.ids["surface"])
    gap = _gap(reading, row, made)
    size, sheet = row.get("size") or paper("A6"), row.get("sheet") or paper("A4")
    for key, given, now in (("size", size, "A6"), ("sheet", sheet, "A4")):
        if given.name != now:
            reading.not_yet(row.at(key), f"cards are made on {now} only; {given.name} is not made yet")
    if row.broken or gap is None or len(reading.faults) > before:
        return None
    works = {
        vehicle: all((driver, vehicle, surface, grade) in made.rows for surface in surfaces)
        for vehicle in made.ids["vehicle"]
    }
    roster = read_roster(reading, folder, row["roster"], works)
    if GAP_RULES[gap].per_length_s_per_m is not None:
        for vehicle in dict.fromkeys(r.vehicle for r in roster if made.lengths[r.vehicle] is None):
            reading.fault(
                row.at("gap"), f'the rule goes by length, and the vehicle "{vehicle}" states none', 'length = "16.5 m"',
                given=gap,
            )  # fmt: skip
    return Cards(size=size, sheet=sheet, roster=roster, driver=driver, surfaces=surfaces, grade=grade, gap=gap)


def _gap(reading: Reading, row: Row, made: Made) -> str | None:
    gap: str | None = row.get("gap")
    if gap is None:
        if "gap" in row.broken:
            return None
        gap = "gap/per-length" if made.distance_unit == "ft" else "gap/two-seconds"
        reading.warn(row.at("gap"), f'no following-gap rule is chosen; "{gap}" is used.')
    if gap not in GAP_RULES:
        reading.fault(
            row.at("gap"), "the catalogue has no such rule", listed(GAP_RULES), given=gap, near=near(gap, GAP_RULES)
        )
        return None
    return gap
