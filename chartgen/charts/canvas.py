"""matplotlib as a pen in millimetres: convex pieces by ink in, clean textless SVG out.

Every mark is a filled piece (a line is a thin rectangle), so a class that sets `fill` is all the press needs to change
inks. All pieces of an ink go into one compound path: the file stays small, and overlapping pieces of one ink unite.
"""

from __future__ import annotations

import io
import re
from collections.abc import Iterable
from typing import Final
from xml.etree import ElementTree as ET

import matplotlib as mpl
import numpy as np
from matplotlib.backends.backend_svg import FigureCanvasSVG
from matplotlib.figure import Figure
from matplotlib.patches import PathPatch
from matplotlib.path import Path
from matplotlib.transforms import Affine2D

from chartgen.charts.inks import Palette

Point = tuple[float, float]
Polygon = tuple[Point, ...]
Pieces = tuple[tuple[str, tuple[Polygon, ...]], ...]
"""(ink, its convex pieces), in the order in which they are laid on."""

_SVG: Final = "{http://www.w3.org/2000/svg}"
_NUMBER: Final = re.compile(r"-?\d+(?:\.\d+)?")
_AIR: Final = re.compile(r"\s*([MLz])\s*")


def rectangle(x0: float, y0: float, x1: float, y1: float) -> Polygon:
    """The upright rectangle between two corners, clockwise on the page."""
    left, right = sorted((x0, x1))
    top, foot = sorted((y0, y1))
    return ((left, top), (right, top), (right, foot), (left, foot))


def area(polygon: Polygon) -> float:
    """Signed area in mm² (shoelace formula); positive where the corners run clockwise on the page."""
    return 0.5 * sum(x0 * y1 - x1 * y0 for (x0, y0), (x1, y1) in zip(polygon, polygon[1:] + polygon[:1], strict=True))


def clip(polygon: Polygon, x0: float, y0: float, x1: float, y1: float) -> Polygon:
    """The part of a convex polygon within an upright rectangle; empty where they do not meet.

    Source: I. E. Sutherland and G. W. Hodgman, Reentrant polygon clipping, CACM 17 (1974) 32-42.
    """
    corners = list(polygon)
    for axis, bound, sign in ((0, x0, 1.0), (0, x1, -1.0), (1, y0, 1.0), (1, y1, -1.0)):
        kept: list[Point] = []
        for one, two in zip(corners, corners[1:] + corners[:1], strict=True):
            before, after = sign * (one[axis] - bound), sign * (two[axis] - bound)
            if before >= 0:
                kept.append(one)
            if (before < 0) != (after < 0):
                t = before / (before - after)
                kept.append((one[0] + t * (two[0] - one[0]), one[1] + t * (two[1] - one[1])))
        corners = kept
        if not corners:
            return ()
    return tuple(corners)


def mirrored(polygons: Iterable[Polygon], width_mm: float) -> tuple[Polygon, ...]:
    """The pieces as seen in a mirror that stands upright at the right edge."""
    return tuple(tuple((width_mm - x, y) for x, y in polygon) for polygon in polygons)


def compound(polygons: Iterable[Polygon]) -> Path:
    """One path of all pieces, all turning the same way."""
    points: list[Point] = []
    codes: list[int] = []
    for polygon in polygons:
        if abs(area(polygon)) < 1e-6:
            continue
        # One sense of turning for all, else pieces that overlap would cut holes in each other.
        ring = polygon if area(polygon) > 0 else polygon[::-1]
        points += [*ring, ring[0]]
        codes += [int(Path.MOVETO), *[int(Path.LINETO)] * (len(ring) - 1), int(Path.CLOSEPOLY)]
    # Micrometres are finer than any press, and the backend writes no digit that is not there.
    return Path(np.round(np.array(points).reshape(-1, 2), 3), np.array(codes, dtype=np.uint8))


def _shorten(data: str) -> str:
    return _AIR.sub(r"\1", data.strip())


def svg(pieces: Pieces, palette: Palette, width_mm: float, height_mm: float) -> str:
    """The pieces as one ``<svg>``: viewBox in mm, one ``<path class="ink-NAME" fill="#rrggbb">`` an ink."""
    # 72 dots an inch and a figure of width/72 inches: the backend's user unit is then our millimetre.
    figure = Figure(figsize=(width_mm / 72, height_mm / 72), dpi=72, frameon=False)
    upside_down = Affine2D().scale(1, -1).translate(0, height_mm)
    for index, (ink, polygons) in enumerate(pieces):
        if polygons:
            figure.add_artist(
                PathPatch(
                    compound(polygons),
                    facecolor=palette.ink(ink).srgb,
                    linewidth=0,
                    transform=upside_down,
                    gid=f"{index}-{ink}",
                )
            )
    target = io.StringIO()
    with mpl.rc_context({"svg.hashsalt": "columns"}):
        FigureCanvasSVG(figure).print_svg(target, metadata=dict.fromkeys(("Creator", "Date", "Format", "Type")))  # type: ignore[no-untyped-call]
    return _clean(target.getvalue(), palette, width_mm, height_mm)


def _clean(source: str, palette: Palette, width_mm: float, height_mm: float) -> str:
    paths = [
        f'<path class="ink-{name}" fill="{palette.ink(name).srgb}" d="{_shorten(path.get("d", ""))}"/>'
        for group in ET.fromstring(source).iter(f"{_SVG}g")  # noqa: S314 our own backend wrote it
        if group.get("id", "")[:1].isdigit()  # our own groups; the backend's have names
        for name in (group.get("id", "").partition("-")[2],)
        for path in group.iter(f"{_SVG}path")
    ]
    size = f"{width_mm:g} {height_mm:g}"
    return f'<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 {size}">{"".join(paths)}</svg>'


def read_pieces(marks_svg: str) -> Pieces:
    """The pieces of an SVG that `svg` made, back from its path data: for pictures, and for checks of what was inked."""
    found = []
    for path in ET.fromstring(marks_svg).iter(f"{_SVG}path"):  # noqa: S314 our own writer wrote it
        rings = []
        for ring in path.get("d", "").split("z"):
            numbers = [float(n) for n in _NUMBER.findall(ring)]
            points = tuple(zip(numbers[::2], numbers[1::2], strict=True))
            if points:
                rings.append(points[:-1] if points[0] == points[-1] else points)
        found.append((path.get("class", "").removeprefix("ink-"), tuple(rings)))
    return tuple(found)
