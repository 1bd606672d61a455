"""The tables of a cab card: totals at a glance, the parts, the other surfaces. Every cell knows its place.

A table is planned first (`Table`: its columns, how high its head is) and set when the row height is known (`Block`).
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np

from chartgen.charts.drawing import FaceName
from chartgen.charts.fonts import digit_ratio, extent
from chartgen.language.sentences import verdict
from chartgen.sheets import card_plan as plan
from chartgen.sheets.account import Account, decimals_of
from chartgen.sheets.card_foot import line_count
from chartgen.sheets.card_rows import Series, longest
from chartgen.sheets.fitting import text_width

if TYPE_CHECKING:
    import pandas as pd

    from chartgen.edition.model import Edition
    from chartgen.language.load import Language
    from chartgen.sheets.sheet import Box

Place = tuple[int, float, float]
"""Page, and the card's left and top on it."""
_HEAD_LEADING = 1.05
_HEAD_AIR_MM = 1.2
_CELL_PAD_MM = 0.6
_BEYOND_MM = 4.0
"""How far the bar of a vehicle that does not stop runs into the card's margin."""
_BAR_MM = 1.5
"""Foot of a row on the front that belongs to its bar."""
_WORDS_MM = (4.4, 3.8, 3.2, 2.8, 2.4, 2.12)
_FOUR_DIGITS_MM = 12.0
_TAIL, _TAIL_MM = 0.05, 1.2
"""A sign that hangs deeper than this part of the font size has a tail; the height kept for it on the front."""
_BACK_SPEED_MM = 5.6
"""Font size that digits on the back seldom pass."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Wanted:
    """A column to be filled: the rows it reads, which quantity, its name, its share of the width, its kind (class)."""

    rows: pd.DataFrame
    quantity: str
    name: str
    share: float
    kind: str = ""


@dataclass(frozen=True, slots=True, kw_only=True)
class Table:
    """A table before it is set. `groups`: a name over so many columns; `barred`: a bar to scale under each row."""

    wanted: tuple[Wanted, ...]
    laid: tuple[plan.Column, ...]
    groups: tuple[tuple[str, int], ...]
    group_mm: float
    names_mm: float
    barred: bool

    @property
    def head_mm(self) -> float:
        return self.group_mm + self.names_mm


@dataclass(frozen=True, slots=True, kw_only=True)
class Cell:
    """A number, or words in its place, once over `span` columns that say the same."""

    text: str
    words: str = ""
    span: int = 1


@dataclass(frozen=True, slots=True, kw_only=True)
class Line:
    """One speed; `bar_mm`: the bar under it (0: none)."""

    speed: str
    cells: tuple[Cell, ...]
    bar_mm: float = 0.0


@dataclass(frozen=True, slots=True, kw_only=True)
class Head:
    """A column's name, its width, its kind (class)."""

    text: str
    width_mm: float
    kind: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Block:
    """One table of a side, in mm from the card's top left corner."""

    kind: str
    top_mm: float
    row_mm: float
    group_mm: float
    names_mm: float
    size_mm: float
    words_mm: float
    heads: tuple[Head, ...]
    groups: tuple[tuple[str, int], ...]
    lines: tuple[Line, ...]

    @property
    def head_mm(self) -> float:
        return self.group_mm + self.names_mm

    @property
    def bottom_mm(self) -> float:
        return self.top_mm + self.head_mm + self.row_mm * len(self.lines)

    @property
    def digit_mm(self) -> float:
        """Height of the digits of its distances."""
        return self.size_mm * digit_ratio(_face(barred=self.kind == "front"))


def front_table(language: Language, edition: Edition, series: Sequence[Series], card_mm: float) -> Table:
    """Totals loaded and empty, and the following gap in seconds; the bar under a row is the first distance."""
    unit = f" ({language.unit(edition.distance_unit)})"
    first = series[0].rows
    gap = f"{language.t('card.gap')} ({language.unit('s')})"
    wanted = [
        _speed(language, edition, first, 15),
        *(_total(language, edition, one, 31, unit, named=len(series) > 1) for one in series),
        Wanted(rows=first, quantity="printed_gap_s", name=gap, share=19, kind="gap"),
    ]
    return _table(wanted, card_mm, barred=True)


