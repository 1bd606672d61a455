"""The way through the front door: find the file, walk it, build the records, hold them against one another."""

from __future__ import annotations

import os
import re
from collections.abc import Callable, Sequence
from fractions import Fraction
from itertools import pairwise
from pathlib import Path
from typing import Any, TypeVar, cast

from chartgen.edition import parts, prints
from chartgen.edition.find import edition_file, read_text, read_toml
from chartgen.edition.measures import SPEED
from chartgen.edition.model import PARTS, Case, DistanceUnit, Edition, Rounding, SpeedUnit
from chartgen.edition.quantity import Quantity, factor
from chartgen.edition.reading import TAG_PATTERN, Reading, Row, listed, near
from chartgen.edition.spec import DISTANCE_NAMES, SPEED_NAMES
from chartgen.edition.walk import read_table
from chartgen.edition.wording import own_words
from chartgen.errors import EditionFaults
from chartgen.resources import templates

MOST_SPEEDS = 200
MOST_ROWS = 5000
FASTEST_MPS = 400 / 3.6
_SYSTEMS: dict[str, tuple[SpeedUnit, DistanceUnit]] = {
    "metric": ("km/h", "m"),
    "us": ("mph", "ft"),
    "uk": ("mph", "m"),
}
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
    speed_unit, distance_unit, also_unit = _units(reading, root)
    speeds = _speeds(reading, root, speed_unit)
    figures: Row = root.get("figures", Row("figures"))
    method = figures.get("method", "first-principles")
    rounding = _rounding(reading, figures, distance_unit, also_unit)
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
        speeds={float(s.number): _shown(s.number, speed_unit) for s in speeds},
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


# ---- units, speeds, rounding -------------------------------------------------------------------------------------


def _units(reading: Reading, root: Row) -> tuple[SpeedUnit | None, DistanceUnit | None, DistanceUnit | None]:
    row: Row = root.get("units", Row("units"))
    by_hand = [key for key in ("speed", "distance") if key in row]
    speed: SpeedUnit | None = None
    distance: DistanceUnit | None = None
    right = 'system = "uk", or both speed = "mph" and distance = "m"'
    if "system" in row and by_hand:
        reading.fault(
            row.at(by_hand[0]), "the units are given twice, by system and by hand", right, given=row[by_hand[0]]
        )
    elif "system" in row:
        speed, distance = _SYSTEMS[row["system"]]
    elif len(by_hand) == 2:
        speed = cast("SpeedUnit", SPEED_NAMES[row["speed"]])
        distance = cast("DistanceUnit", DISTANCE_NAMES[row["distance"]])
    elif "units" in root and not row.broken:
        reading.fault(row.at("system"), "the units of speed and distance are missing", right)
    also = cast("DistanceUnit", DISTANCE_NAMES[row["also"]]) if "also" in row else None
    if also is not None and also == distance:
        reading.fault(
            row.at("also"), "this is the printed distance unit already", "the other unit, or leave it out", given=also
        )
    return speed, distance, also


def _shown(number: Fraction, unit: str) -> str:
    return f"{float(number):g} {unit}"


def _speeds(reading: Reading, root: Row, unit: str | None) -> tuple[Quantity, ...]:
    row: Row = root.get("speeds", Row("speeds"))
    ends = [key for key in ("from", "to", "by") if key in row or key in row.broken]
    right = 'steps = ["20 mph", …], or from, to and by'
    if ("steps" in row or "steps" in row.broken) == bool(ends):
        if "speeds" in root:
            reading.fault(row.path, "the speeds are given twice" if ends else "there are no speeds", right)
        return ()
    if row.broken:
        return ()
    if len(ends) not in (0, 3):
        missing = next(key for key in ("from", "to", "by") if key not in row)
        reading.fault(row.at(missing), "from, to and by belong together", right)
        return ()
    for key in ends or ["steps"]:
        for i, speed in enumerate([row[key]] if ends else row[key], 1):
            _speed_is_sound(reading, row.at(key) if ends else f"{row.at(key)}[{i}]", speed, unit)
    if unit is None or any(f.key.startswith("speeds") for f in reading.faults):
        return ()
    return _stepped(reading, row, unit) if ends else _rising(reading, row)


