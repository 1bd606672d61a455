"""What was really drawn, read back from the path data of a drawing's marks: the columns and the extent of their
parts."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from itertools import pairwise

from chartgen.charts.canvas import Polygon, read_pieces
from chartgen.charts.drawing import Drawing

PARTS = ("reaction", "lag", "braking")


@dataclass(frozen=True)
class Drawn:
    """A column: where it stands, and from where to where each part reaches (y of foot and top, in mm)."""

    x0: float
    x1: float
    parts: dict[str, tuple[float, float]]

    @property
    def foot(self) -> float:
        return max(foot for foot, _ in self.parts.values())

    @property
    def top(self) -> float:
        return min(top for _, top in self.parts.values())


def bounds(polygons: Sequence[Polygon]) -> tuple[float, float, float, float]:
    xs = [x for polygon in polygons for x, _ in polygon]
    ys = [y for polygon in polygons for _, y in polygon]
    return min(xs), min(ys), max(xs), max(ys)


def pieces_of(drawing: Drawing, ink: str) -> tuple[Polygon, ...]:
    return next((polygons for name, polygons in read_pieces(drawing.marks_svg) if name == ink), ())


def drawn_columns(drawing: Drawing) -> list[Drawn]:
    """The columns from left to right. Every column has a reaction; its sides are the column's."""
    found = []
    for x0, x1 in sorted({(b[0], b[2]) for b in (bounds([p]) for p in pieces_of(drawing, "reaction"))}):
        parts = {}
        for ink in PARTS:
            # The plates behind words lie within their part and do not reach further.
            here = [p for p in pieces_of(drawing, ink) if (b := bounds([p]))[0] > x0 - 0.01 and b[2] < x1 + 0.01]
            if here:
                _, top, _, foot = bounds(here)
                parts[ink] = (foot, top)
        found.append(Drawn(x0=x0, x1=x1, parts=parts))
    return found


def lengths_m(column: Drawn, drawing: Drawing) -> dict[str, float]:
    """Length of each part in metres of road, the white gaps between parts given back half to each neighbour."""
    names = [name for name in PARTS if name in column.parts]
    edges = [column.parts[names[0]][0]]
    for below, above in pairwise(names):
        edges.append((column.parts[below][1] + column.parts[above][0]) / 2)
    edges.append(column.parts[names[-1]][1])
    return {
        name: (low - high) / drawing.scale_mm_per_m for name, (low, high) in zip(names, pairwise(edges), strict=True)
    }
