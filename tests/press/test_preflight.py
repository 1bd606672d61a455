"""Would the preflight notice? Each test spoils one thing in a finished file, or in the table, and asks for the code."""

from __future__ import annotations

import dataclasses
import io
import re
from collections.abc import Callable
from functools import partial
from typing import Any

import pikepdf
import pytest

from chartgen.press.preflight import check_pdf
from chartgen.press.readback import numbers, read
from chartgen.sheets.sheet import Sheet


def spoilt(data: bytes, change: Callable[[pikepdf.Pdf], None]) -> bytes:
    out = io.BytesIO()
    with pikepdf.open(io.BytesIO(data)) as pdf:
        change(pdf)
        pdf.save(out)
    return out.getvalue()


def codes(printed: Any, sheet: Sheet, data: bytes, figures: Any = None) -> set[str]:
    return {f.code for f in check_pdf(data, sheet, figures or printed.figures, printed.languages)}


@pytest.mark.parametrize("name", ["two_ways", "miles"])
def test_sound_posters_pass(name: str, request: pytest.FixtureRequest) -> None:
    printed = request.getfixturevalue(name)
    for sheet, data in zip(printed.sheets, printed.pdfs, strict=True):
        assert check_pdf(data, sheet, printed.figures, printed.languages) == ()


def glyphs_of(pdf: pikepdf.Pdf) -> dict[str, dict[str, str]]:
    """By font resource: digit -> the hexadecimal glyph id that draws it, from the font's own ToUnicode."""
    found = {}
    for name, font in pdf.pages[0].Resources.Font.items():
        pairs = re.findall(rb"<([0-9a-f]{4})> <([0-9a-f]{4})>", font.ToUnicode.read_bytes())
        found[str(name)] = {
            chr(int(text, 16)): glyph.decode() for glyph, text in pairs if chr(int(text, 16)).isdecimal()
        }
    return found


def one_digit_altered(pdf: pikepdf.Pdf, which: int) -> None:
    """The `which`-th drawn digit of the first page becomes another digit of the same font."""
    glyphs = glyphs_of(pdf)
    font, seen, out = "", 0, []
    instructions: Any = pikepdf.parse_content_stream(pdf.pages[0])
    for operands, operator in instructions:
        if str(operator) == "Tf":
            font = str(operands[0])
        if str(operator) == "TJ" and seen <= which:
            shown = []
            for part in operands[0]:
                if isinstance(part, pikepdf.String):
                    raw = bytes(part).hex()
                    ids = [raw[i : i + 4] for i in range(0, len(raw), 4)]
                    by_glyph = {glyph: digit for digit, glyph in glyphs[font].items()}
                    for i, glyph in enumerate(ids):
                        if glyph in by_glyph:
                            if seen == which:
                                others = sorted(set(glyphs[font]) - {by_glyph[glyph], "0"})
                                ids[i] = glyphs[font][others[-1]]
                            seen += 1
                    part = pikepdf.String(bytes.fromhex("".join(ids)))  # noqa: PLW2901 the altered string goes back
                shown.append(part)
            operands = [pikepdf.Array(shown)]  # noqa: PLW2901
        out.append((operands, operator))
    assert seen > which, "the page has fewer digits than that"
    pdf.pages[0].Contents = pdf.make_stream(pikepdf.unparse_content_stream(out))


@pytest.mark.parametrize("stem", ["together", "apart-ar", "ice"])
@pytest.mark.parametrize("which", [0, 20, 45])
def test_one_altered_digit_is_seen(two_ways: Any, stem: str, which: int) -> None:
    sheet, data = two_ways.only(stem)
    bad = spoilt(data, partial(one_digit_altered, which=which))
    assert {"preflight.number-unknown", "preflight.number-missing"} <= codes(two_ways, sheet, bad)


def test_every_digit_of_a_poster_is_guarded(two_ways: Any) -> None:
    sheet, data = two_ways.only("apart-fr")
    drawn = sum(c.isdecimal() for piece in read(data).pieces for c in piece.text)
    for which in range(0, drawn, 9):
        bad = spoilt(data, partial(one_digit_altered, which=which))
        assert "preflight.number-unknown" in codes(two_ways, sheet, bad)