def parts_table(language: Language, edition: Edition, series: Sequence[Series], card_mm: float) -> Table:
    """Reaction, brake lag and braking apart; what differs between loaded and empty stands once for each."""
    first = series[0].rows
    wanted = [_speed(language, edition, first, _natural(""))]
    for part, key in (("reaction", "part.reaction"), ("lag", "part.lag"), ("braking", "part.braking")):
        quantity, name = f"printed_{part}", language.t(key)
        same = all(np.array_equal(one.rows[quantity], first[quantity], equal_nan=True) for one in series)
        apart = series if len(series) > 1 and (part == "braking" or not same) else ()
        named = [(one.rows, f"{name}: {_load(language, edition, one)}") for one in apart] or [(first, name)]
        wanted += [Wanted(rows=rows, quantity=quantity, name=text, share=_natural(text)) for rows, text in named]
    title = _surface(language, edition, series[0])
    return _table(wanted, card_mm, groups=((title, len(wanted) - 1),))


def surfaces_table(language: Language, edition: Edition, series: Sequence[Series], card_mm: float) -> Table:
    """Totals on the other surfaces, a group a surface."""
    groups: dict[str, int] = {}
    for one in series:
        surface = _surface(language, edition, one)
        groups[surface] = groups.get(surface, 0) + 1
    named = max(groups.values()) > 1
    # The speeds take what they need, the distances share the rest.
    widest = max(text_width(f"{speed:g}", "text", _BACK_SPEED_MM) for speed in series[0].rows["speed"])
    speed_mm = max(widest, text_width(language.unit(edition.speed_unit), "text", plan.HEAD_MM)) + _CELL_PAD_MM
    share = (card_mm - 2 * plan.MARGIN_MM - speed_mm) / len(series)
    wanted = [
        _speed(language, edition, series[0].rows, speed_mm),
        *(_total(language, edition, one, share, "", named=named) for one in series),
    ]
    return _table(wanted, card_mm, groups=tuple(groups.items()))


def as_high(tables: Sequence[Table]) -> list[Table]:
    """The same tables with heads of one height, so that rows of cards side by side stand level."""
    group = max(table.group_mm for table in tables)
    names = max(table.names_mm for table in tables)
    return [replace(table, group_mm=group, names_mm=names) for table in tables]


def set_table(
    table: Table, language: Language, edition: Edition, account: Account, place: Place, card_mm: float, *,
    top_mm: float, row_mm: float,
) -> Block:  # fmt: skip
    """The table at its place, each of its figures entered in the account."""
    page, left, top = place
    first = table.wanted[0].rows
    bars = _bars(table, card_mm) if table.barred else [0.0] * len(first)
    cells: list[list[Cell]] = []
    for number in range(len(first)):
        cells.append([])
        for one, column in zip(table.wanted, table.laid, strict=True):
            at = top + top_mm + table.head_mm + number * row_mm
            start = column.start_mm if language.direction == "ltr" else card_mm - column.start_mm - column.width_mm
            box = (left + start - 0.5, at - 0.5, left + start + column.width_mm + 0.5, at + row_mm + 0.5)
            cells[-1].append(_cell(one, number, language, edition, account, (page, box)))
    face = _face(barred=table.barred)
    # A separator's tail must not touch the bar under it.
    tailed = table.barred and any(extent(cell.text, face).below > _TAIL for row in cells for cell in row[1:])
    free = row_mm - _TAIL_MM if tailed else row_mm
    sizes = [
        plan.number_size([cell.text or "00" for cell in column], place_.width_mm, free, face)
        for column, place_ in list(zip(zip(*cells, strict=True), table.laid, strict=True))[1:]
    ]
    lines = [Line(speed=row[0].text, cells=_joined(row[1:]), bar_mm=bar) for row, bar in zip(cells, bars, strict=True)]
    return Block(
        kind="front" if table.barred else "back", top_mm=top_mm, row_mm=row_mm, group_mm=table.group_mm,
        names_mm=table.names_mm, size_mm=min(sizes), groups=table.groups, lines=tuple(lines),
        words_mm=_words_size(lines, table, row_mm),
        heads=tuple(
            Head(text=one.name, width_mm=c.width_mm, kind=one.kind)
            for one, c in zip(table.wanted, table.laid, strict=True)
        ),
    )  # fmt: skip


