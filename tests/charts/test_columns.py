"""Is every bar as long as its row says, every label where it belongs, in both directions?"""

from __future__ import annotations

from itertools import pairwise
from typing import Any

import pandas as pd
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from chartgen.charts import columns, measures
from chartgen.charts.columns_data import groups
from chartgen.charts.columns_frame import part_edges
from chartgen.charts.drawing import Drawing, total_digit_height
from chartgen.charts.inks import contrast, least_contrast, palette
from chartgen.charts.overlap import collisions
from tests.charts.made import AR, CY, EN, FR, MadeWords, rows
from tests.charts.measured import bounds, drawn_columns, lengths_m, pieces_of

MPH = (20, 30, 40, 50, 60, 70)
PAIR = ({"en-GB": "Typical", "cy": "Arferol"}, {"en-GB": "Cautious", "cy": "Gofalus"})


def draw(*series: pd.DataFrame, **changes: Any) -> Drawing:
    asked: dict[str, Any] = {
        "languages": (EN, CY), "palette": palette("gorse"), "width_mm": 260, "height_mm": 290, "direction": "ltr",
        "distance_unit": "m", "speed_unit": "mph",
    }  # fmt: skip
    return columns.columns(list(series), **{**asked, **changes})


def texts(drawing: Drawing, role: str) -> list[str]:
    return [label.text for label in drawing.labels if label.role == role]


WEB = {"languages": (EN,), "width_mm": 180, "height_mm": 104, "medium": "web"}


@pytest.mark.parametrize("unit", ["m", "ft"])
@pytest.mark.parametrize("lag_s", [0.0, 0.4])
@pytest.mark.parametrize("size", [{}, WEB], ids=["poster", "web"])
def test_each_bar_is_as_long_as_its_unrounded_value_and_near_its_label(
    unit: str, lag_s: float, size: dict[str, Any]
) -> None:
    table = rows(MPH, lag_s=lag_s, deceleration=5, distance_unit=unit)
    drawing = draw(table, distance_unit=unit, **size)
    printed_m = 0.3048 if unit == "ft" else 1.0
    tolerance = 0.004 / drawing.scale_mm_per_m  # the file's micrometres
    for column, row in zip(drawn_columns(drawing), table.to_dict("records"), strict=True):
        lengths = lengths_m(column, drawing)
        assert set(lengths) == {"reaction", "braking"} | ({"lag"} if lag_s else set())
        for part, length in lengths.items():
            assert length == pytest.approx(row[f"{part}_distance_m"], abs=tolerance)
            # Printed figures are rounded up to the next one (requirement N3: within one step of the bar).
            assert -tolerance <= row[f"printed_{part}"] * printed_m - length <= printed_m + tolerance
        whole = (column.foot - column.top) / drawing.scale_mm_per_m
        assert whole == pytest.approx(row["stopping_distance_m"], abs=tolerance)


def test_all_columns_stand_on_one_base_line_and_the_tallest_fits_with_its_total() -> None:
    drawing = draw(rows(MPH, lag_s=0.4))
    made = drawn_columns(drawing)
    assert len({round(column.foot, 3) for column in made}) == 1
    assert collisions(drawing) == []
    assert min(column.top for column in made) > 0.69 * max(x.size_mm for x in drawing.labels if x.role == "total")


@pytest.mark.parametrize("size", [{}, WEB], ids=["poster", "web"])
def test_white_gaps_between_parts_are_wide_enough_to_see(size: dict[str, Any]) -> None:
    for column in drawn_columns(draw(rows(MPH, lag_s=0.4), **size)):
        for below, above in pairwise(("reaction", "lag", "braking")):
            assert column.parts[below][1] - column.parts[above][0] >= 0.5 - 0.002  # requirement A2


