"""Words that are placed by hand: the labels of a drawing and the lines of a headline, as markup and millimetres."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from markupsafe import Markup, escape

from chartgen.charts.drawing import Drawing, Label
from chartgen.charts.fonts import ARABIC, LATIN, digit_ratio, extent, face_for, width_mm
from chartgen.charts.inks import Palette
from chartgen.language.headline import Piece
from chartgen.language.html import isolate
from chartgen.language.load import Language
from chartgen.sheets.account import Account
from chartgen.sheets.fitting import Headline, text_width
from chartgen.sheets.poster_plan import Block
from chartgen.sheets.sheet import Box

_BASELINE = {LATIN: 0.875, ARABIC: 0.643}
"""Base line of a line as high as its font size, below its top, in parts of that size: half the leading plus the ascent
of the font's own metrics."""
_PLACE_TOLERANCE_MM = 1.0


@dataclass(frozen=True, slots=True, kw_only=True)
class PlacedLabel:
    """A label as the template sets it: a box as wide as the text may be, in mm from the drawing's top left corner."""

    text: str
    left: float
    top: float
    width: float
    size: float
    align: str
    family: str
    weight: int
    colour: str
    lang: str
    dir: str


_IN_THE_TABLE = frozenset({"speed", "driver"})
"""Roles of labels that the table beneath prints as its head."""


def placed_labels(drawing: Drawing, block: Block, inks: Palette, account: Account) -> tuple[PlacedLabel, ...]:
    """The labels of a drawing that stands in `block`, entered in the account with their places."""
    placed = []
    for label in drawing.labels:
        if label.role in _IN_THE_TABLE:
            continue
        _enter(label, block, account)
        placed.append(_placed(label, inks))
    return tuple(placed)


def _enter(label: Label, block: Block, account: Account) -> None:
    if label.row is not None and label.quantity in {"reaction", "lag", "braking", "stopping"}:
        box = _ink_box(label, block)
        account.enter(label.row, f"printed_{label.quantity}", label.lang, (1, box))
    else:
        account.fact(label.text)


def _ink_box(label: Label, block: Block) -> Box:
    left = block.left + _left(label)
    base = block.top + label.y_mm
    reach = extent(label.text, label.face)
    grown = _PLACE_TOLERANCE_MM
    return (
        left - grown,
        base - reach.above * label.size_mm - grown,
        left + width_mm(label.text, label.face, label.size_mm) + grown,
        base + reach.below * label.size_mm + grown,
    )


def _left(label: Label) -> float:
    width = width_mm(label.text, label.face, label.size_mm)
    return label.x_mm - {"left": 0.0, "center": width / 2, "right": width}[label.anchor]


def _placed(label: Label, inks: Palette) -> PlacedLabel:
    face = face_for(label.text, label.face)
    width = width_mm(label.text, label.face, label.size_mm)
    # A box twice as wide as the text around its anchor: the engine's own widths differ by kerning, never that much.
    left = {"left": label.x_mm, "center": label.x_mm - width, "right": label.x_mm - 2 * width}[label.anchor]
    return PlacedLabel(
        text=label.text,
        left=round(left, 3),
        top=round(label.y_mm - _BASELINE[face.family] * label.size_mm, 3),
        width=round(2 * width, 3),
        size=label.size_mm,
        align=label.anchor,
        family=face.family,
        weight=face.weight,
        colour=inks.ink(label.ink).srgb,
        lang=label.lang,
        dir=label.dir,
    )


@dataclass(frozen=True, slots=True, kw_only=True)
class HeadlineBlock:
    """The headline of one language: its lines as markup, its top and font size in mm."""

    language: Language
    lines: tuple[Markup, ...]
    top: float
    size: float
    width: float
    """Width that the widest line may need."""


def headline_block(
    fitted: Headline, block: int, pieces: Sequence[Piece], language: Language, account: Account, *, top_mm: float
) -> HeadlineBlock:
    """The lines of one language with its numbers isolated and entered as figures of the table. `top_mm`: where the
    first line of all begins on the page."""
    for piece in pieces:
        if piece.quantity is not None and piece.row is not None:
            column = piece.quantity if piece.quantity == "speed" else f"printed_{piece.quantity}"
            account.enter(piece.row, column, language.tag)
    own = [line for line in fitted.lines if line.block == block]
    letters = [(letter, piece) for piece in pieces for letter in piece.text]
    width = max(text_width(line.text, "numeral-bold", line.size_mm) for line in own)
    made = []
    at = 0
    for line in own:
        made.append(_line(letters[at : at + len(line.text)]))
        at += len(line.text) + 1  # the space at which the line was broken
    top, size = top_mm + own[0].top_mm, own[0].size_mm
    return HeadlineBlock(language=language, lines=tuple(made), top=top, size=size, width=width)


def _line(letters: Sequence[tuple[str, Piece]]) -> Markup:
    made = Markup("")
    start = 0
    for end in range(1, len(letters) + 1):
        if end == len(letters) or letters[end][1] is not letters[start][1]:
            text = "".join(letter for letter, _ in letters[start:end])
            made += isolate(text) if letters[start][1].quantity else escape(text)
            start = end
    return made


def reading_order(drawing: Drawing) -> list[tuple[float, float, float]]:
    """The drawing's skyline, measured from the side at which reading begins."""
    if drawing.direction == "ltr":
        return list(drawing.skyline)
    return [(drawing.width_mm - end, drawing.width_mm - start, y) for start, end, y in reversed(drawing.skyline)]


def digit_centre(size_mm: float) -> float:
    """Height of the middle of a numeral above its base line, in mm."""
    return digit_ratio("numeral") * size_mm / 2
