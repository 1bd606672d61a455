"""What a screen reader gets: language of each passage, header cells, figures with their words and their place.

Source of what is asked: ISO 14289-1:2014 (PDF/UA-1), 7.2 to 7.5; WCAG 2.2, 3.1.2. The independent checker is
page-validation, profile PDF/UA-1.
"""

from __future__ import annotations

import io
from collections.abc import Iterator
from typing import Any

import page
import pikepdf
import pytest


def elements(pdf: pikepdf.Pdf) -> Iterator[Any]:
    def walk(node: Any) -> Iterator[Any]:
        if isinstance(node, pikepdf.Array):
            for child in node:
                yield from walk(child)
        elif isinstance(node, pikepdf.Dictionary):
            if "/S" in node:
                yield node
            if "/K" in node:
                yield from walk(node.K)

    yield from walk(pdf.Root.StructTreeRoot.K)


def opened(data: bytes) -> pikepdf.Pdf:
    return pikepdf.open(io.BytesIO(data))


def tagged(pdf: pikepdf.Pdf, kind: str) -> list[Any]:
    return [element for element in elements(pdf) if str(element.S) == kind]


@pytest.mark.parametrize("name", ["two_ways", "miles"])
def test_every_poster_conforms_to_pdf_ua_1(name: str, request: pytest.FixtureRequest) -> None:
    printed = request.getfixturevalue(name)
    for sheet, data in zip(printed.sheets, printed.pdfs, strict=True):
        report = page.validate_pdf_bytes(data, profile="ua1")
        assert report.is_compliant, (sheet.path, [(f.rule_id, f.message) for f in report.failures])


def test_the_checker_does_find_faults(two_ways: Any) -> None:
    _, data = two_ways.only("together")
    pdf = opened(data)
    del next(element for element in elements(pdf) if element.S == "/Figure").Alt
    out = io.BytesIO()
    pdf.save(out)
    assert not page.validate_pdf_bytes(out.getvalue(), profile="ua1").is_compliant


def test_the_drawing_says_itself_in_every_language(two_ways: Any) -> None:
    _, data = two_ways.only("together")
    pdf = opened(data)
    figures = tagged(pdf, "/Figure")
    assert [str(figure.get("/Lang", "")) for figure in figures] == ["fr", "ar", ""]
    assert all(20 < len(str(figure.Alt)) <= 150 for figure in figures)
    assert str(figures[2].Alt).endswith("https://two-ways.example/")


def test_a_figures_box_is_in_points_from_the_foot_of_the_page(two_ways: Any) -> None:
    sheet, data = two_ways.only("together")
    pdf = opened(data)
    box = [float(edge) for edge in tagged(pdf, "/Figure")[0].A.BBox]
    width, height = sheet.width_mm / 25.4 * 72, sheet.height_mm / 25.4 * 72
    assert 0 < box[0] < box[2] < width
    assert 0.3 * height < box[1] < box[3] < height


def test_passages_name_their_language(two_ways: Any) -> None:
    _, data = two_ways.only("together")
    pdf = opened(data)
    assert str(pdf.Root.Lang) == "fr"
    assert {str(element.Lang) for element in elements(pdf) if "/Lang" in element} >= {"fr", "ar"}


def test_header_cells_have_a_scope_and_data_cells_their_headers(two_ways: Any) -> None:
    _, data = two_ways.only("apart-fr")
    pdf = opened(data)
    headers = {str(cell.ID): str(cell.A.Scope) for cell in tagged(pdf, "/TH")}
    assert set(headers.values()) == {"/Column", "/Row"}
    cells = [cell for cell in tagged(pdf, "/TD") if "/Headers" in cell.A and len(cell.A.Headers)]
    assert len(cells) == 4 * 4 * 2
    for cell in cells:
        named = [headers[str(name)] for name in cell.A.Headers]
        assert sorted(named) == ["/Column", "/Column", "/Row"]
