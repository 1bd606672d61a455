"""The word lists as they are shipped: complete, filled alike, printable, and marked for what they are."""

from __future__ import annotations

import re
import unicodedata

import pytest

from chartgen.errors import MachineFault
from chartgen.language.catalogue import MASTER, available, drawn_length, parse_words, placeholders, read_words
from chartgen.language.numbers import number_style

TAGS = ("ar", "cy", "en-GB", "en-US", "es-US", "fr")
TRANSLATED = ("ar", "cy", "es-US", "fr")

SYMBOLS = {"unit.m", "unit.s", "unit.kmh", "unit.mps2", "unit.kb", "page.file_pdf"}
"""Symbols and bare frames that are the same in every language that has no own."""
SAME_AS_ENGLISH = {
    "cy": SYMBOLS | {"sheet.poster", "page.data", "kind.car"},  # Welsh uses these words: poster, data, car
    "fr": SYMBOLS - {"unit.kb"} | {"method.source", "control.licence"},  # French words too; kB is ko
    "es-US": SYMBOLS | {"unit.mph"},  # United States manuals in Spanish print mph
    "ar": set[str](),
}


def _has_words(text: str) -> bool:
    """False for a bare frame such as "{name}: {verdict}."."""
    return any(character.isalpha() for character in re.sub(r"\{\w+\}", "", text))


def test_the_six_lists_are_there() -> None:
    assert set(TAGS) <= set(available())


@pytest.mark.parametrize("tag", TAGS)
def test_a_list_has_every_key_of_the_master_from_its_present_text_and_no_other(tag: str) -> None:
    master, mine = read_words(MASTER).entries, read_words(tag).entries
    assert len(mine) >= 120
    assert {key: entry.english for key, entry in mine.items()} == {key: entry.english for key, entry in master.items()}
    assert [key for key, entry in mine.items() if not entry.text.strip()] == []
    assert [entry.key for entry in mine.values() if entry.text != entry.text.strip() or "  " in entry.text] == []


@pytest.mark.parametrize("tag", TAGS)
def test_every_entry_tells_a_translator_where_it_stands(tag: str) -> None:
    assert [key for key, entry in read_words(tag).entries.items() if not entry.context] == []


@pytest.mark.parametrize("tag", TAGS)
def test_placeholders_are_those_of_the_english(tag: str) -> None:
    wrong = [e.key for e in read_words(tag).entries.values() if placeholders(e.text) != placeholders(e.english)]
    assert wrong == []
    loose = [e.key for e in read_words(tag).entries.values() if re.search(r"[{}]", re.sub(r"\{\w+\}", "", e.text))]
    assert loose == []


@pytest.mark.parametrize("tag", TAGS)
def test_no_word_is_longer_than_its_place(tag: str) -> None:
    master = read_words(MASTER).entries
    long = [
        (entry.key, drawn_length(entry.text), limit)
        for entry in read_words(tag).entries.values()
        if (limit := master[entry.key].max_chars) and drawn_length(entry.text) > limit
    ]
    assert long == []


@pytest.mark.parametrize("tag", TRANSLATED)
def test_nothing_is_left_in_english_but_what_is_listed(tag: str) -> None:
    same = {e.key for e in read_words(tag).entries.values() if e.text == e.english and _has_words(e.english)}
    assert same == SAME_AS_ENGLISH[tag]


@pytest.mark.parametrize("tag", TAGS)
def test_signs_are_those_of_print(tag: str) -> None:
    for entry in read_words(tag).entries.values():
        assert not re.search(r"['\"`]|\.\.\.| - ", entry.text), entry.key
        assert unicodedata.normalize("NFC", entry.text) == entry.text, entry.key
        assert not re.search("[\u200e\u200f\u202a-\u202e\u2066-\u2069]", entry.text), entry.key


def test_french_signs_never_stand_alone_on_a_line() -> None:
    for entry in read_words("fr").entries.values():
        assert not re.search(r"(?<!\u202f)[;!?]", entry.text), entry.key
        assert not re.search(r"(?<!\u00a0):(?!\d)", entry.text.replace("{", "").replace("http:", "")), entry.key
        assert not re.search(r"«(?!\u00a0)|(?<!\u00a0)»", entry.text), entry.key
        assert number_style("fr").unit_space == "\u202f"


def test_arabic_has_its_own_comma_semicolon_and_question_mark() -> None:
    for entry in read_words("ar").entries.values():
        assert not re.search(r"[;?]|,(?!\d)", entry.text), entry.key
        assert "\u0640" not in entry.text, entry.key  # no stretched letters
        assert not re.search("[\u0660-\u0669\u06f0-\u06f9]", entry.text), entry.key


@pytest.mark.parametrize("tag", TAGS)
def test_no_list_claims_a_native_reader_yet(tag: str) -> None:
    assert read_words(tag).native_reader is None


@pytest.mark.parametrize("tag", TRANSLATED)
def test_doubts_and_confirmed_terms_are_read(tag: str) -> None:
    entries = read_words(tag).entries
    doubtful = [entry for entry in entries.values() if entry.doubtful]
    assert len(doubtful) >= 8
    assert all(len(entry.doubtful or "") > 10 for entry in doubtful)
    assert any(entry.term for entry in entries.values())


# ---- reading a PO file ------------------------------------------------------------------------------------------

_HEAD = 'msgid ""\nmsgstr ""\n"Content-Type: text/plain; charset=utf-8\\n"\n'


def _po(*entries: str, head: str = "") -> bytes:
    return (_HEAD + head + "\n" + "\n".join(entries)).encode()


def test_an_entry_is_read_with_all_that_is_known_of_it() -> None:
    entry = (
        "# term: seen in a manual\n# doubtful: coined here\n#. A label.\n#. At most 12 characters.\n"
        'msgctxt "part.lag"\nmsgid "lag {x}"\nmsgstr "oedi {x}"\n'
    )
    head = '"X-Native-Reader: Invented Reader\\n"\n"X-Back-Translated: none yet\\n"\n'
    words = parse_words("cy", _po(entry, head=head))
    read = words.entries["part.lag"]
    assert (read.english, read.text, read.context, read.max_chars) == ("lag {x}", "oedi {x}", "A label", 12)
    assert (read.doubtful, read.term) == ("coined here", "seen in a manual")
    assert (words.native_reader, words.back_translated) == ("Invented Reader", None)


def test_a_fuzzy_entry_counts_as_missing() -> None:
    words = parse_words("cy", _po('#, fuzzy\nmsgctxt "a.b"\nmsgid "x"\nmsgstr "y"\n'))
    assert words.entries["a.b"].text == ""


@pytest.mark.parametrize(("entries", "says"), [
    (('msgctxt "a.b"\nmsgid "x"\nmsgstr "y"\n', 'msgctxt "a.b"\nmsgid "z"\nmsgstr "y"\n'), "stands twice"),
    (('msgid "x"\nmsgstr "y"\n',), "no msgctxt"),
    (('msgctxt "a.b"\nmsgid "x"\nmsgid_plural "xs"\nmsgstr[0] "y"\nmsgstr[1] "z"\n',), "plural"),
    (('msgctxt "a.b"\nmsgid "x"\nmsgstr "y"\nloose words\n',), "not a readable PO file"),
])  # fmt: skip
def test_a_broken_list_is_refused(entries: tuple[str, ...], says: str) -> None:
    with pytest.raises(MachineFault, match=says):
        parse_words("cy", _po(*entries))


def test_a_list_that_is_not_there_is_a_fault_of_the_installation() -> None:
    with pytest.raises(MachineFault, match=r"de-AT\.po"):
        read_words("de-AT")
