"""Does the check find what is wrong with labels, and only that?"""

from __future__ import annotations

from dataclasses import replace

import pytest

from chartgen.charts import columns
from chartgen.charts.drawing import Drawing, Label
from chartgen.charts.inks import palette
from chartgen.charts.overlap import box, collisions
from tests.charts.made import CY, EN, rows


@pytest.fixture(scope="module")
def drawing() -> Drawing:
    return columns.columns(
        [rows([20, 30, 40], lag_s=0.4)], languages=(EN, CY), palette=palette("gorse"), width_mm=260, height_mm=290,
        direction="ltr", distance_unit="m", speed_unit="mph",
    )  # fmt: skip


def with_label(drawing: Drawing, label: Label) -> Drawing:
    return replace(drawing, labels=(*drawing.labels, label))


def total(drawing: Drawing) -> Label:
    return next(label for label in drawing.labels if label.role == "total")


def kinds(drawing: Drawing) -> set[str]:
    return {collision.kind for collision in collisions(drawing)}


def test_a_good_drawing_has_none(drawing: Drawing) -> None:
    assert collisions(drawing) == []


def test_a_label_on_another_is_found(drawing: Drawing) -> None:
    first = total(drawing)
    assert kinds(with_label(drawing, replace(first, x_mm=first.x_mm + 5, text="8"))) == {"overlap"}


def test_a_label_beyond_the_edge_is_found(drawing: Drawing) -> None:
    for moved in ({"y_mm": 2.0}, {"x_mm": 259.0, "y_mm": 20.0}, {"x_mm": 3.0, "y_mm": 60.0}):
        assert "cut" in kinds(with_label(drawing, replace(total(drawing), **moved)))  # type: ignore[arg-type]


def test_a_label_across_the_edge_of_a_column_is_found(drawing: Drawing) -> None:
    last = [label for label in drawing.labels if label.role == "total"][-1]
    low = replace(last, y_mm=last.y_mm + 0.3 * last.size_mm)
    found = collisions(replace(drawing, labels=(low,)))
    assert [(c.kind, c.text, c.other) for c in found] == [("crossed", last.text, "braking")]


def test_a_label_across_a_line_of_the_texture_is_found(drawing: Drawing) -> None:
    lag = [label for label in drawing.labels if label.role == "lag"][-1]
    assert collisions(replace(drawing, labels=(lag,))) == []
    aside = replace(lag, x_mm=lag.x_mm + lag.size_mm)
    assert {c.other for c in collisions(replace(drawing, labels=(aside,)))} == {"paper"}


def test_a_box_is_the_inks_own_for_every_anchor(drawing: Drawing) -> None:
    label = total(drawing)
    centre = box(label)
    wide = centre[2] - centre[0]
    assert centre[3] - centre[1] >= 0.69 * label.size_mm
    for anchor in ("left", "right"):
        there = box(replace(label, anchor=anchor))
        assert there[2] - there[0] == pytest.approx(wide)
    assert box(replace(label, anchor="left"))[0] > label.x_mm > box(replace(label, anchor="right"))[2]
