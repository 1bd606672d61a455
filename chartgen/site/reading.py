"""A finished page read again: its links, ids, tables, chart numbers and words, from the bytes alone."""

from __future__ import annotations

import re
from dataclasses import dataclass, field
from functools import lru_cache
from html import unescape
from html.parser import HTMLParser
from typing import Final

_VOID: Final = frozenset({"meta", "link", "br", "hr", "img", "input", "path", "rect", "wbr"})
_ATTRIBUTE: Final = r'\s+[a-zA-Z_:][\w:.-]*(?:="[^"<>]*")?'
_TOKEN: Final = re.compile(rf"([^<]*)<(/?)([a-zA-Z][a-zA-Z0-9-]*)((?:{_ATTRIBUTE})*)\s*(/?)>")
_PAIR: Final = re.compile(r'([a-zA-Z_:][\w:.-]*)(?:="([^"]*)")?')
_DOCTYPE: Final = re.compile(r"\s*<!doctype html>", re.IGNORECASE)
_RAW: Final = re.compile(r"<(?:script|style|textarea|iframe|noscript|xmp|plaintext|!--|!\[)", re.IGNORECASE)
_DIGIT: Final = re.compile(r"\d")
_URLS: Final = ("href", "src", "srcset", "action", "data", "poster", "xlink:href")
_URL_NAMES: Final = frozenset(_URLS)


@dataclass(slots=True)
class ReadCell:
    text: str = ""
    head: bool = False
    quantity: str = ""
    span: int = 1
    never: bool = False


@dataclass(slots=True)
class ReadRow:
    cells: list[ReadCell] = field(default_factory=list)
    link: str = ""
    id: str = ""


@dataclass(slots=True)
class ReadTable:
    """`kind`: the first of the table’s classes. The first row is the head."""

    kind: str
    rows: list[ReadRow] = field(default_factory=list)
    caption: str = ""


@dataclass(slots=True)
class ReadChart:
    """`told`: the text alternative. `numbers`: texts of the labels that print a figure."""

    told: str
    lang: str
    numbers: list[str] = field(default_factory=list)


@dataclass(slots=True)
class ReadPage:
    lang: str = ""
    dir: str = ""
    policy: str = ""
    text: str = ""
    ids: list[str] = field(default_factory=list)
    links: list[tuple[str, str, dict[str, str]]] = field(default_factory=list)
    """(element, address, all its attributes)."""
    tables: list[ReadTable] = field(default_factory=list)
    charts: list[ReadChart] = field(default_factory=list)
    elements: set[str] = field(default_factory=set)
    attributes: set[str] = field(default_factory=set)
    order: list[ReadTable | ReadChart] = field(default_factory=list)
    """Charts and tables as they follow each other."""


def read_page(data: bytes) -> ReadPage:
    """The page as a reader's program sees it. Raises UnicodeDecodeError where it is not UTF-8."""
    reader = _Reader()
    text = data.decode("utf-8")
    if not _read_plain(reader, text):
        reader.feed(text)
        reader.close()
    reader.page.text = " ".join("".join(reader.words).split(" "))
    return reader.page


def _read_plain(reader: _Reader, text: str) -> bool:
    """Read a page that is plainly marked up: tags with quoted attributes and text between them, nothing else.

    That is how our pages are written, and it reads them in half the time. Where anything else stands in it, False is
    returned before anything was read, and the page is left to the standard library's forgiving reader.
    """
    found = _plain_tokens(text)
    if found is None:
        return False
    tokens, rest = found
    for before, end, tag, attributes, closed in tokens:
        if before:
            reader.handle_data(unescape(before) if "&" in before else before)
        if end:
            reader.handle_endtag(tag)
            continue
        reader.begin(tag, _attributes(attributes))
        if closed:
            reader.handle_endtag(tag)
    if rest:
        reader.handle_data(rest)
    return True