def test_the_reaction_is_outlined_in_type_ink() -> None:
    drawing = draw(rows(MPH))
    lines = [bounds([p]) for p in pieces_of(drawing, "type")]
    for column in drawn_columns(drawing):
        foot, top = column.parts["reaction"]
        sides = [b for b in lines if column.x0 - 0.01 <= b[0] and b[2] <= column.x1 + 0.01 and b[1] >= top - 0.01]
        assert min(b[0] for b in sides) == pytest.approx(column.x0, abs=0.002)
        assert max(b[2] for b in sides) == pytest.approx(column.x1, abs=0.002)
        frame = [b for b in sides if b[3] - b[1] == pytest.approx(foot - top, abs=0.01) and b[0] == column.x0]
        assert frame[0][2] - frame[0][0] == pytest.approx(0.5, abs=0.002)


@pytest.mark.parametrize(("unit", "course"), [("m", 10.0), ("ft", 25.0)])
def test_a_joint_stands_at_every_course_but_not_close_to_an_edge(unit: str, course: float) -> None:
    drawing = draw(rows(MPH, distance_unit=unit), distance_unit=unit)
    assert drawing.course == course
    pitch = course * (0.3048 if unit == "ft" else 1.0) * drawing.scale_mm_per_m
    clear = measures.poster(260, 290).joint_clear
    for column in drawn_columns(drawing):
        foot, top = column.parts["braking"]
        # Only the courses span the column; the plates behind words do not.
        whole = sorted(
            (b[1], b[3])
            for b in (bounds([p]) for p in pieces_of(drawing, "braking"))
            if b[0] == column.x0 and b[2] == column.x1
        )
        joints = [(below[0] + above[1]) / 2 for above, below in pairwise(whole)]
        wanted = [column.foot - i * pitch for i in range(1, 500)]
        wanted = sorted(y for y in wanted if top + clear <= y <= foot - clear)
        assert joints == pytest.approx(wanted, abs=0.003)
        assert all(below[0] - above[1] == pytest.approx(0.5, abs=0.003) for above, below in pairwise(whole))


def test_a_joint_under_a_number_is_bridged() -> None:
    assert collisions(draw(rows(range(20, 75, 5)))) == []  # "crossed" would be found here


def test_without_lag_there_is_no_lag_anywhere() -> None:
    drawing = draw(rows(MPH))
    assert "ink-lag" not in drawing.marks_svg
    assert "brake lag" not in texts(drawing, "name")
    assert texts(drawing, "lag") == []


def test_with_lag_its_numbers_are_large_enough() -> None:
    drawing = draw(rows(MPH, lag_s=0.4, deceleration=5))
    assert texts(drawing, "lag") == ["4", "6", "8", "9", "11", "13"]
    for label in drawing.labels:
        if label.role == "lag":
            assert 0.698 * label.size_mm >= 4.5 - 1e-3


def test_every_number_names_its_row_and_quantity_and_reads_as_printed() -> None:
    table = rows(MPH, lag_s=0.4, first_row=40)
    drawing = draw(table)
    by_row = table.set_index("row")
    for label in drawing.labels:
        if label.row is None:
            assert label.role in {"ruler", "unit", "name", "driver"}
        else:
            assert float(label.text) == by_row.loc[label.row, f"printed_{label.quantity}"]
            assert label.role == {"stopping": "total", "speed": "speed", "lag": "lag"}.get(str(label.quantity), "part")
    assert {label.row for label in drawing.labels if label.role == "total"} == set(by_row.index)
    assert drawing.unlabelled == ()


def test_names_stand_once_a_language_and_the_two_are_of_one_size() -> None:
    drawing = draw(rows(MPH, lag_s=0.4))
    assert sorted(texts(drawing, "name")) == sorted(
        ["reaction", "ymateb", "brake lag", "oedi’r brêc", "braking", "brecio"]
    )
    for english, welsh in (("reaction", "ymateb"), ("braking", "brecio")):
        one, two = (next(x for x in drawing.labels if x.text == text) for text in (english, welsh))
        assert (one.size_mm, one.face, one.ink) == (two.size_mm, two.face, two.ink)
        assert (one.lang, two.lang) == ("en-GB", "cy")
        assert one.y_mm < two.y_mm
    assert texts(drawing, "unit") == ["mph", "mya", "m"]  # what is the same in both stands once


