"""Headlines: a claim whose numbers are placeholders such as ``{stopping:70 mph, surface=wet}``, never typed."""

from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import dataclass, field

from chartgen.edition.measures import GRADE, SPEED, NotAQuantityError
from chartgen.edition.quantity import parse
from chartgen.edition.reading import Reading, listed, near

NAMES = ("speed", "reaction", "lag", "braking", "stopping")
OVERRIDES = ("driver", "vehicle", "surface", "grade")
PLACEHOLDER = re.compile(r"\{([^{}]*)\}")


@dataclass(frozen=True, slots=True, kw_only=True)
class Placeholder:
    """`text` as it stands in the headline, braces included; `speed` as given, in the edition's speed unit; `rows`
    overrides what the poster shows, by "driver", "vehicle" or "surface"; so does `grade` (a fraction), where stated."""

    text: str
    name: str
    speed: float
    speed_unit: str
    rows: Mapping[str, str] = field(default_factory=dict)
    grade: float | None = None


def placeholders(headline: str) -> tuple[Placeholder, ...]:
    """The placeholders of a headline that passed `check`, in order."""
    found = [_read(match[0], match[1]) for match in PLACEHOLDER.finditer(headline)]
    return tuple(item for item in found if isinstance(item, Placeholder))


@dataclass(frozen=True, slots=True)
class _Wrong:
    problem: str
    allowed: str
    given: str
    near: str | None = None


def _read(text: str, inside: str) -> Placeholder | _Wrong:
    head, *pairs = (piece.strip() for piece in inside.split(","))
    name, colon, speed = (piece.strip() for piece in head.partition(":"))
    if name not in NAMES:
        return _Wrong("this placeholder is not known", listed(NAMES), text, near(name, NAMES))
    if not colon:
        return _Wrong("the placeholder names no speed", f"{{{name}:{SPEED.example}}}", text)
    rows: dict[str, str] = {}
    for pair in pairs:
        key, equals, value = (piece.strip() for piece in pair.partition("="))
        if key not in OVERRIDES or not equals or not value or key in rows:
            allowed = f"after the speed: {', '.join(f'{known}=…' for known in OVERRIDES)}, each once"
            return _Wrong(f'"{pair}" picks no row', allowed, text, near(key, OVERRIDES))
        rows[key] = value
    try:
        quantity = parse(speed, SPEED)
        grade = parse(rows.pop("grade"), GRADE).value if "grade" in rows else None
    except NotAQuantityError as fault:
        return _Wrong(f"in this placeholder, {fault.problem}", fault.right, text, fault.near)
    return Placeholder(
        text=text, name=name, speed=float(quantity.number), speed_unit=quantity.unit, rows=rows, grade=grade
    )


def check(
    reading: Reading,
    where: str,
    headline: str,
    speeds: Mapping[float, str],
    speed_unit: str | None,
    ids: Mapping[str, tuple[str, ...]],
) -> tuple[Placeholder, ...]:
    """Hold one headline against the edition: `speeds` by value as written, `ids` by override key (an empty one is at
    fault itself, and nothing is held against it). Faults are noted."""
    rest = PLACEHOLDER.sub("", headline)
    if "{" in rest or "}" in rest:
        reading.fault(where, "a curly bracket stands alone", "placeholders such as {stopping:70 mph}", given=headline)
    elif digits := re.search(r"\d+(?:[.,]\d+)*", rest):
        reading.fault(
            where,
            f'the number "{digits[0]}" is typed; numbers in a headline come from the table',
            "a placeholder such as {stopping:70 mph} or {speed:70 mph}",
            given=headline,
        )
    good: list[Placeholder] = []
    for match in PLACEHOLDER.finditer(headline):
        item = _read(match[0], match[1])
        before = len(reading.faults)
        if isinstance(item, _Wrong):
            reading.fault(where, item.problem, item.allowed, given=item.given, near=item.near)
            continue
        if speeds and (item.speed_unit != speed_unit or item.speed not in speeds):
            reading.fault(
                where, "the placeholder's speed is not one of the edition's speeds", listed(list(speeds.values())),
                given=item.text,
            )  # fmt: skip
        for key, value in item.rows.items():
            if ids[key] and value not in ids[key]:
                reading.fault(
                    where, f"there is no {key} with this id", listed(ids[key]), given=item.text,
                    near=near(value, ids[key]),
                )  # fmt: skip
        if len(reading.faults) == before:
            good.append(item)
    return tuple(good)
