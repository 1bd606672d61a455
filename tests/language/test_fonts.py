"""No letter of any list is a box: every character is in the faces that set it."""

from __future__ import annotations

from collections.abc import Callable
from functools import cache

import fontpkg
import pytest
from fontTools.ttLib import TTFont

from chartgen.edition.model import Edition
from chartgen.language.load import languages

MakeEdition = Callable[..., Edition]


@cache
def _covered(family: str) -> frozenset[int]:
    """Code points that every upright file of the family has."""
    maps = []
    for file in fontpkg.family(family).files:
        if file.style == "normal":
            with TTFont(file.path, lazy=True) as font:
                maps.append(set(font.getBestCmap()))
    return frozenset(set.intersection(*maps))


def _written(make_edition: MakeEdition, tag: str, *, method_page: bool = True) -> set[str]:
    """Every character that the words, numbers and units of a language can print; without the words of the method page,
    which holds formulas, where they do not count."""
    found: set[str] = set()
    for style in ("si", "locale", "own"):
        (language,) = languages(make_edition(languages=(tag,), unit_style=style))
        words = (text for key, text in language.words.items() if method_page or not key.startswith("method."))
        found |= set("".join(words)) | set(language.own_name)
        found |= set(language.number(-1234567.89, 2) + language.percent(0.5))
        for unit in ("mph", "km/h", "m", "ft", "s", "m/s²", "ft/s²"):
            found |= set(language.with_unit("0123456789", unit))
    return found


LATIN = ("en-GB", "en-US", "cy", "fr", "es-US")
NARROW = "\u202f"
"""Shapers make this space from the plain one where a font has no glyph for it, so it may be missing from a cmap."""


@pytest.mark.parametrize("tag", LATIN)
def test_the_text_face_has_every_character(make_edition: MakeEdition, tag: str) -> None:
    assert {c for c in _written(make_edition, tag) if ord(c) not in _covered("IBM Plex Sans")} == set()


@pytest.mark.parametrize("tag", LATIN)
def test_the_condensed_face_of_numerals_and_headlines_has_all_but_the_greek_of_formulas(
    make_edition: MakeEdition, tag: str
) -> None:
    written = _written(make_edition, tag, method_page=False) - {NARROW}
    assert {c for c in written if ord(c) not in _covered("IBM Plex Sans Condensed")} == set()
    greek = {c for c in _written(make_edition, tag) - {NARROW} if ord(c) not in _covered("IBM Plex Sans Condensed")}
    assert greek <= set("βημθ")


def test_the_arabic_list(make_edition: MakeEdition) -> None:
    written = _written(make_edition, "ar")
    arabic = {c for c in written if "\u0600" <= c <= "\u06ff"}
    assert len(arabic) > 30
    assert {c for c in arabic if ord(c) not in _covered("Tajawal")} == set()
    # What is not Arabic may come from the Latin family behind it.
    assert {c for c in written if ord(c) not in _covered("Tajawal") | _covered("IBM Plex Sans")} == set()
