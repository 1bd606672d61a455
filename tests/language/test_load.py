"""Languages of an edition: words, fallback in a draft, the gate outside it."""

from __future__ import annotations

import pickle
from collections.abc import Callable

import pytest

from chartgen.edition.model import Edition
from chartgen.errors import EditionFaults, WordMissing
from chartgen.language import complete, load
from chartgen.language.catalogue import MASTER, Entry, WordList, read_words
from chartgen.language.load import languages

MakeEdition = Callable[..., Edition]


def _without(tag: str, *keys: str, old: str | None = None) -> Callable[[str], WordList]:
    """The shipped lists, but `tag` lacks `keys`, or has them from an older English text."""

    def read(asked: str) -> WordList:
        words = read_words(asked)
        if asked != tag:
            return words
        entries: dict[str, Entry] = {}
        for key, e in words.entries.items():
            if key in keys and old is None:
                continue
            english = old if key in keys and old is not None else e.english
            entries[key] = Entry(
                key=key, english=english, text=e.text, context=e.context, max_chars=e.max_chars, doubtful=e.doubtful,
                term=e.term,
            )  # fmt: skip
        return WordList(tag=tag, entries=entries, native_reader=None, back_translated=None)

    return read


def _lists(monkeypatch: pytest.MonkeyPatch, read: Callable[[str], WordList]) -> None:
    for room in (complete, load):
        monkeypatch.setattr(room, "read_words", read)


def test_languages_come_in_the_edition_s_order_with_their_direction_and_name(make_edition: MakeEdition) -> None:
    found = [(x.tag, x.direction, x.own_name) for x in languages(make_edition(languages=("fr", "ar", "cy", "es-US")))]
    assert found == [
        ("fr", "ltr", "français"), ("ar", "rtl", "العربية"), ("cy", "ltr", "Cymraeg"), ("es-US", "ltr", "español"),
    ]  # fmt: skip


def test_a_country_is_named_only_where_two_names_would_be_alike(make_edition: MakeEdition) -> None:
    assert [x.own_name for x in languages(make_edition(languages=("en-GB", "cy")))] == ["English", "Cymraeg"]
    two = languages(make_edition(languages=("en-GB", "en-US")))
    assert [x.own_name for x in two] == ["English (United Kingdom)", "English (United States)"]


def test_american_english_has_its_own_complete_list(make_edition: MakeEdition) -> None:
    british, american = languages(make_edition(languages=("en-GB", "en-US"), status="controlled"))
    assert american.missing == ()
    assert (british.t("unit.name.m"), american.t("unit.name.m")) == ("metres", "meters")
    assert (british.t("word.unladen"), american.t("word.unladen")) == ("unladen", "empty")
    assert "tire" not in "".join(british.words.values()).replace("entire", "")
    for british_word in ("tyre", "laden", "windscreen", "metre", "licence", "lorry"):
        assert [text for text in american.words.values() if british_word in text.lower()] == []


def test_a_draft_may_miss_a_translation_and_says_so(make_edition: MakeEdition, monkeypatch: pytest.MonkeyPatch) -> None:
    _lists(monkeypatch, _without("cy", "part.braking", "unit.mph"))
    (language,) = languages(make_edition(languages=("cy",), status="draft"))
    assert language.missing == ("part.braking", "unit.mph")
    assert language.t("part.braking") == read_words(MASTER).entries["part.braking"].english
    assert language.t("part.reaction") == "ymateb"


@pytest.mark.parametrize("status", ["controlled", "uncontrolled", "superseded"])
def test_nothing_but_a_draft_may_miss_one(
    make_edition: MakeEdition, monkeypatch: pytest.MonkeyPatch, status: str
) -> None:
    _lists(monkeypatch, _without("cy", "part.braking", "unit.mph"))
    with pytest.raises(EditionFaults) as caught:
        languages(make_edition(languages=("en-GB", "cy"), status=status))
    assert [(f.file, f.key, f.given, f.problem) for f in caught.value.faults] == [
        ("tried/edition.toml", "languages.use[2]", "cy", 'the word "part.braking" ("braking") is not translated'),
        ("tried/edition.toml", "languages.use[2]", "cy", 'the word "unit.mph" ("mph") is not translated'),
    ]


