"""Do the inks stand apart: on paper, in grey, and for every kind of colour vision?"""

from __future__ import annotations

import math
from itertools import combinations

import numpy as np
import pytest

from chartgen.charts import inks
from chartgen.charts.inks import (
    HOUSE,
    INK_LIMIT_PERCENT,
    INK_NAMES,
    Palette,
    contrast,
    least_contrast,
    linear,
    luminance,
)

Lab = tuple[float, float, float]
PALETTES = tuple(HOUSE.values())

# Machado, Oliveira and Fernandes, A physiologically-based model for simulation of color vision deficiency, IEEE TVCG 15
# (2009), severity 1.0, applied to linear RGB. Values as in several public programs, the paper itself not opened.
MACHADO = {
    "protan": ((0.152286, 1.052583, -0.204868), (0.114503, 0.786281, 0.099216), (-0.003882, -0.048116, 1.051998)),
    "deutan": ((0.367322, 0.860646, -0.227968), (0.280085, 0.672501, 0.047413), (-0.011820, 0.042940, 0.968881)),
    "tritan": ((1.255528, -0.076749, -0.178779), (-0.078411, 0.930809, 0.147602), (0.004733, 0.691367, 0.303900)),
}


def lab(rgb: tuple[float, ...]) -> Lab:
    """CIELAB of linear sRGB (matrix and white D65 of IEC 61966-2-1)."""
    matrix = np.array([[0.4124, 0.3576, 0.1805], [0.2126, 0.7152, 0.0722], [0.0193, 0.1192, 0.9505]])
    xyz = matrix @ np.clip(np.array(rgb), 0, 1) / (matrix @ np.ones(3))
    f = np.where(xyz > (6 / 29) ** 3, np.cbrt(xyz), xyz * (29 / 6) ** 2 / 3 + 4 / 29)
    return float(116 * f[1] - 16), float(500 * (f[0] - f[1])), float(200 * (f[1] - f[2]))


def seen(srgb: str, vision: str) -> Lab:
    """CIELAB of an ink as a kind of vision sees it."""
    rgb = linear(srgb)
    return lab(rgb if vision == "normal" else tuple(np.array(MACHADO[vision]) @ np.array(rgb)))


def de00(one: Lab, two: Lab) -> float:
    """CIEDE2000 colour difference (CIE 142:2001), with all weights 1."""
    (l1, a1, b1), (l2, a2, b2) = one, two
    c_mean = (math.hypot(a1, b1) + math.hypot(a2, b2)) / 2
    g = 0.5 * (1 - math.sqrt(c_mean**7 / (c_mean**7 + 25**7)))
    a1, a2 = (1 + g) * a1, (1 + g) * a2
    c1, c2 = math.hypot(a1, b1), math.hypot(a2, b2)
    h1, h2 = math.degrees(math.atan2(b1, a1)) % 360, math.degrees(math.atan2(b2, a2)) % 360
    turn = (h2 - h1 + 180) % 360 - 180 if c1 * c2 else 0.0
    dh = 2 * math.sqrt(c1 * c2) * math.sin(math.radians(turn / 2))
    h = (h1 + turn / 2) % 360 if c1 * c2 else h1 + h2
    lm, cm = (l1 + l2) / 2, (c1 + c2) / 2
    cos = [math.cos(math.radians(x)) for x in (h - 30, 2 * h, 3 * h + 6, 4 * h - 63)]
    t = 1 - 0.17 * cos[0] + 0.24 * cos[1] + 0.32 * cos[2] - 0.20 * cos[3]
    sl = 1 + 0.015 * (lm - 50) ** 2 / math.sqrt(20 + (lm - 50) ** 2)
    sc, sh = 1 + 0.045 * cm, 1 + 0.015 * cm * t
    rt = -math.sin(math.radians(60 * math.exp(-(((h - 275) / 25) ** 2)))) * 2 * math.sqrt(cm**7 / (cm**7 + 25**7))
    dl, dc = (l2 - l1) / sl, (c2 - c1) / sc
    return math.sqrt(dl**2 + dc**2 + (dh / sh) ** 2 + rt * dc * dh / sh)


