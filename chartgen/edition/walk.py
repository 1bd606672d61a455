"""The walk through a file that has been read: each table against its description, every fault noted, none raised.

A value that does not pass is noted and left out of what comes back, so that one mistake gives one message.
"""

from __future__ import annotations

import re
from collections.abc import Callable, Sequence
from dataclasses import replace
from datetime import date, datetime
from decimal import Decimal
from math import inf, isfinite
from typing import Any

from chartgen.edition.key import Bounds, Key
from chartgen.edition.measures import Measure, NotAQuantityError
from chartgen.edition.model import Paper, Text
from chartgen.edition.paper import paper
from chartgen.edition.quantity import Quantity, parse
from chartgen.edition.reading import ID_PATTERN, TAG_PATTERN, Reading, Row, as_written, listed, near
from chartgen.edition.spec import TABLES

LONGEST_TEXT = 600
PAIRS = '[["30 km/h", 0.62], ["100 km/h", 0.45]]'
"""How a table of two columns is written."""
_A_TEXT = '"…"'
_WRITTEN = {
    "date": "2026-11-02", "tags": '["en-GB", "cy"]', "uses": '["…", "…"]', "pairs": PAIRS, "flag": "true or false",
}  # fmt: skip
"""Examples of the forms that are written in one way."""


def read_table(reading: Reading, raw: object, path: str, name: str) -> Row | None:
    """Read `raw` as the table `name` of the description; None where it is no table at all."""
    if not isinstance(raw, dict):
        reading.fault(path, "a table is needed here", "key = value pairs", given=raw)
        return None
    keys = TABLES[name]
    row = Row(path)
    meant = {key: near(key, [k for k in keys if k not in raw]) for key in raw if key not in keys}
    for key, guess in meant.items():
        reading.fault(row.at(key), "this key is not known", listed(keys, most=30), given=raw[key], near=guess)
        if guess is not None:
            # What is meant is there, in another spelling: not missing.
            row.broken.add(guess)
    excused = any(keys[key].not_yet for key in raw if key in keys)
    for key, about in keys.items():
        if key in raw:
            _read_key(reading, row, key, about, raw[key])
        elif about.needed and (excused or key in meant.values()):
            # Its absence follows from a fault that is noted already.
            row.broken.add(key)
        elif about.needed:
            row.broken.add(key)
            reading.fault(row.at(key), "this is needed and missing", example(key, about, reading))
    return row


def _read_key(reading: Reading, row: Row, key: str, about: Key, raw: object) -> None:
    where = row.at(key)
    before = len(reading.faults)
    if about.not_yet:
        reading.fault(where, f"not yet: {about.not_yet}", "leave it out", given=raw)
    else:
        value = _read_value(reading, where, about, raw)
        sound = len(reading.faults) == before
        # Tables come back with what is sound in them: others refer to their ids, and one mistake gives one message.
        if value is not None and (sound or isinstance(value, Row) or about.form == "tables"):
            row[key] = value
        if value is not None and sound:
            return
    row.broken.add(key)


def _read_value(reading: Reading, where: str, about: Key, raw: object) -> Any:
    if about.as_list and isinstance(raw, list):
        reading.fault(where, "a list stands in a table of its own here", about.as_list, given=raw)
        return None
    if about.form == "table" or (about.table and about.form != "tables" and isinstance(raw, dict)):
        return read_table(reading, raw, where, about.table)
    return _FORMS[about.form](reading, where, about, raw)


def example(key: str, about: Key, reading: Reading) -> str:
    """How the key is written, for a message."""
    match about.form:
        case "texts":
            tags = ", ".join(f'{tag} = "…"' for tag in reading.languages or ("en-GB",))
            return f"{key} = {{ {tags} }}"
        case "choice":
            return listed(about.choices)
        case "quantity" | "quantities" if about.measure:
            shown = f'"{about.measure.example}"'
            return f"{key} = {shown}" if about.form == "quantity" else f"{key} = [{shown}, …]"
        case "table":
            return f"a section [{key}]"
        case "tables":
            return f"one section [[{key}]] or more"
        case "number" | "whole":
            return _number_says(about)
        case _:
            return f"{key} = {_WRITTEN.get(about.form, _A_TEXT)}"


# ---- one function a form -----------------------------------------------------------------------------------------


