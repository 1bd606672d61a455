"""The printer's last look at a finished file: nothing is taken from how it was made, all is read from its bytes.

Every number on the page must be accounted for: figures are looked up in the table again and written anew, the rest
(dates, references) must be one of the sheet's facts. Codes are stable and tested; a finding's text is for people.
"""

from __future__ import annotations

import io
import re
import unicodedata
from collections import Counter
from collections.abc import Callable, Iterable, Iterator, Mapping, Sequence
from typing import Any

import pikepdf

from chartgen.errors import Finding
from chartgen.figures.record import Figures
from chartgen.figures.units import from_metres
from chartgen.language.load import Language
from chartgen.press import engine
from chartgen.press.page import Box, InkedFigure, PrintPage
from chartgen.press.readback import Reading, numbers, read, squeezed

SIZE_TOLERANCE_MM = 0.1
FONTS = tuple(family.replace(" ", "-") for family in (engine.LATIN_FAMILY, engine.ARABIC_FAMILY))

Writer = Callable[[Language, float, Figures], str]


def _distance(language: Language, x: float, figures: Figures) -> str:
    return language.distance(x, figures.distance_unit)


def _also(language: Language, x: float, figures: Figures) -> str:
    return language.distance(x, figures.also_unit or figures.distance_unit)


def _deceleration(language: Language, x: float, figures: Figures) -> str:
    if figures.distance_unit == "ft":
        return language.deceleration(float(from_metres(x, "ft")), "ft/s²", 1)
    return language.deceleration(x)


WRITERS: Mapping[str, Writer] = {
    "speed": lambda language, x, figures: language.speed(x, figures.speed_unit),
    "reaction_time_s": lambda language, x, _: language.seconds(x),
    "perception_s": lambda language, x, _: language.seconds(x),
    "brake_lag_s": lambda language, x, _: language.seconds(x),
    "build_up_s": lambda language, x, _: language.seconds(x),
    "printed_gap_s": lambda language, x, _: language.seconds(x),
    "friction": lambda language, x, _: language.number(x, 2),
    "max_deceleration_mps2": _deceleration,
    "full_deceleration_mps2": _deceleration,
    "brake_efficiency": lambda language, x, _: language.percent(x),
    "grade": lambda language, x, _: language.percent(abs(x)),
    **{f"printed_{name}": _distance for name in ("reaction", "lag", "braking", "stopping", "gap_distance")},
    **{f"printed_also_{name}": _also for name in ("reaction", "lag", "braking", "stopping", "gap_distance")},
}
"""How each quantity of the table is written on a sheet; the number in it is what is looked for."""


def check_pdf(data: bytes, sheet: PrintPage, figures: Figures, languages: Sequence[Language]) -> tuple[Finding, ...]:
    """Everything wrong with a finished file, empty when all is well.

    Codes: preflight.number-unknown (on the page, not in the table nor among the facts), preflight.number-missing,
    preflight.number-misplaced, preflight.sentence-missing, preflight.pages, preflight.size, preflight.lang,
    preflight.title, preflight.untagged, preflight.font.
    """
    reading = read(data)
    by_tag = {language.tag: language for language in languages}
    found = [
        *_number_problems(reading, sheet, figures, by_tag),
        *_place_problems(reading, sheet, figures, by_tag),
        *_sentence_problems(reading, sheet, by_tag),
        *_page_problems(reading, sheet),
        *_document_problems(data, sheet),
    ]
    return tuple(Finding(code, sheet.path, detail) for code, detail in found)


def written(figure: InkedFigure, figures: Figures, language: Language) -> str:
    """A figure of the table as `language` writes it, from the table as it is now."""
    value = float(figures.table[figure.quantity].iloc[figure.row])
    return WRITERS[figure.quantity](language, value, figures)


def _number_problems(
    reading: Reading, sheet: PrintPage, figures: Figures, by_tag: Mapping[str, Language]
) -> Iterator[tuple[str, str]]:
    there = Counter(number for piece in reading.pieces for number in numbers(piece.text))
    due: Counter[str] = Counter(number for fact in sheet.facts for number in numbers(fact))
    for figure in sheet.inked:
        for number in numbers(written(figure, figures, by_tag[figure.lang])):
            due[number] += figure.times
    for number, times in sorted((there - due).items()):
        where = f"stands {times} time(s) more than the table and the facts account for"
        yield "preflight.number-unknown", f"“{number}” {where}"
    for number, times in sorted((due - there).items()):
        yield "preflight.number-missing", f"“{number}” is missing {times} time(s)"


