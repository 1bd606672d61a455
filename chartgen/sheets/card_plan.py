"""Where everything stands on a cab card: fixed millimetres for an A6 card, rows and columns that follow its content."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from chartgen.charts.drawing import FaceName
from chartgen.charts.fonts import digit_ratio, width_mm

MARGIN_MM = 7.0
"""Free on every side: for the knife, for lamination, and for the cut marks between two cards."""
MOST_ROWS = 6
"""Speeds a card shows at in-cab size; see `chosen`."""
FRONT_TOP_MM = 18.5
FRONT_HEAD_MM = 9.6
FRONT_ROWS_MM = 65.0
BACK_TOP_MM = 13.5
BACK_HEAD_MM = 10.0
BACK_ROW_MM = 5.7
LEAST_DIGIT_MM = 3.7
"""Digit height that can be read in a cab at 0.7 m (requirements: at least 3.7 mm, better 4.5)."""
_MOST_TOTAL_MM = 13.0
_WIDEST = 0.92
_FILLED = 0.68
"""Height of the digits as a part of their row: the rule and the bar beneath keep clear of them."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Column:
    """A column of figures: its name, where it begins and how wide it is, from the card's left edge in reading order."""

    key: str
    start_mm: float
    width_mm: float


def chosen(speeds: int) -> tuple[int, ...]:
    """Indices of the speeds a card shows: all, or every second, third … counted down from the highest, so that the
    highest is always there and a driver between two rows finds the longer distance in the next one.

    >>> chosen(9), chosen(4)
    ((0, 2, 4, 6, 8), (0, 1, 2, 3))
    """
    step = -(-speeds // MOST_ROWS)
    return tuple(range(speeds - 1, -1, -step))[::-1]


def columns(keys: Sequence[tuple[str, float]], inner_mm: float) -> tuple[Column, ...]:
    """Columns side by side over `inner_mm`, as wide as their shares say."""
    unit = inner_mm / sum(share for _, share in keys)
    found, start = [], MARGIN_MM
    for key, share in keys:
        found.append(Column(key=key, start_mm=start, width_mm=share * unit))
        start += share * unit
    return tuple(found)


def number_size(texts: Sequence[str], room_mm: float, row_mm: float, face: FaceName = "numeral-bold") -> float:
    """The largest font size in mm at which every number fits its column and its row."""
    ratio = digit_ratio(face)
    size = min(_MOST_TOTAL_MM, _FILLED * row_mm) / ratio
    widest = max(width_mm(text, face, 1.0) for text in texts)
    return min(size, _WIDEST * room_mm / widest)