def _text(reading: Reading, where: str, _about: Key, raw: object) -> str | None:
    if not isinstance(raw, str):
        right = f'in quotes: "{as_written(raw)}"' if isinstance(raw, (int, Decimal, date)) else 'a text in quotes: "…"'
        reading.fault(where, "a text is needed here", right, given=raw)
        return None
    if not raw.strip():
        reading.fault(where, "the text is empty", "a text, or leave the key out", given=raw)
    elif len(raw) > LONGEST_TEXT:
        reading.fault(where, f"the text has {len(raw)} characters", f"at most {LONGEST_TEXT} characters", given=raw)
    elif any(ord(c) < 32 or 0x7F <= ord(c) < 0xA0 or c in "\u2028\u2029\ufeff" for c in raw):
        reading.fault(where, "the text has line breaks or control characters", "one line of text", given=raw)
    else:
        return raw
    return None


def _texts(reading: Reading, where: str, about: Key, raw: object) -> Text | None:
    tags = reading.languages
    if isinstance(raw, str) and len(tags) == 1:
        one = _text(reading, where, about, raw)
        return None if one is None else {tags[0]: one}
    if not isinstance(raw, dict):
        shown = raw if isinstance(raw, str) else "…"
        right = ", ".join(f'{tag} = "{shown if i == 0 else "…"}"' for i, tag in enumerate(tags or ("en-GB",)))
        reading.fault(where, "a text for each language is needed here", f"{{ {right} }}", given=raw)
        return None
    texts: dict[str, str] = {}
    for tag, text in raw.items():
        if tags and tag not in tags:
            reading.fault(
                f"{where}.{tag}",
                "this language is not among languages.use",
                listed(tags),
                given=text,
                near=near(tag, tags),
            )
        elif (read := _text(reading, f"{where}.{tag}", about, text)) is not None:
            texts[tag] = read
    for tag in tags:
        if tag not in raw:
            reading.missing_text(f"{where}.{tag}", tag)
    if reading.draft and not raw:
        right = example(where.rsplit(".", maxsplit=1)[-1], about, reading)
        reading.fault(where, "there is no text in any language", right, given=raw)
    return {tag: texts[tag] for tag in tags if tag in texts} or None


def _id(reading: Reading, where: str, _about: Key, raw: object) -> str | None:
    if isinstance(raw, str) and re.fullmatch(ID_PATTERN, raw):
        return raw
    mended = re.sub(r"[^a-z0-9]+", "-", raw.lower()).strip("-")[:64].strip("-") if isinstance(raw, str) else ""
    right = "small letters a to z, digits and hyphens, at most 64"
    reading.fault(where, "this is not an id", right + (f': "{mended}"' if mended else ""), given=raw)
    return None


def _use(reading: Reading, where: str, _about: Key, raw: object) -> str | None:
    if isinstance(raw, str):
        return raw
    reading.fault(where, "one id is needed here", 'an id in quotes: "…"', given=raw)
    return None


def _uses(reading: Reading, where: str, about: Key, raw: object) -> tuple[str, ...] | None:
    items = [raw] if isinstance(raw, str) else raw
    if not isinstance(items, list) or not all(isinstance(i, str) for i in items):
        reading.fault(where, "a list of ids is needed here", '["…", "…"]', given=raw)
        return None
    if not _counted(reading, where, about, items, raw):
        return None
    for number, item in enumerate(items, 1):
        if item in items[: number - 1]:
            reading.fault(f"{where}[{number}]", "this id stands in the list twice", "each id once", given=item)
    return tuple(items)


def _counted(reading: Reading, where: str, about: Key, items: Sequence[object], raw: object) -> bool:
    least, most = about.count
    if least <= len(items) <= most:
        return True
    wanted = str(least) if least == most else f"{least} to {most}"
    entries = "1 entry" if len(items) == 1 else f"{len(items)} entries"
    reading.fault(where, f"the list has {entries}", f"{wanted} entries", given=raw)
    return False


def _choice(reading: Reading, where: str, about: Key, raw: object) -> str | None:
    if isinstance(raw, str) and raw in about.choices:
        if raw in about.later:
            now = [c for c in about.choices if c not in about.later]
            reading.fault(where, f'not yet: "{raw}" is not made yet', listed(now), given=raw)
            return None
        return raw
    guess = about.meant.get(raw.lower()) or near(raw, about.choices) if isinstance(raw, str) else None
    reading.fault(where, "this is not one of the choices", listed(about.choices), given=raw, near=guess)
    return None


