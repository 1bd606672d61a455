"""The table of a poster: the drawing's numbers again, on the drawing's own grid; its head is the band of speeds."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

from chartgen.charts.drawing import Drawing
from chartgen.charts.fonts import extent
from chartgen.edition.model import Edition
from chartgen.language.load import Language
from chartgen.language.sentences import verdict
from chartgen.sheets.account import Account, decimals_of
from chartgen.sheets.control import once
from chartgen.sheets.markup import digit_centre, reading_order
from chartgen.sheets.poster_plan import PosterPlan
from chartgen.sheets.sheet import Box

if TYPE_CHECKING:
    import pandas as pd

_PARTS: Final = ("reaction", "lag", "braking", "stopping")
_WORDS: Final = {"reaction": "part.reaction", "lag": "part.lag", "braking": "part.braking", "stopping": "part.total"}

Said = tuple[str, str, str]
"""Language tag, direction, text."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Column:
    """One column of numbers, in reading order: its width and the air at its end (within the width), mm."""

    group: int
    series: int
    width: float
    air: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Cell:
    """A number, or the words that stand in its place."""

    text: str
    words: tuple[Said, ...] = ()


@dataclass(frozen=True, slots=True, kw_only=True)
class TableRow:
    names: tuple[Said, ...]
    cells: tuple[Cell, ...]
    total: bool


@dataclass(frozen=True, slots=True, kw_only=True)
class Group:
    """The head of one speed: its number, and over how many columns it stands (`width` and `air` in mm)."""

    text: str
    width: float
    air: float