def test_right_to_left_is_a_mirror_with_digits_left_alone() -> None:
    table = rows((30, 50, 70), lag_s=0.4, speed_unit="km/h")
    asked: dict[str, Any] = {"languages": (AR, FR), "speed_unit": "km/h"}
    left, right = draw(table, **asked), draw(table, direction="rtl", **asked)
    assert collisions(right) == []
    for one, two in zip(drawn_columns(left), reversed(drawn_columns(right)), strict=True):
        assert (one.x0, one.x1) == pytest.approx((260 - two.x1, 260 - two.x0), abs=0.003)
        assert one.parts == two.parts
    totals = [label for label in right.labels if label.role == "total"]
    assert sorted(totals, key=lambda x: -x.x_mm) == sorted(
        totals, key=lambda x: float(x.text)
    )  # the first at the right
    assert max(x.x_mm for x in right.labels if x.role == "ruler") < min(column.x0 for column in drawn_columns(right))
    assert min(x.x_mm for x in left.labels if x.role == "ruler") > max(column.x1 for column in drawn_columns(left))
    turned = {"left": "right", "right": "left", "center": "center"}
    for a, b in zip(left.labels, right.labels, strict=True):
        assert a.text == b.text
        assert b.anchor == turned[a.anchor]
        assert b.dir == ("ltr" if b.text.isdigit() or b.lang == "fr" else "rtl")


def test_a_column_that_does_not_stop_is_open_at_the_top_and_has_words_but_no_number() -> None:
    table = rows(MPH, lag_s=0.4, deceleration=[0.8, 0.6, 0.5, 0, 0, 0])
    drawing = draw(table)
    made = drawn_columns(drawing)
    assert [column.top for column in made[3:]] == [0, 0, 0]
    assert all(column.top > 5 for column in made[:3])
    endless = set(table.loc[~table["stops"], "row"])
    said = [(label.role, label.quantity) for label in drawing.labels if label.row in endless]
    assert {quantity for _, quantity in said} <= {"speed", "reaction", "lag", "stops"}
    words = " ".join(label.text for label in drawing.labels if label.role == "verdict" and label.row == 5)
    assert words == "does not stop nid yw’n stopio"
    assert collisions(drawing) == []
    # Open: white between the slabs at the top, all across the column.
    slabs = [p for p in pieces_of(drawing, "braking") if bounds([p])[0] == made[5].x0 and bounds([p])[3] < 20]
    assert len(slabs) >= 3


def test_where_nothing_stops_there_is_no_total_and_no_digit_height() -> None:
    drawing = draw(rows(MPH, deceleration=0))
    assert texts(drawing, "total") == []
    assert total_digit_height(drawing) == 0.0
    assert "braking" in texts(drawing, "name")
    assert collisions(drawing) == []


def test_columns_too_narrow_for_the_words_share_a_lintel() -> None:
    many = [rows(MPH, deceleration=0, reaction_s=s) for s in (0.7, 1.5, 2.5)]
    drawing = draw(*many, names_of_series=(*PAIR, {"en-GB": "Tired", "cy": "Blin"}), **{**WEB, "width_mm": 120})
    assert texts(drawing, "verdict") == ["does not stop"]
    assert collisions(drawing) == []


def test_series_stand_side_by_side_on_one_scale_with_their_names_beneath() -> None:
    drawing = draw(rows(MPH), rows(MPH, reaction_s=1.5, first_row=6), names_of_series=PAIR)
    made = drawn_columns(drawing)
    assert len(made) == 12
    within = [b.x0 - a.x1 for a, b in pairwise(made)][::2]
    between = [b.x0 - a.x1 for a, b in pairwise(made)][1::2]
    assert max(within) < min(between)
    assert made[1].parts["reaction"][1] < made[0].parts["reaction"][1]
    names = [label for label in drawing.labels if label.role == "driver"]
    assert {label.text for label in names} == {"Typical", "Arferol", "Cautious", "Gofalus"}
    assert all(label.y_mm > made[0].foot for label in names)
    assert collisions(drawing) == []


