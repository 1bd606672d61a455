"""What a label says: contents as plain records, their text in a language, their lines within a width."""

from __future__ import annotations

import math
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass, field
from typing import Protocol

from chartgen.charts.drawing import Direction, FaceName
from chartgen.charts.fonts import extent, width_mm

LEADING: float = 1.2
"""Line pitch of words as a part of the font size."""


class Words(Protocol):
    """What this floor asks of a language; `chartgen.language` gives it (a room beside this one, so it is not
    imported)."""

    @property
    def tag(self) -> str: ...

    @property
    def direction(self) -> Direction: ...

    def t(self, key: str, **values: str) -> str: ...

    def plain(self, key: str, **values: str) -> str: ...

    def number(self, x: float, decimals: int = 0) -> str: ...

    def unit(self, name: str) -> str: ...

    def distance(self, x: float, unit: str) -> str: ...

    def speed(self, x: float, unit: str) -> str: ...

    def text(self, text: Mapping[str, str]) -> str: ...


@dataclass(frozen=True, slots=True)
class Number:
    """A figure as it is printed."""

    value: float
    decimals: int = 0


@dataclass(frozen=True, slots=True)
class Key:
    """A word of the word list."""

    key: str


@dataclass(frozen=True, slots=True)
class Unit:
    """A unit as the edition writes it."""

    name: str


@dataclass(frozen=True, slots=True)
class Name:
    """A name of the edition's own, by language tag."""

    texts: tuple[tuple[str, str], ...]


Content = Number | Key | Unit | Name


def say(content: Content, words: Words) -> str:
    """The text of `content` in one language."""
    match content:
        case Number(value, decimals):
            # The condensed face has no narrow no-break space (French groups digits by it); the wide one reads the same.
            return words.number(value, decimals).replace("\u202f", "\u00a0")
        case Key(key):
            return words.t(key)
        case Unit(name):
            return words.unit(name)
        case Name(texts):
            return words.text(dict(texts))


def wrap(text: str, face: FaceName, size_mm: float, room_mm: float) -> tuple[str, ...]:
    """`text` in lines of at most `room_mm`, broken at spaces only (a no-break space holds); a longer word stands
    alone."""
    lines: list[str] = []
    for word in text.split(" "):
        longer = f"{lines[-1]} {word}" if lines else word
        if lines and width_mm(longer, face, size_mm) <= room_mm + 1e-6:
            lines[-1] = longer
        else:
            lines.append(word)
    return tuple(lines)


@dataclass(frozen=True, slots=True)
class Line:
    """One line of a block and the language it is in."""

    text: str
    words: Words


def lines(
    content: Content, languages: Sequence[Words], face: FaceName, size_mm: float, room_mm: float
) -> tuple[Line, ...]:
    """The lines of one block: language after language, whole. What reads the same in two languages stands once;
    a figure stands once, as the first language writes it."""
    if isinstance(content, Number):
        return (Line(say(content, languages[0]), languages[0]),)
    found: list[Line] = []
    said: set[str] = set()
    for words in languages:
        text = say(content, words)
        if text not in said:
            said.add(text)
            found += [Line(line, words) for line in wrap(text, face, size_mm, room_mm)]
    return tuple(found)


@dataclass(frozen=True, slots=True)
class Readers:
    """Whom a drawing is for: every language one after the other on one drawing (`together`), or each on its own with
    the same marks. Room is kept for the widest."""

    languages: tuple[Words, ...]
    together: bool
    _measured: dict[tuple[Content, FaceName], tuple[int, float]] = field(
        default_factory=dict, compare=False, repr=False
    )
    """(lines, width at font size 1) of what was measured unwrapped: each content is asked for at many sizes."""
    _longest: dict[tuple[Content, FaceName], float] = field(default_factory=dict, compare=False, repr=False)

    @property
    def settings(self) -> tuple[tuple[Words, ...], ...]:
        return (self.languages,) if self.together else tuple((words,) for words in self.languages)

    def room(self, content: Content, face: FaceName, size_mm: float, room_mm: float = math.inf) -> tuple[int, float]:
        """(lines, width in mm) that hold `content` in every setting, wrapped to `room_mm`."""
        whole = self._measured.get((content, face))
        if whole is None:
            whole = self._measured[content, face] = self._measure(content, face, 1.0, math.inf)
        if whole[1] * size_mm <= room_mm:
            return whole[0], whole[1] * size_mm
        return self._measure(content, face, size_mm, room_mm)

    def longest_word(self, content: Content, face: FaceName) -> float:
        """Width, at font size 1, of the longest word of `content` in any language: narrower than that it cannot get."""
        known = self._longest.get((content, face))
        if known is None:
            words = {word for setting in self.settings for one in setting for word in say(content, one).split(" ")}
            known = self._longest[content, face] = max(width_mm(word, face, 1.0) for word in words)
        return known

    def _measure(self, content: Content, face: FaceName, size_mm: float, room_mm: float) -> tuple[int, float]:
        count, width = 0, 0.0
        for setting in self.settings:
            block = lines(content, setting, face, size_mm, room_mm)
            count = max(count, len(block))
            width = max([width, *(width_mm(line.text, face, size_mm) for line in block)])
        return count, width

    def widest_ink(self, numbers: Iterable[Number], face: FaceName) -> float:
        """Inked width, at font size 1, of the widest of these figures."""
        said = [say(number, setting[0]) for number in numbers for setting in self.settings]
        return max((extent(text, face).ink for text in said), default=0.0)

    def widest(self, contents: Iterable[Content], face: FaceName, size_mm: float) -> float:
        """Width in mm that holds any one of `contents` unwrapped."""
        return max((self.room(content, face, size_mm)[1] for content in contents), default=0.0)
