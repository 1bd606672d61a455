"""Posters and cards: what is printed, held against the cases that exist."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from pathlib import Path

from chartgen.edition import headline
from chartgen.edition.cases import Combination, combination_text, known
from chartgen.edition.catalogue import GAP_RULES
from chartgen.edition.model import Cards, Case, Poster, Show
from chartgen.edition.paper import paper
from chartgen.edition.reading import Reading, Row, listed, near
from chartgen.edition.roster import read_roster


@dataclass(frozen=True, slots=True, kw_only=True)
class Made:
    """What the rest of the edition offers to a sheet. `speeds`: value -> as written; `ids` by "driver", "vehicle",
    "surface"."""

    speeds: Mapping[float, str]
    speed_unit: str | None
    distance_unit: str | None
    ids: Mapping[str, tuple[str, ...]]
    cases: tuple[Case, ...]
    rows: frozenset[Combination] | None
    """None where a case is at fault: then no combination is missed, and one mistake gives one message."""
    lengths: Mapping[str, float | None]
    """Length in m by vehicle id."""

    def first(self) -> Case:
        """What a sheet shows that does not say: the first of each list of the first case."""
        if self.cases:
            return self.cases[0]
        # No sound case: stand-ins, so that the rest of a sheet can be held against the edition all the same.
        return Case(drivers=self.ids["driver"], vehicles=self.ids["vehicle"], surfaces=self.ids["surface"])

    def has(self, combination: Combination) -> bool:
        return self.rows is None or combination in self.rows


# ---- posters -----------------------------------------------------------------------------------------------------


def poster(reading: Reading, row: Row, made: Made) -> Poster | None:
    """One [[poster]]; None where it does not hold together."""
    show = _show(reading, row, made)
    for tag, text in row.get("headline", {}).items():
        where = row.at(f"headline.{tag}")
        for item in headline.check(reading, where, text, made.speeds, made.speed_unit, made.ids):
            if show is not None:
                _row_exists(reading, where, show, item, made)
    if row.broken or show is None:
        return None
    read_from = row.get("read_from")
    return Poster(
        id=row["id"],
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
    first = made.first()
    before = len(reading.faults)
    drivers: tuple[str, ...] = given.get("driver", first.drivers[:1])
    vehicle: str = given.get("vehicle", next(iter(first.vehicles), ""))
    surface: str = given.get("surface", next(iter(first.surfaces), ""))
    grade = given["grade"].value if "grade" in given else first.grades[0]
    for kind, chosen in (("driver", drivers), ("vehicle", (vehicle,)), ("surface", (surface,))):
        for item in chosen if kind in given else ():
            known(reading, given.at(kind), kind, item, made.ids[kind])
    speeds = _speeds(reading, given, made)
    if len(reading.faults) > before:
        return None
    missing = [c for c in ((driver, vehicle, surface, grade) for driver in drivers) if not made.has(c)]
    for combination in missing:
        _no_row(reading, given.path, combination)
    return None if missing else Show(drivers=drivers, vehicle=vehicle, surface=surface, grade=grade, speeds=speeds)


def _speeds(reading: Reading, given: Row, made: Made) -> tuple[float, ...] | None:
    if "speeds" not in given or not made.speeds:
        return None
    values = []
    for number, quantity in enumerate(given["speeds"], 1):
        value = float(quantity.number)
        if quantity.unit != made.speed_unit or value not in made.speeds:
            reading.fault(
                f"{given.at('speeds')}[{number}]",
                "this is not one of the edition's speeds",
                listed(list(made.speeds.values())),
                given=quantity.text,
            )
        elif value in values:
            reading.fault(f"{given.at('speeds')}[{number}]", "this speed stands there twice", "each speed once")
        values.append(value)
    return tuple(sorted(values))


def _no_row(reading: Reading, where: str, combination: Combination) -> None:
    problem = f"no [[case]] has the combination {combination_text(combination)}"
    reading.fault(where, problem, "a case with all four of them")


def _row_exists(reading: Reading, where: str, show: Show, item: headline.Placeholder, made: Made) -> None:
    combination = (
        item.rows.get("driver", next(iter(show.drivers), "")),
        item.rows.get("vehicle", show.vehicle),
        item.rows.get("surface", show.surface),
        show.grade if item.grade is None else item.grade,
    )
    if not made.has(combination):
        _no_row(reading, where, combination)


# ---- cards -------------------------------------------------------------------------------------------------------


def cards(reading: Reading, row: Row, folder: Path, made: Made) -> Cards | None:
    """The [cards] section with its roster; None where it does not hold together."""
    first = made.first()
    before = len(reading.faults)
    driver: str = row.get("driver", next(iter(first.drivers), ""))
    surfaces: tuple[str, ...] = row.get("surfaces", first.surfaces)
    grade = row["grade"].value if "grade" in row else first.grades[0]
    if "driver" in row:
        known(reading, row.at("driver"), "driver", driver, made.ids["driver"])
    for number, surface in enumerate(row.get("surfaces", ()), 1):
        known(reading, f"{row.at('surfaces')}[{number}]", "surface", surface, made.ids["surface"])
    gap = _gap(reading, row, made)
    size, sheet = row.get("size") or paper("A6"), row.get("sheet") or paper("A4")
    for key, given, now in (("size", size, "A6"), ("sheet", sheet, "A4")):
        if given.name != now:
            reading.not_yet(row.at(key), f"cards are made on {now} only; {given.name} is not made yet")
    if not row.broken <= {"size", "sheet", "gap"} or len(reading.faults) > before + (gap is None):
        return None
    works = {
        vehicle: all(made.has((driver, vehicle, surface, grade)) for surface in surfaces)
        for vehicle in made.ids["vehicle"]
    }
    roster = read_roster(reading, folder, row["roster"], works)
    if gap is None:
        return None
    if GAP_RULES[gap].per_length_s_per_m is not None:
        for vehicle in dict.fromkeys(r.vehicle for r in roster if made.lengths.get(r.vehicle) is None):
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
