"""The way through the front door: find the file, walk it, build the records, hold them against one another."""

from __future__ import annotations

import os
import re
from collections.abc import Iterable, Sequence
from math import nan
from pathlib import Path
from typing import Any, TypeVar, cast

from chartgen.edition import cases as case_lists
from chartgen.edition import drivers as driver_parts
from chartgen.edition import parts, prints, scales
from chartgen.edition import questions as asked
from chartgen.edition import surfaces as surface_parts
from chartgen.edition import vehicles as vehicle_parts
from chartgen.edition.adopt import adopted
from chartgen.edition.find import edition_file, read_text, read_toml
from chartgen.edition.limits import limits as speed_limits
from chartgen.edition.methods import ADOPTED, FIRST_PRINCIPLES
from chartgen.edition.model import Adopted, Edition, Method
from chartgen.edition.previous import previous
from chartgen.edition.reading import TAG_PATTERN, Reading, Row, listed, near
from chartgen.edition.walk import read_table
from chartgen.edition.wording import own_words
from chartgen.errors import EditionFaults
from chartgen.resources import templates

_T = TypeVar("_T")


def load_edition(path: str | os.PathLike[str]) -> Edition:
    """The edition that `path` means: a folder holding edition.toml, that file, or a name under site_config/.

    Raises EditionFaults with everything that is wrong at once, CommandFault where there is no such edition,
    MachineFault where a file cannot be read.
    """
    file = edition_file(path)
    shown = str(file)
    raw = read_toml(read_text(file, shown), shown)
    reading = Reading(file=shown)
    edition = _edition(reading, raw, file.parent)
    if reading.faults or edition is None:
        raise EditionFaults(tuple(reading.faults))
    return edition


def _edition(reading: Reading, raw: dict[str, Any], folder: Path) -> Edition | None:
    _languages_first(reading, raw)
    _known_languages(reading)
    root = cast("Row", read_table(reading, raw, "", ""))
    head: Row = root.get("edition", Row("edition"))
    _document_control(reading, head)
    speed_unit, distance_unit, also_unit = scales.units(reading, root)
    speeds = scales.speeds(reading, root, speed_unit)
    figures: Row = root.get("figures", Row("figures"))
    adopts = "adopt" in figures or "adopt" in figures.broken
    method: Method = ADOPTED if adopts else figures.get("method", FIRST_PRINCIPLES)
    rounding = scales.rounding(reading, figures, distance_unit, also_unit)
    drivers = [driver_parts.driver(reading, row, method) for row in root.get("driver", [])]
    fastest = speeds[-1] if speeds else None
    surfaces = [surface_parts.surface(reading, row, method, fastest) for row in root.get("surface", [])]
    vehicles = [vehicle_parts.vehicle(reading, row, method, root["vehicle"]) for row in root.get("vehicle", [])]
    for number, row in enumerate(root.get("poster", []), 1):
        if "id" not in row.broken:
            row.setdefault("id", f"poster-{number}")
    for kind in ("driver", "surface", "vehicle", "poster"):
        parts.unique(reading, root.get(kind, []))
    ids = {kind: _ids(root.get(kind, [])) for kind in ("driver", "vehicle", "surface")}
    cases = case_lists.cases(reading, root, ids)
    case_lists.level(reading, root, method)
    few_enough = case_lists.few_enough(reading, cases, max(len(speeds), 1))
    words = own_words(reading, folder)
    press: Row = root.get("press", Row("press"))
    for key in press:
        reading.not_yet(press.at(key), "the press edition (inks, bleed, marks, profile) is not made yet")
    made = prints.Made(
        speeds={float(s.number): s.text for s in speeds},
        speed_unit=speed_unit,
        distance_unit=distance_unit,
        ids=ids,
        cases=cases,
        rows=frozenset(r for c in cases for r in case_lists.combinations(c)) if cases and few_enough else None,
        # The length of a vehicle that is at fault is not missed as well.
        lengths={
            row["id"]: nan if vehicle is None else vehicle.whole_length_m
            for row, vehicle in zip(root.get("vehicle", []), vehicles, strict=True)
            if "id" in row
        },
    )
    questions = asked.questions(reading, root.get("questions", Row("questions")), made, method)
    spread = asked.spread(reading, figures.get("spread"), method, drivers, surfaces, made)
    so_far = len(reading.faults)
    table = adopted(reading, figures, folder, made)
    table_is_sound = len(reading.faults) == so_far
    if table is not None:
        scales.rounding_is_used(reading, figures, table.distance_unit, distance_unit, also_unit)
    before = previous(reading, head, folder, speed_unit, distance_unit)
    limits = speed_limits(reading, root.get("limit", []), speed_unit, head.get("issued"))
    posters = _there(prints.poster(reading, row, made) for row in root.get("poster", []))
    cards = prints.cards(reading, root["cards"], folder, made) if "cards" in root else None
    if table_is_sound:  # a cell that is wrong is said already, and its lack is no second fault
        _sheets_need_parts(reading, root, table)
    if reading.faults or speed_unit is None or distance_unit is None:
        return None
    settings: Row = root["languages"]
    return Edition(
        id=head["id"],
        file=reading.file,
        status=head["status"],
        title=head["title"],
        publisher=head["publisher"],
        web_address=head.get("web_address"),
        reference=head["reference"],
        issue=head["issue"],
        issued=head["issued"],
        review_by=head.get("review_by"),
        owner=head.get("owner", ""),
        approver=head.get("approver", ""),
        licence=head.get("licence", ""),
        languages=reading.languages,
        emphasis=settings.get("emphasis", "equal"),
        unit_style=settings.get("units", "si"),
        speed_unit=speed_unit,
        distance_unit=distance_unit,
        also_unit=also_unit,
        speeds=tuple(float(s.number) for s in speeds),
        speeds_mps=tuple(s.value for s in speeds),
        method=method,
        rounding=rounding,
        drivers=_there(drivers),
        surfaces=_there(surfaces),
        vehicles=_there(vehicles),
        cases=cases,
        posters=posters,
        cards=cards,
        own_words=words,
        palette=head.get("palette", "gorse"),
        warnings=tuple(reading.warnings),
        unmade=tuple(reading.unmade),
        questions=questions,
        spread=spread,
        limits=limits,
        adopted=table,
        previous=before,
        compare=figures.get("compare", True),
    )


