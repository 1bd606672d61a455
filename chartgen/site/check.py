"""The finished pages checked: every number in every table and chart is read back and found in the figures.

Each finding has a stable code; `file` is relative to the edition's folder. What a page says is read from its bytes
(`reading`), never from the records it was made of.
"""

from __future__ import annotations

import posixpath
import re
from collections import Counter
from collections.abc import Iterable, Iterator, Mapping
from functools import lru_cache
from typing import Any, Final
from urllib.parse import unquote, urlsplit

import numpy as np

from chartgen.edition.model import Edition
from chartgen.errors import Finding
from chartgen.figures.compare import Comparison, compare
from chartgen.figures.record import Figures
from chartgen.language.load import Language
from chartgen.language.numbers import MINUS, number_style
from chartgen.language.sentences import caution_sentences, verdict
from chartgen.output import File
from chartgen.site.downloads import data_files, size
from chartgen.site.edition_site import page_names
from chartgen.site.frame import CSP
from chartgen.site.reading import ReadChart, ReadPage, ReadRow, ReadTable, read_page
from chartgen.site.tables import TIME_STEP_S

_SAME: Final = 1e-9
_ROW_LINK: Final = re.compile(r"method\.html#r(\d+)")
_PLAIN_NUMBER: Final = re.compile(r"-?\d+(\.\d+)?")
_ROW_ID: Final = re.compile(r"r(\d+)")
_FORBIDDEN: Final = frozenset({"script", "style", "iframe", "object", "embed", "form", "base", "audio", "video"})
_FIGURES: Final = ("printed_reaction", "printed_lag", "printed_braking", "printed_stopping", "printed_speed")

Records = Mapping[int, Mapping[str, Any]]


def check_pages(
    files: Mapping[str, bytes], edition: Edition, figures: Figures, languages: tuple[Language, ...]
) -> tuple[Finding, ...]:
    """Everything wrong with the finished files of an edition (`files`: bytes by path); () where all is right."""
    records = records_of(figures)
    pages = {path: read_page(data) for path, data in files.items() if path.endswith(".html")}
    found = compare(figures, edition) if edition.compare else ()
    findings = [*_expected(files, edition, figures, languages, found)]
    findings += _data(files, data_files(figures, edition, found))
    for path, page in pages.items():
        findings += _safe(path, page)
        findings += _links(path, page, files, pages)
    for language in languages:
        for path, page in pages.items():
            if path.startswith(f"{language.tag}/"):
                findings += _language(path, page, language, languages)
                findings += check_numbers(path, page, language, records)
                if path.endswith("/downloads.html"):
                    findings += _sizes(path, page, language, files)
        findings += _every_row(pages, language, records)
    return tuple(findings)


def _expected(
    files: Mapping[str, bytes], edition: Edition, figures: Figures, languages: tuple[Language, ...],
    found: tuple[Comparison, ...],
) -> Iterator[Finding]:  # fmt: skip
    """The pages that must be there."""
    surfaces, vehicles = set(figures.table["surface"]), set(figures.table["vehicle"])
    names = list(page_names(edition, bool(found)))
    names += [f"surface-{s.id}.html" for s in edition.surfaces if s.id in surfaces]
    names += [f"vehicle-{v.id}.html" for v in edition.vehicles if v.id in vehicles]
    for path in ("index.html", *(f"{language.tag}/{name}" for language in languages for name in names)):
        if path not in files:
            yield Finding("site.missing", path, "the file is not there")


def _data(files: Mapping[str, bytes], due: Iterable[File]) -> Iterator[Finding]:
    for wanted in due:
        if wanted.path not in files:
            yield Finding("site.missing", wanted.path, "the file is not there")
        elif files[wanted.path] != wanted.data:
            yield Finding("site.data", wanted.path, "does not hold the figures of this edition")


def _safe(path: str, page: ReadPage) -> Iterator[Finding]:
    """No script, no foreign address, no style but the style sheet's."""
    for element in sorted(page.elements & _FORBIDDEN):
        yield Finding("site.forbidden", path, f"has a {element} element")
    for name in sorted(a for a in page.attributes if a == "style" or a.startswith("on")):
        yield Finding("site.forbidden", path, f"has a {name} attribute")
    if page.policy != CSP:
        yield Finding("site.policy", path, f"has another security policy: {page.policy!r}")
    doubled = sorted({i for i in page.ids if page.ids.count(i) > 1}) if len(set(page.ids)) < len(page.ids) else []
    for i in doubled:
        yield Finding("site.id", path, f"has the id {i} twice")


