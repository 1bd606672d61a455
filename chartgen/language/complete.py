"""Is every word of every language there? Only a draft may miss one."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from difflib import get_close_matches

from babel import UnknownLocaleError

from chartgen.edition.model import Edition
from chartgen.errors import EditionFaults, Fault
from chartgen.language.catalogue import MASTER, available, placeholders, read_words
from chartgen.language.numbers import babel_locale


def untranslated(edition: Edition, tag: str) -> tuple[str, ...]:
    """Keys of the master list that `tag` has no valid text for: missing, fuzzy, or translated from an older English
    text. The edition's own words count."""
    own = edition.own_words.get(tag, {})
    entries = read_words(tag).entries if tag in available() else {}
    return tuple(
        key for key, entry in read_words(MASTER).entries.items()
        if key not in own and (key not in entries or not entries[key].text or entries[key].english != entry.english)
    )


def check_complete(edition: Edition) -> None:
    """Raises EditionFaults with everything that is wrong with the edition's words, all at once."""
    faults = tuple(fault for position, tag in enumerate(edition.languages) for fault in _faults(edition, position, tag))
    if faults:
        raise EditionFaults(faults)


def _faults(edition: Edition, position: int, tag: str) -> Iterator[Fault]:
    place = f"languages.use[{position}]"
    try:
        babel_locale(tag)
    except (UnknownLocaleError, ValueError):
        problem = "is not a language tag that is known here"
        yield Fault(edition.file, place, problem, _tags(), tag, _near(tag, available()))
        return
    if tag not in available() and not edition.own_words.get(tag):
        allowed = _tags() + ", or own words for it"
        yield Fault(edition.file, place, "has no word list", allowed, tag, _near(tag, available()))
        return
    yield from _own_word_faults(edition, tag)
    if edition.status != "draft":
        for key in untranslated(edition, tag):
            english = read_words(MASTER).entries[key].english
            yield Fault(
                edition.file, place, f'has no translation of the word "{key}" ("{english}")',
                'a translation in the word list or in the edition\'s own words, or status = "draft"', tag,
            )


def _own_word_faults(edition: Edition, tag: str) -> Iterator[Fault]:
    master = read_words(MASTER).entries
    for key, text in edition.own_words.get(tag, {}).items():
        place = f'words.{tag}."{key}"'
        if key not in master:
            problem = "is not the key of a word"
            yield Fault(edition.file, place, problem, "a key of the word lists", text, _near(key, master))
        elif placeholders(text) != (wanted := placeholders(master[key].english)):
            allowed = ", ".join("{" + name + "}" for name in sorted(wanted)) or "no placeholder"
            yield Fault(edition.file, place, "does not hold the placeholders of this word", allowed, text)
        elif not text.strip():
            yield Fault(edition.file, place, "is empty", "a word or sentence", text)


def _tags() -> str:
    return "one of " + ", ".join(available())


def _near(given: str, known: Iterable[str]) -> str | None:
    return next(iter(get_close_matches(given, list(known), 1)), None)