def _sheets_need_parts(reading: Reading, root: Row, table: Adopted | None) -> None:
    """A table of totals alone goes onto pages and into data, but not onto sheets, which are drawn of parts."""
    if table is None or all(row.reaction is not None and row.braking is not None for row in table.rows):
        return
    for row in (*root.get("poster", []), *([root["cards"]] if "cards" in root else [])):
        reading.fault(
            row.path,
            f"sheets are drawn of reaction and braking, and {table.file} gives totals alone",
            f"reaction and braking in {table.file}, or leave the sheet out",
        )


def _ids(rows: Sequence[Row]) -> tuple[str, ...]:
    """The ids there are; none where one is not sound, so that what refers to it is not faulted for its sake."""
    return tuple(dict.fromkeys(row["id"] for row in rows)) if all("id" in row for row in rows) else ()


def _there(items: Iterable[_T | None]) -> tuple[_T, ...]:
    return tuple(item for item in items if item is not None)


def _languages_first(reading: Reading, raw: dict[str, Any]) -> None:
    """The walk must know the languages and whether it is a draft before it reads any text."""
    edition, languages = raw.get("edition"), raw.get("languages")
    reading.draft = isinstance(edition, dict) and edition.get("status") == "draft"
    tags = languages.get("use") if isinstance(languages, dict) else None
    if isinstance(tags, list) and all(isinstance(tag, str) for tag in tags):
        reading.languages = tuple(dict.fromkeys(tags))


def _known_languages(reading: Reading) -> None:
    known = tuple(sorted(file.stem for file in (templates() / "words").glob("*.po")))
    reading.unlisted = frozenset(reading.languages) - frozenset(known)
    for number, tag in enumerate(reading.languages, 1):
        if tag in reading.unlisted and re.fullmatch(TAG_PATTERN, tag):
            where, problem = f"languages.use[{number}]", "there is no word list for this language"
            reading.fault(where, problem, listed(known), given=tag, near=near(tag, known))


def _document_control(reading: Reading, head: Row) -> None:
    if "issued" in head and "review_by" in head and head["review_by"] < head["issued"]:
        reading.fault(
            head.at("review_by"),
            f"the review is due before the issue of {head['issued'].isoformat()}",
            "a date on or after edition.issued",
            given=head["review_by"],
        )
    if "web_address" in head and not head["web_address"].startswith(("https://", "http://")):
        reading.fault(head.at("web_address"), "this is not a web address", '"https://…"', given=head["web_address"])
    if head.get("status") == "controlled":
        for key in ("review_by", "owner", "approver"):
            if key not in head and key not in head.broken:
                right = "review_by = 2027-11-02" if key == "review_by" else f'{key} = "…"'
                reading.fault(head.at(key), "a controlled edition needs this", right)
