"""The JSON Schema of an edition file, for editors: generated from the same description that the walk reads by.

It checks names, shapes and choices while a publisher types; what only the whole edition shows (ids that exist, speeds
that rise, texts in every language) is left to `load`.
"""

from __future__ import annotations

import json
import re
from collections.abc import Callable
from typing import Any

from chartgen.edition.key import Bounds, Key
from chartgen.edition.measures import Measure
from chartgen.edition.paper import SIZES_MM
from chartgen.edition.reading import ID_PATTERN, TAG_PATTERN
from chartgen.edition.spec import TABLES

_Schema = dict[str, Any]
_NUMBER = r"[+-]?[0-9]+(\.[0-9]+)?"


def schema() -> _Schema:
    """The schema of a whole edition file (JSON Schema, draft 2020-12)."""
    return {
        "$schema": "https://json-schema.org/draft/2020-12/schema",
        "title": "An edition of stopping distances",
        **_table(""),
        "$defs": {name: _table(name) for name in TABLES if name},
    }


def schema_text() -> str:
    """The schema as the file for editors holds it."""
    return json.dumps(schema(), indent=2, ensure_ascii=False) + "\n"


def _table(name: str) -> _Schema:
    keys = {key: about for key, about in TABLES[name].items() if not about.not_yet}
    made: _Schema = {
        "type": "object",
        "additionalProperties": False,
        "properties": {key: {"description": about.says, **_key(about)} for key, about in keys.items()},
    }
    if needed := [key for key, about in keys.items() if about.needed]:
        made["required"] = needed
    return made


def _key(about: Key) -> _Schema:
    if about.form == "table":
        return _ref(about)
    if about.form == "tables":
        return _list(_ref(about), about)
    plain = _plain(about)
    return {"oneOf": [plain, _ref(about)]} if about.table else plain


def _ref(about: Key) -> _Schema:
    return {"$ref": f"#/$defs/{about.table}"}


def _plain(about: Key) -> _Schema:
    return _FORMS[about.form](about) if about.form in _FORMS else _text()


def _texts(_: Key) -> _Schema:
    by_tag = {"type": "object", "patternProperties": {_whole(TAG_PATTERN): _text()}, "additionalProperties": False}
    return {"oneOf": [_text(), by_tag]}


def _size(_: Key) -> _Schema:
    side = rf"{_NUMBER} (mm|cm|in)"
    return {"anyOf": [{"enum": list(SIZES_MM)}, {"type": "string", "pattern": _whole(f"{side} x {side}")}]}


def _text() -> _Schema:
    return {"type": "string", "minLength": 1}


def _list(items: _Schema, about: Key) -> _Schema:
    return {"type": "array", "items": items, "minItems": about.count[0], "maxItems": about.count[1]}


def _quantity(measure: Measure | None) -> _Schema:
    units = "|".join(re.escape(unit) for unit in measure.units) if measure else r"\S+"
    return {
        "type": "string",
        "pattern": _whole(f"{_NUMBER} ({units})"),
        "examples": [measure.example] if measure else [],
    }


def _number(bounds: Bounds | None) -> _Schema:
    if bounds is None:
        return {"type": "number"}
    return {"type": "number", "exclusiveMinimum" if bounds.above else "minimum": bounds.least, "maximum": bounds.most}


def _pairs(about: Key) -> _Schema:
    pair = {
        "type": "array",
        "prefixItems": [_quantity(about.measure), _number(about.bounds)],
        "minItems": 2,
        "maxItems": 2,
    }
    return _list(pair, about)


def _choice(about: Key) -> _Schema:
    return {"enum": [choice for choice in about.choices if choice not in about.later]}


def _whole(pattern: str) -> str:
    return f"^({pattern})$"


_FORMS: dict[str, Callable[[Key], _Schema]] = {
    "texts": _texts,
    "id": lambda _: {"type": "string", "pattern": _whole(ID_PATTERN)},
    "uses": lambda about: {"oneOf": [{"type": "string"}, _list({"type": "string"}, about)]},
    "tags": lambda about: _list({"type": "string", "pattern": _whole(TAG_PATTERN)}, about),
    "choice": _choice,
    "choices": lambda about: {"oneOf": [_choice(about), _list(_choice(about), about)]},
    "quantity": lambda about: _quantity(about.measure),
    "quantities": lambda about: _list(_quantity(about.measure), about),
    "number": lambda about: _number(about.bounds),
    "whole": lambda about: {**_number(about.bounds), "type": "integer"},
    "pairs": _pairs,
    "numbers": lambda about: _list(_number(about.bounds), about),
    "flag": lambda _: {"type": "boolean"},
    # TOML's own date; editors that check against a schema hold it as text.
    "date": lambda _: {"type": "string", "format": "date"},
    "size": _size,
}
"""Forms that are more than a text."""
