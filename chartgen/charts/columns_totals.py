"""Where the totals sit: each on its column like a capital on a pillar, as large as all of them can be.

A total as wide as its column stands centred on it. A wider one stands flush with its column's end edge and reaches
back over the lower column before it, where there is free paper. What finds no seat even at the least size is left to
the table and reported, never laid over something else.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Final

TOTAL_GAP: Final = 0.1
"""Air between a column and its total, as a part of the total's font size."""
_CLEAR_MM: Final = 0.45
_REACH: Final = 0.6
"""How far a total may reach beyond its column, as a part of the column's width; further, and it seems to be its
neighbour's."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Column:
    """What seating needs of a column: where it stands, where it ends, the inked width of its total at font size 1 (None
    where it has none to show)."""

    x0: float
    x1: float
    top: float
    ink: float | None
    air: float = TOTAL_GAP
    """Between the column and the digits' foot, at font size 1: more where a digit separator hangs below the digits."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Seat:
    """Inked box of a total, in logical mm. `centred`: on its column; else flush with its end edge."""

    column: int
    x0: float
    x1: float
    y0: float
    y1: float
    centred: bool


def _candidates(column: Column, ink: float, reach: float) -> list[tuple[float, float, bool]]:
    middle = (column.x0 + column.x1) / 2
    if ink <= column.x1 - column.x0 + 1e-6:
        return [(middle - ink / 2, middle + ink / 2, True)]
    found = []
    if ink - (column.x1 - column.x0) <= reach + 1e-6:
        found.append((column.x1 - ink, column.x1, False))
    return found


def _free(seat: Seat, columns: Sequence[Column], seats: Sequence[Seat]) -> bool:
    for index, other in enumerate(columns):
        if index == seat.column or other.x1 + _CLEAR_MM <= seat.x0 or other.x0 - _CLEAR_MM >= seat.x1:
            continue
        if other.top < seat.y1 + _CLEAR_MM:
            return False
    clear = max(_CLEAR_MM, 0.1 * (seat.y1 - seat.y0))
    return not any(
        taken.x0 - clear < seat.x1
        and taken.x1 + clear > seat.x0
        and taken.y0 - clear < seat.y1
        and taken.y1 + clear > seat.y0
        for taken in seats
    )


def seats(
    columns: Sequence[Column], size: float, digit: float, *, reach: float | None = None, all_or_none: bool = False
) -> tuple[tuple[Seat, ...], int]:
    """(the seats found at this font size, how many totals found none). `digit` is the digit height in mm.

    `all_or_none`: stop at the first that finds none. Seats are given from the last column back, so that where not all
    fit the greatest distances keep theirs.
    """
    found: list[Seat] = []
    without = 0
    for index in range(len(columns) - 1, -1, -1):
        column = columns[index]
        if column.ink is None:
            continue
        foot = column.top - column.air * size
        allowed = _REACH * (column.x1 - column.x0) if reach is None else reach
        for x0, x1, centred in _candidates(column, column.ink * size, allowed):
            seat = Seat(column=index, x0=x0, x1=x1, y0=foot - digit, y1=foot, centred=centred)
            if x0 >= -0.01 and seat.y0 >= 0 and _free(seat, columns, found):
                found.append(seat)
                break
        else:
            without += 1
            if all_or_none:
                break
    return tuple(found), without
