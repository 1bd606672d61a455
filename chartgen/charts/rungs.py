"""The rungs drawing: one level bar a line, its name before it, its printed figure behind it, all from one upright.

For what is no stopping distance: speeds that remain, greatest speeds, following gaps, differences. Lengths are to scale
within one drawing; figures are the printed ones. Laid out for one language, since names decide how far the bars reach.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import Final

from chartgen.charts import canvas
from chartgen.charts.drawing import Anchor, Drawing, FaceName, Label, Role
from chartgen.charts.fonts import extent, width_mm
from chartgen.charts.inks import Palette
from chartgen.charts.words import LEADING, Words, wrap

NARROW, WIDE = "\u202f", "\u00a0"
NAME_MM: Final = 3.4
FIGURE_MM: Final = 5.2
"""Font sizes on a page, where a millimetre is shown as 4 px: words of 13.6 px, digits of 14.5 px height."""
PITCH_MM: Final = 8.4
BAR_MM: Final = 5.0
GAP_MM: Final = 1.6
UPRIGHT_MM: Final = 0.5
LEAST_BAR_MM: Final = 0.6
"""A figure that is not 0 shows at least this much; 0 shows the upright alone."""
NAME_SHARE: Final = 0.36
"""Names take at most this part of the width, then they go to another line."""
ROOM_FOR_FIGURE: Final = 1.0
HEAVIER: Final = 1.06
"""Pages set the words of a drawing a step heavier than they are measured here, and so wider."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Rung:
    """One bar. `length`: unrounded, in any unit, the same for all; below 0 it runs to the other side of the upright.

    `figure`: the printed figure as the language writes it, without its unit, which stands beside the drawing; or, with
    `words`, what is said in its place. `row`, `quantity`: which figure of the table it prints.
    """

    name: str
    length: float
    figure: str
    words: bool = False
    row: int | None = None
    quantity: str | None = None


def rungs(
    bars: Sequence[Rung], *, name: str, language: Words, palette: Palette, width_mm: float, ink: str = "braking"
) -> Drawing:
    """Draw `bars` from the top down, in the language's direction: in "rtl" names at the right, bars run to the left.

    Formula: bar length in mm = ``length x scale``, one scale for all: the longest and its figure fill the width.

    Args:
        bars: one or more.
        name: of the drawing.
        language: whose direction and face the words have.
        palette: the inks.
        width_mm: of the drawing, at least 60.
        ink: of the bars.

    Returns:
        A `Drawing` as high as it has bars.

    Raises:
        ValueError: no bars, or too narrow a drawing.

    Source: our own.
    """
    # The condensed face has no narrow no-break space; the wide one reads the same.
    bars = [replace(b, name=b.name.replace(NARROW, WIDE), figure=b.figure.replace(NARROW, WIDE)) for b in bars]
    if not bars or width_mm < 60.0:
        raise ValueError("a rungs drawing needs a bar and 60 mm of width")
    plan = _plan(bars, width_mm)
    pieces = _pieces(bars, plan)
    labels = [label for number, bar in enumerate(bars) for label in _labels(bar, plan, number, language)]
    if language.direction == "rtl":
        pieces = canvas.mirrored(pieces, width_mm)
        labels = [_mirrored(label, width_mm) for label in labels]
    upright = canvas.rectangle(plan.upright - UPRIGHT_MM / 2, 0.0, plan.upright + UPRIGHT_MM / 2, plan.height)
    posts = canvas.mirrored((upright,), width_mm) if language.direction == "rtl" else (upright,)
    return Drawing(
        name=name,
        width_mm=width_mm,
        height_mm=plan.height,
        direction=language.direction,
        marks_svg=canvas.svg(((ink, tuple(pieces)), ("type", posts)), palette, width_mm, plan.height),
        labels=tuple(labels),
    )


@dataclass(frozen=True, slots=True)
class _Plan:
    upright: float
    scale: float
    height: float
    tops: tuple[float, ...]
    lines: tuple[tuple[str, ...], ...]