def _links(path: str, page: ReadPage, files: Mapping[str, bytes], pages: Mapping[str, ReadPage]) -> Iterator[Finding]:
    """Every address is relative and leads to a file of this folder, and to a place on it."""
    for address in sorted({address for _, address, _ in page.links}):
        parts = urlsplit(address)
        if parts.scheme or parts.netloc or address.startswith("/"):
            yield Finding("site.outside", path, f"points outside: {address}")
            continue
        there = posixpath.normpath(posixpath.join(posixpath.dirname(path), unquote(parts.path)))
        target = there if parts.path else path
        if target not in files:
            yield Finding("site.link", path, f"leads to nothing: {address}")
        elif parts.fragment and target in pages and parts.fragment not in pages[target].ids:
            yield Finding("site.link", path, f"leads to no place of that name: {address}")


def _sizes(path: str, page: ReadPage, language: Language, files: Mapping[str, bytes]) -> Iterator[Finding]:
    """How large a file is stands beside each that is offered."""
    folder = posixpath.dirname(path)
    offers = {a for element, a, attributes in page.links if element == "a" and "type" in attributes}
    offered = sorted({posixpath.normpath(posixpath.join(folder, address)) for address in offers})
    sizes = (size(language, len(files[there])) for there in offered if there in files)
    due = Counter(read_page(said.encode()).text for said in sizes)
    for words, count in due.items():
        if page.text.count(words) < count:
            yield Finding("site.size", path, f"names the size {words!r} {page.text.count(words)} times, not {count}")


def _language(path: str, page: ReadPage, language: Language, languages: tuple[Language, ...]) -> Iterator[Finding]:
    """Language and direction, the caution, the switch to the same page in every other language."""
    if (page.lang, page.dir) != (language.tag, language.direction):
        yield Finding("site.language", path, f"is marked {page.lang} {page.dir}")
    for sentence in caution_sentences(language):
        if sentence not in page.text:
            yield Finding("site.caution", path, f"lacks the sentence: {sentence}")
    name = posixpath.basename(path)
    for other in languages:
        href = name if other is language else f"../{other.tag}/{name}"
        for element in ("a", "link"):
            if not any(e == element and a == href and v.get("hreflang") == other.tag for e, a, v in page.links):
                yield Finding("site.switch", path, f"has no {element} to {href}")
    for chart in page.charts:
        if not chart.told or chart.lang != language.tag:
            yield Finding("site.alternative", path, "has a chart without a text alternative in the page's language")


def records_of(figures: Figures) -> Records:
    """The rows of the figures by their number."""
    rows = figures.table.to_dict("records")
    return {int(row["row"]): {str(name): value for name, value in row.items()} for row in rows}


def check_numbers(path: str, page: ReadPage, language: Language, records: Records) -> Iterator[Finding]:
    """Every number of the page's tables and charts that is not the figures' own."""
    for table in page.tables:
        if table.kind in ("dist", "trace"):
            yield from _table(path, table, language, records)
    for chart, tables in _blocks(page):
        yield from _chart(path, chart, tables, language, records)


def _blocks(page: ReadPage) -> Iterator[tuple[ReadChart, list[ReadTable]]]:
    """Each chart with the tables that follow its run of charts."""
    for index, item in enumerate(page.order):
        if not isinstance(item, ReadChart):
            continue
        rest = page.order[index + 1 :]
        while rest and isinstance(rest[0], ReadChart):
            rest = rest[1:]
        end = next((i for i, later in enumerate(rest) if isinstance(later, ReadChart)), len(rest))
        yield item, [table for table in rest[:end] if isinstance(table, ReadTable)]


def row_number(row: ReadRow) -> int | None:
    """The figures' row that a table row prints: the target of its link, or its own id on the method page."""
    found = _ROW_LINK.fullmatch(row.link) or _ROW_ID.fullmatch(row.id)
    return int(found[1]) if found else None


def _table(path: str, table: ReadTable, language: Language, records: Records) -> Iterator[Finding]:
    heads = [cell.quantity for cell in table.rows[0].cells] if table.rows else []
    none, verdicts = language.t("word.none"), _Verdicts(language)
    for row in table.rows[1:]:
        number = row_number(row)
        if number is None or number not in records:
            yield Finding("site.trace", path, f"has a row that leads to no row of the figures: {row.cells[0].text}")
            continue
        record = records[number]
        column = 0
        for cell in row.cells:
            quantities = heads[column : column + cell.span]
            column += cell.span
            words = (verdicts[str(record["reason"])], none)
            for wrong in _cell(cell.text.strip(), quantities, record, language, table.kind, words, never=cell.never):
                yield Finding("site.figure", path, f"row {number}: {wrong}")
        if column != len(heads):
            yield Finding("site.table", path, f"row {number} has {column} columns, its head has {len(heads)}")


