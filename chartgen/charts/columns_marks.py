"""What is inked: the pieces of the columns, ink by ink, from a plan. No word of any language is needed for it."""

from __future__ import annotations

import math
from collections import defaultdict
from typing import Final

from chartgen.charts.canvas import Pieces, Polygon, clip, rectangle
from chartgen.charts.columns_frame import Edge, Frame, Post
from chartgen.charts.columns_text import Plate
from chartgen.charts.measures import Measures

_ORDER: Final = ("braking", "reaction", "lag", "type", "paper")
"""Paper is laid on last: it is the lag part's hatch."""


class _Sheet:
    """Pieces gathered by ink."""

    def __init__(self) -> None:
        self.by_ink: dict[str, list[Polygon]] = defaultdict(list)

    def add(self, ink: str, *polygons: Polygon) -> None:
        self.by_ink[ink] += [polygon for polygon in polygons if polygon]

    def pieces(self) -> Pieces:
        return tuple((ink, tuple(self.by_ink[ink])) for ink in _ORDER if self.by_ink[ink])


def pieces(
    frame: Frame,
    plates: tuple[Plate, ...],
    strokes: tuple[Polygon, ...],
    lintels: tuple[tuple[float, ...], ...],
    m: Measures,
) -> Pieces:
    """All pieces of the drawing in logical mm (reading direction), in the order in which they are laid on."""
    sheet = _Sheet()
    for index, post in enumerate(frame.posts):
        for edge in post.edges:
            here = [plate for plate in plates if plate.post == index and plate.part == edge.part]
            if edge.part == "reaction":
                _reaction(sheet, post, edge, here, m)
            elif edge.part == "lag":
                _lag(sheet, post, edge, here, m)
            else:
                _braking(sheet, frame, post, edge, here, m)
        _whisker(sheet, frame, post, m)
    for x0, y0, x1, y1 in lintels:
        sheet.add("braking", rectangle(x0, y0, x1, y1))
    sheet.add("type", *strokes)
    sheet.add("type", rectangle(0, frame.band_y, frame.width, frame.height))
    if frame.band_y - frame.base_y > m.gap + 0.01:  # names stand between: a base line of their own for each group
        for x0, x1 in frame.spans:
            sheet.add("type", rectangle(x0, frame.base_y + 0.15, x1, frame.base_y + 0.15 + m.outline))
    return sheet.pieces()


def _whisker(sheet: _Sheet, frame: Frame, post: Post, m: Measures) -> None:
    """Beside its column: a line between the distances within which half and 95 of 100 stops end, a dot at 85."""
    if post.bar.spread_m is None:
        return
    x, half, line = post.x1 + m.whisker, m.whisker / 2, m.hairline * 1.6
    foot, dot, top = (frame.base_y - metres * frame.scale for metres in post.bar.spread_m)
    sheet.add("type", rectangle(x - line / 2, top, x + line / 2, foot))
    sheet.add("type", rectangle(x - half, top - line / 2, x + half, top + line / 2))
    sheet.add("type", rectangle(x - half, foot - line / 2, x + half, foot + line / 2))
    sheet.add("type", ((x, dot - half), (x + half, dot), (x, dot + half), (x - half, dot)))


def _reaction(sheet: _Sheet, post: Post, edge: Edge, plates: list[Plate], m: Measures) -> None:
    """Light, outlined, upright lines: still running."""
    x0, x1, y0, y1 = post.x0, post.x1, edge.high_y, edge.low_y
    line = min(m.outline, 0.2 * (x1 - x0))
    sheet.add("reaction", rectangle(x0, y0, x1, y1))
    if y1 - y0 <= 2 * line:
        sheet.add("type", rectangle(x0, y0, x1, y1))
        return
    sheet.add("type", rectangle(x0, y0, x1, y0 + line), rectangle(x0, y1 - line, x1, y1))
    sheet.add("type", rectangle(x0, y0, x0 + line, y1), rectangle(x1 - line, y0, x1, y1))
    count = max(1, round((x1 - x0) / m.upright_pitch))
    for i in range(1, count):
        x = x0 + (x1 - x0) * i / count
        left, right = x - m.upright / 2, x + m.upright / 2
        if left < x0 + line + 0.4 or right > x1 - line - 0.4:
            continue
        crossed = [plate for plate in plates if plate.x0 < right and plate.x1 > left]
        top = y0
        for plate in sorted(crossed, key=lambda p: p.y0):
            if plate.y0 - top > line + 0.5:
                sheet.add("type", rectangle(left, top, right, plate.y0))
            top = plate.y1
        if y1 - top > line + 0.5:
            sheet.add("type", rectangle(left, top, right, y1))


def _lag(sheet: _Sheet, post: Post, edge: Edge, plates: list[Plate], m: Measures) -> None:
    """Middle tone, diagonal hatch: waiting. The plate takes the part's whole height, so that no line is cut short."""
    x0, x1, y0, y1 = post.x0, post.x1, edge.high_y, edge.low_y
    sheet.add("lag", rectangle(x0, y0, x1, y1))
    fields = [(x0, x1)]
    for plate in plates:
        fields = [
            part
            for a, b in fields
            for part in ((a, min(b, plate.x0)), (max(a, plate.x1), b))
            if part[1] - part[0] > 0.8
        ]
    across = m.hatch * math.sqrt(2)
    rise = y1 - y0
    for a, b in fields:
        x = a - rise - math.fmod(a - rise - x0, m.hatch_pitch) - m.hatch_pitch
        while x < b:
            line = ((x, y1), (x + rise, y0), (x + rise + across, y0), (x + across, y1))
            sheet.add("paper", clip(line, a, y0, b, y1))
            x += m.hatch_pitch


def _braking(sheet: _Sheet, frame: Frame, post: Post, edge: Edge, plates: list[Plate], m: Measures) -> None:
    """Solid, cut by a joint at every course counted from the base line: held."""
    top = edge.high_y if post.bar.stops else m.broken
    y = edge.low_y
    course = 1
    while frame.course:
        joint = frame.base_y - course * frame.course_mm
        course += 1
        if joint > edge.low_y - m.joint_clear:
            continue
        if joint < top + m.joint_clear:
            break
        sheet.add("braking", rectangle(post.x0, joint + m.joint / 2, post.x1, y))
        y = joint - m.joint / 2
        for plate in plates:
            if plate.y0 - 0.3 < joint < plate.y1 + 0.3:
                sheet.add("braking", rectangle(plate.x0, joint - m.joint, plate.x1, joint + m.joint))
    sheet.add("braking", rectangle(post.x0, top, post.x1, y))
    if not post.bar.stops:
        _broken(sheet, post, m)


def _broken(sheet: _Sheet, post: Post, m: Measures) -> None:
    """The open top of a column that does not end: slabs, each thinner and further off, slanting out of the drawing."""
    width = post.x1 - post.x0
    slant = min(0.22 * width, 0.3 * m.broken)
    foot = m.broken
    sheet.add("braking", ((post.x0, foot - slant), (post.x1, foot), (post.x0, foot)))
    y = foot
    for thick, air in ((0.26, 0.07), (0.17, 0.11), (0.08, 0.15)):
        y -= air * m.broken
        slab = (
            (post.x0, y - slant - thick * m.broken),
            (post.x1, y - thick * m.broken),
            (post.x1, y),
            (post.x0, y - slant),
        )
        sheet.add("braking", clip(slab, post.x0, 0.0, post.x1, foot))
        y -= thick * m.broken
