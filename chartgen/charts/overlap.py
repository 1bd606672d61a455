"""Whether a drawing can be read: labels that meet, are cut, stand across an edge, or lack contrast with what they
stand on."""

from __future__ import annotations

from dataclasses import dataclass
from itertools import combinations
from typing import Final

import numpy as np
import numpy.typing as npt

from chartgen.charts.canvas import Pieces, Polygon, area, clip, read_pieces
from chartgen.charts.drawing import Drawing, Label
from chartgen.charts.fonts import extent

Box = tuple[float, float, float, float]
_TOUCH_MM: Final = 0.05
"""Boxes may touch by less than this: a twentieth of a millimetre cannot be seen."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Collision:
    """What is wrong with a label. `kind`: "overlap" (with `other`), "cut" (by the drawing's edge), "crossed" (by an
    edge of the ink `other`)."""

    kind: str
    text: str
    other: str


def box(label: Label) -> Box:
    """The inked box (x0, y0, x1, y1) of a label in mm."""
    reach = extent(label.text, label.face)
    size = label.size_mm
    left = label.x_mm - {"left": 0.0, "center": 0.5, "right": 1.0}[label.anchor] * reach.width * size
    before, after = (reach.before, reach.after) if label.dir == "ltr" else (reach.after, reach.before)
    return (
        left + before * size,
        label.y_mm - reach.above * size,
        left + (reach.width - after) * size,
        label.y_mm + reach.below * size,
    )


def _meet(one: Box, two: Box) -> bool:
    across = min(one[2], two[2]) - max(one[0], two[0])
    down = min(one[3], two[3]) - max(one[1], two[1])
    return across > _TOUCH_MM and down > _TOUCH_MM


@dataclass(frozen=True, slots=True)
class _Layer:
    """The pieces of one ink and their bounds (one row of x0, y0, x1, y1 a piece), to find at once what lies near."""

    ink: str
    polygons: tuple[Polygon, ...]
    bounds: npt.NDArray[np.float64]

    def near(self, here: Box) -> list[Polygon]:
        b = self.bounds
        meets = (b[:, 0] < here[2]) & (b[:, 2] > here[0]) & (b[:, 1] < here[3]) & (b[:, 3] > here[1])
        return [self.polygons[i] for i in np.flatnonzero(meets)]


def _layers(pieces: Pieces) -> list[_Layer]:
    return [
        _Layer(
            ink,
            polygons,
            np.array([[*map(min, zip(*p, strict=True)), *map(max, zip(*p, strict=True))] for p in polygons]),
        )
        for ink, polygons in pieces
    ]


def _crossed(here: Box, layers: list[_Layer]) -> str | None:
    """The ink that covers a label's box in part: a label stands wholly on an ink or wholly off it."""
    whole = (here[2] - here[0]) * (here[3] - here[1])
    for layer in layers:
        near = layer.near(here)
        covered = [abs(area(part)) for p in near if (part := clip(p, *here))]
        seen = sum(covered) > _TOUCH_MM * (here[3] - here[1])
        if seen and max(covered) < 0.999 * whole and not _tiled(here, near):
            return layer.ink
    return None


def _tiled(here: Box, polygons: list[Polygon]) -> bool:
    """True where convex pieces of one ink cover the box together: no point of a fine net is left bare."""
    x, y = np.meshgrid(np.linspace(here[0], here[2], 32), np.linspace(here[1], here[3], 96))
    bare = np.ones_like(x, dtype=bool)
    for polygon in polygons:
        inside = np.ones_like(bare)
        turn = 1.0 if area(polygon) > 0 else -1.0
        for (x0, y0), (x1, y1) in zip(polygon, polygon[1:] + polygon[:1], strict=True):
            inside &= turn * ((x1 - x0) * (y - y0) - (y1 - y0) * (x - x0)) >= -1e-6
        bare &= ~inside
    return not bare.any()


def collisions(drawing: Drawing) -> list[Collision]:
    """Every fault of the labels; an empty list where all can be read."""
    found = []
    boxes = [(label, box(label)) for label in drawing.labels if label.text.strip()]
    layers = _layers(read_pieces(drawing.marks_svg))
    for label, here in boxes:
        if (
            here[0] < -_TOUCH_MM
            or here[1] < -_TOUCH_MM
            or here[2] > drawing.width_mm + _TOUCH_MM
            or here[3] > drawing.height_mm + _TOUCH_MM
        ):
            found.append(Collision(kind="cut", text=label.text, other=""))
        ink = _crossed(here, layers)
        if ink is not None:
            found.append(Collision(kind="crossed", text=label.text, other=ink))
    for (one, first), (two, second) in combinations(boxes, 2):
        if _meet(first, second):
            found.append(Collision(kind="overlap", text=one.text, other=two.text))
    return found