def test_long_names_of_series_hang_once_as_flags() -> None:
    long = ({"en-GB": "A typical driver on this road"}, {"en-GB": "With a cautious allowance"})
    drawing = draw(rows(MPH), rows(MPH, reaction_s=1.5, first_row=6), names_of_series=long, **WEB)
    assert sorted(texts(drawing, "driver")) == ["A typical driver on this road", "With a cautious allowance"]
    assert collisions(drawing) == []


def test_totals_are_as_wide_as_their_columns_at_least_and_their_digit_height_is_told() -> None:
    drawing = draw(rows(MPH))
    size = next(label.size_mm for label in drawing.labels if label.role == "total")
    assert total_digit_height(drawing) == pytest.approx(0.698 * size, abs=0.01)
    assert total_digit_height(drawing) >= 25  # read from 3 m: distance / 120 (requirement P6)
    three = draw(rows(MPH, lag_s=0.4, deceleration=5))
    assert max(len(text) for text in texts(three, "total")) == 3
    # Three figures are wider than such a column; they reach back over the lower one before it.
    assert total_digit_height(three) >= 25


def test_where_columns_are_too_many_totals_are_left_out_and_told_never_laid_over_another() -> None:
    drawing = draw(rows(range(5, 105)), **WEB)
    assert collisions(drawing) == []
    assert len(texts(drawing, "total")) + len(drawing.unlabelled) == 100
    assert 0 < len(texts(drawing, "total")) < 100
    assert 99 not in drawing.unlabelled  # the greatest distance keeps its number
    assert drawing.course == 0  # too narrow to count courses


@pytest.mark.parametrize("name", ["gorse", "lichen", "bracken"])
@pytest.mark.parametrize("size", [{}, WEB], ids=["poster", "web"])
def test_text_stands_out_on_what_it_stands_on(name: str, size: dict[str, Any]) -> None:
    inks = palette(name)
    drawing = draw(rows(MPH, lag_s=0.4, deceleration=[5, 5, 5, 5, 0.6, 0]), palette=inks, **size)
    made = drawn_columns(drawing)
    for label in drawing.labels:
        ground = "paper"
        for column in made:
            for part, (foot, top) in column.parts.items():
                if column.x0 < label.x_mm < column.x1 and top < label.y_mm < foot + 0.01:
                    ground = part
        if label.role in {"speed", "unit"} and label.ink == "paper":
            ground = "type"
        least = least_contrast(label.size_mm, bold=label.face in {"text-bold", "numeral-bold"})
        assert contrast(inks.ink(label.ink).srgb, inks.ink(ground).srgb) >= least, label.text


def test_one_plan_serves_every_language_with_the_same_marks() -> None:
    inks = palette("gorse")
    plan = columns.plan(
        [rows(MPH, lag_s=0.4)], languages=(EN, CY), palette=inks, width_mm=180, height_mm=104, distance_unit="m",
        speed_unit="mph", together=False, medium="web",
    )  # fmt: skip
    made = [columns.finish(plan, name="x", languages=(w,), palette=inks, direction="ltr") for w in (EN, CY)]
    assert made[0].marks_svg is made[1].marks_svg
    assert {label.lang for label in made[1].labels} == {"cy"}
    assert [collisions(drawing) for drawing in made] == [[], []]
    assert hash(plan) == hash(plan)


def test_the_skyline_is_free() -> None:
    drawing = draw(rows(MPH, lag_s=0.4))
    assert [x0 for x0, _, _ in drawing.skyline] == sorted(x0 for x0, _, _ in drawing.skyline)
    made = drawn_columns(drawing)
    for x0, x1, y in drawing.skyline:
        assert not [c for c in made if c.x0 < x1 - 0.01 and c.x1 > x0 + 0.01 and c.top < y]
        assert not [
            x for x in drawing.labels if x.role == "total" and x0 < x.x_mm < x1 and x.y_mm - 0.7 * x.size_mm < y - 0.1
        ]


