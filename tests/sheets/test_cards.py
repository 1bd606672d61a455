"""Cab cards: every vehicle has its card in its driver's language, and every card says all that it must."""

from __future__ import annotations

import io
import re
from collections.abc import Iterator
from dataclasses import replace

import page
import pikepdf
import pytest

from chartgen.edition.load import load_edition
from chartgen.edition.model import Edition
from chartgen.figures.record import Figures
from chartgen.figures.table import figures
from chartgen.language.load import Language, languages
from chartgen.press.preflight import check_pdf
from chartgen.press.readback import read
from chartgen.press.render import render
from chartgen.sheets import card_plan
from chartgen.sheets.cards import cards
from chartgen.sheets.imposition import grid
from chartgen.sheets.sheet import Sheet

Made = tuple[Edition, Figures, tuple[Language, ...], Sheet, bytes]


@pytest.fixture(scope="module")
def made() -> Made:
    """The fleet's cards, printed once for all tests."""
    edition = load_edition("quillane")
    table, spoken = figures(edition), languages(edition)
    assert edition.cards is not None
    one_depot = tuple(replace(row, depot="Ridge yard") for row in edition.cards.roster)
    edition = replace(edition, cards=replace(edition.cards, roster=one_depot))
    (sheet,) = cards(edition, table, spoken)
    return edition, table, spoken, sheet, render(sheet)


def test_each_depot_has_a_document_of_its_own() -> None:
    edition = load_edition("quillane")
    assert edition.cards is not None
    sheets = cards(edition, figures(edition), languages(edition))
    assert [sheet.path for sheet in sheets] == [
        "sheets/cab-cards-ridge-yard.pdf",
        "sheets/cab-cards-stonefold.pdf",
        "sheets/cab-cards-low-ferry.pdf",
    ]
    for sheet, depot in zip(sheets, dict.fromkeys(row.depot for row in edition.cards.roster), strict=True):
        assert depot in sheet.title
        there = [row.vehicle_id for row in edition.cards.roster if row.vehicle_id in sheet.facts]
        assert there == [row.vehicle_id for row in edition.cards.roster if row.depot == depot]


def texts(data: bytes) -> Iterator[str]:
    """The text of each page."""
    reading = read(data)
    for number in range(1, len(reading.sizes_mm) + 1):
        yield " ".join(piece.text for piece in reading.pieces if piece.page == number)


