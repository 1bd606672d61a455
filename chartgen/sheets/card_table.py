"""The tables of a cab card: totals at a glance, the parts, the other surfaces. Every cell knows its place."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING

from chartgen.edition.model import Edition
from chartgen.language.load import Language
from chartgen.sheets import card_plan as plan
from chartgen.sheets.account import Account, decimals_of
from chartgen.sheets.sheet import Box

if TYPE_CHECKING:
    import pandas as pd

Place = tuple[int, float, float]
"""Page, and the card's left and top on it."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Cell:
    """A number, or words in its place; `bar_mm`: the stroke under it to scale (0: none)."""

    text: str
    words: str = ""


@dataclass(frozen=True, slots=True, kw_only=True)
class Line:
    """One speed."""

    speed: str
    cells: tuple[Cell, ...]
    bar_mm: float = 0.0


@dataclass(frozen=True, slots=True, kw_only=True)
class Head:
    """A column's name, and the group it belongs to ("" where there are no groups)."""

    text: str
    width_mm: float
    kind: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Block:
    """One table of a side, in mm from the card's top left corner."""

    kind: str
    title: str
    top_mm: float
    row_mm: float
    head_mm: float
    size_mm: float
    heads: tuple[Head, ...]
    groups: tuple[tuple[str, int], ...]
    lines: tuple[Line, ...]

    @property
    def bottom_mm(self) -> float:
        return self.top_mm + self.head_mm + self.row_mm * len(self.lines)


@dataclass(frozen=True, slots=True, kw_only=True)
class _Wanted:
    """A column to be filled: the rows it reads, which quantity, its name, its share of the width, its kind (class)."""

    rows: pd.DataFrame
    quantity: str
    name: str
    share: float
    kind: str = ""


def _block(
    language: Language, edition: Edition, wanted: Sequence[_Wanted], account: Account, place: Place, card_mm: float, *,
    kind: str, title: str, top_mm: float, row_mm: float, head_mm: float, groups: tuple[tuple[str, int], ...] = (),
    bars: Sequence[float] = (),
) -> Block:  # fmt: skip
    inner = card_mm - 2 * plan.MARGIN_MM
    laid = plan.columns([(str(i), one.share) for i, one in enumerate(wanted)], inner)
    page, left, top = place
    lines = []
    for number in range(len(wanted[0].rows)):
        cells = []
        for one, column in zip(wanted, laid, strict=True):
            at = top + top_mm + head_mm + number * row_mm
            start = column.start_mm if language.direction == "ltr" else card_mm - column.start_mm - column.width_mm
            box = (left + start - 0.5, at - 0.5, left + start + column.width_mm + 0.5, at + row_mm + 0.5)
            cells.append(_cell(one, number, language, edition, account, (page, box)))
        bar = bars[number] if bars else 0.0
        lines.append(Line(speed=cells[0].text, cells=tuple(cells[1:]), bar_mm=bar))
    sizes = [
        plan.number_size([cell.text or "00" for cell in column], place_.width_mm, row_mm)
        for column, place_ in zip(zip(*(line.cells for line in lines), strict=True), laid[1:], strict=True)
    ]
    return Block(
        kind=kind, title=title, top_mm=top_mm, row_mm=row_mm, head_mm=head_mm, size_mm=min(sizes), groups=groups,
        heads=tuple(
            Head(text=one.name, width_mm=c.width_mm, kind=one.kind) for one, c in zip(wanted, laid, strict=True)
        ),
        lines=tuple(lines),
    )  # fmt: skip


def _cell(
    one: _Wanted, number: int, language: Language, edition: Edition, account: Account, place: tuple[int, Box]
) -> Cell:
    row = int(one.rows["row"].iloc[number])
    value = float(one.rows[one.quantity].iloc[number])
    if math.isnan(value):
        return Cell(text="", words=language.t("verdict.does_not_stop"))
    step = edition.rounding.step if one.quantity.startswith("printed_") and "gap_s" not in one.quantity else 1.0
    if one.quantity == "speed":
        account.enter(row, "speed", language.tag, place)
        return Cell(text=language.number(value, 0 if value == int(value) else 1))
    account.enter(row, one.quantity, language.tag, place)
    return Cell(text=language.number(value, decimals_of(step)))


