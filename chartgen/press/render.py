"""A sheet becomes the bytes of a tagged PDF (PDF/UA-1), or a list of what is wrong with it."""

from __future__ import annotations

from typing import Any

from chartgen.errors import Finding, ProductFaults
from chartgen.press import engine, overflow
from chartgen.press.finish import finish
from chartgen.press.page import PrintPage
from chartgen.press.tagging import completed_tags

SIZE_TOLERANCE_MM = 0.1


def render(sheet: PrintPage) -> bytes:
    """The finished screen edition of `sheet`: same sheet, same bytes, in any process, folder, zone or order.

    Raises ProductFaults with a finding for each warning of the engine, each overflow and a wrong number or size of
    pages; MachineFault where the engine cannot be loaded.
    """
    with engine.session() as warnings:
        document = engine.lay_out(sheet.html)
        findings = [Finding("press.overflow", sheet.path, text) for text in overflow.problems(document)]
        findings += [Finding("press.pages", sheet.path, text) for text in _page_problems(document, sheet)]
        with completed_tags([page.height for page in document.pages]):
            data = document.write_pdf(pdf_variant="pdf/ua-1")
    findings += [Finding("press.engine", sheet.path, text) for text in dict.fromkeys(warnings)]
    if findings:
        raise ProductFaults(tuple(findings))
    return finish(data, two_sided=sheet.pages > 1)


def _page_problems(document: Any, sheet: PrintPage) -> list[str]:
    found = []
    if len(document.pages) != sheet.pages:
        found.append(f"{len(document.pages)} page(s) instead of {sheet.pages}: something is too tall for its sheet")
    for number, page in enumerate(document.pages, 1):
        width, height = page.width * overflow.MM_PER_PX, page.height * overflow.MM_PER_PX
        if max(abs(width - sheet.width_mm), abs(height - sheet.height_mm)) > SIZE_TOLERANCE_MM:
            due = f"{sheet.width_mm:g} x {sheet.height_mm:g} mm"
            found.append(f"page {number} is {width:.1f} x {height:.1f} mm instead of {due}")
    return found