def test_a_card_for_every_vehicle_in_each_of_its_languages(made: Made) -> None:
    edition, _, _, sheet, data = made
    assert edition.cards is not None
    assert len(edition.cards.roster) == 12
    wanted = sum(len(row.languages) for row in edition.cards.roster)
    fronts = " ".join(text for i, text in enumerate(texts(data)) if i % 2 == 0)
    for row in edition.cards.roster:
        assert len(re.findall(rf"{row.vehicle_id}\b", fronts)) == len(row.languages)
    assert sheet.pages == 2 * -(-wanted // 4)


def test_the_finished_file_passes_the_preflight(made: Made) -> None:
    _, table, spoken, sheet, data = made
    assert check_pdf(data, sheet, table, spoken) == ()


def test_a_changed_table_is_seen_on_the_cards(made: Made) -> None:
    _, table, spoken, sheet, data = made
    first = next(figure for figure in sheet.inked if figure.quantity == "printed_stopping")
    altered = table.table.copy()
    altered.loc[altered.index[first.row], "printed_stopping"] += 1
    codes = {finding.code for finding in check_pdf(data, sheet, replace(table, table=altered), spoken)}
    assert {"preflight.number-missing", "preflight.number-misplaced"} <= codes


def test_the_cards_are_accessible(made: Made) -> None:
    """PDF/UA-1 by an independent checker."""
    report = page.validate_pdf_bytes(made[4], profile="ua1")
    assert report.is_compliant, [failure.message for failure in report.failures]


def test_every_side_has_the_caution_and_the_copy_number(made: Made) -> None:
    edition, _, spoken, _, data = made
    assert edition.cards is not None
    for number, text in enumerate(texts(data)):
        first = 4 * (number // 2)
        cards_here = [(row, tag) for row in edition.cards.roster for tag in row.languages][first : first + 4]
        squeezed = re.sub(r"\s", "", text)
        for row, tag in cards_here:
            language = next(one for one in spoken if one.tag == tag)
            for key in ("worked", "no_guarantee", "law", "design"):
                sentence = re.sub(r"\s", "", language.t(f"caution.{key}"))
                assert squeezed.count(sentence) == sum(1 for _, other in cards_here if other == tag)
            assert re.search(rf"{language.t('control.copy')}\s*{row.copy_no}\b", text)


def test_the_gap_is_on_the_front_in_seconds(made: Made) -> None:
    _, table, _, sheet, _ = made
    gaps = [figure for figure in sheet.inked if figure.quantity == "printed_gap_s" and figure.boxes]
    assert gaps
    assert all(number % 2 == 1 for figure in gaps for number, _ in figure.boxes)
    # 68 ft of vehicle by the rule of one second for each 10 ft: 6.8 s, up to 7; one more above 40 mph.
    articulated = {float(table.table["speed"].iloc[f.row]): table.table["printed_gap_s"].iloc[f.row] for f in gaps
                   if table.table["vehicle"].iloc[f.row] == "articulated-laden"}  # fmt: skip
    assert articulated == {25.0: 7.0, 35.0: 7.0, 45.0: 8.0, 55.0: 8.0, 65.0: 8.0}


def test_lag_stands_apart_and_no_empty_vehicle_is_given_less(made: Made) -> None:
    _, table, _, sheet, _ = made
    assert any(figure.quantity == "printed_lag" for figure in sheet.inked)
    rows = {figure.row for figure in sheet.inked if figure.quantity == "printed_stopping"}
    shown = table.table.iloc[sorted(rows)]
    distances = {
        (row.vehicle, row.surface, row.speed): float(row.printed_stopping)  # type: ignore[arg-type]
        for row in shown.itertuples()
    }
    empty = {key: x for key, x in distances.items() if str(key[0]).endswith("unladen")}
    assert len(empty) == len(distances) / 2
    for (vehicle, surface, speed), distance in empty.items():
        assert distance >= distances[(str(vehicle).replace("unladen", "laden"), surface, speed)]


def test_a_back_lies_behind_its_front(made: Made) -> None:
    """Turned over the long edge, each back stands mirrored about the sheet's middle, to 0.01 mm."""
    edition = made[0]
    assert edition.cards is not None
    laid = grid(edition.cards.size, edition.cards.sheet)
    assert laid is not None
    for index in range(laid.places):
        front, back = laid.front(index), laid.back(index)
        assert back[0] + laid.card.width_mm == pytest.approx(laid.sheet.width_mm - front[0], abs=0.01)
        assert back[1] == pytest.approx(front[1], abs=0.01)


def test_the_document_keeps_its_tags_and_its_two_languages(made: Made) -> None:
    with pikepdf.open(io.BytesIO(made[4])) as pdf:
        assert pdf.Root.MarkInfo.Marked
        assert pdf.Root.ViewerPreferences.Duplex == "/DuplexFlipLongEdge"
        assert pdf.Root.ViewerPreferences.PrintScaling == "/None"
        assert pdf.Root.ViewerPreferences.DisplayDocTitle
        tags = {
            str(item.get("/Lang")) for item in pdf.objects if isinstance(item, pikepdf.Dictionary) and "/Lang" in item
        }
    assert {"en-US", "es-US"} <= tags


@pytest.mark.parametrize("speeds", range(1, 30))
def test_the_highest_speed_is_always_on_the_card(speeds: int) -> None:
    shown = card_plan.chosen(speeds)
    assert shown[-1] == speeds - 1
    assert 1 <= len(shown) <= card_plan.MOST_ROWS
    assert list(shown) == sorted(set(shown))