def test_own_words_fill_a_gap(make_edition: MakeEdition, monkeypatch: pytest.MonkeyPatch) -> None:
    _lists(monkeypatch, _without("cy", "part.braking"))
    own = {"cy": {"part.braking": "arafu"}}
    (language,) = languages(make_edition(languages=("cy",), status="controlled", own_words=own))
    assert language.t("part.braking") == "arafu"
    assert (language.missing, language.own) == ((), ("part.braking",))


def test_a_translation_of_an_older_text_counts_as_missing(
    make_edition: MakeEdition, monkeypatch: pytest.MonkeyPatch
) -> None:
    _lists(monkeypatch, _without("fr", "part.braking", old="slowing"))
    (language,) = languages(make_edition(languages=("fr",)))
    assert language.missing == ("part.braking",)


@pytest.mark.parametrize(("tag", "problem", "near"), [
    ("de", "there is no word list for this language", None),
    ("fr-CA", "there is no word list for this language", "fr"),
    ("xx-QQ", "this is not a known language tag", None),
])  # fmt: skip
def test_a_language_without_words_is_refused(
    make_edition: MakeEdition, tag: str, problem: str, near: str | None
) -> None:
    with pytest.raises(EditionFaults) as caught:
        languages(make_edition(languages=("en-GB", tag)))
    (fault,) = caught.value.faults
    assert (fault.key, fault.problem, fault.given) == ("languages.use[2]", problem, tag)
    assert "ar, cy, en-GB, en-US, es-US, fr" in fault.allowed
    assert fault.near == near


def test_an_unknown_key_is_a_fault_of_the_program(make_edition: MakeEdition) -> None:
    (language,) = languages(make_edition())
    with pytest.raises(WordMissing) as caught:
        language.t("part.nowhere")
    assert str(caught.value) == "word 'part.nowhere' (en-GB): no word list has this key"
    assert caught.value.exit_code == 3
    assert isinstance(caught.value, KeyError)


@pytest.mark.parametrize("values", [{}, {"time": "1 s", "more": "2 s"}, {"tim": "1 s"}])
def test_placeholders_and_values_must_match(make_edition: MakeEdition, values: dict[str, str]) -> None:
    (language,) = languages(make_edition())
    with pytest.raises(WordMissing, match="its placeholders are time"):
        language.t("assume.reaction", **values)


def test_a_name_falls_back_to_the_edition_s_first_language(make_edition: MakeEdition) -> None:
    english, welsh = languages(make_edition(languages=("en-GB", "cy")))
    assert welsh.text({"en-GB": "Dry", "cy": "Sych"}) == "Sych"
    assert (welsh.text({"en-GB": "Dry"}), welsh.text_tag({"en-GB": "Dry"})) == ("Dry", "en-GB")
    assert (english.text({"cy": "Sych"}), english.text_tag({"cy": "Sych"})) == ("Sych", "cy")


def test_a_language_can_be_sent_to_a_worker(make_edition: MakeEdition) -> None:
    (language,) = languages(make_edition(languages=("ar",)))
    assert pickle.loads(pickle.dumps(language)) == language  # noqa: S301  # our own bytes


def test_doubtful_entries_are_listed_with_their_reason(make_edition: MakeEdition) -> None:
    (language,) = languages(make_edition(languages=("cy",), own_words={"cy": {"part.lag": "oedi brecio"}}))
    keys = [key for key, _, _ in language.doubtful]
    assert "quantity.lag" in keys
    assert "part.lag" not in keys  # the edition's own wording is the publisher's business
    assert all(text == language.words[key] and why for key, text, why in language.doubtful)