def test_what_cannot_be_drawn_is_refused() -> None:
    table = rows(MPH)
    broken = table.assign(braking_distance_m=table["braking_distance_m"].where(table["speed"] != 40))
    with pytest.raises(ValueError, match="row 2"):
        draw(broken)
    with pytest.raises(ValueError, match="one to 3 series"):
        draw(*[table] * 4)
    with pytest.raises(ValueError, match="needs a name"):
        draw(table, table)
    with pytest.raises(ValueError, match="twice"):
        draw(pd.concat([table, table]))
    with pytest.raises(ValueError, match="no rows"):
        draw(table[:0])
    with pytest.raises(ValueError, match="do not fit"):
        draw(table, width_mm=12, height_mm=290)


@settings(max_examples=40, deadline=None)
@given(
    speeds=st.lists(st.integers(5, 140), min_size=1, max_size=12, unique=True).map(sorted),
    reaction_s=st.floats(0.3, 4),
    lag_s=st.sampled_from([0.0, 0.4, 0.9]),
    slow=st.floats(0.3, 9),
    unit=st.sampled_from(["m", "ft"]),
    web=st.booleans(),
    direction=st.sampled_from(["ltr", "rtl"]),
    stopping=st.integers(0, 40),
)
def test_no_rows_make_labels_meet(
    speeds: list[int], reaction_s: float, lag_s: float, slow: float, unit: str, web: bool, direction: str, stopping: int
) -> None:
    slowing = [slow if i < stopping else 0 for i in range(len(speeds))]
    table = rows(speeds, reaction_s=reaction_s, lag_s=lag_s, deceleration=slowing, distance_unit=unit)
    other = rows(speeds, reaction_s=reaction_s + 1, lag_s=lag_s, deceleration=slow, distance_unit=unit, first_row=20)
    asked: dict[str, Any] = {"distance_unit": unit, "direction": direction, **(WEB if web else {})}
    assert collisions(draw(table, **asked)) == []
    assert collisions(draw(table, other, names_of_series=PAIR, **asked)) == []


@given(
    lengths=st.tuples(st.floats(0.01, 200), st.floats(0.01, 50), st.floats(0.01, 900)), scale=st.floats(0.05, 4),
    stops=st.booleans(),
)  # fmt: skip
def test_parts_never_vanish_never_touch_and_end_exactly(lengths: tuple[float, ...], scale: float, stops: bool) -> None:
    bar = groups([rows([30], lag_s=0.4, deceleration=5 if stops else 0)])[0].bars[0]
    assert bar is not None
    long = type(bar)(
        row=0, speed=30, printed_speed=30, stops=stops, parts=bar.parts, lengths_m=lengths[: len(bar.parts)],
        printed=bar.printed, printed_total=bar.printed_total,
    )  # fmt: skip
    top = -sum(lengths) * scale if stops else -1e4
    edges = part_edges(long, 0.0, scale, 0.8, top)
    assert [edge.part for edge in edges] == ["reaction", "lag", "braking"]
    room = -top >= 3 * 0.4 + 2 * 0.8
    for below, above in pairwise(edges):
        assert below.high_y - above.low_y == pytest.approx(0.8) if room else below.high_y > above.low_y
    assert all(edge.height >= (0.4 - 1e-9 if room else 0) for edge in edges)
    assert edges[0].low_y == 0
    assert edges[-1].high_y == top


def test_words_of_a_language_that_are_not_known_are_an_error() -> None:
    class Mute(MadeWords):
        def t(self, key: str, **values: str) -> str:
            raise KeyError(key)

    with pytest.raises(KeyError, match=r"part\."):
        draw(rows(MPH), languages=(Mute("en-GB"),))
