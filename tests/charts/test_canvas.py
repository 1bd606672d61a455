"""Is the SVG clean, small, the same every time, and are the pieces in it those that were laid down?"""

from __future__ import annotations

import os
import subprocess
import sys
import xml.etree.ElementTree as ET

import pytest
from hypothesis import given
from hypothesis import strategies as st

from chartgen.charts import canvas
from chartgen.charts.canvas import area, clip, rectangle
from chartgen.charts.inks import palette

PIECES: canvas.Pieces = (
    ("reaction", (rectangle(0, 0, 10, 10.5), rectangle(20, 3, 12.25, 10))),
    ("type", (((1.0, 1.0), (4.0, 9.0), (5.0, 1.0)),)),
)
coordinate = st.floats(-50, 50).map(lambda x: round(x, 3))


def test_nothing_but_paths_with_an_ink_each() -> None:
    root = ET.fromstring(canvas.svg(PIECES, palette("gorse"), 30, 20))  # noqa: S314 our own
    assert root.attrib == {"viewBox": "0 0 30 20"}
    assert [set(path.attrib) for path in root] == [{"class", "fill", "d"}] * 2
    assert [path.get("class") for path in root] == ["ink-reaction", "ink-type"]
    assert [path.get("fill") for path in root] == ["#e7c345", "#242223"]


def test_pieces_come_back_in_millimetres_all_turning_the_same_way() -> None:
    back = canvas.read_pieces(canvas.svg(PIECES, palette("gorse"), 30, 20))
    for (ink, laid), (ink_back, found) in zip(PIECES, back, strict=True):
        assert ink == ink_back
        for polygon, ring in zip(laid, found, strict=True):
            assert area(ring) == pytest.approx(abs(area(polygon)), abs=0.02)
            assert {(round(x, 3), round(y, 3)) for x, y in ring} == set(polygon)


def test_pieces_of_no_size_are_left_out() -> None:
    assert len(canvas.compound([rectangle(1, 1, 1, 9), ()])) == 0


def test_a_mirror_keeps_sizes_and_turns_sides() -> None:
    (turned,) = canvas.mirrored([rectangle(0, 0, 10, 5)], 30)
    assert {x for x, _ in turned} == {20, 30}
    assert abs(area(turned)) == 50


@given(x=coordinate, y=coordinate, wide=st.floats(0.1, 60), tall=st.floats(0.1, 60), slant=st.floats(-20, 20))
def test_clipping_takes_away_and_adds_nothing(x: float, y: float, wide: float, tall: float, slant: float) -> None:
    whole = ((x, y), (x + wide, y), (x + wide + slant, y + tall), (x + slant, y + tall))
    kept = clip(whole, -20, -20, 20, 20)
    assert all(-20 - 1e-9 <= px <= 20 + 1e-9 and -20 - 1e-9 <= py <= 20 + 1e-9 for px, py in kept)
    halves = [abs(area(half)) for half in (clip(whole, -20, -20, 3, 20), clip(whole, 3, -20, 20, 20)) if half]
    assert sum(halves) == pytest.approx(abs(area(kept)) if kept else 0.0, abs=1e-6)
    if all(-20 <= px <= 20 and -20 <= py <= 20 for px, py in whole):
        assert abs(area(kept)) == pytest.approx(abs(area(whole)))


def test_the_same_bytes_in_another_process() -> None:
    code = (
        "from chartgen.charts import canvas\nfrom chartgen.charts.inks import palette\n"
        "print(canvas.svg((('type', (canvas.rectangle(0, 0, 7.1, 9.3),)),), palette('gorse'), 30, 20))"
    )
    told = {
        subprocess.run(
            [sys.executable, "-c", code],
            env={**os.environ, "PYTHONHASHSEED": seed, "TZ": zone, "LANG": "C"},
            check=True, capture_output=True, text=True,
        ).stdout
        for seed, zone in (("1", "UTC"), ("2", "Asia/Tokyo"))
    }  # fmt: skip
    assert len(told) == 1
