"""A publisher's own wording, laid over the built-in word lists."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import pytest

from chartgen.edition.model import Edition

HEADER = 'msgid ""\nmsgstr "Content-Type: text/plain; charset=UTF-8\\n"\n\n'


def entry(key: str, english: str, text: str) -> str:
    return f'msgctxt "{key}"\nmsgid "{english}"\nmsgstr "{text}"\n\n'


def put(name: str, text: str) -> None:
    Path("vale/words").mkdir(exist_ok=True)
    Path("vale/words", name).write_text(text, encoding="utf-8")


def test_own_words_are_taken_by_language_and_key(edition: Callable[..., Edition]) -> None:
    put("cy.po", HEADER + entry("unit.m", "m", "metr"))
    assert edition().own_words == {"cy": {"unit.m": "metr"}}


def test_without_a_folder_there_are_none(edition: Callable[..., Edition]) -> None:
    assert edition().own_words == {}


@pytest.mark.parametrize(
    ("name", "text", "said"),
    [
        (
            "cy.po",
            HEADER + entry("unit.metre", "m", "metr"),
            (
                'unit.metre = "metr": this word key is not known. Right: a key of the built-in word lists. '
                'Did you mean "unit.m"?'
            ),
        ),
        (
            "cy.po",
            HEADER + entry("unit.m", "m", "{count} metr"),
            'unit.m = "{count} metr": the placeholders are not those of the English. Right: no placeholder.',
        ),
        (
            "cy.po",
            HEADER + "#, fuzzy\n" + entry("unit.m", "m", "metr"),
            'unit.m = "metr": this entry is marked fuzzy. Right: a wording that is settled, without the mark.',
        ),
        (
            "cy.po",
            HEADER + 'msgid "m"\nmsgstr "metr"\n',
            '"metr": this entry has no word key. Right: msgctxt "…" above its msgid.',
        ),
        (
            "fr.po",
            HEADER + entry("unit.m", "m", "mètre"),
            '"fr": the file\'s language is not among languages.use. Right: en-GB, cy.',
        ),
        (
            "cy.po",
            HEADER + "unit.m = metr\n",
            "this is not a PO file: ",
        ),
    ],
)
def test_own_words_that_do_not_fit(name: str, text: str, said: str, messages: Callable[..., list[str]]) -> None:
    put(name, text)
    (message,) = messages()
    assert message.removeprefix(f"vale/words/{name}: ").startswith(said)
