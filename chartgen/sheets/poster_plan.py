"""Where everything on a columns poster stands, in mm from the top left of the page: from the foot upwards, so that the
drawing gets what the words leave. Sizes are those of an A3 sheet grown or shrunk with the paper."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

from chartgen.charts.drawing import FaceName
from chartgen.edition.model import Paper
from chartgen.language.sentences import JOIN
from chartgen.sheets.control import Field
from chartgen.sheets.fitting import LEADING, lines, packed, paragraph_height

POINT_MM = 25.4 / 72
A3 = (297.0, 420.0)
QR_MM = 40.0
"""Least side of the code on an A3 poster, quiet zone not counted (requirement D5)."""
FIELD_COLUMNS = 6
_FIELD_AIR = 1.6
"""Between two lines of fields, in millimetres of the A3 design."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Sizes:
    """Type sizes and measures in mm of one sheet; `unit` is one millimetre of the A3 design."""

    unit: float
    margin: float
    brand: float
    note: float
    """Assumptions and caution: 12 pt on A3, never under 9 pt."""
    imprint: float
    """Document control: never under 8 pt."""
    row_label: float
    number: float
    """Font size of the table's numbers; a narrow column makes it smaller."""
    qr: float
    band: float
    """About the height of the drawing's band of speeds."""


def sizes(paper: Paper) -> Sizes:
    """The sizes of a sheet from its paper."""
    unit = min(paper.width_mm / A3[0], paper.height_mm / A3[1])
    return Sizes(
        unit=unit,
        margin=18.5 * unit,
        brand=max(4.2 * unit, 9 * POINT_MM),
        note=max(12 * POINT_MM * unit, 9 * POINT_MM),
        imprint=max(8 * POINT_MM, 3.0 * unit),
        row_label=max(12 * POINT_MM * unit, 9 * POINT_MM),
        number=9.4 * unit,
        qr=QR_MM * max(unit, 0.5),
        band=17 * unit,
    )


@dataclass(frozen=True, slots=True, kw_only=True)
class Paragraph:
    """A paragraph to be measured: its text, in parts that are not broken where there are several, and its face."""

    parts: tuple[str, ...]
    face: FaceName

    def height(self, size_mm: float, room_mm: float) -> float:
        """Height in mm in a column `room_mm` wide."""
        if len(self.parts) == 1:
            return paragraph_height(self.parts[0], self.face, size_mm, room_mm)
        rows = packed(self.parts, self.face, size_mm, room_mm, JOIN)
        texts = [JOIN.join(self.parts[i] for i in row) for row in rows]
        return sum(paragraph_height(text, self.face, size_mm, room_mm) for text in texts)


@dataclass(frozen=True, slots=True, kw_only=True)
class Block:
    """A rectangle on the page, mm."""

    left: float
    top: float
    width: float
    height: float

    @property
    def bottom(self) -> float:
        return self.top + self.height


@dataclass(frozen=True, slots=True, kw_only=True)
class PosterPlan:
    """Everything that does not depend on the drawing."""

    sizes: Sizes
    paper: Paper
    brand: Block
    drawing: Block
    """The whole drawing, its band of speeds included."""
    table_rows: int
    row_height: float
    caption_height: float
    notes: tuple[Block, ...]
    """One column of notes a language, in reading order from the left."""
    qr: Block | None
    """The code with its quiet zone."""
    imprint: Block
    fields: tuple[Block, ...]
    """The fields of the imprint, from its own top left corner."""