def front_block(
    language: Language, edition: Edition, laden: pd.DataFrame, unladen: pd.DataFrame | None, account: Account,
    place: Place, card_mm: float,
) -> Block:  # fmt: skip
    """Totals loaded and empty, and the following gap in seconds; the bar under a row is the first distance."""
    unit = language.unit(edition.distance_unit)
    series = [laden] if unladen is None else [laden, unladen]
    gap = f"{language.t('card.gap')} ({language.unit('s')})"
    wanted = [
        _speed(language, edition, laden, 15),
        *(_total(language, rows, 32, f" ({unit})", named=unladen is not None) for rows in series),
        _Wanted(rows=laden, quantity="printed_gap_s", name=gap, share=17, kind="gap"),
    ]
    exact = laden["stopping_distance_m"].fillna(math.inf).to_numpy()
    longest = max((x for x in exact if math.isfinite(x)), default=1.0)
    inner = card_mm - 2 * plan.MARGIN_MM
    return _block(
        language, edition, wanted, account, place, card_mm, kind="front", title="",
        row_mm=plan.FRONT_ROWS_MM / max(len(laden), 5), head_mm=plan.FRONT_HEAD_MM, top_mm=plan.FRONT_TOP_MM,
        bars=[inner * min(x / longest, 1.0) for x in exact],
    )  # fmt: skip


def parts_block(
    language: Language, edition: Edition, series: Sequence[pd.DataFrame], account: Account, place: Place, card_mm: float
) -> Block:
    """Reaction, brake lag and braking apart; braking once loaded and once empty."""
    first = series[0]
    braking = language.t("part.braking")
    wanted = [
        _speed(language, edition, first, 14),
        _Wanted(rows=first, quantity="printed_reaction", name=language.t("part.reaction"), share=20),
        _Wanted(rows=first, quantity="printed_lag", name=language.t("part.lag"), share=20),
    ]
    for rows in series:
        name = f"{braking}: {_load(language, edition, rows)}" if len(series) > 1 else braking
        wanted.append(_Wanted(rows=rows, quantity="printed_braking", name=name, share=24))
    return _block(
        language, edition, wanted, account, place, card_mm, kind="back", title=_surface(language, edition, first),
        top_mm=plan.BACK_TOP_MM, row_mm=plan.BACK_ROW_MM, head_mm=plan.BACK_HEAD_MM,
    )  # fmt: skip


def surfaces_block(
    language: Language, edition: Edition, shown: Sequence[pd.DataFrame], account: Account, place: Place, card_mm: float,
    *, below_mm: float,
) -> Block:  # fmt: skip
    """Totals on the other surfaces, a group a surface."""
    groups: dict[str, int] = {}
    for rows in shown:
        surface = _surface(language, edition, rows)
        groups[surface] = groups.get(surface, 0) + 1
    wanted = [
        _speed(language, edition, shown[0], 14),
        *(_total(language, rows, 22, "", named=max(groups.values()) > 1) for rows in shown),
    ]
    return _block(
        language, edition, wanted, account, place, card_mm, kind="back", title="", top_mm=below_mm + 2.4,
        row_mm=plan.BACK_ROW_MM, head_mm=plan.BACK_HEAD_MM, groups=tuple(groups.items()),
    )  # fmt: skip


def _speed(language: Language, edition: Edition, rows: pd.DataFrame, share: float) -> _Wanted:
    return _Wanted(rows=rows, quantity="speed", name=language.unit(edition.speed_unit), share=share, kind="speed")


def _total(language: Language, rows: pd.DataFrame, share: float, unit: str, *, named: bool) -> _Wanted:
    load = str(rows["load"].iloc[0])
    name = language.t(f"word.{load}") if named and load in {"laden", "unladen"} else language.t("part.total")
    return _Wanted(rows=rows, quantity="printed_stopping", name=name + unit, share=share, kind="total")


def _load(language: Language, edition: Edition, rows: pd.DataFrame) -> str:
    vehicle = edition.vehicle(str(rows["vehicle"].iloc[0]))
    return language.t(f"word.{vehicle.load}") if vehicle.load else language.text(vehicle.name)


def _surface(language: Language, edition: Edition, rows: pd.DataFrame) -> str:
    name = language.text(edition.surface(str(rows["surface"].iloc[0])).name)
    return f"{name} ({language.unit(edition.distance_unit)})"
