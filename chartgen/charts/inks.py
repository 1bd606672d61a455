"""Named inks: an sRGB and a CMYK value chosen together, never converted on the fly.

The three house palettes were mixed in CMYK by hand, in whole percents; the sRGB value is that mixture through a coated
(SWOP-like) profile, relative colorimetric, so a printer's own proof decides in the end. Type is black alone, so small
type cannot misregister.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache
from typing import Final

INK_NAMES: Final = ("paper", "type", "reaction", "lag", "braking", "accent")
INK_LIMIT_PERCENT: Final = 280
"""Most ink in one place (requirement P3; chosen from what print shops ask for: 260 to 320 %)."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Ink:
    """One ink. `srgb` is "#rrggbb"; `cmyk` four fractions 0..1."""

    name: str
    srgb: str
    cmyk: tuple[float, float, float, float]

    @property
    def percent(self) -> float:
        """Total area coverage, in percent (0..400)."""
        return 100.0 * sum(self.cmyk)


@dataclass(frozen=True, slots=True, kw_only=True)
class Palette:
    """The six inks of a drawing, by name."""

    name: str
    paper: Ink
    type: Ink
    reaction: Ink
    lag: Ink
    braking: Ink
    accent: Ink

    def ink(self, name: str) -> Ink:
        """The ink called `name`; KeyError for another name."""
        if name not in INK_NAMES:
            raise KeyError(name)
        found: Ink = getattr(self, name)
        return found

    @property
    def inks(self) -> tuple[Ink, ...]:
        return tuple(self.ink(name) for name in INK_NAMES)


def _palette(name: str, **values: tuple[str, tuple[int, int, int, int]]) -> Palette:
    return Palette(
        name=name,
        **{
            ink: Ink(name=ink, srgb=srgb.lower(), cmyk=(cmyk[0] / 100, cmyk[1] / 100, cmyk[2] / 100, cmyk[3] / 100))
            for ink, (srgb, cmyk) in values.items()
        },
    )


_TYPE: Final = ("#242223", (0, 0, 0, 100))

HOUSE: Final = {
    "gorse": _palette(
        "gorse",
        paper=("#FAF7EC", (0, 1, 6, 2)),
        type=_TYPE,
        reaction=("#E7C345", (3, 16, 88, 8)),
        lag=("#8C6AA3", (45, 65, 0, 10)),
        braking=("#362550", (85, 100, 0, 65)),
        accent=("#C15231", (0, 80, 100, 24)),
    ),
    "lichen": _palette(
        "lichen",
        paper=("#F5F7F1", (2, 0, 4, 2)),
        type=_TYPE,
        reaction=("#ADC58F", (30, 4, 52, 8)),
        lag=("#4C8781", (60, 5, 35, 38)),
        braking=("#213440", (65, 10, 0, 95)),
        accent=("#BF5931", (0, 75, 100, 25)),
    ),
    "bracken": _palette(
        "bracken",
        paper=("#FCF4E7", (0, 3, 8, 1)),
        type=_TYPE,
        reaction=("#EBB953", (0, 24, 80, 8)),
        lag=("#AD6831", (0, 55, 95, 36)),
        braking=("#412B23", (20, 70, 85, 90)),
        accent=("#006A6A", (90, 5, 40, 52)),
    ),
}
"""The house palettes: gorse and heather, lichen and slate, bracken and peat."""


def palette(name: str) -> Palette:
    """The house palette called `name` ("gorse", "lichen" or "bracken"); KeyError for another name."""
    return HOUSE[name]


def _channels(srgb: str) -> tuple[float, float, float]:
    value = srgb.lstrip("#")
    if len(value) != 6:
        raise ValueError(f"not an sRGB value: {srgb!r}")
    red, green, blue = (int(value[i : i + 2], 16) / 255 for i in (0, 2, 4))
    return red, green, blue


def linear(srgb: str) -> tuple[float, float, float]:
    """Linear-light red, green, blue (0..1) of "#rrggbb". Source: WCAG 2.2, relative luminance (threshold 0.04045)."""
    red, green, blue = (c / 12.92 if c <= 0.04045 else ((c + 0.055) / 1.055) ** 2.4 for c in _channels(srgb))
    return red, green, blue


def luminance(srgb: str) -> float:
    """Relative luminance Y (0..1) = 0.2126 R + 0.7152 G + 0.0722 B in linear light. Source: WCAG 2.2."""
    red, green, blue = linear(srgb)
    return 0.2126 * red + 0.7152 * green + 0.0722 * blue


@lru_cache(maxsize=1024)
def contrast(one: str, other: str) -> float:
    """Contrast ratio (1..21) of two "#rrggbb" values: (L1 + 0.05)/(L2 + 0.05), the lighter above. Source: WCAG 2.2."""
    light, dark = sorted((luminance(one), luminance(other)), reverse=True)
    return (light + 0.05) / (dark + 0.05)


LARGE_MM: Final = 18 * 25.4 / 72
LARGE_BOLD_MM: Final = 14 * 25.4 / 72
"""Font sizes from which text counts as large: 18 pt, or 14 pt bold. Source: WCAG 2.2, "large scale"."""


def least_contrast(size_mm: float, *, bold: bool) -> float:
    """The contrast that text of this font size needs: 3 where it is large, else 4.5. Source: WCAG 2.2, 1.4.3."""
    return 3.0 if size_mm >= (LARGE_BOLD_MM if bold else LARGE_MM) - 1e-9 else 4.5
