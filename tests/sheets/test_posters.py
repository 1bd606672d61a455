"""Does a poster say what it must, where it must, large enough to be read?"""

from __future__ import annotations

import dataclasses
import re
from collections.abc import Callable
from typing import Any

import pytest

from chartgen.edition.model import Edition, Poster
from chartgen.errors import EditionFaults, Fault
from chartgen.sheets.posters import posters
from chartgen.sheets.sheet import Sheet

Reader = Callable[[str], Any]


def made(read: Any, **changes: object) -> tuple[Sheet, ...]:
    """All posters of an edition, each with these fields changed."""
    edition: Edition = read.edition
    if changes:
        altered = tuple(dataclasses.replace(poster, **changes) for poster in edition.posters)  # type: ignore[arg-type]
        edition = dataclasses.replace(edition, posters=altered)
    return posters(edition, read.figures, read.languages)


def by_stem(sheets: tuple[Sheet, ...]) -> dict[str, Sheet]:
    return {sheet.path.removeprefix("sheets/").removesuffix(".pdf"): sheet for sheet in sheets}


def words(html: str) -> str:
    return spaced(re.sub(r"<[^>]*>", " ", html.partition("<body>")[2]))


def spaced(text: str) -> str:
    return re.sub(r"\s+", " ", text)


def test_together_is_one_sheet_and_apart_one_a_language(read_edition: Reader) -> None:
    sheets = by_stem(made(read_edition("two-ways")))
    assert list(sheets) == ["together", "apart-fr", "apart-ar", "ice"]
    assert [sheet.lang for sheet in sheets.values()] == ["fr", "fr", "ar", "fr"]
    assert {sheet.pages for sheet in sheets.values()} == {1}
    assert (sheets["apart-fr"].width_mm, sheets["apart-fr"].height_mm) == pytest.approx((215.9, 279.4))


def test_a_sheet_apart_says_in_the_other_language_that_the_other_exists(read_edition: Reader) -> None:
    read = read_edition("two-ways")
    sheets = by_stem(made(read))
    for tag, other in (("fr", "ar"), ("ar", "fr")):
        said = f"{read.language(other).t('page.also_in')} {read.language(other).own_name}"
        assert said in words(sheets[f"apart-{tag}"].html)


def test_every_sheet_has_the_nine_fields_of_document_control(read_edition: Reader) -> None:
    read = read_edition("two-ways")
    keys = ("title", "reference", "issue", "issued", "review_by", "owner", "approver", "copy", "status")
    for sheet in made(read):
        text = words(sheet.html)
        for language in [own for own in read.languages if own.tag == sheet.lang]:
            for key in keys:
                assert language.t(f"control.{key}") in text, (sheet.path, key)
            assert language.t("control.page", page="1", pages="1") in text
        for value in ("TW-7", "2026-03-02", "2027-03-02", "Bureau", "Direction", "CC BY 4.0", "two-ways.example/"):
            assert value in text


def test_the_caution_stands_in_full_in_each_language_of_the_sheet(read_edition: Reader) -> None:
    read = read_edition("two-ways")
    for sheet in made(read):
        shown = {sheet.lang} if "apart" in sheet.path else {"fr", "ar"}
        for tag in shown:
            for key in ("worked", "no_guarantee", "law", "design"):
                sentence = read.language(tag).t(f"caution.{key}")
                assert (tag, sentence) in sheet.sentences
                assert spaced(sentence) in words(sheet.html)


def test_a_notice_for_the_reader_goes_onto_the_sheet_it_concerns_and_no_other(read_edition: Reader) -> None:
    read = read_edition("two-ways")
    sheets = by_stem(made(read))
    notice = read.language("ar").t("notice.does-not-stop")
    assert notice in words(sheets["ice"].html)
    assert notice not in words(sheets["together"].html)


def test_what_does_not_stop_says_so_in_the_table(read_edition: Reader) -> None:
    read = read_edition("two-ways")
    ice = by_stem(made(read))["ice"]
    cells = re.findall(r'<td class="words".*?</td>', ice.html, re.DOTALL)
    assert len(cells) == 2 * 4
    for language in read.languages:
        assert all(language.t("verdict.does_not_stop") in cell for cell in cells)
    assert not [figure for figure in ice.inked if figure.quantity == "printed_stopping"]


def test_the_table_holds_every_figure_that_the_drawing_plots(read_edition: Reader) -> None:
    read = read_edition("two-ways")
    sheet = by_stem(made(read))["apart-fr"]
    rows = read.figures.table
    shown = rows[(rows["vehicle"] == "bus") & (rows["surface"] == "dry") & (rows["grade"] == -0.09)]
    assert len(shown) == 8
    for row in shown["row"]:
        for quantity in ("printed_reaction", "printed_lag", "printed_braking", "printed_stopping"):
            assert any(f.row == row and f.quantity == quantity and f.boxes for f in sheet.inked), (row, quantity)


