"""A publisher's own wording: words/<tag>.po in the edition's folder, laid over the built-in word lists."""

from __future__ import annotations

import io
import string
from collections.abc import Mapping
from pathlib import Path

from chartgen.edition.find import read_text
from chartgen.edition.reading import Reading, near
from chartgen.errors import EditionFaults
from chartgen.resources import templates

MASTER = "en-GB"


def own_words(reading: Reading, folder: Path) -> Mapping[str, Mapping[str, str]]:
    """Own wording by language tag, then word key. Unknown languages, keys and placeholders are faults."""
    files = sorted((folder / "words").glob("*.po"))
    if not files:
        return {}
    english = _entries(templates() / "words" / f"{MASTER}.po")
    words: dict[str, Mapping[str, str]] = {}
    for file in files:
        shown = str(Path(reading.file).parent / "words" / file.name)
        if file.stem not in reading.languages:
            reading.fault("", "the file's language is not among languages.use", ", ".join(reading.languages),
                          given=file.stem, near=near(file.stem, reading.languages), file=shown)  # fmt: skip
            continue
        words[file.stem] = _checked(reading, file, shown, english)
    return words


def _checked(reading: Reading, file: Path, shown: str, english: Mapping[str, tuple[str, str]]) -> Mapping[str, str]:
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
    for key, (_, text) in entries.items():
        if key not in english:
            reading.fault(key, "this word key is not known", "a key of the built-in word lists",
                          given=text, near=near(key, english), file=shown)  # fmt: skip
        elif _fields(text) != _fields(english[key][0]):
            wanted = ", ".join(f"{{{name}}}" for name in sorted(_fields(english[key][0]))) or "no placeholder"
            reading.fault(key, "the placeholders are not those of the English", wanted, given=text, file=shown)
        elif text:
            good[key] = text
    return good


def _entries(file: Path) -> dict[str, tuple[str, str]]:
    """Word key -> (English, translation)."""
    # Only an edition with own wording needs it.
    from babel.messages.pofile import read_po  # noqa: PLC0415

    catalogue = read_po(io.BytesIO(file.read_bytes()), abort_invalid=True)
    return {m.context: (str(m.id), str(m.string)) for m in catalogue if m.id and m.context and not m.fuzzy}


def _fields(text: str) -> set[str]:
    try:
        return {name for _, name, _, _ in string.Formatter().parse(text) if name is not None}
    except ValueError:
        return {"(not closed)"}
