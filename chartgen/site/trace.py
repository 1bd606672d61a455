"""The trace: every row of the figures with its inputs and its results before rounding, one table a case."""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import dataclass
from typing import Final

from markupsafe import Markup, escape

from chartgen.figures.export import asked_greatest
from chartgen.language.html import isolate
from chartgen.language.load import Language
from chartgen.language.sentences import verdict
from chartgen.site.edition_site import Group, Record, Series, Site, colon, decimals, grade_id, named, slope, slope_plain
from chartgen.site.tables import Head, condition

_PLACES: Final = 2

# Column of the figures, word of its head, unit.
_COLUMNS: Final = (
    ("speed_mps", "quantity.speed", "m/s"),
    ("friction", "quantity.friction", ""),
    ("full_deceleration_mps2", "quantity.deceleration", "m/s²"),
    ("reaction_distance_m", "quantity.reaction", "m"),
    ("lag_distance_m", "quantity.lag", "m"),
    ("braking_distance_m", "quantity.braking", "m"),
    ("stopping_distance_m", "quantity.stopping", "m"),
    ("stopping_time_s", "quantity.stopping_time", "s"),
    ("stopping_p50_m", "quantity.percentile", "m"),
    ("stopping_p85_m", "quantity.percentile", "m"),
    ("stopping_p95_m", "quantity.percentile", "m"),
    ("residual_speed_mps", "quantity.residual_speed", "m/s"),
)
_SHARE: Final = {"stopping_p50_m": 0.50, "stopping_p85_m": 0.85, "stopping_p95_m": 0.95}


@dataclass(frozen=True, slots=True)
class TraceRow:
    row: int
    speed: str
    cells: tuple[Markup, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Trace:
    """One driver, vehicle, surface and slope. `greatest`: what its greatest speeds are before they are rounded down."""

    id: str
    title: Markup
    label: str
    assumptions: Markup
    heads: tuple[Head, ...]
    rows: tuple[TraceRow, ...]
    greatest: tuple[Markup, ...]


def traces(site: Site, language: Language) -> Iterator[Trace]:
    """Every row of the table once, in the order of the pages."""
    for group in site.groups:
        for series in group.series:
            yield _trace(site, language, group, series)


def _trace(site: Site, language: Language, group: Group, series: Series) -> Trace:
    edition = site.edition
    driver = edition.driver(series.driver)
    vehicle, surface = edition.vehicle(group.vehicle), edition.surface(group.surface)
    link = Markup('<a href="#{}">{}</a>')
    columns = [c for c in _COLUMNS if not all(math.isnan(r[c[0]]) for r in series.records)]
    if not any(r["lag_distance_m"] > 0 for r in series.records):
        columns = [c for c in columns if c[0] != "lag_distance_m"]
    places = decimals(r["printed_speed"] for r in series.records)
    return Trace(
        id=f"case-{driver.id}-{group.vehicle}-{group.surface}-{grade_id(group.grade)}",
        title=Markup(" · ").join(
            (
                link.format(f"driver-{driver.id}", named(language, driver.name)),
                link.format(f"vehicle-{vehicle.id}", named(language, vehicle.name)),
                link.format(f"surface-{surface.id}", named(language, surface.name)),
                slope(language, group.grade),
            )
        ),
        label=" · ".join(
            (*(language.text(x.name) for x in (driver, vehicle, surface)), slope_plain(language, group.grade))
        ),
        assumptions=series.line(language, edition),
        heads=(
            Head(language.t("quantity.speed"), isolate(language.unit(site.figures.speed_unit)), "printed_speed"),
            *(Head(_head(language, *column[:2]), _unit(language, column[2]), column[0]) for column in columns),
        ),
        rows=tuple(
            TraceRow(
                int(record["row"]),
                language.number(float(record["printed_speed"]), places),
                tuple(_cell(language, record, quantity) for quantity, _, _ in columns),
            )
            for record in series.records
        ),
        greatest=tuple(_greatest(site, language, series.records[0])),
    )


def _head(language: Language, quantity: str, word: str) -> str:
    share = _SHARE.get(quantity)
    return language.t(word) if share is None else language.html(word, share=language.percent(share))


def _greatest(site: Site, language: Language, record: Record) -> Iterator[Markup]:
    """The greatest speed within each distance that was asked about, none where the answer is in words."""
    for kind in asked_greatest(site.edition.questions):
        value = float(record[f"greatest_{kind}_mps"])
        if math.isnan(value) or record[f"greatest_{kind}_at_top"] or record[f"printed_greatest_{kind}"] == 0.0:
            continue
        speed = Markup("{}\u00a0{}").format(isolate(language.number(value, _PLACES)), _unit(language, "m/s"))
        yield Markup("{}{}{}").format(condition(site, language, kind), colon(language), speed)


def _unit(language: Language, unit: str) -> Markup:
    """m/s has no entry of its own in the word lists: metres over seconds, each as the language writes it."""
    if unit == "m/s":
        return isolate(f"{language.unit('m')}/{language.unit('s')}")
    return isolate(language.unit(unit)) if unit else Markup("")


def _cell(language: Language, record: Record, quantity: str) -> Markup:
    value = float(record[quantity])
    return (
        escape(verdict(language, str(record["reason"])))
        if math.isnan(value)
        else escape(language.number(value, _PLACES))
    )