def test_a_sheet_read_from_the_right_is_mirrored_and_its_digits_are_not(read_edition: Reader) -> None:
    sheets = by_stem(made(read_edition("two-ways")))
    left_first, right_first = sheets["apart-fr"], sheets["apart-ar"]
    assert '<html lang="ar" dir="rtl">' in right_first.html

    def middles(sheet: Sheet) -> dict[int, float]:
        found = {}
        for figure in sheet.inked:
            if figure.quantity == "speed" and figure.boxes:
                left, _, right, _ = figure.boxes[0][1]
                found[figure.row] = (left + right) / 2
        return found

    one, other = middles(left_first), middles(right_first)
    assert one.keys() == other.keys()
    for row, middle in one.items():
        assert middle + other[row] == pytest.approx(left_first.width_mm, abs=0.1)
    assert re.search(r'<bdi dir="ltr">90.km/h</bdi>', right_first.html)


def test_languages_stand_equal_unless_the_edition_favours_the_first(read_edition: Reader) -> None:
    read = read_edition("miles")

    def sizes(edition: Edition) -> list[float]:
        sheet = posters(edition, read.figures, read.languages)[0]
        return [float(size) for size in re.findall(r"<h1 [^>]*font-size:([0-9.]+)mm", sheet.html)]

    equal = sizes(read.edition)
    assert len(equal) == 2
    assert equal[0] == equal[1]
    first = sizes(dataclasses.replace(read.edition, emphasis="first"))
    assert first[1] == pytest.approx(0.72 * first[0])


def type_size(sheet: Sheet, selector: str) -> float:
    found = re.search(rf"^{re.escape(selector)} {{ font-size: ([0-9.]+)mm", sheet.html, re.MULTILINE)
    assert found
    return float(found[1]) / 25.4 * 72


def test_running_text_is_12_points_on_a3_and_document_control_8_on_any_paper(read_edition: Reader) -> None:
    sheets = by_stem(made(read_edition("miles")))
    assert type_size(sheets["a3"], ".notes") == pytest.approx(12)
    assert type_size(sheets["a4"], ".notes") >= 9
    assert type_size(sheets["wide"], ".notes") >= 12
    assert min(type_size(sheet, ".imprint") for sheet in sheets.values()) >= 8


def test_the_code_is_40_mm_on_a3_with_a_quiet_zone_of_four_modules(read_edition: Reader) -> None:
    sheet = by_stem(made(read_edition("two-ways")))["together"]
    found = re.search(r'viewBox="0 0 (\d+) \1" style="width:([0-9.]+)mm', sheet.html)
    assert found
    side, width = int(found[1]), float(found[2])
    assert width * (side - 8) / side >= 40
    path = re.search(r'<path fill="[^"]*" d="([^"]*)"/></svg></div>', sheet.html)
    assert path
    starts = [tuple(map(int, start)) for start in re.findall(r"M(\d+) (\d+)h", path[1])]
    assert min(x for x, _ in starts) == 4
    assert min(y for _, y in starts) == 4


def test_a_poster_that_cannot_be_read_from_far_enough_is_the_editions_fault(read_edition: Reader) -> None:
    read = read_edition("miles")
    with pytest.raises(EditionFaults) as caught:
        made(read, read_from_m=20.0)
    assert [fault.key for fault in caught.value.faults] == [f"poster[{n}].read_from" for n in (1, 2, 3)]
    fault = caught.value.faults[1]
    measured = r"the totals' digits are (\d+\.\d) mm high on A4: easy to read from (\d\.\d) m, not from 20 m "
    found = re.fullmatch(measured + r"\(167 mm are needed\)", fault.problem)
    assert found
    digits, far = float(found[1]), float(found[2])
    # Easy reading: distance over digit height at most 120 (the project's own requirement P6).
    assert far == pytest.approx(digits * 0.12, abs=0.06)
    assert fault == Fault(
        read.edition.file,
        "poster[2].read_from",
        fault.problem,
        f"at most {int(digits * 1.2) / 10:g} m, a larger paper, or fewer columns (show.speeds, show.driver)",
        "20 m",
    )


def test_a_headline_that_no_size_fits_is_the_editions_fault(read_edition: Reader) -> None:
    read = read_edition("miles")
    poster: Poster = read.edition.posters[0]
    endless = {"en-GB": "Slow down because " * 90 + "you must.", "cy": "Arafwch."}
    edition = dataclasses.replace(read.edition, posters=(dataclasses.replace(poster, headline=endless),))
    with pytest.raises(EditionFaults) as caught:
        posters(edition, read.figures, read.languages)
    where, given = "poster[1].headline", endless["en-GB"]
    assert caught.value.faults == (
        Fault(edition.file, where, "the headline is too long for A3", "a shorter sentence", given),
    )
