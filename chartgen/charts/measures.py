"""Sizes of a drawing by medium, in mm. Where a size answers a requirement, the requirement stands beside it."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, slots=True, kw_only=True)
class Measures:
    """Font sizes are of the em (digits are 0.698 of it). A pair `x`/`x_least` is the wish and the floor."""

    total: float
    """Largest font size of a total; the column's width may make it smaller."""
    total_least: float
    number: float
    number_least: float
    lag_least: float
    """A part's number inside its part; below the floor it stands beside the column with a leader."""
    beside: float
    name: float
    name_least: float
    driver: float
    driver_least: float
    verdict: float
    verdict_least: float
    speed: float
    unit: float
    ruler: float
    band: float
    gutter: float
    """Between columns, or between the groups of columns of one speed."""
    pair: float
    """Between the columns of one speed."""
    gap: float
    """White between parts: at least 0.5 mm (requirement A2)."""
    joint: float
    outline: float
    joint_clear: float
    """A joint nearer than this to a part's edge is left out."""
    upright_pitch: float
    upright: float
    hatch_pitch: float
    hatch: float
    tick: float
    hairline: float
    """Leaders, poles and ticks: at least 0.5 pt = 0.18 mm (facts of print)."""
    pad: float
    whisker: float
    """Width of a whisker's ends; it stands in the middle of twice that room."""
    broken: float
    """Height of the broken top of a column that does not end."""


def poster(width_mm: float, height_mm: float) -> Measures:
    """Measures for a drawing on a sheet, grown and shrunk with it; 260 x 290 mm is the drawing of an A3 poster."""
    k = min(width_mm / 260, height_mm / 290)
    return Measures(
        total=41 * k, total_least=5 * k, number=16 * k, number_least=5.0,
        lag_least=6.45, beside=max(6.45, 7.5 * k),  # digits of at least 4.5 mm
        name=max(5.4 * k, 4.94), name_least=4.24,  # clear print: 12 pt at least (A8)
        driver=max(5.2 * k, 4.24), driver_least=4.24 if k > 0.9 else 3.2,
        verdict=9 * k, verdict_least=4.24, speed=16 * k, unit=5 * k, ruler=max(4.6 * k, 3.2), band=17 * k,
        gutter=4 * k, pair=1.2 * max(k, 0.7), gap=max(0.8 * k, 0.6), joint=max(0.5 * k, 0.5), outline=0.5,
        joint_clear=max(1.2 * k, 1.0),
        upright_pitch=3.8 * k, upright=max(0.35 * k, 0.25), hatch_pitch=3.4 * k, hatch=max(0.8 * k, 0.45),
        tick=4 * k, hairline=max(0.35 * k, 0.25), pad=max(1.1 * k, 0.8), broken=16 * k, whisker=max(1.6 * k, 1.0),
    )  # fmt: skip


def web(width_mm: float, height_mm: float) -> Measures:
    """Measures for a drawing on a page, where 180 mm is shown 720 px wide (4 px a mm): words of at least 12 px."""
    k = min(1.0, max(0.62, min(width_mm / 180, height_mm / 100)))
    return Measures(
        total=11.5 * k, total_least=3.3, number=6.6, number_least=3.4, lag_least=3.4, beside=3.4,
        name=3.2, name_least=3.0, driver=3.2, driver_least=3.0, verdict=4.4, verdict_least=3.0,
        speed=6 * k, unit=3.2, ruler=3.0, band=8.5 * k, gutter=2.4 * k, pair=0.9, gap=0.8, joint=0.5, outline=0.5,
        joint_clear=1.2,
        upright_pitch=2.2, upright=0.25, hatch_pitch=2.0, hatch=0.5, tick=2.0, hairline=0.25, pad=0.7, broken=8 * k,
        whisker=1.1,
    )  # fmt: skip
