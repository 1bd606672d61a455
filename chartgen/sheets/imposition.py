"""Cards on a sheet: where each stands, front and back, and where the knife goes."""

from __future__ import annotations

from dataclasses import dataclass

from chartgen.edition.model import Paper

TICK_MM = 4.0
TICK_IN_MM = 5.2
"""A tick begins this far inside the sheet's edge: office printers leave 5 mm blank."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Grid:
    """`columns` x `rows` cards edge to edge (one cut parts two cards), centred on the sheet."""

    columns: int
    rows: int
    left_mm: float
    top_mm: float
    card: Paper
    sheet: Paper

    @property
    def places(self) -> int:
        return self.columns * self.rows

    def front(self, index: int) -> tuple[float, float]:
        """Top left corner in mm of the card at `index` of a front page, row by row from the top left."""
        row, column = divmod(index, self.columns)
        return self.left_mm + column * self.card.width_mm, self.top_mm + row * self.card.height_mm

    def back(self, index: int) -> tuple[float, float]:
        """Top left corner of the same card on the back page, when the sheet is turned over its long edge.

        Turned over the long edge, left and right change places on a sheet that stands upright, top and bottom on one
        that lies.
        """
        left, top = self.front(index)
        if self.sheet.height_mm >= self.sheet.width_mm:
            return self.sheet.width_mm - left - self.card.width_mm, top
        return left, self.sheet.height_mm - top - self.card.height_mm

    def ticks(self) -> tuple[tuple[float, float, float, float], ...]:
        """Cut marks as (x, y, width, height) in mm, zero the long way across: short strokes on every cut line, at the
        sheet's edges and where two cut lines cross, in the cards' margins."""
        across = [self.left_mm + i * self.card.width_mm for i in range(self.columns + 1)]
        down = [self.top_mm + i * self.card.height_mm for i in range(self.rows + 1)]
        marks: list[tuple[float, float, float, float]] = []
        for x in (x for x in across if 0.5 < x < self.sheet.width_mm - 0.5):
            marks.extend((x, y, 0.0, TICK_MM) for y in _strokes(down, self.sheet.height_mm))
        for y in (y for y in down if 0.5 < y < self.sheet.height_mm - 0.5):
            marks.extend((x, y, TICK_MM, 0.0) for x in _strokes(across, self.sheet.width_mm))
        return tuple(marks)


def _strokes(crossings: list[float], length: float) -> list[float]:
    """Starts of the strokes along one cut line: inside both edges of the sheet, and across each inner crossing."""
    inner = [at - TICK_MM / 2 for at in crossings if TICK_IN_MM + TICK_MM < at < length - TICK_IN_MM - TICK_MM]
    return [TICK_IN_MM - TICK_MM / 2, *inner, length - TICK_IN_MM - TICK_MM / 2]


def grid(card: Paper, sheet: Paper) -> Grid | None:
    """As many cards as the sheet holds, edge to edge; None where it holds none."""
    columns, rows = int(sheet.width_mm / card.width_mm + 1e-6), int(sheet.height_mm / card.height_mm + 1e-6)
    if columns < 1 or rows < 1:
        return None
    left, top = (sheet.width_mm - columns * card.width_mm) / 2, (sheet.height_mm - rows * card.height_mm) / 2
    return Grid(columns=columns, rows=rows, left_mm=left, top_mm=top, card=card, sheet=sheet)
