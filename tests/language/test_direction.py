"""Numbers, units and names keep their own direction, in markup and in plain text."""

from __future__ import annotations

from collections.abc import Callable

import pytest
from markupsafe import Markup

from chartgen.edition.model import Edition
from chartgen.language.bidi import LRI, PDI, RLI, direction_of, isolated, stripped
from chartgen.language.html import isolate
from chartgen.language.load import languages

MakeEdition = Callable[..., Edition]


@pytest.mark.parametrize(("text", "direction"), [
    ("23 m", "ltr"), ("23 م", "rtl"), ("−9 %", "ltr"), ("130 كم/س", "rtl"), ("", "ltr"), ("العربية", "rtl"),
    ("42", "ltr"),
])  # fmt: skip
def test_direction_is_that_of_the_first_letter(text: str, direction: str) -> None:
    assert direction_of(text) == direction


def test_markup_isolates_and_escapes() -> None:
    assert isolate("23\u00a0m") == '<bdi dir="ltr">23\u00a0m</bdi>'
    assert isolate("23\u00a0م") == '<bdi dir="rtl">23\u00a0م</bdi>'
    assert isolate("a < b & c") == '<bdi dir="ltr">a &lt; b &amp; c</bdi>'
    assert isolate("Cymraeg", lang="cy") == '<bdi dir="ltr" lang="cy">Cymraeg</bdi>'
    assert isolate(LRI + "23 m" + PDI) == '<bdi dir="ltr">23 m</bdi>'


def test_plain_text_isolates_only_where_directions_meet() -> None:
    assert isolated("23 m", "ltr") == "23 m"
    assert isolated("23 m", "rtl") == LRI + "23 m" + PDI
    assert isolated("23 م", "rtl") == RLI + "23 م" + PDI
    assert isolated("23 م", "ltr") == RLI + "23 م" + PDI
    assert stripped(isolated("23 م", "ltr")) == "23 م"


def test_every_value_in_an_arabic_sentence_is_isolated(make_edition: MakeEdition) -> None:
    (arabic,) = languages(make_edition(languages=("ar",)))
    values = {"first": "0.60", "low": arabic.speed(30, "km/h"), "second": "0.45", "high": arabic.speed(130, "km/h")}
    text = arabic.plain("assume.friction_falling", **values)
    markup = arabic.html("assume.friction_falling", **values)
    for value in values.values():
        assert text.count(LRI + value + PDI) == 1
        assert markup.count(f'<bdi dir="ltr">{value}</bdi>') == 1
    assert stripped(text) == arabic.t("assume.friction_falling", **values)
    assert not set(arabic.t("assume.friction_falling", **values)) & set("\u2066\u2067\u2068\u2069\u200e\u200f")


def test_english_plain_text_has_no_direction_signs(make_edition: MakeEdition) -> None:
    (english,) = languages(make_edition())
    assert english.plain("assume.reaction", time="1 s") == english.t("assume.reaction", time="1 s") == "Reaction: 1 s"


def test_markup_that_is_passed_in_stays_markup_and_words_are_escaped(make_edition: MakeEdition) -> None:
    (english,) = languages(make_edition(own_words={"en-GB": {"assume.reaction": "R & D: {time}"}}))
    assert english.html("assume.reaction", time=Markup("<b>1 s</b>")) == "R &amp; D: <b>1 s</b>"
    assert english.html("assume.reaction", time="<1 s") == 'R &amp; D: <bdi dir="ltr">&lt;1 s</bdi>'
