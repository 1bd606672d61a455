"""The question of the presets' names: are their measures written with the units of the language they stand in?"""

from __future__ import annotations

import re

import pytest

from chartgen.edition.catalogue import SHELVES
from chartgen.language.catalogue import read_words

TAGS = ("en-GB", "cy", "en-US", "es-US", "fr", "ar")
_MEASURE = re.compile(r"\d\s(m|ft|s|km/h|mph)(?![\w/])")


@pytest.mark.parametrize("tag", TAGS)
def test_measures_in_names_have_the_languages_own_units(tag: str) -> None:
    """In Arabic a Latin unit would also stand on the wrong side of its number."""
    words = read_words(tag).entries
    names = [preset.name[tag] for shelf in SHELVES.values() for preset in shelf.values() if tag in preset.name]
    assert len(names) > 80
    own = {unit: words["unit." + unit.replace("/", "")].text for unit in ("m", "ft", "s", "km/h", "mph")}
    foreign = {(name, unit) for name in names for unit in _MEASURE.findall(name) if own[unit] != unit}
    assert not foreign
