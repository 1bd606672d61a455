"""Is every word of every language there? Only a draft may miss one."""

from __future__ import annotations

from collections.abc import Iterator
from difflib import get_close_matches

from babel import UnknownLocaleError

from chartgen.edition.model import Edition
from chartgen.errors import EditionFaults, Fault
from chartgen.language.catalogue import MASTER, available, read_words
from chartgen.language.numbers import babel_locale


def untranslated(edition: Edition, tag: str) -> tuple[str, ...]:
    """Keys of the master list that `tag` has no valid text for: missing, fuzzy, or translated from an older English
    text. The edition's own words count."""
    own = edition.own_words.get(tag, {})
    entries = read_words(tag).entries if tag in available() else {}
    return tuple(
        key
        for key, entry in read_words(MASTER).entries.items()
        if key not in own and (key not in entries or not entries[key].text or entries[key].english != entry.english)
    )


def check_complete(edition: Edition) -> None:
    """Raises EditionFaults with every language that has no words and, but in a draft, every word that is missing.

    The edition's own words were held against the word lists at the front door.
    """
    tags = enumerate(edition.languages, 1)
    faults = tuple(fault for position, tag in tags for fault in _faults(edition, position, tag))
    if faults:
        raise EditionFaults(faults)


def _faults(edition: Edition, position: int, tag: str) -> Iterator[Fault]:
    place = f"languages.use[{position}]"
    try:
        babel_locale(tag)
    except (UnknownLocaleError, ValueError):
        problem = "this is not a known language tag"
        yield Fault(edition.file, place, problem, _tags(), tag, _near(tag))
        return
    if tag not in available() and not edition.own_words.get(tag):
        allowed = _tags() + ", or own words for it"
        yield Fault(edition.file, place, "there is no word list for this language", allowed, tag, _near(tag))
        return
    if edition.status != "draft":
        for key in untranslated(edition, tag):
            english = read_words(MASTER).entries[key].english
            yield Fault(
                edition.file,
                place,
                f'the word "{key}" ("{english}") is not translated',
                'a translation in the word list or in the edition\'s own words, or status = "draft"',
                tag,
            )


def _tags() -> str:
    return "one of " + ", ".join(available())


def _near(given: str) -> str | None:
    """A tag with a word list: one of the same language, else one that is spelt much alike."""
    language = given.partition("-")[0].lower()
    kin = [tag for tag in available() if tag.partition("-")[0] == language]
    return next(iter(kin or get_close_matches(given, available(), 1)), None)
