"""Units in their three styles, and the one no-break space before them."""

from __future__ import annotations

import re
from collections.abc import Callable

import pytest

from chartgen.edition.model import Edition
from chartgen.errors import WordMissing
from chartgen.language.load import Language, languages
from chartgen.language.units import WORD_KEYS, cldr_symbol

TAGS = ("en-GB", "en-US", "cy", "fr", "ar", "es-US")
MakeEdition = Callable[..., Edition]


def _samples(language: Language) -> dict[str, str]:
    return {
        "mph": language.speed(70, "mph"), "km/h": language.speed(130, "km/h"), "m": language.distance(23, "m"),
        "ft": language.distance(1234, "ft"), "s": language.seconds(0.8), "m/s²": language.deceleration(6.5),
        "ft/s²": language.deceleration(21.3, "ft/s²"),
    }  # fmt: skip


# SI symbols: SI Brochure (BIPM), section 2. mph and feet: mya in Welsh Government text, mi/h and pi by CLDR for French,
# mph and pies in United States driver manuals in Spanish, ميل/س and قدم by CLDR for Arabic.
SI = {
    "en-GB": ["70 mph", "130 km/h", "23 m", "1,234 ft", "0.8 s", "6.5 m/s²", "21.3 ft/s²"],
    "en-US": ["70 mph", "130 km/h", "23 m", "1,234 ft", "0.8 s", "6.5 m/s²", "21.3 ft/s²"],
    "cy": ["70 mya", "130 km/h", "23 m", "1,234 tr", "0.8 s", "6.5 m/s²", "21.3 tr/s²"],
    "fr": ["70_mi/h", "130_km/h", "23_m", "1_234_pi", "0,8_s", "6,5_m/s²", "21,3_pi/s²"],
    "ar": ["70 ميل/س", "130 km/h", "23 m", "1,234 قدم", "0.8 s", "6.5 m/s²", "21.3 قدم/ث²"],
    "es-US": ["70 mph", "130 km/h", "23 m", "1,234 pies", "0.8 s", "6.5 m/s²", "21.3 pies/s²"],
}
# CLDR's short symbols (Babel 2.19), but for Arabic metres (short forms change with the number: the narrow one) and
# Welsh feet (a prime, which reads as minutes: the word list's).
LOCALE = {
    "en-GB": ["70 mph", "130 km/h", "23 m", "1,234 ft", "0.8 s", "6.5 m/s²", "21.3 ft/s²"],
    "en-US": ["70 mph", "130 km/h", "23 m", "1,234 ft", "0.8 sec", "6.5 m/s²", "21.3 ft/s²"],
    "cy": ["70 m.y.a.", "130 km/h", "23 m", "1,234 tr", "0.8 eil", "6.5 m/s²", "21.3 tr/s²"],
    "fr": ["70_mi/h", "130_km/h", "23_m", "1_234_pi", "0,8_s", "6,5_m/s²", "21,3_pi/s²"],
    "ar": ["70 ميل/س", "130 كم/س", "23 م", "1,234 قدم", "0.8 ث", "6.5 م/ث²", "21.3 قدم/ث²"],
    "es-US": ["70 mi/h", "130 km/h", "23 m", "1,234 ft", "0.8 s", "6.5 m/s²", "21.3 pies/s²"],
}
OWN = SI | {
    "ar": ["70 ميل/س", "130 كم/س", "23 م", "1,234 قدم", "0.8 ث", "6.5 م/ث²", "21.3 قدم/ث²"],
}


@pytest.mark.parametrize(("style", "wanted"), [("si", SI), ("locale", LOCALE), ("own", OWN)])
def test_every_locale_writes_number_and_unit_whole(
    make_edition: MakeEdition, style: str, wanted: dict[str, list[str]]
) -> None:
    for language in languages(make_edition(languages=TAGS, unit_style=style)):
        signs = [text.replace(" ", "\u00a0").replace("_", "\u202f") for text in wanted[language.tag]]
        assert list(_samples(language).values()) == signs, language.tag


@pytest.mark.parametrize("style", ["si", "locale", "own"])
def test_exactly_one_no_break_space_stands_between_number_and_unit(make_edition: MakeEdition, style: str) -> None:
    for language in languages(make_edition(languages=TAGS, unit_style=style)):
        space = "\u202f" if language.tag == "fr" else "\u00a0"
        for name, text in _samples(language).items():
            number, unit = text.removesuffix(language.unit(name)), language.unit(name)
            assert re.fullmatch(rf"[\d.,\u202f\u00a0]*\d{space}", number), (language.tag, text)
            assert not re.search(r"\s", text.replace("\u00a0", "").replace("\u202f", "")), (language.tag, text)
            assert unit == unit.strip()


def test_one_foot_is_not_a_plural(make_edition: MakeEdition) -> None:
    american, spanish = languages(make_edition(languages=("en-US", "es-US")))
    assert [american.distance(x, "ft") for x in (1, 2)] == ["1\u00a0ft", "2\u00a0ft"]
    assert [spanish.distance(x, "ft") for x in (1, 2)] == ["1\u00a0pie", "2\u00a0pies"]


def test_own_words_of_the_edition_change_a_unit(make_edition: MakeEdition) -> None:
    (language,) = languages(make_edition(own_words={"en-GB": {"unit.ft": "feet"}}, unit_style="own"))
    assert language.distance(75, "ft") == "75\u00a0feet"
    assert language.own == ("unit.ft",)


def test_every_word_key_of_a_unit_is_in_the_list(make_edition: MakeEdition) -> None:
    (language,) = languages(make_edition())
    assert set(WORD_KEYS.values()) <= set(language.words)
    assert [language.unit_name(name) for name in ("m", "ft", "mph", "km/h")] == [
        "metres", "feet", "miles per hour", "kilometres per hour",
    ]  # fmt: skip


def test_an_unknown_unit_is_a_fault_of_the_program(make_edition: MakeEdition) -> None:
    (language,) = languages(make_edition())
    with pytest.raises(WordMissing, match="not a unit"):
        language.unit("yd")


@pytest.mark.parametrize(("name", "tag", "symbol"), [
    ("km/h", "ga", "km/u"), ("mph", "ga", "msu"), ("km/h", "nl", "km/u"), ("km/h", "uk", "км/год"), ("m", "uk", "м"),
    ("ft", "cy", None), ("m/s²", "fr", None), ("mph", "pl", "mph"), ("m", "ar", "م"),
])  # fmt: skip
def test_symbols_of_cldr(name: str, tag: str, symbol: str | None) -> None:
    # Source: CLDR unit patterns, short, as carried by Babel 2.19; Polish miles and Arabic metres are the narrow forms.
    assert cldr_symbol(name, tag) == symbol
