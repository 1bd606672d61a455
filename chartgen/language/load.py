"""The languages of an edition, ready to write with."""

from __future__ import annotations

import re
from collections.abc import Iterator, Mapping
from dataclasses import dataclass

from markupsafe import Markup, escape

from chartgen.edition.model import Edition, Text
from chartgen.errors import WordMissing
from chartgen.language import numbers
from chartgen.language.bidi import Direction, isolated
from chartgen.language.catalogue import MASTER, available, read_words
from chartgen.language.complete import check_complete, untranslated
from chartgen.language.html import isolate
from chartgen.language.units import UnitStyle, unit_symbol

_SPLIT = re.compile(r"\{([a-z][a-z0-9_]*)\}")


@dataclass(frozen=True, slots=True, kw_only=True)
class Language:
    """One language of one edition: its words, and how it writes numbers and units. Plain data only, so that it can be
    sent to a worker process."""

    tag: str
    direction: Direction
    own_name: str
    words: Mapping[str, str]
    unit_style: UnitStyle
    first_tag: str
    """Tag of the edition's first language: a name without a text in this one falls back to it."""
    doubtful: tuple[tuple[str, str, str], ...]
    """(key, text, why it is doubtful), in the order of the word list."""
    native_reader: str | None
    back_translated: str | None
    missing: tuple[str, ...]
    """Keys that stand in English because the list has no translation; never outside a draft."""
    own: tuple[str, ...]
    """Keys whose wording the edition itself gives."""

    def t(self, key: str, **values: str) -> str:
        """The word or sentence of `key`, its placeholders filled: bare text, to be drawn, measured or compared.

        Raises WordMissing on an unknown key, and where placeholders and values do not match.
        """
        return "".join(value for _, value in self._pieces(key, values))

    def plain(self, key: str, **values: str) -> str:
        """As `t`, each value isolated by direction characters where needed: text alternatives, document titles."""
        pieces = self._pieces(key, values)
        return "".join(isolated(value, self.direction) if filled else value for filled, value in pieces)

    def html(self, key: str, **values: str) -> Markup:
        """As `t`, for markup: words escaped, each value in a ``<bdi>``; a value that is markup goes in as it is."""
        return Markup("").join(
            escape(value) if not filled or isinstance(value, Markup) else isolate(value)
            for filled, value in self._pieces(key, values)
        )

    def _pieces(self, key: str, values: Mapping[str, str]) -> Iterator[tuple[bool, str]]:
        try:
            parts = _SPLIT.split(self.words[key])
        except KeyError:
            raise WordMissing(self.tag, key) from None
        if set(parts[1::2]) != values.keys():
            wanted, given = ", ".join(sorted(set(parts[1::2]))) or "nothing", ", ".join(sorted(values)) or "nothing"
            raise WordMissing(self.tag, key, f"its placeholders are {wanted}; given: {given}")
        for index, part in enumerate(parts):
            yield (True, values[part]) if index % 2 else (False, part)

    def text(self, texts: Text) -> str:
        """An edition's own text (a name, a title) in this language, else in the edition's first, else in any it has."""
        return texts[self.text_tag(texts)]

    def text_tag(self, texts: Text) -> str:
        """Tag of the language in which `text` answers, for ``lang=``."""
        return next((tag for tag in (self.tag, self.first_tag) if tag in texts), None) or next(iter(texts))

    def number(self, x: float, decimals: int = 0) -> str:
        """`x` with exactly so many decimals; raises Unprintable on nan and infinity."""
        return numbers.format_number(x, self.tag, decimals)

    def percent(self, fraction: float, decimals: int = 1) -> str:
        """0.09 as "9%" or "9 %", as the language has it; at most `decimals` decimals."""
        return numbers.format_percent(fraction, self.tag, decimals)

    def unit(self, name: str, *, one: bool = False) -> str:
        """Symbol of mph, km/h, m, ft, s, m/s² or ft/s² in the edition's unit style; `one`: behind the number 1."""
        return unit_symbol(name, self.tag, self.unit_style, self._word, one=one)

    def unit_name(self, name: str) -> str:
        """The unit in full, without a number, e.g. "metres": m, ft, mph, km/h."""
        return self._word("unit.name." + name.replace("/", ""))

    def territory(self, code: str) -> str:
        """A country's name by its ISO 3166-1 code, as the locale has it; the code where it has none."""
        return str(numbers.babel_locale(self.tag).territories.get(code, code))

    def distance(self, x: float, unit: str, decimals: int | None = None) -> str:
        """A printed (already rounded) distance with its unit: "23 m". Raises Unprintable where `x` is not rounded."""
        number = numbers.format_exact(x, self.tag, decimals)
        return number + numbers.number_style(self.tag).unit_space + self.unit(unit, one=x == 1)

    def speed(self, x: float, unit: str) -> str:
        """A speed as the edition gives it, with its unit; never rounded here."""
        return self.with_unit(numbers.format_exact(x, self.tag), unit)

    def seconds(self, x: float, decimals: int = 2) -> str:
        """A time to at most `decimals` decimals, trailing zeros left out: "0.8 s"."""
        return self.with_unit(numbers.format_trimmed(x, self.tag, decimals), "s")

    def deceleration(self, x: float, unit: str = "m/s²", decimals: int = 2) -> str:
        """A deceleration, given in `unit` (m/s² or ft/s²), to at most `decimals` decimals."""
        return self.with_unit(numbers.format_trimmed(x, self.tag, decimals), unit)

    def with_unit(self, number: str, unit: str) -> str:
        """A number that is already written, the language's no-break space, and the unit's symbol."""
        return number + numbers.number_style(self.tag).unit_space + self.unit(unit)

    def _word(self, key: str) -> str:
        try:
            return self.words[key]
        except KeyError:
            raise WordMissing(self.tag, key) from None


def languages(edition: Edition) -> tuple[Language, ...]:
    """The edition's languages in its order. Raises EditionFaults, all at once, where a language has no word list or, in
    anything but a draft, a translation is missing."""
    check_complete(edition)
    return tuple(_language(edition, tag) for tag in edition.languages)


def _language(edition: Edition, tag: str) -> Language:
    master = read_words(MASTER).entries
    own = edition.own_words.get(tag, {})
    missing = untranslated(edition, tag)
    listed = read_words(tag) if tag in available() else None
    words = {key: entry.english for key, entry in master.items()}
    if listed:
        words |= {key: entry.text for key, entry in listed.entries.items() if key in master and key not in missing}
    words |= own
    return Language(
        tag=tag,
        direction="rtl" if numbers.babel_locale(tag).text_direction == "rtl" else "ltr",
        own_name=_own_name(tag, edition.languages),
        words=words,
        unit_style=edition.unit_style,
        first_tag=edition.languages[0],
        doubtful=tuple(
            (entry.key, entry.text, entry.doubtful)
            for entry in (listed.entries.values() if listed else ())
            if entry.doubtful and entry.key in master and entry.key not in own
        ),
        native_reader=listed.native_reader if listed else None,
        back_translated=listed.back_translated if listed else None,
        missing=missing,
        own=tuple(own),
    )


def _own_name(tag: str, tags: tuple[str, ...]) -> str:
    """The language's name in itself, by CLDR; with its country only where two of the edition's would read alike."""
    names = [numbers.babel_locale(other).get_language_name() for other in tags]
    locale = numbers.babel_locale(tag)
    name = locale.get_language_name()
    return str(locale.get_display_name() if names.count(name) > 1 else name)