def _speed_is_sound(reading: Reading, where: str, speed: Quantity, unit: str | None) -> None:
    given = _shown(speed.number, speed.unit)
    if speed.number <= 0:
        reading.fault(where, "a speed must be above 0", f'such as "30 {unit or "mph"}"', given=given)
    elif speed.value > FASTEST_MPS:
        reading.fault(where, "this speed is out of range", "up to 400 km/h (248 mph)", given=given)
    elif unit is not None and SPEED_NAMES[speed.unit] != unit:
        reading.fault(where, f"the edition's speeds are in {unit}", f'such as "30 {unit}"', given=given)


def _rising(reading: Reading, row: Row) -> tuple[Quantity, ...]:
    steps: tuple[Quantity, ...] = row["steps"]
    for i, (before, after) in enumerate(pairwise(steps), 2):
        if after.number == before.number:
            reading.fault(
                f"speeds.steps[{i}]",
                "this speed stands there twice",
                "each speed once",
                given=_shown(after.number, after.unit),
            )
        elif after.number < before.number:
            reading.fault(
                f"speeds.steps[{i}]",
                "the speeds do not rise",
                "from slow to fast",
                given=_shown(after.number, after.unit),
            )
    return steps


def _stepped(reading: Reading, row: Row, unit: str) -> tuple[Quantity, ...]:
    """from, to, by: exact, counted before any is made."""
    first, last, by = (row[key].number for key in ("from", "to", "by"))
    if last < first:
        reading.fault("speeds.to", "the last speed is below the first", "from slow to fast", given=_shown(last, unit))
        return ()
    steps = (last - first) / by
    if steps + 1 > MOST_SPEEDS:
        count = f"{int(steps) + 1:,}"
        reading.fault("speeds.by", f"these are {count} speeds", f"at most {MOST_SPEEDS}", given=_shown(by, unit))
        return ()
    if steps.denominator != 1:
        below = first + int(steps) * by
        right = f'"{_shown(below, unit)}" or "{_shown(below + by, unit)}"'
        reading.fault("speeds.to", "the last speed is not one of the steps", right, given=_shown(last, unit))
        return ()
    to_mps = factor(SPEED.units[unit], SPEED.inside)
    numbers = [first + i * by for i in range(int(steps) + 1)]
    return tuple(Quantity(n, unit, float(n * to_mps)) for n in numbers)


def _rounding(reading: Reading, figures: Row, unit: str | None, also: str | None) -> Rounding:
    row: Row = figures.get("rounding", Row("figures.rounding"))
    rule = row.get("rule", "up")
    rules = {part: rule.get(part, "up") if isinstance(rule, Row) else rule for part in PARTS}
    total = row.get("total", "sum-of-parts")
    if total == "controlled" and "up" in rules.values():
        reading.fault(
            row.at("total"),
            "parts that round up cannot be adjusted to a controlled total",
            'total = "sum-of-parts", or rule = "nearest"',
            given=total,
        )
    if "also_step" in row and also is None:
        reading.fault(row.at("also_step"), "there is no second distance unit", "units.also, or leave it out",
                      given=_shown(row["also_step"].number, row["also_step"].unit))  # fmt: skip
        also_step = 1.0
    else:
        also_step = _step(reading, row, "also_step", also)
    return Rounding(step=_step(reading, row, "step", unit), also_step=also_step, rules=rules, total=total)


def _step(reading: Reading, row: Row, key: str, unit: str | None) -> float:
    step: Quantity | None = row.get(key)
    if step is None or unit is None:
        return 1.0
    given = _shown(step.number, step.unit)
    if step.unit != unit:
        reading.fault(row.at(key), f"this distance is printed in {unit}", f'such as "1 {unit}"', given=given)
    elif not 0 < step.number <= 100:
        reading.fault(row.at(key), "this step is out of range", f'above 0, up to "100 {unit}"', given=given)
    return float(step.number)


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