def _place_problems(
    reading: Reading, sheet: PrintPage, figures: Figures, by_tag: Mapping[str, Language]
) -> Iterator[tuple[str, str]]:
    middles = _middles(reading)
    for figure in sheet.inked:
        due = numbers(written(figure, figures, by_tag[figure.lang])) if figure.boxes else []
        for page, box in figure.boxes:
            there = [number for text in _texts_within(middles.get(page, []), box) for number in numbers(text)]
            if not set(due) <= set(there):
                place = f"page {page}, {box[0]:.0f} to {box[2]:.0f} mm across, {box[1]:.0f} to {box[3]:.0f} mm down"
                what = f"{figure.quantity} of row {figure.row} ({', '.join(due)}) does not stand at its place: {place}"
                yield "preflight.number-misplaced", f"{what}; there: {', '.join(there) or 'no number'}"


def _middles(reading: Reading) -> dict[int, list[tuple[float, float, str]]]:
    """By page: the middle of each run of text that holds a digit, across and down in mm, and the text."""
    found: dict[int, list[tuple[float, float, str]]] = {}
    for piece in reading.pieces:
        if any(c.isdigit() for c in piece.text):
            middle = ((piece.left + piece.right) / 2, (piece.top + piece.bottom) / 2, piece.text)
            found.setdefault(piece.page, []).append(middle)
    return found


def _texts_within(middles: Iterable[tuple[float, float, str]], box: Box) -> Iterable[str]:
    left, top, right, bottom = box
    return [text for across, down, text in middles if left <= across <= right and top <= down <= bottom]


def _sentence_problems(reading: Reading, sheet: PrintPage, by_tag: Mapping[str, Language]) -> Iterator[tuple[str, str]]:
    whole = squeezed("".join(piece.text for piece in reading.pieces))
    words = Counter(word for piece in reading.pieces for word in _words(piece.text))
    for tag, sentence in sheet.sentences:
        if by_tag[tag].direction == "rtl":
            missing = Counter(_words(sentence)) - words
        else:
            missing = Counter() if squeezed(sentence) in whole else Counter([sentence])
        if missing:
            yield "preflight.sentence-missing", f"{tag}: “{sentence}” is not there ({', '.join(missing)})"


def _words(text: str) -> list[str]:
    """The words of a right-to-left text as they can be found again: a reader gives the runs of a line in the order of
    the eye and the two letters of a ligature in the order of the font, so words are counted, letters in no order."""
    return ["".join(sorted(word)) for word in re.findall(r"\w+", unicodedata.normalize("NFKC", text))]


def _page_problems(reading: Reading, sheet: PrintPage) -> Iterator[tuple[str, str]]:
    if len(reading.sizes_mm) != sheet.pages:
        yield "preflight.pages", f"{len(reading.sizes_mm)} page(s) instead of {sheet.pages}"
    for number, (width, height) in enumerate(reading.sizes_mm, 1):
        if max(abs(width - sheet.width_mm), abs(height - sheet.height_mm)) > SIZE_TOLERANCE_MM:
            size = f"{width:.1f} x {height:.1f} mm instead of {sheet.width_mm:.1f} x {sheet.height_mm:.1f} mm"
            yield "preflight.size", f"page {number} is {size}"


def _document_problems(data: bytes, sheet: PrintPage) -> Iterator[tuple[str, str]]:
    with pikepdf.open(io.BytesIO(data)) as pdf:
        lang = str(pdf.Root.get("/Lang", ""))
        if lang != sheet.lang:
            yield "preflight.lang", f"the document's language is “{lang}” instead of “{sheet.lang}”"
        title = str(pdf.docinfo.get("/Title", ""))
        if title != sheet.title:
            yield "preflight.title", f"the document's title is “{title}” instead of “{sheet.title}”"
        marked = pdf.Root.get("/MarkInfo", pikepdf.Dictionary()).get("/Marked", False)
        xmp = pdf.Root.Metadata.read_bytes() if "/Metadata" in pdf.Root else b""
        if not marked or "/StructTreeRoot" not in pdf.Root or b"pdfuaid" not in xmp:
            yield "preflight.untagged", "the document is not tagged as PDF/UA"
        for name, embedded in sorted(_fonts(pdf)):
            if not embedded:
                yield "preflight.font", f"the font {name} is not embedded"
            elif not name.partition("+")[2].startswith(FONTS):
                yield "preflight.font", f"the font {name} is none of ours: {', '.join(FONTS)}"


def _fonts(pdf: Any) -> set[tuple[str, bool]]:
    """(name, embedded) of every font descriptor in the file."""
    files = ("/FontFile", "/FontFile2", "/FontFile3")
    return {
        (str(item.get("/FontName", "")).removeprefix("/"), any(key in item for key in files))
        for item in pdf.objects
        if isinstance(item, pikepdf.Dictionary) and item.get("/Type") == "/FontDescriptor"
    }
