"""Tables and charts of the answers page: one row a speed or a case, every number a printed column of the figures."""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace
from typing import Final

from markupsafe import Markup, escape

from chartgen.charts.inks import Palette
from chartgen.charts.rungs import Rung, rungs
from chartgen.language.html import isolate
from chartgen.language.load import Language
from chartgen.language.numbers import MINUS
from chartgen.site.drawings import Figure, inline
from chartgen.site.edition_site import Group, Record, Series, Site, decimals, named, slope, slope_plain

SLIM_MM: Final = 116.0
"""A drawing in one of two columns; where names are long it has the page's whole width."""
WIDE_MM: Final = 200.0
_NARROW_COLUMNS: Final = 5


@dataclass(frozen=True, slots=True)
class AnswerHead:
    """`quantity`: the column of the figures it prints; "" over a name."""

    name: Markup
    unit: Markup
    quantity: str


@dataclass(frozen=True, slots=True)
class AnswerRow:
    """`name`: the speed, or whose row it is; it links to the row that shows how it was worked out."""

    name: Markup
    trace: str
    cells: tuple[Markup, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class AnswerTable:
    label: str
    caption: Markup
    heads: tuple[AnswerHead, ...]
    rows: tuple[AnswerRow, ...]
    figures: tuple[Figure, ...] = ()
    assumptions: tuple[Markup, ...] = ()


@dataclass(frozen=True, slots=True, kw_only=True)
class Answer:
    """One question with its answers."""

    id: str
    title: str
    paragraphs: tuple[Markup, ...]
    tables: tuple[AnswerTable, ...]

    @property
    def narrow(self) -> bool:
        """Whether two tables have room side by side on a wide screen."""
        return all(len(table.heads) <= _NARROW_COLUMNS for table in self.tables)


@dataclass(frozen=True, slots=True)
class Pen:
    """What every part of the page needs."""

    site: Site
    language: Language
    palette: Palette

    def speed_unit(self) -> Markup:
        return isolate(self.language.unit(self.site.figures.speed_unit))

    def distance_unit(self) -> Markup:
        return isolate(self.language.unit(self.site.figures.distance_unit))

    def t(self, key: str, **values: str) -> str:
        return self.language.t(key, **values)

    def word(self, key: str) -> Markup:
        return escape(self.language.t(key))


def whose(pen: Pen, group: Group, series: Series, leave_out: str = "") -> tuple[Markup, str]:
    """Driver, vehicle, surface and slope, for a caption and for a label; `leave_out` names one that goes without
    saying."""
    edition, language = pen.site.edition, pen.language
    texts = {
        "driver": edition.driver(series.driver).name,
        "vehicle": edition.vehicle(group.vehicle).name,
        "surface": edition.surface(group.surface).name,
    }
    kept = [text for kind, text in texts.items() if kind != leave_out]
    rich, plain = [named(language, text) for text in kept], [language.text(text) for text in kept]
    if group.grade != 0.0:
        rich.append(slope(language, group.grade))
        plain.append(slope_plain(language, group.grade))
    return Markup(" · ").join(rich), " · ".join(plain)


def every(pen: Pen) -> Iterator[tuple[Group, Series]]:
    return ((group, series) for group in pen.site.groups for series in group.series)


def slowest(group: Group) -> Series:
    """The driver whose reaction takes longest: charts are drawn for that one, tables for all."""
    return max(group.series, key=lambda series: float(series.records[0]["reaction_time_s"]))


def trace(record: Record) -> str:
    return f"method.html#r{int(record['row'])}"


def _speeds(pen: Pen, series: Series) -> tuple[str, ...]:
    places = decimals(r["printed_speed"] for r in series.records)
    return tuple(pen.language.number(float(r["printed_speed"]), places) for r in series.records)


def number(pen: Pen, value: float, places: int, *, signed: bool = False) -> str:
    text = pen.language.number(value, places)
    return f"+{text}" if signed and value > 0 else text.replace("-", MINUS)


def _column(pen: Pen, records: Sequence[Record], quantity: str, *, signed: bool = False) -> list[Markup]:
    """The cells of one printed column; a word where there is no figure."""
    places = decimals(float(r[quantity]) for r in records)
    none = pen.word("word.none")
    return [
        none if math.isnan(value) else signed_html(number(pen, value, places, signed=signed))
        for value in (float(r[quantity]) for r in records)
    ]


def signed_html(text: str) -> Markup:
    """A number in a cell: one with a sign keeps it before its digits in a right-to-left line too."""
    return Markup('<bdi dir="ltr">{}</bdi>').format(text) if text[:1] in ("+", MINUS) else escape(text)


def by_speed(
    pen: Pen, group: Group, series: Series, heads: Sequence[AnswerHead], *, signed: bool = False
) -> AnswerTable:
    """A table of one row a speed."""
    records = series.records
    caption, label = whose(pen, group, series)
    columns = [_column(pen, records, head.quantity, signed=signed) for head in heads]
    first = AnswerHead(pen.word("quantity.speed"), pen.speed_unit(), "printed_speed")
    return AnswerTable(
        label=label,
        caption=caption,
        heads=(first, *heads),
        rows=tuple(
            AnswerRow(escape(speed), trace(record), cells)
            for speed, record, cells in zip(_speeds(pen, series), records, zip(*columns, strict=True), strict=True)
        ),
        assumptions=(series.line(pen.language, pen.site.edition),),
    )


def chart(
    pen: Pen, bars: Sequence[Rung], label: str, told: str, caption: Markup, ink: str, width_mm: float = SLIM_MM
) -> tuple[Figure, ...]:
    if not any(math.isfinite(bar.length) for bar in bars):
        return ()
    drawing = rungs(bars, name=label, language=pen.language, palette=pen.palette, width_mm=width_mm, ink=ink)
    shown = pen.language.plain("page.chart_label", name=label)
    return (Figure(svg=inline(drawing, pen.language, told), label=shown, caption=caption, wide=width_mm > SLIM_MM),)


def at_speed(pen: Pen, record: Record) -> str:
    """The speed of a row with its unit."""
    return pen.language.speed(float(record["printed_speed"]), pen.site.figures.speed_unit)


def finite(records: Sequence[Record], quantity: str) -> list[Record]:
    """The rows that have a figure in this column."""
    return [record for record in records if math.isfinite(float(record[quantity]))]


def speed_bars(
    pen: Pen, records: Sequence[Record], quantity: str, length: str, *, key: str = "", signed: bool = False
) -> list[Rung]:
    """A bar a row: named by its speed (in the sentence `key`, if given), as long as `length`, printed `quantity`."""
    places = decimals(float(r[quantity]) for r in records)
    return [
        Rung(
            name=pen.language.plain(key, speed=at_speed(pen, r)) if key else at_speed(pen, r),
            length=float(r[length]),
            figure=number(pen, float(r[quantity]), places, signed=signed),
            row=int(r["row"]),
            quantity=quantity,
        )
        for r in records
    ]


def in_unit(pen: Pen, name: Markup | str, unit: str) -> Markup:
    """A caption that says in which unit the figures of a drawing are."""
    return Markup("{} · {}").format(name, pen.language.unit_name(unit))


def with_charts(table: AnswerTable, figures: tuple[Figure, ...]) -> AnswerTable:
    """The table with its drawings before it."""
    return replace(table, figures=figures)