def _choices(reading: Reading, where: str, about: Key, raw: object) -> tuple[str, ...] | None:
    items = [raw] if isinstance(raw, str) else raw
    if not isinstance(items, list):
        reading.fault(where, "a list is needed here", f'["{about.choices[0]}", …]', given=raw)
        return None
    if not _counted(reading, where, about, items, raw):
        return None
    read = [_choice(reading, f"{where}[{i}]", about, item) for i, item in enumerate(items, 1)]
    for number, item in enumerate(items, 1):
        if item in items[: number - 1]:
            reading.fault(f"{where}[{number}]", "this stands in the list twice", "each one once", given=item)
    return tuple(item for item in read if item is not None)


def _quantity(reading: Reading, where: str, about: Key, raw: object) -> Quantity | None:
    measure = _measure(about)
    if not isinstance(raw, str):
        if isinstance(raw, (int, Decimal)) and not isinstance(raw, bool):
            units = listed([f'"{raw} {unit}"' for unit in measure.shown_units()])
            reading.fault(where, "a bare number has no unit", f"number and unit in quotes: {units}", given=raw)
        else:
            reading.fault(where, f"{measure.name} is needed here", f'"{measure.example}"', given=raw)
        return None
    try:
        read = parse(raw, measure)
    except NotAQuantityError as fault:
        reading.fault(where, fault.problem, fault.right, given=raw, near=fault.near)
        return None
    return read if within(reading, where, about.bounds, read.value, raw) else None


def _measure(about: Key) -> Measure:
    if about.measure is None:
        raise TypeError(f"a quantity without a measure: {about.says}")
    return about.measure


def _quantities(reading: Reading, where: str, about: Key, raw: object) -> tuple[Quantity, ...] | None:
    if not isinstance(raw, list):
        reading.fault(where, "a list is needed here", f'["{_measure(about).example}", …]', given=raw)
        return None
    if not _counted(reading, where, about, raw, raw):
        return None
    read = [_quantity(reading, f"{where}[{i}]", about, item) for i, item in enumerate(raw, 1)]
    return tuple(item for item in read if item is not None)


def _number(reading: Reading, where: str, about: Key, raw: object) -> float | None:
    if isinstance(raw, bool) or not isinstance(raw, (int, Decimal)):
        right = "a number without quotes"
        if isinstance(raw, str) and re.fullmatch(r"[0-9]+[.,][0-9]+", raw):
            right += ": " + raw.replace(",", ".")
        reading.fault(where, "a number is needed here", right, given=raw)
        return None
    # A whole number may be too long for a float, where a decimal becomes infinite.
    value = inf if isinstance(raw, int) and raw.bit_length() > 300 else float(raw)
    if not isfinite(value):
        reading.fault(where, "this is not a number", _number_says(about), given=raw)
        return None
    return value if within(reading, where, about.bounds, value, raw) else None


def _whole(reading: Reading, where: str, about: Key, raw: object) -> int | None:
    if isinstance(raw, bool) or not isinstance(raw, int):
        reading.fault(where, "a whole number is needed here", about.bounds.says if about.bounds else "4096", given=raw)
        return None
    return raw if within(reading, where, about.bounds, raw, raw) else None


def _number_says(about: Key) -> str:
    return f"a number {about.bounds.says}" if about.bounds else "a number"


def _numbers(reading: Reading, where: str, about: Key, raw: object) -> tuple[float, ...] | None:
    if not isinstance(raw, list):
        reading.fault(where, "a list of numbers is needed here", "[0.60, 0.80]", given=raw)
        return None
    if not _counted(reading, where, about, raw, raw):
        return None
    read = [_number(reading, f"{where}[{i}]", about, item) for i, item in enumerate(raw, 1)]
    return tuple(item for item in read if item is not None)