def _table(
    wanted: Sequence[Wanted], card_mm: float, *, groups: tuple[tuple[str, int], ...] = (), barred: bool = False
) -> Table:
    laid = plan.columns([one.share for one in wanted], card_mm - 2 * plan.MARGIN_MM)
    names = max(
        line_count(one.name, "text", plan.HEAD_MM, column.width_mm - _CELL_PAD_MM)
        for one, column in zip(wanted, laid, strict=True)
    )
    group_lines, start = 0, 1
    for text, count in groups:
        room = sum(column.width_mm for column in laid[start : start + count]) - _CELL_PAD_MM
        group_lines = max(group_lines, line_count(text, "text-bold", plan.GROUP_MM, room))
        start += count
    return Table(
        wanted=tuple(wanted), laid=laid, groups=groups, barred=barred,
        group_mm=group_lines * _HEAD_LEADING * plan.GROUP_MM + _HEAD_AIR_MM if group_lines else 0.0,
        names_mm=names * _HEAD_LEADING * plan.HEAD_MM + _HEAD_AIR_MM,
    )  # fmt: skip


def _cell(
    one: Wanted, number: int, language: Language, edition: Edition, account: Account, place: tuple[int, Box]
) -> Cell:
    row = int(one.rows["row"].iloc[number])
    value = float(one.rows[one.quantity].iloc[number])
    if math.isnan(value):
        return Cell(text="", words=verdict(language, str(one.rows["reason"].iloc[number])))
    step = edition.rounding.step if one.quantity.startswith("printed_") and "gap_s" not in one.quantity else 1.0
    account.enter(row, one.quantity, language.tag, place)
    if one.quantity == "speed":
        return Cell(text=language.number(value, 0 if value == int(value) else 1))
    return Cell(text=language.number(value, decimals_of(step)))


def _bars(table: Table, card_mm: float) -> list[float]:
    """Lengths in mm of the bars under the first distance: the longest fills the card's width, one without an end runs
    on into its margin."""
    inner = card_mm - 2 * plan.MARGIN_MM
    first = Series(vehicle="", surface="", rows=table.wanted[1].rows)
    fullest = longest(first)
    if fullest is None:
        return [inner + _BEYOND_MM] * len(first.rows)
    whole = first.printed[fullest]
    return [inner * x / whole if math.isfinite(x) else inner + _BEYOND_MM for x in first.printed]


def _face(*, barred: bool) -> FaceName:
    """The face of the distances: bold on the front, half bold where they stand close on the back."""
    return "numeral-bold" if barred else "text-bold"


def _joined(cells: Sequence[Cell]) -> tuple[Cell, ...]:
    """Words that stand in cells side by side, said once over all of them."""
    found: list[Cell] = []
    for cell in cells:
        if cell.words and found and found[-1].words == cell.words:
            found[-1] = replace(found[-1], span=found[-1].span + 1)
        else:
            found.append(cell)
    return tuple(found)


def _words_size(lines: Sequence[Line], table: Table, row_mm: float) -> float:
    """The largest font size in mm at which every verdict stays in its cell."""
    free = row_mm - (_BAR_MM if table.barred else _CELL_PAD_MM)
    rooms: set[tuple[str, float]] = set()
    for line in lines:
        start = 1
        for cell in line.cells:
            width = sum(column.width_mm for column in table.laid[start : start + cell.span]) - _CELL_PAD_MM
            start += cell.span
            if cell.words:
                rooms.add((cell.words, width))

    def fits(words: str, width: float, size: float) -> bool:
        unbroken = all(text_width(word, "numeral-bold", size) <= width for word in words.split(" "))
        return unbroken and line_count(words, "numeral-bold", size, width) * size <= free

    return next((s for s in _WORDS_MM if all(fits(words, width, s) for words, width in rooms)), _WORDS_MM[-1])


def _speed(language: Language, edition: Edition, rows: pd.DataFrame, share: float) -> Wanted:
    return Wanted(rows=rows, quantity="speed", name=language.unit(edition.speed_unit), share=share, kind="speed")


def _natural(name: str) -> float:
    """The share of a column that is as wide as its name needs, or four digits."""
    return max(text_width(name, "text", plan.HEAD_MM) + 2 * _CELL_PAD_MM, _FOUR_DIGITS_MM)


def _total(language: Language, edition: Edition, one: Series, share: float, unit: str, *, named: bool) -> Wanted:
    name = _load(language, edition, one) if named else language.t("part.total")
    return Wanted(rows=one.rows, quantity="printed_stopping", name=name + unit, share=share, kind="total")


def _load(language: Language, edition: Edition, one: Series) -> str:
    vehicle = edition.vehicle(one.vehicle)
    return language.t(f"word.{vehicle.load}") if vehicle.load else language.text(vehicle.name)


def _surface(language: Language, edition: Edition, one: Series) -> str:
    return f"{language.text(edition.surface(one.surface).name)} ({language.unit(edition.distance_unit)})"
