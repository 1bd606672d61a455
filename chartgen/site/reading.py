"""A finished page read again: its links, ids, tables, chart numbers and words, from the bytes alone."""

from __future__ import annotations

from dataclasses import dataclass, field
from html.parser import HTMLParser
from typing import Final

_VOID: Final = frozenset({"meta", "link", "br", "hr", "img", "input", "path", "rect", "wbr"})
_URLS: Final = ("href", "src", "srcset", "action", "data", "poster", "xlink:href")


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
    """`kind`: the table's class. The first row is the head."""

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
    reader.feed(data.decode("utf-8"))
    reader.close()
    reader.page.text = " ".join("".join(reader.words).split(" "))
    return reader.page


class _Reader(HTMLParser):
    def __init__(self) -> None:
        super().__init__(convert_charrefs=True)
        self.page = ReadPage()
        self.words: list[str] = []
        self.open: list[tuple[str, dict[str, str]]] = []
        self.table: ReadTable | None = None
        self.chart: ReadChart | None = None

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        values = {name: value or "" for name, value in attrs}
        page = self.page
        page.elements.add(tag)
        page.attributes.update(values)
        if "id" in values:
            page.ids.append(values["id"])
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
            self.table = ReadTable(values.get("class", ""))
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
            if not any("free" in values.get("class", "").split() for _, values in self.open):
                self.chart.numbers += [data] if any(c.isdigit() for c in data) else []
            return
        self.words.append(data)
        if self.table is None:
            return
        if any(tag == "caption" for tag, _ in self.open):
            self.table.caption += data
        elif self.table.rows and self.table.rows[-1].cells and any(tag in ("td", "th") for tag, _ in self.open):
            self.table.rows[-1].cells[-1].text += data
