"""Unit symbols in the three styles an edition may choose.

si      SI symbols (m, s, km/h, m/s²) in every language; mph and feet, which SI has not, as the word list writes them.
locale  CLDR's short symbol of the language (by Babel).
own     the word list's own entries (``unit.m`` …), over which an edition may lay its own words.

Only symbols, never unit words after a number: "23 m" needs no plural, where Arabic has six forms and Romanian a "de".
"""

from __future__ import annotations

from collections.abc import Callable
from functools import lru_cache
from typing import Literal

from babel.units import format_unit

from chartgen.errors import WordMissing
from chartgen.language.numbers import babel_locale

UnitStyle = Literal["si", "locale", "own"]

WORD_KEYS = {
    "mph": "unit.mph",
    "km/h": "unit.kmh",
    "m": "unit.m",
    "ft": "unit.ft",
    "s": "unit.s",
    "m/s²": "unit.mps2",
    "ft/s²": "unit.ftps2",
}
_SI = frozenset({"km/h", "m", "s", "m/s²"})
_CLDR = {
    "mph": "speed-mile-per-hour",
    "km/h": "speed-kilometer-per-hour",
    "m": "length-meter",
    "ft": "length-foot",
    "s": "duration-second",
}
_PRIMES = ("′", "″", "'", '"')
_ONE_OF_EACH_PLURAL = (0, 1, 2, 3, 6, 11, 100)
"""Between them they reach all six plural forms of Welsh and of Arabic, and so of any language here."""


def unit_symbol(name: str, tag: str, style: UnitStyle, word: Callable[[str], str], *, one: bool = False) -> str:
    """The symbol of the unit `name` (a key of `WORD_KEYS`); `word` looks up a key of the word list.

    `one`: behind the number 1. Feet in American Spanish are a plural word, the one unit here that then changes.
    """
    if name not in WORD_KEYS:
        raise WordMissing(tag, name, "is not a unit that is printed; units: " + ", ".join(WORD_KEYS))
    if style == "si" and name in _SI:
        return name
    if style == "locale":
        return cldr_symbol(name, tag) or word(_key(name, one))
    return word(_key(name, one))


def _key(name: str, one: bool) -> str:
    return "unit.ft_one" if one and name == "ft" else WORD_KEYS[name]


@lru_cache(maxsize=256)
def cldr_symbol(name: str, tag: str) -> str | None:
    """CLDR's short symbol, or None where it has none that can stand after any number.

    Left out: forms that change with the number (Arabic metres, Polish miles), where the narrow form is tried instead,
    and primes (Welsh 75′), which read as minutes.
    """
    if name not in _CLDR:
        return None
    for width in ("short", "narrow"):
        forms = {_without_number(name, count, width, tag) for count in _ONE_OF_EACH_PLURAL}
        if len(forms) == 1 and not (symbol := forms.pop()).startswith(_PRIMES):
            return symbol
    return None


def _without_number(name: str, count: int, width: Literal["short", "narrow"], tag: str) -> str:
    written: str = format_unit(count, _CLDR[name], width, locale=babel_locale(tag), numbering_system="latn")
    return written.replace(str(count), "").strip()
