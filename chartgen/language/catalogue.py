"""Word lists: reading ``templates/words/<tag>.po``, once a tag.

msgctxt is the key, msgid the English of the master list (en-GB), msgstr the word. ``#.`` carries the context for
translators and the greatest length, ``# doubtful: reason`` what a native reader should look at first, ``# term: …``
where a term of the trade was confirmed. Two header fields are ours: ``X-Native-Reader`` ("none yet" or a name) and
``X-Back-Translated``.
"""

from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import dataclass
from functools import lru_cache
from io import BytesIO
from pathlib import Path

from babel.messages.pofile import PoFileError, read_po

from chartgen.errors import MachineFault
from chartgen.resources import templates

MASTER = "en-GB"
_PLACEHOLDER = re.compile(r"\{([a-z][a-z0-9_]*)\}")
_MAX_CHARS = re.compile(r"At most (\d+) characters")
_NO_READER = "none yet"


@dataclass(frozen=True, slots=True, kw_only=True)
class Entry:
    """One word or sentence of one list. `english` is the master's text it was translated from; `text` is "" where it is
    missing or marked fuzzy."""

    key: str
    english: str
    text: str
    context: str
    max_chars: int | None
    doubtful: str | None
    term: str | None


@dataclass(frozen=True, slots=True, kw_only=True)
class WordList:
    """One language's list, by key, in the order of the file."""

    tag: str
    entries: Mapping[str, Entry]
    native_reader: str | None
    """Who read the list as a native reader; None: nobody has yet."""
    back_translated: str | None
    """Who put it back into English without having seen the source; None: nobody has yet."""


def placeholders(text: str) -> frozenset[str]:
    """The names in braces of a word: ``"Slope: {grade}"`` has ``{"grade"}``."""
    return frozenset(_PLACEHOLDER.findall(text))


def drawn_length(text: str) -> int:
    """Characters of a word as it will stand in print: a placeholder counts as four ("23 m"), whatever its name."""
    return len(_PLACEHOLDER.sub("23 m", text))


def words_folder() -> Path:
    return templates() / "words"


def available() -> tuple[str, ...]:
    """Tags that have a word list, in order of the alphabet."""
    return tuple(sorted(path.stem for path in words_folder().glob("*.po")))


@lru_cache(maxsize=64)
def read_words(tag: str) -> WordList:
    """The list of `tag`, read once a process. Raises MachineFault where the file is missing or not a word list."""
    path = words_folder() / f"{tag}.po"
    try:
        return parse_words(tag, path.read_bytes())
    except OSError as error:
        problem = f"The word list {path.name} cannot be read: {error.strerror}."
        raise MachineFault(problem, "Install chartgen again.") from error


def parse_words(tag: str, data: bytes) -> WordList:
    """A PO file's bytes as a `WordList`. Raises MachineFault on a file that is broken or holds a key twice."""
    try:
        catalog = read_po(BytesIO(data), abort_invalid=True)
    except (PoFileError, ValueError) as error:
        problem = f"The word list {tag}.po is not a readable PO file: {error}."
        raise MachineFault(problem, "Restore the file.") from error
    entries: dict[str, Entry] = {}
    for message in catalog:
        if not message.id:
            continue
        key = message.context
        if not key or not isinstance(message.id, str) or not isinstance(message.string, str):
            problem = f"In {tag}.po the entry {message.id!r} has no msgctxt, or has plural forms."
            raise MachineFault(problem, "Give it one key and one text.")
        if key in entries:
            raise MachineFault(f"In {tag}.po the key {key!r} stands twice.", "Keep one of them.")
        text = "" if message.fuzzy else message.string
        entries[key] = _entry(key, message.id, text, message.auto_comments, message.user_comments)
    header = data.decode("utf-8").split("\n\nmsg", 1)[0].split("\n\n#", 1)[0]
    return WordList(
        tag=tag,
        entries=entries,
        native_reader=_named(header, "X-Native-Reader"),
        back_translated=_named(header, "X-Back-Translated"),
    )


def _entry(key: str, english: str, text: str, context: list[str], remarks: list[str]) -> Entry:
    about = " ".join(context)
    limit = _MAX_CHARS.search(about)
    return Entry(
        key=key,
        english=english,
        text=text,
        context=_MAX_CHARS.sub("", about).rstrip(" ."),
        max_chars=int(limit[1]) if limit else None,
        doubtful=_remark(remarks, "doubtful:"),
        term=_remark(remarks, "term:"),
    )


def _remark(remarks: list[str], label: str) -> str | None:
    for remark in remarks:
        if remark.startswith(label):
            return remark.removeprefix(label).strip()
    return None


def _named(header: str, field: str) -> str | None:
    # Babel drops header fields it does not know, so ours are read from the text.
    found = re.search(rf'^"{field}: (.*?)(?:\\n)?"$', header, re.MULTILINE)
    value = found[1].strip() if found else _NO_READER
    return None if value.lower().startswith(_NO_READER) else value
