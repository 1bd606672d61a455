"""A publisher's own wording: words/<tag>.po in the edition's folder, laid over the built-in word lists."""

from __future__ import annotations

import io
import string
from collections.abc import Mapping
from dataclasses import dataclass
from pathlib import Path

from chartgen.edition.find import read_text
from chartgen.edition.reading import Reading, near
from chartgen.errors import EditionFaults
from chartgen.resources import templates

MASTER = "en-GB"


@dataclass(frozen=True, slots=True)
class _Entry:
    key: str
    english: str
    text: str
    fuzzy: bool


def own_words(reading: Reading, folder: Path) -> Mapping[str, Mapping[str, str]]:
    """Own wording by language tag, then word key. Unknown languages, keys and placeholders are faults."""
    files = sorted((folder / "words").glob("*.po"))
    if not files:
        return {}
    english = {entry.key: entry.english for entry in _entries(templates() / "words" / f"{MASTER}.po")}
    words: dict[str, Mapping[str, str]] = {}
    for file in files:
        shown = str(Path(reading.file).parent / "words" / file.name)
        if file.stem not in reading.languages:
            reading.fault("", "the file's language is not among languages.use", ", ".join(reading.languages),
                          given=file.stem, near=near(file.stem, reading.languages), file=shown)  # fmt: skip
            continue
        words[file.stem] = _checked(reading, file, shown, english)
    return words


def _checked(reading: Reading, file: Path, shown: str, english: Mapping[str, str]) -> Mapping[str, str]:
    from babel.messages.pofile import PoFileError  # noqa: PLC0415 - see _entries

    try:
        read_text(file, shown)
        entries = _entries(file)
    except EditionFaults as fault:
        reading.faults.extend(fault.faults)
        return {}
    except PoFileError as fault:
        reading.fault("", f"this is not a PO file: {fault}", "msgctxt, msgid and msgstr, each in quotes", file=shown)
        return {}
    good: dict[str, str] = {}
    for entry in entries:
        wrong = _wrong(entry, english)
        if wrong is not None:
            problem, allowed, guess = wrong
            reading.fault(entry.key, problem, allowed, given=entry.text, near=guess, file=shown)
        else:
            good[entry.key] = entry.text
    return good


def _wrong(entry: _Entry, english: Mapping[str, str]) -> tuple[str, str, str | None] | None:
    """Problem, what would be right and a near key; None where nothing is wrong."""
    if not entry.key:
        return "this entry has no word key", 'msgctxt "…" above its msgid', None
    if entry.key not in english:
        return "this word key is not known", "a key of the built-in word lists", near(entry.key, english)
    if entry.fuzzy:
        return "this entry is marked fuzzy", "a wording that is settled, without the mark", None
    if not entry.text:
        return "the wording is empty", "a wording, or no entry", None
    if _fields(entry.text) != _fields(english[entry.key]):
        wanted = ", ".join(f"{{{name}}}" for name in sorted(_fields(english[entry.key]))) or "no placeholder"
        return "the placeholders are not those of the English", wanted, None
    return None


def _entries(file: Path) -> list[_Entry]:
    # Only an edition with own wording needs it.
    from babel.messages.pofile import read_po  # noqa: PLC0415

    catalogue = read_po(io.BytesIO(file.read_bytes()), abort_invalid=True)
    return [_Entry(m.context or "", str(m.id), str(m.string or ""), m.fuzzy) for m in catalogue if m.id]


def _fields(text: str) -> set[str]:
    try:
        return {name for _, name, _, _ in string.Formatter().parse(text) if name is not None}
    except ValueError:
        return {"(not closed)"}