@lru_cache(maxsize=8192)
def _attributes(source: str) -> dict[str, str]:
    """The attributes of a tag; many tags have the same, so what comes back is not to be changed."""
    pairs = _PAIR.findall(source) if source else ()
    return {name.lower(): unescape(value) if "&" in value else value for name, value in pairs}


def _plain_tokens(text: str) -> tuple[list[tuple[str, bool, str, str, bool]], str] | None:
    """(text before, whether an end tag, name, attributes, whether closed at once) of every tag, and the blanks at the
    end; None where anything in the page is not such a token."""
    doctype = _DOCTYPE.match(text)
    if _RAW.search(text) or text.count("<") != text.count(">"):
        return None
    at = doctype.end() if doctype else 0
    found = []
    for match in _TOKEN.finditer(text, at):
        if match.start() != at:
            return None
        at = match.end()
        before, end, tag, attributes, closed = match.groups()
        found.append((before, bool(end), tag.lower(), attributes, bool(closed)))
    return (found, text[at:]) if not text[at:].strip() else None


class _Reader(HTMLParser):
    def __init__(self) -> None:
        super().__init__(convert_charrefs=True)
        self.page = ReadPage()
        self.words: list[str] = []
        self.open: list[tuple[str, dict[str, str]]] = []
        self.table: ReadTable | None = None
        self.chart: ReadChart | None = None

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.begin(tag, {name: value or "" for name, value in attrs})

    def begin(self, tag: str, values: dict[str, str]) -> None:
        """A tag with its attributes, which may be shared with others."""
        page = self.page
        page.elements.add(tag)
        if values:
            page.attributes.update(values)
            if "id" in values:
                page.ids.append(values["id"])
            if not _URL_NAMES.isdisjoint(values):
                page.links += [(tag, values[name], values) for name in _URLS if name in values]
        if tag == "html":
            page.lang, page.dir = values.get("lang", ""), values.get("dir", "")
        elif tag == "meta" and values.get("http-equiv") == "Content-Security-Policy":
            page.policy = values.get("content", "")
        elif tag == "svg":
            self.chart = ReadChart(values.get("aria-label", ""), values.get("lang", ""))
            page.charts.append(self.chart)
            page.order.append(self.chart)
        else:
            self._table_part(tag, values)
        if tag not in _VOID:
            self.open.append((tag, values))

    def _table_part(self, tag: str, values: dict[str, str]) -> None:
        if tag == "table":
            self.table = ReadTable(values.get("class", "").partition(" ")[0])
            self.page.tables.append(self.table)
            self.page.order.append(self.table)
        elif self.table is None:
            return
        elif tag == "tr":
            self.table.rows.append(ReadRow(id=values.get("id", "")))
        elif tag in ("td", "th"):
            cell = ReadCell(
                head=tag == "th", quantity=values.get("data-q", ""), span=int(values.get("colspan", "1")),
                never="never" in values.get("class", "").split(),
            )  # fmt: skip
            self.table.rows[-1].cells.append(cell)
        elif tag == "a" and self.table.rows:
            self.table.rows[-1].link = values.get("href", "")

    def handle_endtag(self, tag: str) -> None:
        while self.open and self.open[-1][0] != tag:
            self.open.pop()
        if self.open:
            self.open.pop()
        if tag == "table":
            self.table = None
        elif tag == "svg":
            self.chart = None
        if tag in ("p", "h1", "h2", "h3", "li", "dt", "dd", "td", "th", "tr", "figcaption", "caption"):
            self.words.append(" ")

    def handle_data(self, data: str) -> None:
        if self.chart is not None:
            if _DIGIT.search(data) and not any("free" in values.get("class", "").split() for _, values in self.open):
                self.chart.numbers.append(data)
            return
        self.words.append(data)
        if self.table is None:
            return
        inside = {tag for tag, _ in self.open}
        if "caption" in inside:
            self.table.caption += data
        elif self.table.rows and self.table.rows[-1].cells and not inside.isdisjoint(("td", "th")):
            self.table.rows[-1].cells[-1].text += data
