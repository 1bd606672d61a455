"""Where everything stands on a cab card: fixed millimetres for an A6 card; rows and small print share what is left.

The numerals come first: small print grows only while the digits keep the height that a glance needs.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

from chartgen.charts.drawing import FaceName
from chartgen.charts.fonts import digit_ratio, width_mm
from chartgen.sheets.fitting import text_width

MARGIN_MM = 7.0
"""Free on every side: for the knife, for lamination, and for the cut marks between two cards."""
MOST_ROWS, FEWEST_ROWS = 6, 3
"""Speeds a card shows at in-cab size, and where its back has least room; see `chosen`."""
NAME_MM = 5.0
NAME_TOP_MM = 7.5
SURFACE_MM = 3.6
SURFACE_TOP_MM = 13.0
HEAD_MM = 2.6
"""Font size of a column's name."""
GROUP_MM = 2.8
"""Font size of the name over several columns."""
FRONT_TOP_MM = 17.4
BACK_TOP_MM = 13.2
BACK_GAP_MM = 2.4
FOOT_GAP_MM = 2.2
"""Air between the last table and the small print."""
IMPRINT_TOP_MM = 4.6
"""Top of the printer's line on a sheet: office printers leave 5 mm blank, cards begin 7 mm below the cut."""
LEAST_DIGIT_MM = 3.7
"""Digit height that can be read in a cab at 0.7 m (requirements: at least 3.7 mm, better 4.5)."""
GLANCE_DIGIT_MM = 8.0
"""Digit height of a total on the front; smaller only where the small print would fall under 6 pt."""
SMALL_MM = (2.82, 2.7, 2.6, 2.5, 2.4, 2.3, 2.2, 2.12)
"""Font sizes of running text and document control, 8 pt down to 6 pt: held in the hand (requirement D1)."""
LEADING = 1.22
_MOST_ROW_MM = 14.0
_MOST_TOTAL_MM = 13.0
_WIDEST = 0.92
_CLOSE_MM = 1e-6
_FILLED = 0.68
"""Height of the digits as a part of their row: the rule and the bar beneath keep clear of them."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Column:
    """A column of figures: where it begins and how wide it is, from the card's starting edge in reading order."""

    start_mm: float
    width_mm: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Setting:
    """What one side is set in on all cards of a document: height of a row, alike on all, and the font size of the small
    print, alike on all in one language (by tag)."""

    row_mm: float
    small_mm: Mapping[str, float]


def row_for(digit_mm: float) -> float:
    """Height in mm of a row whose digits are `digit_mm` high."""
    return digit_mm / _FILLED


def settled(feet_mm: Mapping[str, Sequence[float]], free_mm: float, rows: int, good_digit_mm: float) -> Setting | None:
    """Rows and small print that share `free_mm`; None where the digits would be too small to read.

    `feet_mm`: by language, height of the tallest small print at each of the sizes `SMALL_MM`. The small print is as
    large as leaves digits of `good_digit_mm`, else the smallest, and the rows take the rest. A language that needs
    fewer words then has larger ones.
    """
    heights = [free_mm - max(feet[i] for feet in feet_mm.values()) for i in range(len(SMALL_MM))]
    left = next((x for x in heights if x >= rows * row_for(good_digit_mm)), heights[-1])
    row = min(left / rows, _MOST_ROW_MM)
    if row < row_for(LEAST_DIGIT_MM):
        return None
    small = {
        tag: next(size for size, foot in zip(SMALL_MM, feet, strict=True) if foot <= free_mm - rows * row + _CLOSE_MM)
        for tag, feet in feet_mm.items()
    }
    return Setting(row_mm=row, small_mm=small)


def chosen(speeds: int, most: int = MOST_ROWS) -> tuple[int, ...]:
    """Indices of the speeds a card shows: all, or every second, third … counted down from the highest, so that the
    highest is always there and a driver between two rows finds the longer distance in the next one.

    >>> chosen(9), chosen(4), chosen(9, 4)
    ((0, 2, 4, 6, 8), (0, 1, 2, 3), (2, 5, 8))
    """
    step = -(-speeds // most)
    return tuple(range(speeds - 1, -1, -step))[::-1]


def columns(shares: Sequence[float], inner_mm: float) -> tuple[Column, ...]:
    """Columns side by side over `inner_mm`, as wide as their shares say."""
    unit = inner_mm / sum(shares)
    found, start = [], MARGIN_MM
    for share in shares:
        found.append(Column(start_mm=start, width_mm=share * unit))
        start += share * unit
    return tuple(found)


def number_size(texts: Sequence[str], room_mm: float, row_mm: float, face: FaceName) -> float:
    """The largest font size in mm at which every number fits its column and its row."""
    ratio = digit_ratio(face)
    size = min(_MOST_TOTAL_MM, _FILLED * row_mm) / ratio
    widest = max(width_mm(text, face, 1.0) for text in texts)
    return min(size, _WIDEST * room_mm / widest)


def shrunk(text: str, face: FaceName, size_mm: float, room_mm: float) -> float:
    """`size_mm`, or the smaller size at which `text` fits `room_mm` on one line."""
    return min(size_mm, room_mm / max(text_width(text, face, 1.0), 1e-9))