class _Verdicts(dict[str, str]):
    """The words in place of a figure by reason, each asked of the language once."""

    def __init__(self, language: Language) -> None:
        super().__init__()
        self._language = language

    def __missing__(self, reason: str) -> str:
        self[reason] = verdict(self._language, reason)
        return self[reason]


def _cell(
    text: str, quantities: list[str], record: Mapping[str, Any], language: Language, kind: str,
    words: tuple[str, str], *, never: bool,
) -> Iterator[str]:  # fmt: skip
    """What is wrong with one cell. `words`: what stands in place of a figure, for the row's reason and at all."""
    wanted = words[0]
    if never or text in words:
        if never and not text.startswith(wanted):
            yield f"says {text!r} where it must say {wanted!r}"
        for quantity in quantities:
            if np.isfinite(float(record[quantity])):
                yield f"{quantity} says {text!r}, but the figures have {record[quantity]}"
        return
    if quantities == [""]:  # the head over names: no figure stands under it
        return
    if quantities[0].startswith("printed_greatest_"):
        yield from _greatest(text, quantities[0], record, language)
        return
    if len(quantities) != 1 or quantities[0] not in record:
        yield f"{text!r} stands under no column of the figures"
        return
    value, printed = float(record[quantities[0]]), read_number(text, language.tag)
    if printed is None or not _agrees(printed, value, text, quantities[0], language.tag, kind):
        yield f"{quantities[0]} is printed as {text!r}, but the figures have {value!r}"


def _greatest(text: str, quantity: str, record: Mapping[str, Any], language: Language) -> Iterator[str]:
    """A greatest speed: its number, "or more" where even the fastest speed is slow enough, words where none is."""
    value = float(record[quantity])
    wanted = language.number(value) if np.isfinite(value) else language.t("word.none")
    if value == 0.0:
        wanted = language.t("answers.no_speed")
    elif np.isfinite(value) and record[quantity.replace("printed_", "") + "_at_top"]:
        wanted = language.t("answers.at_least", speed=wanted)
    if text != wanted:
        yield f"{quantity} is printed as {text!r}, but the figures have {wanted!r}"


def _agrees(printed: float, value: float, text: str, quantity: str, tag: str, kind: str) -> bool:
    """A printed column exactly; a time not shorter and not a step longer; an unrounded value to the decimals shown."""
    if quantity.startswith("printed_"):
        return abs(printed - value) <= _SAME * abs(value)
    if kind == "dist":
        return value - _SAME * value <= printed < value + TIME_STEP_S
    places = len(text.partition(number_style(tag).decimal)[2])
    return bool(abs(printed - value) <= 0.5 * 10.0**-places + _SAME)


def read_number(text: str, tag: str) -> float | None:
    """A number as a locale writes it, back to a float; None where it is not one. A plus sign may stand before it.

    Where thousands are parted by a space, either no-break space is read: a drawing takes the wide one for the narrow.
    """
    return _number(text, tag)


@lru_cache(maxsize=16384)
def _number(text: str, tag: str) -> float | None:
    style = number_style(tag)
    plain = text.removeprefix("+")
    for group in "\u00a0\u202f" if style.group.isspace() else style.group:
        plain = plain.replace(group, "")
    plain = plain.replace(style.decimal, ".").replace(MINUS, "-")
    return float(plain) if _PLAIN_NUMBER.fullmatch(plain) else None


def _chart(
    path: str, chart: ReadChart, tables: list[ReadTable], language: Language, records: Records
) -> Iterator[Finding]:
    """Every number on a chart is a printed figure of a row in the tables below it."""
    rows = [records[n] for t in tables for r in t.rows[1:] if (n := row_number(r)) is not None and n in records]
    heads = {cell.quantity for t in tables if t.rows for cell in t.rows[0].cells if cell.quantity}
    known = {float(row[quantity]) for row in rows for quantity in heads.union(_FIGURES) if quantity in row}
    for text in chart.numbers:
        printed = read_number(text, language.tag)
        if printed is None or not any(abs(printed - value) <= _SAME * abs(value) for value in known):
            yield Finding("site.chart", path, f"has a chart that prints {text!r}, which no row below it has")


def _every_row(pages: Mapping[str, ReadPage], language: Language, records: Records) -> Iterator[Finding]:
    """Each row stands on its surface's page, on its vehicle's and, with its inputs, on the method page."""
    shown: dict[str, set[int]] = {}
    for path, page in pages.items():
        rows = {row_number(row) for table in page.tables for row in table.rows[1:]}
        shown[path] = {number for number in rows if number is not None}
    for number, record in records.items():
        places = (f"surface-{record['surface']}.html", f"vehicle-{record['vehicle']}.html", "method.html")
        for name in places:
            path = f"{language.tag}/{name}"
            if path in shown and number not in shown[path]:
                yield Finding("site.row", path, f"lacks row {number} of the figures")