def _plan(bars: Sequence[Rung], width: float) -> _Plan:
    room = NAME_SHARE * width
    lines = tuple(wrap(bar.name, "text", NAME_MM, room / HEAVIER) for bar in bars)
    names = HEAVIER * max(width_mm(line, "text", NAME_MM) for block in lines for line in block)
    figures = max(
        width_mm(bar.figure, "text-bold", NAME_MM) if bar.words else width_mm(bar.figure, "numeral-bold", FIGURE_MM)
        for bar in bars
    )
    known = [bar.length for bar in bars if math.isfinite(bar.length)]
    ahead, behind = max([0.0, *known]), max([0.0, *(-x for x in known)])
    # Bars that run backwards carry their figure on their far side too.
    back_room = figures + GAP_MM if behind else 0.0
    free = width - names - 2 * GAP_MM - figures - ROOM_FOR_FIGURE - back_room
    scale = max(free, 1.0) / (ahead + behind) if ahead + behind else 0.0
    tops, top = [], 0.0
    for block in lines:
        tops.append(top)
        top += max(PITCH_MM, LEADING * NAME_MM * len(block) + 1.2)
    return _Plan(names + GAP_MM + back_room + behind * scale, scale, round(top, 2), (*tops, top), lines)


def _span(bar: Rung, plan: _Plan) -> float:
    """Signed length of the bar in mm."""
    if not math.isfinite(bar.length) or bar.length == 0.0:
        return 0.0
    return math.copysign(max(abs(bar.length) * plan.scale, LEAST_BAR_MM), bar.length)


def _pieces(bars: Sequence[Rung], plan: _Plan) -> tuple[canvas.Polygon, ...]:
    made = []
    for number, bar in enumerate(bars):
        span = _span(bar, plan)
        middle = (plan.tops[number] + plan.tops[number + 1]) / 2
        if span:
            edge = math.copysign(UPRIGHT_MM / 2, span)
            ends = plan.upright + edge, plan.upright + edge + span
            made.append(canvas.rectangle(min(ends), middle - BAR_MM / 2, max(ends), middle + BAR_MM / 2))
    return tuple(made)


def _labels(bar: Rung, plan: _Plan, number: int, language: Words) -> list[Label]:
    middle = (plan.tops[number] + plan.tops[number + 1]) / 2
    block = plan.lines[number]
    first = middle - (len(block) - 1) * LEADING * NAME_MM / 2
    span = _span(bar, plan)
    edge = UPRIGHT_MM / 2 + GAP_MM / 2
    made = [
        _label(line, 0.0, first + i * LEADING * NAME_MM, NAME_MM, "left", "text", "name", language)
        for i, line in enumerate(block)
    ]
    face: FaceName = "text-bold" if bar.words else "numeral-bold"
    size = NAME_MM if bar.words else FIGURE_MM
    role: Role = "verdict" if bar.words else "part"
    anchor: Anchor = "right" if span < 0.0 else "left"
    at = plan.upright + span + (edge if span >= 0.0 else -edge)
    return [*made, _label(bar.figure, at, middle, size, anchor, face, role, language, bar.row, bar.quantity)]


def _label(
    text: str, x: float, middle: float, size: float, anchor: Anchor, face: FaceName, role: Role, language: Words,
    row: int | None = None, quantity: str | None = None,
) -> Label:  # fmt: skip
    """A label whose capitals or digits are centred on `middle`."""
    above = max(0.5, extent(text, face).above) if role != "part" else 0.698
    return Label(
        text=text, x_mm=round(x, 3), y_mm=round(middle + above * size / 2, 3), size_mm=size, anchor=anchor, face=face,
        ink="type", lang=language.tag, dir="ltr" if role == "part" else language.direction, role=role, row=row,
        quantity=quantity,
    )  # fmt: skip


def _mirrored(label: Label, width: float) -> Label:
    turned: dict[Anchor, Anchor] = {"left": "right", "right": "left", "center": "center"}
    return Label(
        text=label.text, x_mm=round(width - label.x_mm, 3), y_mm=label.y_mm, size_mm=label.size_mm,
        anchor=turned[label.anchor], face=label.face, ink=label.ink, lang=label.lang, dir=label.dir, role=label.role,
        row=label.row, quantity=label.quantity,
    )  # fmt: skip
