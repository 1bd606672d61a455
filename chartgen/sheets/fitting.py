"""How much room words take before they are set: lines by real glyph widths, and the headline in the free paper."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from chartgen.charts.drawing import FaceName
from chartgen.charts.fonts import width_mm
from chartgen.errors import MachineFault
from chartgen.language.numbers import NARROW_NO_BREAK, NO_BREAK

LEADING = 1.24
"""Line pitch of running text as a part of the font size."""
_SLACK = 1.03
"""Widths are measured glyph by glyph, without kerning and by family: three per cent are kept for the difference."""
HEADLINE_LEADING = 1.08
_FEWER_LINES = 0.85
"""A headline may be this much smaller than it could be if that saves a line: short words then do not stand alone."""
HEADLINE_APART = 0.55
"""Air between the headlines of two languages, as a part of the font size."""


def text_width(text: str, face: FaceName, size_mm: float) -> float:
    """Width of a text that may mix families (Arabic words, Latin units), in mm."""
    # No family of ours has the narrow no-break space; the engine sets a plain one's width or less.
    text = text.replace(NARROW_NO_BREAK, NO_BREAK)
    try:
        return width_mm(text, face, size_mm) * _SLACK
    except MachineFault:
        if len(text) < 2:
            raise
        # No one family has all of it: measure it letter by letter, each in the family that has it.
        return sum(width_mm(letter, face, size_mm) for letter in text) * _SLACK


def lines(text: str, face: FaceName, size_mm: float, room_mm: float) -> tuple[str, ...]:
    """The text broken at spaces into lines of at most `room_mm`; a longer word stands alone."""
    found: list[str] = []
    for word in text.split(" "):
        longer = f"{found[-1]} {word}" if found else word
        if found and text_width(longer, face, size_mm) <= room_mm:
            found[-1] = longer
        else:
            found.append(word)
    return tuple(found)


def packed(fragments: Sequence[str], face: FaceName, size_mm: float, room_mm: float, joint: str) -> list[list[int]]:
    """Fragments laid side by side into lines of at most `room_mm`, none broken; indices, line by line. A fragment wider
    than the room has its line to itself."""
    found: list[list[int]] = []
    for index, fragment in enumerate(fragments):
        line = joint.join([*(fragments[i] for i in found[-1]), fragment]) if found else fragment
        if found and text_width(line, face, size_mm) <= room_mm:
            found[-1].append(index)
        else:
            found.append([index])
    return found


def paragraph_height(text: str, face: FaceName, size_mm: float, room_mm: float) -> float:
    """Height in mm that a paragraph takes in a column `room_mm` wide."""
    return len(lines(text, face, size_mm, room_mm)) * LEADING * size_mm


@dataclass(frozen=True, slots=True, kw_only=True)
class HeadlineLine:
    """One line of a headline: which block (language) it belongs to, its words, its top and its font size in mm."""

    block: int
    text: str
    top_mm: float
    size_mm: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Headline:
    """The headlines of all languages, one above the other."""

    lines: tuple[HeadlineLine, ...]
    bottom_mm: float


Skyline = Sequence[tuple[float, float, float]]
"""Free paper as (start, end, y) in reading direction: nothing is drawn above y between start and end."""


def fit_headline(
    texts: Sequence[str],
    skyline: Skyline,
    *,
    top_mm: float,
    sizes_mm: Sequence[float],
    clear_mm: float,
    later_scale: float = 1.0,
    against: Sequence[int] = (),
) -> Headline | None:
    """The largest of `sizes_mm` (falling) at which all `texts` fit into the free paper, or one a little smaller that
    saves lines; None where none does.

    `skyline` and `top_mm` in the same millimetres. Each line is as wide as the free paper down to its foot allows,
    `clear_mm` kept from what is drawn. `later_scale`: size of the second and later languages over the first's (1:
    equal). `against`: which of the texts run against the sheet's direction; they are set flush at their own start, so
    they get a rectangle, as wide as the free paper at its foot.
    """
    best: Headline | None = None
    for size in sizes_mm:
        if best is not None and size < _FEWER_LINES * best.lines[0].size_mm:
            break
        found = _set(texts, skyline, top_mm, [size, *[size * later_scale] * (len(texts) - 1)], clear_mm, against)
        if found is not None and (best is None or len(found.lines) < len(best.lines)):
            best = found
    return best


def _set(
    texts: Sequence[str],
    skyline: Skyline,
    top: float,
    sizes: Sequence[float],
    clear: float,
    against: Sequence[int],
) -> Headline | None:
    placed: list[HeadlineLine] = []
    y = top
    for block, (text, size) in enumerate(zip(texts, sizes, strict=True)):
        y += HEADLINE_APART * size if block else 0.0
        setting = _rectangle if block in against else _stairs
        found = setting(text, skyline, y, size, clear)
        if found is None:
            return None
        placed += [
            HeadlineLine(block=block, text=line, top_mm=y + i * size * HEADLINE_LEADING, size_mm=size)
            for i, line in enumerate(found)
        ]
        y += len(found) * size * HEADLINE_LEADING
    return Headline(lines=tuple(placed), bottom_mm=y)


def _stairs(text: str, skyline: Skyline, top: float, size: float, clear: float) -> list[str] | None:
    """Lines each as wide as the free paper down to its own foot; None where a word does not fit."""
    found: list[str] = []
    words = text.split(" ")
    while words:
        foot = top + (len(found) + 1) * size * HEADLINE_LEADING + clear
        room = _free_width(skyline, foot) - clear
        count = len(words)
        while count and text_width(" ".join(words[:count]), "numeral-bold", size) > room:
            count -= 1
        if not count:
            return None
        found.append(" ".join(words[:count]))
        words = words[count:]
    return found


def _rectangle(text: str, skyline: Skyline, top: float, size: float, clear: float) -> list[str] | None:
    """Lines all as wide as the free paper down to the last one's foot, as few as may be; None where none will do."""
    for count in range(1, len(text.split(" ")) + 1):
        room = _free_width(skyline, top + count * size * HEADLINE_LEADING + clear) - clear
        found = lines(text, "numeral-bold", size, room)
        if len(found) <= count and all(text_width(line, "numeral-bold", size) <= room for line in found):
            return list(found)
    return None


def _free_width(skyline: Skyline, foot: float) -> float:
    """How far the paper is free from the start edge, down to `foot`."""
    reached = 0.0
    for start, end, y in skyline:
        if y < foot:
            return start
        reached = end
    return reached
