"""Is every rung as long as its value says, to one scale, its figure behind it, in both directions?"""

from __future__ import annotations

import math
from dataclasses import replace

import pytest

from chartgen.charts import canvas, rungs
from chartgen.charts.drawing import Drawing
from chartgen.charts.fonts import width_mm
from chartgen.charts.inks import palette
from chartgen.charts.rungs import Rung
from tests.charts.made import AR, EN

LENGTHS = (4.0, 10.0, 16.5)
BARS = tuple(
    Rung(name=f"from {speed} mph", length=length, figure=f"{length:g}", row=row, quantity="printed_residual_speed")
    for row, (speed, length) in enumerate(zip((40, 50, 60), LENGTHS, strict=True))
)


def draw(*bars: Rung, language: object = EN, width: float = 180.0) -> Drawing:
    return rungs.rungs(bars, name="rest", language=language, palette=palette("gorse"), width_mm=width)  # type: ignore[arg-type]


def spans(drawing: Drawing, ink: str = "braking") -> list[tuple[float, float]]:
    """Left and right end of each bar, from the top down."""
    rings = dict(canvas.read_pieces(drawing.marks_svg)).get(ink, ())
    boxes = sorted((min(y for _, y in ring), min(x for x, _ in ring), max(x for x, _ in ring)) for ring in rings)
    return [(left, right) for _, left, right in boxes]


def test_bars_are_to_one_scale() -> None:
    lengths = [right - left for left, right in spans(draw(*BARS))]
    edge = rungs.UPRIGHT_MM / 2
    # A bar is counted from the middle of the upright.
    ratios = [length / value for length, value in zip(lengths, LENGTHS, strict=True)]
    assert max(ratios) == pytest.approx(min(ratios), rel=2e-4)
    assert edge > 0


def test_the_longest_bar_and_its_figure_fill_the_width() -> None:
    drawing = draw(*BARS)
    figure = max((label for label in drawing.labels if label.role == "part"), key=lambda label: label.x_mm)
    end = figure.x_mm + width_mm(figure.text, figure.face, figure.size_mm)
    assert 0.0 <= drawing.width_mm - end <= 3.0


def test_right_to_left_is_the_mirror_image() -> None:
    ltr = draw(*BARS)
    rtl = draw(*BARS, language=replace(EN, direction="rtl"))
    mirrored = [(ltr.width_mm - right, ltr.width_mm - left) for left, right in spans(ltr)]
    assert spans(rtl) == [pytest.approx(pair, abs=0.002) for pair in mirrored]
    for one, two in zip(ltr.labels, rtl.labels, strict=True):
        assert two.x_mm == pytest.approx(ltr.width_mm - one.x_mm, abs=0.002)
        assert (one.anchor, two.anchor) in {("left", "right"), ("right", "left")}


def test_figures_are_entered_and_words_are_not() -> None:
    never = Rung(name="ice", length=math.nan, figure="none is slow enough", words=True)
    drawing = draw(*BARS, never)
    figures = [label for label in drawing.labels if label.role == "part"]
    assert [(label.text, label.row, label.quantity) for label in figures] == [
        (bar.figure, bar.row, bar.quantity) for bar in BARS
    ]
    assert [label.text for label in drawing.labels if label.role == "verdict"] == ["none is slow enough"]
    assert len(spans(drawing)) == len(BARS)


def test_nought_has_no_bar_and_a_little_is_seen() -> None:
    drawing = draw(BARS[2], replace(BARS[0], length=0.0, figure="0"), replace(BARS[1], length=1e-6, figure="1"))
    assert len(spans(drawing)) == 2
    assert min(right - left for left, right in spans(drawing)) == pytest.approx(rungs.LEAST_BAR_MM, abs=0.002)


def test_less_runs_to_the_other_side_with_its_figure_beyond() -> None:
    less = replace(BARS[0], length=-6.0, figure="−6")
    drawing = draw(BARS[2], less)
    (left, right), (back, start) = spans(drawing)[0], spans(drawing)[1]
    assert back < start < left < right
    figure = next(label for label in drawing.labels if label.text == "−6")
    assert figure.anchor == "right"
    assert figure.x_mm < back
    assert figure.x_mm - width_mm(figure.text, figure.face, figure.size_mm) >= 0.0


def test_long_names_break_and_keep_clear_of_the_bars() -> None:
    long = replace(BARS[0], name="a long name that nobody can say in one breath, on packed snow, downhill")
    drawing = draw(long, *BARS[1:])
    names = [label for label in drawing.labels if label.role == "name"]
    assert len(names) > len(BARS)
    reach = max(label.x_mm + width_mm(label.text, label.face, label.size_mm) for label in names)
    assert reach <= min(left for left, _ in spans(drawing))
    assert drawing.height_mm > draw(*BARS).height_mm


def test_arabic_names_stand_at_the_right() -> None:
    drawing = draw(replace(BARS[0], name="جليد"), language=AR)
    name = next(label for label in drawing.labels if label.role == "name")
    assert (name.x_mm, name.anchor, name.dir) == (drawing.width_mm, "right", "rtl")


@pytest.mark.parametrize("given", [(), (BARS[0],)])
def test_too_little_is_refused(given: tuple[Rung, ...]) -> None:
    with pytest.raises(ValueError, match="needs a bar and 60 mm"):
        draw(*given, width=40.0)
