"""The small print under a card's tables: paragraphs and document control, and the height they take at each size."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass

from markupsafe import Markup

from chartgen.charts.drawing import FaceName
from chartgen.sheets import card_plan as plan
from chartgen.sheets.control import Field
from chartgen.sheets.fitting import packed, text_width

JOINT = " · "
PARAGRAPH_GAP_MM = 0.7
FIELDS_RULE_MM = 0.35
FIELDS_PAD_MM = 0.8
FIELDS_GAP_MM = 1.0
_JOINT = Markup(JOINT)  # noqa: S704 - our own constant
_FIELD_JOINT = "\u00a0" * 4
"""As wide as the em space between two fields, in a sign that every font of ours has."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Paragraph:
    """Sentences that flow, or `whole` pieces joined by a dot of which none is broken. Pieces as (text, markup)."""

    pieces: tuple[tuple[str, Markup], ...]
    strong: bool = False
    whole: bool = False

    @property
    def face(self) -> FaceName:
        return "text-bold" if self.strong else "text"

    def lines(self, size_mm: float, room_mm: float) -> tuple[Markup, ...]:
        """What the template sets, a break between two of them: flowing text is one."""
        if not self.whole:
            return (Markup(" ").join(markup for _, markup in self.pieces),)
        laid = packed([text for text, _ in self.pieces], self.face, size_mm, room_mm, JOINT)
        return tuple(_JOINT.join(self.pieces[i][1] for i in line) for line in laid)

    def count(self, size_mm: float, room_mm: float) -> int:
        """Lines it takes."""
        if not self.whole:
            return line_count(" ".join(text for text, _ in self.pieces), self.face, size_mm, room_mm)
        laid = packed([text for text, _ in self.pieces], self.face, size_mm, room_mm, JOINT)
        joined = (JOINT.join(self.pieces[i][0] for i in line) for line in laid)
        return sum(line_count(line, self.face, size_mm, room_mm) for line in joined)


@dataclass(frozen=True, slots=True, kw_only=True)
class Foot:
    """All small print of one side of one card."""

    paragraphs: tuple[Paragraph, ...]
    fields: tuple[Field, ...]

    def height(self, size_mm: float, room_mm: float) -> float:
        """Height in mm at a font size, in a column `room_mm` wide."""
        fields = [f"{' '.join(label[2] for label in f.labels)} {_bare(f.values)}" for f in self.fields]
        count = sum(paragraph.count(size_mm, room_mm) for paragraph in self.paragraphs)
        count += len(packed(fields, "text-bold", size_mm, room_mm, _FIELD_JOINT))
        air = PARAGRAPH_GAP_MM * len(self.paragraphs) + FIELDS_GAP_MM + FIELDS_RULE_MM + FIELDS_PAD_MM
        return count * plan.LEADING * size_mm + air


def sentences(*texts: str, strong: bool = False) -> Paragraph:
    """A paragraph of plain sentences, one behind the other."""
    return Paragraph(pieces=tuple((text, Markup.escape(text)) for text in texts if text), strong=strong)


def line_count(text: str, face: FaceName, size_mm: float, room_mm: float) -> int:
    """Lines that a text broken at spaces takes; a longer word has its line to itself."""
    space = text_width(" ", face, size_mm)
    count, used = 0, room_mm
    for word in text.split(" "):
        width = text_width(word, face, size_mm)
        if count and used + space + width <= room_mm:
            used += space + width
        else:
            count, used = count + 1, width
    return count


def tallest(feet: Iterable[Foot], room_mm: float) -> tuple[float, ...]:
    """Height in mm of the tallest of `feet` at each size of the small print."""
    every = tuple(feet)
    return tuple(max(foot.height(size, room_mm) for foot in every) for size in plan.SMALL_MM)


def _bare(values: Iterable[Markup]) -> str:
    return " ".join(value.striptags() for value in values)
