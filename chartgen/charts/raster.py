"""Pictures of a drawing as PNG, marks and labels, with matplotlib: for golden pictures and for looking at.

Text is shaped (joined Arabic, right order) by matplotlib's own layout. A glyph that no font has is an error.
"""

from __future__ import annotations

import io
import warnings

import matplotlib as mpl
import numpy as np
from matplotlib.backends.backend_agg import FigureCanvasAgg
from matplotlib.figure import Figure
from matplotlib.font_manager import FontProperties
from matplotlib.patches import PathPatch
from matplotlib.transforms import Affine2D

from chartgen.charts.canvas import compound, read_pieces
from chartgen.charts.drawing import Drawing
from chartgen.charts.fonts import face_for
from chartgen.charts.inks import Palette


def png(drawing: Drawing, palette: Palette, dpi: float = 100.0) -> bytes:
    """The drawing on its paper as PNG, `dpi` dots an inch. A missing glyph raises (matplotlib's warning made an
    error)."""
    figure = Figure(figsize=(drawing.width_mm / 25.4, drawing.height_mm / 25.4), dpi=dpi, facecolor=palette.paper.srgb)
    dots = dpi / 25.4
    page = Affine2D().scale(dots, -dots).translate(0, drawing.height_mm * dots)
    for ink, polygons in read_pieces(drawing.marks_svg):
        figure.add_artist(PathPatch(compound(polygons), facecolor=palette.ink(ink).srgb, linewidth=0, transform=page))
    for label in drawing.labels:
        at = page.transform(np.array([label.x_mm, label.y_mm]))
        # figure.text, not add_artist: the text then belongs to the figure's own drawing order.
        figure.text(
            at[0], at[1], label.text, transform=None, ha=label.anchor, va="baseline", color=palette.ink(label.ink).srgb,
            fontproperties=FontProperties(fname=face_for(label.text, label.face).path, size=label.size_mm * 72 / 25.4),
        )  # fmt: skip
    target = io.BytesIO()
    # Without hinting a glyph is as wide as its file says, at any resolution.
    with warnings.catch_warnings(), mpl.rc_context({"text.hinting": "none"}):
        warnings.simplefilter("error")
        FigureCanvasAgg(figure).print_png(target, metadata={"Software": None})  # type: ignore[no-untyped-call]
    return target.getvalue()