def plan(
    paper: Paper,
    *,
    notes: Sequence[Sequence[Paragraph]],
    fields: Sequence[Field],
    table_rows: int,
    qr_side: float | None,
) -> PosterPlan:
    """Place everything. `notes`: the paragraphs of each column; `qr_side`: side of the code with its quiet zone over
    its side without (None: no code)."""
    s = sizes(paper)
    width = paper.width_mm - 2 * s.margin
    gap = 5 * s.unit
    field_width = (width - (FIELD_COLUMNS - 1) * gap) / FIELD_COLUMNS
    places, imprint_height = _fields(fields, field_width, gap, s)
    foot = paper.height_mm - max(11 * s.unit, 6.0)
    imprint = Block(left=s.margin, top=foot - imprint_height, width=width, height=imprint_height)
    code = s.qr * qr_side if qr_side else 0.0
    room = width - (code + gap - _quiet(s, qr_side) if qr_side else 0.0)
    column = (room - (len(notes) - 1) * gap) / len(notes)
    height = max(*(notes_height(column_notes, column, s) for column_notes in notes), code - 2 * _quiet(s, qr_side))
    notes_top = imprint.top - 4.5 * s.unit - height
    blocks = tuple(
        Block(left=s.margin + i * (column + gap), top=notes_top, width=column, height=height) for i in range(len(notes))
    )
    quiet = _quiet(s, qr_side)
    qr_left = s.margin + width - code + quiet
    qr = Block(left=qr_left, top=notes_top - quiet, width=code, height=code) if qr_side else None
    row_height = LEADING * s.row_label + 0.74 * s.number + 3.0 * s.unit
    caption = LEADING * s.row_label + 1.2 * s.unit
    drawing_top = 20 * s.unit
    drawing_bottom = notes_top - 5.5 * s.unit - table_rows * row_height - caption
    return PosterPlan(
        sizes=s,
        paper=paper,
        brand=Block(left=s.margin, top=9.5 * s.unit, width=width, height=LEADING * s.brand),
        drawing=Block(left=s.margin, top=drawing_top, width=width, height=drawing_bottom - drawing_top),
        table_rows=table_rows,
        row_height=row_height,
        caption_height=caption,
        notes=blocks,
        qr=qr,
        imprint=imprint,
        fields=places,
    )


def mirrored(made: PosterPlan) -> PosterPlan:
    """The plan for a sheet that is read from the right: what stood at the left stands at the right."""

    def across(block: Block) -> Block:
        return replace(block, left=made.paper.width_mm - block.left - block.width)

    def within(block: Block) -> Block:
        return replace(block, left=made.imprint.width - block.left - block.width)

    return replace(
        made,
        notes=tuple(across(block) for block in made.notes),
        qr=across(made.qr) if made.qr is not None else None,
        fields=tuple(within(block) for block in made.fields),
    )


def _quiet(s: Sizes, qr_side: float | None) -> float:
    """Width of the quiet zone: it may reach into the margin, which is clear paper too."""
    return s.qr * (qr_side - 1) / 2 if qr_side else 0.0


def notes_height(paragraphs: Sequence[Paragraph], room: float, s: Sizes) -> float:
    """Height of a column of paragraphs, with the air between them."""
    heights = [paragraph.height(s.note, room) for paragraph in paragraphs]
    return sum(heights) + (len(heights) - 1) * PARAGRAPH_AIR * s.note


PARAGRAPH_AIR = 0.45
"""Air between paragraphs, as a part of the font size."""


def _fields(fields: Sequence[Field], width: float, gap: float, s: Sizes) -> tuple[tuple[Block, ...], float]:
    """Where the fields stand below the imprint's rule, and the height of the whole."""
    top = 3 * s.unit
    places: list[Block] = []
    for start in range(0, len(fields), FIELD_COLUMNS):
        line = fields[start : start + FIELD_COLUMNS]
        height = max(_field_height(field, width, s) for field in line)
        # Arabic tails reach below their line, into the air that follows.
        tail = 1.2 * s.unit
        places += [Block(left=i * (width + gap), top=top, width=width, height=height + tail) for i in range(len(line))]
        top += height + _FIELD_AIR * s.unit
    return tuple(places), top - _FIELD_AIR * s.unit


def _field_height(field: Field, width: float, s: Sizes) -> float:
    label = " · ".join(text for _, _, text in field.labels)
    values = sum(len(lines(value.striptags(), "text-bold", s.imprint, width)) for value in field.values)
    above = len(lines(label, "text", s.imprint, width)) if label else 0
    return (above + values) * LEADING * s.imprint