@dataclass(frozen=True, slots=True, kw_only=True)
class PosterTable:
    """`top` and the other sizes in mm; columns, groups and cells in reading order. `drivers`: the lines of each
    column's head where drivers stand side by side, above the band; empty for one driver."""

    captions: tuple[Said, ...]
    top: float
    name_width: float
    columns: tuple[Column, ...]
    groups: tuple[Group, ...]
    drivers: tuple[tuple[Said, ...], ...]
    driver_height: float
    driver_size: float
    band_height: float
    speed_size: float
    number_size: float
    verdict_size: float
    rows: tuple[TableRow, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class _Kind:
    """One row to be: a part, its column of the table, its unit and rounding step."""

    part: str
    column: str
    unit: str
    step: float


def _kinds(series: Sequence[pd.DataFrame], edition: Edition) -> Iterator[_Kind]:
    for part in _PARTS:
        if part != "lag" or any((rows["lag_distance_m"] > 0).any() for rows in series):
            yield _Kind(part=part, column=f"printed_{part}", unit=edition.distance_unit, step=edition.rounding.step)
    if edition.also_unit is not None:
        yield _Kind(
            part="stopping",
            column="printed_also_stopping",
            unit=edition.also_unit,
            step=edition.rounding.also_step,
        )


def row_count(series: Sequence[pd.DataFrame], edition: Edition) -> int:
    """How many rows the table will have."""
    return sum(1 for _ in _kinds(series, edition))


def poster_table(
    edition: Edition,
    languages: Sequence[Language],
    series: Sequence[pd.DataFrame],
    drawing: Drawing,
    plan: PosterPlan,
    account: Account,
) -> PosterTable:
    """The table in place, every number of it entered in the account with the box it will stand in."""
    columns = tuple(_columns(drawing, len(series)))
    name_width = reading_order(drawing)[0][0]
    speed_label = next(label for label in drawing.labels if label.role == "speed")
    band_top = 2 * (speed_label.y_mm - digit_centre(speed_label.size_mm)) - drawing.height_mm
    drivers, driver_top, driver_size = _driver_heads(drawing, len(columns))
    kinds = tuple(_kinds(series, edition))
    narrowest = min(column.width - column.air for column in columns)
    widest = max(_widest(kind, rows, languages[0]) for kind in kinds for rows in series)
    by_speed = _by_speed(series)
    grid = _Grid(drawing=drawing, plan=plan, columns=columns, name_width=name_width)
    rows = [
        _row(kind, by_speed, languages, grid.boxes(plan.drawing.bottom + i * plan.row_height), account)
        for i, kind in enumerate(kinds)
    ]
    head = grid.boxes(plan.drawing.top + band_top)
    groups = tuple(_groups(series, by_speed, columns, head, languages[0], account))
    group_room = min(group.width - group.air for group in groups)
    widest_speed = max(extent(group.text, "numeral").width for group in groups)
    captions = [
        (language.tag, language.direction, language.t("sheet.table_caption", unit=_unit_names(language, edition)))
        for language in languages
    ]
    return PosterTable(
        captions=once(captions),
        top=plan.drawing.top + (driver_top if drivers else band_top),
        name_width=name_width,
        columns=columns,
        groups=groups,
        drivers=drivers,
        driver_height=band_top - driver_top,
        driver_size=driver_size,
        band_height=drawing.height_mm - band_top,
        speed_size=min(speed_label.size_mm, 1.1 * group_room / widest_speed),
        number_size=min(plan.sizes.number, 0.98 * narrowest / widest),
        verdict_size=min(plan.sizes.row_label * 0.9, 0.16 * narrowest),
        rows=tuple(rows),
    )


@dataclass(frozen=True, slots=True, kw_only=True)
class _Grid:
    """Where a row's cells stand on the page."""

    drawing: Drawing
    plan: PosterPlan
    columns: tuple[Column, ...]
    name_width: float

    def boxes(self, top: float) -> list[Box]:
        """The boxes of a row that begins at `top` (mm from the page's top), in reading order."""
        made = []
        start, width = self.name_width, self.drawing.width_mm
        for column in self.columns:
            end = start + column.width - column.air
            near, far = (start, end) if self.drawing.direction == "ltr" else (width - end, width - start)
            left, foot = self.plan.drawing.left, top + max(self.plan.row_height, self.plan.sizes.band)
            made.append((left + near - 1, top, left + far + 1, foot))
            start += column.width
        return made


def _columns(drawing: Drawing, series: int) -> Iterator[Column]:
    """Columns under the drawing's; the air to the next group, at last to the drawing's edge, belongs to the last."""
    spans = reading_order(drawing)
    starts = [*(start for start, _, _ in spans[1:]), drawing.width_mm]
    for group, ((start, end, _), following) in enumerate(zip(spans, starts, strict=True)):
        each = (end - start) / series
        for place in range(series):
            air = following - end if place == series - 1 else 0.0
            yield Column(group=group, series=place, width=each + air, air=air)


def _driver_heads(drawing: Drawing, count: int) -> tuple[tuple[tuple[Said, ...], ...], float, float]:
    """The names that the drawing has under its columns, as heads of the table's; their top in the drawing and size."""
    labels = [label for label in drawing.labels if label.role == "driver"]
    if not labels:
        return (), 0.0, 0.0
    by_place: dict[float, list[Said]] = {}
    for label in labels:
        by_place.setdefault(round(label.x_mm, 1), []).append((label.lang, label.dir, label.text))
    heads = [tuple(lines) for _, lines in sorted(by_place.items(), reverse=drawing.direction == "rtl")]
    if len(heads) != count:
        return (), 0.0, 0.0
    size = labels[0].size_mm
    return tuple(heads), min(label.y_mm for label in labels) - size, size


def _by_speed(series: Sequence[pd.DataFrame]) -> list[list[pd.Series]]:
    """The rows speed by speed, driver by driver; the slices of one poster have the same speeds."""
    return [[rows.iloc[i] for rows in series] for i in range(len(series[0]))]


def _groups(
    series: Sequence[pd.DataFrame],
    by_speed: Sequence[Sequence[pd.Series]],
    columns: Sequence[Column],
    boxes: Sequence[Box],
    language: Language,
    account: Account,
) -> Iterator[Group]:
    for index, rows in enumerate(by_speed):
        own = [column for column in columns if column.group == index]
        first, last = boxes[index * len(series)], boxes[index * len(series) + len(series) - 1]
        box = (min(first[0], last[0]), first[1], max(first[2], last[2]), first[3])
        text = account.figure(int(rows[0]["row"]), "speed", language, (1, box))
        yield Group(text=text, width=sum(column.width for column in own), air=own[-1].air)


def _unit_names(language: Language, edition: Edition) -> str:
    units = [edition.distance_unit, *([edition.also_unit] if edition.also_unit else [])]
    return " / ".join(language.unit_name(unit) for unit in units)


def _widest(kind: _Kind, rows: pd.DataFrame, language: Language) -> float:
    """Width of the widest number of a row, in parts of the font size."""
    decimals = decimals_of(kind.step)
    written = [language.number(float(value), decimals) for value in rows[kind.column].dropna()]
    return max((extent(text, "numeral-bold").width for text in written), default=1.0)


def _row(
    kind: _Kind,
    by_speed: Sequence[Sequence[pd.Series]],
    languages: Sequence[Language],
    boxes: Sequence[Box],
    account: Account,
) -> TableRow:
    names = []
    for language in languages:
        name = language.t(_WORDS[kind.part])
        if kind.part == "stopping":
            name += f" ({language.unit(kind.unit)})"
        names.append((language.tag, language.direction, name))
    for _, _, text in once(names):
        account.fact(text)
    rows = [row for rows in by_speed for row in rows]
    cells = []
    for row, box in zip(rows, boxes, strict=True):
        if row[kind.column] == row[kind.column]:
            text = account.figure(int(row["row"]), kind.column, languages[0], (1, box), kind.step)
            cells.append(Cell(text=text))
        else:
            reason = str(row["reason"])
            said = once((language.tag, language.direction, verdict(language, reason)) for language in languages)
            cells.append(Cell(text="", words=said))
    return TableRow(names=once(names), cells=tuple(cells), total=kind.part == "stopping")