@pytest.mark.parametrize("column", ["printed_stopping", "printed_reaction", "reaction_time_s", "speed", "friction"])
def test_an_altered_table_is_seen(two_ways: Any, column: str) -> None:
    sheet, data = two_ways.only("together")
    rows = [figure.row for figure in sheet.inked if figure.quantity == column]
    table = two_ways.figures.table.copy()
    table.loc[table.index[rows[0]], column] += 1
    assert codes(two_ways, sheet, data, dataclasses.replace(two_ways.figures, table=table)) >= {
        "preflight.number-unknown",
        "preflight.number-missing",
    }


def test_two_figures_that_changed_places_are_seen(two_ways: Any) -> None:
    sheet, data = two_ways.only("together")
    table = two_ways.figures.table.copy()
    rows = sorted({figure.row for figure in sheet.inked if figure.quantity == "printed_stopping"})[:2]
    for column in ("printed_stopping", "printed_braking", "printed_reaction", "printed_lag", "speed"):
        first, second = table[column].iloc[rows[0]], table[column].iloc[rows[1]]
        table.loc[table.index[rows[0]], column], table.loc[table.index[rows[1]], column] = second, first
    assert codes(two_ways, sheet, data, dataclasses.replace(two_ways.figures, table=table)) == {
        "preflight.number-misplaced"
    }


def test_a_missing_caution_is_seen_in_each_language(two_ways: Any) -> None:
    sheet, data = two_ways.only("together")
    for tag, other in (("fr", "Ces chiffres sont garantis."), ("ar", "هذه الأرقام مضمونة.")):
        asked = dataclasses.replace(sheet, sentences=((tag, other),))
        assert codes(two_ways, asked, data) == {"preflight.sentence-missing"}
    assert {tag for tag, _ in sheet.sentences} == {"fr", "ar"}


def test_wrong_size_pages_title_and_language_are_seen(two_ways: Any) -> None:
    sheet, data = two_ways.only("together")
    for changes, code in (
        ({"width_mm": 210.0}, "preflight.size"),
        ({"pages": 2}, "preflight.pages"),
        ({"title": "Another"}, "preflight.title"),
        ({"lang": "ar"}, "preflight.lang"),
    ):
        assert codes(two_ways, dataclasses.replace(sheet, **changes), data) == {code}


def test_an_untagged_file_is_seen(two_ways: Any) -> None:
    sheet, data = two_ways.only("together")

    def change(pdf: pikepdf.Pdf) -> None:
        del pdf.Root.StructTreeRoot

    assert codes(two_ways, sheet, spoilt(data, change)) == {"preflight.untagged"}


def test_a_foreign_or_missing_font_is_seen(two_ways: Any) -> None:
    sheet, data = two_ways.only("together")

    def descriptor(pdf: pikepdf.Pdf) -> Any:
        return next(o for o in pdf.objects if isinstance(o, pikepdf.Dictionary) and o.get("/Type") == "/FontDescriptor")

    def rename(pdf: pikepdf.Pdf) -> None:
        descriptor(pdf).FontName = pikepdf.Name("/ABCDEF+DejaVu-Sans")

    def strip(pdf: pikepdf.Pdf) -> None:
        del descriptor(pdf)["/FontFile2"]

    assert codes(two_ways, sheet, spoilt(data, rename)) == {"preflight.font"}
    assert "preflight.font" in codes(two_ways, sheet, spoilt(data, strip))


@pytest.mark.parametrize(
    ("text", "found"),
    [
        ("23\u00a0m · 0,68\u202fs", ["23", "0,68"]),
        ("2026-03-02", ["2026", "03", "02"]),
        ("مسافة 23 م ثم ٤٥٫٥", ["23", "45.5"]),
        ("12.0 and 12.50 and 1,000.", ["12", "12.5", "1,000"]),
        ("1\u202f250 ft", ["1", "250"]),
        ("no number", []),
    ],
)
def test_numbers_in_a_text(text: str, found: list[str]) -> None:
    assert numbers(text) == found


def test_text_of_both_directions_is_read_back(two_ways: Any) -> None:
    _, data = two_ways.only("together")
    text = " ".join(piece.text for piece in read(data).pieces)
    for words in ("Service", "routes", "حافلة", "يلزم", "107"):
        assert words in text
