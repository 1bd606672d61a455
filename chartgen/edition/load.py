"""The way through the front door: find the file, walk it, build the records, hold them against one another."""

from __future__ import annotations

import os
import re
from collections.abc import Callable, Sequence
from pathlib import Path
from typing import Any, TypeVar, cast

from chartgen.edition import parts, prints, scales
from chartgen.edition.find import edition_file, read_text, read_toml
from chartgen.edition.model import Case, Edition
from chartgen.edition.reading import TAG_PATTERN, Reading, Row, listed, near
from chartgen.edition.walk import read_table
from chartgen.edition.wording import own_words
from chartgen.errors import EditionFaults
from chartgen.resources import templates

MOST_ROWS = 5000
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
    root = cast("Row", read_table(reading, raw, "", ""))
    head: Row = root.get("edition", Row("edition"))
    _known_languages(reading)
    _document_control(reading, head)
    speed_unit, distance_unit, also_unit = scales.units(reading, root)
    speeds = scales.speeds(reading, root, speed_unit)
    figures: Row = root.get("figures", Row("figures"))
    method = figures.get("method", "first-principles")
    rounding = scales.rounding(reading, figures, distance_unit, also_unit)
    drivers = _each(root, "driver", lambda row: parts.driver(reading, row))
    surfaces = _each(root, "surface", lambda row: parts.surface(reading, row, method))
    vehicles = _each(root, "vehicle", lambda row: parts.vehicle(reading, row, method, root["vehicle"]))
    for kind in ("driver", "surface", "vehicle", "poster"):
        parts.unique(reading, root.get(kind, []))
    ids = {
        kind: tuple(row["id"] for row in root.get(kind, []) if "id" in row) for kind in ("driver", "vehicle", "surface")
    }
    cases = _cases(reading, root, ids)
    _not_too_many(reading, cases, len(speeds))
    words = own_words(reading, folder)
    press: Row = root.get("press", Row("press"))
    for key in press:
        reading.not_yet(press.at(key), "the press edition (inks, bleed, marks, profile) is not made yet")
    if not cases or not speed_unit or not distance_unit or not speeds:
        return None
    made = prints.Made(
        speeds={float(s.number): scales.shown(s.number, speed_unit) for s in speeds},
        speed_unit=speed_unit,
        distance_unit=distance_unit,
        ids=ids,
        cases=cases,
        rows=frozenset(r for case in cases for r in _product(case)),
        lengths={row["id"]: row["length"].value if "length" in row else None for row in root["vehicle"] if "id" in row},
    )
    posters = [prints.poster(reading, row, i, made) for i, row in enumerate(root.get("poster", []), 1)]
    cards = prints.cards(reading, root["cards"], folder, made) if "cards" in root else None
    if reading.faults:
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
        drivers=drivers,
        surfaces=surfaces,
        vehicles=vehicles,
        cases=cases,
        posters=tuple(p for p in posters if p is not None),
        cards=cards,
        own_words=words,
        palette=head.get("palette", "gorse"),
        warnings=tuple(reading.warnings),
        unmade=tuple(reading.unmade),
    )


def _each(root: Row, kind: str, build: Callable[[Row], _T | None]) -> tuple[_T, ...]:
    built = [build(row) for row in root.get(kind, [])]
    return tuple(item for item in built if item is not None)


def _languages_first(reading: Reading, raw: dict[str, Any]) -> None:
    """The walk must know the languages and whether it is a draft before it reads any text."""
    edition, languages = raw.get("edition"), raw.get("languages")
    reading.draft = isinstance(edition, dict) and edition.get("status") == "draft"
    tags = languages.get("use") if isinstance(languages, dict) else None
    if isinstance(tags, list) and all(isinstance(tag, str) for tag in tags):
        reading.languages = tuple(dict.fromkeys(tags))


def _known_languages(reading: Reading) -> None:
    known = tuple(sorted(file.stem for file in (templates() / "words").glob("*.po")))
    for number, tag in enumerate(reading.languages, 1):
        if tag not in known and re.fullmatch(TAG_PATTERN, tag):
            reading.fault(
                f"languages.use[{number}]", "there is no word list for this language", listed(known), given=tag,
                near=near(tag, known),
            )  # fmt: skip


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


# ---- cases -------------------------------------------------------------------------------------------------------


def _cases(reading: Reading, root: Row, ids: dict[str, tuple[str, ...]]) -> tuple[Case, ...]:
    rows: Sequence[Row] = root.get("case", [])
    if not rows:
        if "case" in root.broken or not all(ids.values()):
            return ()
        return (Case(drivers=ids["driver"], vehicles=ids["vehicle"], surfaces=ids["surface"]),)
    cases: list[Case] = []
    seen: dict[tuple[str, str, str, float], str] = {}
    for row in rows:
        for kind in ("driver", "vehicle", "surface"):
            for number, given in enumerate(row.get(kind, ()), 1):
                if not prints.known(reading, f"{row.at(kind)}[{number}]", kind, given, ids[kind]):
                    row.broken.add(kind)
        if row.broken:
            continue
        grades = tuple(g.value for g in row["grade"]) if "grade" in row else (0.0,)
        case = Case(drivers=row["driver"], vehicles=row["vehicle"], surfaces=row["surface"], grades=grades)
        cases.append(case)
        _only_once(reading, row, case, seen)
    return tuple(cases)


def _product(case: Case) -> list[tuple[str, str, str, float]]:
    return [(d, v, s, g) for d in case.drivers for v in case.vehicles for s in case.surfaces for g in case.grades]


def _only_once(reading: Reading, row: Row, case: Case, seen: dict[tuple[str, str, str, float], str]) -> None:
    """A combination in two cases would stand in every table twice."""
    if len(case.drivers) * len(case.vehicles) * len(case.surfaces) * len(case.grades) > MOST_ROWS:
        return
    for combination in _product(case):
        if combination in seen:
            driver, vehicle, surface, grade = combination
            reading.fault(
                row.path,
                f"this combination stands in {seen[combination]} already",
                "each combination once",
                given=f"{driver}, {vehicle}, {surface}, {grade * 100:g} %",
            )
            return
        seen[combination] = row.path


def _not_too_many(reading: Reading, cases: Sequence[Case], speeds: int) -> None:
    rows = speeds * sum(len(c.drivers) * len(c.vehicles) * len(c.surfaces) * len(c.grades) for c in cases)
    if rows > MOST_ROWS:
        reading.fault(
            "case", f"the cases make {rows:,} rows", f"at most {MOST_ROWS:,} rows: fewer speeds or shorter lists"
        )