def _pairs(reading: Reading, where: str, about: Key, raw: object) -> tuple[tuple[Quantity, float], ...] | None:
    if not isinstance(raw, list):
        reading.fault(where, "pairs of speed and friction are needed here", PAIRS, given=raw)
        return None
    if not _counted(reading, where, about, raw, raw):
        return None
    read: list[tuple[Quantity, float]] = []
    for i, item in enumerate(raw, 1):
        at = f"{where}[{i}]"
        if not isinstance(item, list) or len(item) != 2:
            cells = f"a cell is missing: the row has {len(item)}" if isinstance(item, list) and len(item) < 2 else (
                "this is not one pair of speed and friction"
            )  # fmt: skip
            reading.fault(at, cells, 'two cells: ["30 km/h", 0.62]', given=item)
            continue
        speed = _quantity(reading, f"{at}[1]", replace(about, bounds=None), item[0])
        friction = _number(reading, f"{at}[2]", about, item[1])
        if speed is not None and friction is not None:
            read.append((speed, friction))
    return tuple(read)


def within(reading: Reading, where: str, bounds: Bounds | None, value: float, raw: object) -> bool:
    """Hold `value` against what is accepted (a fault) and what is usual (a warning)."""
    if bounds is None:
        return True
    if bounds.end_says and value == bounds.least:
        reading.fault(where, bounds.end_says, bounds.says, given=raw)
        return False
    if value < bounds.least or value > bounds.most or (bounds.above and value <= bounds.least):
        reading.fault(where, "this is out of range", bounds.says, given=raw)
        return False
    if bounds.usual and not bounds.usual[0] <= value <= bounds.usual[1]:
        reading.warn(where, f"{as_written(raw)} is accepted but unusual; usual is {bounds.usual_says}.")
    return True


def _flag(reading: Reading, where: str, _about: Key, raw: object) -> bool | None:
    if isinstance(raw, bool):
        return raw
    reading.fault(where, "yes or no is needed here", "true or false, without quotes", given=raw)
    return None


def _date(reading: Reading, where: str, _about: Key, raw: object) -> date | None:
    if isinstance(raw, date) and not isinstance(raw, datetime):
        return raw
    right = "year-month-day without quotes: 2026-11-02"
    if isinstance(raw, datetime):
        right = f"the day alone, without quotes: {raw.date().isoformat()}"
    elif isinstance(raw, str) and re.fullmatch(r"[0-9]{4}-[0-9]{2}-[0-9]{2}", raw):
        right = f"without quotes: {raw}"
    reading.fault(where, "a date is needed here", right, given=raw)
    return None


def _tags(reading: Reading, where: str, about: Key, raw: object) -> tuple[str, ...] | None:
    tags = _uses(reading, where, about, raw)
    for number, tag in enumerate(tags or (), 1):
        if not re.fullmatch(TAG_PATTERN, tag):
            reading.fault(
                f"{where}[{number}]", "this is not a language tag", 'such as "en-GB", "cy" or "ar"', given=tag
            )
    return tags


def _size(reading: Reading, where: str, _about: Key, raw: object) -> Paper | None:
    if not isinstance(raw, str):
        reading.fault(where, "a paper size is needed here", '"A3" or "600 mm x 900 mm"', given=raw)
        return None
    try:
        return paper(raw)
    except NotAQuantityError as fault:
        reading.fault(where, fault.problem, fault.right, given=raw, near=fault.near)
        return None


def _tables(reading: Reading, where: str, about: Key, raw: object) -> list[Row] | None:
    if isinstance(raw, dict):
        reading.fault(where, "the section has single brackets", f"[[{where}]]", given=None)
        return None
    if not isinstance(raw, list) or not raw:
        reading.fault(where, "sections are needed here", f"[[{where}]]", given=raw)
        return None
    if not _counted(reading, where, about, raw, None):
        return None
    rows = [read_table(reading, item, f"{where}[{i}]", about.table) for i, item in enumerate(raw, 1)]
    return [row for row in rows if row is not None]


_FORMS: dict[str, Callable[[Reading, str, Key, object], Any]] = {
    "text": _text, "texts": _texts, "id": _id, "use": _use, "uses": _uses, "choice": _choice, "quantity": _quantity,
    "quantities": _quantities, "number": _number, "numbers": _numbers, "flag": _flag, "date": _date, "tags": _tags,
    "size": _size, "tables": _tables, "pairs": _pairs, "choices": _choices, "whole": _whole,
}  # fmt: skip
