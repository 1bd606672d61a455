"""The same shapes in fewer characters: a page carries its chart, so the chart must be light.

The drawing's paths are closed rings of straight edges. Here their points go to hundredths of a millimetre (0.04 px on a
page) and each edge is written from the last point, level and upright edges with one number. Nothing else changes.
"""

from __future__ import annotations

import re
from functools import lru_cache
from typing import Final

_DATA: Final = re.compile(r' d="([^"]*)"')
_ALLOWED: Final = re.compile(r"[MLz0-9 .,\-]*")
_SCALE: Final = 100


@lru_cache(maxsize=512)
def compact(marks_svg: str) -> str:
    """`marks_svg` with every path's data rewritten. Raises ValueError for a path with anything but M, L and z."""
    return _DATA.sub(lambda found: f' d="{_path(found[1])}"', marks_svg)


def _path(data: str) -> str:
    if not _ALLOWED.fullmatch(data):
        raise ValueError(f"a path of a drawing has only M, L and z: {data[:60]!r}")
    # Numbers apart by spaces alone: plain splitting is the quickest way to them.
    apart = data.replace("M", " ").replace("L", " ").replace(",", " ").replace("-", " -")
    return "".join(map(_ring, apart.split("z")))


def _ring(ring: str) -> str:
    numbers = [round(float(n) * _SCALE) for n in ring.split()]
    points = list(zip(numbers[::2], numbers[1::2], strict=True))
    if len(points) > 1 and points[0] == points[-1]:
        points.pop()
    if len(points) < 3:
        return ""
    x, y = points[0]
    out = [f"M{_written(x)}{_after(y)}"]
    for nx, ny in points[1:]:
        if ny == y:
            out.append(f"h{_written(nx - x)}")
        elif nx == x:
            out.append(f"v{_written(ny - y)}")
        else:
            out.append(f"l{_written(nx - x)}{_after(ny - y)}")
        x, y = nx, ny
    out.append("z")
    return "".join(out)


@lru_cache(maxsize=65536)
def _written(hundredths: int) -> str:
    """Without trailing or leading zeros: 74.5, .75, -.5, 8."""
    text = f"{abs(hundredths) / _SCALE:.2f}".rstrip("0").rstrip(".")
    if text.startswith("0."):
        text = text[1:]
    return ("-" if hundredths < 0 else "") + text


@lru_cache(maxsize=65536)
def _after(hundredths: int) -> str:
    """A number behind another: its sign parts them, else a space."""
    text = _written(hundredths)
    return text if text.startswith("-") else f" {text}"
