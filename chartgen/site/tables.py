"""The table of distances under each chart: one row a speed, every number from the figures, each row traced."""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import dataclass
from typing import Final

from markupsafe import Markup, escape

from chartgen.edition.catalogue import GAP_RULES, HEADLIGHTS
from chartgen.figures.rounding import up
from chartgen.figures.units import LEAST_DECELERATION_MPS2, from_metres
from chartgen.language.html import isolate
from chartgen.language.load import Language
from chartgen.language.sentences import REASONS, verdict
from chartgen.site.edition_site import Group, Record, Series, Site, colon, decimals, named, slope, slope_plain

TIME_STEP_S: Final = 0.1


@dataclass(frozen=True, slots=True)
class Head:
    """A column's head: its name, its unit, and the column of the figures it prints."""

    name: str
    unit: Markup
    quantity: str


@dataclass(frozen=True, slots=True)
class Cell:
    text: Markup
    strong: bool = False


@dataclass(frozen=True, slots=True)
class Never:
    """Stands in place of the distances of a row that does not stop."""

    span: int
    verdict: str
    reason: Markup


@dataclass(frozen=True, slots=True, kw_only=True)
class Row:
    row: int
    speed: str
    trace: str
    cells: tuple[Cell, ...]
    never: Never | None


@dataclass(frozen=True, slots=True, kw_only=True)
class Table:
    """One driver's figures for one vehicle, surface and slope."""

    caption: Markup
    label: str
    heads: tuple[Head, ...]
    rows: tuple[Row, ...]
    reason: Markup
    """Why rows do not stop, where it is one reason for all of them; else each row gives its own."""
    assumptions: Markup


@dataclass(frozen=True, slots=True)
class _Column:
    """A column to print: which column of the figures, its head's word, its unit, whether it is the total."""

    quantity: str
    word: str
    unit: str
    strong: bool = False
    ends: bool = False
    """True where the number is only there if the vehicle stops."""


def tables(site: Site, language: Language, group: Group) -> tuple[Table, ...]:
    """One table a driver; the same columns in all of them."""
    columns = tuple(c for c in _columns(site, group) if _told(group, c.quantity))
    return tuple(_table(site, language, group, series, columns) for series in group.series)


def _told(group: Group, quantity: str) -> bool:
    """Whether any row has a figure in the column, or has none because it does not stop: an adopted table may leave a
    whole column out."""
    return any(
        not record["stops"] or math.isfinite(float(record[quantity]))
        for series in group.series
        for record in series.records
    )


def _columns(site: Site, group: Group) -> Iterator[_Column]:
    unit, also = site.figures.distance_unit, site.figures.also_unit
    yield _Column("printed_reaction", "quantity.reaction", unit)
    if group.any_positive("printed_perception"):
        yield _Column("printed_perception", "quantity.perception", unit)
    if group.any_positive("printed_lag"):
        yield _Column("printed_lag", "quantity.lag", unit)
    yield _Column("printed_braking", "quantity.braking", unit, ends=True)
    yield _Column("printed_stopping", "quantity.stopping", unit, strong=True, ends=True)
    if also is not None:
        yield _Column("printed_also_stopping", "quantity.stopping", also, ends=True)
    yield _Column("stopping_time_s", "quantity.stopping_time", "s", ends=True)


def _table(site: Site, language: Language, group: Group, series: Series, columns: tuple[_Column, ...]) -> Table:
    edition = site.edition
    driver = edition.driver(series.driver)
    vehicle, surface = edition.vehicle(group.vehicle).name, edition.surface(group.surface).name
    unit = language.unit_name(site.figures.distance_unit)
    caption = language.html(
        "page.table_caption", vehicle=named(language, vehicle), surface=named(language, surface),
        grade=slope(language, group.grade), unit=unit,
    )  # fmt: skip
    label = language.plain(
        "page.table_caption", vehicle=language.text(vehicle), surface=language.text(surface),
        grade=slope_plain(language, group.grade), unit=unit,
    )  # fmt: skip
    name = named(language, driver.name)
    reasons = {str(record["reason"]) for record in series.records if not record["stops"]}
    heads = (
        Head(language.t("quantity.speed"), isolate(language.unit(site.figures.speed_unit)), "printed_speed"),
        *(Head(language.t(c.word), isolate(language.unit(c.unit)), c.quantity) for c in columns),
    )
    return Table(
        caption=Markup('<span class="driver">{}</span> <span class="what">{}</span>').format(name, caption),
        label=f"{language.text(driver.name)}{colon(language)}{label}",
        heads=heads,
        rows=tuple(_rows(site, language, series, columns, own_reason=len(reasons) > 1)),
        reason=_reason(site, language, reasons.pop()) if len(reasons) == 1 else Markup(""),
        assumptions=series.line(language, edition),
    )


def _rows(
    site: Site, language: Language, series: Series, columns: tuple[_Column, ...], *, own_reason: bool
) -> Iterator[Row]:
    places = {c.quantity: 1 if c.unit == "s" else decimals(r[c.quantity] for r in series.records) for c in columns}
    speeds = decimals(r["printed_speed"] for r in series.records)
    for record in series.records:
        stops = bool(record["stops"])
        printed = [c for c in columns if stops or not c.ends]
        reason = _reason(site, language, str(record["reason"])) if own_reason and not stops else Markup("")
        yield Row(
            row=int(record["row"]),
            speed=language.number(float(record["printed_speed"]), speeds),
            trace=f"method.html#r{int(record['row'])}",
            cells=tuple(Cell(_cell(language, record, c, places[c.quantity]), c.strong) for c in printed),
            never=None
            if stops
            else Never(len(columns) - len(printed), verdict(language, str(record["reason"])), reason),
        )


def _cell(language: Language, record: Record, column: _Column, places: int) -> Markup:
    value = float(record[column.quantity])
    if math.isnan(value):
        return escape(language.t("word.none"))
    if column.unit == "s":
        value = float(up(value, TIME_STEP_S))
    return escape(language.number(value, places))


def _reason(site: Site, language: Language, reason: str) -> Markup:
    """Why a row does not stop, as a sentence."""
    values = {"least": least_deceleration(site, language)} if reason == "too-little-friction" else {}
    return language.html(REASONS[reason], **values)


def least_deceleration(site: Site, language: Language) -> str:
    """The deceleration under which a vehicle counts as not stopping, as this edition writes decelerations."""
    return deceleration(site, language, LEAST_DECELERATION_MPS2)


def condition(site: Site, language: Language, kind: str) -> str:
    """What a greatest speed is for: a clear view, a headlight's reach, a following gap (`asked_greatest`)."""
    asked, unit, shown = site.edition.questions, site.figures.distance_unit, site.figures.answer_distances
    if kind == "sight":
        return language.plain("answers.sight", distance=language.distance(shown["sight"], unit))
    if kind == "headlight":
        name = language.text(HEADLIGHTS[asked.headlight or ""].name)
        return language.plain("answers.headlight", distance=language.distance(shown["headlight"], unit), name=name)
    return language.plain("answers.in_gap", rule=language.text(GAP_RULES[asked.gaps[0]].name))


def deceleration(site: Site, language: Language, mps2: float) -> str:
    """In ft/s² where the edition's distances are in feet, else in m/s²."""
    if site.figures.distance_unit == "ft":
        return language.deceleration(float(from_metres(mps2, "ft")), "ft/s²", 2)
    return language.deceleration(mps2)
