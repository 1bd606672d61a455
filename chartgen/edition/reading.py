"""What is gathered while an edition is read, and the small words that messages about it are made of."""

from __future__ import annotations

import json
from collections.abc import Iterable, Mapping
from dataclasses import dataclass, field
from datetime import date, time
from difflib import get_close_matches
from typing import Any

from chartgen.errors import Fault

ID_PATTERN = r"[a-z0-9]([a-z0-9-]{0,62}[a-z0-9])?"
TAG_PATTERN = r"[a-z]{2,3}(-[A-Z][a-z]{3})?(-([A-Z]{2}|[0-9]{3}))?"


@dataclass(slots=True)
class Reading:
    """What is gathered while one edition is read."""

    file: str
    languages: tuple[str, ...] = ()
    unlisted: frozenset[str] = frozenset()
    """Languages without a word list: noted once, their texts are not missed as well."""
    draft: bool = False
    faults: list[Fault] = field(default_factory=list)
    warnings: list[str] = field(default_factory=list)
    unmade: list[str] = field(default_factory=list)

    def fault(
        self,
        key: str,
        problem: str,
        allowed: str = "",
        *,
        given: object = None,
        near: str | None = None,
        file: str | None = None,
    ) -> None:
        """Note a fault; `given` is the value as it was read, None where there is none."""
        shown = None if given is None else as_written(given)
        self.faults.append(Fault(file or self.file, key, problem, allowed, shown, near))

    def missing_text(self, key: str, tag: str) -> None:
        """A text is not there in one of the edition's languages: a draft may miss it, nothing else may."""
        if tag in self.unlisted:
            return
        if self.draft:
            self.warn(key, "the text in this language is missing; only a draft may miss it.")
        else:
            self.fault(key, "the text in this language is missing; only a draft may miss it", f'{tag} = "…"')

    def warn(self, key: str, sentence: str) -> None:
        self.warnings.append(f"{key}: {sentence}")

    def not_yet(self, key: str, sentence: str) -> None:
        self.unmade.append(f"{key}: {sentence}")


class Row(dict[str, Any]):
    """The values of one table that passed. `path` is its key path; `broken` the keys that did not pass."""

    def __init__(self, path: str) -> None:
        super().__init__()
        self.path = path
        self.broken: set[str] = set()

    def at(self, key: str) -> str:
        return f"{self.path}.{key}" if self.path else key


def as_written(value: object) -> str:
    """A value as it stands in the file, shortened to what fits a line."""
    if isinstance(value, bool):
        shown = str(value).lower()
    elif isinstance(value, str):
        shown = json.dumps(value, ensure_ascii=False)
    elif isinstance(value, (date, time)):
        shown = value.isoformat()
    elif isinstance(value, Mapping):
        shown = "{ " + ", ".join(f"{k} = {as_written(v)}" for k, v in value.items()) + " }" if value else "{}"
    elif isinstance(value, list):
        shown = "[" + ", ".join(as_written(v) for v in value[:8]) + (", …" if len(value) > 8 else "") + "]"
    else:
        shown = {"Infinity": "inf", "-Infinity": "-inf", "NaN": "nan"}.get(str(value), str(value))
    return shown if len(shown) <= 80 else shown[:78] + " …"


def near(word: str, names: Iterable[str]) -> str | None:
    """The one name that `word` is most likely a slip of, or None."""
    by_lower = {name.lower(): name for name in names}
    close = get_close_matches(word.lower(), by_lower, n=1, cutoff=0.6)
    return by_lower[close[0]] if close else None


def listed(names: Iterable[str], most: int = 12) -> str:
    """ "a, b or c"; of a list longer than `most` the first ones."""
    words = list(names)
    if len(words) > most:
        return ", ".join(words[:most]) + f" … ({len(words)} in all)"
    return " or ".join(filter(None, [", ".join(words[:-1]), *words[-1:]]))