@pytest.mark.parametrize(
    ("one", "two", "difference"),
    [
        # Sharma, Wu, Dalal: The CIEDE2000 color-difference formula, Color Res. Appl. 30 (2005), table 1; from memory.
        ((50.0, 2.6772, -79.7751), (50.0, 0.0, -82.7485), 2.0425),
        ((50.0, 2.5, 0.0), (50.0, 0.0, -2.5), 4.3065),
        ((50.0, 2.5, 0.0), (73.0, 25.0, -18.0), 27.1492),
        ((50.0, 2.5, 0.0), (58.0, 24.0, 15.0), 19.4535),
    ],
)
def test_colour_difference_agrees_with_the_published_pairs(one: Lab, two: Lab, difference: float) -> None:
    assert de00(one, two) == pytest.approx(difference, abs=5e-5)


def test_contrast_agrees_with_known_pairs() -> None:
    # WCAG 2.2: black on white is 21:1; #767676 is the lightest grey of 4.5:1 on white, #777777 just misses it.
    assert contrast("#000000", "#ffffff") == pytest.approx(21.0)
    assert contrast("#767676", "#ffffff") >= 4.5 > contrast("#777777", "#ffffff")
    assert contrast("#ffffff", "#767676") == contrast("#767676", "#ffffff")


def test_large_text_needs_less_contrast() -> None:
    assert least_contrast(18 * 25.4 / 72, bold=False) == 3.0
    assert least_contrast(17.9 * 25.4 / 72, bold=False) == 4.5
    assert least_contrast(14 * 25.4 / 72, bold=True) == 3.0
    assert least_contrast(13.9 * 25.4 / 72, bold=True) == 4.5


def test_a_palette_has_its_six_inks_and_no_other() -> None:
    assert [ink.name for ink in inks.palette("gorse").inks] == list(INK_NAMES)
    with pytest.raises(KeyError):
        inks.palette("gorse").ink("name")
    with pytest.raises(KeyError):
        inks.palette("heather")
    with pytest.raises(ValueError, match="sRGB"):
        luminance("#fff")


@pytest.mark.parametrize("palette", PALETTES, ids=lambda p: p.name)
def test_inks_stand_out_on_paper(palette: Palette) -> None:
    paper = palette.paper.srgb
    assert contrast(palette.type.srgb, paper) >= 7  # requirement A1, aim in print
    for name in ("lag", "braking", "accent"):
        assert contrast(palette.ink(name).srgb, paper) >= 3, name  # A2
    # The reaction is light: its outline in type ink stands out, and type stands out on it.
    assert contrast(palette.reaction.srgb, paper) < 3
    assert contrast(palette.type.srgb, palette.reaction.srgb) >= 7
    assert contrast(paper, palette.braking.srgb) >= 7


@pytest.mark.parametrize("palette", PALETTES, ids=lambda p: p.name)
def test_no_ink_is_too_wet_and_type_is_black_alone(palette: Palette) -> None:
    for ink in palette.inks:
        assert ink.percent <= INK_LIMIT_PERCENT  # P3
        assert all(0 <= part <= 1 for part in ink.cmyk)
    assert palette.type.cmyk == (0, 0, 0, 1)  # P4


@pytest.mark.parametrize("palette", PALETTES, ids=lambda p: p.name)
def test_parts_differ_in_grey(palette: Palette) -> None:
    lightness = [lab((luminance(palette.ink(name).srgb),) * 3)[0] for name in ("reaction", "lag", "braking")]
    assert lightness[0] - lightness[1] >= 20
    assert lightness[1] - lightness[2] >= 20


@pytest.mark.parametrize("vision", ["normal", *MACHADO])
@pytest.mark.parametrize("palette", PALETTES, ids=lambda p: p.name)
def test_parts_differ_for_every_colour_vision(palette: Palette, vision: str) -> None:
    colours = {name: seen(palette.ink(name).srgb, vision) for name in ("reaction", "lag", "braking", "accent")}
    for one, two in combinations(colours, 2):
        assert de00(colours[one], colours[two]) >= 20, (one, two)


def test_the_distinctness_check_can_fail() -> None:
    # A red and a green of one lightness: far apart for most, near for a deuteranope.
    red, green = "#b4553c", "#6f7a35"
    assert de00(seen(red, "normal"), seen(green, "normal")) >= 20 > de00(seen(red, "deutan"), seen(green, "deutan"))
