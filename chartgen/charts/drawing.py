"""The records that leave this floor. Millimetres throughout, origin at the top left, y downwards, x physical (left to
right)."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

Anchor = Literal["left", "center", "right"]
Direction = Literal["ltr", "rtl"]
FaceName = Literal["numeral-bold", "numeral", "text", "text-bold"]
Role = Literal["total", "part", "lag", "speed", "ruler", "name", "unit", "verdict", "driver"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Label:
    """One run of text on one line. `y_mm` is its baseline, `size_mm` the font size, `anchor` the physical side at
    `x_mm`.

    `role`: "total" (the stopping distance on a column), "part" and "lag" (a part's distance), "name" (a part's name),
    "driver" (a series' name), "speed", "ruler", "unit", "verdict" (does not stop). `row` and `quantity` say which
    figure of the table it prints; both are None where it prints none (the ruler, words, units).
    """

    text: str
    x_mm: float
    y_mm: float
    size_mm: float
    anchor: Anchor
    face: FaceName
    ink: str
    lang: str
    dir: Direction
    role: Role
    row: int | None = None
    quantity: str | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Drawing:
    """Marks without text, and the labels that stand on them.

    `marks_svg`: an ``<svg>`` with a viewBox in mm, no size, no ids, no style: one ``<path class="ink-NAME"
    fill="#rrggbb">`` an ink. `total_digit_mm`: digit height of the totals (0 where none is printed), for the check
    against the reading distance. `unlabelled`: rows whose total, or whose “does not stop”, found no room (the columns
    are too many or too narrow). `course`: what one course of the braking part is worth, in the distance unit (0 where
    no joint is drawn). `skyline`: free paper above the columns, as (x0, x1, y) in reading order from left to right:
    nothing is drawn above y between x0 and x1.
    """

    name: str
    width_mm: float
    height_mm: float
    direction: Direction
    marks_svg: str
    labels: tuple[Label, ...]
    total_digit_mm: float = 0.0
    unlabelled: tuple[int, ...] = ()
    course: float = 0.0
    scale_mm_per_m: float = 0.0
    spread: bool = False
    """True where whiskers stand beside columns; what they mean has to be said."""
    skyline: tuple[tuple[float, float, float], ...] = ()


def total_digit_height(drawing: Drawing) -> float:
    """Height in mm of the digits of the drawing's totals; 0.0 where no column has a total."""
    return drawing.total_digit_mm
