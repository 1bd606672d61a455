"""Faces of a drawing: which static font file, how wide and how tall its glyphs are. Widths come from the files
themselves.

One condensed family serves Latin, Greek and Cyrillic; Arabic has a family of its own. Every file is static, so that the
press, the browser and the pictures of the tests set the same weight.
"""

from __future__ import annotations

import io
from dataclasses import dataclass
from functools import lru_cache
from pathlib import Path
from typing import Any, Final

import fontpkg
from fontTools.ttLib import TTFont

from chartgen.errors import MachineFault

LATIN: Final = "IBM Plex Sans Condensed"
ARABIC: Final = "Tajawal"

_WEIGHTS: Final = {
    LATIN: {"numeral-bold": 700, "numeral": 500, "text": 400, "text-bold": 600},
    ARABIC: {"numeral-bold": 700, "numeral": 500, "text": 400, "text-bold": 700},
}
_UNSEEN: Final = frozenset("\u200e\u200f\u2066\u2067\u2068\u2069")
"""Direction marks: they have no glyph and no width."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Face:
    """A static font file: its family as CSS names it, its weight, where it lies."""

    family: str
    weight: int
    path: Path


@dataclass(frozen=True, slots=True, kw_only=True)
class Extent:
    """How far a text reaches, in parts of the font size: its advance width, above and below the baseline (both ≥ 0),
    and the white within the advance before its first and after its last glyph."""

    width: float
    above: float
    below: float
    before: float = 0.0
    after: float = 0.0

    @property
    def ink(self) -> float:
        """Width of what is inked."""
        return self.width - self.before - self.after


@lru_cache(maxsize=16)
def _face(family: str, face: str) -> Face:
    weight = _WEIGHTS[family][face]
    try:
        path = Path(fontpkg.path(family, weight=weight))
    except (LookupError, OSError) as error:
        raise MachineFault(f"The font {family} {weight} is missing.", "Run start.sh again.") from error
    return Face(family=family, weight=weight, path=path)


@lru_cache(maxsize=16)
def _font(path: Path) -> tuple[dict[int, str], Any, Any, int]:
    # Lazy, since only four tables are ever read; from memory, so that no file stays open.
    font = TTFont(io.BytesIO(path.read_bytes()), lazy=True)
    return dict(font.getBestCmap()), font["hmtx"], font["glyf"], int(font["head"].unitsPerEm)


@lru_cache(maxsize=4096)
def _glyph(path: Path, character: str) -> tuple[float, float, float, float, float] | None:
    cmap, metrics, outlines, units = _font(path)
    name = cmap.get(ord(character))
    if name is None:
        return None
    outline = outlines[name]
    advance, bearing = metrics[name]
    if not outline.numberOfContours:
        return advance / units, 0.0, 0.0, 0.0, 0.0
    after = advance - bearing - (outline.xMax - outline.xMin)
    return advance / units, max(0, outline.yMax) / units, max(0, -outline.yMin) / units, bearing / units, after / units


@lru_cache(maxsize=4096)
def face_for(text: str, face: str) -> Face:
    """The first family that has every character of `text` in this `face`.

    Raises MachineFault that names the characters no family has: a box for a missing letter is never drawn.
    """
    seen = [c for c in text if c not in _UNSEEN]
    for family in (LATIN, ARABIC):
        found = _face(family, face)
        if all(_glyph(found.path, c) is not None for c in seen):
            return found
    missing = sorted({f"U+{ord(c):04X}" for c in seen if _glyph(_face(LATIN, face).path, c) is None})
    raise MachineFault(
        f"No font of ours has every character of “{text}” ({', '.join(missing)}).", "Use other characters."
    )


@lru_cache(maxsize=8192)
def extent(text: str, face: str) -> Extent:
    """Extent of `text` at font size 1 (multiply by the size). Arabic is measured in its unjoined forms, which are the
    wider."""
    path = face_for(text, face).path
    glyphs = [glyph for c in text if c not in _UNSEEN and (glyph := _glyph(path, c)) is not None]
    return Extent(
        width=sum(g[0] for g in glyphs),
        above=max((g[1] for g in glyphs), default=0.0),
        below=max((g[2] for g in glyphs), default=0.0),
        before=glyphs[0][3] if glyphs else 0.0,
        after=glyphs[-1][4] if glyphs else 0.0,
    )


def width_mm(text: str, face: str, size_mm: float) -> float:
    """Advance width in mm of `text` in `face` at the font size `size_mm`."""
    return extent(text, face).width * size_mm


@lru_cache(maxsize=64)
def digit_ratio(face: str, digits: str = "0123456789") -> float:
    """Height of the lowest digit of `face` as a part of the font size: what a reading distance is checked with."""
    path = face_for(digits, face).path
    heights = [glyph[1] for c in digits if (glyph := _glyph(path, c)) is not None]
    return min(heights)
